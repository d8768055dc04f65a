"""What an audit is: its answers as plain records and tables, units in the names."""

from __future__ import annotations

from dataclasses import dataclass

import pandas as pd

from heataudit.machine import Machine
from heataudit.network.solution import Solution

GROUPS = ("pump", "idle", "bypass", "metering", "lines", "overflow", "lowering", "actuators", "other")
"""Loss groups, in the order in which they are shown."""


@dataclass(frozen=True)
class Conditions:
    """State of the oil and of the surroundings. `oil_temperature_basis` is "given" or "equilibrium"."""

    oil_temperature_C: float
    oil_temperature_basis: str
    ambient_temperature_C: float
    design_ambient_temperature_C: float
    viscosity_mm2_s: float
    density_kg_m3: float


@dataclass(frozen=True)
class CycleTotals:
    """Energies of one cycle, repeats counted. Heat, mean and peak are without Other heat; efficiency is a fraction."""

    duration_s: float
    shaft_energy_kJ: float
    useful_energy_kJ: float
    returned_energy_kJ: float
    lifting_energy_kJ: float
    heat_energy_kJ: float
    mean_heat_kW: float
    peak_heat_kW: float
    efficiency: float | None
    balance_error_kJ: float


@dataclass(frozen=True)
class Thermal:
    """The oil's temperature; None where there is no such temperature.

    `heat_curve` holds `oil_C`, `heat_kW` (losses and Other heat), `tank_kW`, `tank_and_cooler_kW` at yearly ambient;
    `warm_up` holds `time_min`, `with_cooler_C`, `without_cooler_C` (cycle means over repeated cycles).
    `time_constant_min` is that of the tank without a cooler at the audit's oil temperature.
    """

    mean_heat_kW: float
    tank_dissipation_kW: float
    tank_coefficient_W_m2K: float
    equilibrium_C: float | None
    equilibrium_without_cooler_C: float | None
    warm_up_min: float | None
    ripple_K: float | None
    time_constant_min: float
    start_temperature_C: float
    highest_temperature_C: float
    heat_curve: pd.DataFrame
    warm_up: pd.DataFrame


@dataclass(frozen=True)
class Cooler:
    """The cooler that the machine needs. `verdict` says it in a sentence.

    `options` ranks the Coolers list: `cooler`, `kind`, `oil_flow_L_min` (range of its curve as text),
    `offered_kW_K` (at the oil flow, altitude and coolant of the design case; NaN where the curve does not cover the
    oil flow), `oil_temperature_C` (that it would give; NaN where none), `pressure_drop_bar`, `fan_power_kW`, `price`,
    `enough` (bool), `remark`.
    """

    needed: bool
    design_heat_kW: float
    tank_at_design_kW: float
    oil_inlet_C: float
    coolant_inlet_C: float
    oil_flow_L_min: float | None
    required_kW: float
    required_kW_K: float
    reserve_percent: float
    window_start_s: float
    window_s: float
    existing_kW_K: float
    existing_margin_percent: float | None
    choice: str | None
    choice_oil_temperature_C: float | None
    drop_hot_bar: float | None
    drop_cold_bar: float | None
    verdict: str
    options: pd.DataFrame


@dataclass(frozen=True)
class Annual:
    """A year's energy and money for the operating hours; None where a price, a factor or such a drive is not given.

    `price_per_kWh_loss` is what a kWh of heat costs as drive input [currency/kWh], for ranking losses in money.
    `fan_kWh` and `fan_cost` are what the fan of the chosen cooler takes beside the drives.
    """

    operating_hours: float
    shaft_kWh: float
    drive_input_kWh: float | None
    fuel_L: float | None
    loss_kWh: float
    fan_kWh: float
    energy_cost: float | None
    co2_kg: float | None
    currency: str
    price_per_kWh_loss: float | None
    fan_cost: float | None = None


@dataclass(frozen=True)
class Finding:
    """Something to look at: severity is "danger", "warning" or "note"; `phase` is the worst one, or ""."""

    code: str
    severity: str
    where: str
    phase: str
    text: str


@dataclass(frozen=True)
class Audit:
    """All answers about one machine.

    Tables (one row per ...):

    `phases`
        phase of the cycle: `phase`, `duration_s`, `repeats`, `shaft_power_kW` and `heat_kW` (decompression included,
        averaged over the duration), `useful_power_kW` (work on loads that oppose), `returned_power_kW` (given back by
        loads that drive, positive), `lifting_power_kW`, `other_heat_kW`, `balance_error_kW`, `converged`,
        `iterations`, `residual`, and the heat by group `<group>_kW` for every group of `GROUPS`.
    `losses`
        component and group, largest first: `component`, `kind`, `group`, `heat_kJ`, `share` (of the heat energy),
        `annual_kWh`, `annual_cost` (NaN without a price).
    `lines`
        line: `line`, `service`, `size`, `inside_diameter_mm`, `count`, `length_m`, and in its fastest phase `phase`,
        `flow_L_min`, `velocity_m_s`, `guideline_m_s`, `reynolds`, `drop_bar`; then over the cycle `mean_heat_kW`,
        `heat_kJ`, `annual_kWh`, `annual_cost`.
    `rectangles`
        part of a phase's pressure-flow rectangle: `phase_number`, `phase`, `part` ("load", "metering", "lines",
        "bypass", "overflow", "idle", "lowering", "actuators", "other"), `flow_start_L_min`, `flow_width_L_min`,
        `pressure_start_bar`, `pressure_height_bar`, `power_kW`. Areas sum to the hydraulic power of the pumps.
    `cold_start`
        pump in the worst phase at the start temperature: `pump`, `phase`, `viscosity_mm2_s`, `pressure_bar`,
        `relief_flow_L_min`, `inlet_bar` (absolute).

    `loss_groups` maps each of `GROUPS` to its heat [kJ] in one cycle; `drives` has a row per drive with `drive`,
    `kind`, `peak_shaft_kW`, `mean_shaft_kW`, `power_limit_kW` (NaN none), `annual_input_kWh`, `annual_fuel_L`.
    `solution` holds every phase x component in SI units.
    """

    machine: Machine
    solution: Solution
    version: str
    conditions: Conditions
    cycle: CycleTotals
    phases: pd.DataFrame
    losses: pd.DataFrame
    loss_groups: dict[str, float]
    lines: pd.DataFrame
    rectangles: pd.DataFrame
    drives: pd.DataFrame
    thermal: Thermal
    cooler: Cooler
    annual: Annual
    cold_start: pd.DataFrame
    findings: tuple[Finding, ...]

    @property
    def sound(self) -> bool:
        """Whether every phase converged and every balance holds."""
        return not any(finding.code in ("not-converged", "balance-error") for finding in self.findings)
