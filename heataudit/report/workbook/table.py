"""Native tables of the report, fitted to what they hold."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np
import pandas as pd
from openpyxl.formatting.rule import DataBarRule
from openpyxl.styles import Border, Font, PatternFill, Side
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.table import Table, TableStyleInfo
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.report.charts.palette import BAND, INK, QUIET
from heataudit.report.quantities import convert, grouped, unit_of
from heataudit.report.workbook.page import (
    FONT,
    LINE,
    Look,
    Report,
    characters,
    colour_of,
    lines_of,
    paragraph,
    put,
    width_of,
)

WIDEST, NARROWEST = 46.0, 7.0
"""Column widths [characters] between which a table's columns are fitted."""

PORTRAIT = 100.0
"""Width of a table [characters] up to which the paper stands upright."""

BAR, TABLE_STYLE = "A9BDCB", "TableStyleLight1"


class Field(NamedTuple):
    """A column of a table: key in the frame, header without unit, unit where the key does not end with it.

    `bar` draws data bars, `percent` shows a fraction in percent.
    """

    key: str
    header: str
    unit: str | None = None
    bar: bool = False
    percent: bool = False


class Plan(NamedTuple):
    """A native table: its name and columns.

    `freeze` keeps the header in view and repeats it on every printed page; `places` is the column whose cells findings
    may link to, "" for none.
    """

    name: str
    fields: Sequence[Field]
    freeze: bool = True
    places: str = ""


def write_table(report: Report, sheet: Worksheet, row: int, frame: pd.DataFrame, plan: Plan) -> int:
    """A native table with a filter.

    Parameters
    ----------
    report
        Gives the units, takes the places.
    sheet
        The sheet.
    row
        Of the header.
    frame
        The rows, numbers in the units of the program.
    plan
        Name and columns.

    Returns
    -------
    The row of the sheet that is free for what follows.
    """
    if not len(frame):
        put(sheet, row, 1, "None.", Look(colour=QUIET))
        return row + 2
    last = row + len(frame)
    for column, wanted in enumerate(plan.fields, 1):
        values, unit = _cells(report, frame[wanted.key], wanted)
        header = f"{wanted.header} [{unit}]" if unit else wanted.header
        _write_column(sheet, (row, column), header, values, wanted.percent)
        if wanted.bar:
            cells = f"{get_column_letter(column)}{row + 1}:{get_column_letter(column)}{last}"
            rule = DataBarRule(start_type="num", start_value=0, end_type="max", color=BAR)  # type: ignore[no-untyped-call]
            sheet.conditional_formatting.add(cells, rule)
    for offset, text in enumerate(frame[plan.places] if plan.places else ()):
        report.places.setdefault(str(text), (sheet.title, row + 1 + offset))
    native = Table(displayName=plan.name, ref=f"A{row}:{get_column_letter(len(plan.fields))}{last}")
    native.tableStyleInfo = TableStyleInfo(name=TABLE_STYLE, showRowStripes=True)
    sheet.add_table(native)
    if plan.freeze:
        width = sum(width_of(sheet, column) for column in range(1, len(plan.fields) + 1))
        sheet.page_setup.orientation = "portrait" if width <= PORTRAIT else "landscape"
        _fit_note(sheet, len(plan.fields))
        sheet.freeze_panes = f"B{row + 1}"
        sheet.print_title_rows = f"{row}:{row}"
    return last + 2


def _fit_note(sheet: Worksheet, columns: int) -> None:
    """Wrap the note below the heading to the table's width."""
    note = sheet.cell(2, 1).value
    if note:
        paragraph(sheet, 2, str(note), columns)
        sheet.cell(2, 1).font = Font(name=FONT, size=10, color=colour_of(QUIET))


def _cells(report: Report, column: pd.Series, wanted: Field) -> tuple[list[Any], str]:
    """Cells as they are shown, and their unit."""
    unit = unit_of(wanted.key) if wanted.unit is None else wanted.unit
    if column.dtype == bool:
        return ["yes" if cell else "no" for cell in column], ""
    if not pd.api.types.is_numeric_dtype(column):
        return column.tolist(), convert(0.0, unit, report.system)[1]
    values, unit = convert(column.to_numpy(float), unit, report.system)
    return values.tolist(), unit


def _write_column(sheet: Worksheet, place: tuple[int, int], header: str, values: list[Any], percent: bool) -> None:
    """Header and cells of a column, wide enough for what it holds."""
    row, column = place
    words = any(isinstance(value, str) for value in values)
    look = Look(wrapped=words, across=None if words else "right", top=True, indent=int(words and column > 1))
    head = put(sheet, row, column, header, look._replace(bold=True, wrapped=True, across=None))
    head.fill = PatternFill("solid", fgColor=colour_of(BAND))
    head.border = Border(bottom=Side(style="medium", color=colour_of(INK)))
    content = max((characters(_shown(value, percent)) for value in values), default=0.0) + 1.5 + 1.5 * words
    width = _widen(sheet, column, content, header)
    _heighten(sheet, row, lines_of(header, width - 1.5 - 1.5 * words, bold=True) * LINE + 4)
    whole = not words and all(value != value or float(value).is_integer() for value in values)
    for offset, value in enumerate(values, 1):
        cell = put(sheet, row + offset, column, value, look)
        if percent and not words:
            cell.number_format = "0.0%" if 0 < abs(value) < 0.0995 else "0%"
        elif whole:
            cell.number_format = "#,##0"
        if words and content > width:
            _heighten(sheet, row + offset, lines_of(str(value), width - 2.5) * LINE + 2)


def _widen(sheet: Worksheet, column: int, content: float, header: str) -> float:
    """Widen a column [characters] to its content, within bounds, and to the longest word of its header."""
    letter = get_column_letter(column)
    before = width_of(sheet, column) if letter in sheet.column_dimensions else 0.0
    longest_word = max(characters(word, bold=True) for word in header.split(" ")) + 2.5
    width = max(before, float(np.clip(max(content, longest_word), NARROWEST, WIDEST)))
    sheet.column_dimensions[letter].width = width
    return width


def _heighten(sheet: Worksheet, row: int, height: float) -> None:
    """Make a row at least so high [pt]."""
    sheet.row_dimensions[row].height = max(sheet.row_dimensions[row].height or 0.0, height)


def _shown(value: Any, percent: bool) -> str:
    if isinstance(value, str):
        return value
    if value is None or not np.isfinite(value):
        return ""
    return f"{100 * value:.1f}%" if percent else grouped(float(value))
