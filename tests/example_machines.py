"""The shipped examples, as data: `python -m tests.example_machines` writes them into examples/.

All machines, names and numbers are invented.
"""

from __future__ import annotations

from copy import copy
from pathlib import Path
from typing import Any

from openpyxl import load_workbook
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.machine import write_blank

EXAMPLES = Path(__file__).parent.parent / "examples"

Table = list[list[Any]]
Sheets = dict[str, dict[str, Any] | Table]

BALER: Sheets = {
    "Machine": {
        "Machine": "Cardboard baler, hall 3",
        "Site": "Invented example: no such machine stands anywhere",
        "Prepared by": "Maintenance",
        "Ambient temperature": 22,
        "Design ambient temperature": 36,
        "Highest oil temperature": 60,
        "Operating hours": 3600,
        "Energy price": 0.21,
        "CO2 factor": 0.36,
    },
    "Oil": {"Viscosity grade": 46, "Viscosity index": 102},
    "Reservoir": {"Oil volume": 320, "Steel mass": 420, "Extra surface": 3.5, "Air movement": "still"},
    "Drives": [["Drive", "Kind", "Speed [rpm]", "Power limit [kW]", "Efficiency [%]"],
               ["Motor", "electric", 1480, 37, 93.5]],
    "Pumps": [
        ["Pump", "Type", "Control", "Drive", "Displacement [cm³/rev]", "Outlet", "Suction"],
        ["Press pump", "piston", "fixed", "Motor", 63, "P1", "S1"],
        ["Feed pump", "gear", "fixed", "Motor", 19, "P2", "Tank"],
    ],
    "Lines": [
        ["Line", "From", "To", "Service", "Size", "Length [m]", "Bends [-]", "Bend type", "Rise [m]"],
        ["Suction hose", "Tank", "S1", "suction", "DN50", 1.2, 2, "swept", None],
        ["Press feed", "P1", "Press.P", "pressure", "DN20", 3.5, 3, "swept", 0.8],
        ["Ram head hose", "Ram valve.A", "Ram.A", "pressure", "DN20", 6, 4, "elbow", None],
        ["Ram rod hose", "Ram valve.B", "Ram.B", "pressure", "DN16", 7.5, 4, "elbow", None],
        ["Gate head hose", "Gate valve.A", "Gate.A", "pressure", "DN12", 9, 4, "swept", 1.9],
        ["Gate rod hose", "Gate valve.B", "Gate.B", "pressure", "DN12", 9, 4, "swept", 1.9],
        ["Press return", "Press.T", "R", "return", "DN25", 4, 3, "elbow", -0.8],
        ["Feed line", "P2", "Feeder.P", "pressure", "18x2", 5, 5, "swept", None],
        ["Belt hose there", "Belt valve.A", "Belt.A", "pressure", "DN12", 8, 2, "swept", None],
        ["Belt hose back", "Belt valve.B", "Belt.B", "pressure", "DN12", 8, 2, "swept", None],
        ["Feed return", "Feeder.T", "R", "return", "22x2", 5, 5, "swept", None],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"],
        ["Press relief", "relief", "P1", "Tank", None, None, 190],
        ["Feed relief", "relief", "P2", "Tank", None, None, 140],
        ["Belt port relief", "relief", "Belt.A", "Tank", 40, None, 120],
        ["Return filter", "filter", "R", "Tank", 250, 0.9, None],
        ["Filter bypass", "check", "R", "Tank", 250, 1.0, 2.5],
    ],
    "Directional valves": [
        ["Section", "Bank", "Size", "P-A [L/min]", "Rated drop [bar]", "Centre"],
        ["Ram valve", "Press", "NG16", None, None, "open"],
        ["Gate valve", "Press", "NG10", None, None, "open"],
        ["Belt valve", "Feeder", None, 45, 7, "open"],
    ],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Trapped volume [L]"],
        ["Ram", "cylinder", "Ram valve", 140, 80, None, 15],
        ["Gate", "cylinder", "Gate valve", 63, 36, None, None],
        ["Belt", "motor", "Belt valve", None, None, 160, None],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Repeats [-]", "Ram move", "Ram load [kN]", "Gate move", "Gate load [kN]",
         "Gate speed [mm/s]", "Belt move", "Belt load [N·m]", "Belt speed [rpm]"],
        ["Fill the chamber", 12, 3, None, None, None, None, None, "forward", 140, 90],
        ["Ram out, light", 9, 3, "extend", 25, None, None, None, "forward", 140, 90],
        ["Ram out, packing", 4, 3, "extend", 215, None, None, None, None, None, None],
        ["Hold the bale", 3, 3, "press", 270, None, None, None, None, None, None],
        ["Ram back", 8, 3, "retract", 12, None, None, None, "forward", 110, 90],
        ["Gate up", 9, 1, None, None, "extend", 9, 90, None, None, None],
        ["Push the bale out", 10, 1, "extend", 60, None, None, None, None, None, None],
        ["Gate down, ram back", 9, 1, "retract", 12, "retract", -4, 90, "forward", 60, 60],
        ["Wait for the wrapper", 25, 1, None, None, None, None, None, None, None, None],
    ],
    "Coolers": [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Water flow [L/min]", "Pressure drop [bar]",
         "Fan power [kW]", "Price"],
        ["Air, small", "air", 60, 0.13, None, 0.4, 0.25, 620],
        ["Air, small", "air", 120, 0.17, None, 1.3, 0.25, 620],
        ["Air, medium", "air", 60, 0.27, None, 0.3, 0.55, 980],
        ["Air, medium", "air", 140, 0.38, None, 1.1, 0.55, 980],
        ["Air, large", "air", 80, 0.56, None, 0.3, 1.1, 1650],
        ["Air, large", "air", 200, 0.86, None, 1.4, 1.1, 1650],
        ["Water, plates", "water", 60, 0.95, 25, 0.5, None, 1120],
        ["Water, plates", "water", 140, 1.45, 25, 1.9, None, 1120],
    ],
}  # fmt: skip
"""A channel baler that runs hot: two fixed pumps, open-centre banks, a bale held over the relief valve."""

MACHINES = {"baler.xlsx": BALER}


def write_example(path: Path, sheets: Sheets) -> None:
    """Fill a blank workbook in."""
    write_blank(path)
    book = load_workbook(path)
    for title, content in sheets.items():
        if isinstance(content, dict):
            _fill_settings(book[title], content)
        else:
            _fill_table(book[title], content)
    book.active = book.sheetnames.index("Machine")
    book.save(path)


def _fill_settings(sheet: Worksheet, values: dict[str, Any]) -> None:
    rows = {row[0].value: row for row in sheet.iter_rows(min_row=2)}
    for item, value in values.items():
        rows[item][1].value = value


def _fill_table(sheet: Worksheet, table: Table) -> None:
    headers = {cell.value: cell.column for cell in sheet[1] if cell.value}
    style = sheet.cell(1, 1)
    sheet.delete_rows(2)
    for header in table[0]:
        if header not in headers:
            free = [name for name in headers if ": " in str(name)]
            column = headers.pop(free[0]) if free else sheet.max_column + 1
            cell = sheet.cell(1, column, header)
            cell._style = copy(style._style)
            sheet.column_dimensions[cell.column_letter].width = max(12, len(header) + 2)
            headers[header] = column
    for number, row in enumerate(table[1:], 2):
        for header, value in zip(table[0], row, strict=True):
            if value is not None:
                sheet.cell(number, headers[header], value)


if __name__ == "__main__":
    EXAMPLES.mkdir(exist_ok=True)
    for name, sheets in MACHINES.items():
        (EXAMPLES / name).unlink(missing_ok=True)
        write_example(EXAMPLES / name, sheets)
