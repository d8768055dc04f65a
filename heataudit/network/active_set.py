"""Finish a solution exactly: hold the bounds that are active, and take Newton steps on the rest."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from heataudit.network.elements import Elements, Integers
from heataudit.network.interior_point import Point, interior_point
from heataudit.network.linear import Array

EXACT = 1e-12
CLOSE = 1e-3
"""Slack [-] below which a bound with a fading multiplier is tried as active: the branch that is just about to open."""

ROUNDS = 12
Flags = NDArray[np.bool_]


def solve_reduced(elements: Elements, start_pressure: Array) -> Point:
    """Interior point, plain centring where that fails, exact finish. Shapes as in `interior_point`."""
    point = interior_point(elements, start_pressure)
    left = np.flatnonzero(point.residual > 1e-9)
    if left.size:
        again = interior_point(elements.take(left), start_pressure[:, left], plain=True)
        better = again.residual < point.residual[left]
        point.put(left[better], _rows(again, np.flatnonzero(better)))
    finish(elements, point)
    return point


def _rows(point: Point, rows: Integers) -> Point:
    """Some rows of a point."""
    return Point(
        point.flow[:, rows], point.pressure[:, rows], point.z_low[:, rows], point.z_high[:, rows],
        point.iterations[rows], point.residual[rows],
    )  # fmt: skip


def finish(elements: Elements, point: Point) -> Flags:
    """Newton steps with the active bounds held, in place; returns the rows, shape (batch,), that ended exactly.

    Rows in which this does not end keep what they had.
    """
    rows = np.flatnonzero(np.isfinite(point.residual))
    solved = np.zeros(elements.batch, bool)
    work = elements.take(rows)
    now = _rows(point, rows)
    held = _Held(work, now)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        for _ in range(ROUNDS):
            residual, wrong = held.measure()
            exact = (residual < EXACT) & ~wrong
            if exact.any():
                found = np.flatnonzero(exact)
                ended = held.point(found, residual[found])
                point.put(rows[found], ended)
                solved[rows[found]] = True
                rest = np.flatnonzero(~exact & np.isfinite(residual))
                rows = rows[rest]
                held = held.take(rest)
            if not rows.size:
                break
            held.step()
    return solved


class _Held:
    """A batch with some flows held at their bounds."""

    def __init__(self, elements: Elements, point: Point) -> None:
        self.elements = elements
        self.inside, self.pressure = point.flow, point.pressure.copy()
        self.flow = point.flow.copy()
        self.iterations = point.iterations.copy()
        slack_low, slack_high = self.flow - elements.low, elements.high - self.flow
        self.low = elements.active & np.isfinite(elements.low) & _is_active(slack_low, point.z_low)
        self.high = elements.active & np.isfinite(elements.high) & _is_active(slack_high, point.z_high) & ~self.low
        self._hold()

    def _hold(self) -> None:
        self.flow = np.where(self.low, self.elements.low, np.where(self.high, self.elements.high, self.flow))

    def take(self, rows: Integers) -> _Held:
        """Some rows of the batch."""
        other = object.__new__(_Held)
        other.elements = self.elements.take(rows)
        for name in ("inside", "flow", "pressure", "low", "high", "excess"):
            setattr(other, name, np.take(getattr(self, name), rows, axis=1))
        other.iterations = self.iterations[rows]
        return other

    def measure(self) -> tuple[Array, Flags]:
        """Residual [-] of each row, and whether a bound is held that should be let go or passed that should hold."""
        el = self.elements
        drop, _ = el.laws(self.flow)
        self.excess = np.where(el.active, drop - el.driving(self.pressure), 0.0)
        free = el.active & ~self.low & ~self.high
        unmet = np.where(free, self.excess, 0.0)
        unbalanced = el.node_residual(self.flow, self.pressure)
        residual = np.maximum(np.abs(unmet).max(axis=0, initial=0.0), np.abs(unbalanced).max(axis=0, initial=0.0))
        release_low, release_high = self.low & (self.excess < -EXACT), self.high & (self.excess > EXACT)
        pass_low, pass_high = free & (self.flow < el.low), free & (self.flow > el.high)
        settled = residual < 1e-6
        wrong = np.any(release_low | release_high | pass_low | pass_high, axis=0)
        self._let_go((release_low | release_high) & settled)
        self.low, self.high = self.low | pass_low, self.high | pass_high
        return residual, wrong

    def _let_go(self, which: Flags) -> None:
        """Free flows that a bound no longer holds; they go on from where the interior point left them."""
        self.low, self.high = self.low & ~which, self.high & ~which
        self.flow = np.where(which, self.inside, self.flow)

    def step(self) -> None:
        """One Newton step of the free flows and all pressures."""
        self._hold()
        el = self.elements
        drop, slope = el.laws(self.flow)
        free = el.active & ~self.low & ~self.high
        conductance = np.where(free, 1.0 / slope, 0.0)
        law_side = np.where(free, el.driving(self.pressure) - drop, 0.0)
        factors = el.factorise(conductance)
        dq, dp = el.direction(factors, conductance, law_side, -el.node_residual(self.flow, self.pressure))
        self.flow += dq
        self.pressure += dp
        self.iterations += 1

    def point(self, rows: Integers, residual: Array) -> Point:
        """The solution of some rows, multipliers from what the held laws lack."""
        return Point(
            self.flow[:, rows], self.pressure[:, rows],
            np.where(self.low, np.maximum(self.excess, 0.0), 0.0)[:, rows],
            np.where(self.high, np.maximum(-self.excess, 0.0), 0.0)[:, rows],
            self.iterations[rows], residual,
        )  # fmt: skip


def _is_active(slack: Array, multiplier: Array) -> Flags:
    """Whether a bound counts as active: little slack against its multiplier, or both about to vanish."""
    return (slack < 0.01 * multiplier) | ((slack < CLOSE) & (multiplier < CLOSE) & (slack < 1e3 * multiplier**0.5))
