"""The schemas as Markdown, for people who read rather than open a workbook."""

from __future__ import annotations

from heataudit.machine.blank import default_of
from heataudit.machine.schema import Column, Table
from heataudit.machine.tables import TABLES
from heataudit.machine.tables.cycle import COMMANDS


def schema_markdown() -> str:
    """All sheets and their columns as Markdown tables: column, unit, default, what belongs there.

    >>> schema_markdown().splitlines()[6]
    '| Machine |  | (must) | Title of the report. |'
    """
    return "\n".join(_sheet(table) for table in TABLES)


def _sheet(table: Table) -> str:
    first = "Item" if table.settings else "Column"
    lines = [f"### {table.sheet}", "", table.help, "", f"| {first} | Unit | Default | |", "| --- | --- | --- | --- |"]
    lines += [_row(column) for column in table.columns]
    if table.key == "cycle":
        for command in COMMANDS:
            names = dict.fromkeys(name for measures in command.measures.values() for _, name in measures)
            lines.append(_cells(f"<{command.table[:-1]}> {command.quantity}", " or ".join(names), "", command.help))
    return "\n".join(lines) + "\n"


def _row(column: Column) -> str:
    unit_name = column.unit_name if column.is_number and column.unit_name != "-" else ""
    default = default_of(column) or ("(must)" if column.must else "")
    parts = [column.help]
    if column.holds == "word":
        parts.append(f"One of {', '.join(column.words)}.")
    if column.only_for:
        parts.append(f"Only for {', '.join(column.only_for)}.")
    return _cells(column.header, unit_name, default, " ".join(parts))


def _cells(*texts: str) -> str:
    escaped = (text.replace("|", "\\|").replace("<", "&lt;").replace(">", "&gt;") for text in texts)
    return f"| {' | '.join(escaped)} |"
