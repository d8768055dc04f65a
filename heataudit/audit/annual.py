"""A year's energy, money and carbon dioxide, drive by drive."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np
import pandas as pd

from heataudit.audit.figures import HOUR, KWH
from heataudit.audit.losses import Losses
from heataudit.audit.model import Annual, Cooler, CycleTotals
from heataudit.audit.routes import rows_of
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.arrays import Array
from heataudit.physics.pumps import DIESEL_DENSITY, electric_input, fuel_flow

OWN_EFFICIENCY = 0.92
"""Efficiency [-] of the electric motor of a pump without a drive (common practice)."""

NO_LOAD_SHARE = 0.03
"""No-load power of an electric drive [-], per its largest power, where it is not given (common practice)."""

IDLE_SHARE = 0.10
"""Idle fuel of an engine [-], per its largest burn, where it is not given (common practice)."""

LITRE = 1e-3
"""One litre [m³]."""


class Drive(NamedTuple):
    """A drive over the cycle: its row of the table, its shaft power [W] and whether it turns, shape (phases,)."""

    name: str
    kind: str
    row: Any
    power: Array
    turns: Array


def drives(machine: Machine, solution: Solution, losses: Losses) -> list[Drive]:
    """All drives with the sum of their pumps' shaft powers; a pump without a drive has an electric motor of its own.

    What pressing trapped oil takes is shared among the pumps as their shaft powers are.

    Parameters
    ----------
    machine
        Gives drives and pumps.
    solution
        The solved phases.
    losses
        Their losses.
    """
    power = np.maximum(solution.pumps.shaft_power, 0.0)
    total = power.sum(axis=0)
    share = np.divide(power, total, out=np.full_like(power, 1.0 / len(power)), where=total > 0)
    shaft = solution.pumps.shaft_power + share * losses.let_down
    turning = solution.pumps.speed > 0
    drive_of = dict(zip(machine.pumps["name"], machine.pumps["drive"], strict=True))
    owners = np.array([drive_of[name] or name for name in solution.pumps.name], object)
    rows = {row.name: row for row in rows_of(machine.drives)}
    return [
        Drive(name, rows[name].kind if name in rows else "electric", rows.get(name),
              shaft[owners == name].sum(axis=0), turning[owners == name].any(axis=0))
        for name in dict.fromkeys(owners)
    ]  # fmt: skip


def drive_input(drive: Drive) -> Array:
    """Electric power [W] or fuel [m³/s] that a drive takes in, shape (phases,).

    Parameters
    ----------
    drive
        The drive over the cycle.
    """
    largest = float(np.max(drive.power, initial=0.0))
    if drive.kind == "diesel":
        idle = _given(drive.row.idle_fuel, IDLE_SHARE * drive.row.specific_fuel_consumption * largest / DIESEL_DENSITY)
        return np.where(drive.turns, fuel_flow(drive.power, drive.row.specific_fuel_consumption, idle), 0.0)
    efficiency = OWN_EFFICIENCY if drive.row is None else drive.row.efficiency
    no_load = _given(np.nan if drive.row is None else drive.row.no_load_power, NO_LOAD_SHARE * largest)
    return np.where(drive.turns, electric_input(drive.power, efficiency, no_load), 0.0)


def _given(value: float, otherwise: float) -> float:
    return otherwise if np.isnan(value) else value


def drive_table(machine: Machine, cycle: Cycle, found: list[Drive]) -> pd.DataFrame:
    """Drives as `Audit.drives` says.

    Parameters
    ----------
    machine
        Gives the operating hours.
    cycle
        The phases.
    found
        The drives over the cycle.
    """
    time = cycle.duration * cycle.repeats
    cycles = float(machine.general["operating_hours"]) * HOUR / time.sum()
    rows = []
    for drive in found:
        taken = float(drive_input(drive) @ time) * cycles
        diesel = drive.kind == "diesel"
        limit = np.nan if drive.row is None else float(drive.row.power_limit)
        rows.append((
            drive.name, drive.kind, float(drive.power.max()) / 1e3, float(drive.power @ time / time.sum()) / 1e3,
            limit / 1e3, np.nan if diesel else taken / KWH, taken / LITRE if diesel else np.nan,
        ))  # fmt: skip
    columns = ["drive", "kind", "peak_shaft_kW", "mean_shaft_kW", "power_limit_kW", "annual_input_kWh", "annual_fuel_L"]
    return pd.DataFrame(rows, columns=columns)


def year(machine: Machine, totals: CycleTotals, table: pd.DataFrame, cooler: Cooler) -> Annual:
    """A year of such cycles. The fan is that of the cooler chosen; its energy is not part of the drives' input.

    Price and CO2 factor hold for a kWh where all drives are electric and for a litre where all are engines; with both
    kinds on one machine one price says nothing, and there is no money.

    Parameters
    ----------
    machine
        Gives hours, price and CO2 factor.
    totals
        Energies of one cycle.
    table
        The drives.
    cooler
        The cooler that is needed.
    """
    general = machine.general
    hours = float(general["operating_hours"])
    cycles = hours * HOUR / totals.duration_s
    shaft, loss = (energy * 1e3 / KWH * cycles for energy in (totals.shaft_energy_kJ, totals.heat_energy_kJ))
    kinds = set(table["kind"])
    electric = float(table["annual_input_kWh"].sum()) if "electric" in kinds else None
    fuel = float(table["annual_fuel_L"].sum()) if "diesel" in kinds else None
    amount = None if len(kinds) > 1 else electric if fuel is None else fuel
    cost, co2 = (
        None if amount is None or general[key] is None else amount * float(general[key])
        for key in ("energy_price", "co2_factor")
    )
    fan = cooler.options["fan_power_kW"].iloc[0] if cooler.choice is not None else 0.0
    return Annual(
        operating_hours=hours,
        shaft_kWh=shaft,
        drive_input_kWh=electric,
        fuel_L=fuel,
        loss_kWh=loss,
        fan_kWh=float(fan) * hours,
        energy_cost=cost,
        co2_kg=co2,
        currency=str(general["currency"]),
        price_per_kWh_loss=cost / shaft if cost is not None and shaft > 0 else None,
        fan_cost=None if cost is None or fuel is not None else float(fan) * hours * float(general["energy_price"]),
    )


def with_annual(table: pd.DataFrame, totals: CycleTotals, annual: Annual) -> pd.DataFrame:
    """A table with `heat_kJ` in one cycle, and the year's energy and money beside it.

    Parameters
    ----------
    table
        Losses or lines.
    totals
        Energies of one cycle.
    annual
        The year.
    """
    energy = table["heat_kJ"] * 1e3 / KWH * (annual.operating_hours * HOUR / totals.duration_s)
    price = np.nan if annual.price_per_kWh_loss is None else annual.price_per_kWh_loss
    return table.assign(annual_kWh=energy, annual_cost=energy * price)
