"""What the component kinds look at while they make their branches: nodes, phases, oil, commands."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from heataudit.machine import TANK, Cycle, Machine, Move, Ports, Problem, WorkbookError
from heataudit.network.linear import Array
from heataudit.physics.air import standard_pressure
from heataudit.physics.oil import Oil

FORWARD = (Move.EXTEND, Move.FORWARD, Move.ON, Move.PRESS)
BACKWARD = (Move.RETRACT, Move.REVERSE)

Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Command:
    """What the duty cycle asks of one actuator, arrays of shape (phases,).

    `forward` feeds port A and `backward` port B; a `pressing` actuator is at its stop. `opening` [-] is how far its
    spool may open, `speed` [m/s or 1/s] is asked or NaN.
    """

    forward: Flags
    backward: Flags
    pressing: Flags
    opening: Array
    speed: Array

    @property
    def moving(self) -> Flags:
        """Commanded and free to move."""
        return (self.forward | self.backward) & ~self.pressing


def machine_oil(machine: Machine) -> Oil:
    """The oil of a machine.

    Raises
    ------
    WorkbookError
        No viscosity curve belongs to what the sheet Oil says.
    """
    try:
        return Oil.from_settings(**machine.oil)
    except ValueError as error:
        text = f'the oil has no viscosity curve: {error}; give "Viscosity at 40" and "Viscosity at 100" in its place'
        raise WorkbookError([Problem("Oil", "", text)], machine.warnings) from error


class Plant:
    """A machine, the phases to be solved and the state of its oil.

    Parameters
    ----------
    machine
        What was read from the workbook.
    cycle
        The phases to solve (N of them).
    oil_temperature
        Oil temperature [K] in each phase, shape (N,).
    """

    def __init__(self, machine: Machine, cycle: Cycle, ports: Ports, oil_temperature: Array) -> None:
        """Oil at the given temperatures."""
        self.machine = machine
        self.cycle = cycle
        self.ports = ports
        self.phases = len(cycle.duration)
        self.oil = machine_oil(machine)
        self.temperature = oil_temperature
        self.viscosity = self.oil.viscosity(oil_temperature)
        self.density = self.oil.density(oil_temperature)
        self.atmosphere = float(standard_pressure(machine.general["altitude"]))

    def node(self, label: str) -> int:
        """Node number [-] of a port label; the tank is node 0."""
        return self.ports.node(label or TANK)

    def given(self, component: str, quantity: str, default: float | Array) -> Array:
        """What the duty cycle says of a component, shape (N,), or the default where it says nothing."""
        value = self.cycle.value(component, quantity)
        return np.where(np.isnan(value), default, value)

    @cached_property
    def commands(self) -> dict[str, Command]:
        """Commands of every actuator."""
        return {name: self._command(name) for name in self.machine.actuators["name"]}

    def _command(self, actuator: str) -> Command:
        moves = self.cycle.moves.get(actuator, np.zeros(self.phases, np.int8))
        speed = self.cycle.value(actuator, "speed")
        travel = self.cycle.value(actuator, "travel")
        return Command(
            forward=np.isin(moves, [int(m) for m in FORWARD]),
            backward=np.isin(moves, [int(m) for m in BACKWARD]),
            pressing=moves == int(Move.PRESS),
            opening=self.given(actuator, "opening", 1.0),
            speed=np.where(np.isnan(speed), travel / self.cycle.duration, speed),
        )

    def drive_speed(self, drive: str) -> float:
        """Speed [1/s] of a drive by its table; NaN where none is given."""
        drives = self.machine.drives
        return float(drives["speed"][drives["name"] == drive].iloc[0])

    def section_command(self, section: str) -> Command | None:
        """Command of the actuator that a section serves, if it serves one."""
        served = self.machine.actuators["name"][self.machine.actuators["section"] == section]
        return self.commands[served.iloc[0]] if len(served) else None

    def rows_of(self, table: str) -> list[Any]:
        """Components of a table as named tuples."""
        return list(getattr(self.machine, table).itertuples(index=False))
