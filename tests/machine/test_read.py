"""Workbooks without a mistake: what is read, in which units, with which defaults."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import Any
from xml.sax.saxutils import escape
from zipfile import ZipFile

import numpy as np
import pandas as pd
import pytest

from heataudit.machine import Machine, read_machine
from tests.workbooks import PRESS, Sheets, changed, write

TABLES = ("drives", "pumps", "lines", "valves", "sections", "actuators", "coolers")

SI: Sheets = {
    "Machine": [["Item", "Value", "Unit"], ["Machine", "Twin drive"], ["Ambient temperature", 30, "°C"],
                ["Altitude", 304.8, "m"]],
    "Oil": [["Item", "Value", "Unit"], ["Density", 880, "kg/m³"], ["Viscosity at 40", 46, "mm²/s"],
            ["Specific heat", 2, "kJ/(kg·K)"]],
    "Reservoir": [["Item", "Value", "Unit"], ["Oil volume", 231, "L"], ["Heat transfer coefficient", 12],
                  ["Steel mass", 90.718474, "kg"]],
    "Drives": [["Drive", "Speed [rpm]", "Power limit [kW]"], ["Motor", 1450, 7.456998715822702]],
    "Pumps": [["Pump", "Type", "Control", "Drive", "Displacement [cm³/rev]", "Setting [bar]", "Outlet"],
              ["Main", "piston", "pressure compensated", "Motor", 32.774128, 206.84271879504762, "P"]],
    "Lines": [["Line", "From", "To", "Inside diameter [mm]", "Length [m]"], ["Feed", "P", "Hoist.P", 25.4, 3.048],
              ["Back", "Hoist.T", "Tank", 25.4, 1.524]],
    "Directional valves": [["Section", "P-A [L/min]"], ["Hoist", 75.708235680]],
    "Actuators": [["Actuator", "Kind", "Section", "Displacement [cm³/rev]"], ["Winch", "motor", "Hoist", 163.87064]],
    "Duty cycle": [["Phase", "Duration [s]", "Winch move", "Winch load [N·m]", "Winch speed [rpm]"],
                   ["Up", 20, "forward", 135.5817948331400, 60], ["Down", 20, "reverse", -67.7908974165700, 60]],
}  # fmt: skip
US: Sheets = {
    "Machine": [["Item", "Value", "Unit"], ["Machine", "Twin drive"], ["Ambient temperature", 86, "degF"],
                ["Altitude", 1000, "ft"]],
    "Oil": [["Item", "Value", "Unit"], ["Density", 880 * 0.3048**3 / 0.45359237, "lb/ft3"],
            ["Viscosity at 40", 46, "cSt"], ["Specific heat", 2 / 4.1868, "Btu/(lb·°F)"]],
    "Reservoir": [["Item", "Value", "Unit"], ["Oil volume", 231 / 3.785411784, "gal"],
                  ["Heat transfer coefficient", 12 / 5.678263341113488, "Btu/(h·ft2·°F)"], ["Steel mass", 200, "lb"]],
    "Drives": [["Drive", "Speed [rpm]", "Power limit [hp]"], ["Motor", 1450, 10]],
    "Pumps": [["Pump", "Type", "Control", "Drive", "Displacement [in3/rev]", "Setting [psi]", "Outlet"],
              ["Main", "piston", "pressure compensated", "Motor", 2, 3000, "P"]],
    "Lines": [["Line", "From", "To", "Inside diameter [in]", "Length [ft]"], ["Feed", "P", "Hoist.P", 1, 10],
              ["Back", "Hoist.T", "Tank", 1, 5]],
    "Directional valves": [["Section", "P-A [gpm]"], ["Hoist", 20]],
    "Actuators": [["Actuator", "Kind", "Section", "Displacement [in3/rev]"], ["Winch", "motor", "Hoist", 10]],
    "Duty cycle": [["Phase", "Duration [min]", "Winch move", "Winch load [lbf·ft]", "Winch speed [rpm]"],
                   ["Up", 1 / 3, "forward", 100, 60], ["Down", 1 / 3, "reverse", -50, 60]],
}  # fmt: skip
"""The same machine in the other units; the factors are exact by definition (inch, pound, US gallon, Btu)."""


def read(tmp_path: Path, sheets: Sheets, name: str = "machine.xlsx", **more: Any) -> Machine:
    return read_machine(write(tmp_path / name, sheets), **more)


def assert_same(first: Machine, second: Machine) -> None:
    for table in TABLES:
        pd.testing.assert_frame_equal(getattr(first, table), getattr(second, table), rtol=1e-9)
    for settings in ("general", "oil", "reservoir"):
        ours, theirs = getattr(first, settings), getattr(second, settings)
        assert ours.keys() == theirs.keys()
        for key, value in ours.items():
            same = pytest.approx(theirs[key], rel=1e-9) if isinstance(value, float) else theirs[key]
            assert value == same, key
    assert_same_cycle(first, second)


def assert_same_cycle(first: Machine, second: Machine) -> None:
    assert first.cycle.phase.tolist() == second.cycle.phase.tolist()
    for array in ("duration", "repeats", "other_heat"):
        np.testing.assert_allclose(getattr(first.cycle, array), getattr(second.cycle, array), rtol=1e-9)
    assert first.cycle.moves.keys() == second.cycle.moves.keys()
    for actuator, codes in first.cycle.moves.items():
        np.testing.assert_array_equal(codes, second.cycle.moves[actuator])
    assert first.cycle.values.keys() == second.cycle.values.keys()
    for key, values in first.cycle.values.items():
        np.testing.assert_allclose(values, second.cycle.values[key], rtol=1e-9)


def test_the_same_machine_in_si_and_in_us_units(tmp_path: Path) -> None:
    assert_same(read(tmp_path, SI, "si.xlsx"), read(tmp_path, US, "us.xlsx"))


def test_values_are_in_si_units(tmp_path: Path) -> None:
    machine = read(tmp_path, SI)
    pump, line = machine.pumps.iloc[0], machine.lines.iloc[0]
    assert pump["displacement"] == pytest.approx(32.774128e-6)
    assert pump["speed"] == pytest.approx(1450 / 60)  # the drive's
    assert pump["setting"] == pytest.approx(206.84271879504762e5)
    assert (line["inside_diameter"], line["length"]) == pytest.approx((0.0254, 3.048))
    assert machine.general["ambient_temperature"] == pytest.approx(303.15)
    assert machine.oil["specific_heat"] == pytest.approx(2000)
    assert machine.cycle.value("Winch", "speed").tolist() == pytest.approx([1.0, 1.0])
    assert np.isnan(machine.cycle.value("Winch", "opening")).tolist() == [True, True]


def test_names_match_without_regard_to_case_and_blanks(tmp_path: Path) -> None:
    sheets = {title.upper() + " ": rows for title, rows in PRESS.items()}
    rows = [[" phase ", "DURATION  [ s ]", "RAM  Move", "ram LOAD [kn]", "Ram speed [MM/S]"], *PRESS["Duty cycle"][1:]]
    rows[1] = ["Down", 4, " EXTEND ", 30, 50]
    sheets["DUTY CYCLE "] = rows
    sheets["ACTUATORS "] = [PRESS["Actuators"][0], ["Ram", "Cylinder", "PRESS", 80, 45]]
    assert_same(read(tmp_path, sheets, "loud.xlsx"), read(tmp_path, PRESS))


def test_remarks_and_blank_rows_are_skipped(tmp_path: Path) -> None:
    lines = PRESS["Lines"]
    spread = [["# sketch 3"], [], lines[0], lines[1], [" # not built", "x"], [None, "  "], lines[2]]
    machine = read(tmp_path, {**PRESS, "Lines": spread})
    assert machine.lines["name"].tolist() == ["Feed", "Return"]
    wrong = changed({**PRESS, "Lines": spread}, {("Lines", "F7"): -3})
    with pytest.raises(Exception, match=r"^Lines!F7: Length is -3; it must be greater than 0 m$"):
        read(tmp_path, wrong, "wrong.xlsx")


def default(machine: Machine, sheet: str, row: str, column: str) -> tuple[Any, ...]:
    table = machine.defaults
    found = table[(table["sheet"] == sheet) & (table["row"] == row) & (table["column"] == column)]
    assert len(found) == 1
    return tuple(found[["value", "reason", "estimate"]].iloc[0])


def test_every_default_is_listed_with_its_reason(tmp_path: Path) -> None:
    machine = read(tmp_path, PRESS)
    assert default(machine, "Oil", "Viscosity grade", "") == ("46", "most used grade", False)
    assert default(machine, "Machine", "Design ambient temperature", "") == ("35 °C", "ambient + 10 K", False)
    assert default(machine, "Pumps", "Pump 1", "Volumetric efficiency") == ("92 %", "gear pump", True)
    assert default(machine, "Lines", "Feed", "Inside diameter") == ("19.05 mm", "by Size DN20", False)
    assert default(machine, "Valves", "Main relief", "Rated flow") == ("23.2 L/min", "the largest pump flow", True)
    assert default(machine, "Valves", "Main relief", "Rated drop") == ("30 bar", "15 % of the opening pressure", True)
    assert default(machine, "Directional valves", "Press", "P-A") == ("120 L/min", "by Size NG10", True)
    assert default(machine, "Actuators", "Ram", "Mechanical efficiency") == ("95 %", "seal friction", True)
    assert default(machine, "Duty cycle", "every phase", "Repeats") == ("1", "once", False)
    estimates = machine.defaults[machine.defaults["estimate"]]
    assert estimates["tolerance"].between(0.01, 1.0).all()
    assert machine.defaults.loc[~machine.defaults["estimate"], "tolerance"].isna().all()


def test_a_default_is_not_listed_where_the_cell_is_typed(tmp_path: Path) -> None:
    machine = read(tmp_path, changed(PRESS, {("Pumps", "G1"): "Viscous share [%]", ("Pumps", "G2"): 25}))
    assert "Viscous share" not in machine.defaults["column"].tolist()
    typed = machine.inputs[machine.inputs["column"] == "Viscous share"]
    assert typed.to_numpy().tolist() == [["Pumps", "Pump 1", "Viscous share", "25 %"]]


@pytest.mark.parametrize(
    ("kind", "volumetric", "hydromechanical"),
    [("gear", 0.92, 0.90), ("vane", 0.88, 0.90), ("piston", 0.95, 0.94)],  # the workbook's own table of defaults
)
def test_default_efficiencies_of_pumps(tmp_path: Path, kind: str, volumetric: float, hydromechanical: float) -> None:
    pump = read(tmp_path, changed(PRESS, {("Pumps", "B2"): kind})).pumps.iloc[0]
    assert pump["volumetric_efficiency"] == pytest.approx(volumetric)
    assert pump["hydromechanical_efficiency"] == pytest.approx(hydromechanical)


def test_the_tank_holds_its_oil_in_the_default_box(tmp_path: Path) -> None:
    tank = read(tmp_path, PRESS).reservoir
    assert tank["length"] * tank["width"] * tank["height"] == pytest.approx(0.1 / 0.8)
    assert (tank["length"] / tank["width"], tank["height"] / tank["width"]) == pytest.approx((1.5, 1.0))


def test_a_diesel_may_be_hotter(tmp_path: Path) -> None:
    drives = {**PRESS, "Drives": [["Drive", "Kind"], ["Engine", "diesel"]]}
    with_drive = changed(drives, {("Pumps", "G1"): "Drive", ("Pumps", "G2"): "Engine"})
    machine = read(tmp_path, with_drive)
    assert machine.general["highest_oil_temperature"] == pytest.approx(353.15)  # 80 °C by the workbook's own rule
    assert machine.drives["specific_fuel_consumption"].iloc[0] == pytest.approx(0.230 / 3.6e6)
    assert np.isnan(machine.drives["efficiency"].iloc[0])
    assert read(tmp_path, PRESS, "electric.xlsx").general["highest_oil_temperature"] == pytest.approx(333.15)


def test_paths_of_a_section(tmp_path: Path) -> None:
    header = ["Section", "Size", "Centre", "P-A [L/min]", "P-B [L/min]", "Bypass [L/min]"]
    sheets = {**PRESS, "Directional valves": [header, ["Press", "NG6", "open", None, 30]]}
    section = read(tmp_path, sheets).sections.iloc[0]
    paths = section[["p_a", "p_b", "a_t", "b_t", "bypass"]].to_numpy(float) * 60e3
    assert paths.tolist() == pytest.approx([60, 30, 60, 60, 60])


def test_a_bank_shares_its_ports(tmp_path: Path) -> None:
    sheets = {
        **PRESS,
        "Directional valves": [
            ["Section", "Bank", "Size", "Centre", "Port T", "Port N"],
            ["Press", "Block", "NG10", "open", None, None],
            ["Clamp", "block", "NG6", "open", "Tank", "Beyond"],
        ],
        "Lines": [
            PRESS["Lines"][0],
            ["Feed", "P1", "block.p", "-8", None, 1],
            ["Return", "Block.T", "Tank", "-8", None, 1],
            ["Next", "Beyond", "Tank", "-8", None, 1],
        ],
    }
    sections = read(tmp_path, sheets).sections
    assert sections["bank"].tolist() == ["Block", "Block"]
    assert sections["port_p"].tolist() == ["Block.P", "Block.P"]
    assert sections["port_t"].tolist() == ["Block.T", "Tank"]
    assert sections["port_n"].tolist() == ["Beyond", "Beyond"]


def test_flags_are_true_or_false(tmp_path: Path) -> None:
    machine = read(tmp_path, changed(PRESS, {("Reservoir", "A3"): "Raised", ("Reservoir", "B3"): True}))
    assert machine.reservoir["raised"] is True
    assert machine.valves["vented"].tolist() == [False]


def test_a_dash_size_may_be_typed_as_a_number(tmp_path: Path) -> None:
    machine = read(tmp_path, changed(PRESS, {("Lines", "D2"): -8}))
    assert machine.lines["inside_diameter"].iloc[0] == pytest.approx(0.0127)  # exact: eight sixteenths of an inch


def test_several_rows_of_one_cooler(tmp_path: Path) -> None:
    coolers = [["Cooler", "Oil flow [L/min]", "Capacity [kW/K]"], ["A", 20, 0.1], ["A", 60, 0.2]]
    machine = read(tmp_path, {**PRESS, "Coolers": coolers})
    assert machine.coolers[["name", "capacity"]].to_numpy().tolist() == [["A", 100.0], ["A", 200.0]]


def test_the_checksum_is_that_of_the_file(tmp_path: Path) -> None:
    machine = read(tmp_path, PRESS)
    assert machine.checksum == hashlib.sha256(machine.source.read_bytes()).hexdigest()


def as_ods(path: Path, sheets: Sheets) -> Path:
    """The least that is an OpenDocument spreadsheet."""

    def cell(value: Any) -> str:
        if value is None:
            return "<table:table-cell/>"
        if isinstance(value, str):
            kind = 'office:value-type="string"'
        else:
            kind = f'office:value-type="float" office:value="{value}"'
        return f"<table:table-cell {kind}><text:p>{escape(str(value))}</text:p></table:table-cell>"

    tables = ""
    for title, rows in sheets.items():
        lines = "".join(f"<table:table-row>{''.join(map(cell, row))}</table:table-row>" for row in rows)
        tables += f'<table:table table:name="{title}">{lines}</table:table>'
    names = " ".join(
        f'xmlns:{name}="urn:oasis:names:tc:opendocument:xmlns:{name}:1.0"' for name in ("office", "table", "text")
    )
    body = f"<office:body><office:spreadsheet>{tables}</office:spreadsheet></office:body>"
    with ZipFile(path, "w") as file:
        file.writestr("mimetype", "application/vnd.oasis.opendocument.spreadsheet")
        file.writestr("META-INF/manifest.xml", "<manifest/>")
        file.writestr("content.xml", f"<office:document-content {names}>{body}</office:document-content>")
    return path


def test_an_opendocument_spreadsheet(tmp_path: Path) -> None:
    assert_same(read_machine(as_ods(tmp_path / "press.ods", PRESS)), read(tmp_path, PRESS))
