"""The heat balance of the tank: heat that comes in and goes out over the oil's temperature, and where they agree."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

from heataudit.audit.losses import let_down_energy
from heataudit.audit.states import Solver, solve_at
from heataudit.audit.transport import passing
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.air import standard_pressure
from heataudit.physics.constants import KELVIN
from heataudit.physics.coolers import capacity_rate
from heataudit.physics.oil import Oil
from heataudit.physics.reservoir import Tank
from heataudit.physics.thermal_mass import heat_capacity

Array = NDArray[np.float64]

HOTTEST = KELVIN + 120.0
"""Oil temperature [K] above which no equilibrium is sought."""

CURVE_POINTS = 11
"""Temperatures at which the cycle is solved for the heat curve."""

CURVE_PHASES = 16384
"""Phases beyond which the shape of the heat curve is taken from a sample of the cycle."""

AGREEMENT = 0.005
"""Difference [K] up to which two approximations of an equilibrium agree."""

MOST_ROUNDS = 12
"""Approximations of an equilibrium at most."""

OFFLINE = "offline"


@dataclass(frozen=True)
class Surroundings:
    """Tank, oil and cooler of a machine.

    Parameters
    ----------
    machine
        Gives all of them.
    """

    machine: Machine

    @cached_property
    def oil(self) -> Oil:
        """The oil."""
        return Oil.from_settings(**self.machine.oil)

    @cached_property
    def tank(self) -> Tank:
        """The tank, in the air of the machine's altitude."""
        settings = self.machine.reservoir
        return Tank(
            volume=settings["oil_volume"], length=settings["length"], width=settings["width"],
            height=settings["height"], raised=settings["raised"], air_movement=settings["air_movement"],
            given_coefficient=settings["heat_transfer_coefficient"], extra_surface=settings["extra_surface"],
            pressure=float(standard_pressure(self.machine.general["altitude"])),
        )  # fmt: skip

    @property
    def surface(self) -> float:
        """Surface that gives off heat [m²]."""
        tank = self.tank
        return tank.wall_area + tank.extra_surface + tank.plan_area * (2 if tank.raised else 1)

    @property
    def ambient(self) -> float:
        """Yearly ambient temperature [K]."""
        return float(self.machine.general["ambient_temperature"])

    @property
    def design_ambient(self) -> float:
        """Hottest ambient temperature [K]."""
        return float(self.machine.general["design_ambient_temperature"])

    def coolant(self, ambient: float) -> float:
        """Temperature [K] of what cools the oil: as given, else the air.

        Parameters
        ----------
        ambient
            Temperature of the air [K].
        """
        given = self.machine.reservoir["cooler_coolant_temperature"]
        return ambient if given is None else float(given)

    @property
    def cooler_line(self) -> str | None:
        """The component whose flow passes the cooler; None for a circuit of its own."""
        name = str(self.machine.reservoir["cooler_flow_from"])
        return None if name == OFFLINE else name

    def oil_rate(self, flow: float, temperature: float) -> float:
        """Heat that a flow of oil carries per kelvin [W/K].

        Parameters
        ----------
        flow
            Flow [m³/s].
        temperature
            Oil temperature [K].
        """
        return float(capacity_rate(flow, self.oil.density(temperature), self.oil.specific_heat(temperature)))

    def heat_capacity(self, temperature: float) -> float:
        """Heat capacity of oil and steel [J/K].

        Parameters
        ----------
        temperature
            Oil temperature at which the oil's properties are taken [K].
        """
        settings = self.machine.reservoir
        return float(heat_capacity(
            settings["oil_volume"], self.oil.density(temperature), self.oil.specific_heat(temperature),
            settings["steel_mass"],
        ))  # fmt: skip

    def time_constant(self, temperature: float) -> float:
        """Time constant of the tank without a cooler [s], at yearly ambient.

        Parameters
        ----------
        temperature
            Oil temperature [K].
        """
        return self.heat_capacity(temperature) / float(self.tank.conductance(temperature, self.ambient))


def other_heat(machine: Machine, cycle: Cycle) -> Array:
    """Heat from outside the hydraulics [W], shape (phases,): the reservoir's, and that of each phase.

    Parameters
    ----------
    machine
        The machine.
    cycle
        Its phases.
    """
    return cycle.other_heat + float(machine.reservoir["other_heat"])


def cycle_mean(cycle: Cycle, values: Array) -> float:
    """Mean over the time of a cycle, in the unit of the values.

    Parameters
    ----------
    cycle
        The phases.
    values
        One value per phase [any unit], shape (phases,).
    """
    time = cycle.duration * cycle.repeats
    return float(values @ time / time.sum())


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
    def _heat(self) -> Callable[[float], Array]:
        curve: Callable[[float], Array] = PchipInterpolator(self.temperature, self.heat)
        return curve

    def coming(self, temperature: float) -> float:
        """Heat that comes in [W]: losses and other heat.

        Parameters
        ----------
        temperature
            Oil temperature [K].
        """
        return float(self._heat(temperature)) + self.other

    def cooled(self, temperature: float, capacity: float, coolant: float) -> float:
        """Heat that a cooler takes [W]: capacity x (oil inlet - coolant), at most what the oil's flow can bring.

        Parameters
        ----------
        temperature
            Oil temperature in the tank [K].
        capacity
            Of the cooler [W/K].
        coolant
            Temperature of what cools it [K].
        """
        if capacity == 0:
            return 0.0
        flow, reaching = (float(np.interp(temperature, self.temperature, v)) for v in (self.cooler_flow, self.reaching))
        rate = self.surroundings.oil_rate(flow, temperature)
        if rate == 0:
            return 0.0
        return min(capacity, rate) * (temperature + reaching / rate - coolant)

    def going(self, temperature: float, ambient: float, capacity: float) -> float:
        """Heat that goes out [W]: from the tank, and through a cooler.

        Parameters
        ----------
        temperature
            Oil temperature [K].
        ambient
            Temperature of the air [K].
        capacity
            Of the cooler [W/K].
        """
        tank = float(self.surroundings.tank.heat(temperature, ambient))
        return tank + self.cooled(temperature, capacity, self.surroundings.coolant(ambient))

    def equilibrium(self, ambient: float, capacity: float, extra: float = 0.0) -> float | None:
        """Oil temperature [K] at which as much goes out as comes in; the lowest one, None where there is none below 120 °C.

        Parameters
        ----------
        ambient
            Temperature of the air [K].
        capacity
            Of the cooler [W/K].
        extra
            Heat that comes in besides [W].
        """

        def excess(temperature: float) -> float:
            return self.coming(temperature) + extra - self.going(temperature, ambient, capacity)

        grid = np.linspace(self.temperature[0], HOTTEST, 241)
        signs = np.array([excess(float(temperature)) for temperature in grid])
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
        step = 0.5
        above, below = (
            self.going(t, ambient, capacity) - self.coming(t) for t in (temperature + step, temperature - step)
        )
        return (above - below) / (2 * step)

    def table(self) -> pd.DataFrame:
        """The curve as `Thermal.heat_curve` says."""
        around, points = self.surroundings, [float(t) for t in self.temperature]
        capacity = float(around.machine.reservoir["cooler_capacity"])
        return pd.DataFrame({
            "oil_C": self.temperature - KELVIN,
            "heat_kW": (self.heat + self.other) / 1e3,
            "tank_kW": [self.going(t, around.ambient, 0.0) / 1e3 for t in points],
            "tank_and_cooler_kW": [self.going(t, around.ambient, capacity) / 1e3 for t in points],
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
    temperatures = np.linspace(min(known) - 1.0, max(HOTTEST, *known) + 1.0, CURVE_POINTS)
    if len(cycle) > CURVE_PHASES:
        cycle = cycle.take(np.linspace(0, len(cycle) - 1, CURVE_PHASES).astype(np.intp))
    samples = [sample(surroundings, cycle, solution)
               for solution in solve_at(solver, machine, cycle, temperatures.tolist())]  # fmt: skip
    return HeatCurve(
        surroundings, temperatures, np.array([s.heat for s in samples]), np.array([s.reaching for s in samples]),
        np.array([s.cooler_flow for s in samples]), cycle_mean(cycle, other_heat(machine, cycle)),
    )  # fmt: skip


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

    The cycle is solved at the temperature that the curve gives, the curve is scaled to what was found, and so on.

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
    balance = None
    for _ in range(MOST_ROUNDS):
        temperature = curve.equilibrium(around.ambient, capacity)
        if temperature is None or (balance and abs(temperature - balance.temperature) < AGREEMENT):
            return balance if temperature is not None else None
        (solution,) = solve_at(solver, around.machine, cycle, [temperature])
        found = sample(around, cycle, solution)
        curve = curve.through(temperature, found)
        balance = Balance(temperature, solution, found, curve)
    return balance
