"""Assemble the full network of a machine in a batch of phases."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from heataudit.network.branches import Branch, Branches, Injection, MovePath, stack
from heataudit.network.kinds import lines, pumps, sections, valves, voids
from heataudit.network.kinds.actuators import Actuator
from heataudit.network.kinds.sections import Banks
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.topology import reached
from heataudit.network.unknowns import Unknown

SOME_FLOW = 1e-3 / 60
"""Flow [m³/s] to scale a phase by in which no pump runs: 1 L/min."""


@dataclass(frozen=True)
class Network:
    """A machine in a batch of phases, before anything is solved."""

    plant: Plant
    branches: Branches
    actuators: tuple[Actuator, ...]
    banks: Banks
    paths: tuple[MovePath, ...]
    unknowns: tuple[Unknown, ...]
    highest_setting: Array


def assemble(plant: Plant) -> Network:
    """Make the branches and unknowns of every component of a machine."""
    working = _working_nodes(plant)
    actuators = tuple(Actuator(row, plant) for row in plant.rows_of("actuators"))
    banks = sections.banks(plant, actuators)
    items: list[Branch] = []
    injections: list[Injection] = []
    for pump in plant.rows_of("pumps"):
        more, feeds = pumps.make(pump, plant)
        items += more
        injections += feeds
    items += [lines.make(line, plant) for line in plant.rows_of("lines")]
    for valve in plant.rows_of("valves"):
        items += [_maybe_lazy(branch, valve.kind, working) for branch in valves.make(valve, plant)]
    items += banks.branches()
    for actuator in actuators:
        items += actuator.branches()
    items += voids.make(plant)
    branches = stack(items, injections, plant.node_count, (plant.viscosity, plant.density), _flow_scale(plant))
    number = {(branch.component, branch.role): k for k, branch in enumerate(items)}
    unknowns = [
        *pumps.unknowns(plant, banks.sections, number), *banks.unknowns(number),
        *valves.unknowns(plant, banks.sections, number),
    ]  # fmt: skip
    paths = tuple(_paths(number, actuators))
    return Network(plant, branches, actuators, banks, paths, tuple(unknowns), _highest_setting(plant))


def _paths(number: dict[tuple[str, str], int], actuators: tuple[Actuator, ...]) -> Iterator[MovePath]:
    for a, actuator in enumerate(actuators):
        section = actuator.row.section
        for direction, feed, back in (("forward", "P-A", "B-T"), ("backward", "P-B", "A-T")):
            if (actuator.name, direction) in number:
                yield MovePath(
                    a, number[(actuator.name, direction)], number.get((section, feed), -1),
                    number.get((section, back), -1),
                )  # fmt: skip


def _flow_scale(plant: Plant) -> Array:
    """Flow [m³/s] of all pumps in each phase, shape (phases,)."""
    total = np.zeros(plant.phases)
    for pump in plant.rows_of("pumps"):
        total += pumps.full_flow(pump, plant)
    return np.where(total > 0, total, SOME_FLOW)


def _highest_setting(plant: Plant) -> Array:
    """Highest pressure [Pa] that a relief valve or a pump allows, shape (phases,)."""
    highest = np.full(plant.phases, 1e5)
    for pump in plant.rows_of("pumps"):
        highest = np.fmax(highest, pumps.setting(pump, plant))
    for valve in plant.rows_of("valves"):
        if valve.kind == "relief":
            highest = np.fmax(highest, plant.given(valve.name, "setting", valve.opening_pressure))
    return highest


def _working_nodes(plant: Plant) -> dict[int, int]:
    """Nodes behind the working ports of sections, each with the number of the area that open ways join it to.

    Areas that contain the tank, a pump or the feed or return of a section do not count.
    """
    around: dict[int, set[int]] = defaultdict(set)
    for component in (*plant.rows_of("lines"), *_open_valves(plant)):
        start, end = plant.node(component.from_), plant.node(component.to)
        around[start].add(end)
        around[end].add(start)
    outside = {0}
    for pump in plant.rows_of("pumps"):
        outside |= {plant.node(pump.outlet), plant.node(pump.suction), plant.node(pump.drain_to)}
    inside: set[int] = set()
    for section in plant.rows_of("sections"):
        outside |= {plant.node(section.port_p), plant.node(section.port_t)}
        inside |= {plant.node(label) for label in (section.port_a, section.port_b) if label}
    areas: dict[int, int] = {}
    for node in sorted(inside):
        if node not in areas:
            area = reached(around, node)
            if not area & outside:
                areas |= dict.fromkeys(area, node)
    return areas


def _open_valves(plant: Plant) -> list[Any]:
    return [valve for valve in plant.rows_of("valves") if valve.kind not in ("relief", "check")]


def _maybe_lazy(branch: Branch, kind: str, working: dict[int, int]) -> Branch:
    """Port reliefs and make-up checks stay out of the network until their pressures open them."""
    start, end = working.get(branch.start), working.get(branch.end)
    if kind == "relief":
        return replace(branch, lazy=start is not None and start != end)
    if kind == "check":
        return replace(branch, lazy=(start is None) != (end is None))
    return branch
