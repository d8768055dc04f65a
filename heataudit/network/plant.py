"""What the component kinds look at while they make their branches: nodes, phases, oil, commands."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from heataudit.machine import TANK, Cycle, Machine, Move, Ports, Problem, WorkbookError, rows
from heataudit.network.kinds.loads import FORWARD, highest_load_pressure
from heataudit.network.linear import Array
from heataudit.network.topology import reached
from heataudit.physics.air import standard_pressure
from heataudit.physics.oil import Oil

BACKWARD = (Move.RETRACT, Move.REVERSE)

ONE_WAY = ("check", "relief", "load-sensing unloading", "priority")
"""Kinds of valve that oil passes from From only."""

Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Command:
    """What the duty cycle asks of one actuator, arrays of shape (phases,).

    `forward` feeds port A and `backward` port B; a `pressing` actuator is at its stop, one that is `floating` has both
    ports joined to the return. `opening` [-] is how far its spool may open, `speed` [m/s or 1/s] is asked or NaN.
    """

    forward: Flags
    backward: Flags
    pressing: Flags
    floating: Flags
    opening: Array
    speed: Array

    @property
    def moving(self) -> Flags:
        """Commanded and free to move."""
        return (self.forward | self.backward) & ~self.pressing


LOAD_SHARE = 1.3
"""Opening pressure of a counterbalance valve per highest load pressure [-] where none is given: common practice."""


def counterbalance_estimates(machine: Machine, ports: Ports) -> dict[str, float]:
    """Opening pressures [Pa] of the counterbalance valves that have none: 1.3 x the highest load at From."""
    blank = machine.valves[(machine.valves["kind"] == "counterbalance") & machine.valves["opening_pressure"].isna()]
    return {
        valve.name: LOAD_SHARE * highest_load_pressure(machine, ports, ports.node(valve.from_)) for valve in rows(blank)
    }


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
        self.estimates = counterbalance_estimates(machine, ports)
        self.cycle = cycle
        self.ports = ports
        self.phases = len(cycle.duration)
        self.node_count = len(ports)
        self.oil = machine_oil(machine)
        self.temperature = oil_temperature
        self.viscosity = self.oil.viscosity(oil_temperature)
        self.density = self.oil.density(oil_temperature)
        self.atmosphere = float(standard_pressure(machine.general["altitude"]))

    def node(self, label: str) -> int:
        """Node number [-] of a port label; the tank is node 0."""
        return self.ports.node(label or TANK)

    def new_node(self) -> int:
        """Number [-] of another node, one that no port label names."""
        self.node_count += 1
        return self.node_count - 1

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
            floating=moves == int(Move.FLOAT),
            opening=self.given(actuator, "opening", 1.0),
            speed=np.where(np.isnan(speed), travel / self.cycle.duration, speed),
        )

    def drive_speed(self, drive: str) -> float:
        """Speed [1/s] of a drive by its table; NaN where none is given."""
        drives = self.machine.drives
        return float(drives["speed"][drives["name"] == drive].iloc[0])

    def counterbalance_opening(self, valve: Any) -> float:
        """Opening pressure [Pa] of a counterbalance valve; an estimate where none is given."""
        if np.isnan(valve.opening_pressure):
            return self.estimates[valve.name]
        return float(valve.opening_pressure)

    def reach(self, start: int, without: tuple[str, ...]) -> set[int]:
        """Nodes that oil from a node may reach over lines and valves, kinds of valve `without` left out."""
        around: dict[int, set[int]] = defaultdict(set)
        for line in self.rows_of("lines"):
            around[self.node(line.from_)].add(self.node(line.to))
            around[self.node(line.to)].add(self.node(line.from_))
        for valve in self.rows_of("valves"):
            if valve.kind not in without:
                around[self.node(valve.from_)] |= {self.node(valve.to)}
                if valve.kind == "priority":
                    around[self.node(valve.from_)] |= {self.node(valve.port_3)}
                if valve.kind not in ONE_WAY:
                    around[self.node(valve.to)].add(self.node(valve.from_))
        around[0].clear()
        return reached(around, start)

    def is_compensated(self, section: str) -> bool:
        """Whether a section has a compensator that meters the flow asked for."""
        found = self.machine.sections["compensator"][self.machine.sections["name"] == section]
        return bool(len(found)) and found.iloc[0] != "none"

    def section_command(self, section: str) -> Command | None:
        """Command of the actuator that a section serves, if it serves one."""
        served = self.machine.actuators["name"][self.machine.actuators["section"] == section]
        return self.commands[served.iloc[0]] if len(served) else None

    def rows_of(self, table: str) -> list[Any]:
        """Components of a table as named tuples."""
        return rows(getattr(self.machine, table))
