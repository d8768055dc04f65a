"""The same machine in US units, and its phases in another order, has the same solution."""

from __future__ import annotations

import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from heataudit.machine import read_machine
from heataudit.network.solution import Solution
from tests.network.random_machines import random_machine
from tests.network.test_random import at_oil_temperature, solved
from tests.workbooks import Sheets, write

FEW = settings(
    max_examples=12, deadline=None, derandomize=True, phases=[Phase.generate], suppress_health_check=list(HealthCheck)
)  # fmt: skip
SEEDS = st.integers(0, 2**31)

INCH, PSI, GALLON = 0.0254, 6894.757293168361, 231 * 0.0254**3  # exact, NIST SP 811; psi from lbf and inch
US: dict[str, tuple[str, Callable[[float], float]]] = {
    "bar": ("psi", lambda v: v * 1e5 / PSI),
    "L/min": ("gpm", lambda v: v * 1e-3 / GALLON),
    "mm": ("in", lambda v: v * 1e-3 / INCH),
    "m": ("ft", lambda v: v / (12 * INCH)),
    "cm³/rev": ("in³/rev", lambda v: v * 1e-6 / INCH**3),
    "mm/s": ("in/s", lambda v: v * 1e-3 / INCH),
    "L": ("gal", lambda v: v * 1e-3 / GALLON),
    "°C": ("°F", lambda v: v * 1.8 + 32),
}


def in_us_units(sheets: Sheets) -> Sheets:
    """The same workbook with every column and setting in US units that has one."""
    found: Sheets = {}
    for title, (header, *rest) in sheets.items():
        if "Unit" in header:
            found[title] = [header, *(_setting(row) for row in rest)]
            continue
        units = [str(name).rpartition("[")[2].rstrip("]") if "[" in str(name) else "" for name in header]
        names = [
            str(n).replace(f"[{u}]", f"[{US[u][0]}]") if u in US else n for n, u in zip(header, units, strict=True)
        ]
        found[title] = [names, *([_cell(v, u) for v, u in zip(row, units, strict=True)] for row in rest)]
    return found


def _cell(value: Any, unit: str) -> Any:
    return US[unit][1](value) if unit in US and value is not None else value


def _setting(row: list[Any]) -> list[Any]:
    return row if len(row) < 3 or row[2] not in US else [row[0], _cell(row[1], row[2]), US[row[2]][0]]


def flows(found: Solution) -> np.ndarray[Any, Any]:
    """All flows, as shares of the largest of each phase."""
    both = np.concatenate([found.components.flow, found.actuators.flow, found.pumps.flow])
    return both / np.abs(both).max(axis=0, initial=1e-6)


@FEW
@given(SEEDS)
def test_a_us_workbook_is_the_same_machine(seed: int) -> None:
    sheets = random_machine(seed, 6)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "machine.xlsx"
        first, second = read_machine(write(path, sheets)), read_machine(write(path, in_us_units(sheets)))
    si, us = at_oil_temperature(first), at_oil_temperature(second)
    assert si.components.name == us.components.name
    assert flows(us) == pytest.approx(flows(si), rel=1e-6, abs=1e-8)
    assert us.shaft_power == pytest.approx(si.shaft_power, rel=1e-7, abs=1e-3)
    assert us.pumps.pressure == pytest.approx(si.pumps.pressure, rel=1e-7, abs=10.0)


def test_us_units_are_written() -> None:
    sheets = in_us_units(random_machine(1, 2))
    assert "Rated flow [gpm]" in sheets["Valves"][0]
    assert sheets["Reservoir"][1] == ["Oil volume", pytest.approx(52.834, rel=1e-4), "gal"]  # 200 L: 52.83 US gallons


@FEW
@given(SEEDS, st.randoms(use_true_random=False))
def test_the_order_of_phases_does_not_matter(seed: int, random: Any) -> None:
    machine, found = solved(seed, 8)
    order = list(range(8))
    random.shuffle(order)
    again = at_oil_temperature(machine, order)
    names = dict(zip(found.components.name, found.components.flow, strict=True))
    largest = np.abs(found.components.flow).max(initial=1e-6)
    for name, flow in zip(again.components.name, again.components.flow, strict=True):
        assert flow == pytest.approx(names[name][order], rel=1e-6, abs=1e-8 * largest)
    assert again.actuators.state.tolist() == found.actuators.state[:, order].tolist()
    assert again.pumps.pressure == pytest.approx(found.pumps.pressure[:, order], rel=1e-7, abs=10.0)


@FEW
@given(SEEDS)
def test_phases_that_repeat_are_solved_once(seed: int) -> None:
    machine, found = solved(seed, 5)
    rows = [0, 1, 1, 4, 0, 3, 2, 2]
    again = at_oil_temperature(machine, rows)
    assert (again.pumps.pressure[:, 1] == again.pumps.pressure[:, 2]).all()
    assert (again.components.flow[:, 0] == again.components.flow[:, 4]).all()
    assert again.shaft_power == pytest.approx(found.shaft_power[rows], rel=1e-7, abs=1e-3)
