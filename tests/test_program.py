"""The whole program through its command line, on real workbooks."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from heataudit.cli import main
from tests.example_machines import EXAMPLES, MACHINES
from tests.workbooks import Sheets, write

OPPOSED = [
    # p1 [bar], k1 [bar/(L/min)²], p2, k2, Q [L/min] -> Q1, Q2, p: two branches, each a constant opposing pressure and
    # a quadratic resistance, in closed form (standard theory of parallel flow): with d = p2 - p1 and
    # S = sqrt(k1 k2 Q² + (k1 - k2) d), above Qc = sqrt(d / k1) Q1 = (d + k2 Q²) / (k2 Q + S) and
    # Q2 = (k1 Q² - d) / (k1 Q + S); below it all oil takes the first
    (50, 0.02, 80, 0.01, 60), (40, 0.01, 100, 0.01, 100), (30, 0.004, 150, 0.004, 200), (60, 0.015, 96, 0.03, 40),
    (60, 0.015, 96, 0.03, 48.98979485566356), (60, 0.015, 96, 0.03, 50), (60, 0.015, 96, 0.03, 55),
    (0, 0.005, 0, 0.02, 90),
    # two orifices without opposing pressure, 2 and 3 mm, Cd 0.6, 870 kg/m³: the flows go as the areas, 4 to 9
    (0, 51.5154823691 / (40 * 4 / 13) ** 2, 0, 51.5154823691 / (40 * 9 / 13) ** 2, 40),
]  # fmt: skip


def split(p1: float, k1: float, p2: float, k2: float, total: float) -> tuple[float, float, float]:
    """Flows of both branches and their common pressure, in closed form, p1 <= p2."""
    d = p2 - p1
    if total**2 <= d / k1 * (1 + 1e-12):
        return total, 0.0, p1 + k1 * total**2
    root = np.sqrt(k1 * k2 * total**2 + (k1 - k2) * d)
    first = (d + k2 * total**2) / (k2 * total + root)
    return first, (k1 * total**2 - d) / (k1 * total + root), p1 + k1 * first**2


def opposed_machine() -> Sheets:
    """A tight fixed pump before two throttles and two consumers; openings and pump speeds make the rows."""
    least = min(min(k1, k2) for _, k1, _, k2, _ in OPPOSED)
    rows: list[list[Any]] = []
    for swapped in (False, True):
        for number, (p1, k1, p2, k2, total) in enumerate(OPPOSED):
            first, second = ((p2, k2), (p1, k1)) if swapped else ((p1, k1), (p2, k2))
            rows.append([
                f"{number} {'swapped' if swapped else ''}".strip(), 10, total * 10,
                "on", first[0], 100 * np.sqrt(least / first[1]), "on", second[0], 100 * np.sqrt(least / second[1]),
            ])  # fmt: skip
    return {
        "Machine": [["Item", "Value"], ["Machine", "Two branches"], ["Oil temperature", 40]],
        "Reservoir": [["Item", "Value"], ["Oil volume", 100]],
        "Pumps": [["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Volumetric efficiency [%]",
                   "Outlet"], ["Pump", "piston", "fixed", 100, 1500, 100, "P"]],
        "Valves": [["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"],
                   ["First", "throttle", "P", "a", 10, least * 100, None],
                   ["Second", "throttle", "P", "b", 10, least * 100, None],
                   ["Relief", "relief", "P", "Tank", None, None, 350]],
        "Actuators": [["Actuator", "Kind", "Port A", "Port B"], ["Load 1", "constant pressure", "a", "Tank"],
                      ["Load 2", "constant pressure", "b", "Tank"]],
        "Duty cycle": [["Phase", "Duration [s]", "Pump speed [rpm]", "Load 1 move", "Load 1 load [bar]",
                        "First opening [%]", "Load 2 move", "Load 2 load [bar]", "Second opening [%]"], *rows],
    }  # fmt: skip


def test_parallel_branches_share_as_far_as_their_pressures_allow(tmp_path: Path) -> None:
    book = write(tmp_path / "branches.xlsx", opposed_machine())
    assert main(["run", str(book), "--quiet"]) == 0
    phases = json.loads((tmp_path / "branches-audit" / "results.json").read_text(encoding="utf-8"))["phases"]
    assert len(phases) == 2 * len(OPPOSED)
    for number, phase in enumerate(phases):
        swapped, case = divmod(number, len(OPPOSED))
        total = OPPOSED[case][4]
        first, second, pressure = split(*OPPOSED[case])
        names = ("Second", "First") if swapped else ("First", "Second")
        flows = [phase["components"][name]["flow_L_min"] for name in names]
        assert flows == pytest.approx([first, second], rel=1e-9, abs=1e-9 * total)
        assert phase["pumps"]["Pump"]["pressure_bar"] == pytest.approx(pressure, rel=1e-9)
        p1, k1, p2, k2, _ = OPPOSED[case]
        heat = (k1 * first**3 + k2 * second**3) / 600  # kW from bar and L/min, exact
        found = sum(phase["components"][name]["heat_kW"] for name in names)
        assert found == pytest.approx(heat, rel=3e-9)
        assert phase["useful_power_kW"] == pytest.approx((p1 * first + p2 * second) / 600, rel=3e-9, abs=1e-12)


@pytest.mark.parametrize("name", MACHINES)
def test_an_example_runs(name: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["run", str(EXAMPLES / name), "--out", str(tmp_path / "out")]) == 0
    assert "report.xlsx" in capsys.readouterr().out
    results = json.loads((tmp_path / "out" / "results.json").read_text(encoding="utf-8"))
    cycle = results["cycle"]
    assert abs(cycle["balance_error_kJ"]) < 1e-4 * cycle["shaft_energy_kJ"]
    assert sum(results["loss_groups"].values()) == pytest.approx(cycle["heat_energy_kJ"], rel=1e-9)
    given = cycle["shaft_energy_kJ"] + cycle["returned_energy_kJ"]
    spent = cycle["useful_energy_kJ"] + cycle["heat_energy_kJ"] + cycle["lifting_energy_kJ"]
    assert given == pytest.approx(spent, rel=1e-6)
    # common practice: small open-centre machines 15 to 35 %, load-sensing cranes and excavators 25 to 40 %,
    # constant-pressure and two-pump presses 15 to 40 %, hydrostatic travel above 50 %; a little is allowed either way
    band = {"baler.xlsx": (0.15, 0.40), "crane.xlsx": (0.25, 0.40), "press.xlsx": (0.15, 0.40),
            "sweeper.xlsx": (0.45, 0.70)}[name]  # fmt: skip
    assert band[0] < cycle["efficiency"] < band[1]


def test_the_same_workbook_gives_the_same_bytes(tmp_path: Path) -> None:
    for out in ("one", "two"):
        assert main(["run", str(EXAMPLES / "press.xlsx"), "--out", str(tmp_path / out), "--quiet"]) == 0
    first, second = ((tmp_path / out / "results.json").read_bytes() for out in ("one", "two"))
    assert first == second
