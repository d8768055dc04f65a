"""Files as grids of raw cells that still know their row and column."""

from __future__ import annotations

import csv
import hashlib
import importlib
import re
from collections.abc import Hashable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.model import Problem, WorkbookError
from heataudit.machine.values import is_blank

SPREADSHEETS = (".xlsx", ".xlsm", ".xls", ".ods")
LOGS = (".csv", ".parquet")


@dataclass(frozen=True)
class Grid:
    """Cells below a header row.

    `headers` are the header texts by column position, 0 for A. `body` holds the rows that are neither blank nor
    remarks, its columns are positions; `rows` are their numbers in the sheet.
    """

    headers: dict[int, str]
    header_row: int
    body: pd.DataFrame
    rows: NDArray[np.int64]


def column_letters(position: int) -> str:
    """Letters of a column, 0 for A.

    >>> column_letters(0), column_letters(25), column_letters(26)
    ('A', 'Z', 'AA')
    """
    letters = ""
    position += 1
    while position:
        position, rest = divmod(position - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def checksum(*paths: Path) -> str:
    """SHA-256 of one file, or of several in order."""
    digest = hashlib.sha256()
    for path in paths:
        with path.open("rb") as file:
            for block in iter(lambda: file.read(1 << 20), b""):
                digest.update(block)
    return digest.hexdigest()


def _refuse(path: Path, text: str) -> WorkbookError:
    return WorkbookError([Problem(path.name, "", text)])


def read_workbook(path: Path) -> dict[str, pd.DataFrame]:
    """All sheets of a spreadsheet as raw cells, by title.

    Raises
    ------
    WorkbookError
        There is no such file, or it is no spreadsheet that can be read.
    """
    if path.suffix.lower() not in SPREADSHEETS:
        raise _refuse(path, f"the file is no machine workbook; it must end with {', '.join(SPREADSHEETS)}")
    if not path.is_file():
        raise _refuse(path, "there is no such file; check the name and the folder")
    try:
        return pd.read_excel(
            path, sheet_name=None, header=None, dtype=object, engine="calamine", keep_default_na=False, na_values=[""]
        )
    except Exception as error:  # the reader raises its own types, by format
        raise _refuse(
            path, f"the file cannot be read as a spreadsheet ({error}); open it, save it again, remove any password"
        ) from error


def table_grid(cells: pd.DataFrame) -> Grid:
    """Split a table sheet into its header row and its rows; blank rows and remarks are left out."""
    kept = _kept(cells)
    cells, rows = cells[kept], np.flatnonzero(kept) + 1
    if not len(cells):
        return Grid({}, 1, cells, rows)
    headers = {position: str(cell) for position, cell in enumerate(cells.iloc[0]) if not pd.isna(cell)}
    return Grid(headers, int(rows[0]), cells.iloc[1:].reset_index(drop=True), rows[1:])


def _kept(cells: pd.DataFrame) -> NDArray[np.bool_]:
    """Rows that are neither blank nor remarks."""
    blank = np.ones(len(cells), bool)
    for position in cells:
        blank &= is_blank(cells[position])
    if not cells.shape[1] or pd.api.types.is_numeric_dtype(cells[cells.columns[0]]):
        return ~blank
    codes, words = pd.factorize(cells[cells.columns[0]])
    remark = np.array([isinstance(word, str) and word.lstrip().startswith("#") for word in words], bool)
    return np.asarray(~blank & ~np.append(remark, False)[codes], bool)


def read_log(path: Path) -> Grid:
    """A duty cycle from CSV or Parquet.

    Raises
    ------
    WorkbookError
        There is no such file, it cannot be read, or it is Parquet and pyarrow is not installed.
    """
    if path.suffix.lower() not in LOGS:
        raise _refuse(path, f"the file is no cycle log; it must end with {' or '.join(LOGS)}")
    if not path.is_file():
        raise _refuse(path, "there is no such file; check the name and the folder")
    try:
        return _read_csv(path) if path.suffix.lower() == ".csv" else _read_parquet(path)
    except UnicodeDecodeError as error:
        raise _refuse(path, "the file is not written in UTF-8; export it as CSV UTF-8") from error
    except (ValueError, OSError) as error:
        raise _refuse(path, f"the file cannot be read ({error}); export it again") from error


def _read_csv(path: Path) -> Grid:
    """Comma or semicolon; the decimal sign is a comma where a semicolon separates."""
    headers: list[str] = []
    skipped = 0
    with path.open(encoding="utf-8-sig") as file:
        for line in file:
            skipped += 1
            if line.strip(" \t\r\n,;") and not line.lstrip().startswith("#"):
                separator = ";" if line.count(";") > line.count(",") else ","
                headers = next(csv.reader([line], delimiter=separator))
                break
    if not headers:
        return Grid({}, 1, pd.DataFrame(), np.array([], np.int64))
    body = pd.read_csv(
        path, sep=separator, decimal="," if separator == ";" else ".", encoding="utf-8-sig", skiprows=skipped,
        header=None, names=range(len(headers)), index_col=False, skip_blank_lines=False, keep_default_na=False,
        na_values=[""], low_memory=False,
    )  # fmt: skip
    return _log_grid({k: text for k, text in enumerate(headers) if text.strip()}, skipped, body)


def _read_parquet(path: Path) -> Grid:
    try:
        importlib.import_module("pyarrow")
    except ImportError as error:
        raise _refuse(
            path, "reading Parquet needs the package pyarrow; install it (pip install pyarrow) or export the log as CSV"
        ) from error
    body = pd.read_parquet(path, engine="pyarrow").reset_index(drop=True)
    headers = {k: str(name) for k, name in enumerate(body.columns)}
    names: list[Hashable] = list(range(body.shape[1]))
    return _log_grid(headers, 1, body.set_axis(names, axis=1))


def _log_grid(headers: dict[int, str], header_row: int, body: pd.DataFrame) -> Grid:
    kept = _kept(body)
    return Grid(headers, header_row, body[kept].reset_index(drop=True), np.flatnonzero(kept) + header_row + 1)


def split_header(header: str) -> tuple[str, str | None]:
    """Name and unit of a header; None where it has no unit.

    >>> split_header("Inside diameter [mm]"), split_header(" Size ")
    (('Inside diameter', 'mm'), ('Size', None))
    """
    found = re.fullmatch(r"\s*(.*?)\s*\[([^\[\]]*)\]\s*", header, re.DOTALL)
    return (found[1], found[2]) if found else (header.strip(), None)


def settings_rows(cells: pd.DataFrame) -> list[tuple[int, str, Any, str | None]]:
    """Rows of a settings sheet: row number, item, value, unit; its header row is left out."""
    found: list[tuple[int, str, Any, str | None]] = []
    for number, cell in zip(np.flatnonzero(_kept(cells)) + 1, cells[_kept(cells)].itertuples(index=False), strict=True):
        item, value, unit = (*cell, None, None)[:3]
        if found or str(item).strip().casefold() != "item":
            named = None if pd.isna(unit) or not str(unit).strip() else str(unit)
            found.append((int(number), "" if pd.isna(item) else str(item), value, named))
    return found
