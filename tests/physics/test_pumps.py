"""Pumps and drives."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from heataudit.physics import pumps

BAR = 1e5
L_MIN = 1e-3 / 60
RPM = 1 / 60
CM3 = 1e-6
LB_IN = 4.4482216152605 * 0.0254  # exact: pound-force times inch [N·m]
IN3 = 0.0254**3
GPM = 231 * IN3 / 60
PSI = 4.4482216152605 / 0.0254**2


# ISO 4391 definitions, exact: displacement, speed, flow, pressure, torque, eta_v, eta_hm, eta_t, tolerance
@pytest.mark.parametrize(
    ("displacement", "speed", "flow", "pressure", "torque", "eta_v", "eta_hm", "eta_t", "tolerance"),
    [
        (45.2 * CM3, 1480 * RPM, 63 * L_MIN, 210 * BAR, 160, 0.9417603444, 0.9441866999, 0.8891975917, 1e-9),
        # Esposito, Example 5-8: 5 in³, 1000 rpm, 20 gpm, 1000 psi, 900 in lb: 92.6, 88.2, 81.6 % with the rounding
        # of the book, hence 0.4 %
        (5 * IN3, 1000 * RPM, 20 * GPM, 1000 * PSI, 900 * LB_IN, 0.926, 0.882, 0.816, 4e-3),
    ],
)
def test_efficiencies_of_a_measured_pump(
    displacement: float, speed: float, flow: float, pressure: float, torque: float, eta_v: float, eta_hm: float,
    eta_t: float, tolerance: float,
) -> None:  # fmt: skip
    """A pump described by these efficiencies delivers the flow, and takes the torque, that were measured."""
    slip = pumps.slip_flow(pressure, pumps.slip_coefficient(displacement, speed, eta_v, pressure))
    delivered = pumps.delivered_flow(displacement, speed, slip)
    assert delivered == pytest.approx(flow, rel=tolerance)
    loss = pumps.loss_torque(pumps.rated_loss_torque(displacement, pressure, eta_hm), 0.25, 1.0, 1.0, 1.0)
    shaft = pumps.shaft_torque(displacement, pressure, loss)
    assert shaft == pytest.approx(torque, rel=tolerance)
    assert delivered * pressure / pumps.shaft_power(shaft, speed) == pytest.approx(eta_t, rel=2 * tolerance)


def test_power_lost_by_a_measured_pump() -> None:
    # first law, exact: 2 pi n T - Q dp = 2747.638012 W
    power = pumps.shaft_power(160, 1480 * RPM)
    assert power - 63 * L_MIN * 210 * BAR == pytest.approx(2747.638012, rel=1e-9)


def wilson(displacement: float, speed: float, pressure: float, viscosity: float, coefficients: tuple[float, ...]
           ) -> tuple[float, float]:  # fmt: skip
    """Flow and torque of W. E. Wilson, Trans. ASME 68 (1946), from memory; D per radian, dynamic viscosity.

    Q = D w - Cs D dp / mu,  T = D dp (1 + Cf) + Cd D mu w.
    """
    slip, drag, coulomb = coefficients
    radian, omega = displacement / (2 * np.pi), 2 * np.pi * speed
    flow = displacement * speed - slip * radian * pressure / viscosity
    return flow, radian * pressure * (1 + coulomb) + drag * radian * viscosity * omega


# coefficients quoted in the literature (from memory), used as worked inputs: piston, vane, gear
WILSON = [(0.15e-7, 16.8e4, 0.045), (0.477e-7, 7.3e4, 0.212), (0.48e-7, 10.25e4, 0.179)]
RATED = (45 * CM3, 25.0, 200 * BAR, 0.030)


# flow [L/min] and torque [N·m] at the rated point, evaluated apart from Wilson's equations
@pytest.mark.parametrize(
    ("coefficients", "flow", "torque"),
    list(zip(WILSON, [63.202817, 53.834957, 53.749013], [155.355224, 176.069962, 172.338685], strict=True)),
)
def test_with_exponent_1_a_pump_is_wilsons(
    coefficients: tuple[float, ...], flow: float, torque: float
) -> None:  # fmt: skip
    displacement, rated_speed, rated_pressure, rated_viscosity = RATED
    rated_flow, rated_torque = wilson(*RATED, coefficients)
    assert rated_flow / L_MIN == pytest.approx(flow, rel=1e-7)
    assert rated_torque == pytest.approx(torque, rel=1e-8)
    ideal = displacement * rated_pressure / (2 * np.pi)
    eta_v = rated_flow / (displacement * rated_speed)
    rated_loss = pumps.rated_loss_torque(displacement, rated_pressure, ideal / rated_torque)
    viscous_share = 1 - coefficients[2] * ideal / (rated_torque - ideal)

    speed, pressure, viscosity = np.meshgrid([5.0, 25, 40], [0.0, 50 * BAR, 350 * BAR], [0.008, 0.03, 0.2])
    ratio = pumps.viscosity_ratio(viscosity, rated_viscosity, 1.0)  # at one density
    slip = pumps.slip_flow(
        pressure, pumps.slip_coefficient(displacement, rated_speed, eta_v, rated_pressure, ratio)
    )  # fmt: skip
    loss = pumps.loss_torque(rated_loss, viscous_share, pressure / rated_pressure, speed / rated_speed, ratio)
    expected = [wilson(displacement, n, p, mu, coefficients) for n, p, mu in
                zip(speed.ravel(), pressure.ravel(), viscosity.ravel(), strict=True)]  # fmt: skip
    np.testing.assert_allclose(
        pumps.delivered_flow(displacement, speed, slip).ravel(), [q for q, _ in expected], rtol=1e-9
    )  # fmt: skip
    np.testing.assert_allclose(
        pumps.shaft_torque(displacement, pressure, loss).ravel(), [t for _, t in expected], rtol=1e-9
    )  # fmt: skip


def test_slip_from_a_flow_test() -> None:
    # definition, exact: 100 cm³ at 25 rev/s are 150 L/min; 138 measured at 200 bar are 12 L/min of slip; with an oil
    # four times as thin and exponent 0.5 twice that
    coefficient = pumps.slip_coefficient_from_test(100 * CM3, 25.0, 138 * L_MIN, 200 * BAR)
    assert pumps.slip_flow(200 * BAR, coefficient) / L_MIN == pytest.approx(12)
    ratio = pumps.viscosity_ratio(8e-6, 32e-6, 0.5)
    thin = pumps.slip_coefficient_from_test(100 * CM3, 25.0, 138 * L_MIN, 200 * BAR, ratio)
    assert pumps.slip_flow(200 * BAR, thin) / L_MIN == pytest.approx(24)
    # the same slip as an efficiency of 138/150
    assert pumps.slip_coefficient(100 * CM3, 25.0, 138 / 150, 200 * BAR, ratio) == pytest.approx(float(thin))


def test_slip_has_the_sign_of_the_pressure_and_loss_is_never_negative() -> None:
    assert pumps.slip_flow(-10 * BAR, 1e-12) == -1e-6  # exact: 1e-12 x -1e6
    assert pumps.loss_torque(10.0, 0.25, -1.0, 1.0, 1.0) == pytest.approx(10.0)  # exact: 0.75 |-1| + 0.25
    assert pumps.loss_torque(10.0, 0.25, 0.0, 0.0, 1.0) == 0.0


def test_power_limit_is_a_torque_limit() -> None:
    # exact: 37.5 L/min at 16 bar are 1 kW, so 1 kW at 25 rev/s and 16 bar leave 25 cm³
    limited = pumps.limited_displacement(
        45 * CM3, np.array([0.0, 8 * BAR, 16 * BAR, -5 * BAR]), 1000.0, 25.0
    )  # fmt: skip
    np.testing.assert_allclose(limited / CM3, [45, 45, 25, 45], rtol=1e-12)
    assert pumps.limited_displacement(45 * CM3, 300 * BAR, np.inf, 25.0) == 45 * CM3


def test_electric_input() -> None:
    # exact: 10 kW / 0.92 + 0.3 kW; nothing is given back
    assert pumps.electric_input(10e3, 0.92, 300.0) == pytest.approx(10e3 / 0.92 + 300)
    assert pumps.electric_input(-5e3, 0.92, 300.0) == 300.0


def test_fuel_per_shaft_energy() -> None:
    # exact: 220 g/kWh at 835 kg/m³ are 0.2634730539 L/kWh
    burnt = pumps.fuel_flow(1000.0, 220e-3 / 3.6e6, fuel_density=835.0)
    assert burnt * 3600 * 1000 == pytest.approx(0.2634730539, rel=1e-9)


def test_engine_efficiency_behind_a_specific_consumption() -> None:
    # definition, exact: 200 g/kWh of 42.7 MJ/kg are 0.4215456674, 260 g/kWh 0.324265898
    for consumption, efficiency in ((200, 0.4215456674), (260, 0.324265898)):
        mass_flow = pumps.fuel_flow(50e3, consumption * 1e-3 / 3.6e6) * pumps.DIESEL_DENSITY
        assert 50e3 / (mass_flow * 42.7e6) == pytest.approx(efficiency, rel=1e-9)


def test_diesel_density_and_energy_are_the_usual() -> None:
    # United Kingdom conversion factors 2025: 832.361 kg/m³ and 35.66 MJ/L (forecourt), 853.971 (gas oil);
    # band 35 to 36.5 MJ/L, net 42.84 MJ/kg
    assert 832 < pumps.DIESEL_DENSITY < 854
    assert 35 < pumps.DIESEL_DENSITY * 42.84e-3 < 36.5


def test_an_idling_engine_burns_its_idle_fuel() -> None:
    assert pumps.fuel_flow(0.0, 230e-3 / 3.6e6, 1e-6) == 1e-6
    assert pumps.fuel_flow(-10e3, 230e-3 / 3.6e6, 1e-6) == 1e-6


@given(pressure=st.floats(0, 400 * BAR), speed=st.floats(1, 60), viscosity=st.floats(5e-6, 1e-3),
       eta_v=st.floats(0.7, 0.99), eta_hm=st.floats(0.7, 0.99), share=st.floats(0, 1))  # fmt: skip
def test_a_pump_never_gives_more_than_it_takes(
    pressure: float, speed: float, viscosity: float, eta_v: float, eta_hm: float, share: float
) -> None:
    displacement = 45 * CM3
    ratio = pumps.viscosity_ratio(viscosity, 32e-6)
    slip = pumps.slip_flow(pressure, pumps.slip_coefficient(displacement, 25.0, eta_v, 200 * BAR, ratio))
    rated_loss = pumps.rated_loss_torque(displacement, 200 * BAR, eta_hm)
    loss = pumps.loss_torque(rated_loss, share, pressure / (200 * BAR), speed / 25.0, ratio)
    taken = pumps.shaft_power(pumps.shaft_torque(displacement, pressure, loss), speed)
    given_off = pumps.delivered_flow(displacement, speed, slip) * pressure
    assert given_off <= taken * (1 + 1e-12)
