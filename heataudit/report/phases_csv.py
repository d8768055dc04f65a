"""phases.csv: every phase and component, for a spreadsheet or a program."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pandas as pd

from heataudit.audit.model import Audit
from heataudit.audit.tables import actuator_table, component_table, pump_table
from heataudit.report.chunks import chunks
from heataudit.report.safe import unformula

COLUMNS = (
    "phase_number", "phase", "duration_s", "repeats", "component", "kind", "flow_L_min", "drop_bar", "heat_kW",
    "velocity_m_s", "pressure_bar", "slip_L_min", "speed_rpm", "displacement_percent", "shaft_power_kW", "state",
    "speed_mm_s", "inlet_bar", "outlet_bar", "opening_percent", "power_kW",
)  # fmt: skip
"""Columns in order; `phase_number` counts from 1, `duration_s` is that of one repeat."""

WORDS = ("phase", "component", "kind", "state")


def write_phases(audit: Audit, path: Path, tell: Callable[[str], None] = lambda text: None) -> None:
    """Write phases.csv in UTF-8, a chunk of phases at a time.

    Parameters
    ----------
    audit
        The answers.
    path
        The file.
    tell
        Hears how far the writing is.
    """
    with path.open("w", encoding="utf-8", newline="") as file:
        for rows in chunks(audit):
            table = phase_rows(audit, rows)
            table.to_csv(file, index=False, header=rows.start == 0, lineterminator="\n")
            tell(f"phases.csv: {rows.stop:,} of {len(audit.phases):,} phases")


def phase_rows(audit: Audit, rows: slice) -> pd.DataFrame:
    """Some phases with all their pumps, components and actuators, columns as in `COLUMNS`.

    Parameters
    ----------
    audit
        The answers.
    rows
        Phases wanted.
    """
    parts = [table(audit.machine, audit.solution, rows) for table in (pump_table, component_table, actuator_table)]
    parts = [part for part in parts if len(part)]
    table = pd.concat(parts, ignore_index=True).sort_values("phase_number", kind="stable", ignore_index=True)
    numbers = table["phase_number"].to_numpy()
    for key in ("duration_s", "repeats"):
        table[key] = audit.phases[key].to_numpy()[numbers]
    table["phase_number"] = numbers + 1
    table = table.reindex(columns=list(COLUMNS))
    for key in WORDS:
        codes, words = pd.factorize(table[key], use_na_sentinel=False)
        table[key] = pd.Series([unformula(word) for word in words], dtype=object).to_numpy()[codes]
    return table
