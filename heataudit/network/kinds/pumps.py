"""Pumps: displacement, slip, control."""

from __future__ import annotations

from typing import Any

import numpy as np

from heataudit.network.branches import Branch, Injection
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.physics.pumps import slip_coefficient, viscosity_ratio


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
    return slip_coefficient(pump.displacement, pump.speed, pump.volumetric_efficiency, pump.rated_pressure, ratio)


def setting(pump: Any, plant: Plant) -> Array:
    """Pressure setting [Pa] of a variable pump, shape (phases,)."""
    return plant.given(pump.name, "setting", pump.setting)


def make(pump: Any, plant: Plant) -> tuple[list[Branch], list[Injection]]:
    """Branches and injections of a pump: its displacement by its control, and its slip from outlet to drain."""
    outlet, suction, drain = plant.node(pump.outlet), plant.node(pump.suction), plant.node(pump.drain_to)
    flow = full_flow(pump, plant)
    running = flow > 0
    leak = slip(pump, plant)
    branches = []
    if np.any(leak > 0):
        branches.append(
            Branch(
                pump.name, "slip", outlet, drain, linear=1.0 / np.where(leak > 0, leak, 1.0),
                open=running & (leak > 0), driven_from=outlet, driven_to=suction,
            )
        )  # fmt: skip
    control = CONTROLS[pump.control]
    more, injections = control(pump, plant, (suction, outlet), flow)
    return branches + more, injections


def _fixed(pump: Any, plant: Plant, ports: tuple[int, int], flow: Array) -> tuple[list[Branch], list[Injection]]:
    """All of the displacement flow, whatever the pressure."""
    suction, outlet = ports
    return [], [Injection(pump.name, outlet, flow), Injection(pump.name, suction, -flow)]


def _pressure_compensated(
    pump: Any, plant: Plant, ports: tuple[int, int], flow: Array
) -> tuple[list[Branch], list[Injection]]:
    """Full flow below the setting; at the setting the displacement falls as far as needed."""
    suction, outlet = ports
    box = Branch(
        pump.name, "displacement", suction, outlet, constant=-setting(pump, plant), low=0.0, high=flow, open=flow > 0,
        driven_from=0, driven_to=outlet,
    )  # fmt: skip
    return [box], []


CONTROLS = {"fixed": _fixed, "pressure compensated": _pressure_compensated}
"""Control -> how the displacement enters the network."""
