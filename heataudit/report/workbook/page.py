"""Sheets of the report: cells that stay what they are, native tables, pages that print."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
from openpyxl import Workbook
from openpyxl.cell import Cell
from openpyxl.drawing.image import Image
from openpyxl.drawing.spreadsheet_drawing import AnchorMarker, OneCellAnchor
from openpyxl.drawing.xdr import XDRPositiveSize2D
from openpyxl.styles import Alignment, Font
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import INK, QUIET
from heataudit.report.charts.style import text_size, wrap
from heataudit.report.quantities import LIVE_FORMAT, System, number_format
from heataudit.report.safe import printable, starts_formula

FONT = "Arial"
LINE = 13.5
"""Height of a line of text [pt]."""

ROW = 15.0
"""Height of a row of which nothing else is said [pt]."""

CHARACTER = 7 / 96
"""Width of a column's unit [in], with the padding left out."""

ARIAL = {False: 0.88, True: 0.82}
"""Width of the report's font, plain and bold, per that of the charts' (measured over the texts of a report)."""

A4 = "9"
EMU = 914400
"""Units of a drawing in an inch."""


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
        put(sheet, 1, 1, heading, Look(bold=True, size=14))
        sheet.row_dimensions[1].height = 22
        if note:
            put(sheet, 2, 1, note, Look(colour=QUIET))
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


class Look(NamedTuple):
    """How a cell looks: font size [pt], colour, wrapping, alignment, indent [characters]."""

    bold: bool = False
    size: float = 10
    colour: str = INK
    wrapped: bool = False
    across: str | None = None
    top: bool = False
    indent: int = 0


PLAIN = Look()


def colour_of(hexadecimal: str) -> str:
    """A colour as openpyxl writes it."""
    return hexadecimal.lstrip("#")


def put(sheet: Worksheet, row: int, column: int, value: Any, look: Look = PLAIN) -> Cell:
    """Write a text or a number; a text is never a formula, a number that is none stays blank."""
    cell: Cell = sheet.cell(row, column)  # type: ignore[assignment]
    cell.font = Font(name=FONT, size=look.size, bold=look.bold, color=colour_of(look.colour))
    cell.alignment = Alignment(
        vertical="top" if look.wrapped or look.top else "center", wrap_text=look.wrapped, indent=look.indent,
        horizontal=look.across or ("left" if look.indent else None),
    )  # fmt: skip
    if isinstance(value, str):
        text = printable(value)[:32000]
        cell.value = text
        cell.data_type = "s"
        if starts_formula(text):
            cell.quotePrefix = True
    elif value is not None and np.isfinite(value):
        cell.value = float(value)
        cell.number_format = number_format(float(value))
    return cell


def put_formula(sheet: Worksheet, row: int, column: int, formula: str, look: Look = PLAIN) -> Cell:
    """Write a live formula; its number shows about three figures."""
    cell = put(sheet, row, column, None, look)
    cell.value = formula
    cell.number_format = LIVE_FORMAT
    return cell


def paragraph(sheet: Worksheet, row: int, text: str, columns: int, *, bold: bool = False, size: float = 10) -> int:
    """A text over several columns, in as many lines as it needs; the next row."""
    width = sum(width_of(sheet, column) for column in range(1, columns + 1))
    lines = lines_of(text, width - 1, size, bold)
    put(sheet, row, 1, text, Look(bold=bold, size=size, wrapped=True))
    sheet.merge_cells(start_row=row, start_column=1, end_row=row, end_column=columns)
    sheet.row_dimensions[row].height = lines * LINE * size / 10 + 2
    return row + 1


def characters(text: str, bold: bool = False) -> float:
    """Width of a text of a table [characters]."""
    return text_size(printable(text), 10, bold)[0] * ARIAL[bold] / CHARACTER


def lines_of(text: str, width: float, size: float = 10, bold: bool = False) -> int:
    """Lines that a text takes in a width [characters]."""
    return wrap(text, width * CHARACTER / ARIAL[bold], size, bold, lines=60).count("\n") + 1


def width_of(sheet: Worksheet, column: int) -> float:
    """Width of a column [characters]."""
    return float(sheet.column_dimensions[get_column_letter(column)].width)


def set_widths(sheet: Worksheet, widths: Sequence[float]) -> None:
    """Widths of the first columns [characters]."""
    for column, width in enumerate(widths, 1):
        sheet.column_dimensions[get_column_letter(column)].width = width


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
