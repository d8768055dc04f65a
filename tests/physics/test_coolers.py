"""Heat exchangers and coolers."""

import numpy as np
import pytest
from ht import LMTD, F_LMTD_Fakheri
from ht.hx import NTU_from_effectiveness, effectiveness_from_NTU, effectiveness_NTU_method
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from heataudit.physics import air, coolers
from heataudit.physics.coolers import Arrangement

LIBRARY_NAMES: dict[Arrangement, str] = {
    "counterflow": "counterflow", "parallel": "parallel", "crossflow": "crossflow",
    "crossflow approximate": "crossflow approximate", "crossflow, mixed Cmin": "crossflow, mixed Cmin",
    "crossflow, mixed Cmax": "crossflow, mixed Cmax", "shell and tube": "S&T",
}  # fmt: skip
UNITS, RATIOS = np.meshgrid([0.01, 0.3, 0.5, 1.0, 2.0, 3.0, 5.0, 10.0, 60.0], [0.05, 0.25, 0.5, 0.75, 0.999, 1.0])
OIL_RATE = float(coolers.capacity_rate(100e-3 / 60, 860.0, 2000.0))  # 100 L/min, 2866.67 W/K
WATER_RATE = float(coolers.capacity_rate(50e-3 / 60, 995.0, 4180.0))  # 50 L/min, 3465.92 W/K


@pytest.mark.parametrize("arrangement", LIBRARY_NAMES)
def test_effectiveness_is_the_librarys(arrangement: Arrangement) -> None:
    # ht.hx.effectiveness_from_NTU, called here (its exact crossflow is an integral, ours a series)
    shells = {"n_shell_tube": 1} if arrangement == "shell and tube" else {}
    library = np.vectorize(lambda n, r: effectiveness_from_NTU(n, r, subtype=LIBRARY_NAMES[arrangement], **shells))
    assert_allclose(coolers.effectiveness(UNITS, RATIOS, arrangement), library(UNITS, RATIOS), rtol=1e-9)


def test_printed_crossflow_values() -> None:
    # Kays and London, Compact Heat Exchangers, both fluids unmixed, NTU = 1 (from memory), three digits
    printed = [0.588, 0.547, 0.510, 0.476]
    values = coolers.effectiveness(1.0, np.array([0.25, 0.5, 0.75, 1.0]), "crossflow")
    assert_allclose(values, printed, atol=5.1e-4)


def test_the_short_crossflow_formula_is_near_the_exact_one() -> None:
    exact = coolers.effectiveness(UNITS, RATIOS, "crossflow")
    short = coolers.effectiveness(UNITS, RATIOS, "crossflow approximate")
    # Mason's double series against the usual formula: up to 4 % low below NTU 1, within 1.7 % from 1 to 5
    few, many = UNITS < 1, (UNITS >= 1) & (UNITS <= 5)
    assert_allclose(short[few], exact[few], rtol=0.04)
    assert_allclose(short[many], exact[many], rtol=0.017)


@pytest.mark.parametrize("arrangement", LIBRARY_NAMES)
def test_a_condensing_coolant_makes_all_arrangements_equal(arrangement: Arrangement) -> None:
    # exact limit at capacity ratio 0: 1 - exp(-NTU)
    units = np.array([0.0, 0.5, 1, 2, 3, 5])
    assert_allclose(coolers.effectiveness(units, 0.0, arrangement), -np.expm1(-units), rtol=1e-12, atol=1e-15)


@pytest.mark.parametrize("arrangement", LIBRARY_NAMES)
def test_few_units_give_their_number(arrangement: Arrangement) -> None:
    # limit of every arrangement: the effectiveness is NTU; the short crossflow formula comes there as NTU^0.78
    tolerance = 1e-3 if arrangement == "crossflow approximate" else 1e-4
    assert coolers.effectiveness(1e-4, 0.7, arrangement) == pytest.approx(1e-4, rel=tolerance)


def test_counterflow_at_and_near_equal_capacities() -> None:
    # exact: NTU / (1 + NTU)
    ratios = np.array([1.0, 1 - 1e-15, 1 - 1e-12, 1 - 1e-9])
    assert_allclose(coolers.effectiveness(3.0, ratios, "counterflow"), 0.75, rtol=1e-8)


@pytest.mark.parametrize("shells", [2, 3])
def test_shells_in_series(shells: int) -> None:
    # ht.hx.NTU_from_effectiveness, called here: effectiveness 0.8 at capacity ratio 12500/33600
    ratio = 12500 / 33600
    units = coolers.transfer_units(0.8, ratio, "shell and tube", shells)
    assert units == pytest.approx(NTU_from_effectiveness(0.8, ratio, "S&T", n_shell_tube=shells), rel=1e-9)
    # exact limit at equal capacities: n e / (1 + (n - 1) e)
    one = coolers.effectiveness(0.5, 1.0, "shell and tube")
    series = coolers.effectiveness(0.5 * shells, 1.0, "shell and tube", shells)
    assert series == pytest.approx(float(shells * one / (1 + (shells - 1) * one)), rel=1e-12)


@pytest.mark.parametrize("arrangement", LIBRARY_NAMES)
def test_transfer_units_are_the_inverse(arrangement: Arrangement) -> None:
    units, ratios = np.meshgrid([0.0, 0.1, 1.0, 3.0], [0.0, 0.4, 1.0])
    reached = coolers.effectiveness(units, ratios, arrangement)
    assert_allclose(coolers.transfer_units(reached, ratios, arrangement), units, rtol=1e-8, atol=1e-12)


def test_more_than_an_exchanger_can_reach_is_refused() -> None:
    # exact limit of one shell at equal capacities: 2 / (2 + sqrt(2)) = 0.58578644; of parallel flow: 0.5
    assert coolers.effectiveness(50.0, 1.0, "shell and tube") == pytest.approx(0.58578644, abs=1e-8)
    assert np.isnan(coolers.transfer_units(0.5859, 1.0, "shell and tube"))
    assert np.isnan(coolers.transfer_units(0.51, 1.0, "parallel"))


def test_incropera_oil_cooler() -> None:
    # Incropera and DeWitt, 6th ed., Example 11.1: oil 0.1 kg/s, 2131 J/(kg·K), 100 to 60 °C; water 0.2 kg/s, 4178,
    # 30 to 40.2 °C: 8524 W, log mean difference 43.2 K
    oil_rate, water_rate, heat = 213.1, 835.6, 8524.0
    mean = coolers.log_mean_difference(100 - 40.2, 60 - 30.0)
    assert mean == pytest.approx(43.2, abs=0.05)
    conductance = coolers.exchanger_conductance(heat / 70, oil_rate, water_rate)
    assert conductance * mean == pytest.approx(heat, rel=1e-3)


def test_incropera_finned_crossflow() -> None:
    # Incropera and DeWitt, 6th ed., Example 11.3: effectiveness 0.754717, ratio 0.45: NTU 2.1 read from the chart
    assert coolers.transfer_units(0.754717, 0.45, "crossflow") == pytest.approx(2.1, rel=0.02)
    # Example 11.4: UA = 4000 W/K, 1500 W/K of gas, 4197 W/K of water: 0.82 read from the chart
    assert coolers.effectiveness(4000 / 1500, 1500 / 4197, "crossflow") == pytest.approx(0.82, rel=0.03)


def test_log_mean_difference_is_the_librarys() -> None:
    # ht.LMTD, called here
    assert coolers.log_mean_difference(100 - 40.2, 60 - 30) == pytest.approx(LMTD(100.0, 60.0, 30.0, 40.2), rel=1e-12)
    parallel = LMTD(100.0, 60.0, 30.0, 40.2, counterflow=False)
    assert coolers.log_mean_difference(100 - 30, 60 - 40.2) == pytest.approx(parallel, rel=1e-12)
    # exact limit of equal differences
    assert coolers.log_mean_difference(40.0, np.array([40.0, 40.0 + 1e-7])) == pytest.approx([40, 40], rel=1e-8)


# oil 100 L/min of 860 kg/m³ and 2000 J/(kg·K) at 60 °C, water 50 L/min at 25 °C, UA = 2500 W/K
@pytest.mark.parametrize("arrangement", ["counterflow", "parallel", "crossflow", "shell and tube"])
def test_rating_a_water_cooler(arrangement: Arrangement) -> None:
    shells = {"n_shell_tube": 1} if arrangement == "shell and tube" else {}
    # ht.hx.effectiveness_NTU_method, called here
    library = effectiveness_NTU_method(
        mh=100e-3 / 60 * 860, mc=50e-3 / 60 * 995, Cph=2000.0, Cpc=4180.0, subtype=LIBRARY_NAMES[arrangement], Thi=60.0,
        Tci=25.0, UA=2500.0, **shells,
    )  # fmt: skip
    capacity = coolers.exchanger_capacity(2500.0, OIL_RATE, WATER_RATE, arrangement)
    assert capacity * 35 == pytest.approx(library["Q"], rel=1e-9)
    reached = coolers.effectiveness_of_capacity(capacity, OIL_RATE, WATER_RATE)
    assert reached == pytest.approx(library["effectiveness"], rel=1e-9)
    assert coolers.exchanger_conductance(capacity, OIL_RATE, WATER_RATE, arrangement) == pytest.approx(2500, rel=1e-9)


def test_both_methods_close() -> None:
    # one shell: UA F LMTD is the heat that the effectiveness gives; F by ht.F_LMTD_Fakheri, called here
    heat = float(coolers.exchanger_capacity(2500.0, OIL_RATE, WATER_RATE, "shell and tube")) * 35
    oil_out, water_out = 60 - heat / OIL_RATE, 25 + heat / WATER_RATE
    correction = F_LMTD_Fakheri(Thi=60.0, Tho=oil_out, Tci=25.0, Tco=water_out, shells=1)
    mean = coolers.log_mean_difference(60 - water_out, oil_out - 25)
    assert 2500 * correction * mean == pytest.approx(heat, rel=1e-9)


def test_rating_and_sizing_an_air_cooler() -> None:
    # the same oil at 60 °C, air 1.2 kg/s of 1006 J/(kg·K) at 30 °C, UA = 900 W/K, both unmixed: 17147.458 W
    # (Mason's double series, evaluated apart); sizing for 15 kW: 730.22261 W/K
    air_rate = 1.2 * 1006
    assert coolers.exchanger_capacity(900.0, OIL_RATE, air_rate, "crossflow") * 30 == pytest.approx(17147.458, rel=1e-7)
    conductance = coolers.exchanger_conductance(15000 / 30, OIL_RATE, air_rate, "crossflow")
    assert conductance == pytest.approx(730.22261, rel=1e-7)
    # counterflow is the lower bound: 715.45238 W/K
    assert coolers.exchanger_conductance(15000 / 30, OIL_RATE, air_rate) == pytest.approx(715.45238, rel=1e-7)


def test_oil_inlet_temperature() -> None:
    # first law, exact: 100 bar throttled, rho 870, c 1900: 6.049606776 K
    rate = coolers.capacity_rate(1e-3, 870.0, 1900.0)
    assert coolers.oil_inlet_temperature(300.0, 100e5 * 1e-3, rate) - 300 == pytest.approx(6.049606776, rel=1e-9)
    # Esposito, Example 11-3: relief valve at 70 bar, 0.000632 m³/s, 895 kg/m³, 1800 J/(kg·K), 50 °C: 54.3 °C
    rate = coolers.capacity_rate(0.000632, 895.0, 1800.0)
    assert coolers.oil_inlet_temperature(50.0, 70e5 * 0.000632, rate) == pytest.approx(54.3, abs=0.2)


def test_capacity_per_kelvin() -> None:
    # definition, exact: 12 kW over 40 K; nothing to take away; no difference to do it with
    heat, oil = np.array([12e3, 0.0, -5e3, 12e3]), np.array([353.15, 353.15, 353.15, 300.0])
    assert_allclose(coolers.capacity_per_kelvin(heat, oil, 313.15), [300, 0, 0, np.inf])


def test_air_density_factor() -> None:
    # (rho / 1.204)^0.8, exact: 1 at 20 °C and sea level, never more
    densities = np.array([1.3, 1.204, 0.602])
    assert_allclose(coolers.air_density_factor(densities), [1, 1, 0.5**0.8], rtol=1e-12)
    # ISO 2533:1975: 35 °C at 2000 m is 0.898704 kg/m³
    density = air.density(air.standard_pressure(2000.0), 308.15)
    assert coolers.air_density_factor(density) == pytest.approx((0.898704 / 1.204) ** 0.8, rel=1e-6)


@settings(deadline=None)  # the first call imports a part of scipy
@given(units=st.floats(0, 8), more=st.floats(0.01, 2), ratio=st.floats(0, 1), name=st.sampled_from(list(LIBRARY_NAMES)))
def test_more_units_never_cool_less_and_counterflow_is_best(
    units: float, more: float, ratio: float, name: Arrangement
) -> None:
    here, there = coolers.effectiveness(np.array([units, units + more]), ratio, name)
    assert 0 <= here <= there + 1e-12
    # the short crossflow formula is up to 1.1 % high
    margin = 0.011 if name == "crossflow approximate" else 1e-12
    assert there <= coolers.effectiveness(units + more, ratio, "counterflow") * (1 + margin)
