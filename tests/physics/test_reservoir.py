"""Heat that a tank gives off."""

import numpy as np
import pytest
import scipy.constants as sc
from ht import Nu_horizontal_plate_McAdams, Nu_vertical_plate_Churchill, q_rad
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from heataudit.physics import air, constants, reservoir
from heataudit.physics.reservoir import Tank

WARM, COOL = 333.15, 293.15
STEEL: dict[str, float] = {"volume": 0.24, "length": 0.8, "width": 0.6, "height": 0.5}  # full: the sides are 1.40 m²


def test_vertical_nusselt_is_the_librarys() -> None:
    rayleigh = np.geomspace(1e3, 1e12, 40)
    # ht.Nu_vertical_plate_Churchill, called here
    library = [Nu_vertical_plate_Churchill(Pr=0.705, Gr=ra / 0.705) for ra in rayleigh]
    assert_allclose(reservoir.vertical_nusselt(rayleigh, 0.705), library, rtol=1e-12)


@pytest.mark.parametrize("rising", [True, False])
def test_horizontal_nusselt_is_the_librarys(rising: bool) -> None:
    # ht.Nu_horizontal_plate_McAdams, called here; it steps at 1e7, where the larger of its two forms is taken here
    # from 4.7e6 on: up to 6.4 % more
    for rayleigh, tolerance in ((np.geomspace(1e4, 4.6e6, 20), 1e-12), (np.geomspace(4.7e6, 1e7, 20), 0.065),
                                (np.geomspace(1.001e7, 1e10, 20), 1e-12)):  # fmt: skip
        library = [Nu_horizontal_plate_McAdams(Pr=0.705, Gr=ra / 0.705, buoyancy=rising) for ra in rayleigh]
        assert_allclose(reservoir.horizontal_nusselt(rayleigh, rising), library, rtol=tolerance)


@pytest.mark.parametrize("emissivity", [0.9, 0.3])
def test_radiation_is_the_librarys(emissivity: float) -> None:
    # ht.q_rad, called here; its Stefan-Boltzmann constant is that of 2010, 1.3e-6 less than today's
    expected = q_rad(emissivity, WARM, COOL) / (WARM - COOL)
    assert reservoir.radiation_coefficient(WARM, COOL, emissivity) == pytest.approx(expected, rel=2e-6)
    assert pytest.approx(sc.sigma, rel=1e-9) == constants.STEFAN_BOLTZMANN


def test_incropera_hot_screen() -> None:
    # Incropera and DeWitt, 6th ed., Example 9.2: 0.71 m x 1.02 m, 232 °C in 23 °C, k = 0.0338, Pr = 0.69,
    # Ra = 1.813e9: 1060 W
    coefficient = reservoir.vertical_nusselt(1.813e9, 0.69) * 0.0338 / 0.71
    assert coefficient * 0.71 * 1.02 * 209 == pytest.approx(1060, rel=0.005)
    # the same from our own air: properties at 400 K, printed to three digits
    own = reservoir.vertical_coefficient(273.15 + 232, 273.15 + 23, 0.71, air.SEA_LEVEL_PRESSURE)
    assert own * 0.71 * 1.02 * 209 == pytest.approx(1060, rel=0.02)


def test_incropera_warm_duct() -> None:
    # Incropera and DeWitt, 6th ed., Example 9.3: 0.75 m wide, 0.30 m high, 45 °C in 15 °C: 246 W/m with the laminar
    # form on the sides; the all-range form used here gives 4.6 % more
    rayleigh = 9.81 * 0.0033 * 30 / (16.2e-6 * 22.9e-6)
    sides = reservoir.vertical_nusselt(rayleigh * 0.3**3, 0.71) * 0.0265 / 0.3
    top = reservoir.horizontal_nusselt(rayleigh * 0.375**3, True) * 0.0265 / 0.375
    bottom = reservoir.horizontal_nusselt(rayleigh * 0.375**3, False) * 0.0265 / 0.375
    assert 30 * (0.6 * sides + 0.75 * (top + bottom)) == pytest.approx(246, rel=0.05)


def test_grashof_of_a_tank_wall() -> None:
    # definition with air of CoolProp 8.0.0 at 313.15 K: Gr 5.418815e8, Pr 0.70548; Sutherland's viscosity is 0.5 % low
    expected = 5.418815e8 * 0.70548
    assert reservoir.rayleigh(WARM, COOL, 0.5, air.SEA_LEVEL_PRESSURE) == pytest.approx(expected, rel=0.01)


# Churchill and Chu 1975, McAdams, Stefan and Boltzmann on the tank of 0.8 m x 0.6 m x 0.5 m at 60 °C in 20 °C, worked
# with air properties of CoolProp 8.0.0: heat [W] with and without the floor; our air moves it by 0.1 %
@pytest.mark.parametrize(
    ("raised", "emissivity", "expected"),
    [(True, 0.9, 1040.389), (False, 0.9, 867.716), (True, 0.3, 644.276), (False, 0.3, 552.168)],
)
def test_heat_of_a_tank_in_still_air(raised: bool, emissivity: float, expected: float) -> None:
    tank = Tank(**STEEL, raised=raised, emissivity=emissivity)
    assert tank.heat(WARM, COOL) == pytest.approx(expected, rel=2e-3)


# the same, six faces, painted: oil and ambient [°C], heat [W]
@pytest.mark.parametrize(("oil", "ambient", "expected"), [(50, 20, 733.255), (70, 30, 1091.046)])
def test_heat_of_a_tank_at_other_temperatures(oil: float, ambient: float, expected: float) -> None:
    heat = Tank(**STEEL, raised=True).heat(273.15 + oil, 273.15 + ambient)
    assert heat == pytest.approx(expected, rel=2e-3)


def test_the_coefficient_in_still_air_is_the_usual() -> None:
    # common practice: 8 to 15 W/(m²·K)
    walls, top, _ = Tank(**STEEL).coefficients(WARM, COOL)
    assert 8 < walls < 15
    assert 8 < top < 15


@pytest.mark.parametrize(("movement", "expected"), [("enclosed", 6.0), ("draught", 15.0), ("fan", 25.0)])
def test_heat_at_a_usual_coefficient(movement: str, expected: float) -> None:
    # common practice 6, 15, 25 W/(m²·K); area exact: 1.40 + 0.48 + 0.48 + 0.5 extra
    tank = Tank(**STEEL, raised=True, air_movement=movement, extra_surface=0.5)
    assert tank.heat(WARM, COOL) == pytest.approx(expected * 2.86 * 40, rel=1e-12)


def test_a_given_coefficient_overrides_the_air_movement() -> None:
    # exact: 10 W/(m²·K) x (1.40 + 0.48) m² x 40 K
    for movement in ("still", "fan"):
        tank = Tank(**STEEL, air_movement=movement, given_coefficient=10.0)
        assert tank.heat(WARM, COOL) == pytest.approx(10 * 1.88 * 40, rel=1e-12)


def test_extra_surface_has_the_coefficient_of_the_walls() -> None:
    walls, _, _ = Tank(**STEEL).coefficients(WARM, COOL)
    extra = Tank(**STEEL, extra_surface=1.0).heat(WARM, COOL) - Tank(**STEEL).heat(WARM, COOL)
    assert extra == pytest.approx(float(walls) * 40)  # exact: one square metre


def test_wetted_surfaces() -> None:
    # exact: 0.12 m³ on 0.48 m² stand 0.25 m high and wet 2.8 m x 0.25 m; more than the tank holds wets it to the rim
    assert Tank(**{**STEEL, "volume": 0.12}).wall_area == pytest.approx(0.7)
    assert Tank(**{**STEEL, "volume": 0.3}).wetted_height == 0.5


def test_default_dimensions() -> None:
    # exact: 1.5 : 1 : 1 holding 100 L / 0.8
    length, width, height = reservoir.default_dimensions(0.1)
    assert length * width * height == pytest.approx(0.125)
    assert (length / width, height / width) == pytest.approx((1.5, 1.0))


def test_thin_air_cools_less() -> None:
    tank, high = Tank(**STEEL), Tank(**STEEL, pressure=float(air.standard_pressure(3000.0)))
    assert high.heat(WARM, COOL) < tank.heat(WARM, COOL)


def test_a_batch_is_its_states_one_by_one() -> None:
    oil, ambient = np.meshgrid([280.0, 293.15, 320, 350], [COOL, 303.15])
    tank = Tank(**STEEL, raised=True)
    one_by_one = [tank.heat(o, a) for o, a in zip(oil.ravel(), ambient.ravel(), strict=True)]
    assert_array_equal(tank.heat(oil, ambient).ravel(), one_by_one)


def test_a_tank_as_warm_as_its_surroundings_gives_off_nothing() -> None:
    assert Tank(**STEEL, raised=True).heat(COOL, COOL) == 0.0


@given(oil=st.floats(260, 390), warmer=st.floats(0.01, 20), ambient=st.floats(250, 320), raised=st.booleans(),
       size=st.floats(0.01, 3))  # fmt: skip
def test_a_warmer_tank_gives_off_more(oil: float, warmer: float, ambient: float, raised: bool, size: float) -> None:
    tank = Tank(size, *reservoir.default_dimensions(size), raised=raised)
    cooler, hotter = tank.heat(np.array([oil, oil + warmer]), ambient)
    assert hotter > cooler
    assert np.sign(cooler) == np.sign(oil - ambient)
