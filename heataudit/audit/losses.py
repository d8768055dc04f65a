"""Where the heat comes from: components, groups, the let-down of pressed oil, the energies of a cycle."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.audit.model import GROUPS, CycleTotals
from heataudit.audit.routes import actuators_behind
from heataudit.machine import Cycle, Machine, Move
from heataudit.network.solution import Solution, State
from heataudit.physics.actuators import decompression_energy
from heataudit.physics.arrays import Array

Flags = NDArray[np.bool_]

GROUP_OF_KIND = {
    "gallery": "bypass", "unloading": "bypass", "load-sensing unloading": "bypass", "priority": "bypass",
    "section": "metering", "throttle": "metering", "flow control": "metering", "reducing": "metering",
    "sequence": "metering", "counterbalance": "metering",
    "line": "lines", "filter": "lines", "cooler": "lines", "check": "lines", "pilot-operated check": "lines",
    "relief": "overflow", "void": "other",
}  # fmt: skip
"""Loss group of a component while something moves."""

ALWAYS = ("overflow", "other")
"""Groups that keep their name while nothing moves."""

LET_DOWN = "Decompression"
"""Name under which the let-down of trapped oil stands among the losses."""


class Entry(NamedTuple):
    """Heat [W] of one component in one group, shape (phases,)."""

    component: str
    kind: str
    group: str
    power: Array


def something_moves(solution: Solution) -> Flags:
    """Phases in which an actuator moves, shape (phases,).

    Parameters
    ----------
    solution
        The solved phases.
    """
    actuators = solution.actuators
    floats = (actuators.state == State.FLOATING) & (np.abs(actuators.flow) > 0)
    moves = (actuators.state == State.MOVING) | (actuators.state == State.SLOW) | floats
    return np.asarray(moves.any(axis=0))


def driven(solution: Solution) -> Flags:
    """Where the load of an actuator drives it, shape (actuators, phases).

    Parameters
    ----------
    solution
        The solved phases.
    """
    return np.asarray(solution.actuators.power < 0)


def let_down_energy(machine: Machine, cycle: Cycle, solution: Solution) -> Array:
    """Heat [J] of letting down trapped oil at the end of each phase, once per repeat, shape (phases,).

    A phase counts for an actuator that presses or works against a load and whose inlet the next phase does not feed:
    from extending to pressing the oil stays under pressure. The first phase follows the last.

    Parameters
    ----------
    machine
        Gives trapped volumes and the oil's bulk modulus.
    cycle
        The phases, in order.
    solution
        The solved phases; its inlet pressures count.
    """
    energy = np.zeros(len(cycle))
    volumes = dict(zip(machine.actuators["name"], machine.actuators["trapped_volume"].fillna(0.0), strict=True))
    for k, name in enumerate(solution.actuators.name):
        moves = cycle.moves.get(name)
        if moves is None or not volumes[name] > 0:
            continue
        backward = np.isin(moves, [Move.RETRACT, Move.REVERSE])
        fed = np.where(backward, 2, np.where((moves == Move.HOLD) | (moves == Move.FLOAT), 0, 1))
        loaded = (moves == Move.PRESS) | ((fed > 0) & (np.nan_to_num(solution.actuators.load[k]) > 0))
        ends = loaded & (fed != np.roll(fed, -1))
        inlet = np.nan_to_num(solution.actuators.inlet[k])
        energy += np.where(ends, decompression_energy(inlet, volumes[name], machine.oil["bulk_modulus"]), 0.0)
    return energy


def entries(machine: Machine, solution: Solution, let_down: Array) -> Iterator[Entry]:
    """Heat of all components by group; a component stands once for each group that it has a part in.

    Parameters
    ----------
    machine
        Gives sections and connections.
    solution
        The solved phases.
    let_down
        Power of the let-down of trapped oil [W], shape (phases,).
    """
    moving = something_moves(solution)
    lowers = dict(zip(solution.actuators.name, driven(solution), strict=True))
    for name, heat in zip(solution.pumps.name, solution.pumps.heat, strict=True):
        yield from _shared(Entry(name, "pump", "pump", heat), moving)
    components = solution.components
    for name, kind, heat, back in zip(
        components.name, components.kind, components.heat, components.return_heat, strict=True
    ):
        lowering = _lowering(machine, solution, lowers, (name, kind), heat, back)
        if lowering is not None:
            yield Entry(name, kind, "lowering", lowering)
            heat = heat - lowering
        yield from _shared(Entry(name, kind, GROUP_OF_KIND[kind], heat), moving)
    for name, kind, heat in zip(solution.actuators.name, solution.actuators.kind, solution.actuators.heat, strict=True):
        yield Entry(name, kind, "actuators", heat)
    yield Entry(LET_DOWN, "trapped oil", "other", let_down)


def _shared(entry: Entry, moving: Flags) -> Iterator[Entry]:
    """An entry as it is while something moves, and as idle while nothing does."""
    if entry.group in ALWAYS:
        yield entry
        return
    yield entry._replace(power=np.where(moving, entry.power, 0.0))
    yield entry._replace(group="idle", power=np.where(moving, 0.0, entry.power))


def _lowering(
    machine: Machine, solution: Solution, lowers: dict[str, Flags], component: tuple[str, str], heat: Array, back: Array
) -> Array | None:
    """What a load that drives its actuator puts into a component [W], None where that cannot be."""
    name, kind = component
    if kind == "section":
        served = machine.actuators["name"][machine.actuators["section"] == name].tolist()
        of_edge = back
    elif kind == "counterbalance":
        served = actuators_behind(machine, solution.ports, name)
        of_edge = heat
    else:
        return None
    by_load = [lowers[actuator] for actuator in served if lowers[actuator].any()]
    return np.where(np.any(by_load, axis=0), of_edge, 0.0) if by_load else None


@dataclass(frozen=True)
class Losses:
    """Heat of a cycle.

    Parameters
    ----------
    powers
        Heat by group [W], shape (groups, phases), in the order of `GROUPS`.
    let_down
        The part of it that is the let-down of trapped oil [W], shape (phases,).
    table
        A row per component and group: `component`, `kind`, `group`, `heat_kJ` in one cycle; largest first.
    """

    powers: Array
    let_down: Array
    table: pd.DataFrame

    @property
    def heat(self) -> Array:
        """Heat of each phase [W], shape (phases,)."""
        return np.asarray(self.powers.sum(axis=0))

    def groups(self, cycle: Cycle) -> dict[str, float]:
        """Heat [kJ] in one cycle by group.

        Parameters
        ----------
        cycle
            The phases.
        """
        energies = self.powers @ (cycle.duration * cycle.repeats) / 1e3
        return {group: float(energy) for group, energy in zip(GROUPS, energies, strict=True)}


def find_losses(machine: Machine, cycle: Cycle, solution: Solution) -> Losses:
    """Sort the heat of a solved cycle by component and group.

    Parameters
    ----------
    machine
        The machine.
    cycle
        Its phases.
    solution
        What the network found for them.
    """
    time = cycle.duration * cycle.repeats
    let_down = let_down_energy(machine, cycle, solution) / cycle.duration
    powers = np.zeros((len(GROUPS), len(cycle)))
    rows = []
    for entry in entries(machine, solution, let_down):
        powers[GROUPS.index(entry.group)] += entry.power
        rows.append((entry.component, entry.kind, entry.group, float(entry.power @ time) / 1e3))
    table = pd.DataFrame(rows, columns=["component", "kind", "group", "heat_kJ"])
    return Losses(powers, let_down, _ranked(table))


def _ranked(table: pd.DataFrame) -> pd.DataFrame:
    """Largest first; each component at least once, its groups without heat left out."""
    largest = table["heat_kJ"].abs().groupby(table["component"]).transform("max")
    only = (largest == 0) & ~table.duplicated("component")
    shown = table[(table["heat_kJ"] != 0) | (only & (table["component"] != LET_DOWN))]
    return shown.sort_values("heat_kJ", ascending=False, kind="stable", ignore_index=True)


def shaft_power(solution: Solution, losses: Losses) -> Array:
    """Shaft power of all pumps [W], with what pressing trapped oil takes, shape (phases,).

    Parameters
    ----------
    solution
        The solved phases.
    losses
        Their losses.
    """
    return solution.shaft_power + losses.let_down


def totals(cycle: Cycle, solution: Solution, losses: Losses) -> CycleTotals:
    """Energies of one cycle.

    Parameters
    ----------
    cycle
        The phases.
    solution
        What the network found for them.
    losses
        Their losses.
    """
    time = cycle.duration * cycle.repeats

    def energy(power: Array) -> float:
        return float(power @ time) / 1e3

    heat = sum(losses.groups(cycle).values())
    shaft = energy(shaft_power(solution, losses))
    useful = energy(np.maximum(solution.actuators.power, 0.0).sum(axis=0))
    duration = float(time.sum())
    return CycleTotals(
        duration_s=duration,
        shaft_energy_kJ=shaft,
        useful_energy_kJ=useful,
        returned_energy_kJ=energy(np.maximum(-solution.actuators.power, 0.0).sum(axis=0)),
        lifting_energy_kJ=energy(solution.lifting_power),
        heat_energy_kJ=heat,
        mean_heat_kW=heat / duration,
        peak_heat_kW=float(losses.heat.max()) / 1e3,
        efficiency=useful / shaft if shaft > 0 else None,
        balance_error_kJ=energy(solution.balance_error),
    )


def phase_table(cycle: Cycle, solution: Solution, losses: Losses, other_heat: Array) -> pd.DataFrame:
    """Powers and heat of each phase, as `Audit.phases` says.

    Parameters
    ----------
    cycle
        The phases.
    solution
        What the network found for them.
    losses
        Their losses.
    other_heat
        Heat from outside the hydraulics [W], shape (phases,).
    """
    power = solution.actuators.power
    return pd.DataFrame({
        "phase": cycle.phase, "duration_s": cycle.duration, "repeats": cycle.repeats,
        "shaft_power_kW": shaft_power(solution, losses) / 1e3,
        "heat_kW": losses.heat / 1e3,
        "useful_power_kW": np.maximum(power, 0.0).sum(axis=0) / 1e3,
        "returned_power_kW": np.maximum(-power, 0.0).sum(axis=0) / 1e3,
        "lifting_power_kW": solution.lifting_power / 1e3,
        "other_heat_kW": other_heat / 1e3,
        "balance_error_kW": solution.balance_error / 1e3,
        "converged": solution.converged, "iterations": solution.iterations, "residual": solution.residual,
        **{f"{group}_kW": row / 1e3 for group, row in zip(GROUPS, losses.powers, strict=True)},
    })  # fmt: skip
