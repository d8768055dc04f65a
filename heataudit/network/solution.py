"""What a solved batch of phases is: flows, pressures, powers and heat of every component, in SI units."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from heataudit.machine import Ports
from heataudit.network.linear import Array

Flags = NDArray[np.bool_]


class State(IntEnum):
    """What an actuator does in a phase."""

    HELD = 0
    MOVING = 1
    SLOW = 2
    STALLED = 3
    FLOATING = 4


@dataclass(frozen=True)
class ComponentState:
    """Lines, valves, sections, galleries and void sources; arrays of shape (components, phases).

    Parameters
    ----------
    name, kind
        Of each component. Kinds are "line", the valve kinds of the workbook, "section", "gallery", "void".
    flow
        Flow [m³/s], positive from From to To; of a section that of its feed edge.
    drop
        Pressure drop [Pa] from From to To, rise included; of a section that from P to the working port.
    heat
        Heat [W] set free: flow times drop, lifting taken off; of a section that of both edges.
    return_heat
        The part of a section's heat [W] that its return edge sets free; 0 for other kinds.
    lifting
        Power [W] that lifts the oil; 0 for all but lines.
    """

    name: tuple[str, ...]
    kind: tuple[str, ...]
    flow: Array
    drop: Array
    heat: Array
    return_heat: Array
    lifting: Array


@dataclass(frozen=True)
class PumpState:
    """Pumps; arrays of shape (pumps, phases).

    Parameters
    ----------
    name
        Of each pump.
    pressure, inlet_pressure
        At the outlet and at the suction port [Pa].
    flow
        Delivered flow [m³/s], displacement flow less slip.
    slip
        Slip flow [m³/s], leaving by the drain.
    speed
        [1/s].
    displacement
        Displacement in use [-], as a share of the full one.
    setting
        Pressure setting [Pa] in force; NaN for a fixed pump.
    shaft_power
        [W].
    heat
        Shaft power less hydraulic power [W].
    """

    name: tuple[str, ...]
    pressure: Array
    inlet_pressure: Array
    flow: Array
    slip: Array
    speed: Array
    displacement: Array
    setting: Array
    shaft_power: Array
    heat: Array


@dataclass(frozen=True)
class ActuatorState:
    """Actuators; arrays of shape (actuators, phases).

    Parameters
    ----------
    name, kind
        Of each actuator; kinds as in the workbook.
    section
        Name of the section that serves it, "" where none does.
    state
        Codes of `State`.
    flow
        Flow [m³/s] into its inlet (out of A for a plunger that returns), positive in the commanded direction.
    speed
        [m/s], for motors [1/s], positive in the commanded direction; 0 for a constant pressure consumer.
    asked_speed
        [m/s or 1/s]; NaN where the cycle asks for none.
    inlet, outlet
        Pressure [Pa] at the inlet and at the outlet; NaN where an actuator is held or has no such port.
    load
        Load [N or N·m] against the move, negative where it drives; a constant pressure consumer's load pressure [Pa];
        NaN without a command.
    opening
        Opening [-] of its spool; NaN without a section.
    power
        Mechanical power [W] on the load, negative where the load drives.
    heat
        Hydraulic power taken less mechanical power given [W].
    """

    name: tuple[str, ...]
    kind: tuple[str, ...]
    section: tuple[str, ...]
    state: NDArray[np.int8]
    flow: Array
    speed: Array
    asked_speed: Array
    inlet: Array
    outlet: Array
    load: Array
    opening: Array
    power: Array
    heat: Array


@dataclass(frozen=True)
class Solution:
    """A batch of N solved phases in SI units; pressures are gauge.

    Parameters
    ----------
    ports
        Nodes of the machine.
    pressure
        Node pressures [Pa], shape (nodes, N); NaN where nothing is connected to a node in a phase.
    oil_temperature, viscosity, density
        [K], [m²/s] at zero gauge, [kg/m³], shape (N,).
    components, pumps, actuators
        States of the components.
    converged
        Whether a phase was solved, shape (N,).
    iterations
        Solver iterations [-], shape (N,).
    residual
        Worst residual [-], as a share of the pump flow or of 100 bar, shape (N,).
    node_balance
        Worst flow that a node has left over [-], as a share of the largest flow of the phase, shape (N,).
    balance_error
        Shaft power less power on loads, lifting and heat of all components [W], shape (N,).
    """

    ports: Ports
    pressure: Array
    oil_temperature: Array
    viscosity: Array
    density: Array
    components: ComponentState
    pumps: PumpState
    actuators: ActuatorState
    converged: Flags
    iterations: NDArray[np.int64]
    residual: Array
    node_balance: Array
    balance_error: Array

    @property
    def phases(self) -> int:
        """Number of phases [-]."""
        return len(self.oil_temperature)

    @property
    def shaft_power(self) -> Array:
        """Shaft power [W] of all pumps, shape (N,)."""
        return self.pumps.shaft_power.sum(axis=0)

    @property
    def load_power(self) -> Array:
        """Mechanical power [W] on all loads, signed, shape (N,)."""
        return self.actuators.power.sum(axis=0)

    @property
    def lifting_power(self) -> Array:
        """Power [W] that lifts oil in the lines, signed, shape (N,)."""
        return self.components.lifting.sum(axis=0)

    @property
    def heat(self) -> Array:
        """Heat [W] of all components, shape (N,); the decompression of trapped oil is not among it."""
        return self.components.heat.sum(axis=0) + self.pumps.heat.sum(axis=0) + self.actuators.heat.sum(axis=0)
