"""results.json: the answers for other programs; its keys and their units are a promise.

Numbers have all their digits; the same audit gives the same bytes. Phases are written a chunk at a time.
"""

from __future__ import annotations

import json
import math
from collections.abc import Callable, Iterator
from dataclasses import asdict
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from heataudit.audit.model import Audit
from heataudit.audit.tables import actuator_table, component_table, port_table, pump_table
from heataudit.report.chunks import chunks

Record = dict[str, Any]

THERMAL = (
    "mean_heat_kW", "tank_dissipation_kW", "equilibrium_C", "equilibrium_without_cooler_C", "warm_up_min", "ripple_K",
)  # fmt: skip
COOLER = (
    "needed", "design_heat_kW", "oil_inlet_C", "coolant_inlet_C", "oil_flow_L_min", "required_kW", "required_kW_K",
    "reserve_percent", "choice", "choice_oil_temperature_C", "existing_margin_percent",
)  # fmt: skip
LOSSES = ("component", "kind", "heat_kJ", "share", "annual_kWh")
PHASE = ("phase", "duration_s", "repeats", "heat_kW", "shaft_power_kW", "useful_power_kW")
PUMP = ("pressure_bar", "flow_L_min", "shaft_power_kW")
COMPONENT = ("flow_L_min", "drop_bar", "heat_kW")


def write_results(audit: Audit, path: Path, tell: Callable[[str], None] = lambda text: None) -> None:
    """Write results.json.

    Parameters
    ----------
    audit
        The answers.
    path
        The file.
    tell
        Hears how far the writing is.
    """
    with path.open("w", encoding="utf-8", newline="\n") as file:
        file.write("{")
        for number, (key, value) in enumerate(_parts(audit)):
            file.write(f"{',' if number else ''}\n{json.dumps(key)}: ")
            if key == "phases":
                _write_phases(audit, file.write, tell)
            else:
                file.write(_text(value))
        file.write("\n}\n")


def _write_phases(audit: Audit, write: Callable[[str], Any], tell: Callable[[str], None]) -> None:
    """A line for each phase."""
    separator = "[\n"
    for rows in chunks(audit):
        for record in _phase_records(audit, rows):
            write(separator + _text(record))
            separator = ",\n"
        tell(f"results.json: {rows.stop:,} of {len(audit.phases):,} phases")
    write("]")


def _parts(audit: Audit) -> Iterator[tuple[str, Any]]:
    """Top-level keys and values in order; the phases are written for themselves."""
    machine = audit.machine
    yield "format", 1
    yield "heataudit", audit.version
    yield "workbook", {"name": machine.source.name, "checksum": machine.checksum}
    yield "machine", machine.general["machine"]
    yield "conditions", asdict(audit.conditions)
    yield "cycle", asdict(audit.cycle)
    yield "phases", None
    yield "losses", by_component(audit.losses)[list(LOSSES)].pipe(_records)
    yield "loss_groups", audit.loss_groups
    yield "thermal", {key: getattr(audit.thermal, key) for key in THERMAL}
    yield "cooler", {key: getattr(audit.cooler, key) for key in COOLER}
    yield "annual", _annual(audit)
    yield "upgrades", []
    yield "uncertainty", None
    yield "readings", []
    yield "findings", [asdict(finding) for finding in audit.findings]


def by_component(losses: pd.DataFrame) -> pd.DataFrame:
    """Losses with one row per component, its groups added up, largest first.

    Parameters
    ----------
    losses
        A row for each component and group, as in `Audit.losses`.
    """
    sums = losses.groupby(["component", "kind"], sort=False, as_index=False)[["heat_kJ", "share", "annual_kWh"]].sum()
    return sums.sort_values("heat_kJ", ascending=False, kind="stable", ignore_index=True)


def _annual(audit: Audit) -> Record:
    """A year; electric and diesel drives have keys of their own."""
    annual = audit.annual
    fuel = {} if annual.fuel_L is None else {"fuel_L": annual.fuel_L}
    electric = {} if fuel and annual.drive_input_kWh is None else {"drive_input_kWh": annual.drive_input_kWh}
    rest = {key: getattr(annual, key) for key in ("loss_kWh", "energy_cost", "co2_kg")}
    return {"shaft_kWh": annual.shaft_kWh, **electric, **fuel, **rest}


def _phase_records(audit: Audit, rows: slice) -> Iterator[Record]:
    machine, solution = audit.machine, audit.solution
    pumps, actuators = pump_table(machine, solution, rows), actuator_table(machine, solution, rows)
    components, ports = component_table(machine, solution, rows), port_table(machine, solution, rows)
    phases = _records(audit.phases[list(PHASE)].iloc[rows])
    count = len(phases)
    named = zip(
        _nested(pumps, count, lambda kind: PUMP),
        _nested(actuators, count, _actuator_keys),
        _nested(components, count, lambda kind: (*COMPONENT, "velocity_m_s") if kind == "line" else COMPONENT),
        _nested(pumps, count, lambda kind: COMPONENT),
        _nested(actuators, count, lambda kind: COMPONENT),
        _pressures(ports, count),
        strict=True,
    )
    for phase, (of_pumps, of_actuators, parts, pump_parts, actuator_parts, pressures) in zip(
        phases, named, strict=True
    ):
        yield {
            **phase, "pumps": of_pumps, "actuators": of_actuators,
            "components": {**pump_parts, **parts, **actuator_parts}, "ports": pressures,
        }  # fmt: skip


def _records(table: pd.DataFrame) -> list[Record]:
    return [dict(zip(table.columns, row, strict=True)) for row in table.itertuples(index=False, name=None)]


def _actuator_keys(kind: str) -> tuple[str, ...]:
    speed = "speed_rpm" if kind == "motor" else "speed_mm_s"
    return ("state", "flow_L_min", speed, "inlet_bar", "outlet_bar", "opening_percent")


def _nested(table: pd.DataFrame, phases: int, keys_of: Callable[[str], tuple[str, ...]]) -> Iterator[dict[str, Record]]:
    """For each phase a record for each component; a machine may have none of a sort."""
    count = len(table) // phases
    names, kinds = table["component"].iloc[:count], table["kind"].iloc[:count]
    records = []
    for k, kind in enumerate(kinds):
        keys = keys_of(kind)
        columns = [_plain(table[key].iloc[k::count]) for key in keys]
        records.append([dict(zip(keys, values, strict=True)) for values in zip(*columns, strict=True)])
    for of_phase in zip(*records, strict=True) if records else [()] * phases:
        yield dict(zip(names, of_phase, strict=True))


def _pressures(ports: pd.DataFrame, phases: int) -> Iterator[dict[str, float | None]]:
    count = len(ports) // phases
    labels, values = ports["port"].iloc[:count].tolist(), _plain(ports["pressure_bar"])
    for start in range(0, len(values), count):
        yield dict(zip(labels, values[start : start + count], strict=True))


def _plain(column: pd.Series) -> list[Any]:
    """Cells as JSON knows them: None for what is no number."""
    if not pd.api.types.is_numeric_dtype(column):
        return column.tolist()
    cells = column.to_numpy(float)
    plain = cells.astype(object)
    plain[~np.isfinite(cells)] = None
    return plain.tolist()


def _text(value: Any) -> str:
    return json.dumps(_clean(value), ensure_ascii=False, allow_nan=False)


def _clean(value: Any) -> Any:
    """Only what JSON knows; null for numbers that are none."""
    if isinstance(value, dict):
        return {key: _clean(part) for key, part in value.items()}
    if isinstance(value, list):
        return [_clean(part) for part in value]
    if isinstance(value, np.generic):
        value = value.item()
    return None if isinstance(value, float) and not math.isfinite(value) else value
