"""Flows and pressures of a batch of reduced networks: a primal-dual interior-point method.

With frozen coefficients each element law is non-decreasing in its flow, so the flows minimise a convex content
function (Millar 1951; Cherry 1951) within their bounds: a check valve never carries flow back, an actuator never runs
faster than asked, a pump's displacement stays between nil and full. The bounds' multipliers are the pressures that a
shut valve holds or that a throttling spool takes. The method is Mehrotra's predictor-corrector (SIAM J. Optim. 2,
1992, p. 575) on the optimality conditions

    law(q) - driving(p) - z_low + z_high = 0,    outflow(q) + leak p = injection,    z s = mu,

with one step length for all unknowns; phases that it does not bring down are run again with plain centring. Active
bounds then are held exactly and the rest is finished by Newton's method, so that a shut branch carries exactly nothing.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from heataudit.network.elements import Elements, Integers
from heataudit.network.linear import Array

RESIDUAL_GOAL = 1e-10
GAP_GOAL = 1e-15
MAX_ITERATIONS = 60
STEP_TO_BOUNDARY = 0.995
PLAIN_CENTRING = 0.1
COMPACT_SHARE = 0.25


@dataclass
class Point:
    """Flows, pressures and multipliers [-] of a batch, with what it took to find them."""

    flow: Array
    pressure: Array
    z_low: Array
    z_high: Array
    iterations: NDArray[np.int64]
    residual: Array

    def put(self, rows: Integers, other: Point) -> None:
        """Take over some rows of the batch from another point."""
        self.flow[:, rows] = other.flow
        self.pressure[:, rows] = other.pressure
        self.z_low[:, rows] = other.z_low
        self.z_high[:, rows] = other.z_high
        self.iterations[rows] = other.iterations
        self.residual[rows] = other.residual


class _Iterate:
    """The moving unknowns of the rows still being solved."""

    def __init__(self, elements: Elements, start_pressure: Array) -> None:
        self.elements = elements
        self.has_low = np.isfinite(elements.low) & elements.active
        self.has_high = np.isfinite(elements.high) & elements.active
        self.bounds = np.maximum(self.has_low.sum(axis=0) + self.has_high.sum(axis=0), 1)
        self.flow = _start_flow(elements, self.has_low, self.has_high)
        self.pressure = start_pressure.copy()
        self.s_low = np.where(self.has_low, self.flow - elements.low, 1.0)
        self.s_high = np.where(self.has_high, elements.high - self.flow, 1.0)
        self.z_low = np.where(self.has_low, 1.0, 0.0)
        self.z_high = np.where(self.has_high, 1.0, 0.0)

    def keep(self, rows: Integers) -> None:
        """Go on with some rows only."""
        self.elements = self.elements.take(rows)
        self.bounds = self.bounds[rows]
        for name in ("has_low", "has_high", "flow", "pressure", "s_low", "s_high", "z_low", "z_high"):
            setattr(self, name, np.take(getattr(self, name), rows, axis=1))

    def measure(self) -> None:
        """Laws, residuals and duality gap at the present unknowns."""
        drop, self.slope = self.elements.laws(self.flow)
        unmet = drop - self.elements.driving(self.pressure) - self.z_low + self.z_high
        self.law_residual = np.where(self.elements.active, unmet, 0.0)
        self.node_residual = self.elements.node_residual(self.flow, self.pressure)
        self.gap = ((self.z_low * self.s_low).sum(axis=0) + (self.z_high * self.s_high).sum(axis=0)) / self.bounds
        self.residual = np.maximum(
            np.abs(self.law_residual).max(axis=0, initial=0.0), np.abs(self.node_residual).max(axis=0, initial=0.0)
        )

    def done(self) -> NDArray[np.bool_]:
        """Which rows are solved."""
        return (self.residual < RESIDUAL_GOAL) & (self.gap < GAP_GOAL)

    def step(self, *, plain: bool) -> None:
        """One predictor-corrector step, or one plainly centred step, of all rows."""
        el = self.elements
        stiffness = self.slope + self.z_low / self.s_low + self.z_high / self.s_high
        conductance = np.where(el.active, 1.0 / stiffness, 0.0)
        factors = el.factorise(conductance)
        if plain:
            low = PLAIN_CENTRING * self.gap - self.z_low * self.s_low
            high = PLAIN_CENTRING * self.gap - self.z_high * self.s_high
        else:
            move = self._solve(factors, conductance, -self.z_low * self.s_low, -self.z_high * self.s_high)
            length = self._length(move, 1.0)
            _, _, ds, dz_low, dz_high = move
            after = (
                ((self.z_low + length * dz_low) * (self.s_low + length * ds) * self.has_low).sum(axis=0)
                + ((self.z_high + length * dz_high) * (self.s_high - length * ds) * self.has_high).sum(axis=0)
            ) / self.bounds
            target = self.gap * np.clip(after / np.maximum(self.gap, 1e-300), 0.0, 1.0) ** 3
            low = target - self.z_low * self.s_low - dz_low * ds
            high = target - self.z_high * self.s_high + dz_high * ds
        move = self._solve(factors, conductance, low, high)
        length = self._length(move, STEP_TO_BOUNDARY)
        dq, dp, ds, dz_low, dz_high = move
        self.flow += length * dq
        self.pressure += length * dp
        self.s_low += np.where(self.has_low, length * ds, 0.0)
        self.s_high -= np.where(self.has_high, length * ds, 0.0)
        self.z_low += length * dz_low
        self.z_high += length * dz_high

    def _solve(self, factors: Array, conductance: Array, low: Array, high: Array) -> tuple[Array, ...]:
        """Step towards law and node balance and the wanted changes of the products z s."""
        low = np.where(self.has_low, low / self.s_low, 0.0)
        high = np.where(self.has_high, high / self.s_high, 0.0)
        dq, dp = self.elements.direction(factors, conductance, low - high - self.law_residual, -self.node_residual)
        dz_low = low - self.z_low / self.s_low * dq
        dz_high = high + self.z_high / self.s_high * dq
        return dq, dp, dq, dz_low, dz_high

    def _length(self, move: tuple[Array, ...], share: float) -> Array:
        """Longest common step [-], at most 1, that keeps slacks and multipliers positive."""
        _, _, ds, dz_low, dz_high = move
        fastest = np.full(ds.shape[1], share)
        for has, slack, change, multiplier, dz in (
            (self.has_low, self.s_low, ds, self.z_low, dz_low),
            (self.has_high, self.s_high, -ds, self.z_high, dz_high),
        ):
            shrink = np.where(has, -change / slack, 0.0).max(axis=0, initial=0.0)
            fade = np.where(has, -dz / np.where(has, multiplier, 1.0), 0.0).max(axis=0, initial=0.0)
            fastest = np.maximum(fastest, np.maximum(shrink, fade))
        return share / fastest


def _start_flow(elements: Elements, has_low: NDArray[np.bool_], has_high: NDArray[np.bool_]) -> Array:
    """A flow [-] strictly inside the bounds of each element."""
    share = 0.5 / np.maximum(elements.active.sum(axis=0), 1)
    low = np.where(has_low, elements.low, 0.0)
    high = np.where(has_high, elements.high, np.inf)
    room = np.where(has_low, 0.5 * (high - low), np.inf)
    start = np.where(has_low, low + np.minimum(share, room), np.minimum(share, high - 0.5 * np.abs(share)))
    return np.where(elements.active, start, 0.0)


def interior_point(elements: Elements, start_pressure: Array, *, plain: bool = False) -> Point:
    """Solve a batch of reduced networks.

    Parameters
    ----------
    elements
        The networks, scaled.
    start_pressure
        Node pressures [-] to start from, shape (nodes, batch).
    plain
        Plain centring instead of predictor and corrector: slower, for what the other does not bring down.

    Returns
    -------
    Point
        Rows that are not solved within the iteration limit keep a `residual` above the goal.
    """
    count = elements.batch
    shape = elements.constant.shape
    point = Point(
        np.zeros(shape), np.zeros((elements.node_count, count)), np.zeros(shape), np.zeros(shape),
        np.zeros(count, np.int64), np.full(count, np.inf),
    )  # fmt: skip
    rows = np.arange(count)
    now = _Iterate(elements, start_pressure)
    ended = np.zeros(count, bool)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        for iteration in range(MAX_ITERATIONS + 1):
            now.measure()
            last = iteration == MAX_ITERATIONS
            fresh = ~ended & (now.done() | ~np.isfinite(now.residual) | last)
            if fresh.any():
                _store(point, rows, now, fresh, iteration)
                ended |= fresh
            if ended.all():
                break
            if ended.mean() > COMPACT_SHARE:
                rows = rows[~ended]
                now.keep(np.flatnonzero(~ended))
                ended = np.zeros(len(rows), bool)
                now.measure()
            now.step(plain=plain)
    return point


def _store(point: Point, rows: Integers, now: _Iterate, ended: NDArray[np.bool_], iteration: int) -> None:
    """Write the rows that have ended into the point of the whole batch."""
    point.put(
        rows[ended],
        Point(
            now.flow[:, ended], now.pressure[:, ended], now.z_low[:, ended], now.z_high[:, ended],
            np.full(int(ended.sum()), iteration, np.int64), np.maximum(now.residual, now.gap)[ended],
        ),
    )  # fmt: skip
