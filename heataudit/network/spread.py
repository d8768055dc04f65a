"""Spread the solution of the reduced network back over every branch and node of the full one."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from heataudit.network.branches import Branches, some_phases
from heataudit.network.elements import PRESSURE_SCALE
from heataudit.network.interior_point import Point
from heataudit.network.linear import Array
from heataudit.network.topology import Chain, Pattern, Topology
from heataudit.physics.lines import line_drop

Rows = NDArray[np.intp]

NO_FLOW = 1e-10
"""Flow [-], as a share of the pump flow, that the solver does not tell from none."""

MOVES = ("forward", "backward")
"""Roles of the branches of actuators."""


@dataclass(frozen=True)
class Spread:
    """State of every branch and node of the full network, SI.

    flow [m³/s] and drop [Pa] (the driving pressure) of each branch, shape (branches, phases); pressure [Pa] of each
    node, shape (nodes, phases), NaN where nothing determines it.
    """

    flow: Array
    drop: Array
    pressure: Array


def spread(branches: Branches, topology: Topology, point: Point, viscosity_factor: Array) -> Spread:
    """Flows, drops and pressures everywhere.

    Parameters
    ----------
    branches, topology
        The full network and how it was folded.
    point
        Solution of the reduced network, scaled.
    viscosity_factor
        Factor [-] on the oil's viscosity in each line, shape (branches, phases), with which it was solved.
    """
    shape = branches.constant.shape
    state = Spread(np.zeros(shape), np.zeros(shape), np.full((branches.node_count, shape[1]), np.nan))
    state.pressure[0] = 0.0
    number = {node: k for k, node in enumerate(topology.kept)}
    for chain, _, rows in topology.runs:
        for node in chain.ends:
            if node:
                state.pressure[node, rows] = point.pressure[number[node], rows] * PRESSURE_SCALE
    for chain, slot, rows in topology.runs:
        _walk(branches, chain, rows, _ChainPoint(point, slot, rows, branches.flow_scale), state, viscosity_factor)
    for pattern in topology.patterns:
        _dead_ends(branches, pattern, state)
    return state


class _ChainPoint:
    """Flow [m³/s] and multipliers [Pa] of one chain in some phases."""

    def __init__(self, point: Point, slot: int, rows: Rows, scale: Array) -> None:
        flow = point.flow[slot, rows]
        self.flow = np.where(np.abs(flow) < NO_FLOW, 0.0, flow) * scale[rows]
        self.z_low = point.z_low[slot, rows] * PRESSURE_SCALE
        self.z_high = point.z_high[slot, rows] * PRESSURE_SCALE


def _walk(
    branches: Branches, chain: Chain, rows: Rows, at: _ChainPoint, state: Spread, viscosity_factor: Array
) -> None:
    """Fill in one chain, from its end back to its start."""
    factors = _factors(branches, chain, rows)
    own_low, own_high = _owners(branches, chain, rows, factors)
    for place in reversed(range(len(chain.items))):
        k, sign = chain.items[place]
        a, b = factors[place]
        flow = sign * a * at.flow
        drop = _drop(branches, k, rows, flow, viscosity_factor)
        held = np.where(own_high == place, at.z_high, 0.0) - np.where(own_low == place, at.z_low, 0.0)
        drop = drop + sign * held / np.where(b == 0, 1.0, b)
        state.flow[k, rows] = flow
        state.drop[k, rows] = drop
        item = branches.items[k]
        near, far = (item.start, item.end) if sign > 0 else (item.end, item.start)
        if place and near:
            behind = state.pressure[far, rows]
            state.pressure[near, rows] = drop + branches.gain[k, rows] * behind if sign > 0 else behind - drop


def _factors(branches: Branches, chain: Chain, rows: Rows) -> list[tuple[Array, Array]]:
    """Flow and pressure factors [-] of each branch in a chain."""
    a = b = np.ones(len(rows))
    factors = []
    for k, _ in chain.items:
        factors.append((a, b))
        a, b = a * branches.ratio[k, rows], b * branches.gain[k, rows]
    return factors


def _owners(
    branches: Branches, chain: Chain, rows: Rows, factors: list[tuple[Array, Array]]
) -> tuple[NDArray[np.intp], NDArray[np.intp]]:
    """Which branch of the chain sets its lower and its upper bound; an actuator comes before other one-way branches."""
    lows, highs = [], []
    for (k, sign), (a, _) in zip(chain.items, factors, strict=True):
        low, high = branches.low[k, rows] / a, branches.high[k, rows] / a
        low, high = (low, high) if sign > 0 else (-high, -low)
        lows.append(low + (1e-300 if branches.items[k].role in MOVES else 0.0))
        highs.append(high)
    return np.argmax(lows, axis=0), np.argmin(highs, axis=0)


def _drop(branches: Branches, k: int, rows: Rows, flow: Array, viscosity_factor: Array) -> Array:
    """Drop [Pa] of a branch at a flow [m³/s] by its law."""
    drop = branches.constant[k, rows] + flow * (branches.linear[k, rows] + branches.quadratic[k, rows] * np.abs(flow))
    power = branches.power[k, rows]
    limited = (power > 0) & (flow > 0)
    drop = np.where(limited, np.maximum(drop, -power / np.where(limited, flow, 1.0)), drop)
    shape = branches.items[k].line
    if shape is not None:
        thick = branches.viscosity[rows] * viscosity_factor[k, rows]
        friction, _ = line_drop(flow, some_phases(shape, rows), thick, branches.density[rows])
        drop = drop + friction
    return drop


def _dead_ends(branches: Branches, pattern: Pattern, state: Spread) -> None:
    """Pressures where oil stands still behind open branches.

    Ways that pass both ways carry the pressure; a check holds what stands in front of it, less what opens it, the
    highest where there are several; behind an actuator that cannot move stands what balances its load.
    """
    rows = pattern.rows
    known = ~np.isnan(state.pressure[:, rows[0]])
    living = {k for chain in pattern.chains for k, _ in chain.items}
    quiet = [k for k in np.flatnonzero(branches.open[:, rows[0]]).tolist() if k not in living]
    both_ways = [k for k in quiet if branches.items[k].role not in MOVES and not branches.items[k].one_way]
    one_way = [k for k in quiet if k not in both_ways]
    for node in np.flatnonzero(known).tolist():
        known |= _spread_level(branches, rows, state, (node, both_ways), known)
    solved = known.copy()
    for _ in range(branches.node_count):
        raised = False
        for k in one_way:
            start, end = branches.items[k].start, branches.items[k].end
            if not known[start] or solved[end]:
                continue
            held = _held_behind(branches, k, rows, state)
            if not known[end] or (held > state.pressure[end, rows] + HELD_APART).any():
                state.pressure[end, rows] = np.fmax(state.pressure[end, rows], held)
                known |= _spread_level(branches, rows, state, (end, both_ways), solved)
                raised = True
        if not raised:
            return


HELD_APART = 1e-3
"""Pressure [Pa] by which one check must hold more than another to count."""


def _held_behind(branches: Branches, k: int, rows: Rows, state: Spread) -> Array:
    """Pressure [Pa] that a still one-way branch holds at its end."""
    item = branches.items[k]
    held = state.pressure[item.start, rows] - branches.constant[k, rows]
    if item.role in MOVES:
        gain = branches.gain[k, rows]
        held = np.where(gain > 0, np.maximum(held / np.where(gain > 0, gain, 1.0), 0.0), np.nan)
    return held


def _spread_level(
    branches: Branches, rows: Rows, state: Spread, region: tuple[int, list[int]], fixed: NDArray[np.bool_]
) -> NDArray[np.bool_]:
    """Bring what hangs together with a node, over the ways given, to its pressure, in place; the nodes reached.

    Nodes that are `fixed`, shape (nodes,), keep what they have.
    """
    first, ways = region
    reached = np.zeros(len(fixed), bool)
    reached[first] = True
    waiting = [first]
    while waiting:
        node = waiting.pop()
        for k in ways:
            item = branches.items[k]
            for near, far, sign in ((item.start, item.end, -1.0), (item.end, item.start, 1.0)):
                if near == node and not reached[far] and not fixed[far]:
                    state.pressure[far, rows] = state.pressure[near, rows] + sign * branches.constant[k, rows]
                    reached[far] = True
                    waiting.append(far)
    return reached
