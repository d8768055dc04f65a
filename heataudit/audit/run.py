"""The pipeline: a machine becomes an audit."""

from __future__ import annotations

from importlib.metadata import PackageNotFoundError, version

import pandas as pd

from heataudit.audit.advice import cold_findings, oil_findings, waste_findings
from heataudit.audit.annual import drive_table, drives, with_annual, year
from heataudit.audit.cold_start import cold_start_table
from heataudit.audit.cooler import size_cooler
from heataudit.audit.findings import Solved, phase_findings
from heataudit.audit.lines import line_table
from heataudit.audit.losses import find_losses, phase_table, totals
from heataudit.audit.model import Audit, Conditions, Cooler, Finding, Thermal
from heataudit.audit.rectangles import rectangle_table
from heataudit.audit.states import Solver, network, solve_at
from heataudit.audit.surroundings import Surroundings, cycle_mean, other_heat
from heataudit.audit.thermal import Balance, HeatCurve, find_balance, heat_curve, sample
from heataudit.audit.warm_up import ripple, warm_up, warm_up_table
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.constants import KELVIN

SEVERITIES = ("danger", "warning", "note")
"""Severities of findings, the gravest first."""


def audit(machine: Machine, solver: Solver = network) -> Audit:
    """Answer where the energy goes, how warm the oil gets, which cooler it needs and what to look at.

    The oil temperature is the one given, else the equilibrium with the existing cooler at yearly ambient. Where there
    is none below 120 °C the machine cannot run on; it is audited at its highest oil temperature, the hottest at which
    it may work, and `oil-too-hot` says so.

    Parameters
    ----------
    machine
        What was read from the workbook.
    solver
        Solves a batch of phases.
    """
    cycle, around = machine.cycle, Surroundings(machine)
    curve = heat_curve(around, cycle, solver)
    capacity = float(machine.reservoir["cooler_capacity"])
    balance = find_balance(curve, cycle, solver, capacity)
    bare = balance if capacity == 0 else find_balance(curve, cycle, solver, 0.0)
    temperature, basis, solution = _conditions(machine, balance, solver)
    general = machine.general
    cold, hot = solve_at(solver, machine, cycle, [general["start_temperature"], general["highest_oil_temperature"]])

    losses = find_losses(machine, cycle, solution)
    energies = totals(cycle, solution, losses)
    window = around.time_constant(temperature)
    cooler = size_cooler(curve, cycle, sample(around, cycle, hot), window)
    found = drives(machine, solution, losses)
    driven = drive_table(machine, cycle, found)
    annual = year(machine, energies, driven, cooler)
    conditions = _state(around, temperature, basis)
    thermal = _thermal(curve, cycle, (balance, bare), (temperature, energies.mean_heat_kW))
    cold_table = cold_start_table(machine, cycle, cold)
    solved = Solved(machine, cycle, solution, losses, found)
    return Audit(
        machine=machine,
        solution=solution,
        version=_version(),
        conditions=conditions,
        cycle=energies,
        phases=phase_table(cycle, solution, losses, other_heat(machine, cycle)),
        losses=with_annual(_with_shares(losses.table, energies.heat_energy_kJ), energies, annual),
        loss_groups=losses.groups(cycle),
        lines=with_annual(line_table(machine, cycle, solution), energies, annual),
        rectangles=rectangle_table(cycle, solution, losses),
        drives=driven,
        thermal=thermal,
        cooler=cooler,
        annual=annual,
        cold_start=cold_table,
        findings=_findings(solved, conditions, thermal, cooler, (cold_table, cold)),
    )


def _conditions(machine: Machine, balance: Balance | None, solver: Solver) -> tuple[float, str, Solution]:
    """Oil temperature of the audit [K], where it comes from, and the cycle solved at it."""
    given = machine.general["oil_temperature"]
    if given is None and balance is not None:
        return balance.temperature, "equilibrium", balance.solution
    temperature = float(machine.general["highest_oil_temperature"] if given is None else given)
    (solution,) = solve_at(solver, machine, machine.cycle, [temperature])
    return temperature, "given", solution


def _state(around: Surroundings, temperature: float, basis: str) -> Conditions:
    return Conditions(
        oil_temperature_C=temperature - KELVIN,
        oil_temperature_basis=basis,
        ambient_temperature_C=around.ambient - KELVIN,
        design_ambient_temperature_C=around.design_ambient - KELVIN,
        viscosity_mm2_s=float(around.oil.viscosity(temperature)) * 1e6,
        density_kg_m3=float(around.oil.density(temperature)),
    )


def _thermal(
    curve: HeatCurve, cycle: Cycle, balances: tuple[Balance | None, Balance | None], now: tuple[float, float]
) -> Thermal:
    """The heat balance: equilibria with and without the cooler, and the tank at the audit's temperature and heat."""
    around, machine = curve.surroundings, curve.surroundings.machine
    capacity = float(machine.reservoir["cooler_capacity"])
    temperature, mean_heat_kW = now
    ends = [None if balance is None else balance.temperature for balance in balances]
    curves = [curve if balance is None else balance.curve for balance in balances]
    runs = [warm_up(c, k, end) for c, k, end in zip(curves, (capacity, 0.0), ends, strict=True)]
    return Thermal(
        mean_heat_kW=mean_heat_kW + cycle_mean(cycle, other_heat(machine, cycle)) / 1e3,
        tank_dissipation_kW=float(around.tank.heat(temperature, around.ambient)) / 1e3,
        tank_coefficient_W_m2K=float(around.tank.conductance(temperature, around.ambient)) / around.surface,
        equilibrium_C=None if ends[0] is None else ends[0] - KELVIN,
        equilibrium_without_cooler_C=None if ends[1] is None else ends[1] - KELVIN,
        warm_up_min=None if runs[0].warm_after is None else runs[0].warm_after / 60.0,
        ripple_K=None if balances[0] is None else ripple(balances[0], cycle, capacity),
        time_constant_min=around.time_constant(temperature) / 60.0,
        start_temperature_C=float(machine.general["start_temperature"]) - KELVIN,
        highest_temperature_C=float(machine.general["highest_oil_temperature"]) - KELVIN,
        heat_curve=curves[0].table(),
        warm_up=warm_up_table(*runs),
    )


def _with_shares(table: pd.DataFrame, heat_kJ: float) -> pd.DataFrame:
    return table.assign(share=table["heat_kJ"] / heat_kJ if heat_kJ else 0.0)


def _findings(
    solved: Solved, conditions: Conditions, thermal: Thermal, cooler: Cooler, start: tuple[pd.DataFrame, Solution]
) -> tuple[Finding, ...]:
    """All findings, the gravest first."""
    table, cold = start
    found = [
        *phase_findings(solved),
        *oil_findings(conditions, thermal, cooler),
        *waste_findings(solved),
        *cold_findings(solved.machine, table, float(cold.viscosity[0]) * 1e6),
    ]
    return tuple(sorted(found, key=lambda finding: SEVERITIES.index(finding.severity)))


def _version() -> str:
    try:
        return version("heataudit")
    except PackageNotFoundError:
        return "unknown"
