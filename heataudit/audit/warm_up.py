"""How the oil warms from a cold start over repeated cycles, and how its temperature swings within one."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import pandas as pd
from scipy.integrate import solve_ivp

from heataudit.audit.surroundings import other_heat
from heataudit.audit.thermal import HOTTEST, Balance, HeatCurve
from heataudit.machine import Cycle
from heataudit.physics.arrays import Array
from heataudit.physics.constants import KELVIN

RISE_REACHED = 0.95
"""Share [-] of the rise at which the oil counts as warm."""

ROWS = 121
"""Times in the table of the warm-up."""

SHOWN = 2.0
"""How long a warm-up is shown, as a multiple [-] of the time to its 95 %."""

LONGEST = 40.0
"""How long a warm-up is followed, in time constants of the tank [-]."""

SCAN = 30.0
"""Time [-], in time constants, that is scanned in one piece: exp(30) keeps ten digits of what it is added to."""


@dataclass(frozen=True)
class WarmUp:
    """The oil's temperature after a start, as cycle means.

    Parameters
    ----------
    path
        Temperature of the oil [K] over the time since the start [s], up to `end`.
    end
        How long it is followed [s].
    warm_after
        Time [s] to 95 % of the way to the equilibrium; None where there is none.
    heat_capacity
        Of oil and steel [J/K].
    """

    path: Callable[[Array], Array]
    end: float
    warm_after: float | None
    heat_capacity: float

    @property
    def shown(self) -> float:
        """How long it is worth showing [s]."""
        return self.end if self.warm_after is None else min(SHOWN * self.warm_after, self.end)


def warm_up(curve: HeatCurve, capacity: float, equilibrium: float | None) -> WarmUp:
    """Follow the oil from the start temperature: C dT/dt = heat in - heat out, at yearly ambient.

    The heat capacity C is that at the mean of start and equilibrium (120 °C where there is none, where it also ends).

    Parameters
    ----------
    curve
        Heat over the oil's temperature.
    capacity
        Of the cooler [W/K].
    equilibrium
        Where the oil's temperature ends [K], or None.
    """
    around = curve.surroundings
    start = float(around.machine.general["start_temperature"])
    end = HOTTEST if equilibrium is None else equilibrium
    mass = around.heat_capacity(0.5 * (start + end))
    target = start + RISE_REACHED * (end - start)

    def rate(_: float, state: Array) -> list[float]:
        temperature = float(state[0])
        return [float(curve.coming(temperature) - curve.going(temperature, around.ambient, capacity)) / mass]

    def warm(_: float, state: Array) -> float:
        return float(state[0]) - target

    def boiling(_: float, state: Array) -> float:
        return float(state[0]) - HOTTEST

    boiling.terminal = equilibrium is None  # type: ignore[attr-defined]
    slowest = mass / float(around.tank.conductance(around.ambient, around.ambient))
    run = solve_ivp(
        rate, (0.0, LONGEST * slowest), [start], events=(warm, boiling), method="LSODA", rtol=1e-8, atol=1e-6,
        dense_output=True,
    )  # fmt: skip
    reached = [0.0] if abs(end - start) < 1e-6 else run.t_events[0].tolist()
    warm_after = float(reached[0]) if equilibrium is not None and reached else None
    return WarmUp(lambda time: run.sol(time)[0], float(run.t[-1]), warm_after, mass)


def warm_up_table(with_cooler: WarmUp, without_cooler: WarmUp) -> pd.DataFrame:
    """Both warm-ups over time as `Thermal.warm_up` says; NaN where the oil has passed 120 °C.

    Parameters
    ----------
    with_cooler
        With the existing cooler.
    without_cooler
        Without it.
    """
    both = {"with_cooler_C": with_cooler, "without_cooler_C": without_cooler}
    time = np.linspace(0.0, max(run.shown for run in both.values()), ROWS)
    followed = {
        name: np.where(time <= run.end, run.path(np.minimum(time, run.end)) - KELVIN, np.nan)
        for name, run in both.items()
    }
    return pd.DataFrame({"time_min": time / 60.0, **followed})


def ripple(balance: Balance, cycle: Cycle, capacity: float) -> float:
    """How far the oil's temperature swings [K] within one cycle once it repeats itself.

    About the equilibrium, C dT/dt = P(t) - G (T - T_eq), P the heat of each phase less the mean: exact exponentials.

    Parameters
    ----------
    balance
        The equilibrium.
    cycle
        The phases.
    capacity
        Of the cooler [W/K].
    """
    around = balance.curve.surroundings
    slope = balance.curve.slope(balance.temperature, around.ambient, capacity)
    constant = around.heat_capacity(balance.temperature) / max(slope, 1e-9)
    power = balance.sample.phase_heat + other_heat(around.machine, cycle)
    time = cycle.duration * cycle.repeats
    return swing(time / constant, (power - power @ time / time.sum()) / max(slope, 1e-9))


def swing(steps: Array, steady: Array) -> float:
    """Highest less lowest value [K] of dx/dt = x_steady - x once it repeats itself.

    Parameters
    ----------
    steps
        Length of each step in time constants [-], shape (steps,).
    steady
        Steady value of each step [K], shape (steps,).
    """
    path = _follow(steps, steady, 0.0)
    start = path[-1] / -np.expm1(-steps.sum())
    path = _follow(steps, steady, start)
    return float(max(path.max(), start) - min(path.min(), start))


def _follow(steps: Array, steady: Array, start: float) -> Array:
    """Values at the ends of all steps.

    Within a piece, x_k = exp(-t_k) (x_0 + sum of steady_j (exp(t_j) - exp(t_(j-1)))); long steps stand alone.
    """
    apart = (np.diff(np.floor(np.cumsum(steps) / SCAN)) > 0) | (steps[:-1] > SCAN)
    pieces = [0, *(1 + np.flatnonzero(apart)).tolist(), len(steps)]
    path = np.empty(len(steps))
    value = start
    for first, last in pairwise(pieces):
        part = slice(first, last)
        here = np.cumsum(steps[part])
        if last - first == 1:
            path[part] = steady[part] + (value - steady[part]) * np.exp(-here)
        else:
            gains = np.exp(here) * -np.expm1(-steps[part])
            path[part] = (value + np.cumsum(steady[part] * gains)) * np.exp(-here)
        value = float(path[last - 1])
    return path
