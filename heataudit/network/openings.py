"""Spools and galleries that find their own place: openings for asked speeds, and the galleries that they close.

Every unknown is a number per phase between bounds that are known beforehand: what a gallery lets pass, as a share of
its flow in neutral, and the opening of a spool whose oil goes elsewhere too. Each is a bracketed root (Chandrupatla's
method, `scipy.optimize.elementwise.find_root`), several are taken in turn until none moves.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from scipy.optimize import elementwise

from heataudit.network.assemble import Network
from heataudit.network.branches import Branches, Flags
from heataudit.network.elements import Integers
from heataudit.network.linear import Array
from heataudit.network.settle import Settled, Surroundings, settle

SWEEPS = 20
STILL = 1e-10
LEAST_OPENING = 1e-4
TOLERANCES = {"xatol": 1e-15, "xrtol": 1e-13, "fatol": 1e-14, "frtol": 0.0}


@dataclass
class Positions:
    """Where everything stands: `gallery` [-] of shape (galleries, phases), `spool` [-] of shape (paths, phases).

    `gallery` is the flow that it passes per that in neutral at the same drop, `spool` the opening per the allowed one
    of those spools that are `solved` here; NaN elsewhere.
    """

    gallery: Array
    spool: Array

    def take(self, rows: Integers) -> Positions:
        """Some of the phases."""
        return Positions(self.gallery[:, rows], self.spool[:, rows])


class Spools:
    """The spools and galleries of a network."""

    def __init__(self, network: Network) -> None:
        self.network = network
        plant = network.plant
        self.around = Surroundings(
            plant.machine.oil["pressure_viscosity_coefficient"], network.paths, network.highest_setting
        )
        self.allowed = {
            section: self._allowed(section) for gallery in network.galleries for section in gallery.sections
        }

    def _allowed(self, section: str) -> Array:
        """How far a spool may open [-], 0 in neutral, shape (phases,)."""
        command = self.network.plant.section_command(section)
        if command is None:
            return np.zeros(self.network.plant.phases)
        return np.where(command.forward | command.backward, command.opening, 0.0)

    def solve(self) -> Settled:
        """Solve the network, and find every opening."""
        network = self.network
        phases = network.plant.phases
        allowed = [np.stack([self.allowed[s] for s in g.sections]) for g in network.galleries]
        gallery = np.array([g.conductance(x) for g, x in zip(network.galleries, allowed, strict=True)])
        positions = Positions(
            gallery.reshape(len(network.galleries), phases), np.full((len(network.paths), phases), np.nan)
        )
        everything = np.arange(phases)
        settled = self._settle(positions, everything)
        still = self._waiting(settled, positions)
        for _ in range(SWEEPS):
            rows = np.flatnonzero(still)
            if not rows.size:
                break
            before = positions.take(rows)
            self._sweep(settled, positions, rows)
            settled.put(rows, self._settle(positions, rows))
            moved = np.zeros(len(rows))
            for now, then in ((positions.gallery, before.gallery), (positions.spool, before.spool)):
                change = np.abs(np.nan_to_num(now[:, rows]) - np.nan_to_num(then))
                moved = np.maximum(moved, change.max(axis=0, initial=0.0))
            still[rows] = (moved > STILL) & (self._unknowns(settled, positions, rows) > 1)
            still |= settled.throttled.open_way.any(axis=0)
        settled.converged[still] = False
        return settled

    def _waiting(self, settled: Settled, positions: Positions) -> Flags:
        """Phases in which something has still to find its place."""
        waiting = settled.throttled.open_way.any(axis=0)
        for number in range(len(self.network.galleries)):
            found = self._found(number, settled, np.arange(len(waiting)))
            waiting |= np.abs(found - positions.gallery[number]) > STILL
        return waiting

    def _unknowns(self, settled: Settled, positions: Positions, rows: Integers) -> Array:
        """How many unknowns influence each other in each phase."""
        count = (~np.isnan(positions.spool[:, rows])).sum(axis=0)
        return count + self._asked_galleries()[:, rows].sum(axis=0)

    def _asked_galleries(self) -> Flags:
        """Galleries, shape (galleries, phases), with a spool whose opening is solved."""
        network = self.network
        asked = np.zeros((len(network.galleries), network.plant.phases), bool)
        for number, gallery in enumerate(network.galleries):
            for section in gallery.sections:
                command = network.plant.section_command(section)
                if command is not None:
                    asked[number] |= command.moving & ~np.isnan(command.speed)
        return asked

    def _sweep(self, settled: Settled, positions: Positions, rows: Integers) -> None:
        """Find each unknown once, in turn, in place."""
        for number, asked in enumerate(self._asked_galleries()):
            these = rows[asked[rows]]
            if these.size:
                self._root(positions.gallery[number], these, (0.0, 1.0), self._gallery_excess(number, positions))
        for number, open_way in enumerate(settled.throttled.open_way):
            known = ~np.isnan(positions.spool[number])
            these = rows[(open_way | known)[rows]]
            if these.size:
                positions.spool[number, these] = 1.0
                bounds = (LEAST_OPENING, 1.0)
                self._root(positions.spool[number], these, bounds, self._speed_excess(number, positions))

    def _root(
        self, values: Array, rows: Integers, bounds: tuple[float, float], excess: Callable[[Array, Integers], Array]
    ) -> None:
        """Put the root of `excess` over one unknown into its values, in place."""
        low, high = (np.full(len(rows), bound) for bound in bounds)
        found = elementwise.find_root(excess, (low, high), args=(rows,), tolerances=TOLERANCES)
        ends = excess(high, rows)
        values[rows] = np.where(found.success, found.x, np.where(ends <= 0, high, low))

    def _gallery_excess(self, number: int, positions: Positions) -> Callable[[Array, Integers], Array]:
        def excess(value: Array, rows: Integers) -> Array:
            rows = np.asarray(rows, np.intp)
            trial = positions.take(rows)
            trial.gallery[number] = value
            return self._found(number, self._settle_at(trial, rows), rows) - value

        return excess

    def _speed_excess(self, number: int, positions: Positions) -> Callable[[Array, Integers], Array]:
        branch = self.network.paths[number].branch

        def excess(value: Array, rows: Integers) -> Array:
            rows = np.asarray(rows, np.intp)
            trial = positions.take(rows)
            trial.spool[number] = value
            flow = self._settle_at(trial, rows).state.flow[branch]
            return flow / self.network.branches.high[branch, rows] - 1.0

        return excess

    def _found(self, number: int, settled: Settled, rows: Integers) -> Array:
        """What a gallery passes [-] with the spools where a solution needs them, for phases `rows`."""
        gallery = self.network.galleries[number]
        return gallery.conductance(
            np.stack([self.allowed[s][rows] * self.share(s, settled) for s in gallery.sections])
        )

    def share(self, section: str, settled: Settled) -> Array:
        """Opening of a spool [-] as a share of the allowed one, shape of the solution's phases."""
        share = np.ones(settled.throttled.share.shape[1])
        for number, path in enumerate(self.network.paths):
            if self.network.actuators[path.actuator].row.section == section:
                share = np.minimum(share, settled.throttled.share[number])
        return share

    def _settle(self, positions: Positions, rows: Integers) -> Settled:
        return self._settle_at(positions.take(rows), rows)

    def _settle_at(self, trial: Positions, rows: Integers) -> Settled:
        """Solve some phases with galleries and spools at trial positions."""
        branches = _placed(self.network, self.network.branches.take(rows), trial)
        settled = settle(branches, self.around.take(rows))
        solved = ~np.isnan(trial.spool)
        settled.throttled.share[solved] = trial.spool[solved]
        return settled


def _placed(network: Network, branches: Branches, at: Positions) -> Branches:
    """A network with its galleries and solved spools at given positions."""
    quadratic, high, opened = branches.quadratic.copy(), branches.high.copy(), branches.open.copy()
    number = {(item.component, item.role): k for k, item in enumerate(branches.items)}
    for gallery, value in zip(network.galleries, at.gallery, strict=True):
        k = number[(gallery.name, "gallery")]
        opened[k] = value > 0
        quadratic[k] = gallery.neutral / np.where(value > 0, value, 1.0) ** 2
    for path, value in zip(network.paths, at.spool, strict=True):
        solved = ~np.isnan(value)
        for edge in (path.feed, path.back):
            if edge >= 0:
                quadratic[edge] = np.where(solved, quadratic[edge] / np.where(solved, value, 1.0) ** 2, quadratic[edge])
        high[path.branch] = np.where(solved, np.inf, high[path.branch])
    return replace(branches, quadratic=quadratic, high=high, open=opened)
