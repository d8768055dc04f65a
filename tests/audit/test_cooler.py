from dataclasses import replace
from typing import Any

import numpy as np
import pandas as pd
import pytest
from ht.hx import effectiveness_NTU_method
from hypothesis import given, settings
from hypothesis import strategies as st

from heataudit.audit.model import Cooler
from heataudit.audit.options import DesignCase, capacity_offered
from heataudit.audit.run import audit
from heataudit.audit.surroundings import Surroundings
from heataudit.audit.thermal import heat_curve
from heataudit.audit.window import hottest_window
from heataudit.machine import Machine
from heataudit.physics.constants import KELVIN
from tests.audit.fixture import changed, constant, press, relief_solver, solution, with_conductance, with_cycle
from tests.audit.test_thermal import AT_20, mass, stacked

L_MIN = 1e-3 / 60
HOT = {"design_ambient_temperature": KELVIN + 35.0, "highest_oil_temperature": KELVIN + 60.0}


def listed(*rows: tuple[Any, ...]) -> pd.DataFrame:
    """Name, kind, oil flow [L/min], capacity [W/K], water flow [L/min], drop [bar], fan [W], price."""
    names = ["name", "kind", "oil_flow", "capacity", "water_flow", "pressure_drop", "fan_power", "price"]
    table = pd.DataFrame(rows, columns=names)
    return table.assign(
        oil_flow=table["oil_flow"] * L_MIN, water_flow=table["water_flow"].astype(float) * L_MIN,
        pressure_drop=table["pressure_drop"] * 1e5, price=table["price"].astype(float),
    )  # fmt: skip


def machine(*coolers: tuple[Any, ...], **settings: dict[str, Any]) -> Machine:
    """25 W/K, 20 °C a year, 35 °C at most, 60 °C oil; 3 kW then need (3000 - 625) / 25 = 95 W/K."""
    plain = changed(mass(25.0, **settings.pop("reservoir", {})), general=HOT | settings.pop("general", {}))
    return replace(plain, coolers=listed(*coolers)) if coolers else plain


def sized(*coolers: tuple[Any, ...], heat: float = 3000.0, **settings: dict[str, Any]) -> Cooler:
    return audit(machine(*coolers, **settings), constant(heat)).cooler


def test_what_is_required_is_heat_less_what_the_tank_gives_off() -> None:
    cooler = sized(heat=3025.0)
    # exact arithmetic: 25 W/K x 25 K = 0.625 kW; (3.025 - 0.625) kW / 25 K
    assert cooler.tank_at_design_kW == pytest.approx(0.625)
    assert (cooler.required_kW, cooler.required_kW_K) == pytest.approx((2.4, 0.096))
    assert (cooler.oil_inlet_C, cooler.coolant_inlet_C, cooler.needed) == (pytest.approx(60), pytest.approx(35), True)
    assert cooler.verdict == (
        "2.4 kW must be taken away to hold 60 °C at 35 °C ambient: 0.096 kW/K, 0.106 kW/K with 10 % reserve. No "
        "coolers are listed to choose from."
    )


def test_no_cooler_is_needed_where_the_tank_is_enough() -> None:
    cooler = sized(heat=600.0)
    assert (cooler.needed, cooler.required_kW, cooler.required_kW_K, cooler.choice) == (False, 0.0, 0.0, None)
    assert cooler.verdict == (
        "No cooler needed: at 60 °C oil and 35 °C ambient the tank gives off 0.625 kW, and the machine makes 0.6 kW."
    )


def test_the_cheapest_that_is_enough_is_chosen() -> None:
    cooler = sized(
        ("Small", "air", 40, 100, None, 0.4, 100, 200), ("Large", "air", 40, 300, None, 0.4, 100, 900),
        ("Medium", "air", 40, 150, None, 0.4, 100, 500),
    )  # fmt: skip
    # air at 35 °C and sea level is 1.1455 kg/m³ (perfect gas): a factor (1.1455 / 1.204)^0.8
    factor = (101325 / (287.05287 * 308.15) / 1.204) ** 0.8
    assert cooler.choice == "Medium"
    assert cooler.options["offered_kW_K"].tolist() == pytest.approx([0.15 * factor, 0.3 * factor, 0.1 * factor])
    assert cooler.options["cooler"].tolist() == ["Medium", "Large", "Small"]
    # exact arithmetic: 3000 = (25 + 150 f) (T - 35)
    assert cooler.choice_oil_temperature_C == pytest.approx(35 + 3000 / (25 + 150 * factor), abs=1e-4)
    assert cooler.oil_flow_L_min == pytest.approx(40)
    assert "Of the coolers listed, Medium is the cheapest that is enough" in cooler.verdict


def test_exactly_what_is_needed_is_enough() -> None:
    """95 W/K and 10 % reserve; a water cooler, whose capacity no air corrects."""
    assert sized(("W", "water", 40, 104.5, 50, 0.4, 0, 1)).choice == "W"
    assert sized(("W", "water", 40, 104.4, 50, 0.4, 0, 1)).choice is None
    assert not sized(reservoir={"cooler_capacity": 95.0}).needed


def test_equal_prices_are_settled_by_fan_power() -> None:
    rows = (("A", "air", 40, 150, None, 0.4, 300, 500), ("B", "air", 40, 150, None, 0.4, 100, 500))
    assert sized(*rows).choice == "B"


def test_a_curve_is_not_carried_beyond_its_ends() -> None:
    rows = (("Curve", "air", 20, 200, None, 0.4, 0, 1), ("Curve", "air", 40, 400, None, 0.4, 0, 1))
    for flow, offered in ((30, 300.0), (20, 200.0), (40, 400.0), (19, np.nan), (41, np.nan)):
        cooler = sized(*rows, reservoir={"cooler_oil_flow": flow * L_MIN})
        factor = (101325 / (287.05287 * 308.15) / 1.204) ** 0.8  # as above
        assert cooler.options["offered_kW_K"].iloc[0] * 1e3 == pytest.approx(offered * factor, nan_ok=True)
        assert (cooler.choice is None) == np.isnan(offered)


def test_no_listed_cooler_is_enough() -> None:
    found = audit(machine(("Small", "air", 40, 90, None, 0.4, 0, 1)), constant(3000.0))
    assert found.cooler.choice is None
    (finding,) = [f for f in found.findings if f.where == "Cooler"]
    assert finding.code == "oil-too-hot"
    assert finding.text.endswith("No listed cooler is enough: mend the sources of heat first, or list a larger one.")


def test_a_water_cooler_follows_its_effectiveness() -> None:
    """UA 2500 W/K in counterflow; ht gives its capacity at each oil flow (10.40 of the check values at 100 L/min)."""
    settings = {"specific_heat": 2000.0}
    plain = changed(machine(), oil=settings)
    curve = heat_curve(Surroundings(plain), plain.cycle, constant(3000.0))
    case = DesignCase(curve, KELVIN + 60, KELVIN + 35, KELVIN + 25, None, 0.0, 1.0)

    def by_library(flow: float) -> float:
        rated = effectiveness_NTU_method(
            mh=float(case.oil_rate(np.asarray(flow * L_MIN))) / 2000, mc=50 / 60000 * 995, Cph=2000.0, Cpc=4180.0,
            subtype="counterflow", Thi=60.0, Tci=25.0, UA=2500.0,
        )  # fmt: skip
        return float(rated["Q"]) / 35.0

    rows = listed(*(("W", "water", flow, by_library(flow), 50, 0.5, 0, 1) for flow in (60.0, 160.0)))
    # water of 4.16 MJ/(m³ K) here, 4.159 there
    assert capacity_offered(rows, 100 * L_MIN, case) == pytest.approx(by_library(100.0), rel=5e-4)
    at_rated = listed(("W", "water", 100, 1389.97, 50, 0.5, 0, 1))
    assert capacity_offered(at_rated, 100 * L_MIN, case) == pytest.approx(1389.97, rel=1e-9)


def test_a_capacity_that_no_exchanger_has_is_refused() -> None:
    cooler = sized(("Wonder", "water", 10, 5000, 50, 0.5, 0, 1))
    row = cooler.options.iloc[0]
    assert np.isnan(row["offered_kW_K"])
    assert not row["enough"]
    assert row["remark"] == "no exchanger can have this capacity at these flows of oil and water; check the list"


def test_thin_air_takes_capacity_from_an_air_cooler_only() -> None:
    rows = (("A", "air", 40, 200, None, 0.4, 0, 2), ("W", "water", 40, 200, 50, 0.4, 0, 3))
    high = sized(*rows, general={"altitude": 2000.0}).options.set_index("cooler")["offered_kW_K"]
    # 35 °C at 2000 m: 0.898704 kg/m³ (section 11 of the check values)
    assert high["A"] == pytest.approx(0.2 * (0.898704 / 1.204) ** 0.8, rel=1e-4)
    assert high["W"] == pytest.approx(0.2, rel=1e-9)


def test_drops_follow_viscosity() -> None:
    cooler = sized(("A", "air", 40, 200, None, 0.5, 0, 2))
    oil = Surroundings(machine()).oil
    assert cooler.drop_hot_bar == pytest.approx(0.5 * float(oil.viscosity(KELVIN + 60)) / 32e-6)
    assert cooler.drop_cold_bar == pytest.approx(0.5 * float(oil.viscosity(KELVIN + 20)) / 32e-6)


def test_the_existing_cooler_has_a_margin_and_is_not_deducted() -> None:
    cooler = sized(reservoir={"cooler_capacity": 100.0})
    assert cooler.required_kW_K == pytest.approx(0.095)
    assert cooler.existing_margin_percent == pytest.approx(100 * (100 / 95 - 1))
    assert (cooler.needed, cooler.choice) == (False, None)
    assert cooler.verdict.startswith("The existing cooler is enough.")


def test_a_coolant_as_warm_as_the_oil_cools_nothing() -> None:
    cooler = sized(("A", "air", 40, 200, None, 0.5, 0, 2), reservoir={"cooler_coolant_temperature": KELVIN + 60.0})
    assert np.isinf(cooler.required_kW_K)
    assert cooler.choice is None
    assert "no cooler can do it" in cooler.verdict


def test_oil_from_the_return_line_needs_a_smaller_cooler() -> None:
    warm = with_conductance(changed(press(), general=AT_20 | HOT, reservoir={"cooler_flow_from": "Return"}), 5.0)
    from_line, offline = (
        audit(changed(warm, reservoir={"cooler_flow_from": name}), lambda m, cycle, t: stacked(len(cycle) // 3)).cooler
        for name in ("Return", "offline")
    )
    solved = solution()
    time = np.array([4.0, 3.0, 10.0])
    flow = float(np.array([30, 30, 40]) / 6e4 @ time / 17)
    rise = (solved.heat - solved.components.heat[1]) @ time / 17 / float(Surroundings(warm).oil_rate(flow, KELVIN + 60))
    assert from_line.oil_inlet_C == pytest.approx(60 + rise, rel=1e-6)
    assert from_line.required_kW_K == pytest.approx(from_line.required_kW / (25 + rise), rel=1e-6)
    assert from_line.required_kW_K < offline.required_kW_K
    assert from_line.oil_flow_L_min == pytest.approx(flow * 6e4)


# -- monotone: hotter, lossier, smaller never makes the cooler smaller

cycles = st.lists(st.tuples(st.floats(1.0, 600.0), st.floats(0.0, 8000.0)), min_size=1, max_size=5)


def required(phases: list[tuple[float, float]], more: float = 0.0, ambient: float = 35.0, volume: float = 0.1) -> float:
    durations, heats = np.array(phases).T
    plain = changed(
        with_cycle(press(), durations), general=AT_20 | HOT | {"design_ambient_temperature": KELVIN + ambient},
        reservoir={"oil_volume": volume},
    )  # fmt: skip
    side = (volume / 0.8 / 1.5) ** (1 / 3)
    plain = changed(plain, reservoir={"length": 1.5 * side, "width": side, "height": side})
    numbers = {name: n for n, name in enumerate(plain.cycle.phase)}
    solver = relief_solver(lambda cycle, _: np.array([heats[numbers[name]] for name in cycle.phase]) + more)
    return audit(plain, solver).cooler.required_kW_K


@settings(max_examples=15, deadline=None)
@given(cycles, st.floats(0, 5000), st.floats(0, 20), st.floats(0.3, 1.0))
def test_hotter_lossier_smaller_never_needs_a_smaller_cooler(
    phases: list[tuple[float, float]], more: float, hotter: float, smaller: float
) -> None:
    base = required(phases)
    assert required(phases, more=more) >= base - 1e-12
    assert required(phases, ambient=35.0 + hotter) >= base - 1e-12
    assert required(phases, volume=0.1 * smaller) >= base - 1e-12


# -- the hottest window


@settings(max_examples=80, deadline=None)
@given(st.lists(st.tuples(st.floats(0.1, 50), st.floats(0, 1e4)), min_size=1, max_size=12), st.floats(0.01, 1.2))
def test_no_window_is_hotter_than_the_hottest(phases: list[tuple[float, float]], share: float) -> None:
    time, heat = np.array(phases).T
    cycle = time.sum()
    window = hottest_window(time, heat, share * cycle)
    edges = np.concatenate([[0], np.cumsum(np.tile(time, 3))])
    energy = np.concatenate([[0], np.cumsum(np.tile(time * heat, 3))])
    mean = time @ heat / cycle
    if share >= 1:
        assert window.heat == pytest.approx(mean)
        return
    starts = np.linspace(0, cycle, 500)
    collected = np.interp(starts + share * cycle, edges, energy) - np.interp(starts, edges, energy)
    assert window.heat >= collected.max() / (share * cycle) * (1 - 1e-9)
    found = np.interp(window.start + window.length, edges, energy) - np.interp(window.start, edges, energy)
    assert window.heat == pytest.approx(found / window.length)
    assert mean * (1 - 1e-9) <= window.heat <= heat.max() * (1 + 1e-9)


def test_a_long_hot_stretch_counts_not_the_mean_of_the_day() -> None:
    hours = with_cycle(press(), np.array([4.0, 4.0]) * 36000)
    plain = with_conductance(changed(hours, general=AT_20 | HOT), 25.0)
    cooler = audit(plain, relief_solver(lambda cycle, _: np.where(cycle.phase == "phase 2", 3000.0, 200.0))).cooler
    assert cooler.window_s < 8 * 36000
    assert cooler.design_heat_kW == pytest.approx(3.0)
    assert 4 * 36000 <= cooler.window_start_s <= 8 * 36000 - cooler.window_s
