"""Two-port valves."""

import numpy as np
import pytest
import scipy.constants as sc
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from heataudit.physics import valves

BAR = 1e5
L_MIN = 1e-3 / 60


# square-root law, exact: rated flow [L/min] at rated drop [bar]; drop, flow
@pytest.mark.parametrize(
    ("rated_flow", "rated_drop", "drop", "flow"),
    [(40, 35, 100, 67.61234038), (40, 35, 10, 21.38089935), (60, 5, 20, 120), (60, 5, 80, 240),
     (63, 10, 70, 166.6823326), (40, 35, 86.821875, 63), (60, 5, 1.25, 30)],
)  # fmt: skip
def test_throttle(rated_flow: float, rated_drop: float, drop: float, flow: float) -> None:
    k = valves.throttle_coefficient(rated_flow * L_MIN, rated_drop * BAR)
    assert valves.throttle_flow(drop * BAR, k) / L_MIN == pytest.approx(flow, rel=1e-9)
    assert valves.throttle_drop(flow * L_MIN, k) / BAR == pytest.approx(drop, rel=1e-9)
    assert valves.throttle_flow(-drop * BAR, k) / L_MIN == pytest.approx(-flow, rel=1e-9)


def test_a_whole_valve_rating_is_two_edges_in_series() -> None:
    # exact: 35 bar per edge at 40 L/min are 70 bar over the valve; with half the flow leaving (cylinder of area
    # ratio 2) 35 + 35/4 = 43.75 bar
    edge = valves.throttle_coefficient(40 * L_MIN, 35 * BAR)
    into, out = np.array([40.0, 40.0]) * L_MIN, np.array([40.0, 20.0]) * L_MIN
    both = valves.throttle_drop(into, edge) + valves.throttle_drop(out, edge)
    assert_allclose(both / BAR, [70.0, 43.75], rtol=1e-12)


def test_esposito_flow_coefficient() -> None:
    # Esposito, Example 8-5: 25 gpm at 100 psi, SG 0.9: Cv = 2.37 gpm/sqrt(psi), the water flow at 1 psi, that is the
    # flow of this oil at 0.9 psi; metric: 94.8 L/min at 687 kPa: 3.43 L/min/sqrt(kPa)
    k = valves.throttle_coefficient(25 * sc.gallon / 60, 100 * sc.psi)
    assert valves.throttle_flow(0.9 * sc.psi, k) / (sc.gallon / 60) == pytest.approx(2.37, rel=0.005)
    k = valves.throttle_coefficient(94.8 * L_MIN, 687e3)
    assert valves.throttle_flow(0.9e3, k) / L_MIN == pytest.approx(3.43, rel=0.005)


def test_half_open_passes_half() -> None:
    # the law itself: Q = Q_rated opening sqrt(dp / dp_rated), exact; shut passes nothing
    k = valves.throttle_coefficient(60 * L_MIN, 10 * BAR, np.array([1.0, 0.5, 0.0]))
    assert_allclose(valves.throttle_flow(10 * BAR, k) / L_MIN, [60, 30, 0], rtol=1e-12)


def test_check() -> None:
    # dp = p0 + (Q/Q_rated)² dp_rated, exact: 1 + 0.5² x 5 = 2.25 bar
    k = valves.throttle_coefficient(100 * L_MIN, 5 * BAR)
    assert valves.check_drop(50 * L_MIN, 1 * BAR, k) / BAR == pytest.approx(2.25)
    drops = np.array([-200.0, 0, 0.99, 1.0, 2.25, 6.0]) * BAR
    assert_allclose(valves.check_flow(drops, 1 * BAR, k) / L_MIN, [0, 0, 0, 0, 50, 100], atol=1e-9)


def test_relief() -> None:
    # dp = p0 + (Q/Q_rated) dp_rated, exact: 200 bar + 15 % override at 120 L/min: 215 bar at 60 L/min
    opening, override = 200 * BAR, valves.proportional_coefficient(120 * L_MIN, 30 * BAR)
    assert valves.relief_drop(60 * L_MIN, opening, override) / BAR == pytest.approx(215)
    drops = np.array([-10.0, 199, 200, 215, 230]) * BAR
    assert_allclose(valves.relief_flow(drops, opening, override) / L_MIN, [0, 0, 0, 60, 120], atol=1e-9)


def test_relief_set_at_flow() -> None:
    # exact: read 200 bar at 60 L/min with 30 bar at 120 L/min: it cracks at 185 bar and stands at 200 at that flow
    override = valves.proportional_coefficient(120 * L_MIN, 30 * BAR)
    opening = valves.cracking_pressure(200 * BAR, override, 60 * L_MIN)
    assert opening / BAR == pytest.approx(185)
    assert valves.relief_drop(60 * L_MIN, opening, override) / BAR == pytest.approx(200)


def test_filter() -> None:
    # linear in flow and viscosity, exact: 0.5 bar at 100 L/min and 32 mm²/s; 50 L/min at 128 mm²/s: 1 bar
    resistance = valves.viscous_coefficient(100 * L_MIN, 0.5 * BAR, 128e-6, 32e-6)
    assert resistance * 50 * L_MIN / BAR == pytest.approx(1.0)


def test_flow_control() -> None:
    # the throttle law up to the set flow forwards, the throttle law backwards; exact
    k = valves.throttle_coefficient(40 * L_MIN, 10 * BAR)
    drops = np.array([-40.0, 0, 2.5, 10, 200]) * BAR
    assert_allclose(valves.flow_control_flow(drops, k, 30 * L_MIN) / L_MIN, [-80, 0, 20, 30, 30], rtol=1e-12)


PRESSURES = st.floats(-400 * BAR, 400 * BAR)
COEFFICIENTS = st.floats(1e8, 1e14)


@given(low=PRESSURES, high=PRESSURES, k=COEFFICIENTS, opening=st.floats(0, 300 * BAR))
def test_no_law_passes_less_at_more_drop(low: float, high: float, k: float, opening: float) -> None:
    low, high = sorted((low, high))
    assert valves.throttle_flow(low, k) <= valves.throttle_flow(high, k)
    assert valves.check_flow(low, opening, k) <= valves.check_flow(high, opening, k)
    assert valves.relief_flow(low, opening, k) <= valves.relief_flow(high, opening, k)
    assert valves.flow_control_flow(low, k, 1e-3) <= valves.flow_control_flow(high, k, 1e-3)


@given(flow=st.floats(0, 0.02), k=COEFFICIENTS, opening=st.floats(0, 300 * BAR))
def test_drop_and_flow_are_inverse(flow: float, k: float, opening: float) -> None:
    # the opening pressure eats digits: 3e7 Pa is known to 4e-9 Pa
    lost = 1e-8 / k
    assert valves.throttle_flow(valves.throttle_drop(flow, k), k) == pytest.approx(flow, rel=1e-12)
    assert np.square(valves.check_flow(valves.check_drop(flow, opening, k), opening, k)) == pytest.approx(
        flow * flow, rel=1e-12, abs=lost
    )
    assert valves.relief_flow(valves.relief_drop(flow, opening, k), opening, k) == pytest.approx(
        flow, rel=1e-12, abs=lost
    )
