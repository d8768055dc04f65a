"""The shipped examples are what the data behind them says, and make sense."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest

from heataudit.machine import read_machine
from tests.example_machines import EXAMPLES, MACHINES, write_example


@pytest.mark.parametrize("name", MACHINES)
def test_an_example_is_what_its_data_says(name: str, tmp_path: Path) -> None:
    write_example(tmp_path / name, MACHINES[name])
    now, kept = openpyxl.load_workbook(tmp_path / name), openpyxl.load_workbook(EXAMPLES / name)
    assert now.sheetnames == kept.sheetnames
    for title in now.sheetnames:
        rows = [[cell.value for cell in row] for row in kept[title].iter_rows()]
        assert [[cell.value for cell in row] for row in now[title].iter_rows()] == rows, "write examples/ again"


@pytest.mark.parametrize("name", MACHINES)
def test_an_example_has_no_warning(name: str) -> None:
    assert read_machine(EXAMPLES / name).warnings == ()
