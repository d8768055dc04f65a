"""Reduced networks of random machines against two references: the optimality conditions, written once more as scalar
laws, and the least content, minimised by scipy.

Kirchhoff's laws of these networks state the minimum of a convex function (Millar 1951, Cherry 1951), so its optimality
conditions are met by one set of flows only: whoever finds flows and pressures that meet them has the solution.
"""

from __future__ import annotations

import tempfile
from math import pi
from pathlib import Path
from typing import Any

import fluids
import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st
from scipy.optimize import minimize

from heataudit.machine import connect, read_machine
from heataudit.network.active_set import solve_reduced
from heataudit.network.assemble import assemble
from heataudit.network.elements import PRESSURE_SCALE, Elements
from heataudit.network.interior_point import Point
from heataudit.network.plant import Plant
from heataudit.network.reduce import Folding
from heataudit.network.topology import analyse
from tests.network.random_machines import random_machine
from tests.workbooks import write

Array = np.ndarray[Any, Any]
NONE = 1e-10
"""Flow [-], as a share of the pump flow, that counts as none: `spread` takes less for none too."""

SEEDS = st.integers(0, 2**31)
FEW = settings(
    max_examples=15, deadline=None, derandomize=True, phases=[Phase.generate], suppress_health_check=list(HealthCheck)
)  # fmt: skip


def reduced(seed: int, phases: int, *, tight: bool = False) -> tuple[Elements, Point]:
    """The reduced network of a random machine with all spools as far open as they may, and its solution.

    In a `tight` machine no cylinder leaks and no pump has a suction line.
    """
    sheets = random_machine(seed, phases)
    if tight:
        suction, leak = sheets["Pumps"][0].index("Suction"), sheets["Actuators"][0].index("Volumetric efficiency [%]")
        sheets["Pumps"][1:] = [[*row[:suction], "Tank", *row[suction + 1 :]] for row in sheets["Pumps"][1:]]
        sheets["Actuators"][1:] = [[*row[:leak], None, *row[leak + 1 :]] for row in sheets["Actuators"][1:]]
        sheets["Lines"] = [row for row in sheets["Lines"] if not str(row[2]).startswith("S") or "." in str(row[2])]
    with tempfile.TemporaryDirectory() as folder:
        machine = read_machine(write(Path(folder) / "machine.xlsx", sheets))
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    oil = np.full(phases, machine.general["oil_temperature"])
    branches = assemble(Plant(machine, machine.cycle, ports, oil)).branches
    elements = Folding(branches, analyse(branches)).elements(np.ones(branches.constant.shape))
    return elements, solve_reduced(elements, np.full((elements.node_count, phases), 0.5))


def friction(elements: Elements, place: int, n: int, q: float) -> float:
    """Drop of a line at a flow [-], by Darcy with `fluids`' Churchill and Hooper's two-K bends."""
    lines = elements.lines
    at = {name: float(values[place, n]) for name, values in lines.shape._asdict().items()}
    flow = lines.flow_factor[place, n] * q * elements.flow_scale[n] / at["parallel"]
    if flow == 0 or at["length"] == 0:
        return 0.0
    speed = flow / (pi / 4 * at["diameter"] ** 2)
    reynolds = abs(speed) * at["diameter"] / lines.viscosity[place, n]
    factor = 64 / reynolds
    if reynolds > 100:
        factor = fluids.friction.Churchill_1977(Re=reynolds, eD=at["roughness"] / at["diameter"])
    loss = factor * at["length"] / at["diameter"] + at["minor_k"] + at["bends_k1"] / reynolds + at["bends_kinf"]
    return lines.pressure_factor[place, n] * loss * lines.density[place, n] * speed * abs(speed) / 2 / PRESSURE_SCALE


def law(elements: Elements, e: int, n: int, q: float) -> float:
    """Drop [-] that an element needs at a flow [-]."""
    drop = elements.constant[e, n] + elements.linear[e, n] * q + elements.quadratic[e, n] * q * abs(q)
    drop += sum(friction(elements, k, n, q) for k in np.flatnonzero(elements.lines.element == e))
    if elements.power[e, n] > 0 and q > 0:
        drop = max(drop, -elements.power[e, n] / q)
    return float(drop)


def unmet(elements: Elements, point: Point, n: int) -> tuple[float, float]:
    """By how much laws [100 bar] and node balances [pump flow] are not met in a phase.

    The solver rounds every square law off within 1e-6 of the pump flow, q sqrt(q² + 1e-12) for q |q|: they differ by
    0.5e-12 at the most, and every law has a slope of 1e-10 more; that much is granted.
    """
    p = np.append(point.pressure[:, n], 0.0)
    left = np.append(elements.injection[:, n], 0.0)
    worst = 0.0
    for e in np.flatnonzero(elements.active[:, n]):
        q = float(point.flow[e, n])
        left[elements.flow_from[e]] -= q
        left[elements.flow_to[e]] += elements.ratio[e, n] * q
        spare = p[elements.pressure_from[e]] - elements.gain[e, n] * p[elements.pressure_to[e]] - law(elements, e, n, q)
        low, high = elements.low[e, n], elements.high[e, n]
        assert low <= q <= high
        spare = np.sign(spare) * max(abs(spare) - 0.5e-12 * elements.quadratic[e, n], 0.0)
        if q - low <= NONE and spare < 0:
            spare = 0.0  # shut: the pressure does not suffice
        if high - q <= NONE and spare > 0:
            spare = 0.0  # as much as it may: pressure is left over
        worst = max(worst, abs(spare) - 1e-10 * abs(q))
    return worst, float(np.abs(left[:-1]).max(initial=0.0))


@FEW
@given(SEEDS)
def test_the_optimality_conditions_hold(seed: int) -> None:
    elements, point = reduced(seed, 6)
    assert point.residual.max() < 1e-10
    for n in range(6):
        in_laws, in_balances = unmet(elements, point, n)
        # of 100 bar and of the pump flow
        assert in_laws < 1e-9
        assert in_balances < 1e-9


def is_convex(elements: Elements, n: int) -> bool:
    """Whether every element is driven by the nodes that it connects, with one ratio for flow and pressure."""
    on = elements.active[:, n]
    same = (elements.flow_from == elements.pressure_from) & (elements.flow_to == elements.pressure_to)
    return bool(same[on].all() and np.allclose(elements.ratio[on, n], elements.gain[on, n]))


NODES, WEIGHTS = np.polynomial.legendre.leggauss(16)


def content(elements: Elements, on: Array, n: int, q: Array) -> float:
    """Content: the integral of every law from 0 to its flow; that of lines by Gauss and Legendre."""
    total = (
        elements.constant[on, n] @ q
        + elements.linear[on, n] @ q**2 / 2
        + elements.quadratic[on, n] @ np.abs(q) ** 3 / 3
    )
    for e, flow in zip(on, q, strict=True):
        for place in np.flatnonzero(elements.lines.element == e):
            drops = [friction(elements, int(place), n, 0.5 * flow * (1 + x)) for x in NODES]
            total += 0.5 * flow * (WEIGHTS @ drops)
    return float(total)


def minimised(elements: Elements, n: int) -> tuple[Array, Array]:
    """Numbers of the active elements and their flows [-] of least content."""
    on = np.flatnonzero(elements.active[:, n])
    incidence = np.zeros((elements.node_count + 1, on.size))
    for column, e in enumerate(on):
        incidence[elements.flow_from[e], column] += 1.0
        incidence[elements.flow_to[e], column] -= elements.ratio[e, n]
    met = np.abs(incidence[:-1]).any(axis=1)  # nodes of other patterns have no element here
    incidence, fed = incidence[:-1][met], elements.injection[met, n]
    low, high = np.maximum(elements.low[on, n], -100.0), np.minimum(elements.high[on, n], 100.0)
    found = minimize(
        lambda q: content(elements, on, n, q), np.clip(0.2, low, high) * np.ones(on.size), method="SLSQP",
        jac=lambda q: np.array([law(elements, int(e), n, float(x)) for e, x in zip(on, q, strict=True)]),
        bounds=list(zip(low, high, strict=True)), options={"maxiter": 400, "ftol": 1e-15},
        constraints=[{"type": "eq", "fun": lambda q: incidence @ q - fed, "jac": lambda q: incidence}],
    )  # fmt: skip
    assert np.abs(incidence @ found.x - fed).max() < 1e-7
    return on, found.x


def test_the_content_is_least() -> None:
    compared = 0
    for seed in range(30):
        elements, point = reduced(seed, 3, tight=True)
        for n in range(3):
            if not 3 <= elements.active[:, n].sum() <= 14 or elements.power[:, n].any():
                continue
            assert is_convex(elements, n)
            on, flows = minimised(elements, n)
            mine = content(elements, on, n, point.flow[on, n])
            # nothing that scipy finds is lower, what it leaves of the node balances counted at the nodes' pressures
            every = np.zeros(point.flow.shape)
            every[on, n] = flows
            left = elements.node_residual(every, point.pressure)[:, n]
            least = content(elements, on, n, flows) - point.pressure[:, n] @ left
            assert mine <= least + 1e-9 * max(1.0, abs(least)), (seed, n)
            # the content is flat near its minimum: flows to the square root of what SLSQP leaves of it
            assert point.flow[on, n] == pytest.approx(flows, abs=1e-4), (seed, n)
            compared += 1
    assert compared > 15
