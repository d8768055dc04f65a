"""Findings about the machine as a whole: its oil, its cooler, its largest wastes, its cold start."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import pandas as pd

from heataudit.audit.cold_start import LEAST_INLET
from heataudit.audit.figures import BAR, L_MIN, sig
from heataudit.audit.findings import Solved, share_of_shaft
from heataudit.audit.model import Conditions, Cooler, Finding, Thermal
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.constants import KELVIN

LEAST_VISCOSITY, MOST_VISCOSITY = 10.0, 500.0
"""Viscosities [mm²/s] between which the laws hold and pumps live (common practice)."""

MOST_START_VISCOSITY = 1000.0
"""Viscosity [mm²/s] up to which pumps may be started (common practice)."""

COLD_RELIEF_SHARE = 0.01
"""Flow that only cold oil sends over a relief valve, per pump flow [-], from which it is reported (judgement)."""

MOST_COLD_DROP = 3.5
"""Drop of a cooler or filter [bar] above which its bypass should be open (common practice: 1.7 to 3.5 bar)."""

METERING_SHARE = 0.30
"""Metering losses per shaft energy [-] from which they are reported (judgement)."""

IDLE_SHARE = 0.10
"""Idle losses per shaft energy [-] from which they are reported (judgement)."""


FAR_TOO_HOT_K = 20.0
"""Excess over the highest oil temperature [K] from which the finding is a danger (judgement)."""

WASTES = {
    "throttling": (
        "metering", METERING_SHARE, "are throttled away in metering",
        "Match the pump to the flow asked for: load sensing, variable speed, a lower setting, or a circuit of its "
        "own for a function whose load is far below the others.",
    ),
    "idle-loss": (
        "idle", IDLE_SHARE, "are lost while nothing moves",
        "Unload the pumps or stop them in pauses, and lower the stand-by pressure.",
    ),
}  # fmt: skip
"""Code -> loss group, share of the shaft energy from which it is reported [-], what happens, what helps."""


def waste_findings(solved: Solved) -> Iterator[Finding]:
    """Metering and idle losses that take a large share of the shaft energy; the place is their largest component.

    Parameters
    ----------
    solved
        The solved cycle.
    """
    for code, (group, most, words, remedy) in WASTES.items():
        share, heat = share_of_shaft(solved, group)
        if share <= most:
            continue
        rows = solved.losses.table[solved.losses.table["group"] == group]
        largest = rows.iloc[0]
        total = float(rows["heat_kJ"].sum())
        worst = int(np.argmax(heat * solved.cycle.duration * solved.cycle.repeats))
        yield Finding(
            code, "warning", str(largest["component"]), str(solved.cycle.phase[worst]),
            f"{sig(100 * share)} % of the shaft energy, {sig(total)} kJ in each cycle, {words}; "
            f"{largest['component']} alone has {sig(100 * float(largest['heat_kJ']) / total)} % of it. {remedy} In "
            f"{int((heat > 0).sum())} of {len(heat)} phases, most in {solved.cycle.phase[worst]}.",
        )  # fmt: skip


def unsolved_findings(place: str, cycle: Cycle, solution: Solution) -> Iterator[Finding]:
    """Phases that were not solved at another oil temperature than that of the audit.

    Parameters
    ----------
    place
        What rests on the solution.
    cycle
        The phases.
    solution
        What the network found for them.
    """
    failed = np.flatnonzero(~solution.converged)
    if len(failed):
        worst = failed[int(np.argmax(solution.residual[failed]))]
        yield Finding(
            "not-converged", "danger", place, str(cycle.phase[worst]),
            f"Pressures and flows could not be solved with oil of {sig(solution.oil_temperature[worst] - KELVIN)} "
            f"°C. Do not use what rests on it. In {len(failed)} of {len(cycle)} phases, most in {cycle.phase[worst]}.",
        )  # fmt: skip


def oil_findings(conditions: Conditions, thermal: Thermal, cooler: Cooler) -> Iterator[Finding]:
    """Oil that is too hot, too thin or too thick.

    Parameters
    ----------
    conditions
        At which the audit is made.
    thermal
        The heat balance.
    cooler
        The cooler that is needed.
    """
    highest, found = thermal.highest_temperature_C, thermal.equilibrium_C
    if found is None:
        yield Finding(
            "oil-too-hot", "danger", "Oil", "",
            f"{sig(thermal.mean_heat_kW)} kW come in, and at no oil temperature below 120 °C does as much go out: the "
            f"machine overheats if it runs on. The audit is made at {sig(conditions.oil_temperature_C)} °C. Mend the "
            "sources of heat first, then see the cooler.",
        )  # fmt: skip
    elif found > highest:
        yield Finding(
            "oil-too-hot", "danger" if found > highest + FAR_TOO_HOT_K else "warning", "Oil", "",
            f"The oil reaches {sig(found)} °C at {sig(conditions.ambient_temperature_C)} °C ambient, above the "
            f"{sig(highest)} °C that it may have. Make less heat, or fit a cooler.",
        )  # fmt: skip
    elif conditions.oil_temperature_C > highest:
        yield Finding(
            "oil-too-hot", "warning", "Oil", "",
            f"The oil temperature given, {sig(conditions.oil_temperature_C)} °C, is above the {sig(highest)} °C that "
            f"it may have; by the heat balance it is {sig(found)} °C. Check the reading, then the cooler.",
        )  # fmt: skip
    if cooler.needed and cooler.choice is None and len(cooler.options):
        yield Finding("oil-too-hot", "warning", "Cooler", "", cooler.verdict)
    yield from _viscosity_findings(conditions)


def _viscosity_findings(conditions: Conditions) -> Iterator[Finding]:
    viscosity, oil = conditions.viscosity_mm2_s, f"{sig(conditions.oil_temperature_C)} °C"
    if viscosity < LEAST_VISCOSITY:
        yield Finding(
            "viscosity-low", "warning", "Oil", "",
            f"At {oil} the oil has {sig(viscosity)} mm²/s; below {sig(LEAST_VISCOSITY)} mm²/s films break and "
            "leakage grows. Cool it, or take a thicker grade.",
        )  # fmt: skip
    elif viscosity > MOST_VISCOSITY:
        yield Finding(
            "viscosity-high", "warning", "Oil", "",
            f"At {oil} the oil has {sig(viscosity)} mm²/s; above {sig(MOST_VISCOSITY)} mm²/s pumps starve and lines "
            "lose much. Warm it up before work, or take a thinner grade or one with a higher index.",
        )  # fmt: skip


def cold_findings(machine: Machine, table: pd.DataFrame, viscosity: float) -> Iterator[Finding]:
    """Pumps that starve on cold oil, and oil that is too thick to start on.

    Parameters
    ----------
    machine
        Gives the pumps' types and the start temperature.
    table
        Pumps at the start temperature.
    viscosity
        Of the oil at it [mm²/s].
    """
    start = f"{sig(float(machine.general['start_temperature']) - KELVIN)} °C"
    types = dict(zip(machine.pumps["name"], machine.pumps["type"], strict=True))
    if viscosity > MOST_START_VISCOSITY:
        yield Finding(
            "cold-start", "warning", "Oil", "",
            f"At {start} the oil has {sig(viscosity)} mm²/s; pumps want at most {sig(MOST_START_VISCOSITY)} mm²/s to "
            "start. Heat the tank, or take a thinner grade or one with a higher index.",
        )  # fmt: skip
    for row in table.to_dict("records"):
        least = LEAST_INLET[types[row["pump"]]] / BAR
        if row["inlet_bar"] < least:
            yield Finding(
                "cold-start", "warning", str(row["pump"]), str(row["phase"]),
                f"At {start} and {sig(row['viscosity_mm2_s'])} mm²/s {row['pump']} has {sig(row['inlet_bar'])} bar "
                f"absolute at its inlet; a {types[row['pump']]} pump wants {sig(least)} bar or more. Start at low "
                "speed without load, warm the oil, or widen the suction line.",
            )  # fmt: skip


def cold_flow_findings(cycle: Cycle, cold: Solution, warm: Solution) -> Iterator[Finding]:
    """What cold oil does elsewhere: flow that goes over relief valves, drops of coolers and filters in the network.

    Parameters
    ----------
    cycle
        The phases.
    cold, warm
        The phases solved at the start temperature and at the highest oil temperature.
    """
    start, hot = (f"{sig(float(state.oil_temperature[0]) - KELVIN)} °C" for state in (cold, warm))
    components = cold.components
    pumped = np.abs(cold.pumps.flow.sum(axis=0))
    for k, (name, kind) in enumerate(zip(components.name, components.kind, strict=True)):
        flow, before = components.flow[k], warm.components.flow[warm.components.name.index(name)]
        drop = np.abs(components.drop[k]) / BAR
        only_cold = (flow > COLD_RELIEF_SHARE * pumped) & (before <= COLD_RELIEF_SHARE * pumped)
        if kind == "relief" and only_cold.any():
            worst = int(np.argmax(np.where(only_cold, flow, 0.0)))
            yield Finding(
                "cold-start", "warning", name, str(cycle.phase[worst]),
                f"With oil of {start} {sig(flow[worst] / L_MIN)} L/min go over {name} at {sig(drop[worst])} bar, with "
                f"oil of {hot} next to nothing: cold oil needs the pressure in the lines. Warm it up at low flow "
                f"before work. Worst in {cycle.phase[worst]}.",
            )  # fmt: skip
        if kind in ("cooler", "filter") and (drop > MOST_COLD_DROP).any():
            worst = int(np.argmax(drop))
            yield Finding(
                "cold-start", "warning", name, str(cycle.phase[worst]),
                f"With oil of {start} {name} drops {sig(drop[worst])} bar; above {sig(MOST_COLD_DROP)} bar a bypass "
                f"should be open. Fit one, or warm the oil up at low flow. Worst in {cycle.phase[worst]}.",
            )  # fmt: skip


def cold_cooler_findings(cooler: Cooler, thermal: Thermal) -> Iterator[Finding]:
    """A chosen cooler that drops much on cold oil.

    Parameters
    ----------
    cooler
        The choice.
    thermal
        Gives the start temperature.
    """
    drop = cooler.drop_cold_bar
    if cooler.choice is not None and drop is not None and drop > MOST_COLD_DROP:
        yield Finding(
            "cold-start", "note", cooler.choice, "",
            f"{cooler.choice} drops {sig(drop)} bar on oil of {sig(thermal.start_temperature_C)} °C; above "
            f"{sig(MOST_COLD_DROP)} bar a bypass should be open. Order it with one, and check the pressure that its "
            "core bears.",
        )  # fmt: skip
