"""Whole audits of real workbooks, solved by the network."""

from __future__ import annotations

import pickle
from dataclasses import replace
from functools import cache

import numpy as np
import pandas as pd
import pytest

from heataudit.audit.losses import find_losses
from heataudit.audit.model import GROUPS, Audit
from heataudit.audit.rectangles import hydraulic_power
from heataudit.audit.run import audit
from heataudit.audit.states import network, repeated, solve_at
from heataudit.machine import Machine
from heataudit.physics.constants import KELVIN
from heataudit.physics.reservoir import Tank
from tests.audit.fixture import changed, press


@cache
def cooled() -> Machine:
    """The press with a small existing cooler and an energy price."""
    return changed(press(), reservoir={"cooler_capacity": 20.0}, general={"energy_price": 0.2})


@cache
def done() -> Audit:
    return audit(cooled())


@cache
def plain() -> Audit:
    return audit(press())


def test_an_audit_travels_between_processes() -> None:
    copy = pickle.loads(pickle.dumps(done()))
    assert (copy.cycle, copy.findings, copy.thermal.equilibrium_C) == (
        done().cycle, done().findings, done().thermal.equilibrium_C,
    )  # fmt: skip


def test_energy_is_accounted_for() -> None:
    cycle = done().cycle
    assert cycle.shaft_energy_kJ + cycle.returned_energy_kJ == pytest.approx(
        cycle.useful_energy_kJ + cycle.heat_energy_kJ + cycle.lifting_energy_kJ, rel=1e-6
    )
    assert sum(done().loss_groups.values()) == cycle.heat_energy_kJ
    assert abs(cycle.balance_error_kJ) < 1e-4 * cycle.shaft_energy_kJ
    assert done().sound


def test_loads_do_the_work_that_the_cycle_asks_for() -> None:
    """30 kN at 50 mm/s for 4 s, then 5 kN at the speed found for 3 s."""
    up = done().solution.actuators.speed[0, 1]
    assert done().cycle.useful_energy_kJ == pytest.approx(30 * 0.05 * 4 + 5 * up * 3, rel=1e-6)


def test_the_oil_is_where_as_much_goes_out_as_comes_in() -> None:
    found, settings = done(), cooled().reservoir
    oil = found.conditions.oil_temperature_C
    tank = Tank(settings["oil_volume"], settings["length"], settings["width"], settings["height"])
    out = float(tank.heat(KELVIN + oil, KELVIN + 25.0)) + 20.0 * (oil - 25.0)
    assert found.conditions.oil_temperature_basis == "equilibrium"
    assert out / 1e3 == pytest.approx(found.thermal.mean_heat_kW, abs=0.01 * 0.04)  # 0.01 K of some 40 W/K
    assert found.thermal.tank_dissipation_kW + 0.02 * (oil - 25.0) == pytest.approx(out / 1e3)
    assert found.thermal.equilibrium_without_cooler_C > oil


def test_parts_of_the_audit_tell_the_same() -> None:
    found = done()
    time = found.phases["duration_s"] * found.phases["repeats"]
    assert (found.phases["heat_kW"] * time).sum() == pytest.approx(found.cycle.heat_energy_kJ)
    assert found.losses["heat_kJ"].sum() == pytest.approx(found.cycle.heat_energy_kJ)
    assert found.losses["share"].sum() == pytest.approx(1.0)
    assert found.losses["annual_kWh"].sum() == pytest.approx(found.annual.loss_kWh)
    assert found.losses.groupby("group")["heat_kJ"].sum().to_dict() == pytest.approx(
        {group: heat for group, heat in found.loss_groups.items() if group in set(found.losses["group"])}
    )
    lines = found.losses[found.losses["kind"] == "line"]["heat_kJ"].sum()
    assert found.lines["heat_kJ"].sum() == pytest.approx(lines)
    power, _ = hydraulic_power(found.solution)
    assert found.rectangles.groupby("phase_number")["power_kW"].sum().to_numpy() * 1e3 == pytest.approx(power)
    assert set(GROUPS) == set(found.loss_groups)


def test_the_warm_up_ends_at_the_equilibrium() -> None:
    thermal = done().thermal
    assert thermal.warm_up["with_cooler_C"].iloc[-1] == pytest.approx(thermal.equilibrium_C, abs=0.1)
    assert 0 < thermal.warm_up_min < 600
    assert 0 < thermal.ripple_K < 1


def test_repeats_and_copies_of_a_cycle_say_the_same() -> None:
    machine = press()
    copies = replace(machine, cycle=repeated(machine.cycle, 4))
    one, four = plain(), audit(copies)
    assert four.cycle.mean_heat_kW == pytest.approx(one.cycle.mean_heat_kW, rel=1e-6)
    assert four.conditions.oil_temperature_C == pytest.approx(one.conditions.oil_temperature_C, abs=0.01)
    assert four.annual.shaft_kWh == pytest.approx(one.annual.shaft_kWh, rel=1e-6)


def test_temperatures_in_one_batch_are_as_one_by_one() -> None:
    machine = press()
    together = list(solve_at(network, machine, machine.cycle, [300.0, 330.0, 360.0]))
    for temperature, solved in zip([300.0, 330.0, 360.0], together, strict=True):
        alone = network(machine, machine.cycle, np.full(3, temperature))
        assert solved.heat == pytest.approx(alone.heat, rel=1e-6)
        assert solved.oil_temperature == pytest.approx(np.full(3, temperature))


def test_many_temperatures_take_several_batches(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("heataudit.audit.states.MOST_ROWS", 7)
    machine = press()
    sizes: list[int] = []

    def counted(m: Machine, cycle: object, temperature: np.ndarray) -> object:
        sizes.append(len(temperature))
        return network(m, cycle, temperature)  # type: ignore[arg-type]

    found = [s.oil_temperature[0] for s in solve_at(counted, machine, machine.cycle, [300.0, 310.0, 320.0])]  # type: ignore[arg-type]
    assert (found, sizes) == ([300.0, 310.0, 320.0], [6, 3])


def test_hotter_air_means_hotter_oil() -> None:
    warm = changed(press(), general={"ambient_temperature": KELVIN + 35.0, "design_ambient_temperature": KELVIN + 45.0})
    cold, hot = plain(), audit(warm)
    assert hot.thermal.equilibrium_C > cold.thermal.equilibrium_C
    assert hot.cooler.required_kW_K >= cold.cooler.required_kW_K


def test_a_cooler_in_the_return_line_sees_warmer_oil() -> None:
    found = audit(changed(cooled(), reservoir={"cooler_flow_from": "Return"}))
    assert found.cooler.oil_inlet_C > 60.0
    assert found.thermal.equilibrium_C < done().thermal.equilibrium_C


def test_a_trapped_volume_adds_its_energy_once_a_cycle() -> None:
    machine = replace(press(), actuators=press().actuators.assign(trapped_volume=5e-3))
    machine = changed(machine, general={"oil_temperature": KELVIN + 45.0})
    plain = audit(changed(press(), general={"oil_temperature": KELVIN + 45.0}))
    found = audit(machine)
    inlet = plain.solution.actuators.inlet[0, :2]
    energy = float((inlet**2).sum()) * 5e-3 / (2 * 1.4e9) / 1e3  # p² V / (2 K), both loaded moves
    assert found.loss_groups["other"] == pytest.approx(energy)
    assert found.cycle.shaft_energy_kJ - plain.cycle.shaft_energy_kJ == pytest.approx(energy)
    assert found.drives["mean_shaft_kW"].sum() * 17 == pytest.approx(found.cycle.shaft_energy_kJ)


def test_tables_have_the_columns_that_they_promise() -> None:
    found = done()
    promised = {
        "losses": "component kind group heat_kJ share annual_kWh annual_cost",
        "lines": "line service size inside_diameter_mm count length_m phase flow_L_min velocity_m_s guideline_m_s "
        "reynolds drop_bar mean_heat_kW heat_kJ annual_kWh annual_cost",
        "rectangles": "phase_number phase part flow_start_L_min flow_width_L_min pressure_start_bar "
        "pressure_height_bar power_kW",
        "drives": "drive kind peak_shaft_kW mean_shaft_kW power_limit_kW annual_input_kWh annual_fuel_L",
        "cold_start": "pump phase viscosity_mm2_s pressure_bar relief_flow_L_min inlet_bar",
    }
    for name, columns in promised.items():
        table: pd.DataFrame = getattr(found, name)
        assert table.columns.tolist() == columns.split(), name
    assert found.losses["heat_kJ"].is_monotonic_decreasing


def test_losses_do_not_depend_on_the_order_of_phases() -> None:
    cycle = press().cycle
    order = np.array([2, 0, 1])
    turned = replace(press(), cycle=cycle.take(order))
    temperature = np.full(3, KELVIN + 45.0)
    first = find_losses(press(), cycle, network(press(), cycle, temperature))
    second = find_losses(turned, turned.cycle, network(turned, turned.cycle, temperature))
    assert second.powers == pytest.approx(first.powers[:, order], rel=1e-6, abs=1e-6)
