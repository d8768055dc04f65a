"""The schemas hold together: keys, defaults within bounds, words that are known."""

from __future__ import annotations

import pytest

from heataudit.machine.schema import Column, Default, Table
from heataudit.machine.tables import BY_KEY, TABLES

EVERY_COLUMN = [(table, column) for table in TABLES for column in table.columns]
IDS = [f"{table.sheet}-{column.header}" for table, column in EVERY_COLUMN]


def test_keys_and_sheets_are_unique() -> None:
    assert len({table.sheet for table in TABLES}) == len({table.key for table in TABLES}) == 14
    for table in TABLES:
        assert len(table.by_key) == len(table.columns)


@pytest.mark.parametrize(("table", "column"), EVERY_COLUMN, ids=IDS)
def test_a_column_holds_together(table: Table, column: Column) -> None:
    assert column.help.endswith(".")
    assert not column.is_number or column.unit.dimension == column.dimension
    if column.only_for or not isinstance(column.default, (Default, type(None))):
        words = set(table[column.by].words)
        assert set(column.only_for) <= words
        if column.default is not None and not isinstance(column.default, Default):
            assert set(column.default) <= words
    assert all(of in BY_KEY for of in column.refers_to)


@pytest.mark.parametrize(("table", "column"), EVERY_COLUMN, ids=IDS)
def test_constant_defaults_are_allowed_values(table: Table, column: Column) -> None:
    defaults = [column.default] if isinstance(column.default, Default) else list((column.default or {}).values())
    for default in defaults:
        if isinstance(default.value, float):
            import numpy as np

            assert column.accepts(np.array([column.unit.to_si(default.value)])).all()
        if column.words and isinstance(default.value, str):
            assert default.value in column.words


def test_an_example_names_known_columns() -> None:
    for table in TABLES:
        assert set(table.example) <= set(table.by_key)
