"""Text of the user's own that must stay text wherever it is opened."""

from __future__ import annotations

import re
from typing import Any

FORMULA_STARTS = ("=", "+", "-", "@")


def starts_formula(text: str) -> bool:
    """Whether a spreadsheet would take a text for a formula.

    >>> starts_formula(" =1+1"), starts_formula("-8"), starts_formula("Pump 1")
    (True, True, False)
    """
    return text.lstrip().startswith(FORMULA_STARTS)


def unformula(cell: Any) -> Any:
    """A cell of a CSV file with an apostrophe before what would be a formula.

    >>> unformula("@SUM(A1)"), unformula("Ram"), unformula(3.5)
    ("'@SUM(A1)", 'Ram', 3.5)
    """
    return f"'{cell}" if isinstance(cell, str) and starts_formula(cell) else cell


def printable(text: str) -> str:
    r"""A text on one line without control characters, which neither workbooks nor charts can hold.

    >>> printable("Ram\n back\x07")
    'Ram back'
    """
    return " ".join(re.sub(r"[\x00-\x1f\x7f-\x9f\ud800-\udfff\ufffe\uffff]", " ", text).split())
