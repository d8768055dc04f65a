"""Fixed and compensated pumps, passive valves, lines and cylinders: each with its algebra by hand."""

from __future__ import annotations

import fluids
import numpy as np
import pytest

from heataudit.network.solution import State
from tests.network.small import BAR, L_MIN, PUMP, RELIEF, TIGHT, VALVE, at, drop, flow, run

CONSUMER = ["Actuator", "Kind", "Port A", "Port B"]
CYCLE = ["Phase", "Duration [s]", "Load move", "Load load [bar]"]
EXACT = 3e-9  # every law has a slope of 1e-10 of 100 bar per pump flow, see DEVELOPERS.md


def test_a_fixed_pump_loses_its_slip_and_its_torque() -> None:
    # eta_v 0.92 and eta_hm 0.90 at 200 bar, 1000 rpm and 32 mm²/s; r = (46 / 32)^0.5 at 46 mm²/s and 40 °C
    # slip = D n (1 - eta_v) p / p_rated / r;  T = D p / 2 pi + T_loss (0.75 p / p_rated + 0.25 r),
    # T_loss = D p_rated / 2 pi (1 / eta_hm - 1)
    found = run({
        "Pumps": [[*PUMP, "Hydromechanical efficiency [%]"], ["Pump", "gear", "fixed", 50, 1000, 92, "P", 90]],
        "Valves": [VALVE, RELIEF],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 120]],
    })  # fmt: skip
    r = (46 / 32) ** 0.5
    slip = 50 * 0.08 * 120 / 200 / r
    assert found.pumps.flow[0, 0] / L_MIN == pytest.approx(50 - slip, rel=1e-7)  # Walther rounds 46 mm²/s at 1e-9
    displacement, rated = 50e-6, 200 * BAR
    loss = displacement * rated / (2 * np.pi) * (1 / 0.9 - 1)
    torque = displacement * 120 * BAR / (2 * np.pi) + loss * (0.75 * 120 / 200 + 0.25 * r)
    assert found.shaft_power[0] == pytest.approx(torque * 2 * np.pi * 1000 / 60, rel=1e-7)
    assert found.load_power[0] == pytest.approx(120 * BAR * (50 - slip) * L_MIN, rel=1e-7)


def test_a_compensated_pump_gives_what_is_taken_at_its_setting() -> None:
    # wide open: 50 L/min over k = 10 / 20² bar/(L/min)² to a 30 bar load need 92.5 bar, below the setting of 150;
    # 20 % open: k = 0.625, so Q = sqrt((150 - 30) / 0.625) = 13.856 L/min at 150 bar
    found = run({
        "Pumps": [[*PUMP, "Setting [bar]"], ["Pump", "piston", "pressure compensated", 50, 1000, 100, "P", 150]],
        "Valves": [VALVE, ["Throttle", "throttle", "P", "a", 20, 10, None]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "a", "Tank"]],
        "Duty cycle": [[*CYCLE, "Throttle opening [%]"], ["wide", 1, "on", 30, 100], ["narrow", 1, "on", 30, 20]],
    })  # fmt: skip
    assert found.pumps.flow[0] / L_MIN == pytest.approx([50, np.sqrt(120 / 0.625)], rel=EXACT)
    assert found.pumps.pressure[0] / BAR == pytest.approx([30 + 0.025 * 2500, 150], rel=EXACT)
    assert found.pumps.displacement[0] == pytest.approx([1, np.sqrt(120 / 0.625) / 50], rel=EXACT)


def test_all_shut_with_the_pump_on_relief() -> None:
    # override in proportion to flow: 200 + 50 / 100 x 20 = 210 bar, all of the shaft's hydraulic power heat
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [CYCLE, ["off", 1, "hold", None], ["too much", 1, "on", 260]],
    })  # fmt: skip
    assert found.pumps.pressure[0] / BAR == pytest.approx([210, 210], rel=EXACT)
    assert found.actuators.state[0].tolist() == [State.HELD, State.STALLED]
    assert np.isnan(found.actuators.inlet[0, 0])
    assert found.actuators.inlet[0, 1] / BAR == pytest.approx(210, rel=EXACT)  # shows the feed's pressure
    assert (found.load_power == 0).all()


def test_set_at_flow_moves_the_opening_point() -> None:
    # read 200 bar at 30 L/min: opens at 200 - 30 / 100 x 20 = 194 bar, so 204 bar at 50 L/min
    found = run({
        "Pumps": TIGHT, "Valves": [[*VALVE, "Set at flow [L/min]"], [*RELIEF, 30]],
        "Duty cycle": [["Phase", "Duration [s]"], ["idle", 1]],
    })  # fmt: skip
    assert found.pumps.pressure[0] / BAR == pytest.approx([204], rel=EXACT)


def test_checks_filters_and_flow_controls_in_a_row() -> None:
    # check: 2 + (50 / 100)² x 4 = 3 bar; filter: 50 / 100 x 1 x 46 / 32; a flow control of 12 L/min beside the way
    found = run({
        "Pumps": TIGHT,
        "Valves": [[*VALVE, "Set flow [L/min]"], [*RELIEF, None], ["Check", "check", "P", "a", 100, 4, 2, None],
                   ["Filter", "filter", "a", "b", 100, 1, None, None],
                   ["Steer", "flow control", "b", "Tank", 20, 10, None, 12]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "b", "Tank"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 80]],
    })  # fmt: skip
    assert drop(found, "Check") == pytest.approx([3], rel=1e-8)
    assert drop(found, "Filter") == pytest.approx([0.5 * 46 / 32], rel=1e-7)
    assert flow(found, "Steer") == pytest.approx([12], rel=EXACT)
    assert drop(found, "Steer") == pytest.approx([80], rel=1e-7)  # what its own throttle does not take, it takes too
    assert found.actuators.flow[0] / L_MIN == pytest.approx([38], rel=EXACT)


def test_a_cylinder_each_way() -> None:
    # bore 80, rod 45 mm: A = pi/4 80² = 5026.5 mm², ring 3436.1 mm²; efficiency 0.95
    # extending 30 kN: p_A A - p_B ring = F / 0.95; paths of 80 L/min at 10 bar each: k = 10 / 6400
    bore, ring = np.pi / 4 * 0.080**2, np.pi / 4 * (0.080**2 - 0.045**2)
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["Way", "P", "Tank", 80]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]"], ["Ram", "cylinder", "Way", 80, 45]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram load [kN]"], ["out", 1, "extend", 30],
                       ["back", 1, "retract", 30], ["pulled", 1, "extend", -1]],
    })  # fmt: skip
    k = 10 / 6400
    out = 50 * ring / bore
    p_b = k * out**2
    p_a = (30e3 / 0.95 + p_b * BAR * ring) / bore / BAR
    back = 50 * bore / ring
    assert at(found, "Ram.A")[0] == pytest.approx(p_a, rel=1e-8)
    assert found.pumps.pressure[0, 0] / BAR == pytest.approx(p_a + k * 2500, rel=1e-8)
    assert found.actuators.speed[0, :2] == pytest.approx([50 * L_MIN / bore, 50 * L_MIN / ring], rel=1e-8)
    p_in = (30e3 / 0.95 + k * back**2 * BAR * bore) / ring / BAR
    assert at(found, "Ram.B")[1] == pytest.approx(p_in, rel=1e-8)
    # a load that drives: F x 0.95
    assert at(found, "Ram.A")[2] == pytest.approx((-1e3 * 0.95 + p_b * BAR * ring) / bore / BAR, abs=1e-7)
    assert found.actuators.power[0, 2] == pytest.approx(-1e3 * 50 * L_MIN / bore, rel=1e-8)


def test_an_asked_speed_opens_the_spool_as_far_as_that_needs() -> None:
    # closed centre, compensated pump at 150 bar: 60 mm/s are 18.096 L/min in, 12.370 out; a = k Q_A², b = k Q_B² phi;
    # x = sqrt((a + b) / (150 - F / (0.95 A)))
    bore, ring = np.pi / 4 * 0.080**2, np.pi / 4 * (0.080**2 - 0.045**2)
    found = run({
        "Pumps": [[*PUMP, "Setting [bar]"], ["Pump", "piston", "pressure compensated", 50, 1000, 100, "P", 150]],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["Way", "P", "Tank", 80]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]"], ["Ram", "cylinder", "Way", 80, 45]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram load [kN]", "Ram travel [mm]", "Ram opening [%]"],
                       ["asked", 2, "extend", 30, 120, None], ["held back", 2, "extend", 30, 120, 5]],
    })  # fmt: skip
    q_in, q_out = 0.060 * bore / L_MIN, 0.060 * ring / L_MIN
    k, phi = 10 / 6400, ring / bore
    spare = 150 - 30e3 / 0.95 / bore / BAR
    opening = np.sqrt(k * (q_in**2 + phi * q_out**2) / spare)
    assert found.actuators.opening[0, 0] == pytest.approx(opening, rel=1e-8)
    assert found.actuators.speed[0, 0] == pytest.approx(0.060, rel=1e-9)
    assert found.actuators.state[0].tolist() == [State.MOVING, State.SLOW]
    # no further than the 5 % that are allowed: the speed goes as the opening
    assert found.actuators.speed[0, 1] == pytest.approx(0.060 * 0.05 / opening, rel=1e-8)


def test_an_open_centre_shares_with_its_gallery() -> None:
    # half open of 75 %: the gallery keeps 1/3 of its flow in neutral, so k_g = 9 x 10 / 120²; motor at 8 bar, paths at
    # half opening k = 4 x 10 / 80²; p = k_g Qg² = 8 + 2 k Qm², Qg + Qm = 50
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]", "Centre", "Bypass [L/min]"],
                               ["Way", "P", "Tank", 80, "open", 120]],
        "Actuators": [["Actuator", "Kind", "Section", "Displacement [cm³/rev]", "Volumetric efficiency [%]"],
                      ["Motor", "motor", "Way", 100, 100]],
        "Duty cycle": [["Phase", "Duration [s]", "Motor move", "Motor load [bar]", "Motor opening [%]"],
                       ["half", 1, "forward", 8, 50], ["neutral", 1, None, None, None]],
    })  # fmt: skip
    gallery, path = 9 * 10 / 120**2, 4 * 10 / 80**2
    # gallery (50 - q)² = 8 + 2 path q², the root between 0 and 50
    a, b, c = 2 * path - gallery, 100 * gallery, 8 - 2500 * gallery
    q = (-b + np.sqrt(b * b - 4 * a * c)) / (2 * a)
    assert found.actuators.flow[0, 0] / L_MIN == pytest.approx(q, rel=1e-7)
    assert flow(found, "Way gallery")[0] == pytest.approx(50 - q, rel=1e-7)
    assert found.pumps.pressure[0, 1] / BAR == pytest.approx(10 / 120**2 * 2500, rel=1e-8)


def test_a_line_against_a_reference_library() -> None:
    # Churchill's friction factor and the ends by `fluids`, Barus by hand at the line's mean pressure
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Lines": [["Line", "From", "To", "Inside diameter [mm]", "Length [m]"], ["Hose", "P", "a", 16, 8]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "a", "Tank"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 100]],
    })  # fmt: skip
    speed = 50 * L_MIN / (np.pi / 4 * 0.016**2)
    mean = (found.pumps.pressure[0, 0] + 100 * BAR) / 2
    viscosity = found.viscosity[0] * np.exp(20e-9 * mean)
    reynolds = speed * 0.016 / viscosity
    friction = fluids.friction.Churchill_1977(Re=reynolds, eD=0.01 / 16)
    by_hand = (friction * 8 / 0.016 + 2 * 0.5) * found.density[0] * speed**2 / 2
    assert drop(found, "Hose")[0] * BAR == pytest.approx(by_hand, rel=1e-7)


def test_gauge_readings_stand_for_the_load() -> None:
    # both gauges: F = (p_in A - p_out ring) 0.95 and the solver comes back to the inlet gauge with its own outlet
    bore, ring = np.pi / 4 * 0.080**2, np.pi / 4 * (0.080**2 - 0.045**2)
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["Way", "P", "Tank", 80]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]"], ["Ram", "cylinder", "Way", 80, 45]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram inlet [bar]", "Ram outlet [bar]"],
                       ["both", 1, "extend", 90, 4], ["inlet", 1, "extend", 90, None]],
    })  # fmt: skip
    force = (90 * bore - 4 * ring) * BAR * 0.95
    assert found.actuators.load[0, 0] == pytest.approx(force, rel=1e-9)
    p_b = 10 / 6400 * (50 * ring / bore) ** 2
    assert found.actuators.inlet[0, 0] / BAR == pytest.approx(90 + (p_b - 4) * ring / bore, rel=1e-8)
    assert found.actuators.inlet[0, 1] / BAR == pytest.approx(90, rel=1e-9)
    assert found.actuators.load[0, 1] == pytest.approx((90 * bore - p_b * ring) * BAR * 0.95, rel=1e-7)


def test_two_pumps_and_one_that_stands() -> None:
    # 50 and 16 L/min; a pump at rest passes nothing either way, its check or not
    found = run({
        "Pumps": [*TIGHT, ["Small", "gear", "fixed", 16, 1000, 100, "P"]],
        "Valves": [VALVE, RELIEF], "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [[*CYCLE, "Small speed [rpm]"], ["both", 1, "on", 60, 1000], ["one", 1, "on", 60, 0]],
    })  # fmt: skip
    assert found.actuators.flow[0] / L_MIN == pytest.approx([66, 50], rel=EXACT)
    assert found.pumps.shaft_power[1, 1] == 0


def test_a_plunger_comes_down_under_its_load() -> None:
    # F = -30 kN drives it: p_A = F 0.95 / A, through A-T: Q = 80 sqrt(p_A / 10)
    area = np.pi / 4 * 0.080**2
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["Way", "P", "Tank", 80]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]"], ["Ram", "plunger", "Way", 80]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram load [kN]"], ["down", 1, "retract", -30]],
    })  # fmt: skip
    p_a = 30e3 * 0.95 / area / BAR
    assert found.actuators.outlet[0, 0] / BAR == pytest.approx(p_a, rel=1e-8)
    assert np.isnan(found.actuators.inlet[0, 0])
    assert found.actuators.flow[0, 0] / L_MIN == pytest.approx(80 * np.sqrt(p_a / 10), rel=1e-8)
    assert found.load_power[0] == pytest.approx(-30e3 * found.actuators.speed[0, 0], rel=1e-9)


def test_a_load_that_outruns_its_oil_draws_a_void() -> None:
    # retracting ring side fed with 50 L/min while 40 kN pull out of the bore side through one path: the inlet falls to
    # -0.9 x 1.01325 bar; p_A A = F 0.95 + p_B ring, Q_A = 80 sqrt(p_A / 10), what is missing at B is the void's
    bore, ring = np.pi / 4 * 0.080**2, np.pi / 4 * (0.080**2 - 0.045**2)
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["Way", "P", "Tank", 80]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]"], ["Ram", "cylinder", "Way", 80, 45]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram load [kN]"], ["fall", 1, "retract", -40]],
    })  # fmt: skip
    low = -0.9 * 1.01325
    p_a = (40e3 * 0.95 + low * BAR * ring) / bore / BAR
    out = 80 * np.sqrt(p_a / 10)
    assert at(found, "Ram.B")[0] == pytest.approx(low, rel=1e-6)
    assert flow(found, "Ram.B void")[0] == pytest.approx(out * ring / bore - 50, rel=1e-6)
