"""What a machine's heat goes to: tank, oil and cooler, and the means of its cycle."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from heataudit.machine import Cycle, Machine
from heataudit.physics.air import standard_pressure
from heataudit.physics.arrays import Array, Numbers
from heataudit.physics.coolers import capacity_rate
from heataudit.physics.oil import Oil
from heataudit.physics.reservoir import Tank
from heataudit.physics.thermal_mass import heat_capacity

OFFLINE = "offline"
"""What stands for a cooler with an oil circuit of its own."""


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

    def oil_rate(self, flow: Numbers, temperature: Numbers) -> Array:
        """Heat that a flow of oil carries per kelvin [W/K].

        Parameters
        ----------
        flow
            Flow [m³/s], any shape.
        temperature
            Oil temperature [K], any shape.
        """
        return capacity_rate(flow, self.oil.density(temperature), self.oil.specific_heat(temperature))

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
