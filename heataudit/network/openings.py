"""Spools and galleries that find their own place: openings for asked speeds, and the galleries that they close.

Every unknown is a number per phase between bounds that are known beforehand: what a gallery lets pass, as a share of
its flow in neutral, and the opening of a spool whose oil goes elsewhere too. A single one is a bracketed root
(Chandrupatla's method, `scipy.optimize.elementwise.find_root`). Several are taken in turn once, then together by
Newton's method with difference quotients, and in turn again where that fails.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from scipy.optimize import elementwise

from heataudit.network.assemble import Network
from heataudit.network.branches import Branches, Flags
from heataudit.network.elements import Integers
from heataudit.network.linear import Array
from heataudit.network.settle import Settled, Surroundings, settle

NEWTON_STEPS = 8
HALVINGS = 4
DIFFERENCE = 1e-6
STILL = 1e-9
LEAST_OPENING = 1e-4
TOLERANCES = {"xatol": 1e-15, "xrtol": 1e-13, "fatol": 1e-14, "frtol": 0.0}


class Spools:
    """The unknowns of a network, arrays of shape (unknowns, phases): first its galleries, then its moves.

    `place` [-] is what a gallery passes per its flow in neutral at the same drop, or the opening of a spool per the
    allowed one; `free` tells what has to be found. `seen_open` notes the spools, shape (moves, phases), that shared
    their oil with another way in any trial.
    """

    def __init__(self, network: Network) -> None:
        """Galleries stand where the allowed openings leave them."""
        self.network = network
        plant = network.plant
        self.around = Surroundings(
            plant.machine.oil["pressure_viscosity_coefficient"], network.paths, network.highest_setting
        )
        self.allowed = {s: self._allowed(s) for gallery in network.galleries for s in gallery.sections}
        self.galleries = len(network.galleries)
        self.place = np.ones((self.galleries + len(network.paths), plant.phases))
        self.least = np.where(np.arange(len(self.place)) < self.galleries, 0.0, LEAST_OPENING)
        self.free = np.zeros(self.place.shape, bool)
        self.seen_open = np.zeros((len(network.paths), plant.phases), bool)
        for number, gallery in enumerate(network.galleries):
            self.place[number] = gallery.conductance(np.stack([self.allowed[s] for s in gallery.sections]))
            self.free[number] = self._is_asked(gallery.sections)

    def _allowed(self, section: str) -> Array:
        """How far a spool may open [-], 0 in neutral, shape (phases,)."""
        command = self.network.plant.section_command(section)
        if command is None:
            return np.zeros(self.network.plant.phases)
        return np.where(command.forward | command.backward, command.opening, 0.0)

    def _is_asked(self, sections: tuple[str, ...]) -> Flags:
        """Phases in which a speed is asked of one of the sections."""
        asked = np.zeros(self.network.plant.phases, bool)
        for section in sections:
            command = self.network.plant.section_command(section)
            if command is not None:
                asked |= command.moving & ~np.isnan(command.speed)
        return asked

    def solve(self) -> Settled:
        """Solve the network, and find every place."""
        everything = np.arange(self.network.plant.phases)
        settled = self._settle(self.place, everything)
        unsettled = everything
        for method in (self._in_turn, self._together, self._one_in_another, self._one_in_another):
            unsettled = self._unsettled(settled, unsettled)
            if not unsettled.size:
                return settled
            self.free[self.galleries :, unsettled] |= self.seen_open[:, unsettled]
            method(unsettled)
            settled.put(unsettled, self._settle(self.place[:, unsettled], unsettled))
        settled.converged[self._unsettled(settled, unsettled)] = False
        return settled

    def _unsettled(self, settled: Settled, rows: Integers) -> Integers:
        """Those of some phases in which an unknown is not where it should be."""
        excess = self._excess(self.place[:, rows], settled, rows, rows)
        off = np.abs(excess).max(axis=0, initial=0.0) > STILL
        return rows[off | settled.throttled.open_way[:, rows].any(axis=0)]

    def _in_turn(self, rows: Integers) -> None:
        """Find each unknown by itself, one after the other, in place."""
        for number, free in enumerate(self.free):
            these = rows[free[rows]]
            if these.size:
                self.place[:, these] = self._nested([number], self.place[:, these], these)

    def _one_in_another(self, rows: Integers) -> None:
        """Find all unknowns of each phase, those behind each found anew at every trial of it, in place."""
        patterns, which = np.unique(self.free[:, rows], axis=1, return_inverse=True)
        for number, pattern in enumerate(patterns.T):
            these = rows[which.reshape(-1) == number]
            self.place[:, these] = self._nested(np.flatnonzero(pattern).tolist(), self.place[:, these], these)

    def _nested(self, numbers: list[int], place: Array, rows: Integers) -> Array:
        """Places with some unknowns, free in all the phases given, at their roots."""
        if not numbers:
            return place
        first, *rest = numbers

        def excess(value: Array, at: Array) -> Array:
            at = at.astype(np.intp)
            trial = place[:, at]
            trial[first] = value
            trial = self._nested(rest, trial, rows[at])
            return self._excess(trial, self._settle(trial, rows[at]), rows[at])[first]

        low, high = np.full(rows.size, self.least[first]), np.ones(rows.size)
        found = elementwise.find_root(excess, (low, high), args=(np.arange(rows.size),), tolerances=TOLERANCES)
        place = place.copy()
        place[first] = np.where(found.success, found.x, high)
        return self._nested(rest, place, rows)

    def _together(self, rows: Integers) -> None:
        """Newton steps of all unknowns of some phases, in place."""
        place = self.place[:, rows]
        for _ in range(NEWTON_STEPS):
            if not rows.size:
                return
            excess = self._excess(place, self._settle(place, rows), rows)
            worst = np.abs(excess).max(axis=0, initial=0.0)
            going = worst > 0.1 * STILL
            if not going.any():
                return
            rows, place, excess, worst = rows[going], place[:, going], excess[:, going], worst[going]
            step = self._newton_step(place, excess, rows)
            for halving in range(HALVINGS):
                trial = np.clip(place + step * 0.5**halving, self.least[:, None], 1.0)
                after = np.abs(self._excess(trial, self._settle(trial, rows), rows)).max(axis=0, initial=0.0)
                better = after < worst
                place[:, better], worst[better] = trial[:, better], after[better]
                step[:, better] = 0.0
                if better.all():
                    break
            self.place[:, rows] = place

    def _newton_step(self, place: Array, excess: Array, rows: Integers) -> Array:
        """Step [-] of every unknown, shape (unknowns, phases)."""
        unknowns, phases = place.shape
        slopes = np.zeros((phases, unknowns, unknowns))
        slopes[:] = np.eye(unknowns)
        for number in np.flatnonzero(self.free[:, rows].any(axis=1)):
            free = self.free[number, rows]
            change = np.where(place[number] > 0.5, -DIFFERENCE, DIFFERENCE) * free
            trial = place.copy()
            trial[number] += change
            moved = self._excess(trial, self._settle(trial, rows), rows) - excess
            column = moved / np.where(free, change, 1.0)
            slopes[free, :, number] = column[:, free].T
            fixed = ~self.free[:, rows].T & free[:, None]
            slopes[:, :, number][fixed] = 0.0
        steps = np.linalg.solve(slopes, excess.T[:, :, None])[:, :, 0].T
        return np.asarray(-steps, float)

    def _settle(self, place: Array, rows: Integers) -> Settled:
        """Solve some phases with galleries and spools at trial places."""
        settled = settle(self._placed(self.network.branches.take(rows), place, rows), self.around.take(rows))
        free = self.free[self.galleries :, rows]
        settled.throttled.open_way[free] = False
        self.seen_open[:, rows] |= settled.throttled.open_way
        settled.throttled.share[free] = place[self.galleries :][free]
        return settled

    def _placed(self, branches: Branches, place: Array, rows: Integers) -> Branches:
        """The network with its galleries and free spools at given places."""
        quadratic, high, opened = branches.quadratic.copy(), branches.high.copy(), branches.open.copy()
        number = {(item.component, item.role): k for k, item in enumerate(branches.items)}
        for gallery, value in zip(self.network.galleries, place, strict=False):
            k = number[(gallery.name, "gallery")]
            opened[k] = value > 0
            quadratic[k] = gallery.neutral / np.where(value > 0, value, 1.0) ** 2
        moves = zip(self.network.paths, place[self.galleries :], self.free[self.galleries :, rows], strict=True)
        for path, value, free in moves:
            for edge in (path.feed, path.back):
                if edge >= 0:
                    quadratic[edge] /= np.where(free, value, 1.0) ** 2
            high[path.branch] = np.where(free, np.inf, high[path.branch])
        return replace(branches, quadratic=quadratic, high=high, open=opened)

    def _excess(self, place: Array, settled: Settled, rows: Integers, at: Integers | slice = slice(None)) -> Array:
        """What each free unknown is off by [-], shape (unknowns, phases); `at` are the rows' places in the solution.

        Of a gallery, what the spools leave it less what it was taken to pass; of a spool, the speed over that asked,
        less 1, unless it falls short wide open, or the load pushes its oil past the spool over a port relief.
        """
        excess = np.zeros(place.shape)
        for number, gallery in enumerate(self.network.galleries):
            openings = np.stack([self.allowed[s][rows] * self.share(s, settled)[at] for s in gallery.sections])
            excess[number] = gallery.conductance(openings) - place[number]
        for number, path in enumerate(self.network.paths, self.galleries):
            asked = self.network.branches.high[path.branch, rows]
            over = settled.state.flow[path.branch, at] / np.where(np.isfinite(asked), asked, 1.0) - 1.0
            at_end = ((place[number] >= 1.0) & (over < 0)) | ((place[number] <= LEAST_OPENING) & (over > 0))
            excess[number] = np.where(at_end, 0.0, over)
        return np.where(self.free[:, rows], excess, 0.0)

    def share(self, section: str, settled: Settled) -> Array:
        """Opening of a spool [-] as a share of the allowed one, shape of the solution's phases."""
        share = np.ones(settled.throttled.share.shape[1])
        for number, path in enumerate(self.network.paths):
            if self.network.actuators[path.actuator].row.section == section:
                share = np.minimum(share, settled.throttled.share[number])
        return share
