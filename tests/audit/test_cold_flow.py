"""What cold oil does to relief valves, filters and coolers."""

from __future__ import annotations

from pathlib import Path

from heataudit.audit.run import audit
from heataudit.machine import read_machine
from tests.workbooks import Sheets, write


def machine(start: float) -> Sheets:
    """A pump before a filter, a long hose and a consumer; VG 68 is thick at -10 °C and thin at 60 °C (ASTM D341)."""
    return {
        "Machine": [["Item", "Value"], ["Machine", "Long hose"], ["Oil temperature", 50], ["Start temperature", start]],
        "Oil": [["Item", "Value"], ["Viscosity grade", 68]],
        "Reservoir": [["Item", "Value"], ["Oil volume", 150]],
        "Pumps": [["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Outlet"],
                  ["Pump", "gear", "fixed", 20, 1450, "O"]],
        "Lines": [["Line", "From", "To", "Inside diameter [mm]", "Length [m]"], ["Hose", "P", "a", 12, 20]],
        "Valves": [["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"],
                   ["Relief", "relief", "P", "Tank", None, None, 100],
                   ["Filter", "filter", "O", "P", 60, 0.5, None]],
        "Actuators": [["Actuator", "Kind", "Port A", "Port B"], ["Consumer", "constant pressure", "a", "Tank"]],
        "Duty cycle": [["Phase", "Duration [s]", "Consumer move", "Consumer load [bar]"], ["Work", 10, "on", 40]],
    }  # fmt: skip


def cold_places(tmp_path: Path, start: float) -> set[str]:
    answers = audit(read_machine(write(tmp_path / f"{start}.xlsx", machine(start))))
    return {finding.where for finding in answers.findings if finding.code == "cold-start"}


def test_cold_oil_opens_the_relief_and_loads_the_filter(tmp_path: Path) -> None:
    # by hand: -10 °C is some 1300 mm²/s; 29 L/min in the hose would need 128 mu L Q / (pi D⁴) = 220 bar, and the filter
    # drops 0.5 bar x 29 / 60 x 1300 / 32 = 9.8 bar
    assert {"Relief", "Filter"} <= cold_places(tmp_path, -10)


def test_warm_oil_does_not(tmp_path: Path) -> None:
    # by hand: 50 °C is some 44 mm²/s, a thirtieth of that: 8 bar in the hose, 0.3 bar in the filter
    assert not {"Relief", "Filter"} & cold_places(tmp_path, 50)
