from dataclasses import replace

import numpy as np
import pytest

from heataudit.audit.run import audit
from heataudit.audit.surroundings import Surroundings, cycle_mean
from heataudit.audit.thermal import find_balance, heat_curve
from heataudit.machine import Machine
from heataudit.network.solution import Solution
from heataudit.network.solve import spread_phases
from heataudit.physics.constants import KELVIN
from tests.audit.fixture import changed, constant, press, relief_solver, solution, with_conductance, with_cycle

AT_20 = {"ambient_temperature": 293.15, "design_ambient_temperature": 293.15, "start_temperature": 293.15}


def mass(watts_per_kelvin: float = 25.0, **reservoir: object) -> Machine:
    """A machine of one phase whose tank gives off so much per kelvin, at 20 °C ambient and start."""
    machine = changed(with_cycle(press(), [60.0]), general=AT_20, reservoir=reservoir)
    return with_conductance(machine, watts_per_kelvin)


def test_a_constant_heat_has_the_equilibrium_of_the_closed_form() -> None:
    found = audit(mass(), constant(1200.0)).thermal
    # closed form, 18.1 of the check values: 20 + 1200 / 25
    assert found.equilibrium_C == pytest.approx(68.0, abs=1e-5)
    assert found.equilibrium_without_cooler_C == found.equilibrium_C
    assert found.ripple_K == pytest.approx(0.0, abs=1e-9)


def test_the_mean_heat_counts_time() -> None:
    machine = with_cycle(press(), [20.0, 30.0, 10.0])
    heats = {20.0: 3000.0, 30.0: 600.0, 10.0: 0.0}
    found = audit(machine, relief_solver(lambda cycle, _: np.array([heats[d] for d in cycle.duration])))
    assert found.cycle.mean_heat_kW == pytest.approx(1.3)  # time-weighted mean, exact arithmetic (check value 18.7)
    assert found.cycle.peak_heat_kW == pytest.approx(3.0)


def test_other_heat_warms_the_oil_and_is_no_loss() -> None:
    machine = replace(mass(other_heat=200.0), cycle=replace(mass().cycle, other_heat=np.array([400.0])))
    found = audit(machine, constant(600.0))
    assert found.thermal.equilibrium_C == pytest.approx(68.0, abs=1e-5)  # 20 + (600 + 200 + 400) / 25
    assert found.thermal.mean_heat_kW == pytest.approx(1.2)
    assert found.cycle.mean_heat_kW == pytest.approx(0.6)


def test_an_existing_cooler_takes_its_part() -> None:
    machine = mass(cooler_capacity=35.0, cooler_coolant_temperature=KELVIN + 10.0)
    found = audit(machine, constant(1200.0)).thermal
    # exact arithmetic: 1200 = 25 (T - 20) + 35 (T - 10)
    assert found.equilibrium_C == pytest.approx((1200 + 25 * 20 + 35 * 10) / 60, abs=1e-5)
    assert found.equilibrium_without_cooler_C == pytest.approx(68.0, abs=1e-5)


def test_a_cooler_takes_no_more_than_its_oil_brings() -> None:
    flow = 1e-3 / 60
    machine = mass(cooler_capacity=35e3, cooler_oil_flow=flow)
    around = Surroundings(machine)
    found = audit(machine, constant(1200.0)).thermal
    rate = float(around.oil_rate(flow, KELVIN + found.equilibrium_C))
    assert found.equilibrium_C == pytest.approx(20 + 1200 / (25 + rate), abs=1e-3)  # exact arithmetic


def test_heat_that_falls_with_temperature_meets_what_goes_out() -> None:
    solver = relief_solver(lambda _, temperature: 2000.0 * np.exp(-(temperature - 293.15) / 30.0))
    machine = mass()
    balance = find_balance(heat_curve(Surroundings(machine), machine.cycle, solver), machine.cycle, solver, 0.0)
    assert balance is not None
    rise = balance.temperature - 293.15
    assert abs(2000 * np.exp(-rise / 30) / 25 - rise) < 0.01  # the definition, in kelvins
    assert balance.solution.oil_temperature == pytest.approx([balance.temperature])


def test_heat_that_jumps_holds_the_oil_at_the_jump() -> None:
    """2 kW below 50 °C and 0.5 kW above: the machine hunts about 50 °C, where 0.75 kW go out."""
    solver = relief_solver(lambda _, temperature: np.where(temperature < KELVIN + 50.0, 2000.0, 500.0))
    assert audit(mass(), solver).thermal.equilibrium_C == pytest.approx(50.0, abs=0.01)


def test_a_log_longer_than_the_sample_has_its_own_balance(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("heataudit.audit.thermal.CURVE_PHASES", 7)
    machine = with_conductance(changed(with_cycle(press(), np.full(100, 1.0)), general=AT_20), 25.0)
    solver = relief_solver(lambda cycle, temperature: np.where(cycle.phase == "phase 51", 60e3, 600.0))
    found = audit(machine, solver).thermal
    assert found.equilibrium_C == pytest.approx(20 + (99 * 600 + 60e3) / 100 / 25, abs=0.01)


def test_too_much_heat_has_no_equilibrium_and_is_audited_at_the_highest_temperature() -> None:
    found = audit(mass(), constant(10e3))
    assert found.thermal.equilibrium_C is None
    assert found.thermal.warm_up_min is None
    assert found.thermal.ripple_K is None
    assert (found.conditions.oil_temperature_basis, found.conditions.oil_temperature_C) == (
        "given",
        pytest.approx(60.0),
    )
    (finding,) = [f for f in found.findings if f.code == "oil-too-hot"]
    assert finding.severity == "danger"
    assert finding.text == (
        "10 kW come in, and at no oil temperature below 120 °C does as much go out: the machine overheats if it "
        "runs on. The audit is made at 60 °C. Mend the sources of heat first, then see the cooler."
    )
    # without a cooler the oil passes 120 °C; the table says nothing beyond
    assert found.thermal.warm_up["without_cooler_C"].max() <= 120.0 + 1e-3


def test_a_given_oil_temperature_is_kept_and_the_equilibrium_solved_beside_it() -> None:
    machine = changed(mass(), general={"oil_temperature": KELVIN + 45.0})
    found = audit(machine, constant(1200.0))
    assert (found.conditions.oil_temperature_C, found.conditions.oil_temperature_basis) == (pytest.approx(45), "given")
    assert found.thermal.equilibrium_C == pytest.approx(68.0, abs=1e-5)
    assert found.thermal.tank_dissipation_kW == pytest.approx(25 * 25 / 1e3)


def test_no_heat_leaves_the_oil_at_ambient() -> None:
    found = audit(mass(), constant(0.0)).thermal
    assert found.equilibrium_C == pytest.approx(20.0, abs=1e-5)
    assert found.warm_up_min == 0.0


@pytest.mark.parametrize(("raised", "watts", "mean"), [(True, 1040.389, 11.02107), (False, 867.716, 11.53878)])
def test_a_painted_steel_tank_in_still_air(raised: bool, watts: float, mean: float) -> None:
    """Churchill and Chu, McAdams, Stefan and Boltzmann with air from CoolProp: 9.9 and 9.10 of the check values."""
    tank = {"oil_volume": 0.24, "length": 0.8, "width": 0.6, "height": 0.5, "raised": raised}
    machine = changed(with_cycle(press(), [60.0]), general=AT_20 | {"oil_temperature": KELVIN + 60.0}, reservoir=tank)
    found = audit(machine, constant(500.0)).thermal
    assert found.tank_dissipation_kW * 1e3 == pytest.approx(watts, rel=0.005)  # air of ISO 2533 against CoolProp's
    assert found.tank_coefficient_W_m2K == pytest.approx(mean, rel=0.005)


def test_a_cooler_in_the_return_line_has_warmer_oil() -> None:
    machine = with_conductance(
        changed(press(), reservoir={"cooler_flow_from": "Return", "cooler_capacity": 50.0}), 25.0
    )
    curve = heat_curve(Surroundings(machine), machine.cycle, lambda m, cycle, t: stacked(len(cycle) // 3))
    rate, inlet = curve.cooler_oil(KELVIN + 60.0)
    solved = solution()
    time = np.array([4.0, 3.0, 10.0])
    reaching = (solved.heat - solved.components.heat[1]) @ time / 17  # energy: all heat but the line's own
    flow = np.array([30, 30, 40]) / 6e4 @ time / 17
    expected = reaching / float(Surroundings(machine).oil_rate(flow, KELVIN + 60.0))
    assert float(inlet) - (KELVIN + 60.0) == pytest.approx(expected, rel=1e-6)
    assert float(rate) == pytest.approx(float(Surroundings(machine).oil_rate(flow, KELVIN + 60.0)))


def stacked(times: int) -> Solution:
    return spread_phases(solution(), np.tile(np.arange(3), times))


def test_cycle_mean_counts_repeats() -> None:
    cycle = replace(with_cycle(press(), [1.0, 2.0]).cycle, repeats=np.array([4.0, 1.0]))
    assert cycle_mean(cycle, np.array([3.0, 9.0])) == pytest.approx(5.0)  # (4 x 3 + 2 x 9) / 6, exact arithmetic
