"""Sheets Phases, Pumps, Actuators: what happens in each phase; a long cycle is shortened."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.audit.model import GROUPS, Audit
from heataudit.audit.tables import actuator_table, pump_table
from heataudit.report.words import GROUP_NAMES
from heataudit.report.workbook.page import Report
from heataudit.report.workbook.table import Field, Plan, write_table

MOST_PHASES = 200
"""Phases that the report shows; phases.csv has all."""

MOST_ROWS = 2000
"""Rows of the tables of pumps and actuators."""


def shown_phases(audit: Audit) -> NDArray[np.intp]:
    """Numbers of the phases that the report shows: all, or those with the most heat in the order of the cycle.

    Parameters
    ----------
    audit
        The answers.
    """
    if len(audit.phases) <= MOST_PHASES:
        return np.arange(len(audit.phases))
    phases = audit.phases
    heat = (phases["heat_kW"] * phases["duration_s"] * phases["repeats"]).to_numpy(float)
    return np.sort(np.argsort(-heat, kind="stable")[:MOST_PHASES])


def write_phases(report: Report) -> None:
    """Write the sheets.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit = report.audit
    numbers = shown_phases(audit)
    note = _note(audit, numbers)
    sheet = report.sheet("Phases", "Phases of the duty cycle", f"Mean powers, heat by kind of loss.{note}")
    table = audit.phases.iloc[numbers].assign(number=numbers + 1)
    fields = [
        Field("number", "No."), Field("phase", "Phase"), Field("duration_s", "Duration"), Field("repeats", "Repeats"),
        Field("shaft_power_kW", "Shaft power"), Field("useful_power_kW", "Useful power"),
        Field("heat_kW", "Heat", bar=True),
        *(Field(f"{g}_kW", GROUP_NAMES[g]) for g in GROUPS if (audit.phases[f"{g}_kW"] != 0).any()),
    ]  # fmt: skip
    if (table["returned_power_kW"] != 0).any():
        fields.insert(6, Field("returned_power_kW", "Given back by loads"))
    write_table(report, sheet, 4, table, Plan("PhasesOfCycle", fields, places="phase"))
    sheet.freeze_panes = "C5"
    _write_pumps(report, numbers, note)
    _write_actuators(report, numbers, note)


def _note(audit: Audit, numbers: NDArray[np.intp]) -> str:
    if len(numbers) == len(audit.phases):
        return ""
    return f" The {len(numbers)} of {len(audit.phases):,} phases with the most heat; phases.csv has everything."


def _of_phases(table_of: object, audit: Audit, numbers: NDArray[np.intp]) -> tuple[pd.DataFrame, str]:
    """Rows of the shown phases, and what to say where there are too many rows."""
    parts = [table_of(audit.machine, audit.solution, slice(n, n + 1)) for n in numbers]  # type: ignore[operator]
    table = pd.concat(parts, ignore_index=True)
    table["number"] = table["phase_number"] + 1
    cut = f" The first {MOST_ROWS:,} rows; phases.csv has everything." if len(table) > MOST_ROWS else ""
    return table.head(MOST_ROWS), cut


def _write_pumps(report: Report, numbers: NDArray[np.intp], note: str) -> None:
    table, cut = _of_phases(pump_table, report.audit, numbers)
    sheet = report.sheet("Pumps", "Pumps in each phase", f"Pressure at the outlet, flow delivered.{note}{cut}")
    fields = [
        Field("number", "No."), Field("phase", "Phase"), Field("component", "Pump"), Field("pressure_bar", "Pressure"),
        Field("flow_L_min", "Flow"), Field("slip_L_min", "Leakage"), Field("speed_rpm", "Speed"),
        Field("displacement_percent", "Displacement"), Field("shaft_power_kW", "Shaft power", bar=True),
        Field("heat_kW", "Heat"),
    ]  # fmt: skip
    write_table(report, sheet, 4, table, Plan("PumpsInPhases", fields, places="component"))


def _write_actuators(report: Report, numbers: NDArray[np.intp], note: str) -> None:
    table, cut = _of_phases(actuator_table, report.audit, numbers)
    sheet = report.sheet("Actuators", "Actuators in each phase", f"Positive in the commanded direction.{note}{cut}")
    fields = [
        Field("number", "No."), Field("phase", "Phase"), Field("component", "Actuator"), Field("state", "State"),
        Field("flow_L_min", "Flow"), Field("speed_mm_s", "Speed"), Field("speed_rpm", "Rotation"),
        Field("inlet_bar", "Inlet"), Field("outlet_bar", "Outlet"), Field("opening_percent", "Spool opening"),
        Field("power_kW", "Power on the load"), Field("heat_kW", "Heat"),
    ]  # fmt: skip
    used = [f for f in fields if table[f.key].notna().any()]
    write_table(report, sheet, 4, table, Plan("ActuatorsInPhases", used, places="component"))
