"""Valves with two ports (and the priority valve with three): their laws, and the openings that pilots decide."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from heataudit.network.branches import Branch
from heataudit.network.elements import Integers
from heataudit.network.kinds.pumps import highest_load
from heataudit.network.kinds.sections import Section
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.unknowns import PRESSURE_TOLERANCE, PRESSURE_UNIT, Look, Trial, Unknown, held_at_ends
from heataudit.physics.valves import (
    cracking_pressure,
    proportional_coefficient,
    throttle_coefficient,
    viscous_coefficient,
)

Ends = tuple[int, int]


def make(valve: Any, plant: Plant) -> list[Branch]:
    """The branches of a valve, by its kind."""
    return KINDS[valve.kind](valve, plant, (plant.node(valve.from_), plant.node(valve.to)))


def _rated(valve: Any) -> Array:
    return throttle_coefficient(valve.rated_flow, valve.rated_drop)


def _check(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Nothing passes back, nor below the opening pressure; above it the rated drop, square."""
    return [Branch(valve.name, "valve", *ends, constant=valve.opening_pressure, quadratic=_rated(valve), low=0.0)]


def _relief(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Shut below the opening pressure, above it an override in proportion to the flow."""
    override = proportional_coefficient(valve.rated_flow, valve.rated_drop)
    setting = plant.given(valve.name, "setting", valve.opening_pressure)
    set_at = 0.0 if np.isnan(valve.set_at_flow) else valve.set_at_flow
    opens = cracking_pressure(setting, override, set_at)
    return [Branch(valve.name, "valve", *ends, constant=opens, linear=override, low=0.0)]


def _throttle(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Square law both ways, scaled by the opening that the cycle gives."""
    opening = plant.given(valve.name, "opening", 1.0)
    passing = opening > 0
    quadratic = _rated(valve) / np.where(passing, opening, 1.0) ** 2
    return [Branch(valve.name, "valve", *ends, quadratic=quadratic, open=passing)]


def _flow_control(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """The throttle law, but never more than the set flow from From to To."""
    return [Branch(valve.name, "valve", *ends, quadratic=_rated(valve), high=valve.set_flow)]


def _viscous(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """A drop in proportion to flow and viscosity, both ways."""
    linear = viscous_coefficient(valve.rated_flow, valve.rated_drop, plant.viscosity, valve.rated_viscosity)
    return [Branch(valve.name, "valve", *ends, linear=linear)]


def _metering(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Square law from From to To; how far it is open is an unknown."""
    return [Branch(valve.name, "valve", *ends, quadratic=_rated(valve), low=0.0)]


def _metering_both_ways(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Square law both ways; how far it is open is an unknown."""
    return [Branch(valve.name, "valve", *ends, quadratic=_rated(valve))]


def _counterbalance(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Metered from the load side out, a check the other way."""
    start, end = ends
    free = Branch(valve.name, "back", end, start, quadratic=_rated(valve), low=0.0)
    return [*_metering(valve, plant, ends), free]


def _pilot_operated_check(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """A check; once its pilot lifts it, a throttle both ways in its place."""
    lifted = Branch(
        valve.name, "lifted", *ends, quadratic=_rated(valve), lazy=True, pilot=plant.node(valve.pilot_from),
        pilot_ratio=valve.pilot_ratio, replaces="valve",
    )  # fmt: skip
    return [*_check(valve, plant, ends), lifted]


def _priority(valve: Any, plant: Plant, ends: Ends) -> list[Branch]:
    """Up to the set flow to To, the surplus to Port 3; how far the surplus side is open is an unknown."""
    first = Branch(valve.name, "valve", *ends, quadratic=_rated(valve), low=0.0, high=valve.set_flow)
    surplus = Branch(valve.name, "surplus", ends[0], plant.node(valve.port_3), quadratic=_rated(valve), low=0.0)
    return [first, surplus]


KINDS: dict[str, Callable[[Any, Plant, Ends], list[Branch]]] = {
    "check": _check,
    "relief": _relief,
    "throttle": _throttle,
    "flow control": _flow_control,
    "filter": _viscous,
    "cooler": _viscous,
    "counterbalance": _counterbalance,
    "pilot-operated check": _pilot_operated_check,
    "unloading": _metering_both_ways,
    "sequence": _metering_both_ways,
    "reducing": _metering_both_ways,
    "load-sensing unloading": _metering,
    "priority": _priority,
}
"""Kind -> how it enters the network."""


SHUT = 1e-10
"""Opening [-] that counts as shut of a valve that is open at rest: it still feels the pressure that would open it."""


class ValveOpening(Unknown):
    """Flow [-] that a valve lets pass per that of its rated point at the same drop, as its pilots decide.

    `urge` gives the pressure [Pa] by which a valve is pushed open in a solution: it rests where that is none.
    """

    tolerance = PRESSURE_TOLERANCE

    def __init__(self, at_rest: float, plant: Plant, branch: int, urge: Callable[[Look], Array]) -> None:
        """Shut (0) or open (1) at rest."""
        super().__init__(np.full(plant.phases, at_rest), np.ones(plant.phases, bool))
        if at_rest == 1.0:
            self.least = SHUT
        self.branch, self.urge = branch, urge

    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """Shut at 0."""
        trial.open[self.branch] &= place > 0
        trial.quadratic[self.branch] /= np.where(place > 0, place, 1.0) ** 2

    def excess(self, place: Array, look: Look) -> Array:
        """Pressure that pushes it open [100 bar]."""
        return held_at_ends(self.urge(look) / PRESSURE_UNIT, place, self.least, 1.0)


def _at(node: int) -> Callable[[Look], Array]:
    """Pressure [Pa] of a node, 0 where nothing determines it."""
    return lambda look: np.nan_to_num(look.pressure(node))


def _counterbalance_urge(valve: Any, plant: Plant) -> Callable[[Look], Array]:
    load_side, behind, pilot = (_at(plant.node(label)) for label in (valve.from_, valve.to, valve.pilot_from))
    opening = plant.counterbalance_opening(valve)
    back = 0.0 if valve.vented else 1.0 + valve.pilot_ratio

    def urge(look: Look) -> Array:
        return load_side(look) - opening - back * behind(look) + valve.pilot_ratio * pilot(look)

    return urge


def _unloading_urge(valve: Any, plant: Plant, sections: tuple[Section, ...]) -> Callable[[Look], Array]:
    """Of a load-sensing unloading valve: what the supply has over the bank's highest load and the spring."""
    supply = _at(plant.node(valve.from_))
    bank = tuple(s for s in sections if s.row.bank.casefold() == valve.pilot_from.casefold())
    return lambda look: supply(look) - highest_load(bank, look) - valve.opening_pressure


class SurplusOpening(ValveOpening):
    """Opening of a priority valve's surplus side: as far as the first consumer keeps its set flow."""

    def __init__(self, valve: Any, plant: Plant, number: dict[tuple[str, str], int]) -> None:
        """Open at rest."""
        start, end = _at(plant.node(valve.from_)), _at(plant.node(valve.to))
        needed = float(_rated(valve)) * valve.set_flow**2
        super().__init__(1.0, plant, number[(valve.name, "surplus")], lambda look: start(look) - end(look) - needed)
        self.first = number[(valve.name, "valve")]
        self.blocked = np.zeros(plant.phases, bool)

    def excess(self, place: Array, look: Look) -> Array:
        """Pressure over what the set flow needs [100 bar]; a consumer that takes nothing of all the oil is blocked."""
        nothing = look.flow(self.first) == 0
        shut = place <= self.least
        self.blocked[look.rows] = np.where(shut, nothing, self.blocked[look.rows])
        blocked = nothing & self.blocked[look.rows]
        return np.where(blocked, 1.0 - place, super().excess(place, look))


def unknowns(plant: Plant, sections: tuple[Section, ...], number: dict[tuple[str, str], int]) -> list[Unknown]:
    """Openings of all valves that pilots move."""
    found: list[Unknown] = []
    for valve in plant.rows_of("valves"):
        setting = plant.given(valve.name, "setting", valve.opening_pressure)
        start, end = _at(plant.node(valve.from_)), _at(plant.node(valve.to))
        branch, at_rest = number[(valve.name, "valve")], 0.0
        if valve.kind == "counterbalance":
            urge = _counterbalance_urge(valve, plant)
        elif valve.kind == "unloading":
            urge = _over(_at(plant.node(valve.pilot_from)), setting)
        elif valve.kind == "sequence":
            urge = _over(start, setting)
        elif valve.kind == "reducing":
            urge, at_rest = _under(end, setting), 1.0
        elif valve.kind == "load-sensing unloading":
            urge = _unloading_urge(valve, plant, sections)
        elif valve.kind == "priority":
            found.append(SurplusOpening(valve, plant, number))
            continue
        else:
            continue
        found.append(ValveOpening(at_rest, plant, branch, urge))
    return found


def _over(pressure: Callable[[Look], Array], setting: Array) -> Callable[[Look], Array]:
    return lambda look: pressure(look) - setting[look.rows]


def _under(pressure: Callable[[Look], Array], setting: Array) -> Callable[[Look], Array]:
    return lambda look: setting[look.rows] - pressure(look)
