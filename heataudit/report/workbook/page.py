"""Sheets of the report: cells that stay what they are, native tables, pages that print."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import pandas as pd
from openpyxl import Workbook
from openpyxl.cell import Cell
from openpyxl.drawing.image import Image
from openpyxl.drawing.spreadsheet_drawing import AnchorMarker, OneCellAnchor
from openpyxl.drawing.xdr import XDRPositiveSize2D
from openpyxl.formatting.rule import DataBarRule
from openpyxl.styles import Alignment, Border, Font, PatternFill, Side
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.table import Table, TableStyleInfo
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import BAND, INK, QUIET
from heataudit.report.charts.style import text_size, wrap
from heataudit.report.quantities import System, convert, grouped, number_format, unit_of
from heataudit.report.safe import printable, starts_formula

FONT = "Arial"
LINE = 13.5
"""Height of a line of text [pt]."""

ROW = 15.0
"""Height of a row of which nothing else is said [pt]."""

CHARACTER = 7 / 96
"""Width of a column's unit [in], with the padding left out."""

ARIAL = 0.88
"""Width of the report's font per that of the charts' (measured over the texts of a report)."""

WIDEST, NARROWEST = 46.0, 7.0
"""Column widths [characters] between which a table's columns are fitted."""

BAR, TABLE_STYLE = "A9BDCB", "TableStyleLight1"
A4 = "9"
EMU = 914400
"""Units of a drawing in an inch."""

PORTRAIT = 100.0
"""Width of a table [characters] up to which the paper stands upright."""



@dataclass
class Report:
    """What the sheets are written from and into.

    Parameters
    ----------
    book
        The workbook.
    audit
        The answers.
    system
        "SI" or "US".
    pictures
        Charts by name.
    places
        Name of a component or phase -> sheet and row where it is found, filled while tables are written.
    """

    book: Workbook
    audit: Audit
    system: System
    pictures: dict[str, Path]
    places: dict[str, tuple[str, int]] = field(default_factory=dict)

    def sheet(self, title: str, heading: str, note: str = "", *, landscape: bool = True) -> Worksheet:
        """A new sheet with a heading, set up to print as wide as a page.

        Parameters
        ----------
        title
            On its tab.
        heading
            In its first row.
        note
            Below it.
        landscape
            How the paper lies.
        """
        sheet = self.book.create_sheet(title)
        sheet.sheet_view.showGridLines = False
        sheet.sheet_format.defaultRowHeight, sheet.sheet_format.customHeight = ROW, True
        put(sheet, 1, 1, heading, bold=True, size=14)
        sheet.row_dimensions[1].height = 22
        if note:
            put(sheet, 2, 1, note, colour=QUIET)
        setup = sheet.page_setup
        setup.paperSize, setup.orientation = A4, "landscape" if landscape else "portrait"
        setup.fitToWidth, setup.fitToHeight = 1, 0
        sheet.sheet_properties.pageSetUpPr.fitToPage = True
        margins = sheet.page_margins
        margins.left = margins.right = 0.45
        margins.top, margins.bottom, margins.header, margins.footer = 0.5, 0.6, 0.25, 0.3
        machine = printable(self.audit.machine.general["machine"]).replace("&", "&&")[:100]
        sheet.oddFooter.left.text = f"{machine} - {title}"
        sheet.oddFooter.right.text = "Page &P of &N"
        return sheet


class Field(NamedTuple):
    """A column of a table: key in the frame, header without unit, unit where the key does not end with it.

    `bar` draws data bars, `percent` shows a fraction in percent.
    """

    key: str
    header: str
    unit: str | None = None
    bar: bool = False
    percent: bool = False


def colour_of(hexadecimal: str) -> str:
    """A colour as openpyxl writes it."""
    return hexadecimal.lstrip("#")


def put(
    sheet: Worksheet, row: int, column: int, value: Any, *, bold: bool = False, size: float = 10, colour: str = INK,
    wrapped: bool = False, across: str | None = None, top: bool = False, indent: int = 0,
) -> Cell:  # fmt: skip
    """Write a text or a number; a text is never a formula, a number that is none stays blank."""
    cell: Cell = sheet.cell(row, column)  # type: ignore[assignment]
    cell.font = Font(name=FONT, size=size, bold=bold, color=colour_of(colour))
    cell.alignment = Alignment(
        vertical="top" if wrapped or top else "center", wrap_text=wrapped, horizontal=across or ("left" if indent else None),
        indent=indent,
    )
    if isinstance(value, str):
        text = printable(value)[:32000]
        cell.value = text
        cell.data_type = "s"
        if starts_formula(text):
            cell.quotePrefix = True
    elif isinstance(value, (bool, np.bool_)):
        put(sheet, row, column, "yes" if value else "no", size=size, colour=colour)
    elif value is not None and np.isfinite(value):
        cell.value = float(value)
        cell.number_format = number_format(float(value))
    return cell


def put_formula(
    sheet: Worksheet, row: int, column: int, formula: str, number: str, *, bold: bool = False
) -> Cell:
    """Write a live formula with its number format."""
    cell = put(sheet, row, column, None, bold=bold)
    cell.value = formula
    cell.number_format = number
    return cell


def paragraph(sheet: Worksheet, row: int, text: str, columns: int, *, bold: bool = False, size: float = 10) -> int:
    """A text over several columns, in as many lines as it needs; the next row."""
    width = sum(width_of(sheet, column) for column in range(1, columns + 1))
    lines = lines_of(text, width - 1, size, bold)
    put(sheet, row, 1, text, bold=bold, size=size, wrapped=True)
    sheet.merge_cells(start_row=row, start_column=1, end_row=row, end_column=columns)
    sheet.row_dimensions[row].height = lines * LINE * size / 10 + 2
    return row + 1


def characters(text: str, bold: bool = False) -> float:
    """Width of a text of a table [characters]."""
    return text_size(printable(text), 10, bold)[0] * ARIAL / CHARACTER


def lines_of(text: str, width: float, size: float = 10, bold: bool = False) -> int:
    """Lines that a text takes in a width [characters]."""
    return wrap(text, width * CHARACTER / ARIAL, size, bold, lines=60).count("\n") + 1


def width_of(sheet: Worksheet, column: int) -> float:
    """Width of a column [characters]."""
    return float(sheet.column_dimensions[get_column_letter(column)].width)


def set_widths(sheet: Worksheet, widths: Sequence[float]) -> None:
    """Widths of the first columns [characters]."""
    for column, width in enumerate(widths, 1):
        sheet.column_dimensions[get_column_letter(column)].width = width


def write_table(
    report: Report, sheet: Worksheet, row: int, frame: pd.DataFrame, fields: Sequence[Field], *, name: str,
    freeze: bool = True, places: str = "",
) -> int:  # fmt: skip
    """A native table with a filter; its columns are fitted to what they hold.

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
    fields
        The columns.
    name
        Of the native table.
    freeze
        Whether the header stays in view and is repeated on every printed page.
    places
        Column whose cells findings may link to, "" for none.

    Returns
    -------
    The row after the table.
    """
    if not len(frame):
        put(sheet, row, 1, "None.", colour=QUIET)
        return row + 2
    last = row + len(frame)
    for column, wanted in enumerate(fields, 1):
        values, unit = _cells(report, frame[wanted.key], wanted)
        header = f"{wanted.header} [{unit}]" if unit else wanted.header
        _write_column(sheet, (row, column), header, values, wanted.percent)
        if wanted.bar:
            cells = f"{get_column_letter(column)}{row + 1}:{get_column_letter(column)}{last}"
            rule = DataBarRule(start_type="num", start_value=0, end_type="max", color=BAR)  # type: ignore[no-untyped-call]
            sheet.conditional_formatting.add(cells, rule)
    for offset, text in enumerate(frame[places] if places else ()):
        report.places.setdefault(str(text), (sheet.title, row + 1 + offset))
    native = Table(displayName=name, ref=f"A{row}:{get_column_letter(len(fields))}{last}")
    native.tableStyleInfo = TableStyleInfo(name=TABLE_STYLE, showRowStripes=True)
    sheet.add_table(native)
    if freeze:
        width = sum(width_of(sheet, column) for column in range(1, len(fields) + 1))
        sheet.page_setup.orientation = "portrait" if width <= PORTRAIT else "landscape"
        _fit_note(sheet, len(fields))
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
    if column.dtype == bool or not pd.api.types.is_numeric_dtype(column):
        return column.tolist(), unit
    values, unit = convert(column.to_numpy(float), unit, report.system)
    return values.tolist(), unit


def _write_column(sheet: Worksheet, place: tuple[int, int], header: str, values: list[Any], percent: bool) -> None:
    row, column = place
    words = any(isinstance(value, (str, bool, np.bool_)) for value in values)
    head = put(sheet, row, column, header, bold=True, wrapped=True, indent=int(column > 1 and words))
    head.fill = PatternFill("solid", fgColor=colour_of(BAND))
    head.border = Border(bottom=Side(style="medium", color=colour_of(INK)))
    whole = not words and all(value != value or float(value).is_integer() for value in values)
    shown = [str(value) if isinstance(value, str) else _shown(value, percent) for value in values]
    content = max((characters(text) for text in shown), default=0.0) + 1.5 + 1.5 * words
    longest_word = max(characters(word, bold=True) for word in header.split(" ")) + 2.5
    width = float(np.clip(max(content, longest_word), NARROWEST, WIDEST))
    letter = get_column_letter(column)
    width = max(width, width_of(sheet, column) if letter in sheet.column_dimensions else 0.0)
    sheet.column_dimensions[letter].width = width
    lines = lines_of(header, width - 1.5 - 1.5 * words, bold=True)
    sheet.row_dimensions[row].height = max(sheet.row_dimensions[row].height or 0.0, lines * LINE + 4)
    for offset, value in enumerate(values, 1):
        cell = put(
            sheet, row + offset, column, value, wrapped=words, across=None if words else "right", top=True,
            indent=int(words and column > 1),
        )  # fmt: skip
        if percent and not isinstance(value, str):
            cell.number_format = "0.0%" if 0 < abs(value) < 0.0995 else "0%"
        elif whole:
            cell.number_format = "#,##0"
        if words and content > WIDEST:
            lines = lines_of(str(value), width - 2.5)
            height = sheet.row_dimensions[row + offset].height or 0.0
            sheet.row_dimensions[row + offset].height = max(height, lines * LINE + 2)


def _shown(value: Any, percent: bool) -> str:
    if isinstance(value, (bool, np.bool_)):
        return "yes"
    if value is None or not np.isfinite(value):
        return ""
    return f"{100 * value:.1f}%" if percent else grouped(float(value))


def picture(report: Report, sheet: Worksheet, row: int, name: str, width: float, left: float = 0.0) -> int:
    """A chart as wide as told [in], some way [in] from the left; the row below it, the same where there is none."""
    path = report.pictures.get(name)
    if path is None:
        return row
    image = Image(str(path))
    height = width * image.height / image.width
    column = 1
    while left >= width_of(sheet, column) * CHARACTER:
        left -= width_of(sheet, column) * CHARACTER
        column += 1
    corner = AnchorMarker(col=column - 1, colOff=int(left * EMU), row=row - 1)
    size = XDRPositiveSize2D(int(width * EMU), int(height * EMU))
    image.anchor = OneCellAnchor(_from=corner, ext=size)
    sheet.add_image(image)
    used = 0.0
    while used < height * 72 + 6:
        used += sheet.row_dimensions[row].height or ROW
        row += 1
    return row
