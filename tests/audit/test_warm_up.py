from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from heataudit.audit.run import audit
from heataudit.audit.surroundings import Surroundings
from heataudit.audit.thermal import find_balance, heat_curve
from heataudit.audit.warm_up import ripple, swing, warm_up
from heataudit.machine import Machine
from heataudit.physics.constants import KELVIN
from tests.audit.fixture import changed, constant, press, relief_solver, with_conductance, with_cycle
from tests.audit.test_thermal import AT_20

STEEL = 460.0  # J/(kg K), common practice


def mass(heat_capacity: float = 400e3, steady: float = 68.0) -> Machine:
    """A machine of 25 W/K and a heat capacity [J/K] at the mean of 20 °C and the steady temperature."""
    machine = with_conductance(changed(with_cycle(press(), [60.0]), general=AT_20), 25.0)
    of_oil = Surroundings(machine).heat_capacity(KELVIN + 0.5 * (20.0 + steady))
    return changed(machine, reservoir={"steel_mass": (heat_capacity - of_oil) / STEEL})


def test_constant_heat_warms_as_the_closed_form() -> None:
    machine = mass()
    curve = heat_curve(Surroundings(machine), machine.cycle, constant(1200.0))
    run = warm_up(curve, 0.0, KELVIN + 68.0)
    times = np.array([3600.0, 7200.0, 16000.0, 32000.0])
    # closed form: 18.2 to 18.5 of the check values
    assert run.path(times) - KELVIN == pytest.approx([29.671221, 37.393849, 50.341787, 61.503906], abs=1e-3)
    assert run.warm_after == pytest.approx(-16000 * np.log(0.05), rel=1e-5)  # closed form


def test_the_audit_tells_minutes_and_the_time_constant() -> None:
    found = audit(mass(), constant(1200.0)).thermal
    assert found.warm_up_min == pytest.approx(-16000 * np.log(0.05) / 60, rel=1e-4)
    assert found.time_constant_min == pytest.approx(16000 / 60, rel=0.02)  # its heat capacity is that at 68 °C
    assert found.warm_up["with_cooler_C"].iloc[[0, -1]].tolist() == pytest.approx([20.0, 68 - 48 * 0.05**2], abs=0.01)


@pytest.mark.parametrize("capacity", [0.0, 30.0])
def test_what_comes_in_is_stored_or_goes_out(capacity: float) -> None:
    solver = relief_solver(lambda _, temperature: 1500.0 + 3000.0 * np.exp(-(temperature - 293.15) / 15.0))
    machine = changed(with_cycle(press(), [60.0]), general=AT_20, reservoir={"cooler_capacity": capacity})
    curve = heat_curve(Surroundings(machine), machine.cycle, solver)
    run = warm_up(curve, capacity, curve.equilibrium(293.15, capacity))
    time = np.linspace(0.0, run.shown, 4001)
    path = run.path(time)
    coming, going = curve.coming(path), curve.going(path, 293.15, capacity)
    stored = run.heat_capacity * (path[-1] - path[0])
    assert np.trapezoid(coming - going, time) == pytest.approx(stored, rel=1e-3)


def test_hot_oil_cools_down_to_its_equilibrium() -> None:
    machine = changed(mass(), general={"start_temperature": KELVIN + 100.0})
    found = audit(machine, constant(1200.0)).thermal
    assert found.equilibrium_C == pytest.approx(68.0, abs=1e-4)
    assert found.warm_up_min is not None
    assert np.all(np.diff(found.warm_up["with_cooler_C"]) < 0)


@settings(max_examples=50, deadline=None)
@given(
    st.lists(st.tuples(st.floats(0.05, 80.0), st.floats(-50, 50)), min_size=1, max_size=30),
)
def test_the_swing_is_that_of_many_cycles_step_by_step(phases: list[tuple[float, float]]) -> None:
    steps, steady = np.array(phases).T
    value, rounds = 0.0, 1 + int(np.ceil(60 / steps.sum()))
    for _ in range(rounds):  # exact exponential steps until nothing is left of the start
        seen = [value]
        for step, goal in phases:
            value = goal + (value - goal) * np.exp(-step)
            seen.append(value)
    assert swing(steps, steady) == pytest.approx(max(seen) - min(seen), rel=1e-6, abs=1e-6)


def test_two_equal_halves_swing_by_the_closed_form() -> None:
    # C dT/dt = P - G (T - Ta) with P on for half a period h and off for the other: swing = P/G tanh(h / 2 tau)
    assert swing(np.array([0.7, 0.7]), np.array([5.0, -5.0])) == pytest.approx(10 * np.tanh(0.35), rel=1e-12)


def test_the_ripple_of_short_cycles_is_heat_over_capacity() -> None:
    machine = with_conductance(changed(with_cycle(press(), [30.0, 30.0]), general=AT_20), 25.0)
    solver = relief_solver(lambda cycle, _: np.where(cycle.phase == "phase 1", 2000.0, 400.0))
    balance = find_balance(heat_curve(Surroundings(machine), machine.cycle, solver), machine.cycle, solver, 0.0)
    assert balance is not None
    capacity = Surroundings(machine).heat_capacity(balance.temperature)
    assert ripple(balance, machine.cycle, 0.0) == pytest.approx(800.0 * 30.0 / capacity, rel=1e-3)  # energy balance


def test_a_larger_tank_warms_later() -> None:
    small, large = (audit(replace(m), constant(1200.0)).thermal.warm_up_min for m in (mass(300e3), mass(600e3)))
    assert small is not None
    assert large is not None
    assert large > small
