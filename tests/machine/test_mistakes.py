"""Mistakes in a workbook: every one is listed, with sheet, cell, what was found and how to mend it."""

from __future__ import annotations

import pickle
from collections.abc import Mapping
from datetime import datetime
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from heataudit.machine import Problem, WorkbookError, read_machine
from tests.workbooks import PRESS, Sheets, changed, write

Cells = Mapping[tuple[str, str], Any]

PUMPS, LINES, VALVES = "Pumps", "Lines", "Valves"
NOWHERE = 'which leads nowhere; give another port the same label, or "Tank"'
SECTIONS, ACTUATORS, CYCLE = "Directional valves", "Actuators", "Duty cycle"


def problems(tmp_path: Path, cells: Cells, base: Sheets = PRESS) -> list[str]:
    path = write(tmp_path / "press.xlsx", changed(base, cells))
    with pytest.raises(WorkbookError) as caught:
        read_machine(path)
    return str(caught.value).splitlines()


def warnings(tmp_path: Path, cells: Cells, base: Sheets = PRESS) -> list[str]:
    return [str(warning) for warning in read_machine(write(tmp_path / "press.xlsx", changed(base, cells))).warnings]


ONE_MISTAKE: list[tuple[Cells, str]] = [
    ({(LINES, "E3"): -12}, "Lines!E3: Inside diameter is -12; it must be greater than 0 mm"),
    (
        {(LINES, "E1"): "Inside diameter [in]", (LINES, "E3"): -0.5},
        "Lines!E3: Inside diameter is -0.5; it must be greater than 0 in",
    ),
    (
        {(LINES, "E1"): "Inside diameter [bar]"},
        'Lines!E1: Inside diameter: "bar" is not a unit of length; use mm, cm, m, in or ft',
    ),
    ({(LINES, "E2"): 12}, "Lines!E2: Inside diameter and Size are both given; leave one of the two blank"),
    ({(LINES, "E3"): None}, "Lines!E3: Inside diameter is blank; give it, or a Size"),
    (
        {(LINES, "D2"): "20 mm"},
        'Lines!D2: Size is "20 mm"; it must be a dash size (-8), a nominal size (DN20) or a tube, outside x wall in mm '
        "(25x3)",
    ),
    ({(LINES, "F2"): None}, "Lines!F2: Length is blank; it must be given"),
    ({(LINES, "F1"): "Lenght [m]"}, 'Lines: the column "Length [m]" is missing; it must be given'),
    ({(LINES, "G1"): "length [ft]"}, "Lines!G1: Length is there twice; keep one of the two columns"),
    ({(LINES, "F2"): "2,5"}, 'Lines!F2: Length is "2,5"; write it with a decimal point, 2.5'),
    (
        {(LINES, "F2"): "2.5 m"},
        'Lines!F2: Length is "2.5 m"; write the number alone, 2.5, and its unit in the header (now m)',
    ),
    ({(LINES, "F2"): "long"}, 'Lines!F2: Length is "long"; it must be a number'),
    ({(LINES, "F2"): True}, 'Lines!F2: Length is "TRUE"; it must be a number'),
    ({(LINES, "G1"): "Count", (LINES, "G2"): 1.5}, "Lines!G2: Count is 1.5; it must be a whole number at least 1"),
    (
        {(PUMPS, "G1"): "Volumetric efficiency [%]", (PUMPS, "G2"): 0.92},
        "Pumps!G2: Volumetric efficiency is 0.92; it must be at least 10 and at most 100 %; did you mean 92 %?",
    ),
    (
        {(PUMPS, "C2"): "fixd"},
        'Pumps!C2: Control is "fixd"; it must be "fixed", "pressure compensated", "load sensing", "speed controlled" '
        'or "set displacement"; did you mean "fixed"?',
    ),
    ({(PUMPS, "C2"): "pressure compensated"}, "Pumps!A2: Setting is blank; it must be given"),
    (
        {(PUMPS, "G1"): "Test flow [L/min]", (PUMPS, "G2"): 20},
        "Pumps!G2: Test flow is given without Test pressure and Test speed; give all three",
    ),
    (
        {(PUMPS, "G1"): "Test flow [L/min]", (PUMPS, "G2"): 30, (PUMPS, "H1"): "Test pressure [bar]",
         (PUMPS, "H2"): 150, (PUMPS, "I1"): "Test speed [rpm]", (PUMPS, "I2"): 1450},
        "Pumps!G2: Test flow is 30; it must be less than Displacement x Test speed, 23.2 L/min",
    ),
    (
        {(PUMPS, "G1"): "Test flow [L/min]", (PUMPS, "G2"): 20, (PUMPS, "H1"): "Test pressure [bar]",
         (PUMPS, "H2"): 150, (PUMPS, "I1"): "Test speed [rpm]", (PUMPS, "I2"): 1450,
         (PUMPS, "J1"): "Volumetric efficiency [%]", (PUMPS, "J2"): 90},
        "Pumps!G2: Test flow and Volumetric efficiency are both given; leave one of the two blank",
    ),
    (
        {(PUMPS, "C2"): "set displacement", (PUMPS, "G1"): "Setting [bar]", (PUMPS, "G2"): 300},
        'Pumps!A2: Suction is "Tank"; the pump of a closed loop needs the port label of the loop\'s other side',
    ),
    ({(PUMPS, "E2"): None}, "Pumps!E2: Speed is blank; give it, or name a Drive that has a Speed"),
    ({(PUMPS, "G1"): "Drive", (PUMPS, "G2"): "Motor"}, 'Pumps!G2: Drive is "Motor", which is not on the sheet Drives'),
    (
        {(VALVES, "D2"): "Tnk"},
        f'Valves!D2: To is "Tnk", {NOWHERE}; did you mean "Tank"?',
    ),
    ({(VALVES, "D2"): "P1"}, 'Valves!D2: To is "P1", as From is; it must be another port label'),
    ({(VALVES, "B2"): "check"}, "Valves!E2: Rated flow is blank; it must be given"),
    ({(VALVES, "F2"): None}, "Valves!F2: Opening pressure is blank; it must be given"),
    ({(LINES, "A3"): "main RELIEF"}, 'Valves!A2: Valve is "Main relief", a name that Lines!A3 has already; choose '
        "another name"),
    ({(LINES, "A3"): "Tank"}, 'Lines!A3: Line is "Tank", the name of the reservoir; choose another name'),
    ({(LINES, "A3"): None}, "Lines!A3: Line is blank; it must be given"),
    ({(SECTIONS, "B2"): None}, "Directional valves!A2: P-A is blank; give it, or a Size such as NG10"),
    (
        {(SECTIONS, "D1"): "Feed", (SECTIONS, "D2"): "series", (SECTIONS, "C2"): "closed"},
        'Directional valves!D2: Feed is "series", and Centre is "closed"; a section fed in series has an open centre',
    ),
    ({(ACTUATORS, "E2"): 90}, "Actuators!E2: Rod is 90; it must be less than the Bore, 80 mm"),
    ({(ACTUATORS, "D2"): None}, "Actuators!D2: Bore is blank; it must be given"),
    (
        {(ACTUATORS, "C2"): "Pres"},
        'Actuators!C2: Section is "Pres", which is not on the sheet Directional valves; did you mean "Press"?',
    ),
    (
        {(CYCLE, "D2"): None},
        'Duty cycle!C2: Ram move is "extend" without a load; give "Ram load", 0 where there is none',
    ),
    (
        {(CYCLE, "F1"): "Ram inlet [bar]", (CYCLE, "F2"): 30},
        "Duty cycle!F2: Ram inlet and Ram load [kN] are both given; a gauge pressure stands for the load, leave one of "
        "the two blank",
    ),
    (
        {(CYCLE, "F1"): "Ram load [bar]", (CYCLE, "F2"): 30},
        "Duty cycle!F2: Ram load and Ram load [kN] are both given; leave one of the two blank",
    ),
    (
        {(CYCLE, "D2"): None, (CYCLE, "F1"): "Ram outlet [bar]", (CYCLE, "F2"): 3},
        'Duty cycle!F2: Ram outlet is given without "Ram inlet"; give both gauge readings',
    ),
    (
        {(CYCLE, "F1"): "Ram travel [mm]", (CYCLE, "F2"): 30},
        "Duty cycle!F2: Ram travel and Ram speed [mm/s] are both given; they steer one thing, leave one of the two "
        "blank",
    ),
    (
        {(CYCLE, "C2"): "forward"},
        'Duty cycle!C2: Ram move is "forward"; it must be "hold", "extend", "retract", "press" or "float"',
    ),
    (
        {(CYCLE, "C2"): "float", (CYCLE, "E2"): None, (SECTIONS, "D1"): "A-T [L/min]", (SECTIONS, "D2"): 0,
         (CYCLE, "C3"): "hold", (CYCLE, "D3"): None},
        'Duty cycle!C2: Ram move is "float", but section Press has no path A-T: its flow there is 0',
    ),
    (
        {(SECTIONS, "D1"): "P-B [L/min]", (SECTIONS, "D2"): 0},
        'Duty cycle!C3: Ram move is "retract", but section Press has no path P-B: its flow there is 0',
    ),
    (
        {(SECTIONS, "D1"): "B-T [L/min]", (SECTIONS, "D2"): 0},
        'Duty cycle!C2: Ram move is "extend", but section Press has no path B-T: its flow there is 0',
    ),
    (
        {(CYCLE, "F1"): "Ram opening [%]", (CYCLE, "F2"): 0.5},
        "Duty cycle!F2: Ram opening never exceeds 0.5 %; write 50 for half, or [-] in the header",
    ),
    (
        {(CYCLE, "F1"): "Ram opening [%]", (CYCLE, "F2"): 140},
        "Duty cycle!F2: Ram opening is 140; it must be at least 0 and at most 100 %",
    ),
    (
        {(CYCLE, "F1"): "Pump 1 setting [bar]", (CYCLE, "F2"): 100},
        'Duty cycle!F1: Pump 1 setting has no meaning where Control is "fixed"; remove the column',
    ),
    ({(CYCLE, "D1"): "Ram load [N·m]"}, 'Duty cycle!D1: Ram load: "N·m" is not a unit of force; use kN, N or lbf'),
    ({(CYCLE, "B2"): 0}, "Duty cycle!B2: Duration is 0; it must be greater than 0 s"),
    ({(CYCLE, "B3"): None}, "Duty cycle!B3: Duration is blank; it must be given"),
    ({(CYCLE, "B1"): "Time [s]"}, "Duty cycle!B3: Time is 3; it must be greater than in the row before, 4"),
    (
        {(CYCLE, "B1"): None},
        'Duty cycle: the column "Duration [s]" is missing; it must be given (in a log, "Time [s]" may stand in its '
        "place)",
    ),
    (
        {("Reservoir", "A3"): "Length", ("Reservoir", "B3"): 500},
        "Reservoir!B3: Length needs all of Length, Width and Height; give all three or none",
    ),
    ({("Reservoir", "B2"): None}, "Reservoir!B2: Oil volume is blank; it must be given"),
    ({("Reservoir", "A2"): "# Oil volume"}, 'Reservoir: the item "Oil volume" is missing; it must be given'),
    (
        {("Reservoir", "C2"): "bar"},
        'Reservoir!C2: Oil volume: "bar" is not a unit of volume; use L, m³ or gal',
    ),
    ({("Reservoir", "A3"): "Oil volume"}, "Reservoir!A3: Oil volume is there twice; keep one of the two rows"),
    (
        {("Machine", "A3"): "Report units", ("Machine", "B3"): "metric"},
        'Machine!B3: Report units is "metric"; it must be "SI" or "US"',
    ),
    (
        {("Oil", "A2"): "Viscosity at 100", ("Oil", "B2"): 68},
        "Oil!B2: Viscosity at 100 is 68 mm²/s; it must be less than at 40 °C, 46 mm²/s",
    ),
    (
        {("Oil", "A2"): "Viscosity grade", ("Oil", "B2"): 45},
        "Oil!B2: Viscosity grade is 45; it must be one of 2, 3, 5, 7, 10, 15, 22, 32, 46, 68, 100, 150, 220, 320, 460, "
        "680, 1000, 1500, 2200, 3200",
    ),
]  # fmt: skip


@pytest.mark.parametrize(("cells", "text"), ONE_MISTAKE, ids=[text.split(";")[0] for _, text in ONE_MISTAKE])
def test_one_mistake(tmp_path: Path, cells: Cells, text: str) -> None:
    assert problems(tmp_path, cells) == [text]


def test_ten_mistakes_are_listed_at_once(tmp_path: Path) -> None:
    cells = {
        ("Reservoir", "B2"): -100,
        (PUMPS, "B2"): "screw",
        (LINES, "D2"): "DN",
        (LINES, "F3"): None,
        (VALVES, "D2"): "Tnak",
        (SECTIONS, "C2"): "tandem",
        (ACTUATORS, "A2"): "pump 1",
        (ACTUATORS, "D2"): "80mm",
        (CYCLE, "B4"): 0,
        (CYCLE, "C1"): "Pump 1 setting [bar]",
    }
    assert problems(tmp_path, cells) == [
        "Reservoir!B2: Oil volume is -100; it must be greater than 0 L",
        'Pumps!B2: Type is "screw"; it must be "gear", "vane" or "piston"',
        'Lines!D2: Size is "DN"; it must be a dash size (-8), a nominal size (DN20) or a tube, outside x wall in mm '
        "(25x3)",
        "Lines!F3: Length is blank; it must be given",
        f'Valves!D2: To is "Tnak", {NOWHERE}; did you mean "Tank"?',
        'Directional valves!C2: Centre is "tandem"; it must be "closed" or "open"',
        'Actuators!A2: Actuator is "pump 1", a name that Pumps!A2 has already; choose another name',
        'Actuators!D2: Bore is "80mm"; write the number alone, 80, and its unit in the header (now mm)',
        'Duty cycle!C1: Pump 1 setting has no meaning where Control is "fixed"; remove the column',
        "Duty cycle!B4: Duration is 0; it must be greater than 0 s",
    ]


@pytest.mark.parametrize(
    ("cells", "text"),
    [
        (
            {(LINES, "G1"): "Colour", (LINES, "G2"): "red"},
            'Lines!G1: column "Colour" is not known and was not read',
        ),
        (
            {(LINES, "G1"): "Bend", (LINES, "G2"): 1},
            'Lines!G1: column "Bend" is not known and was not read; did you mean "Bends"?',
        ),
        ({(LINES, "H2"): 3}, "Lines!H2: the cell stands under no header and was not read"),
        ({("Pmps", "A1"): "Pump"}, 'Pmps: the sheet is not known and was not read; did you mean "Pumps"?'),
        (
            {("Oil", "A2"): "Densty", ("Oil", "B2"): 880},
            'Oil!A2: item "Densty" is not known and was not read; did you mean "Density"?',
        ),
        (
            {(CYCLE, "F1"): "Ramm load [kN]", (CYCLE, "F2"): 3},
            'Duty cycle!F1: column "Ramm load" is not known and was not read; did you mean "Ram load"?',
        ),
        (
            {(PUMPS, "G1"): "Setting [bar]", (PUMPS, "G2"): 90},
            'Pumps!G2: Setting is given, but is not used where Control is "fixed"',
        ),
    ],
)
def test_what_is_not_read_is_said(tmp_path: Path, cells: Cells, text: str) -> None:
    assert warnings(tmp_path, cells) == [text]


def test_sheets_that_are_not_answered_yet_are_said(tmp_path: Path) -> None:
    sheets = {
        **PRESS,
        "Upgrades": [["Upgrade", "Sheet", "Row", "Column", "New value"], ["Hose", "Lines", "Feed", "Size", "DN25"]],
        "Tolerances": [["Sheet", "Row", "Column", "Plus-minus [%]"], ["Pumps", "*", "Volumetric efficiency", 4]],
        "Readings": [["Phase", "Where", "Quantity", "Value", "Unit"], ["Down", "P1", "pressure", 2000, "psi"]],
    }
    text = "the sheet was read, but this version does not answer it yet"
    assert warnings(tmp_path, {}, sheets) == [f"Upgrades: {text}", f"Tolerances: {text}", f"Readings: {text}"]


def test_a_fixed_pump_needs_a_way_to_the_tank(tmp_path: Path) -> None:
    blocked = {(SECTIONS, "C2"): "closed", (VALVES, "B2"): "throttle", (VALVES, "E2"): 50, (VALVES, "F2"): None}
    shut = {**blocked, (CYCLE, "F1"): "Main relief opening [%]", (CYCLE, "F2"): 0}
    text = (
        'Pumps!F2: Outlet is "P1", from which the oil of this fixed pump has no way to the tank when all sections are '
        "in neutral; add a relief valve or an open-centre valve"
    )
    assert problems(tmp_path, shut) == [text]
    assert warnings(tmp_path, blocked) == []
    turned_round = {(SECTIONS, "C2"): "closed", (VALVES, "C2"): "Tank", (VALVES, "D2"): "P1"}
    assert problems(tmp_path, turned_round) == [text]


def test_ports_that_may_stay_closed(tmp_path: Path) -> None:
    spare = {(SECTIONS, "A3"): "Spare", (SECTIONS, "B3"): "NG6", (SECTIONS, "C3"): "open", (SECTIONS, "D1"): "Bank",
             (SECTIONS, "D2"): "Press", (SECTIONS, "D3"): "Press"}  # fmt: skip
    assert warnings(tmp_path, spare) == []
    plunger = {(ACTUATORS, "B2"): "plunger", (ACTUATORS, "E2"): None}
    assert warnings(tmp_path, plunger) == []


def test_a_power_beyond_outlet_must_lead_on(tmp_path: Path) -> None:
    beyond = {(SECTIONS, "D1"): "Port N", (SECTIONS, "D2"): "Beyond"}
    assert problems(tmp_path, beyond) == [f'Directional valves!D2: Port N is "Beyond", {NOWHERE}']


def test_an_actuator_without_a_section_needs_its_ports_and_has_no_spool(tmp_path: Path) -> None:
    assert problems(tmp_path, {(ACTUATORS, "C2"): None}) == [
        f'Actuators!A2: Port A is blank, so it is "Ram.A", {NOWHERE}',
        f'Actuators!A2: Port B is blank, so it is "Ram.B", {NOWHERE}',
        "Duty cycle!E2: Ram speed is given, but Ram has no Section whose spool could be opened for it; leave it blank",
    ]


def test_a_pump_and_its_drive_are_not_both_given_a_speed(tmp_path: Path) -> None:
    cells = {
        ("Drives", "A1"): "Drive", ("Drives", "B1"): "Speed [rpm]", ("Drives", "A2"): "Motor", ("Drives", "B2"): 1450,
        (PUMPS, "G1"): "Drive", (PUMPS, "G2"): "MOTOR", (CYCLE, "F1"): "Motor speed [rpm]", (CYCLE, "F3"): 900,
        (CYCLE, "G1"): "Pump 1 speed [rpm]", (CYCLE, "G3"): 800,
    }  # fmt: skip
    assert problems(tmp_path, cells) == [
        "Duty cycle!G3: Pump 1 speed and Motor speed are both given, and both steer Pump 1; leave one of the two blank"
    ]


def test_actuators_on_one_section_move_together(tmp_path: Path) -> None:
    cells = {
        (ACTUATORS, "A3"): "Twin", (ACTUATORS, "B3"): "cylinder", (ACTUATORS, "C3"): "Press", (ACTUATORS, "D3"): 80,
        (ACTUATORS, "E3"): 45, (CYCLE, "F1"): "Twin move", (CYCLE, "F2"): "extend", (CYCLE, "G1"): "Twin load [kN]",
        (CYCLE, "G2"): 30,
    }  # fmt: skip
    assert problems(tmp_path, cells) == [
        "Duty cycle!F3: Twin move differs from that of Ram, which is on the same section Press; give both the same move"
    ]


def test_many_alike_are_counted(tmp_path: Path) -> None:
    rows = [["Phase", "Duration [s]"], *[["p", -1] for _ in range(25)]]
    listed = problems(tmp_path, {}, {**PRESS, "Duty cycle": rows})
    assert listed[9:] == [
        "Duty cycle!B11: Duration is -1; it must be greater than 0 s",
        "Duty cycle!B12: Duration: 15 more rows like this from here on",
    ]


def test_sheets_that_must_be_there(tmp_path: Path) -> None:
    kept = {title: rows for title, rows in PRESS.items() if title in ("Machine", "Reservoir")}
    assert problems(tmp_path, {}, kept) == [
        "Pumps: the sheet is missing; add it",
        "Duty cycle: the sheet is missing; add it, or give a log with --cycle",
    ]
    empty = {**kept, "Pumps": [PRESS["Pumps"][0]], "Duty cycle": [["Phase", "Duration [s]"]]}
    assert problems(tmp_path, {}, empty) == [
        "Pumps: there is no row; give at least one",
        "Duty cycle: there is no phase; give at least one row",
    ]


def test_files_that_are_no_workbooks(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("x")
    (tmp_path / "broken.xlsx").write_text("x")
    for name, start in (
        ("notes.txt", "notes.txt: the file is no machine workbook; it must end with .xlsx, .xlsm, .xls, .ods"),
        ("none.xlsx", "none.xlsx: there is no such file; check the name and the folder"),
        ("broken.xlsx", "broken.xlsx: the file cannot be read as a spreadsheet ("),
    ):
        with pytest.raises(WorkbookError) as caught:
            read_machine(tmp_path / name)
        assert str(caught.value).startswith(start)


def test_an_error_keeps_problems_and_warnings_between_processes(tmp_path: Path) -> None:
    path = write(tmp_path / "press.xlsx", changed(PRESS, {(LINES, "F1"): "Lenght [m]"}))
    with pytest.raises(WorkbookError) as caught:
        read_machine(path)
    again = pickle.loads(pickle.dumps(caught.value))
    assert again.problems == (Problem("Lines", "", 'the column "Length [m]" is missing; it must be given'),)
    assert [str(warning) for warning in again.warnings] == [
        'Lines!F1: column "Lenght" is not known and was not read; did you mean "Length"?'
    ]


CELLS = [
    (title, f"{chr(ord('A') + column)}{row + 1}")
    for title, rows in PRESS.items()
    for row, cells in enumerate(rows)
    for column in range(len(cells))
]
JUNK = [
    None,
    "",
    " ",
    "#",
    0,
    -1,
    1e12,
    "x",
    "Tank",
    "Ram",
    "1,5",
    True,
    datetime(2024, 5, 1),
    "hold",
    "open",
    "Size [m]",
]


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.dictionaries(st.sampled_from(CELLS), st.sampled_from(JUNK), min_size=1, max_size=6))
def test_whatever_is_typed_is_read_or_refused_in_words(tmp_path: Path, cells: dict[tuple[str, str], Any]) -> None:
    path = write(tmp_path / "press.xlsx", changed(PRESS, cells))
    found: tuple[Problem, ...] = ()
    pumps = 0
    try:
        pumps = len(read_machine(path).pumps)
    except WorkbookError as error:
        found = error.problems
    assert pumps == 1 or found
    assert all(len(problem.text) > 10 and "nan" not in problem.text.split() for problem in found)


def test_a_driving_load_on_an_extending_plunger(tmp_path: Path) -> None:
    cells = {("Actuators", "B2"): "plunger", ("Actuators", "E2"): None, ("Duty cycle", "D2"): -30}
    assert problems(tmp_path, cells) == [
        "Duty cycle!D2: Ram load is -30 kN, and the plunger extends: nothing brakes a load that drives it; "
        "it must be at least 0"
    ]
