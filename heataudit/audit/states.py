"""The cycle solved at several oil temperatures."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

import numpy as np

from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.network.solve import solve, spread_phases
from heataudit.physics.arrays import Array

Solver = Callable[[Machine, Cycle, Array], Solution]

MOST_ROWS = 16384
"""Phases that are solved and held in memory at a time, temperatures counted."""


def network(machine: Machine, cycle: Cycle, oil_temperature: Array) -> Solution:
    """Solve every phase of a cycle; the one place where the audit meets the network.

    Parameters
    ----------
    machine
        The machine.
    cycle
        Its phases.
    oil_temperature
        Oil temperature in each phase [K], shape (phases,).
    """
    return solve(machine, cycle, oil_temperature)


def repeated(cycle: Cycle, times: int) -> Cycle:
    """A cycle several times over.

    Parameters
    ----------
    cycle
        The phases.
    times
        How often [-].
    """
    return cycle.take(np.tile(np.arange(len(cycle)), times))


def solve_at(solver: Solver, machine: Machine, cycle: Cycle, temperatures: Sequence[float]) -> Iterator[Solution]:
    """Solve a cycle at one temperature after the other, as many at a time as memory takes.

    Parameters
    ----------
    solver
        Solves a batch of phases.
    machine
        The machine.
    cycle
        Its phases.
    temperatures
        Oil temperatures [K].
    """
    phases = len(cycle)
    at_a_time = max(1, MOST_ROWS // phases)
    for first in range(0, len(temperatures), at_a_time):
        some = np.asarray(temperatures[first : first + at_a_time], float)
        batch = solver(machine, repeated(cycle, len(some)), np.repeat(some, phases))
        for k in range(len(some)):
            yield batch if len(some) == 1 else spread_phases(batch, np.arange(k * phases, (k + 1) * phases))
