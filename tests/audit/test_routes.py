"""What lies behind which valve, on real workbooks solved by the network."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from heataudit.audit.losses import find_losses
from heataudit.audit.model import GROUPS
from heataudit.audit.routes import actuators_behind
from heataudit.audit.states import network
from heataudit.audit.transport import passing
from heataudit.machine import connect, read_machine
from tests.audit.fixture import L_MIN, press, solution
from tests.workbooks import PRESS, Sheets, write

LOWERED: Sheets = {
    **PRESS,
    "Lines": [
        *PRESS["Lines"],
        ["Rod hose", "Press.B", "Joint", None, 16, 2],
        ["Last hose", "Load side", "Ram.B", None, 16, 1],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Opening pressure [bar]", "Pilot from"],
        ["Main relief", "relief", "P1", "Tank", None, 200, None],
        ["Brake", "counterbalance", "Load side", "Joint", 60, 150, "Ram.A"],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Ram move", "Ram load [kN]"],
        ["Lower", 4, "extend", -20],
        ["Push", 4, "extend", 20],
        ["Raise", 3, "retract", 20],
    ],
}  # fmt: skip
"""The press with a hanging load that extends its ram; a counterbalance valve on the rod side holds it."""


def test_a_counterbalance_valve_lowers_only_while_its_load_drives(tmp_path: Path) -> None:
    machine = read_machine(write(tmp_path / "lowered.xlsx", LOWERED))
    solved = network(machine, machine.cycle, np.full(3, 313.15))
    assert solved.converged.all()
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    assert actuators_behind(machine, ports, "Brake") == ["Ram"]
    heat = solved.components.heat[solved.components.name.index("Brake")]
    back = solved.components.return_heat[solved.components.name.index("Press")]
    powers = dict(zip(GROUPS, find_losses(machine, machine.cycle, solved).powers, strict=True))
    assert heat[0] > 100.0
    assert powers["lowering"] == pytest.approx([heat[0] + back[0], 0.0, 0.0])
    assert sum(powers.values()) == pytest.approx(solved.heat)


def test_a_relief_valve_on_the_pump_has_no_actuator_behind_it() -> None:
    assert actuators_behind(press(), solution().ports, "Main relief") == []


def test_the_surplus_of_a_priority_valve_takes_its_share_of_the_heat() -> None:
    """30 of the pump's 40 L/min go on to To and 10 to the third port: a quarter of the pump's heat."""
    valves = press().valves.assign(kind="priority", port_3="Beyond")
    machine = replace(press(), valves=valves)
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    solved = solution()
    flow = np.zeros_like(solved.components.flow)
    flow[2] = 30 * L_MIN
    solved = replace(
        solved, ports=ports, pressure=np.zeros((len(ports), 3)),
        components=replace(solved.components, flow=flow, heat=0 * flow, return_heat=0 * flow),
    )  # fmt: skip
    surplus, carried = passing(machine, machine.cycle, solved, "Main relief surplus")
    assert surplus == pytest.approx(np.full(3, 10 * L_MIN))
    assert carried == pytest.approx(np.array([1000, 500, 200]) / 4, rel=1e-6)
