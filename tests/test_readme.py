"""README.md says what the program does: its numbers are those of the shipped example."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

import heataudit
from heataudit.audit.model import Audit
from tests.example_machines import EXAMPLES

README = (Path(__file__).parent.parent / "README.md").read_text(encoding="utf-8")


@pytest.fixture(scope="module")
def baler() -> Audit:
    return heataudit.audit(heataudit.read_machine(EXAMPLES / "baler.xlsx"))


def test_the_numbers_of_the_first_page(baler: Audit) -> None:
    shown = {
        "mean heat of the losses": f"{baler.cycle.mean_heat_kW:.2f} kW",
        "of the shaft energy is useful work": f"{baler.cycle.efficiency * 100:.0f} %",
        "oil temperature in balance, no cooler, 22 °C ambient": f"{baler.thermal.equilibrium_C:.1f} °C",
    }
    for label, value in shown.items():
        assert f"| {label} | {value} |" in README
    cooler = baler.cooler
    offered = cooler.required_kW_K * (1 + cooler.reserve_percent / 100)
    text = f"{cooler.required_kW:.2f} kW: {cooler.required_kW_K:.3f} kW/K, {offered:.3f} kW/K with 10 % reserve"
    assert text in README
    assert f"{baler.annual.loss_kWh / 1000:.0f},000 kWh" in README


def test_the_shares_of_the_first_page(baler: Audit) -> None:
    groups = {
        "relief valves": "overflow",
        "bypass": "bypass",
        "pumps": "pump",
        "lines and filters": "lines",
        "idling": "idle",
    }
    for label, group in groups.items():
        share = baler.loss_groups[group] / baler.cycle.heat_energy_kJ
        assert re.search(rf"\| {label} \| {share * 100:.0f} % \|", README)


def test_the_commands_do_their_own_set_up() -> None:
    for marker in ("run", "tests"):
        command = README.split(f"<!-- {marker} -->")[1].split("```sh\n")[1].split("\n```")[0]
        assert command.startswith("python3 -m venv .venv && .venv/bin/pip install")
