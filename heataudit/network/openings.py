"""Find every place that components find by themselves.

A single unknown of a phase is a bracketed root (Chandrupatla's method, `scipy.optimize.elementwise.find_root`). Several
are taken in turn once, then together by Newton's method with difference quotients; where that fails, one in another:
at every trial of the first, those behind it are found anew.
"""

from __future__ import annotations

import numpy as np
from scipy.optimize import elementwise

from heataudit.network.assemble import Network
from heataudit.network.elements import Integers
from heataudit.network.kinds.sections import SpoolOpening
from heataudit.network.linear import Array
from heataudit.network.settle import Settled, Surroundings, settle
from heataudit.network.unknowns import Look, Trial

NEWTON_STEPS = 8
HALVINGS = 4
TRIES = 10
NESTED_AT_MOST = 3
DIFFERENCE = 1e-6
ROOT_SHARE = 0.03
"""Share [-] of its tolerance to which a root is found."""


class Openings:
    """The unknowns of a network as arrays of shape (unknowns, phases).

    The last ones are the spools, one for each move. `free` tells what has to be found, `in_play` what was off at some
    time: what rests at an end is left alone. `seen_open` notes the spools, shape (moves, phases), that shared
    their oil with another way in any trial, so that their opening is not explicit.
    """

    def __init__(self, network: Network) -> None:
        """All unknowns where they start."""
        self.network = network
        plant = network.plant
        self.around = Surroundings(
            plant.machine.oil["pressure_viscosity_coefficient"], network.paths, network.highest_setting,
            np.ones(network.branches.constant.shape),
        )  # fmt: skip
        spools = [SpoolOpening(path, plant.phases) for path in network.paths]
        self.unknowns = [*network.unknowns, *spools]
        self.first_spool = len(network.unknowns)
        shape = (len(self.unknowns), plant.phases)
        self.place = np.array([unknown.place for unknown in self.unknowns], float).reshape(shape)
        self.free = np.array([unknown.free for unknown in self.unknowns], bool).reshape(shape)
        self.tolerance = np.array([unknown.tolerance for unknown in self.unknowns]).reshape(-1, 1)
        self.least = np.array([unknown.least for unknown in self.unknowns], float)
        self.in_play = np.zeros(shape, bool)
        self.seen_open = np.zeros((len(spools), plant.phases), bool)

    def solve(self) -> Settled:
        """Solve the network, and find every place."""
        everything = np.arange(self.network.plant.phases)
        settled = self._settle(self.place, everything)
        unsettled = everything
        for method in (*(self._in_turn, self._together) * TRIES, self._one_in_another, self._one_in_another):
            unsettled = self._unsettled(settled, unsettled)
            if not unsettled.size:
                return settled
            method(unsettled)
            settled.put(unsettled, self._settle(self.place[:, unsettled], unsettled))
        settled.converged[self._unsettled(settled, unsettled)] = False
        return settled

    def _unsettled(self, settled: Settled, rows: Integers) -> Integers:
        """Those of some phases in which an unknown is not where it should be; it comes into play there."""
        part = settled.take(rows)
        self.free[self.first_spool :, rows] |= self.seen_open[:, rows]
        off = self._off(self.place[:, rows], part, rows) > 1.0
        off[self.first_spool :] |= part.throttled.open_way
        self.in_play[:, rows] |= off
        return rows[off.any(axis=0)]

    def _off(self, place: Array, settled: Settled, rows: Integers) -> Array:
        """What each free unknown is off by per its tolerance [-], shape (unknowns, rows)."""
        return np.abs(self._excess(place, settled, rows)) / self.tolerance

    def _in_turn(self, rows: Integers) -> None:
        """Find each unknown that is off by itself, one after the other, in place."""
        for number, free in enumerate(self.free):
            these = rows[free[rows]]
            if not these.size:
                continue
            place = self.place[:, these]
            off = self._off(place, self._settle(place, these), these)[number] > 1.0
            if off.any():
                self.place[:, these[off]] = self._nested([number], place[:, off], these[off])

    def _one_in_another(self, rows: Integers) -> None:
        """Find all unknowns in play, those behind each found anew at every trial of it, in place."""
        patterns, which = np.unique(self.in_play[:, rows], axis=1, return_inverse=True)
        for number, pattern in enumerate(patterns.T):
            these = rows[which.reshape(-1) == number]
            if pattern.sum() <= NESTED_AT_MOST:
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
        tolerances = {
            "xatol": 1e-14,
            "xrtol": 1e-13,
            "fatol": ROOT_SHARE * float(self.tolerance[first, 0]),
            "frtol": 0.0,
        }
        found = elementwise.find_root(excess, (low, high), args=(np.arange(rows.size),), tolerances=tolerances)
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
            self.in_play[:, rows] |= np.abs(excess) > self.tolerance
            worst = (np.abs(excess) / self.tolerance).max(axis=0, initial=0.0)
            going = worst > 0.1
            if not going.any():
                return
            rows, place, excess, worst = rows[going], place[:, going], excess[:, going], worst[going]
            step = self._newton_step(place, excess, rows)
            for halving in range(HALVINGS):
                trial = np.clip(place + step * 0.5**halving, self.least[:, None], 1.0)
                after = self._off(trial, self._settle(trial, rows), rows).max(axis=0, initial=0.0)
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
        for number in np.flatnonzero(self.in_play[:, rows].any(axis=1)):
            free = self.in_play[number, rows]
            change = np.where(place[number] > 0.5, -DIFFERENCE, DIFFERENCE) * free
            trial = place.copy()
            trial[number] += change
            moved = self._excess(trial, self._settle(trial, rows), rows) - excess
            column = moved / np.where(free, change, 1.0)
            slopes[free, :, number] = column[:, free].T
            stuck = free & (np.abs(slopes[:, number, number]) < 1e-12)
            slopes[stuck, number, number] = 1.0
        return _solved(slopes, -excess.T).T

    def _settle(self, place: Array, rows: Integers) -> Settled:
        """Solve some phases with all unknowns at trial places."""
        trial = Trial(self.network.branches.take(rows))
        for number, unknown in enumerate(self.unknowns[: self.first_spool]):
            unknown.set(trial, place[number], rows)
        free = self.free[self.first_spool :, rows]
        for number, unknown in enumerate(self.unknowns[self.first_spool :]):
            if free[number].any():
                unknown.set(trial, np.where(free[number], place[self.first_spool + number], np.nan), rows)
        settled = settle(trial.placed(), self.around.take(rows))
        self.around.thickened[:, rows] = settled.thickened
        settled.throttled.open_way[free] = False
        self.seen_open[:, rows] |= settled.throttled.open_way
        settled.throttled.share[free] = place[self.first_spool :][free]
        return settled

    def _excess(self, place: Array, settled: Settled, rows: Integers) -> Array:
        """What each free unknown is off by [-], shape (unknowns, rows), in a solution of those phases."""
        look = Look(self.network, settled, rows)
        excess = np.zeros(place.shape)
        free = self.free[:, rows]
        for number, unknown in enumerate(self.unknowns):
            if free[number].any():
                excess[number] = np.where(free[number], unknown.excess(place[number], look), 0.0)
        return excess


def _solved(slopes: Array, right: Array) -> Array:
    """Solutions of small systems, shape (phases, unknowns); none where a system is singular."""
    regular = np.abs(np.linalg.det(slopes)) > 1e-300
    step = np.zeros_like(right)
    step[regular] = np.linalg.solve(slopes[regular], right[regular][:, :, None])[:, :, 0]
    return step
