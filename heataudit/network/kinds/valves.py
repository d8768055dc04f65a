"""Valves with two ports."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from heataudit.network.branches import Branch
from heataudit.network.plant import Plant
from heataudit.physics.valves import (
    cracking_pressure,
    proportional_coefficient,
    throttle_coefficient,
    viscous_coefficient,
)


def make(valve: Any, plant: Plant) -> Branch:
    """The branch of a valve, by its kind."""
    return KINDS[valve.kind](valve, plant, (plant.node(valve.from_), plant.node(valve.to)))


def _check(valve: Any, plant: Plant, ends: tuple[int, int]) -> Branch:
    """Nothing passes back, nor below the opening pressure; above it the rated drop, square."""
    return Branch(
        valve.name, "valve", *ends, constant=valve.opening_pressure,
        quadratic=throttle_coefficient(valve.rated_flow, valve.rated_drop), low=0.0,
    )  # fmt: skip


def _relief(valve: Any, plant: Plant, ends: tuple[int, int]) -> Branch:
    """Shut below the opening pressure, above it an override in proportion to the flow."""
    override = proportional_coefficient(valve.rated_flow, valve.rated_drop)
    setting = plant.given(valve.name, "setting", valve.opening_pressure)
    set_at = 0.0 if np.isnan(valve.set_at_flow) else valve.set_at_flow
    return Branch(
        valve.name, "valve", *ends, constant=cracking_pressure(setting, override, set_at), linear=override, low=0.0
    )


def _throttle(valve: Any, plant: Plant, ends: tuple[int, int]) -> Branch:
    """Square law both ways, scaled by the opening that the cycle gives."""
    opening = plant.given(valve.name, "opening", 1.0)
    rated = throttle_coefficient(valve.rated_flow, valve.rated_drop)
    passing = opening > 0
    return Branch(valve.name, "valve", *ends, quadratic=rated / np.where(passing, opening, 1.0) ** 2, open=passing)


def _flow_control(valve: Any, plant: Plant, ends: tuple[int, int]) -> Branch:
    """The throttle law, but never more than the set flow from From to To."""
    return Branch(
        valve.name, "valve", *ends, quadratic=throttle_coefficient(valve.rated_flow, valve.rated_drop),
        high=valve.set_flow,
    )  # fmt: skip


def _filter(valve: Any, plant: Plant, ends: tuple[int, int]) -> Branch:
    """A drop in proportion to flow and viscosity, both ways."""
    linear = viscous_coefficient(valve.rated_flow, valve.rated_drop, plant.viscosity, valve.rated_viscosity)
    return Branch(valve.name, "valve", *ends, linear=linear)


KINDS: dict[str, Callable[[Any, Plant, tuple[int, int]], Branch]] = {
    "check": _check,
    "relief": _relief,
    "throttle": _throttle,
    "flow control": _flow_control,
    "filter": _filter,
}
"""Kind -> how it enters the network."""
