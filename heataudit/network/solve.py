"""The pipeline: a machine in many phases becomes flows, pressures, powers and heat."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np

from heataudit.machine import Cycle, Machine, Ports, connect
from heataudit.network.assemble import assemble
from heataudit.network.elements import Integers
from heataudit.network.extract import extract
from heataudit.network.linear import Array
from heataudit.network.openings import Openings
from heataudit.network.plant import Plant
from heataudit.network.solution import Solution

CHUNK = 8192
"""Phases that are solved in one batch."""


def solve(machine: Machine, cycle: Cycle, oil_temperature: Array) -> Solution:
    """Solve every phase of a cycle.

    Phases that ask the same are solved once.

    Parameters
    ----------
    machine
        What was read from the workbook.
    cycle
        The phases, N of them; any cycle with the machine's components.
    oil_temperature
        Oil temperature [K] in each phase, shape (N,).

    Returns
    -------
    Solution
        Phases that the solver does not bring to its residual are marked in `converged`.
    """
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    first, again = _operating_points(cycle, oil_temperature)
    parts = [
        _solve_batch(machine, cycle, ports, oil_temperature, first[start : start + CHUNK])
        for start in range(0, len(first), CHUNK)
    ]
    return spread_phases(_without_idle_voids(join(parts)), again)


def _solve_batch(machine: Machine, cycle: Cycle, ports: Ports, oil_temperature: Array, rows: Integers) -> Solution:
    """Assemble, solve, extract."""
    plant = Plant(machine, cycle.take(rows), ports, oil_temperature[rows])
    network = assemble(plant)
    settled = Openings(network).solve()
    return extract(network, settled)


def _operating_points(cycle: Cycle, oil_temperature: Array) -> tuple[Integers, Integers]:
    """Numbers of the phases that differ, and for every phase the place of its like among them."""
    asked = {key: values for key, values in cycle.values.items() if key[1] != "travel"}
    travels = [values / cycle.duration for key, values in cycle.values.items() if key[1] == "travel"]
    columns = [oil_temperature, *asked.values(), *travels, *cycle.moves.values()]
    table = np.nan_to_num(np.column_stack([np.asarray(c, float) for c in columns]), nan=-1e300)
    _, first, again = np.unique(table, axis=0, return_index=True, return_inverse=True)
    order = np.argsort(first)
    place = np.empty_like(order)
    place[order] = np.arange(len(order))
    return first[order], place[again.reshape(-1)]


def _without_idle_voids(solution: Solution) -> Solution:
    """Void sources are named only where one is used."""
    components = solution.components
    kept = [c for c, kind in enumerate(components.kind) if kind != "void" or components.flow[c].any()]
    arrays = ("flow", "drop", "heat", "return_heat", "lifting")
    components = replace(
        components,
        name=tuple(components.name[c] for c in kept),
        kind=tuple(components.kind[c] for c in kept),
        **{name: getattr(components, name)[kept] for name in arrays},
    )
    return replace(solution, components=components)


def join(parts: list[Solution]) -> Solution:
    """Solutions of the same machine, one batch behind the other."""
    if len(parts) == 1:
        return parts[0]

    def joined(values: list[object]) -> object:
        if isinstance(values[0], np.ndarray):
            return np.concatenate(values, axis=-1)  # type: ignore[arg-type]
        if hasattr(values[0], "__dataclass_fields__") and not isinstance(values[0], Ports):
            names = [f.name for f in fields(values[0])]  # type: ignore[arg-type]
            return replace(values[0], **{n: joined([getattr(v, n) for v in values]) for n in names})  # type: ignore[type-var]
        return values[0]

    return joined(list(parts))  # type: ignore[return-value]


def spread_phases(solution: Solution, rows: Integers) -> Solution:
    """The phases of a solution in another order, repeated or left out."""

    def taken(value: object) -> object:
        if isinstance(value, np.ndarray):
            return np.take(value, rows, axis=-1)
        if hasattr(value, "__dataclass_fields__") and not isinstance(value, Ports):
            return replace(value, **{f.name: taken(getattr(value, f.name)) for f in fields(value)})  # type: ignore[type-var, arg-type]
        return value

    return taken(solution)  # type: ignore[return-value]
