"""One thermal mass in closed form."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from heataudit.physics import thermal_mass

HEAT, CONDUCTANCE, CAPACITY, AMBIENT = 1200.0, 25.0, 400e3, 293.15


def test_steady_temperature() -> None:
    # energy balance, exact: 20 + 1200/25 = 68 °C
    assert thermal_mass.steady_temperature(AMBIENT, HEAT, CONDUCTANCE) == pytest.approx(273.15 + 68)


def test_warming() -> None:
    # closed form of C dT/dt = P - UA (T - Ta), exact: °C after 3600, 7200, 16000, 32000 s
    expected = [29.6712215, 37.39384872, 50.34178682, 61.5039064]
    times = np.array([3600.0, 7200, 16000, 32000])
    warmed = thermal_mass.temperature_after(times, AMBIENT, 273.15 + 68, CAPACITY / CONDUCTANCE)
    assert_allclose(warmed - 273.15, expected, rtol=1e-8)


def test_time_to_reach() -> None:
    # the same, solved for the time, exact: 28668.15151 s to 60 °C; never beyond the steady temperature
    times = thermal_mass.time_to_reach(273.15 + np.array([60.0, 68, 70, 15]), AMBIENT, 273.15 + 68, 16000.0)
    assert_allclose(times, [28668.15151, np.inf, np.inf, np.inf], rtol=1e-9)


def test_heat_capacity() -> None:
    # exact: 0.1 m³ x 850 kg/m³ x 2000 J/(kg·K) + 200 kg x 460 J/(kg·K)
    assert thermal_mass.heat_capacity(0.1, 850.0, 2000.0, 200.0) == pytest.approx(262000)


@given(start=st.floats(250, 330), steady=st.floats(340, 400), time=st.floats(1, 3e4), constant=st.floats(5e3, 1e5))
def test_time_and_temperature_are_inverse(start: float, steady: float, time: float, constant: float) -> None:
    reached = thermal_mass.temperature_after(time, start, steady, constant)
    assert start < reached < steady
    # the remaining difference keeps 12 digits or more of the temperature's 16
    assert thermal_mass.time_to_reach(reached, start, steady, constant) == pytest.approx(time, rel=1e-6)
