"""The blank workbook, and the template that is kept beside the program."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest

from heataudit.machine import WorkbookError, read_machine, write_blank
from heataudit.machine.guide import schema_markdown
from heataudit.machine.tables import TABLES
from heataudit.machine.tables.cycle import EXAMPLE_COMMANDS

TEMPLATE = Path(__file__).parents[2] / "templates" / "machine.xlsx"


@pytest.fixture
def blank(tmp_path: Path) -> Path:
    path = tmp_path / "blank.xlsx"
    write_blank(path)
    return path


def test_an_empty_workbook_asks_only_for_what_must_be_given(blank: Path) -> None:
    with pytest.raises(WorkbookError) as caught:
        read_machine(blank)
    assert str(caught.value).splitlines() == [
        "Machine!B2: Machine is blank; it must be given",
        "Reservoir!B2: Oil volume is blank; it must be given",
        "Pumps: there is no row; give at least one",
        "Duty cycle: there is no phase; give at least one row",
    ]
    assert caught.value.warnings == ()


def test_every_column_has_a_header_and_a_remark(blank: Path) -> None:
    book = openpyxl.load_workbook(blank)
    assert book.sheetnames == ["Guide", *(table.sheet for table in TABLES)]
    for table in TABLES:
        sheet = book[table.sheet]
        rows = [row[0] for row in sheet.iter_rows(2, max_col=1)]
        headers = rows if table.settings else list(sheet[1])[: len(table.columns)]
        titles = [column.header if table.settings else column.title for column in table.columns]
        assert [cell.value for cell in headers] == titles
        assert all(cell.comment is not None and len(cell.comment.text) > 3 for cell in headers)
        assert sheet.freeze_panes == "B2"


def test_words_have_drop_down_lists(blank: Path) -> None:
    sheet = openpyxl.load_workbook(blank)["Pumps"]
    lists = {str(item.sqref): item.formula1 for item in sheet.data_validations.dataValidation}
    assert lists == {
        "B2:B300": '"gear,vane,piston"',
        "C2:C300": '"fixed,pressure compensated,load sensing,speed controlled,set displacement"',
    }


def test_example_rows_are_remarks_that_would_be_right(blank: Path, tmp_path: Path) -> None:
    """Without the mark, and with what else a machine needs, the examples make a workbook."""
    book = openpyxl.load_workbook(blank)
    for table in TABLES:
        sheet = book[table.sheet]
        if not table.settings:
            assert str(sheet["A2"].value).startswith("# example: ")
            sheet["A2"] = table.example[table.columns[0].key]
    book["Machine"]["B2"], book["Reservoir"]["B2"] = "Example", 160
    duty = book["Duty cycle"]
    for column, (header, value) in enumerate(EXAMPLE_COMMANDS.items(), 6):
        assert str(duty.cell(2, column).value) == f"{header}: {value}"
        duty.cell(1, column).value, duty.cell(2, column).value = header, value
    path = tmp_path / "example.xlsx"
    book.save(path)
    machine = read_machine(path)
    assert machine.cycle.value("Lift cylinder", "load").tolist() == [40e3]


def test_an_existing_file_is_left_alone(blank: Path) -> None:
    before = blank.read_bytes()
    with pytest.raises(FileExistsError, match="exists already; choose another name"):
        write_blank(blank)
    assert blank.read_bytes() == before


def test_the_template_is_what_is_written_now(blank: Path) -> None:
    kept, now = openpyxl.load_workbook(TEMPLATE), openpyxl.load_workbook(blank)
    assert kept.sheetnames == now.sheetnames
    for title in now.sheetnames:
        rows = [[cell.value for cell in row] for row in now[title].iter_rows()]
        assert [[cell.value for cell in row] for row in kept[title].iter_rows()] == rows, "write templates/ again"


def test_the_markdown_lists_every_column() -> None:
    text = schema_markdown()
    for table in TABLES:
        section = text.split(f"### {table.sheet}\n")[1].split("\n### ")[0]
        for column in table.columns:
            assert f"| {column.header} |" in section
