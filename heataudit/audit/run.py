"""The pipeline: a machine becomes an audit."""

from __future__ import annotations

from importlib.metadata import PackageNotFoundError, version

import pandas as pd

from heataudit.audit.advice import (
    cold_cooler_findings,
    cold_findings,
    cold_flow_findings,
    oil_findings,
    unsolved_findings,
    waste_findings,
)
from heataudit.audit.annual import drive_table, drives, with_annual, year
from heataudit.audit.cold_start import cold_start_table
from heataudit.audit.cooler import size_cooler
from heataudit.audit.findings import Solved, phase_findings
from heataudit.audit.lines import line_table
from heataudit.audit.losses import find_losses, phase_table, totals
from heataudit.audit.model import Audit, Conditions, Finding, Thermal
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
    cold, warm = (
        next(iter(solve_at(solver, machine, cycle, [machine.general[f"{state}_temperature"]])))
        for state in ("start", "highest_oil")
    )
    cold_table = cold_start_table(machine, cycle, cold)
    hot = sample(around, cycle, warm)
    bare, balance = _balances(curve, cycle, solver)
    temperature, basis, solution = _conditions(machine, balance, solver)

    losses = find_losses(machine, cycle, solution)
    energies = totals(cycle, solution, losses)
    solved = Solved(machine, cycle, solution, losses, drives(machine, solution, losses))
    cooler = size_cooler(curve, cycle, hot, around.time_constant(temperature))
    driven = drive_table(machine, cycle, solved.drives)
    annual = year(machine, energies, driven, cooler)
    conditions = _state(around, temperature, basis)
    thermal = _thermal(cycle, balance, bare, (temperature, energies.mean_heat_kW))
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
        findings=_in_order(
            *phase_findings(solved),
            *unsolved_findings("Cooler", cycle, warm),
            *oil_findings(conditions, thermal, cooler),
            *waste_findings(solved),
            *unsolved_findings("Cold start", cycle, cold),
            *cold_findings(machine, cold_table, float(cold.viscosity[0]) * 1e6),
            *cold_flow_findings(cycle, cold, warm),
            *cold_cooler_findings(cooler, thermal),
        ),
    )


def _balances(curve: HeatCurve, cycle: Cycle, solver: Solver) -> tuple[tuple[float | None, HeatCurve], Balance | None]:
    """Without a cooler: where the oil ends [K] and the curve through that point; with the existing one: the balance."""
    capacity = float(curve.surroundings.machine.reservoir["cooler_capacity"])
    balance = find_balance(curve, cycle, solver, 0.0)
    bare = (None, curve) if balance is None else (balance.temperature, balance.curve)
    return bare, balance if capacity == 0 else find_balance(curve, cycle, solver, capacity)


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
    cycle: Cycle, balance: Balance | None, bare: tuple[float | None, HeatCurve], now: tuple[float, float]
) -> Thermal:
    """The heat balance with and without the cooler, and the tank at the audit's temperature [K] and heat [kW]."""
    bare_end, bare_curve = bare
    end, curve = (None, bare_curve) if balance is None else (balance.temperature, balance.curve)
    around, machine = curve.surroundings, curve.surroundings.machine
    capacity = float(machine.reservoir["cooler_capacity"])
    temperature, mean_heat_kW = now
    with_cooler, without_cooler = warm_up(curve, capacity, end), warm_up(bare_curve, 0.0, bare_end)
    return Thermal(
        mean_heat_kW=mean_heat_kW + cycle_mean(cycle, other_heat(machine, cycle)) / 1e3,
        tank_dissipation_kW=float(around.tank.heat(temperature, around.ambient)) / 1e3,
        tank_coefficient_W_m2K=float(around.tank.conductance(temperature, around.ambient)) / around.surface,
        equilibrium_C=None if end is None else end - KELVIN,
        equilibrium_without_cooler_C=None if bare_end is None else bare_end - KELVIN,
        warm_up_min=None if with_cooler.warm_after is None else with_cooler.warm_after / 60.0,
        ripple_K=None if balance is None else ripple(balance, cycle, capacity),
        time_constant_min=around.time_constant(temperature) / 60.0,
        start_temperature_C=float(machine.general["start_temperature"]) - KELVIN,
        highest_temperature_C=float(machine.general["highest_oil_temperature"]) - KELVIN,
        heat_curve=curve.table(),
        warm_up=warm_up_table(with_cooler, without_cooler),
    )


def _with_shares(table: pd.DataFrame, heat_kJ: float) -> pd.DataFrame:
    return table.assign(share=table["heat_kJ"] / heat_kJ if heat_kJ else 0.0)


def _in_order(*found: Finding) -> tuple[Finding, ...]:
    """Findings, the gravest first."""
    return tuple(sorted(found, key=lambda finding: SEVERITIES.index(finding.severity)))


def _version() -> str:
    try:
        return version("heataudit")
    except PackageNotFoundError:
        return "unknown"
