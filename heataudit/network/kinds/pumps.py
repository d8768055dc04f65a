"""Pumps: displacement, slip, control."""

from __future__ import annotations

from typing import Any

import numpy as np

from heataudit.network.branches import Branch, Injection
from heataudit.network.elements import Integers
from heataudit.network.kinds.sections import Section
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.unknowns import PRESSURE_TOLERANCE, PRESSURE_UNIT, Look, Trial, Unknown
from heataudit.physics.pumps import slip_coefficient, slip_coefficient_from_test, viscosity_ratio

SENSING = ("load sensing", "speed controlled")
"""Controls that hold a margin over the highest load."""

NEVER_ON_THE_WAY = ("relief", "unloading", "load-sensing unloading")
"""Kinds of valve over which no pump feeds a bank."""


def speed(pump: Any, plant: Plant) -> Array:
    """Speed [1/s] of a pump, shape (phases,): the cycle's, else its drive's by the ratio, else its own."""
    own = np.full(plant.phases, float(pump.speed))
    if pump.drive:
        of_drive = plant.given(pump.drive, "speed", plant.drive_speed(pump.drive)) * pump.speed_ratio
        own = np.where(np.isnan(of_drive), own, of_drive)
    return plant.given(pump.name, "speed", own)


def full_flow(pump: Any, plant: Plant) -> Array:
    """Displacement flow [m³/s] at full displacement, slip not taken off, shape (phases,)."""
    return pump.displacement * speed(pump, plant)


def slip(pump: Any, plant: Plant) -> Array:
    """Slip flow per pressure [m³/(s Pa)], shape (phases,)."""
    ratio = viscosity_ratio(plant.viscosity, pump.rated_viscosity, pump.viscosity_exponent)
    if np.isnan(pump.test_flow):
        return slip_coefficient(pump.displacement, pump.speed, pump.volumetric_efficiency, pump.rated_pressure, ratio)
    tested = viscosity_ratio(pump.test_viscosity, pump.rated_viscosity, pump.viscosity_exponent)
    at_test = slip_coefficient_from_test(pump.displacement, pump.test_speed, pump.test_flow, pump.test_pressure, tested)
    return at_test / ratio


def setting(pump: Any, plant: Plant) -> Array:
    """Pressure setting [Pa] of a variable pump, shape (phases,)."""
    return plant.given(pump.name, "setting", pump.setting)


def make(pump: Any, plant: Plant) -> tuple[list[Branch], list[Injection]]:
    """Branches and injections of a pump: its displacement by its control, and its slip from outlet to drain."""
    outlet, suction, drain = plant.node(pump.outlet), plant.node(pump.suction), plant.node(pump.drain_to)
    flow = full_flow(pump, plant)
    if pump.control == "set displacement":
        return _closed_loop(pump, plant, (suction, outlet, drain), flow)
    branches = _slip(pump, plant, "slip", (outlet, suction, drain))
    if pump.control == "fixed":
        return branches, [Injection(pump.name, outlet, flow), Injection(pump.name, suction, -flow)]
    box = Branch(
        pump.name, "displacement", suction, outlet, constant=-setting(pump, plant), power=_power(pump, plant), low=0.0,
        high=flow, open=flow > 0, driven_from=0, driven_to=outlet,
    )  # fmt: skip
    return [*branches, box], []


def _power(pump: Any, plant: Plant) -> Array:
    """Swept flow times outlet pressure [W] that the torque limit allows at the pump's speed; 0 without a limit."""
    if np.isnan(pump.power_limit):
        return np.zeros(plant.phases)
    return pump.power_limit * speed(pump, plant) / pump.speed


def _slip(pump: Any, plant: Plant, role: str, ports: tuple[int, int, int], *, low: float = -np.inf) -> list[Branch]:
    """Slip from the pump's high side to its drain, driven by the high less the low side."""
    high_side, low_side, drain = ports
    leak = slip(pump, plant)
    if not np.any(leak > 0):
        return []
    leaks = leak > 0
    return [
        Branch(
            pump.name, role, high_side, drain, linear=1.0 / np.where(leaks, leak, 1.0), low=low,
            open=leaks & (speed(pump, plant) > 0), driven_from=high_side, driven_to=low_side,
        )
    ]  # fmt: skip


def _closed_loop(
    pump: Any, plant: Plant, ports: tuple[int, int, int], flow: Array
) -> tuple[list[Branch], list[Injection]]:
    """A set share of the displacement either way; each side slips while it is the high one, the low one is charged."""
    suction, outlet, drain = ports
    swept = flow * plant.given(pump.name, "displacement", 1.0)
    branches = _slip(pump, plant, "slip", (outlet, suction, drain), low=0.0)
    branches += _slip(pump, plant, "slip back", (suction, outlet, drain), low=0.0)
    for role, side in (("charge", suction), ("charge back", outlet)):
        branches.append(Branch(pump.name, role, 0, side, constant=-pump.charge_pressure, low=0.0, open=flow > 0))
    return branches, [Injection(pump.name, outlet, swept), Injection(pump.name, suction, -swept)]


class SensedSetting(Unknown):
    """Outlet pressure [-], as a share of the setting, that a pump holds above the highest load that it senses."""

    tolerance = PRESSURE_TOLERANCE

    def __init__(self, pump: Any, plant: Plant, sections: tuple[Section, ...], branch: int) -> None:
        """Just the margin where no section is active."""
        self.setting = np.broadcast_to(setting(pump, plant), (plant.phases,))
        self.margin = float(pump.margin)
        self.sections, self.branch = sections, branch
        active = np.any([s.active for s in sections], axis=0) if sections else np.zeros(plant.phases, bool)
        super().__init__(np.minimum(self.margin / self.setting, 1.0), active & (full_flow(pump, plant) > 0))

    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """The pump holds this pressure at its outlet."""
        trial.constant[self.branch] = -place * self.setting[rows]

    def excess(self, place: Array, look: Look) -> Array:
        """Pressure held over the one asked for [100 bar]."""
        return (place * self.setting[look.rows] - self._wanted(look)) / PRESSURE_UNIT

    def _wanted(self, look: Look) -> Array:
        return np.minimum(highest_load(self.sections, look) + self.margin, self.setting[look.rows])


def highest_load(sections: tuple[Section, ...], look: Look) -> Array:
    """Highest load-sensing pressure [Pa] of some sections, 0 where none is active."""
    signal = np.zeros(len(look.rows))
    for section in sections:
        signal = np.maximum(signal, section.sensed_pressure(look))
    return signal


def unknowns(plant: Plant, sections: tuple[Section, ...], number: dict[tuple[str, str], int]) -> list[Unknown]:
    """Sensed settings of all pumps that hold a margin over the load."""
    found: list[Unknown] = []
    for pump in plant.rows_of("pumps"):
        if pump.control in SENSING:
            branch = number[(pump.name, "displacement")]
            fed = plant.reach(plant.node(pump.outlet), NEVER_ON_THE_WAY)
            reached = tuple(s for s in sections if plant.node(s.row.port_p) in fed)
            found.append(SensedSetting(pump, plant, reached, branch))
    return found
