"""Machine workbooks for tests: a dict of sheets becomes an .xlsx file."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from copy import deepcopy
from pathlib import Path
from typing import Any

from openpyxl import Workbook

Rows = list[list[Any]]
Sheets = dict[str, Rows]


def write(path: Path, sheets: Mapping[str, Sequence[Sequence[Any]]]) -> Path:
    """Write sheets of rows, the header row first; None is a blank cell."""
    book = Workbook()
    book.remove(book.active)
    for title, rows in sheets.items():
        sheet = book.create_sheet(title)
        for row in rows:
            sheet.append(list(row))
    book.save(path)
    return path


PRESS: Sheets = {
    "Machine": [["Item", "Value", "Unit", "Note"], ["Machine", "Small press"]],
    "Reservoir": [["Item", "Value", "Unit", "Note"], ["Oil volume", 100, "L"]],
    "Pumps": [
        ["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Outlet"],
        ["Pump 1", "gear", "fixed", 16, 1450, "P1"],
    ],
    "Lines": [
        ["Line", "From", "To", "Size", "Inside diameter [mm]", "Length [m]"],
        ["Feed", "P1", "Press.P", "DN20", None, 2.5],
        ["Return", "Press.T", "Tank", None, 24, 3],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Opening pressure [bar]"],
        ["Main relief", "relief", "P1", "Tank", None, 200],
    ],
    "Directional valves": [["Section", "Size", "Centre"], ["Press", "NG10", "open"]],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]"],
        ["Ram", "cylinder", "Press", 80, 45],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Ram move", "Ram load [kN]", "Ram speed [mm/s]"],
        ["Down", 4, "extend", 30, 50],
        ["Up", 3, "retract", 5, None],
        ["Wait", 10, None, None, None],
    ],
}
"""A small machine without a mistake: one gear pump, one open-centre section, one cylinder."""


def changed(sheets: Sheets, cells: Mapping[tuple[str, str], Any]) -> Sheets:
    """A copy with some cells changed: (sheet, address) -> value."""
    from openpyxl.utils.cell import coordinate_from_string

    copied = deepcopy(sheets)
    for (title, address), value in cells.items():
        letters, row = coordinate_from_string(address)
        rows = copied.setdefault(title, [])
        position = ord(letters) - ord("A")
        while len(rows) < row:
            rows.append([])
        cells_of_row = rows[row - 1]
        cells_of_row += [None] * (position + 1 - len(cells_of_row))
        cells_of_row[position] = value
    return copied
