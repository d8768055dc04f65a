"""Cells as numbers and as texts; whole columns at a time."""

from __future__ import annotations

import math
import re
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.model import Floats

Objects = NDArray[np.object_]


def is_blank(column: pd.Series) -> NDArray[np.bool_]:
    """Whether cells hold nothing, or only blanks.

    >>> is_blank(pd.Series(["x", " ", None, 0], dtype=object)).tolist()
    [False, True, True, False]
    """
    blank = column.isna().to_numpy(bool, copy=True)
    if not pd.api.types.is_numeric_dtype(column):
        codes, words = pd.factorize(column)
        empty = np.array([isinstance(word, str) and not word.strip() for word in words], bool)
        blank |= np.append(empty, False)[codes]
    return blank


def numbers(column: pd.Series) -> tuple[Floats, NDArray[np.bool_]]:
    """Cells as numbers, NaN where blank, and which of them are neither blank nor a number.

    >>> values, wrong = numbers(pd.Series([1, "2.5", None, "two", True], dtype=object))
    >>> values.tolist(), wrong.tolist()
    ([1.0, 2.5, nan, nan, nan], [False, False, False, True, True])
    """
    if pd.api.types.infer_dtype(column, skipna=True) in ("integer", "floating", "mixed-integer-float", "empty"):
        values = pd.to_numeric(column).to_numpy(float, na_value=np.nan)
    else:
        codes, cells = pd.factorize(column.map(_keep_type))
        values = np.append(np.array([_number(cell) for _, cell in cells], float), np.nan)[codes]
    wrong = ~is_blank(column) & ~np.isfinite(values)
    return np.where(wrong, np.nan, values), wrong


def _keep_type(cell: Any) -> tuple[str, Any] | None:
    """The cell with its type, so that yes and 1 stay apart; None where it is blank."""
    return None if cell is None or cell is pd.NaT or cell != cell else (type(cell).__name__, cell)


def _number(cell: Any) -> float:
    """One cell as a number, NaN where it is none."""
    if isinstance(cell, str):
        text = cell.strip().replace("−", "-")
        return float(text) if re.fullmatch(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?", text) else math.nan
    is_number = isinstance(cell, (int, float, np.integer, np.floating)) and not isinstance(cell, (bool, np.bool_))
    return float(cell) if is_number else math.nan


def texts(column: pd.Series) -> Objects:
    """Cells as stripped texts, "" where blank.

    >>> texts(pd.Series([" P1 ", None, -8.0, True], dtype=object)).tolist()
    ['P1', '', '-8', 'yes']
    """
    codes, cells = pd.factorize(column.map(_keep_type) if column.dtype == object else column)
    plain = [cell[1] if isinstance(cell, tuple) else cell for cell in cells]
    written = [("yes" if cell else "no") if isinstance(cell, (bool, np.bool_)) else as_typed(cell) for cell in plain]
    return np.array([*written, ""], dtype=object)[codes]


def as_typed(cell: Any) -> str:
    """A cell as the person who typed it would write it.

    >>> as_typed(0.92), as_typed(25.0), as_typed(False), as_typed(" P  to A ")
    ('0.92', '25', 'FALSE', 'P to A')
    """
    if isinstance(cell, (bool, np.bool_)):
        return str(cell).upper()
    if isinstance(cell, (int, float, np.integer, np.floating)):
        return f"{float(cell):.10g}"
    return " ".join(str(cell).split())


def folded(text: str) -> str:
    """A name without regard to case and blanks, for comparing.

    >>> folded("  Inside  Diameter ")
    'inside diameter'
    """
    return " ".join(text.split()).casefold()
