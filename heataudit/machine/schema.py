"""What a sheet of the workbook may hold: columns with their units, bounds, words, defaults and remarks."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any, Literal

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.units import Unit, unit, units_of

Tables = Mapping[str, pd.DataFrame]
Computed = Callable[[pd.DataFrame, Tables], pd.Series]
Holds = Literal["number", "text", "word", "flag", "name", "port", "size", "reference"]


@dataclass(frozen=True)
class Default:
    """What a blank cell stands for.

    Attributes
    ----------
    value
        A number in the column's unit, a text, or a function of the table (SI units) and of the tables read before it
        that gives one value per row (SI units, NaN or "" where it cannot tell); None where the cell stays blank and
        the audit decides.
    reason
        Why, in the user's words; `{key}` stands for another cell of the row.
    tolerance
        Half-width [-] of the 95 % range, relative, where the default is an estimate.
    shown
        What the list of defaults shows where `value` is None.
    listed
        Whether the list of defaults shows it at all; a port's own label does not tell anybody anything.
    """

    value: float | str | bool | Computed | None
    reason: str
    tolerance: float | None = None
    shown: str = ""
    listed: bool = True


@dataclass(frozen=True, kw_only=True)
class Column:
    """A column of a table, or an item of a settings sheet.

    Bounds are in the default unit. `only_for` names the words of the column `by` for which a cell is used at all (none:
    for every row); a `must` is asked of those rows only. A default is one for all, or one for each word of `by`.
    `refers_to` names the tables whose components a reference may name. A `bare` number has no unit in its header.
    `missing` says what else may be given in the place of a `must`, `instead` is the key of a column that stands for it.
    """

    header: str
    help: str
    holds: Holds = "number"
    dimension: str = "number"
    unit_name: str = "-"
    bare: bool = False
    own_key: str = ""
    above: float | None = None
    at_least: float | None = None
    at_most: float | None = None
    whole: bool = False
    among: tuple[float, ...] = ()
    words: tuple[str, ...] = ()
    by: str = "kind"
    only_for: tuple[str, ...] = ()
    must: bool = False
    missing: str = ""
    instead: str = ""
    default: Default | Mapping[str, Default] | None = None
    refers_to: tuple[str, ...] = ()

    @cached_property
    def key(self) -> str:
        """Name of the column in the program: the header in snake case."""
        if self.own_key:
            return self.own_key
        key = re.sub(r"[^a-z0-9]+", "_", self.header.lower()).strip("_")
        return "from_" if key == "from" else key

    @property
    def is_number(self) -> bool:
        """Whether cells hold numbers."""
        return self.holds == "number"

    @cached_property
    def unit(self) -> Unit:
        """The default unit."""
        return units_of(self.dimension)[self.unit_name]

    @property
    def title(self) -> str:
        """The header as a blank workbook shows it.

        >>> Column(header="Length", help="", dimension="length", unit_name="m").title
        'Length [m]'
        """
        return f"{self.header} [{self.unit_name}]" if self.is_number and not self.bare else self.header

    def unit_of(self, text: str | None) -> Unit:
        """The unit that a header or a unit cell names; the default unit where it names none."""
        return self.unit if text is None else unit(text, self.dimension)

    def default_for(self, word: str) -> Default | None:
        """The default of a row whose column `by` holds a word."""
        return self.default.get(word) if isinstance(self.default, Mapping) else self.default

    def accepts(self, values: NDArray[Any]) -> NDArray[np.bool_]:
        """Which values (SI units, or words) are within the bounds, or among the words; blanks are."""
        if self.words:
            return np.asarray(np.isin(values, (*self.words, "")), np.bool_)
        blank = np.isnan(values)
        fits = np.ones(len(values), bool)
        to_si = self.unit.to_si
        if self.above is not None:
            fits &= values > to_si(self.above)
        if self.at_least is not None:
            fits &= values >= to_si(self.at_least)
        if self.at_most is not None:
            fits &= values <= to_si(self.at_most)
        if self.whole:
            fits &= values == np.round(values)
        if self.among:
            fits &= np.isin(values, [to_si(value) for value in self.among])
        return np.asarray(blank | fits, np.bool_)

    @property
    def is_bounded(self) -> bool:
        """Whether there is anything that `accepts` would refuse."""
        if self.holds == "reference":
            return False
        bounds = (self.above, self.at_least, self.at_most)
        return bool(self.words or self.whole or self.among) or any(bound is not None for bound in bounds)

    def allowed(self, typed_in: Unit) -> str:
        """What a number may be, in the unit in which it was typed.

        >>> bore = Column(header="Bore", help="", dimension="length", unit_name="mm", above=0.0)
        >>> bore.allowed(bore.unit)
        'greater than 0 mm'
        """

        def shown(bound: float) -> str:
            return f"{typed_in.from_si(self.unit.to_si(bound)):.6g}"

        name = "" if typed_in.name == "-" else f" {typed_in.name}"
        whole = "a whole number " if self.whole else ""
        if self.among:
            return f"one of {', '.join(shown(value) for value in self.among)}{name}"
        low = None
        if self.above is not None:
            low = f"greater than {shown(self.above)}"
        elif self.at_least is not None:
            low = f"at least {shown(self.at_least)}"
        high = None if self.at_most is None else f"at most {shown(self.at_most)}"
        return whole + " and ".join(part for part in (low, high) if part) + name


@dataclass(frozen=True, kw_only=True)
class Table:
    """A sheet: one header row and one row per component, or a settings sheet with one row per item.

    Attributes
    ----------
    sheet
        Name of the sheet.
    key
        Name of the table in the program.
    help
        What belongs there, in one sentence.
    columns
        Its columns in order, or the items of a settings sheet.
    settings
        Whether it is a settings sheet.
    must
        Whether at least one row is needed.
    components
        Whether the first column names components, whose names are unique over the workbook.
    example
        A row as it may be filled in: key -> value, for the grey example of the blank workbook.
    answered
        False where the sheet is read but this version does not answer it yet.
    """

    sheet: str
    key: str
    help: str
    columns: tuple[Column, ...]
    settings: bool = False
    must: bool = False
    components: bool = True
    example: Mapping[str, Any]
    answered: bool = True

    @cached_property
    def by_key(self) -> dict[str, Column]:
        """Columns by key."""
        return {column.key: column for column in self.columns}

    def __getitem__(self, key: str) -> Column:
        """Column by key."""
        return self.by_key[key]
