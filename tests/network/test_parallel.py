"""Parallel branches in closed form, through whole workbooks: where the second branch opens, and how they share.

Standard parallel-flow theory, by exact arithmetic. Two branches, each a constant opposing pressure and a resistance,
p = p1 + k1 Q1² = p2 + k2 Q2² with p1 <= p2, d = p2 - p1 and Q1 + Q2 = Q: the second is shut up to Qc = sqrt(d / k1);
above it Q1 = (d + k2 Q²) / (k2 Q + S) and Q2 = (k1 Q² - d) / (k1 Q + S), S = sqrt(k1 k2 Q² + (k1 - k2) d).
"""

from __future__ import annotations

from math import nextafter, pi, sqrt

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from heataudit.network.solution import Solution, State
from tests.network.small import BAR, L_MIN, PUMP, VALVE, flow, run
from tests.workbooks import Rows

EXACT = 1e-9
LEAST = 1.1e-8
"""Pressure [bar] that every law adds at the whole pump flow, 0.001 Pa: no branch is infinitely conductive."""

CONSUMERS = [["Actuator", "Kind", "Port A", "Port B"], ["One", "constant pressure", "a", "Tank"],
             ["Two", "constant pressure", "b", "Tank"]]  # fmt: skip
NEVER = ["Never", "relief", "P", "Tank", 100, 20, 700]
"""A relief valve that stays shut: a fixed pump must have one."""

CYCLE = ["Phase", "Duration [s]", "One move", "One load [bar]", "Two move", "Two load [bar]"]
THIN = [["Item", "Value"], ["Viscosity grade", 46], ["Pressure-viscosity coefficient", 0]]
QC = sqrt(36 / 0.015)

Branch = tuple[float, float]
"""Opposing pressure [bar] and coefficient k [bar/(L/min)²]."""

ROWS = {  # p1, k1, p2, k2, Q -> Q1, Q2, p; printed to ten digits
    "k1 > k2": ((50, 0.02), (80, 0.01), 60, 40.99504938, 19.00495062, 83.61188148),
    "whole numbers": ((40, 0.01), (100, 0.01), 100, 80, 20, 104),
    "equal k": ((30, 0.004), (150, 0.004), 200, 175, 25, 152.5),
    "still shut": ((60, 0.015), (96, 0.03), 40, 40, 0, 84),
    "only just begins": ((60, 0.015), (96, 0.03), QC, QC, 0, 96),
    "just above": ((60, 0.015), (96, 0.03), 50, 49.00980486, 0.9901951359, 96.02941459),
    "above": ((60, 0.015), (96, 0.03), 55, 49.58477013, 5.415229868, 96.87974144),
    "nothing opposes": ((0, 0.005), (0, 0.02), 90, 60, 30, 18),
}


def split(one: Branch, two: Branch, total: float) -> tuple[float, float, float]:
    """Flows [L/min] and common pressure [bar] by the closed form above."""
    if one[0] > two[0]:
        second, first, pressure = split(two, one, total)
        return first, second, pressure
    (p1, k1), (p2, k2) = one, two
    d = p2 - p1
    if k1 * total**2 <= d:
        return total, 0.0, p1 + k1 * total**2
    root = sqrt(k1 * k2 * total**2 + (k1 - k2) * d)
    first = (d + k2 * total**2) / (k2 * total + root)
    return first, (k1 * total**2 - d) / (k1 * total + root), p1 + k1 * first**2


def pump(total: float) -> Rows:
    """A tight fixed pump of so many L/min at 1000 rpm."""
    return [PUMP, ["Pump", "gear", "fixed", total, 1000, 100, "P"]]


def throttles(one: Branch, two: Branch, total: float) -> Solution:
    """Two constant pressure consumers behind throttles; rated at 10 bar, k = 10 / Q²."""
    return run({
        "Pumps": pump(total),
        "Valves": [VALVE, NEVER, *([name, "throttle", "P", end, sqrt(10 / k), 10, None]
                            for name, end, (_, k) in (("First", "a", one), ("Second", "b", two)))],
        "Actuators": CONSUMERS,
        "Duty cycle": [CYCLE, ["both", 1, "on", one[0], "on", two[0]]],
    })  # fmt: skip


def checks(one: Branch, two: Branch, total: float) -> Solution:
    """Two check valves to the tank; rated at 10 bar above their opening pressures."""
    return run({
        "Pumps": pump(total),
        "Valves": [VALVE, *([name, "check", "P", "Tank", sqrt(10 / k), 10, p]
                            for name, (p, k) in (("First", one), ("Second", two)))],
        "Duty cycle": [["Phase", "Duration [s]"], ["both", 1]],
    })  # fmt: skip


def shares(found: Solution) -> list[float]:
    """Flows [L/min] of both branches and the pump's pressure [bar]."""
    return [float(flow(found, "First")[0]), float(flow(found, "Second")[0]), float(found.pumps.pressure[0, 0] / BAR)]


@pytest.mark.parametrize("build", [throttles, checks])
@pytest.mark.parametrize("swapped", [False, True])
@pytest.mark.parametrize("row", ROWS)
def test_two_opposing_pressures(row: str, swapped: bool, build: object) -> None:
    one, two, total, first, second, pressure = ROWS[row]
    found = build(two, one, total) if swapped else build(one, two, total)  # type: ignore[operator]
    got = shares(found)
    got = [got[1], got[0], got[2]] if swapped else got
    assert got == pytest.approx([first, second, pressure], rel=1e-9, abs=2e-8)  # as printed
    assert got == pytest.approx(list(split(one, two, total)), rel=EXACT, abs=EXACT * total)
    heat = (one[1] * got[0] ** 3 + two[1] * got[1] ** 3) / 600  # kW, bar times L/min over 600
    to_loads = (one[0] * got[0] + two[0] * got[1]) / 600
    if build is throttles:
        assert found.components.heat.sum() / 1e3 == pytest.approx(heat, rel=2 * EXACT)
        assert found.load_power[0] / 1e3 == pytest.approx(to_loads, rel=EXACT, abs=1e-12)
    assert heat + to_loads == pytest.approx(got[2] * total / 600, rel=2 * EXACT)  # p Q


@pytest.mark.parametrize("build", [throttles, checks])
@pytest.mark.parametrize("beside", [1e-3, 1e-5, 1e-7, 1e-9, 1e-12])
@pytest.mark.parametrize("side", [-1, 1])
@pytest.mark.parametrize("steep", [0.03, 0.015, 0.0001])
def test_a_hair_beside_the_opening_point(build: object, beside: float, side: int, steep: float) -> None:
    one, two, total = (60.0, 0.015), (96.0, steep), QC * (1 + side * beside)
    found = build(one, two, total)  # type: ignore[operator]
    assert shares(found) == pytest.approx(list(split(one, two, total)), rel=EXACT, abs=EXACT * total)
    if beside > 1e-6 and side < 0:
        assert flow(found, "Second")[0] == 0.0  # shut is shut: exactly nothing


def test_the_next_number_above_the_opening_point() -> None:
    for total in (QC, nextafter(QC, 0), nextafter(QC, 1e3)):
        assert shares(throttles((60, 0.015), (96, 0.03), total)) == pytest.approx([QC, 0, 96], rel=EXACT, abs=5e-8)


@settings(max_examples=25, deadline=None, derandomize=True)
@given(st.floats(0, 250), st.floats(0, 250), st.floats(1e-3, 300), st.floats(1e-3, 300), st.floats(0.5, 500))
def test_any_two_branches(p1: float, p2: float, drop_1: float, drop_2: float, total: float) -> None:
    k1, k2 = drop_1 / total**2, drop_2 / total**2
    expected = split((p1, k1), (p2, k2), total)
    got = shares(throttles((p1, k1), (p2, k2), total))
    assert got[2] == pytest.approx(expected[2], rel=EXACT, abs=LEAST)
    # What 0.001 Pa moves between the branches: no more than it does where the weaker one is just open, dp = k q²; and
    # the solver makes square laws linear below 1e-6 of the pump flow, so that a branch may open by about as much.
    moved = sqrt(LEAST / min(k1, k2))
    assert got[:2] == pytest.approx(expected[:2], rel=EXACT, abs=min(moved, 3e-6 * total))


def test_two_laminar_lines() -> None:
    # dp = R Q, R = 128 mu L / (pi D⁴) at mu = 0.04 Pa s: R1 = 795774715.459, R2 = 488923985.178 Pa s/m³,
    # so Q1 = 11.4172447968, Q2 = 18.5827552032 L/min, dp = 151425.912159 Pa (Hagen and Poiseuille; Re 659 and 858).
    # Density at 15 °C is that typed, so nu = 0.04 / 870 there; the Walther line through nu(15) and nu(100) = 6 gives
    # the 40 °C value to type.
    a, b = np.log10(np.log10(40000 / 870 + 0.7)), np.log10(np.log10(6.7))
    share = np.log10(313.15 / 288.15) / np.log10(373.15 / 288.15)
    at_40 = 10 ** (10 ** (a + (b - a) * share)) - 0.7
    found = run(
        {"Pumps": pump(30),
         "Lines": [["Line", "From", "To", "Inside diameter [mm]", "Length [m]", "Ends [-]"],
                   ["First", "P", "Tank", 8, 2, 0], ["Second", "P", "Tank", 10, 3, 0]],
         "Duty cycle": [["Phase", "Duration [s]"], ["both", 1]]},
        oil=[["Item", "Value"], ["Viscosity at 40", at_40], ["Viscosity at 100", 6], ["Density", 870],
             ["Pressure-viscosity coefficient", 0]],
        temperature=15.0,
    )  # fmt: skip
    assert found.viscosity[0] * found.density[0] == pytest.approx(0.04, rel=1e-12)
    first, second, pressure = shares(found)
    assert [first, second] == pytest.approx([11.4172447968, 18.5827552032], rel=EXACT)
    assert pressure == pytest.approx(1.51425912159, rel=EXACT, abs=LEAST)
    assert first / second == pytest.approx(0.8**4 * 1.5, rel=2 * EXACT)


def test_two_orifices() -> None:
    # Q = Cd A sqrt(2 dp / rho), Cd 0.6, rho 870, 2 and 3 mm: flows as the areas, 40 x 4/13 and 40 x 9/13 L/min at
    # 51.5154823691 bar; the pair is one orifice of sqrt(13) mm
    def rated(diameter: float) -> float:
        return 0.6 * pi / 4 * (diameter * 1e-3) ** 2 * sqrt(2 * 10 * BAR / 870) / L_MIN

    valves = [VALVE, ["First", "throttle", "P", "Tank", rated(2), 10, None],
              ["Second", "throttle", "P", "Tank", rated(3), 10, None]]  # fmt: skip
    idle = {"Duty cycle": [["Phase", "Duration [s]"], ["both", 1]]}
    found = run({"Pumps": pump(40), "Valves": valves, **idle})
    assert shares(found) == pytest.approx([160 / 13, 360 / 13, 51.5154823691], rel=EXACT)
    alone = run({"Pumps": pump(40), "Valves": [VALVE, ["First", "throttle", "P", "Tank", rated(sqrt(13)), 10, None]],
                 **idle})  # fmt: skip
    assert alone.pumps.pressure[0] == pytest.approx(found.pumps.pressure[0], rel=EXACT)


def test_two_equal_orifices() -> None:
    # two of 1 mm, 10 L/min: 5 and 5 L/min at 136.033070631 bar; equal branches share equally whatever they are
    flow_at_10_bar = 0.6 * pi / 4 * 1e-6 * sqrt(2 * 10 * BAR / 870) / L_MIN
    k = 10 / flow_at_10_bar**2
    assert shares(throttles((0, k), (0, k), 10)) == pytest.approx([5, 5, 136.033070631], rel=EXACT)
    for level, coefficient in ((0.0, 1e-6), (80.0, 0.01), (200.0, 0.3)):
        found = throttles((level, coefficient), (level, coefficient), 60)
        assert shares(found) == pytest.approx([30, 30, level + 900 * coefficient], rel=EXACT, abs=LEAST)


@pytest.mark.parametrize(
    ("total", "first", "second", "pressure"),
    [(60, 40, 20, 40), (30, 30, 0, 35), (20, 20, 0, 30), (29.999, 29.999, 0, None)],
)
def test_linear_branches(total: float, first: float, second: float, pressure: float | None) -> None:
    # Filters: R = rated drop / rated flow x nu / rated nu, here at their rated viscosity. p1 = 20, R1 = 0.5, p2 = 35,
    # R2 = 0.25 bar/(L/min): Qc = 15 / 0.5 = 30; above it Q1 = (d + R2 Q) / (R1 + R2)
    level = 20 + 0.5 * first if pressure is None else pressure
    r = {"First": 50, "Second": 25}
    for one, two in ((("First", "a"), ("Second", "b")), (("Second", "a"), ("First", "b"))):
        loads = (20, 35) if one[0] == "First" else (35, 20)
        found = run({
            "Pumps": pump(total),
            "Valves": [[*VALVE, "Rated viscosity [mm²/s]"], NEVER, [one[0], "filter", "P", one[1], 100, r[one[0]], None, 46],
                       [two[0], "filter", "P", two[1], 100, r[two[0]], None, 46]],
            "Actuators": CONSUMERS,
            "Duty cycle": [CYCLE, ["both", 1, "on", loads[0], "on", loads[1]]],
        }, oil=THIN)  # fmt: skip
        got = shares(found)
        # nu at 40 °C comes back from ISO 3448's 46 mm²/s over Walther's two logarithms to about 1e-9
        assert got == pytest.approx([first, second, level], rel=1e-8, abs=3e-8 * total)


def test_linear_reliefs_share_in_closed_form() -> None:
    # two relief valves: p = 20 + 0.5 Q1 = 35 + 0.25 Q2 as above, exactly
    for total, expected in ((60, [40, 20, 40]), (30, [30, 0, 35]), (20, [20, 0, 30])):
        found = run({
            "Pumps": pump(total),
            "Valves": [VALVE, ["First", "relief", "P", "Tank", 100, 50, 20], ["Second", "relief", "P", "Tank", 100, 25, 35]],
            "Duty cycle": [["Phase", "Duration [s]"], ["idle", 1]],
        })  # fmt: skip
        assert shares(found) == pytest.approx(expected, rel=EXACT, abs=EXACT * total)


def test_a_function_stalls_beside_one_that_moves() -> None:
    # 50 L/min to 60 bar through k = 0.01: 85 bar at P; 90 bar is not reached (stalled), 80 bar is (both move)
    found = throttles((60, 0.01), (90, 0.01), 50)
    assert found.actuators.state[:, 0].tolist() == [State.MOVING, State.STALLED]
    assert found.actuators.inlet[1, 0] / BAR == pytest.approx(85, rel=EXACT)  # it shows its feed's pressure
    assert found.actuators.power[1, 0] == 0.0
    assert throttles((60, 0.01), (80, 0.01), 50).actuators.state[:, 0].tolist() == [State.MOVING, State.MOVING]


def test_no_flow_at_all() -> None:
    # the pump stands: nothing flows, no power, nothing but rest
    found = run({
        "Pumps": pump(50),
        "Valves": [VALVE, NEVER, ["First", "throttle", "P", "a", 50, 10, None], ["Second", "throttle", "P", "b", 50, 10, None]],
        "Actuators": CONSUMERS,
        "Duty cycle": [[*CYCLE, "Pump speed [rpm]"], ["rest", 1, "on", 50, "on", 20, 0]],
    })  # fmt: skip
    assert (found.components.flow == 0).all()
    assert (found.actuators.flow == 0).all()
    assert found.shaft_power[0] == 0
    assert found.heat[0] == 0
