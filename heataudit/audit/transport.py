"""How the oil carries heat from component to component: what reaches a line on its way from the tank."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.audit.routes import rows_of
from heataudit.machine import TANK, Cycle, Machine, Move
from heataudit.network.solution import Solution
from heataudit.physics.actuators import cylinder_areas, double_rod_areas
from heataudit.physics.arrays import Array

BLOCK = 2048
"""Phases that are traced at a time."""

FORWARD = (Move.EXTEND, Move.FORWARD, Move.ON, Move.PRESS)
BACKWARD = (Move.RETRACT, Move.REVERSE)


class Way(NamedTuple):
    """Oil that flows from node to node: flow [m³/s] where it starts, 0 or more, and heat [W] that it takes up."""

    start: int
    end: int
    flow: Array
    heat: Array


def passing(machine: Machine, cycle: Cycle, solution: Solution, component: str) -> tuple[Array, Array]:
    """Flow through a component [m³/s] and heat that reaches it [W] with the oil, both of shape (phases,).

    The heat is that of all components upstream since the tank. Where ways part, the heat parts as the flow does; slip
    parts behind the pump and leaves by the drain. Oil that comes out of an actuator carries the heat
    of the oil that goes in, as it does over repeated cycles.

    Parameters
    ----------
    machine
        Gives the connections.
    cycle
        The phases, for the direction of each move.
    solution
        The solved phases.
    component
        Name of a line, valve, section, pump or actuator.
    """
    ways = _ways(machine, cycle, solution)
    own = [way for name, way in ways if name == component]
    flow = np.sum([way.flow for way in own], axis=0) if own else np.zeros(len(cycle))
    heat = np.zeros(len(cycle))
    for first in range(0, len(cycle), BLOCK):
        part = slice(first, first + BLOCK)
        carried, leaving = _carried([_cut(way, part) for _, way in ways], len(solution.ports))
        for way in own:
            heat[part] += way.flow[part] * _ratio(carried[:, way.start], leaving[:, way.start])
    return flow, heat


def _cut(way: Way, part: slice) -> Way:
    return way._replace(flow=way.flow[part], heat=way.heat[part])


def _ratio(part: Array, whole: Array) -> Array:
    return np.divide(part, whole, out=np.zeros_like(part), where=whole > 0)


def _carried(ways: list[Way], nodes: int) -> tuple[Array, Array]:
    """Heat [W] that arrives at each node and flow [m³/s] that leaves it, shape (phases, nodes).

    What arrives at a node is the heat of each way that ends there and its share of what arrived where it starts: a
    linear system for each phase. The tank gives nothing.
    """
    phases = len(ways[0].flow)
    leaving, source = np.zeros((phases, nodes)), np.zeros((phases, nodes))
    for way in ways:
        leaving[:, way.start] += way.flow
        source[:, way.end] += way.heat
    system = np.zeros((phases, nodes, nodes))
    system[:, np.arange(nodes), np.arange(nodes)] = 1.0
    for way in ways:
        if way.start != 0:
            system[:, way.end, way.start] -= _ratio(way.flow, leaving[:, way.start]) * (1.0 - 1e-9)
    carried = np.asarray(np.linalg.solve(system, source[:, :, None])[:, :, 0], np.float64)
    carried[:, 0] = 0.0
    return carried, leaving


def _ways(machine: Machine, cycle: Cycle, solution: Solution) -> list[tuple[str, Way]]:
    """All ways of the oil with the names of their components; a section's way back carries what arrives for it."""
    found = [*_pumps(machine, solution), *_two_ports(machine, solution)]
    found += _surplus(machine, solution, found)
    for actuator in rows_of(machine.actuators):
        for forward in (True, False):
            found += _actuator(actuator, cycle, solution, forward)
    outflow = _actuator_outflow(machine, cycle, solution)
    return found + [way for section in rows_of(machine.sections)
                    for way in _section(section, machine, cycle, solution, (found, outflow))]  # fmt: skip


def _pumps(machine: Machine, solution: Solution) -> Iterator[tuple[str, Way]]:
    """From suction to outlet, or back where a closed loop runs backwards; slip leaves the high side by the drain."""
    state, node = solution.pumps, solution.ports.node
    rows = {row.name: row for row in rows_of(machine.pumps)}
    for k, name in enumerate(state.name):
        row = rows[name]
        suction, outlet, drain = (node(label or TANK) for label in (row.suction, row.outlet, row.drain_to))
        swept = state.flow[k] + state.slip[k]
        for sign, low, high in ((1.0, suction, outlet), (-1.0, outlet, suction)):
            goes = np.sign(swept) == sign
            slip = np.where(goes, np.maximum(sign * state.slip[k], 0.0), 0.0)
            slipped = slip * np.maximum(np.nan_to_num(solution.pressure[high] - solution.pressure[drain]), 0.0)
            yield name, Way(low, high, np.where(goes, np.abs(swept), 0.0), np.where(goes, state.heat[k], 0.0) - slipped)
            yield f"{name} drain", Way(high, drain, slip, slipped)


def _surplus(machine: Machine, solution: Solution, ways: list[tuple[str, Way]]) -> Iterator[tuple[str, Way]]:
    """What priority valves send to their third port: what arrives at From and does not leave it otherwise."""
    for valve in rows_of(machine.valves):
        if valve.kind == "priority" and valve.port_3:
            port = solution.ports.node(valve.from_)
            nothing = np.zeros(solution.phases)
            left = nothing + sum(way.flow for _, way in ways if way.end == port)
            left = left - sum(way.flow for _, way in ways if way.start == port)
            yield f"{valve.name} surplus", Way(port, solution.ports.node(valve.port_3), np.maximum(left, 0.0), nothing)


def _two_ports(machine: Machine, solution: Solution) -> Iterator[tuple[str, Way]]:
    """Lines, valves, galleries and void sources, each with a way in either direction."""
    node = solution.ports.node
    ends = {row.name: (row.from_, row.to) for row in rows_of(machine.lines)}
    ends |= {row.name: (row.from_, row.to) for row in rows_of(machine.valves)}
    opened = machine.sections[machine.sections["centre"] == "open"]
    for bank, rows in opened.groupby("bank", sort=False):
        ends[f"{bank} gallery"] = (str(rows["port_p"].iloc[0]), str(rows["port_n"].iloc[0]))
    components = solution.components
    for k, (name, kind) in enumerate(zip(components.name, components.kind, strict=True)):
        if kind == "section":
            continue
        start, end = (TANK, name.removesuffix(" void")) if kind == "void" else ends[name]
        flow, heat = components.flow[k], components.heat[k]
        yield name, Way(node(start), node(end), np.maximum(flow, 0.0), np.where(flow > 0, heat, 0.0))
        if kind != "void" and np.any(flow < 0):
            yield name, Way(node(end), node(start), np.maximum(-flow, 0.0), np.where(flow < 0, heat, 0.0))


def _directed(name: str, cycle: Cycle, forward: bool) -> NDArray[np.bool_]:
    moves = cycle.moves.get(name, np.zeros(len(cycle), np.int8))
    return np.isin(moves, [int(move) for move in (FORWARD if forward else BACKWARD)])


def _actuator(row: Any, cycle: Cycle, solution: Solution, forward: bool) -> Iterator[tuple[str, Way]]:
    """From inlet to outlet; a plunger takes its oil to a stand-still and gives it back when it returns."""
    state, node = solution.actuators, solution.ports.node
    k = state.name.index(row.name)
    goes = _directed(row.name, cycle, forward)
    flow, heat = np.where(goes, state.flow[k], 0.0), np.where(goes, state.heat[k], 0.0)
    if not row.port_b:
        start, end = (node(row.port_a), 0) if forward else (0, node(row.port_a))
    else:
        start, end = (node(label) for label in ((row.port_a, row.port_b) if forward else (row.port_b, row.port_a)))
    yield row.name, Way(start, end, flow, heat)


def _actuator_outflow(machine: Machine, cycle: Cycle, solution: Solution) -> dict[str, Array]:
    """Flow [m³/s] that leaves the outlet of each actuator, shape (phases,)."""
    found = {}
    for k, row in enumerate(rows_of(machine.actuators)):
        flow = solution.actuators.flow[k]
        if row.kind in ("cylinder", "double rod"):
            areas = cylinder_areas if row.kind == "cylinder" else double_rod_areas
            bore_side, rod_side = (float(area) for area in areas(row.bore, row.rod, row.count))
            ratio = np.where(_directed(row.name, cycle, True), rod_side / bore_side, bore_side / rod_side)
            flow = flow * (ratio * row.volumetric_efficiency + 1.0 - row.volumetric_efficiency)
        found[row.name] = flow
    return found


def _section(
    row: Any, machine: Machine, cycle: Cycle, solution: Solution, known: tuple[list[tuple[str, Way]], dict[str, Array]]
) -> Iterator[tuple[str, Way]]:
    """The feed edge, and the return edge with the flow that is left over at its working port."""
    served = machine.actuators[machine.actuators["section"] == row.name]
    if served.empty:
        return
    ways, outflow = known
    actuator = served.iloc[0]
    components, node = solution.components, solution.ports.node
    k = components.name.index(row.name)
    for forward, (fed, back) in ((True, (row.port_a, row.port_b)), (False, (row.port_b, row.port_a))):
        goes = _directed(actuator["name"], cycle, forward)
        feed_heat = components.heat[k] - components.return_heat[k]
        if fed:
            yield row.name, Way(
                node(row.port_p), node(fed), np.where(goes, components.flow[k], 0.0), np.where(goes, feed_heat, 0.0)
            )  # fmt: skip
        if back:
            port = node(back)
            of_actuator = actuator["port_b" if forward else "port_a"]
            joined = bool(of_actuator) and node(of_actuator) == port
            left = outflow[actuator["name"]] if joined else np.zeros(len(goes))
            left = left + sum(way.flow for name, way in ways if way.end == port and name != actuator["name"])
            left = left - sum(way.flow for _, way in ways if way.start == port)
            yield f"{row.name} return", Way(
                port, node(row.port_t), np.where(goes, np.maximum(left, 0.0), 0.0),
                np.where(goes, components.return_heat[k], 0.0),
            )  # fmt: skip
