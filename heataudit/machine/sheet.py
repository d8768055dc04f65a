"""From raw cells to a sheet: columns found by their headers, numbers in SI units, every cell's address kept."""

from __future__ import annotations

import difflib
import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from functools import partial
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.grids import Grid, column_letters, settings_rows, split_header, table_grid
from heataudit.machine.model import Problem
from heataudit.machine.schema import Column, Table
from heataudit.machine.units import Unit, UnknownUnit
from heataudit.machine.values import as_typed, folded, is_blank, numbers, texts

SHOWN_AT_MOST = 10
"""Rows with the same mistake in one column that are listed one by one."""

Find = Callable[[str, str | None], Column | None]


@dataclass
class Sheet:
    """One sheet as it was read.

    `columns` are its columns by key, those of the schema whether they are there or not. `frame` holds SI values (NaN or
    "" where blank), `typed` says which cells hold something, `raw` holds them as typed. `units` are those typed, by
    key; of a settings sheet as of a table.
    """

    table: Table
    title: str
    columns: dict[str, Column]
    raw: pd.DataFrame
    frame: pd.DataFrame
    typed: dict[str, NDArray[np.bool_]]
    units: dict[str, Unit]
    rows: NDArray[np.int64]
    positions: dict[str, int]
    problems: list[Problem] = field(default_factory=list)
    warnings: list[Problem] = field(default_factory=list)

    def __len__(self) -> int:
        """Number of rows."""
        return len(self.rows)

    def cell(self, key: str, row: int) -> str:
        """Address of a cell; of the row's first cell where the sheet has no such column."""
        if self.table.settings:
            return f"B{self.positions[key]}" if key in self.positions else ""
        return f"{column_letters(self.positions.get(key, 0))}{self.rows[row]}"

    def is_typed(self, key: str) -> NDArray[np.bool_]:
        """Rows in which a column holds something."""
        return self.typed.get(key, np.zeros(len(self), bool))

    def shown(self, key: str, row: int) -> str:
        """A cell as it was typed, texts in quotes."""
        cell = self.raw[key].iloc[row]
        written = as_typed(cell)
        return f'"{written}"' if isinstance(cell, str) or self.columns[key].holds != "number" else written

    def complain(self, key: str, rows: Iterable[Any], text: str | Callable[[int], str], *, warn: bool = False) -> None:
        """Note a problem in some rows of a column; of many alike the first ones, and how many more there are.

        `text` follows the header: the same for all rows, or made for each.
        """
        rows = [int(row) for row in rows]
        into = self.warnings if warn else self.problems
        header = self.columns[key].header
        for row in rows[:SHOWN_AT_MOST]:
            says = text if isinstance(text, str) else text(row)
            into.append(Problem(self.title, self.cell(key, row), f"{header} {says}"))
        if len(rows) > SHOWN_AT_MOST:
            text_of_rest = f"{header}: {len(rows) - SHOWN_AT_MOST} more rows like this from here on"
            into.append(Problem(self.title, self.cell(key, rows[SHOWN_AT_MOST]), text_of_rest))


def nearest(text: str, known: Iterable[str]) -> str:
    """Half a sentence that names the nearest known name, or nothing."""
    names = {folded(name): name for name in known}
    close = difflib.get_close_matches(folded(text), names, n=1, cutoff=0.6)
    return f'; did you mean "{names[close[0]]}"?' if close else ""


def read_table(table: Table, title: str, cells: pd.DataFrame) -> Sheet:
    """A table sheet with the columns of its schema."""
    known = {folded(column.header): column for column in table.columns}
    headers = [column.header for column in table.columns]
    return read_grid(table, title, table_grid(cells), lambda name, unit: known.get(folded(name)), headers)


def empty_sheet(table: Table) -> Sheet:
    """A sheet that the workbook does not have."""
    return read_grid(table, table.sheet, Grid({}, 1, pd.DataFrame(), np.array([], np.int64)), lambda name, unit: None)


def read_grid(table: Table, title: str, grid: Grid, find: Find, known: Iterable[str] = ()) -> Sheet:
    """A table whose columns `find` gives by name and unit; an unknown name is held against those in `known`."""
    columns = {column.key: column for column in table.columns}
    sheet = Sheet(table, title, columns, pd.DataFrame(), pd.DataFrame(), {}, {}, grid.rows, {})
    raw: dict[str, pd.Series] = {}
    known = list(known)
    for position, header in grid.headers.items():
        name, unit_text = split_header(header)
        if not name:
            continue
        place = f"{column_letters(position)}{grid.header_row}"
        column = find(name, unit_text)
        if column is None:
            text = f'column "{name}" is not known and was not read{nearest(name, known)}'
            sheet.warnings.append(Problem(title, place, text))
        elif column.key in raw:
            sheet.problems.append(Problem(title, place, f"{column.header} is there twice; keep one of the two columns"))
        else:
            sheet.columns[column.key] = column
            sheet.positions[column.key] = position
            raw[column.key] = grid.body[position]
            _take_unit(sheet, column, unit_text, place)
    _warn_of_loose_cells(sheet, grid)
    sheet.raw = pd.DataFrame(raw, index=range(len(grid.rows)))
    _fill_frame(sheet)
    return sheet


def _warn_of_loose_cells(sheet: Sheet, grid: Grid) -> None:
    """Cells under no header are not read; say so."""
    for position in range(grid.body.shape[1]):
        if not grid.headers.get(position, "").strip():
            filled = np.flatnonzero(~is_blank(grid.body[position]))
            if len(filled):
                place = f"{column_letters(position)}{grid.rows[filled[0]]}"
                sheet.warnings.append(Problem(sheet.title, place, "the cell stands under no header and was not read"))


def read_settings(table: Table, title: str, cells: pd.DataFrame) -> Sheet:
    """A settings sheet: one row per item in the file, one row with all items in the frame."""
    known = {folded(column.header): column for column in table.columns}
    sheet = Sheet(table, title, dict(table.by_key), pd.DataFrame(), pd.DataFrame(), {}, {}, np.array([0]), {})
    raw: dict[str, list[Any]] = {}
    for number, item, value, unit_text in settings_rows(cells):
        column = known.get(folded(item))
        if column is None:
            text = f'item "{item}" is not known and was not read{nearest(item, [c.header for c in table.columns])}'
            sheet.warnings.append(Problem(title, f"A{number}", text))
        elif column.key in raw:
            text = f"{column.header} is there twice; keep one of the two rows"
            sheet.problems.append(Problem(title, f"A{number}", text))
        else:
            sheet.positions[column.key] = number
            raw[column.key] = [value]
            _take_unit(sheet, column, unit_text, f"C{number}")
    sheet.raw = pd.DataFrame(raw, index=[0], dtype=object)
    _fill_frame(sheet)
    return sheet


def _take_unit(sheet: Sheet, column: Column, text: str | None, place: str) -> None:
    """Note the unit of a column, the default one where the text names none of its dimension."""
    if not column.is_number:
        return
    sheet.units[column.key] = column.unit
    if column.bare:
        return
    try:
        sheet.units[column.key] = column.unit_of(text)
    except UnknownUnit as error:
        sheet.problems.append(Problem(sheet.title, place, f"{column.header}: {error}"))


def _fill_frame(sheet: Sheet) -> None:
    """Cells as SI numbers and texts, a column for each of the schema."""
    filled: dict[str, Any] = {}
    for key, column in sheet.columns.items():
        if key not in sheet.raw:
            filled[key] = np.full(len(sheet.rows), np.nan) if column.is_number else [""] * len(sheet.rows)
            continue
        cells = sheet.raw[key]
        sheet.typed[key] = ~is_blank(cells)
        if column.is_number:
            values, wrong = numbers(cells)
            filled[key] = sheet.units[key].to_si(values)
            sheet.complain(key, np.flatnonzero(wrong), partial(_not_a_number, sheet, key))
        else:
            filled[key] = _known_words(texts(cells), column)
    sheet.frame = pd.DataFrame(filled, index=range(len(sheet.rows)))
    for key, column in sheet.columns.items():
        if not column.is_number:
            sheet.frame[key] = sheet.frame[key].astype(object)


def _known_words(cells: NDArray[np.object_], column: Column) -> NDArray[np.object_]:
    """Words of the schema in its own spelling; what it does not know stays as typed."""
    if not column.words:
        return cells
    codes, typed = pd.factorize(cells)
    known = {folded(word): word for word in column.words}
    return np.array([known.get(folded(word), word) for word in typed], dtype=object)[codes]


def _not_a_number(sheet: Sheet, key: str, row: int) -> str:
    """What is wrong with a cell that should hold a number, and how to mend it."""
    text = as_typed(sheet.raw[key].iloc[row])
    unit_name = sheet.units[key].name
    advice = "it must be a number"
    if re.fullmatch(r"[+-]?\d+,\d+", text):
        advice = f"write it with a decimal point, {text.replace(',', '.')}"
    elif found := re.match(r"([+-]?\d+(?:[.,]\d+)?)\s*\D", text):
        where = "column C" if sheet.table.settings else "the header"
        advice = f"write the number alone, {found[1]}, and its unit in {where} (now {unit_name})"
    return f'is "{text}"; {advice}'
