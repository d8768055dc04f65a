"""Oil: viscosity, density, specific heat and conductivity."""

import numpy as np
import pytest
import scipy.constants as sc
from chemicals.viscosity import viscosity_index as library_index
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from heataudit.physics import oil
from heataudit.physics.constants import KELVIN
from heataudit.physics.oil import Oil

MM2_S = 1e-6


def test_walther_constants() -> None:
    # ASTM D341, evaluated apart: nu(40) = 32, nu(100) = 5.4; 46, 6.8; 68, 8.7 mm²/s
    a, b = oil.walther_constants(np.array([32, 46, 68]) * MM2_S, np.array([5.4, 6.8, 8.7]) * MM2_S)
    assert_allclose(a, [9.530815, 9.417993, 9.309695], rtol=1e-6)
    assert_allclose(b, [3.746578, 3.684441, 3.624396], rtol=1e-6)


# ASTM D341, evaluated apart: nu(40), nu(100) and the viscosity [mm²/s] at -20, 0, 20, 60, 80, 120 °C
@pytest.mark.parametrize(
    ("nu40", "nu100", "expected"),
    [
        (32, 5.4, [2291.4717, 335.9996, 86.2779, 15.1859, 8.5332, 3.7239]),
        (46, 6.8, [4517.8408, 577.3214, 133.8382, 20.6227, 11.1026, 4.5714]),
        (68, 8.7, [9353.5108, 1033.1842, 214.7607, 28.6587, 14.7233, 5.6879]),
    ],
)
def test_viscosity_over_temperature(nu40: float, nu100: float, expected: list[float]) -> None:
    constants = oil.walther_constants(nu40 * MM2_S, nu100 * MM2_S)
    temperature = KELVIN + np.array([-20.0, 0, 20, 60, 80, 120])
    assert_allclose(oil.viscosity(temperature, *constants) / MM2_S, expected, rtol=0, atol=5.1e-5)  # printed digits


def test_viscosity_of_a_published_work_sheet() -> None:
    # a published D341 work sheet (T = t + 273): nu(40) = 32, nu(100) = 5.4, nu(80) = 8.5 mm²/s
    constants = oil.walther_constants(32 * MM2_S, 5.4 * MM2_S)
    assert oil.viscosity(KELVIN + 80, *constants) / MM2_S == pytest.approx(8.5, rel=0.01)


def test_temperature_of_a_viscosity() -> None:
    # ASTM D341 solved for T, evaluated apart: nu(40) = 46, nu(100) = 6.8
    constants = oil.walther_constants(46 * MM2_S, 6.8 * MM2_S)
    viscosities = np.array([1000.0, 100, 36, 16, 12]) * MM2_S
    expected = KELVIN + np.array([-6.068472, 24.887275, 45.551221, 67.611713, 77.206895])
    assert_allclose(oil.temperature_of_viscosity(viscosities, *constants), expected, atol=1e-5)


# API MPMS 11.1 / ASTM D1250, table 54D: density at 15 °C, temperature [°C], density; evaluated apart
@pytest.mark.parametrize(
    ("density_15", "celsius", "expected"),
    [(850, 0, 859.3849687), (850, 40, 834.2214438), (850, 80, 808.6646295), (870, 0, 879.3857215),
     (870, 40, 854.2232887), (870, 60, 841.4926101), (890, 80, 848.6858393), (870, -20, 891.7976241)],
)  # fmt: skip
def test_density(density_15: float, celsius: float, expected: float) -> None:
    assert oil.density(KELVIN + celsius, density_15) == pytest.approx(expected, rel=1e-8)


def test_expansion_lies_in_the_usual_band() -> None:
    # common practice: 0.00065 to 0.00075 per kelvin; table 54D at 870 kg/m³: 0.6278 / 870 (exact)
    slope = (oil.density(KELVIN + 14.999, 870) - oil.density(KELVIN + 15.001, 870)) / (870 * 0.002)
    assert slope == pytest.approx(0.6278 / 870, rel=1e-6)
    assert 0.00065 < slope < 0.00075


# Cragoe, NBS Misc. Pub. 97 (1929), evaluated apart: relative density, temperature [°C], specific heat, conductivity
@pytest.mark.parametrize(
    ("relative", "celsius", "heat", "conductivity"),
    [(0.85, 20, 1900.955615, 0.1363932235), (0.85, 60, 2048.091214, 0.1334149647), (0.87, 20, 1878.97851, 0.1332577471),
     (0.87, 60, 2024.413063, 0.130347954), (0.90, 20, 1847.39679, 0.1288158222), (0.90, 60, 1990.386891, 0.1260030222)],
)  # fmt: skip
def test_specific_heat_and_conductivity(relative: float, celsius: float, heat: float, conductivity: float) -> None:
    density_15 = 999.0 * relative
    assert oil.specific_heat(KELVIN + celsius, density_15) == pytest.approx(heat, rel=1e-8)
    assert oil.thermal_conductivity(KELVIN + celsius, density_15) == pytest.approx(conductivity, rel=1e-8)


def test_the_conductivity_constant_is_cragoes_in_si() -> None:
    # Cragoe: 0.813 Btu in/(h ft² °F); unit factor from scipy.constants, called here; the SI constant is rounded
    factor = sc.Btu_IT * sc.inch / (3600 * sc.foot**2 * sc.degree_Fahrenheit)
    assert oil.thermal_conductivity(KELVIN, 999.0) == pytest.approx(0.813 * factor, rel=5e-4)


def test_volumetric_heat_capacity() -> None:
    # table 54D and Cragoe together, rho15 = 870 kg/m³ at 40 °C: 1.667 MJ/(m³·K) with s = 0.87, evaluated apart;
    # s = 870/999 here, which moves the specific heat by 0.05 %
    temperature = KELVIN + 40
    assert oil.density(temperature, 870) * oil.specific_heat(temperature, 870) == pytest.approx(1.667184e6, rel=1e-3)


def test_barus_factor() -> None:
    # Barus 1893, exact: exp(20e-9 x 200e5) and so on; 1 where the pressure is negative
    pressure = np.array([200e5, 350e5, 0.0, -1e5])
    assert_allclose(oil.pressure_factor(pressure, 20e-9), [1.491824698, 2.013752707, 1, 1], rtol=1e-9)
    assert oil.pressure_factor(200e5, 15e-9) == pytest.approx(1.349858808, rel=1e-9)
    assert oil.pressure_factor(250e5, 22e-9) == pytest.approx(1.733253018, rel=1e-9)


def test_one_oil_holds_the_same_laws() -> None:
    vg46 = Oil(46 * MM2_S, 6.8 * MM2_S, density_15=870, pressure_coefficient=20e-9)
    temperature = KELVIN + np.array([20.0, 60])
    assert_allclose(vg46.viscosity(temperature) / MM2_S, [133.8382, 20.6227], rtol=1e-5)  # ASTM D341, evaluated apart
    # Barus 1893, exact: factor 1.491824698 at 200 bar
    assert_allclose(vg46.viscosity(temperature, 200e5) / vg46.viscosity(temperature), 1.491824698, rtol=1e-9)
    assert vg46.temperature_of_viscosity(100 * MM2_S) == pytest.approx(KELVIN + 24.887275, abs=1e-5)  # ASTM D341
    assert vg46.density(KELVIN + 40) == pytest.approx(854.2232887)  # table 54D, evaluated apart
    assert vg46.specific_heat(KELVIN + 40) == pytest.approx(1951.70, rel=1e-3)  # Cragoe, s = 0.87 against 870/999


def test_a_given_specific_heat_stands() -> None:
    vg46 = Oil(46 * MM2_S, 6.8 * MM2_S, given_specific_heat=1900.0)
    assert_array_equal(vg46.specific_heat(KELVIN + np.array([20.0, 60])), [1900.0, 1900.0])


def test_an_oil_by_its_label() -> None:
    # ISO 3448 midpoint; chemicals.viscosity.viscosity_index, called here
    by_label = Oil.from_settings(viscosity_grade=68, viscosity_index=150.0, density=880.0)
    assert by_label.viscosity_40 == 68e-6
    assert library_index(68e-6, by_label.viscosity_100) == pytest.approx(150, abs=1e-6)
    assert by_label.density_15 == 880.0


def test_given_viscosities_go_before_grade_and_index() -> None:
    given_both = Oil.from_settings(viscosity_grade=46, viscosity_at_40=30e-6, viscosity_at_100=5e-6)
    assert (given_both.viscosity_40, given_both.viscosity_100) == (30e-6, 5e-6)
    given_one = Oil.from_settings(viscosity_at_40=44e-6, viscosity_index=110.0)
    # chemicals.viscosity.viscosity_index, called here
    assert library_index(44e-6, given_one.viscosity_100) == pytest.approx(110, abs=1e-6)


@pytest.mark.parametrize(("nu100", "shown"), [(46, "46"), (50, "50"), (0.2, "0.2"), (float("nan"), "nan")])
def test_viscosities_that_do_not_fall_are_refused(nu100: float, shown: str) -> None:
    text = f"the viscosity at 100 °C is {shown} mm²/s; it must be between 0.3 mm²/s and that at 40 °C, 46 mm²/s"
    with pytest.raises(ValueError, match=text):
        Oil(46 * MM2_S, nu100 * MM2_S)


GRADES = st.sampled_from([15, 22, 32, 46, 68, 100, 150, 220, 320])


@given(grade=GRADES, ratio=st.floats(4, 12), celsius=st.floats(-20, 110), step=st.floats(0.1, 20))
def test_viscosity_falls_with_temperature_and_density_too(
    grade: int, ratio: float, celsius: float, step: float
) -> None:  # fmt: skip
    any_oil = Oil(grade * MM2_S, grade / ratio * MM2_S)
    cold, warm = KELVIN + celsius, KELVIN + celsius + step
    assert any_oil.viscosity(warm) < any_oil.viscosity(cold)
    assert any_oil.density(warm) < any_oil.density(cold)
    assert any_oil.specific_heat(warm) > any_oil.specific_heat(cold)
    assert any_oil.temperature_of_viscosity(any_oil.viscosity(warm)) == pytest.approx(warm, abs=1e-6)
