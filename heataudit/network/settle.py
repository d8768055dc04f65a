"""Solve a batch whose spools and galleries stand still: the core, the oil's viscosity under pressure, port reliefs."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from heataudit.network.active_set import finish, solve_reduced
from heataudit.network.branches import Branches, Flags, MovePath
from heataudit.network.elements import PRESSURE_SCALE, Integers
from heataudit.network.linear import Array
from heataudit.network.reduce import Folding
from heataudit.network.spools import Throttled, throttle
from heataudit.network.spread import Spread, spread
from heataudit.network.topology import Topology, analyse
from heataudit.physics.oil import pressure_factor

START_SHARE = 0.6
"""Share [-] of the highest setting at which the pump side starts."""

START_RETURN = 2e5
"""Pressure [Pa] at which all other nodes start."""

VISCOSITY_GOAL = 1e-11
VISCOSITY_ROUNDS = 80
SOLVED = 1e-8
RUNAWAY = 1e6
"""Flow [-], per pump flow, that no machine has: nothing resists a load that drives, and there is no solution."""

OPENS = 1.0
"""Pressure [Pa] over its opening pressure at which a branch that was left out is put in."""


@dataclass(frozen=True)
class Surroundings:
    """What else a batch needs: the pressure-viscosity coefficient [1/Pa], the moves, the highest setting [Pa].

    `thickened` [-] is the factor of the pressure on the viscosity in each branch to start from, (branches, phases).
    """

    pressure_viscosity: float
    paths: tuple[MovePath, ...]
    highest_setting: Array
    thickened: Array

    def take(self, rows: Integers) -> Surroundings:
        """The same for some of the phases."""
        return replace(self, highest_setting=self.highest_setting[rows], thickened=self.thickened[:, rows])


@dataclass(frozen=True)
class Settled:
    """A solved batch: state of the full network, spools, and what it took, shape (phases,)."""

    state: Spread
    throttled: Throttled
    thickened: Array
    iterations: Integers
    residual: Array
    converged: Flags

    def take(self, rows: Integers) -> Settled:
        """Some of the phases."""
        state, throttled = self.state, self.throttled
        return Settled(
            Spread(state.flow[:, rows], state.drop[:, rows], state.pressure[:, rows]),
            Throttled(throttled.share[:, rows], throttled.open_way[:, rows]),
            self.thickened[:, rows], self.iterations[rows], self.residual[rows], self.converged[rows],
        )  # fmt: skip

    def put(self, rows: Integers, other: Settled) -> None:
        """Take over some phases from another batch."""
        for mine, its in (
            (self.state.flow, other.state.flow), (self.state.drop, other.state.drop),
            (self.state.pressure, other.state.pressure), (self.throttled.share, other.throttled.share),
            (self.throttled.open_way, other.throttled.open_way), (self.thickened, other.thickened),
        ):  # fmt: skip
            mine[:, rows] = its
        self.iterations[rows] += other.iterations
        self.residual[rows] = other.residual
        self.converged[rows] = other.converged


def settle(branches: Branches, around: Surroundings) -> Settled:
    """Solve a batch; branches that were left out are put in where the pressures open them, until none is missing."""
    settled = _settle_open(branches, around)
    while True:
        missing = _missing(branches, settled.state)
        rows = np.flatnonzero(missing.any(axis=0))
        if not rows.size:
            return settled
        branches = replace(branches, open=(branches.open | missing) & ~_replaced(branches, missing))
        settled.put(rows, _settle_open(branches.take(rows), around.take(rows)))


def _missing(branches: Branches, state: Spread) -> Flags:
    """Lazy branches, shape (branches, phases), that are left out and whose ends would open them.

    Pilots lift theirs only where nothing else is missing: what relieves the pilot pressure comes first.
    """
    missing, lifted = np.zeros_like(branches.open), np.zeros_like(branches.open)
    for k in np.flatnonzero(branches.lazy):
        item = branches.items[k]
        across = state.pressure[item.start] - state.pressure[item.end]
        if item.pilot >= 0:
            lifts = (across < 0) & (item.pilot_ratio * state.pressure[item.pilot] + across >= 0)
            lifted[k] = ~branches.open[k] & lifts
        else:
            missing[k] = ~branches.open[k] & (across > branches.constant[k] + OPENS)
    return missing | (lifted & ~missing.any(axis=0))


def _replaced(branches: Branches, opened: Flags) -> Flags:
    """Branches, shape (branches, phases), in whose place others have come."""
    replaced = np.zeros_like(branches.open)
    for k in np.flatnonzero(opened.any(axis=1)):
        item = branches.items[k]
        for other, candidate in enumerate(branches.items):
            if (candidate.component, candidate.role) == (item.component, item.replaces):
                replaced[other] |= opened[k]
    return replaced


def _settle_open(branches: Branches, around: Surroundings) -> Settled:
    """Solve a batch with the branches that are open; viscosity under pressure by iteration on the lines' pressures."""
    topology = analyse(branches)
    folding = Folding(branches, topology)
    factor = around.thickened
    elements = folding.elements(factor)
    start = _start(branches, topology, around.highest_setting)
    point = solve_reduced(elements, start)
    iterations = point.iterations.copy()
    steady = np.ones(branches.phases, bool)
    for _ in range(VISCOSITY_ROUNDS):
        state = spread(branches, topology, point, factor)
        throttled = throttle(branches, topology, around.paths, state)
        thicker = _viscosity_factor(branches, state, around.pressure_viscosity)
        steady = np.abs(thicker / factor - 1.0).max(axis=0, initial=0.0) < VISCOSITY_GOAL
        if steady.all():
            break
        factor = thicker
        elements = folding.thicken(elements, factor)
        point.iterations[:] = 0
        failed = np.flatnonzero(~finish(elements, point))
        if failed.size:
            point.put(failed, solve_reduced(elements.take(failed), start[:, failed]))
        iterations += point.iterations
    bounded = np.abs(point.flow).max(axis=0, initial=0.0) < RUNAWAY
    solved = steady & bounded & (point.residual < SOLVED)
    return Settled(state, throttled, factor.copy(), iterations, point.residual, solved)


def _viscosity_factor(branches: Branches, state: Spread, coefficient: float) -> Array:
    """Factor [-] by which the pressure thickens the oil in each line that carries flow, shape (branches, phases)."""
    factor = np.ones(branches.constant.shape)
    for k, item in enumerate(branches.items):
        if item.line is not None:
            mean = 0.5 * (state.pressure[item.start] + state.pressure[item.end])
            mean = np.where((state.flow[k] != 0) & ~np.isnan(mean), mean, 0.0)
            factor[k] = pressure_factor(mean, coefficient)
    return factor


def _start(branches: Branches, topology: Topology, highest: Array) -> Array:
    """Node pressures [-] to start from, shape (nodes, phases)."""
    pumps = {injection.node for injection in branches.injections}
    pumps |= {item.end for item in branches.items if item.role == "displacement"}
    start = np.full((len(topology.kept), branches.phases), START_RETURN / PRESSURE_SCALE)
    for number, node in enumerate(topology.kept):
        if node in pumps:
            start[number] = START_SHARE * highest / PRESSURE_SCALE
    return start
