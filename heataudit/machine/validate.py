"""Cells held against the bounds and words of their schema; all failures at once."""

from __future__ import annotations

from collections.abc import Mapping
from functools import partial

import numpy as np
import pandas as pd

from heataudit.machine.schema import Column
from heataudit.machine.sheet import Sheet, nearest
from heataudit.machine.units import one_of


def check_cells(sheet: Sheet) -> None:
    """Note every typed cell outside its bounds, every unknown word, and those that are not used."""
    failing = _failures(sheet)
    for key, rows in failing.items():
        column = sheet.columns[key]
        if column.words:
            sheet.complain(key, rows, partial(_unknown_word, sheet, column))
        else:
            sheet.complain(key, rows, partial(_out_of_bounds, sheet, column))
    for key, column in sheet.columns.items():
        typed = sheet.is_typed(key)
        if column.only_for:
            words = sheet.frame[column.by].to_numpy(object)
            idle = typed & ~np.isin(words, column.only_for) & np.isin(words, sheet.columns[column.by].words)
            sheet.complain(key, np.flatnonzero(idle), partial(_not_used, sheet, column), warn=True)


def _accepted(column: Column, cells: pd.Series) -> pd.Series:
    return pd.Series(column.accepts(cells.to_numpy()), index=cells.index)


def _failures(sheet: Sheet) -> Mapping[str, list[int]]:
    """Rows that fail, by column, found in one lazy validation."""
    import pandera.pandas as pa

    checks = {
        key: pa.Column(None, pa.Check(partial(_accepted, column)), nullable=True)
        for key, column in sheet.columns.items()
        if column.is_bounded and key in sheet.raw
    }
    failing: dict[str, list[int]] = {}
    try:
        pa.DataFrameSchema(checks).validate(sheet.frame, lazy=True)
    except pa.errors.SchemaErrors as errors:
        cases = errors.failure_cases
        for key in checks:
            rows = cases.loc[cases["column"] == key, "index"]
            if len(rows):
                failing[key] = sorted(int(row) for row in rows)
    return failing


def _out_of_bounds(sheet: Sheet, column: Column, row: int) -> str:
    """The value and what is allowed, in the unit in which it was typed."""
    typed_in = sheet.units[column.key]
    text = f"is {sheet.shown(column.key, row)}; it must be {column.allowed(typed_in)}"
    share = typed_in.from_si(float(sheet.frame[column.key].iloc[row]))
    if column.dimension == "share" and typed_in.name == "%" and 0 < share <= 1:
        text += f"; did you mean {share * 100:g} %?"
    return text


def _unknown_word(sheet: Sheet, column: Column, row: int) -> str:
    typed = sheet.frame[column.key].iloc[row]
    advice = nearest(typed, column.words)
    return f'is "{typed}"; it must be {one_of(list(column.words), chr(34))}{advice}'


def _not_used(sheet: Sheet, column: Column, row: int) -> str:
    by = sheet.columns[column.by]
    return f'is given, but is not used where {by.header} is "{sheet.frame[by.key].iloc[row]}"'


def check_shares(sheet: Sheet, keys: list[str]) -> None:
    """Note columns of percentages that hold fractions throughout, as a logger or a cell format may give them."""
    for key in keys:
        values = sheet.frame[key].to_numpy(float)
        given = values[~np.isnan(values)]
        if sheet.units[key].name == "%" and len(given) and 0 < given.max() <= 0.01:
            row = int(np.nanargmax(values))
            text = f"never exceeds {given.max() * 100:g} %; write 50 for half, or [-] in the header"
            sheet.complain(key, [row], text)
