"""The duty cycle: from its sheet, or from a data logger's file, to arrays over the phases."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.machine.defaults import Listed, display
from heataudit.machine.grids import Grid, column_letters
from heataudit.machine.model import Cycle, Floats, Move, Problem
from heataudit.machine.schema import Column
from heataudit.machine.sheet import Sheet, read_grid
from heataudit.machine.tables.cycle import COMMANDS, CYCLE, Command, Measure
from heataudit.machine.units import is_unit
from heataudit.machine.validate import check_cells, check_shares
from heataudit.machine.values import folded

Sheets = Mapping[str, Sheet]

MOVES = {move.name.lower(): move for move in Move}


class Target(NamedTuple):
    """What a column of the duty cycle is about: a component and a quantity as in `Cycle.values`."""

    component: str
    quantity: str


@dataclass
class CycleSheet:
    """The duty cycle as it was read: its sheet, and what its columns are about, by key."""

    sheet: Sheet
    targets: dict[str, Target]

    def key(self, component: str, quantity: str) -> str | None:
        """Key of a column, None where the cycle does not have it."""
        wanted = Target(component, quantity)
        return next((key for key, target in self.targets.items() if target == wanted), None)

    def values(self, component: str, quantity: str) -> Floats:
        """Values of a column in SI units, NaN where there are none."""
        key = self.key(component, quantity)
        return np.full(len(self.sheet), np.nan) if key is None else self.sheet.frame[key].to_numpy(float)


class _Finder:
    """Finds the column of the schema that a header of the duty cycle means."""

    def __init__(self, sheets: Sheets) -> None:
        self.sheets = sheets
        self.own = {folded(column.header): column for column in CYCLE.columns}
        self.targets: dict[str, Target] = {}
        self.unused: dict[str, str] = {}
        self.commands: dict[str, tuple[Command, str, str]] = {}
        for command in COMMANDS:
            frame = sheets[command.table].frame
            for name, kind in zip(frame["name"], frame[command.by], strict=True):
                if name:
                    self.commands.setdefault(folded(f"{name} {command.quantity}"), (command, name, kind))

    @property
    def known(self) -> list[str]:
        """Headers that may stand in the duty cycle."""
        of_components = [f"{name} {c.quantity}" for c, name, kind in self.commands.values() if kind in c.measures]
        return [column.header for column in CYCLE.columns] + of_components

    def __call__(self, name: str, unit_text: str | None) -> Column | None:
        """The column that a header means, or None; columns of components that have no such quantity are `unused`."""
        if folded(name) not in self.commands:
            return self.own.get(folded(name))
        command, component, kind = self.commands[folded(name)]
        if kind not in command.measures:
            key = f"{component} {command.quantity}"
            by = self.sheets[command.table].columns[command.by].header
            self.unused[key] = f'has no meaning where {by} is "{kind}"; remove the column'
            return Column(header=name, help=command.help, holds="text", own_key=key)
        measure = _measure(command, kind, unit_text)
        loaded_by_pressure = command.quantity == "load" and measure[0] == "pressure"
        target = Target(component, "load_pressure" if loaded_by_pressure else command.quantity)
        column = replace(command.column(component, kind, measure), own_key=f"{component} {target.quantity}")
        self.targets[column.key] = target
        return column


def _measure(command: Command, kind: str, unit_text: str | None) -> Measure:
    """What a column measures by its unit; the usual measure where the unit names none of those possible."""
    measures = command.measures[kind]
    for measure in measures:
        if unit_text is not None and is_unit(unit_text, measure[0]):
            return measure
    return measures[0] if measures else ("number", "-")


def read_cycle(grid: Grid, title: str, sheets: Sheets) -> CycleSheet:
    """The duty cycle with the columns of the machine's components.

    Parameters
    ----------
    grid
        Cells of the sheet or of the log.
    title
        Name of the sheet, or of the log's file.
    sheets
        The machine's other sheets, by key.
    """
    finder = _Finder(sheets)
    sheet = read_grid(CYCLE, title, grid, finder, finder.known)
    for key, text in finder.unused.items():
        place = f"{column_letters(sheet.positions[key])}{grid.header_row}"
        sheet.problems.append(Problem(title, place, f"{sheet.columns[key].header} {text}"))
    if not len(sheet):
        sheet.problems.append(Problem(title, "", "there is no phase; give at least one row"))
    check_cells(sheet)
    check_shares(sheet, [key for key, target in finder.targets.items() if target.quantity == "opening"])
    _set_durations(sheet)
    return CycleSheet(sheet, finder.targets)


def _set_durations(sheet: Sheet) -> None:
    """Durations from the times of a log: a row lasts until the next, the last as long as the one before."""
    has_time, has_duration = "time" in sheet.positions, "duration" in sheet.positions
    if has_time and has_duration:
        both = sheet.is_typed("time") & sheet.is_typed("duration")
        sheet.complain("time", np.flatnonzero(both)[:1], "and Duration are both given; keep one column")
    elif not has_time and not has_duration:
        text = 'the column "Duration [s]" is missing; it must be given (in a log, "Time [s]" may stand in its place)'
        sheet.problems.append(Problem(sheet.title, "", text))
    key = "time" if has_time and not has_duration else "duration"
    if key in sheet.positions:
        sheet.complain(key, np.flatnonzero(~sheet.is_typed(key)), "is blank; it must be given")
    if key == "time" and len(sheet):
        steps = np.diff(sheet.frame["time"].to_numpy(float))
        sheet.complain("time", np.flatnonzero(steps <= 0) + 1, lambda row: (
            f"is {sheet.shown('time', row)}; it must be greater than in the row before, {sheet.shown('time', row - 1)}"
        ))  # fmt: skip
        if len(steps):
            sheet.frame["duration"] = np.append(steps, steps[-1])
        else:
            sheet.complain("time", [0], "is there for one row only; give Duration, or at least two rows")


def build_cycle(read: CycleSheet) -> tuple[Cycle, Listed]:
    """The arrays of a duty cycle without problems, and the defaults that were used."""
    frame = read.sheet.frame
    names = frame["phase"].to_numpy(object)
    numbered = np.arange(1, len(frame) + 1).astype(str).astype(object)
    moves, values = {}, {}
    for key, target in read.targets.items():
        if target.quantity == "move":
            moves[target.component] = _move_codes(frame[key])
        else:
            values[target] = frame[key].to_numpy(float)
    filled, listed = {}, []
    for key in ("repeats", "other_heat"):
        filled[key], entries = _filled(read.sheet, key)
        listed += entries
    cycle = Cycle(
        phase=np.where(names == "", numbered, names),
        duration=frame["duration"].to_numpy(float),
        moves=moves,
        values={(target.component, target.quantity): given for target, given in values.items()},
        **filled,
    )
    return cycle, listed


def _move_codes(cells: pd.Series) -> NDArray[np.int8]:
    """Words of a move column as codes; blank is hold."""
    codes, words = pd.factorize(cells.to_numpy(object))
    return np.array([MOVES.get(word, Move.HOLD) for word in words], np.int8)[codes]


def _filled(sheet: Sheet, key: str) -> tuple[Floats, Listed]:
    """A column with its constant default in the blank cells, and one entry for all of them."""
    column = CYCLE[key]
    default = column.default_for("")
    blank = ~sheet.is_typed(key)
    values = sheet.frame[key].to_numpy(float)
    if default is None or not blank.any():
        return values, []
    constant = column.unit.to_si(float(default.value))  # type: ignore[arg-type]
    rows = "every phase" if blank.all() else f"{int(blank.sum())} phases"
    entry = (CYCLE.sheet, rows, column.header, display(column, constant), default.reason, False, np.nan)
    return np.where(blank, constant, values), [entry]
