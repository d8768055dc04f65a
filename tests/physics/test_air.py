"""Air over altitude and over temperature."""

import numpy as np
import pytest
from fluids import ATMOSPHERE_1976
from numpy.testing import assert_allclose

from heataudit.physics import air

EARTH_RADIUS = 6356766.0  # m, of the standard atmosphere


# ISO 2533:1975, geopotential altitude [m] and density; evaluated apart
@pytest.mark.parametrize(
    ("altitude", "expected"),
    [(0, 1.225), (500, 1.167269), (1000, 1.111643), (2000, 1.006490), (3000, 0.909122), (5000, 0.736116)],
)
def test_density_over_altitude(altitude: float, expected: float) -> None:
    density = air.density(air.standard_pressure(altitude), air.standard_temperature(altitude))
    assert density == pytest.approx(expected, rel=1e-6)


def test_the_standard_atmosphere_is_the_librarys() -> None:
    geometric = np.array([0.0, 500, 1000, 1500, 2000, 3000, 4000, 5000])
    geopotential = geometric * EARTH_RADIUS / (EARTH_RADIUS + geometric)
    # fluids.ATMOSPHERE_1976, called here; it takes geometric height
    library = [ATMOSPHERE_1976(z) for z in geometric]
    assert_allclose(air.standard_pressure(geopotential), [a.P for a in library], rtol=1e-5)
    assert_allclose(air.standard_temperature(geopotential), [a.T for a in library], rtol=1e-7)


@pytest.mark.parametrize(
    ("celsius", "altitude", "expected"),
    [(20, 0, 1.204106), (40, 0, 1.127203), (30, 1000, 1.032803), (35, 2000, 0.898704)],
)
def test_density_of_air_that_is_warmer_than_standard(celsius: float, altitude: float, expected: float) -> None:
    # p(H) / (R T), ISO 2533:1975, evaluated apart
    assert air.density(air.standard_pressure(altitude), 273.15 + celsius) == pytest.approx(expected, rel=1e-6)


def test_viscosity_and_conductivity_are_the_librarys() -> None:
    temperature = np.linspace(230, 288, 30)
    # fluids.ATMOSPHERE_1976.viscosity and .thermal_conductivity, called here: the same viscosity; the conductivity of
    # ISO 2533 has a constant that is 0.07 % higher
    assert_allclose(air.viscosity(temperature), [ATMOSPHERE_1976.viscosity(t) for t in temperature], rtol=1e-9)
    library = [ATMOSPHERE_1976.thermal_conductivity(t) for t in temperature]
    assert_allclose(air.thermal_conductivity(temperature), library, rtol=1e-3)


def test_properties_of_warm_air() -> None:
    # CoolProp 8.0.0, dry air at 313.15 K and 101325 Pa: 1.916523e-5 Pa·s, 0.02735427 W/(m·K), 1006.92 J/(kg·K), Pr
    # 0.70548; reference equations against Sutherland's and a perfect gas
    assert air.viscosity(313.15) == pytest.approx(1.916523e-5, rel=0.006)
    assert air.thermal_conductivity(313.15) == pytest.approx(0.02735427, rel=0.004)
    assert abs(air.SPECIFIC_HEAT / 1006.92 - 1) < 0.003
    assert air.prandtl(313.15) == pytest.approx(0.70548, rel=0.006)
