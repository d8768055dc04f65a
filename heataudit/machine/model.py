"""What a machine is once its workbook has been read: tables in SI units and the duty cycle as arrays."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import IntEnum
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Problem:
    """Something in a workbook that must be mended, or a warning.

    >>> print(Problem("Lines", "D7", "Inside diameter is -12; it must be greater than 0 mm"))
    Lines!D7: Inside diameter is -12; it must be greater than 0 mm
    """

    sheet: str
    cell: str
    text: str

    def __str__(self) -> str:
        """Sheet, cell and text on one line."""
        place = f"{self.sheet}!{self.cell}" if self.cell else self.sheet
        return f"{place}: {self.text}"


class WorkbookError(Exception):
    """The workbook has errors; `problems` lists all of them, `warnings` what else was noticed."""

    def __init__(self, problems: Sequence[Problem], warnings: Sequence[Problem] = ()) -> None:
        """Problems and warnings in the order in which they are to be read."""
        self.problems = tuple(problems)
        self.warnings = tuple(warnings)
        super().__init__("\n".join(str(problem) for problem in self.problems))

    def __reduce__(self) -> tuple[type[WorkbookError], tuple[tuple[Problem, ...], tuple[Problem, ...]]]:
        """Travel between processes with the problems, not only their text."""
        return type(self), (self.problems, self.warnings)


class Move(IntEnum):
    """What an actuator is commanded to do."""

    HOLD = 0
    EXTEND = 1
    RETRACT = 2
    PRESS = 3
    FORWARD = 4
    REVERSE = 5
    ON = 6
    FLOAT = 7


def rows(table: pd.DataFrame) -> list[Any]:
    """Components of a table as named tuples."""
    return list(table.itertuples(index=False))


@dataclass(frozen=True)
class Cycle:
    """A duty cycle of N phases, or N samples of a log, as arrays of shape (N,).

    `phase` holds the names, `duration` [s] the length of one repeat, `repeats` [-] how often a phase runs back to back,
    `other_heat` [W] what else warms the oil. `moves` maps an actuator to the codes of `Move`; `values` maps a component
    and a quantity to its values, NaN where blank. Quantities: "load" [N or N·m], "load_pressure" [Pa], "inlet" [Pa],
    "outlet" [Pa], "speed" [m/s or rev/s], "travel" [m or rev], "opening" [-], "setting" [Pa], "displacement" [-].
    """

    phase: NDArray[np.object_]
    duration: Floats
    repeats: Floats
    other_heat: Floats
    moves: dict[str, NDArray[np.int8]]
    values: dict[tuple[str, str], Floats]

    def __len__(self) -> int:
        """Number of phases."""
        return len(self.duration)

    def take(self, rows: NDArray[np.intp]) -> Cycle:
        """Some of the phases, in any order, repeated or not."""
        return Cycle(
            self.phase[rows], self.duration[rows], self.repeats[rows], self.other_heat[rows],
            {name: codes[rows] for name, codes in self.moves.items()},
            {key: values[rows] for key, values in self.values.items()},
        )  # fmt: skip

    def value(self, component: str, quantity: str) -> Floats:
        """Values of one quantity of one component, shape (N,); NaN where the cycle says nothing."""
        given = self.values.get((component, quantity))
        return np.full(len(self), np.nan) if given is None else given


@dataclass(frozen=True)
class Machine:
    """A machine and its duty cycle, everything in SI units, all defaults filled in.

    The settings (`general`, `oil`, `reservoir`) map the item in snake case to its value, None where blank. The tables
    hold a component per row; columns are the headers in snake case, the component's name is in `name`; blank numbers
    are NaN, blank texts "". `defaults` lists each default that was used, `inputs` each cell that was typed.
    """

    source: Path
    checksum: str
    general: dict[str, Any]
    oil: dict[str, Any]
    reservoir: dict[str, Any]
    drives: pd.DataFrame
    pumps: pd.DataFrame
    lines: pd.DataFrame
    valves: pd.DataFrame
    sections: pd.DataFrame
    actuators: pd.DataFrame
    coolers: pd.DataFrame
    upgrades: pd.DataFrame
    tolerances: pd.DataFrame
    readings: pd.DataFrame
    cycle: Cycle
    defaults: pd.DataFrame
    inputs: pd.DataFrame
    warnings: tuple[Problem, ...]
