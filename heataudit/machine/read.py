"""From a machine workbook to a `Machine`: read, validate, fill defaults, cross-check."""

from __future__ import annotations

import re
from collections.abc import Iterable
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from heataudit.machine.contradictions import check_contradictions
from heataudit.machine.cycle import CycleSheet, build_cycle, read_cycle
from heataudit.machine.cycle_checks import check_cycle, shut_throttles
from heataudit.machine.defaults import DEFAULTS_COLUMNS, INPUTS_COLUMNS, fill, inputs, listing
from heataudit.machine.grids import checksum, read_log, read_workbook, table_grid
from heataudit.machine.heights import check_rises
from heataudit.machine.model import Machine, Problem, WorkbookError
from heataudit.machine.names import check_names, resolve_references
from heataudit.machine.ports import connect
from heataudit.machine.routes import check_routes
from heataudit.machine.sheet import Sheet, empty_sheet, nearest, read_settings, read_table
from heataudit.machine.tables import BY_KEY, CYCLE, GUIDE, TABLES
from heataudit.machine.validate import check_cells
from heataudit.machine.values import folded

FILLING_ORDER = (
    "drives", "pumps", "lines", "valves", "sections", "actuators", "coolers", "upgrades", "tolerances", "readings",
    "general", "oil", "reservoir",
)  # fmt: skip
"""Tables in an order in which each finds the tables that its defaults look at."""


def read_machine(path: str | Path, cycle: str | Path | None = None) -> Machine:
    """Read a machine workbook.

    Parameters
    ----------
    path
        The workbook (.xlsx, .xlsm, .xls or .ods).
    cycle
        A duty cycle as CSV or Parquet that replaces the sheet.

    Returns
    -------
    The machine in SI units, its defaults filled in.

    Raises
    ------
    WorkbookError
        With every problem that was found.
    """
    path, log = Path(path), None if cycle is None else Path(cycle)
    cells = read_workbook(path)
    titles, warnings = _titles(cells)
    sheets = {key: _read_sheet(key, cells[titles[key]] if key in titles else None) for key in FILLING_ORDER}
    listed = _complete(sheets)
    if log is not None:
        read = read_cycle(read_log(log), log.name, sheets)
    else:
        read = _cycle_of_workbook(cells.get(titles.get("cycle", "")), sheets)
    _cross_check(sheets, read)
    in_order = [sheets[table.key] for table in TABLES if table.key in sheets]
    problems = [problem for sheet in [*in_order, read.sheet] for problem in sheet.problems]
    warnings += [warning for sheet in [*in_order, read.sheet] for warning in sheet.warnings]
    if problems:
        raise WorkbookError(_in_order(problems), warnings)
    built, of_cycle = build_cycle(read)
    contents = {key: _settings(sheet) if sheet.table.settings else _frame(sheet) for key, sheet in sheets.items()}
    return Machine(
        source=path,
        checksum=checksum(path) if log is None else checksum(path, log),
        **contents,
        cycle=built,
        defaults=listing([row for sheet in in_order for row in listed[sheet.table.key]] + of_cycle, DEFAULTS_COLUMNS),
        inputs=listing([row for sheet in in_order for row in inputs(sheet)], INPUTS_COLUMNS),
        warnings=tuple(warnings),
    )


def _cycle_of_workbook(cells: pd.DataFrame | None, sheets: dict[str, Sheet]) -> CycleSheet:
    """The duty cycle on its sheet; one with a problem where there is none."""
    if cells is not None:
        return read_cycle(table_grid(cells), CYCLE.sheet, sheets)
    missing = empty_sheet(CYCLE)
    text = "the sheet is missing; add it, or give a log with --cycle"
    missing.problems.append(Problem(CYCLE.sheet, "", text))
    return CycleSheet(missing, {})


def _titles(cells: dict[str, pd.DataFrame]) -> tuple[dict[str, str], list[Problem]]:
    """Titles of the sheets in the file by table, and warnings about those that are not known or not answered."""
    known = {folded(table.sheet): table for table in TABLES}
    titles: dict[str, str] = {}
    warnings = []
    for title, sheet in cells.items():
        table = known.get(folded(title))
        if table is None:
            if folded(title) != folded(GUIDE):
                close = nearest(title, [table.sheet for table in TABLES])
                warnings.append(Problem(title, "", f"the sheet is not known and was not read{close}"))
            continue
        titles[table.key] = title
        if not table.answered and len(table_grid(sheet).rows):
            warnings.append(Problem(table.sheet, "", "the sheet was read, but this version does not answer it yet"))
    return titles, warnings


def _read_sheet(key: str, cells: pd.DataFrame | None) -> Sheet:
    """One sheet with its cells checked one by one; an empty one where the workbook has none."""
    table = BY_KEY[key]
    if table.settings:
        sheet = read_settings(table, table.sheet, pd.DataFrame() if cells is None else cells)
    elif cells is None:
        sheet = empty_sheet(table)
    else:
        sheet = read_table(table, table.sheet, cells)
    check_cells(sheet)
    if table.must and not len(sheet):
        missing = "the sheet is missing; add it" if cells is None else "there is no row; give at least one"
        sheet.problems.append(Problem(table.sheet, "", missing))
    return sheet


def _complete(sheets: dict[str, Sheet]) -> dict[str, list[tuple[Any, ...]]]:
    """Resolve references and fill defaults; the defaults used, by table."""
    resolve_references(sheets)
    listed: dict[str, list[tuple[Any, ...]]] = {}
    tables: dict[str, pd.DataFrame] = {}
    for key, sheet in sheets.items():
        listed[key] = fill(sheet, tables)
        tables[key] = sheet.frame
    return listed


def _cross_check(sheets: dict[str, Sheet], read: CycleSheet) -> None:
    """Everything that takes more than one cell to see."""
    check_names(sheets)
    check_contradictions(sheets)
    ports = connect(*(sheets[key].frame for key in ("pumps", "lines", "valves", "sections", "actuators")))
    check_cycle(read, sheets, ports)
    check_routes(sheets, ports, shut_throttles(read))
    check_rises(sheets, ports)


def _in_order(problems: Iterable[Problem]) -> list[Problem]:
    """Problems in the order of sheets, rows and columns."""
    order = [table.sheet for table in TABLES]

    def place(problem: Problem) -> tuple[int, int, int, str]:
        letters, digits = re.fullmatch(r"([A-Z]*)(\d*)", problem.cell).groups()  # type: ignore[union-attr]
        sheet = order.index(problem.sheet) if problem.sheet in order else len(order)
        return sheet, int(digits or 0), len(letters), letters

    return sorted(dict.fromkeys(problems), key=place)


def _frame(sheet: Sheet) -> Any:
    """The rows of a table; yes and no are True and False."""
    flags = [key for key, column in sheet.columns.items() if column.holds == "flag"]
    return sheet.frame.assign(**{key: sheet.frame[key] == "yes" for key in flags})


def _settings(sheet: Sheet) -> Any:
    """The items of a settings sheet; blank numbers are None, yes and no are True and False."""
    items: dict[str, Any] = {}
    for key, column in sheet.columns.items():
        value = sheet.frame[key].iloc[0]
        if column.is_number:
            items[key] = None if np.isnan(value) else float(value)
        elif column.holds == "flag":
            items[key] = value == "yes"
        else:
            items[key] = value
    return items
