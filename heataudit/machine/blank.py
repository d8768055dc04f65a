"""A blank machine workbook, made wholly from the schemas."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from heataudit.machine.grids import column_letters
from heataudit.machine.schema import Column, Default, Table
from heataudit.machine.tables import GUIDE, TABLES
from heataudit.machine.tables.cycle import COMMANDS, EXAMPLE_COMMANDS, Command
from heataudit.machine.units import one_of

if TYPE_CHECKING:
    from openpyxl import Workbook
    from openpyxl.worksheet.worksheet import Worksheet

ROWS = 300
"""Rows of a table that get drop-down lists."""

INK, MUST_FILL, USUAL_FILL, GREY = "1F3040", "F2C14E", "DCE6EC", "7A7A7A"

GUIDE_TEXT = (
    ("Machine workbook", ""),
    ("", "One hydraulic machine and its duty cycle. Fill in the sheets from left to right."),
    ("Must and may", "Yellow headers must be filled in. Other cells may stay blank; the report lists the defaults."),
    ("Units", "A header or a Unit cell names the unit; you may write another one there, such as [psi] or [ft]."),
    ("Remarks", "A row whose first cell starts with # is not read. The grey rows show how a row may be filled in."),
    ("Help", "Rest the pointer on a header to read what belongs below it. Cells with a list take only its words."),
    ("Names", "Every component has a name of its own; no name is used twice in the workbook."),
    ("Ports", "What is connected carries the same port label. Tank is the reservoir, any text a junction of your own."),
    ("", "A blank port cell is the component's own label: its name with .P, .T, .A or .B."),
    ("Actuators", "An actuator's ports join those of its section, unless lines or valves make a way between the two."),
    ("Duty cycle", "Each component adds columns: its name, then what is asked of it, as in the example row. They are:"),
)


def write_blank(path: str | Path) -> None:
    """Write an empty machine workbook with headers, units, drop-down lists and a remark on every column.

    Raises
    ------
    FileExistsError
        There is a file of this name; it is left as it is.
    """
    from openpyxl import Workbook

    path = Path(path)
    if path.exists():
        raise FileExistsError(f"{path} exists already; choose another name")
    book = Workbook()
    book.remove(book.worksheets[0])
    _write_guide(book)
    for table in TABLES:
        sheet = book.create_sheet(table.sheet)
        if table.settings:
            _write_settings(sheet, table)
        else:
            _write_table(sheet, table)
        _set_page(sheet)
    with path.open("xb") as file:
        book.save(file)


def _write_guide(book: Workbook) -> None:
    """The sheet that explains the others."""
    from openpyxl.styles import Alignment, Font

    sheet = book.create_sheet(GUIDE)
    for topic, text in GUIDE_TEXT:
        sheet.append([topic, text])
    sheet["A1"].font = Font(bold=True, size=16, color=INK)
    for row in range(2, sheet.max_row + 1):
        sheet.cell(row, 1).font = Font(bold=True, color=INK)
    for command in COMMANDS:
        name = f"<{command.table.capitalize()[:-1]}> {command.quantity}{_units_of(command)}"
        sheet.append(["", f"{name}: {command.help}"])
    sheet.append([])
    for table in TABLES:
        sheet.append([table.sheet, table.help])
        link = sheet.cell(sheet.max_row, 1)
        link.hyperlink = f"#'{table.sheet}'!A1"
        link.font = Font(bold=True, underline="single", color="1F5C99")
    sheet.column_dimensions["A"].width = 22
    sheet.column_dimensions["B"].width = 105
    for row in range(1, sheet.max_row + 1):
        sheet.cell(row, 2).alignment = Alignment(wrap_text=True, vertical="top")
        sheet.cell(row, 1).alignment = Alignment(vertical="top")
    sheet.sheet_view.showGridLines = False
    _set_page(sheet, pages=1)


def _units_of(command: Command) -> str:
    """The units that a column of the duty cycle may have, in brackets."""
    names = dict.fromkeys(name for measures in command.measures.values() for _, name in measures)
    return f" [{' | '.join(names)}]" if names else ""


def _write_table(sheet: Worksheet, table: Table) -> None:
    """A header row and a grey example."""
    sheet.append([column.title for column in table.columns])
    example: list[Any] = [table.example.get(column.key) for column in table.columns]
    example[0] = f"# example: {example[0] or ''}".rstrip(" :")
    for position, column in enumerate(table.columns):
        _dress_header(sheet.cell(1, position + 1), column, _is_must(column))
        _add_list(sheet, column, f"{column_letters(position)}2:{column_letters(position)}{ROWS}")
        longest = max(len(word) for word in (*column.title.split(), str(example[position] or "")))
        sheet.column_dimensions[column_letters(position)].width = max(longest + 3, 12)
    if table.key == "cycle":
        example += _example_commands(sheet, len(example))
    sheet.append(example)
    _grey(sheet, sheet.max_row)
    sheet.row_dimensions[1].height = 48
    sheet.freeze_panes = "B2"


def _example_commands(sheet: Worksheet, start: int) -> list[str]:
    """What an actuator adds to the duty cycle, header and value in one cell of the example row."""
    shown = [f"{header}: {value}" for header, value in EXAMPLE_COMMANDS.items()]
    for position, text in enumerate(shown, start):
        sheet.column_dimensions[column_letters(position)].width = len(text) + 3
    return shown


def _write_settings(sheet: Worksheet, table: Table) -> None:
    """A row for each item."""
    from openpyxl.styles import Alignment

    sheet.append(["Item", "Value", "Unit", "Note"])
    for position in range(1, 5):
        _dress_header(sheet.cell(1, position), None, must=False)
    for row, column in enumerate(table.columns, 2):
        unit_name = column.unit_name if column.is_number and not column.bare else None
        sheet.append([column.header, None, unit_name, column.help + _default_text(column)])
        _dress_header(sheet.cell(row, 1), column, _is_must(column))
        for position in (2, 3, 4):
            sheet.cell(row, position).alignment = Alignment(vertical="center")
        _add_list(sheet, column, f"B{row}")
    widths = (max(len(column.header) for column in table.columns) + 3, 22, 14, 100)
    for position, width in enumerate(widths):
        sheet.column_dimensions[column_letters(position)].width = width
    sheet.freeze_panes = "B2"


def _is_must(column: Column) -> bool:
    """Whether a column must be filled in for every row."""
    return column.must and not column.only_for and column.default is None


def remark(column: Column) -> str:
    """What belongs into a column: help, words, who needs it, default.

    >>> from heataudit.machine.tables import PUMPS
    >>> print(remark(PUMPS["setting"]))
    Highest pressure that the control allows. Only for pressure compensated, load sensing, speed controlled or set
    displacement. Must be filled in.
    """
    import textwrap

    parts = [column.help]
    if column.words and column.holds == "word":
        parts.append(f"One of {', '.join(column.words)}.")
    if column.only_for:
        parts.append(f"Only for {one_of(list(column.only_for))}.")
    if column.must and column.default is None:
        parts.append("Must be filled in.")
    return textwrap.fill(" ".join(parts) + _default_text(column), 120)


def _default_text(column: Column) -> str:
    """What a blank cell stands for, as a sentence."""
    text = default_of(column)
    return f" Blank: {text}." if text else ""


def default_of(column: Column) -> str:
    """What a blank cell stands for, in a few words; nothing where it stands for nothing."""
    if column.default is None:
        return ""
    if isinstance(column.default, Default):
        return _one_default(column, column.default)
    by_text: dict[str, list[str]] = {}
    for word, default in column.default.items():
        by_text.setdefault(_one_default(column, default), []).append(word)
    if len(by_text) == 1 and not column.must:
        return next(iter(by_text))
    return ", ".join(f"{text} ({', '.join(words)})" for text, words in by_text.items())


def _one_default(column: Column, default: Default) -> str:
    if default.shown:
        return default.shown
    if callable(default.value):
        return default.reason.partition(" {")[0]
    if isinstance(default.value, float) and column.unit_name != "-":
        return f"{default.value:g} {column.unit_name}"
    return f"{default.value:g}" if isinstance(default.value, float) else str(default.value)


def _dress_header(cell: Any, column: Column | None, must: bool) -> None:
    """A header's colour and remark."""
    from openpyxl.comments import Comment
    from openpyxl.styles import Alignment, Border, Font, PatternFill, Side

    cell.font = Font(bold=True, color=INK)
    cell.fill = PatternFill("solid", fgColor=MUST_FILL if must else USUAL_FILL)
    cell.alignment = Alignment(vertical="center", wrap_text=column is not None)
    cell.border = Border(bottom=Side("thin", color=INK))
    if column is not None:
        text = remark(column)
        cell.comment = Comment(text, "heataudit", width=340, height=30 + 22 * (len(text) // 50 + 1))


def _add_list(sheet: Worksheet, column: Column, cells: str) -> None:
    """A drop-down list for a column of words."""
    if not column.words or column.holds == "reference":
        return
    from openpyxl.worksheet.datavalidation import DataValidation

    validation = DataValidation("list", formula1=f'"{",".join(column.words)}"', allow_blank=True)
    validation.errorTitle, validation.error = column.header, f"Choose {one_of(list(column.words))}."
    sheet.add_data_validation(validation)
    validation.add(cells)


def _grey(sheet: Worksheet, row: int) -> None:
    from openpyxl.styles import Font

    for cell in sheet[row]:
        cell.font = Font(italic=True, color=GREY)


def _set_page(sheet: Worksheet, pages: int = 0) -> None:
    """Landscape, one page wide; as many pages long as it takes where `pages` is 0."""
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.paperSize = 9
    sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, pages
    sheet.sheet_properties.pageSetUpPr.fitToPage = True  # type: ignore[union-attr]
