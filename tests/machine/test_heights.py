"""Rises round loops."""

from __future__ import annotations

from pathlib import Path

from heataudit.machine import read_machine
from tests.workbooks import PRESS, Sheets, changed, write

RISE = {("Lines", "G1"): "Rise [m]"}


def warnings(tmp_path: Path, sheets: Sheets) -> list[str]:
    return [str(warning) for warning in read_machine(write(tmp_path / "press.xlsx", sheets)).warnings]


def test_oil_that_comes_back_as_low_as_it_left(tmp_path: Path) -> None:
    assert warnings(tmp_path, changed(PRESS, {**RISE, ("Lines", "G2"): 1.2, ("Lines", "G3"): -1.2})) == []


def test_oil_that_would_rise_for_ever(tmp_path: Path) -> None:
    # exact: 1.2 m up and 0.7 m down leave 0.5 m
    assert warnings(tmp_path, changed(PRESS, {**RISE, ("Lines", "G2"): 1.2, ("Lines", "G3"): -0.7})) == [
        "Lines!G3: Rise closes a loop round which the rises add up to 0.5 m instead of 0; check the rises of Return "
        "and of the lines that lead the oil back"
    ]
