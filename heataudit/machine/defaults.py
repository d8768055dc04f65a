"""What blank cells stand for, and the list of the defaults that were used."""

from __future__ import annotations

from collections.abc import Iterator
from operator import itemgetter
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.model import Problem
from heataudit.machine.schema import Column, Default, Tables
from heataudit.machine.sheet import Sheet
from heataudit.machine.values import as_typed

DEFAULTS_COLUMNS = ["sheet", "row", "column", "value", "reason", "estimate", "tolerance"]
INPUTS_COLUMNS = ["sheet", "row", "column", "value"]

Listed = list[tuple[Any, ...]]


def fill(sheet: Sheet, tables: Tables) -> Listed:
    """Fill blank cells in place, then note every cell that must be given and is still blank.

    Where a default is found from other cells and they are wrong, they have a problem of their own; only a column that
    says what else may be given in its place (`missing`) has one too.

    Returns
    -------
    The defaults that were used, as rows of `DEFAULTS_COLUMNS`.
    """
    listed: list[tuple[int, tuple[Any, ...]]] = []
    for column in sheet.table.columns:
        left_blank = np.zeros(len(sheet), bool)
        for default, rows in _defaults(sheet, column):
            if default.value is None or (callable(default.value) and not column.missing):
                left_blank[rows] = True
            if default.value is not None:
                values = _values(sheet, column, default, tables)
                sheet.frame.loc[rows, column.key] = values[rows]
            if default.listed:
                listed += zip(rows.tolist(), _entries(sheet, column, default, rows), strict=True)
        if column.must:
            _ask_for(sheet, column, ~left_blank)
    return [entry for _, entry in sorted(listed, key=itemgetter(0)) if entry]


def _applies(sheet: Sheet, column: Column) -> NDArray[np.bool_]:
    """Rows that use a column at all."""
    if not column.only_for:
        return np.ones(len(sheet), bool)
    return np.isin(sheet.frame[column.by].to_numpy(object), column.only_for)


def _defaults(sheet: Sheet, column: Column) -> Iterator[tuple[Default, NDArray[np.intp]]]:
    """Defaults of a column with the blank rows for which they stand."""
    if column.default is None:
        return
    blank = ~sheet.is_typed(column.key) & _applies(sheet, column)
    if isinstance(column.default, Default):
        choices = [(column.default, blank)]
    else:
        words = sheet.frame[column.by].to_numpy(object)
        choices = [(default, blank & (words == word)) for word, default in column.default.items()]
    for default, mask in choices:
        if mask.any():
            yield default, np.flatnonzero(mask)


def _values(sheet: Sheet, column: Column, default: Default, tables: Tables) -> NDArray[Any]:
    """One value per row, in SI units."""
    if callable(default.value):
        return default.value(sheet.frame, tables).to_numpy(float if column.is_number else object)
    value = column.unit.to_si(float(default.value)) if column.is_number else default.value  # type: ignore[arg-type]
    return np.full(len(sheet), value, dtype=float if column.is_number else object)


def _entries(sheet: Sheet, column: Column, default: Default, rows: NDArray[np.intp]) -> Listed:
    """A row each for the list of defaults; an empty one where no value could be found."""
    entries: Listed = []
    estimate = default.tolerance is not None
    tolerance = np.nan if default.tolerance is None else default.tolerance
    for row in rows:
        cells = sheet.frame.iloc[row]
        value = cells[column.key]
        if default.value is not None and not default.shown and (value == "" or value != value):
            entries.append(())
            continue
        shown = default.shown or display(column, value)
        reason = default.reason.format(**cells) if "{" in default.reason else default.reason
        entries.append((*place(sheet, column, row), shown, reason, estimate, tolerance))
    return entries


def place(sheet: Sheet, column: Column, row: int) -> tuple[str, str, str]:
    """Sheet, row and column of a cell as the report names them: an item has no column."""
    if sheet.table.settings:
        return sheet.table.sheet, column.header, ""
    first = sheet.table.columns[0].key
    return sheet.table.sheet, str(sheet.frame[first].iloc[row]), column.header


def display(column: Column, value: Any) -> str:
    """A cell's SI value as a person reads it, in the default unit."""
    if not column.is_number:
        return as_typed(value)
    shown = f"{column.unit.from_si(float(value)):.5g}"
    return shown if column.unit_name == "-" else f"{shown} {column.unit_name}"


def _ask_for(sheet: Sheet, column: Column, asked: NDArray[np.bool_]) -> None:
    """Note cells that must be given: of a column that is not there once, else one by one."""
    cells = sheet.frame[column.key]
    blank = (cells.isna() | (cells == "")).to_numpy(bool) & ~sheet.is_typed(column.key)
    rows = np.flatnonzero(blank & asked & _applies(sheet, column) & ~sheet.is_typed(column.instead))
    if not len(rows):
        return
    missing = column.missing or "it must be given"
    if sheet.table.settings:
        text = f'the item "{column.header}" is missing; {missing}'
        if column.key in sheet.positions:
            sheet.complain(column.key, rows, f"is blank; {missing}")
        else:
            sheet.problems.append(Problem(sheet.title, "", text))
    elif column.key in sheet.positions or column.default is not None or column.only_for:
        sheet.complain(column.key, rows, f"is blank; {missing}")
    else:
        sheet.problems.append(Problem(sheet.title, "", f'the column "{column.title}" is missing; {missing}'))


def inputs(sheet: Sheet) -> Listed:
    """Every typed cell with its unit, as rows of `INPUTS_COLUMNS`."""
    entries: Listed = []
    for key in sheet.typed:
        column = sheet.columns[key]
        unit_name = f" {sheet.units[key].name}" if column.is_number and sheet.units[key].name != "-" else ""
        for row in np.flatnonzero(sheet.is_typed(key)):
            if column.holds != "name":
                entries.append((*place(sheet, column, int(row)), as_typed(sheet.raw[key].iloc[row]) + unit_name))
    return entries


def listing(rows: Listed, columns: list[str]) -> pd.DataFrame:
    """Rows as a table."""
    return pd.DataFrame(rows, columns=columns)
