"""The heat balance of the tank: heat that comes in and goes out over the oil's temperature, and where they agree."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
import pandas as pd
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

from heataudit.audit.losses import let_down_energy
from heataudit.audit.states import Solver, solve_at
from heataudit.audit.surroundings import Surroundings, cycle_mean, other_heat
from heataudit.audit.transport import passing
from heataudit.machine import Cycle
from heataudit.network.solution import Solution
from heataudit.physics.arrays import Array, Numbers
from heataudit.physics.constants import KELVIN

HOTTEST = KELVIN + 120.0
"""Oil temperature [K] above which no equilibrium is sought."""

CURVE_POINTS = 11
"""Temperatures at which the cycle is solved for the heat curve."""

CURVE_PHASES = 16384
"""Phases beyond which the shape of the heat curve is taken from a sample of the cycle."""

CHILLED = 60.0
"""How far [K] below all named temperatures an equilibrium is sought where heat is taken from the oil from outside."""

AGREEMENT = 0.005
"""Difference [K] up to which two approximations of an equilibrium agree."""

MOST_ROUNDS = 30
"""Approximations of an equilibrium at most."""


@dataclass(frozen=True)
class Sample:
    """A cycle at one oil temperature: its means and the heat of each phase.

    Parameters
    ----------
    heat
        Mean heat of the losses [W].
    reaching
        Mean heat that reaches the cooler with the oil [W]; 0 for an offline one.
    cooler_flow
        Mean oil flow through the cooler [m³/s]; infinite for an offline one whose flow is not given.
    phase_heat
        Heat of the losses in each phase [W], shape (phases,).
    """

    heat: float
    reaching: float
    cooler_flow: float
    phase_heat: Array


def sample(surroundings: Surroundings, cycle: Cycle, solution: Solution) -> Sample:
    """Means of a solved cycle.

    Parameters
    ----------
    surroundings
        Tells which flow passes the cooler.
    cycle
        The phases.
    solution
        What the network found for them.
    """
    machine = surroundings.machine
    heat = solution.heat + let_down_energy(machine, cycle, solution) / cycle.duration
    if surroundings.cooler_line is None:
        given = machine.reservoir["cooler_oil_flow"]
        return Sample(cycle_mean(cycle, heat), 0.0, np.inf if given is None else float(given), heat)
    flow, reaching = passing(machine, cycle, solution, surroundings.cooler_line)
    return Sample(cycle_mean(cycle, heat), cycle_mean(cycle, reaching), cycle_mean(cycle, flow), heat)


@dataclass(frozen=True)
class HeatCurve:
    """Means of the cycle over the oil's temperature, by monotone cubics between solved points.

    Parameters
    ----------
    surroundings
        Tank, oil and cooler.
    temperature
        Solved oil temperatures [K], rising, shape (points,).
    heat
        Mean heat of the losses [W], shape (points,).
    reaching
        Mean heat that reaches the cooler [W], shape (points,).
    cooler_flow
        Mean oil flow through the cooler [m³/s], shape (points,).
    other
        Mean heat from outside the hydraulics [W].
    """

    surroundings: Surroundings
    temperature: Array
    heat: Array
    reaching: Array
    cooler_flow: Array
    other: float

    @cached_property
    def _heat(self) -> Callable[[Numbers], Array]:
        curve: Callable[[Numbers], Array] = PchipInterpolator(self.temperature, self.heat)
        return curve

    def coming(self, temperature: Numbers) -> Array:
        """Heat that comes in [W]: losses and other heat.

        Parameters
        ----------
        temperature
            Oil temperature [K], any shape.
        """
        return np.asarray(self._heat(temperature) + self.other)

    def cooler_oil(self, temperature: Numbers) -> tuple[Numbers, Numbers]:
        """Capacity rate [W/K] and inlet temperature [K] of the oil that passes the cooler.

        Parameters
        ----------
        temperature
            Oil temperature in the tank [K], any shape.
        """
        if np.isinf(self.cooler_flow[0]):
            return np.inf, temperature
        flow, reaching = (np.interp(temperature, self.temperature, v) for v in (self.cooler_flow, self.reaching))
        rate = self.surroundings.oil_rate(flow, temperature)
        return rate, temperature + np.divide(reaching, rate, out=np.zeros_like(rate), where=rate > 0)

    def cooled(self, temperature: Numbers, capacity: float, coolant: float) -> Array:
        """Heat that a cooler takes [W]: capacity x (oil inlet - coolant), at most what the oil's flow can bring.

        Parameters
        ----------
        temperature
            Oil temperature in the tank [K], any shape.
        capacity
            Of the cooler [W/K].
        coolant
            Temperature of what cools it [K].
        """
        rate, inlet = self.cooler_oil(temperature)
        return np.asarray(np.minimum(capacity, rate) * (np.asarray(inlet) - coolant))

    def going(self, temperature: Numbers, ambient: float, capacity: float) -> Array:
        """Heat that goes out [W]: from the tank, and through a cooler.

        Parameters
        ----------
        temperature
            Oil temperature [K], any shape.
        ambient
            Temperature of the air [K].
        capacity
            Of the cooler [W/K].
        """
        around = self.surroundings
        tank = around.tank.heat(temperature, ambient)
        return np.asarray(tank + self.cooled(temperature, capacity, around.coolant(ambient)))

    def equilibrium(self, ambient: float, capacity: float, extra: float = 0.0) -> float | None:
        """Lowest oil temperature [K] at which as much heat goes out as comes in; None where there is none below 120 °C.

        Parameters
        ----------
        ambient
            Temperature of the air [K].
        capacity
            Of the cooler [W/K].
        extra
            Heat that comes in besides [W].
        """

        def excess(temperature: Numbers) -> Array:
            return self.coming(temperature) + extra - self.going(temperature, ambient, capacity)

        grid = np.linspace(self.temperature[0], HOTTEST, 241)
        signs = excess(grid)
        out = np.flatnonzero((signs[:-1] >= 0) & (signs[1:] < 0))
        if not len(out):
            return None
        return float(brentq(excess, grid[out[0]], grid[out[0] + 1], xtol=1e-6))

    def through(self, temperature: float, found: Sample) -> HeatCurve:
        """The curve scaled so that it goes through a solved point.

        Parameters
        ----------
        temperature
            Oil temperature [K].
        found
            The cycle, solved at it.
        """
        here = float(self._heat(temperature))
        return replace(self, heat=self.heat * (found.heat / here if here > 0 else 1.0))

    def slope(self, temperature: float, ambient: float, capacity: float) -> float:
        """How fast what goes out rises over what comes in [W/K].

        Parameters
        ----------
        temperature
            Oil temperature [K].
        ambient
            Temperature of the air [K].
        capacity
            Of the cooler [W/K].
        """
        around = np.array([temperature - 0.5, temperature + 0.5])
        return float(np.diff(self.going(around, ambient, capacity) - self.coming(around))[0])

    def table(self) -> pd.DataFrame:
        """The curve as `Thermal.heat_curve` says."""
        around = self.surroundings
        capacity = float(around.machine.reservoir["cooler_capacity"])
        return pd.DataFrame({
            "oil_C": self.temperature - KELVIN,
            "heat_kW": (self.heat + self.other) / 1e3,
            "tank_kW": self.going(self.temperature, around.ambient, 0.0) / 1e3,
            "tank_and_cooler_kW": self.going(self.temperature, around.ambient, capacity) / 1e3,
        })  # fmt: skip


def heat_curve(surroundings: Surroundings, cycle: Cycle, solver: Solver) -> HeatCurve:
    """Solve a cycle over the range of temperatures that its oil may have.

    Parameters
    ----------
    surroundings
        Tank, oil and cooler; gives the range.
    cycle
        The phases. Of a long log an evenly spaced sample gives the shape of the curve.
    solver
        Solves a batch of phases.
    """
    machine, general = surroundings.machine, surroundings.machine.general
    named = [surroundings.ambient, surroundings.design_ambient, general["start_temperature"],
             surroundings.coolant(surroundings.ambient), general["highest_oil_temperature"],
             general["oil_temperature"]]  # fmt: skip
    known = [float(temperature) for temperature in named if temperature is not None]
    other = cycle_mean(cycle, other_heat(machine, cycle))
    coldest = min(known) - (1.0 if other >= 0 else CHILLED)
    temperatures = np.linspace(coldest, max(HOTTEST, *known) + 1.0, CURVE_POINTS)
    if len(cycle) > CURVE_PHASES:
        cycle = cycle.take(np.linspace(0, len(cycle) - 1, CURVE_PHASES).astype(np.intp))
    samples = [sample(surroundings, cycle, solution)
               for solution in solve_at(solver, machine, cycle, temperatures.tolist())]  # fmt: skip
    table = np.array([(s.heat, s.reaching, s.cooler_flow) for s in samples]).T
    solved = np.isfinite(table[0])
    heat, reaching, flow = table[:, solved]
    return HeatCurve(surroundings, temperatures[solved], heat, reaching, flow, other)


@dataclass(frozen=True)
class Balance:
    """A heat balance that a solve has confirmed.

    Parameters
    ----------
    temperature
        Oil temperature [K].
    solution
        The cycle, solved at it.
    sample
        Its means.
    curve
        The heat curve through this point.
    """

    temperature: float
    solution: Solution
    sample: Sample
    curve: HeatCurve


def find_balance(curve: HeatCurve, cycle: Cycle, solver: Solver, capacity: float) -> Balance | None:
    """The temperature at which as much heat goes out as comes in at yearly ambient, to 0.01 K; None below 120 °C.

    The cycle is solved at the temperature that the curve gives, the curve is scaled to what was found, and so on. Where
    the heat jumps, temperatures on either side of the jump close in on it.

    Parameters
    ----------
    curve
        Heat over the oil's temperature.
    cycle
        The phases.
    solver
        Solves a batch of phases.
    capacity
        Of the cooler [W/K].
    """
    around = curve.surroundings
    balance, too_cold, too_hot = None, -np.inf, np.inf
    for _ in range(MOST_ROUNDS):
        temperature = curve.equilibrium(around.ambient, capacity)
        if (
            balance
            and np.isfinite(too_hot - too_cold)
            and (temperature is None or _off(temperature, too_cold, too_hot))
        ):
            temperature = 0.5 * (too_cold + too_hot)
        if temperature is None or (balance and abs(temperature - balance.temperature) < AGREEMENT):
            return balance if temperature is not None else None
        (solution,) = solve_at(solver, around.machine, cycle, [temperature])
        found = sample(around, cycle, solution)
        curve = curve.through(temperature, found)
        balance = Balance(temperature, solution, found, curve)
        if curve.coming(temperature) > curve.going(temperature, around.ambient, capacity):
            too_cold = temperature
        else:
            too_hot = temperature
    return balance


def _off(temperature: float, low: float, high: float) -> bool:
    """Whether a temperature [K] lies outside a range by more than what counts as agreement."""
    return not low - AGREEMENT < temperature < high + AGREEMENT
