"""A start with cold oil: pressures, relief flow and suction in each pump's worst phase."""

from __future__ import annotations

import numpy as np
import pandas as pd

from heataudit.audit.figures import BAR, L_MIN
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.air import standard_pressure
from heataudit.physics.arrays import Array

LEAST_INLET = {"piston": 0.8 * BAR, "gear": 0.7 * BAR, "vane": 0.7 * BAR}
"""Absolute pressure [Pa] at a pump's inlet below which it is likely to cavitate, by its type (common practice)."""

COLUMNS = ("pump", "phase", "viscosity_mm2_s", "pressure_bar", "relief_flow_L_min", "inlet_bar")


def inlet_pressure(machine: Machine, solution: Solution) -> Array:
    """Absolute pressure at the inlets of all pumps [Pa], shape (pumps, phases); NaN where a pump stands.

    Parameters
    ----------
    machine
        Gives the altitude.
    solution
        The solved phases.
    """
    atmosphere = float(standard_pressure(machine.general["altitude"]))
    return np.where(solution.pumps.speed > 0, atmosphere + solution.pumps.inlet_pressure, np.nan)


def relief_flow(solution: Solution) -> Array:
    """Flow over all relief valves [m³/s], shape (phases,).

    Parameters
    ----------
    solution
        The solved phases.
    """
    reliefs = np.array([kind == "relief" for kind in solution.components.kind], bool)
    return np.asarray(solution.components.flow[reliefs].sum(axis=0))


def cold_start_table(machine: Machine, cycle: Cycle, cold: Solution) -> pd.DataFrame:
    """Pumps at the start temperature as `Audit.cold_start` says.

    The worst phase is the one with the lowest inlet pressure where that is below what the pump's type needs, else the
    one with the highest outlet pressure. Pumps that stand in every phase are left out.

    Parameters
    ----------
    machine
        Gives the pumps' types and the altitude.
    cycle
        The phases.
    cold
        The cycle, solved at the start temperature.
    """
    types = dict(zip(machine.pumps["name"], machine.pumps["type"], strict=True))
    relief = relief_flow(cold)
    rows = []
    for name, pressure, inlet in zip(cold.pumps.name, cold.pumps.pressure, inlet_pressure(machine, cold), strict=True):
        if np.isnan(inlet).all():
            continue
        starved = np.nanmin(inlet) < LEAST_INLET[types[name]]
        worst = int(np.nanargmin(inlet) if starved else np.nanargmax(np.where(np.isnan(inlet), np.nan, pressure)))
        rows.append((
            name, cycle.phase[worst], cold.viscosity[worst] * 1e6, pressure[worst] / BAR, relief[worst] / L_MIN,
            inlet[worst] / BAR,
        ))  # fmt: skip
    return pd.DataFrame(rows, columns=list(COLUMNS))
