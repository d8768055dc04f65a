"""Controls, pilots, compensators and feeds, whose laws reach over other components: each with its algebra by hand."""

from __future__ import annotations

import numpy as np
import pytest

from heataudit.network.solution import State
from tests.network.small import BAR, L_MIN, PUMP, RELIEF, TIGHT, VALVE, at, drop, flow, run
from tests.workbooks import Rows

BORE, RING = np.pi / 4 * 0.080**2, np.pi / 4 * (0.080**2 - 0.040**2)
PHI = RING / BORE
RAMS: Rows = [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Mechanical efficiency [%]"],
              ["Heavy", "cylinder", "S1", 80, 40, 100], ["Light", "cylinder", "S2", 80, 40, 100]]  # fmt: skip
TWO: Rows = [["Phase", "Duration [s]", "Heavy move", "Heavy load [bar]", "Heavy speed [mm/s]", "Light move",
              "Light load [bar]", "Light speed [mm/s]"],
             ["one", 1, "extend", 100, 100, None, None, None], ["two", 1, "extend", 100, 100, "extend", 50, 100],
             ["too much", 1, "extend", 100, 300, "extend", 50, 300], ["stalled", 1, "extend", 300, 100, "extend", 50, 100],
             ["idle", 1, None, None, None, None, None, None]]  # fmt: skip
ASKED = 0.1 * BORE / L_MIN
"""Flow [L/min] into a ram at 100 mm/s."""


def sensing(control: str, margin: float, *, limit: float | None = None) -> Rows:
    """A tight pump of 100 L/min that senses the load."""
    return [[*PUMP, "Setting [bar]", "Margin [bar]", "Power limit [kW]"],
            ["Pump", "piston", control, 50, 2000, 100, "V.P", 250, margin, limit]]  # fmt: skip


def bank(compensator: str) -> Rows:
    """Two sections of 80 L/min at 10 bar."""
    return [["Section", "Bank", "P-A [L/min]", "Compensator", "Port T"],
            ["S1", "V", 80, compensator, "Tank"], ["S2", "V", 80, compensator, "Tank"]]  # fmt: skip


def test_load_sensing_keeps_its_margin_over_the_highest_load() -> None:
    # an individually compensated spool stands at x = Q / 80; its return edge then drops 10 phi² bar, so the working port
    # stands at 100 + 10 phi³ and the pump 20 bar above it; stalled: the setting; idle: the margin
    found = run({"Pumps": sensing("load sensing", 20), "Directional valves": bank("individual"), "Actuators": RAMS,
                 "Duty cycle": TWO})  # fmt: skip
    port = 100 + 10 * PHI**3
    assert found.pumps.pressure[0, [0, 1, 3, 4]] / BAR == pytest.approx([port + 20, port + 20, 250, 20], rel=1e-7)
    assert found.pumps.flow[0, [0, 1, 3, 4]] / L_MIN == pytest.approx([ASKED, 2 * ASKED, ASKED, 0], rel=1e-7, abs=1e-6)
    assert found.actuators.state[0].tolist() == [State.MOVING, State.MOVING, State.SLOW, State.STALLED, State.HELD]
    # compensated flow is independent of load: the light ram keeps its speed beside the heavy and the stalled one
    assert found.actuators.speed[1, [1, 3]] == pytest.approx([0.1, 0.1], rel=1e-8)
    assert found.actuators.inlet[0, 3] / BAR == pytest.approx(250, rel=1e-7)


def test_short_of_flow_individual_compensators_starve_the_highest_load() -> None:
    # 90.5 L/min asked, 80 is each one's most: the light one takes its 80, the heavy one the 20 that are left
    found = run({"Pumps": sensing("load sensing", 20), "Directional valves": bank("individual"), "Actuators": RAMS,
                 "Duty cycle": TWO})  # fmt: skip
    assert found.actuators.flow[:, 2] / L_MIN == pytest.approx([20, 80], rel=1e-7)


def test_short_of_flow_flow_sharing_keeps_the_ratio() -> None:
    # both give up the same share: 50 and 50, and the pump stands 10 (50 / 80)² above the heavy ram's port; with the
    # heavy ram stalled its share goes to the light one
    found = run({"Pumps": sensing("load sensing", 20), "Directional valves": bank("flow sharing"), "Actuators": RAMS,
                 "Duty cycle": TWO})  # fmt: skip
    assert found.actuators.flow[:, 2] / L_MIN == pytest.approx([50, 50], rel=1e-5)
    out = 10 * (50 * PHI / 80) ** 2
    port = 100 + PHI * out
    assert found.pumps.pressure[0, 2] / BAR == pytest.approx(port + 10 * (50 / 80) ** 2, rel=1e-5)
    assert found.actuators.speed[1, 3] == pytest.approx(0.1, rel=1e-7)


def test_a_speed_controlled_pump_turns_as_fast_as_needed() -> None:
    # margin 10; the displacement stays full and n = Q / D; shaft power p Q and the losses at that speed
    found = run({"Pumps": sensing("speed controlled", 10), "Directional valves": bank("individual"), "Actuators": RAMS,
                 "Duty cycle": TWO[:2]})  # fmt: skip
    assert found.pumps.pressure[0, 0] / BAR == pytest.approx(100 + 10 * PHI**3 + 10, rel=1e-7)
    assert found.pumps.speed[0, 0] == pytest.approx(ASKED * L_MIN / 50e-6, rel=1e-7)
    assert found.pumps.displacement[0, 0] == pytest.approx(1)


def test_a_power_limit_is_a_torque_limit() -> None:
    # 10 kW at 2000 rpm: D dp <= 10 kW / n. Light ram at its most, 80 L/min: dp = 600 x 10 / 80 = 75 bar, for the heavy
    # one too little. At half speed the same torque: 600 x 5 kW / 50 L/min of displacement flow would be 60 bar.
    found = run({"Pumps": sensing("load sensing", 20, limit=10), "Directional valves": bank("individual"),
                 "Actuators": RAMS, "Duty cycle": [TWO[0], TWO[3]]})  # fmt: skip
    assert found.pumps.flow[0, 0] / L_MIN == pytest.approx(80, rel=1e-7)
    assert found.pumps.pressure[0, 0] / BAR == pytest.approx(75, rel=1e-7)
    assert found.actuators.state[:, 0].tolist() == [State.STALLED, State.SLOW]
    half = run({"Pumps": sensing("load sensing", 20, limit=10), "Directional valves": bank("none"), "Actuators": RAMS,
                "Duty cycle": [[*TWO[0][:4], "Pump speed [rpm]"], ["half", 1, "extend", 100, 1000]]})  # fmt: skip
    swept = half.pumps.displacement[0, 0] * 50  # L/min at 1000 rpm
    assert half.pumps.pressure[0, 0] / BAR * swept == pytest.approx(600 * 5, rel=1e-7)


LOOP: Rows = [["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Setting [bar]", "Outlet", "Suction"],
              ["Travel", "piston", "set displacement", 60, 2000, 350, "LA", "LB"]]  # fmt: skip


def test_a_closed_loop_drives_reverses_and_brakes() -> None:
    # dp = 2 pi T / (D eta_m) driving, 2 pi T eta_m / D braking; the low side stands at the charge pressure of 20 bar;
    # slip from the high side: D n (1 - 0.95) dp / 200 / r, r = (46 / 32)^0.5; motor n = Q eta_v / D, driven Q / (eta_v D)
    found = run({
        "Pumps": LOOP,
        "Valves": [VALVE, ["Ahead", "relief", "LA", "LB", 100, 20, 350], ["Astern", "relief", "LB", "LA", 100, 20, 350]],
        "Actuators": [["Actuator", "Kind", "Displacement [cm³/rev]", "Port A", "Port B"], ["Wheel", "motor", 80, "LA", "LB"]],
        "Duty cycle": [["Phase", "Duration [s]", "Wheel move", "Wheel load [N·m]", "Travel displacement [%]"],
                       ["drive", 1, "forward", 200, 100], ["back", 1, "reverse", 200, -50],
                       ["brake", 1, "forward", -100, 50]],
    })  # fmt: skip
    driving, braking = (2 * np.pi * t / 80e-6 / BAR for t in (200 / 0.92, 100 * 0.92))
    assert at(found, "LA") == pytest.approx([20 + driving, 20, 20], rel=1e-6)
    assert at(found, "LB") == pytest.approx([20, 20 + driving, 20 + braking], rel=1e-6)
    slip = 120 * 0.05 * driving / 200 / (46 / 32) ** 0.5
    slip_braking = 120 * 0.05 * braking / 200 / (46 / 32) ** 0.5
    flows = np.array([120 - slip, 60 - slip, 60 + slip_braking * 0])
    speeds = flows[:2] * L_MIN * 0.95 / 80e-6
    assert found.actuators.speed[0, :2] == pytest.approx(speeds, rel=1e-6)
    # braking: the pump takes in 60 L/min from the high side LB, which also slips and is fed by the motor
    assert found.actuators.flow[0, 2] / L_MIN == pytest.approx(60 + slip_braking, rel=1e-6)
    assert found.shaft_power[2] < 0 < found.shaft_power[0]


def way(rated: float = 80, regeneration: str = "none") -> Rows:
    """One closed-centre section."""
    return [["Section", "P-A [L/min]", "Port P", "Port T", "Regeneration"], ["S1", rated, "P", "Tank", regeneration]]


ONE: Rows = RAMS[:2]
PILOTED = [*VALVE, "Pilot from", "Pilot ratio [-]", "Vented", "Set flow [L/min]", "Port 3"]


def piloted(*valves: list[object]) -> Rows:
    """Valves with their pilots, and the relief."""
    return [PILOTED, [*RELIEF, *[None] * 5], *([*valve, *[None] * (12 - len(valve))] for valve in valves)]


@pytest.mark.parametrize(("vented", "opening"), [(None, 150), ("yes", 150), (None, None)])
def test_a_counterbalance_valve_lowers_as_its_pilot_asks(vented: str | None, opening: float | None) -> None:
    # retracting with 40 kN that pull: p_B A_B - p_A A_A = -F; the valve: p_A = p0 + (1 + R) p_T - R p_B, vented without
    # p_T's part; p_T = 10 (Q_A / 80)², Q_A = 50 / phi; blank: p0 = 1.3 F / A_A (all loads are these 40 kN)
    found = run({
        "Pumps": TIGHT,
        "Valves": piloted(["Holding", "counterbalance", "Heavy.A", "S1.A", 80, 5, opening, "Heavy.B", 4, vented]),
        "Directional valves": way(), "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]", "Heavy speed [mm/s]"],
                       ["down", 1, "retract", -40, None], ["up", 1, "extend", 40, 50]],
    })  # fmt: skip
    p0 = 1.3 * 40e3 / BORE / BAR if opening is None else opening
    behind = 10 * (50 / PHI / 80) ** 2
    set_at = p0 + (0 if vented else 5 * behind)
    # p_B = phi' p_A - F / A_B with phi' = A_A / A_B = 1 / phi
    p_b = (set_at / PHI - 40e3 / RING / BAR) / (1 + 4 / PHI)
    assert at(found, "Heavy.B")[0] == pytest.approx(p_b, rel=1e-6)
    assert at(found, "Heavy.A")[0] == pytest.approx(set_at - 4 * p_b, rel=1e-6)
    # raising, the oil passes as through a check: 5 (Q / 80)²
    assert drop(found, "Holding")[1] == pytest.approx(-5 * (50e-3 * BORE / L_MIN / 80) ** 2, rel=1e-6)


def test_a_pilot_operated_check_holds_until_it_is_lifted() -> None:
    # held load p_A = (p_B A_B + F) / A_A; lifted while 3 p_B >= p_A: with the pump on relief it is; without pressure not
    found = run({
        "Pumps": TIGHT,
        "Valves": piloted(["Lock", "pilot-operated check", "S1.A", "Heavy.A", 80, 5, None, "Heavy.B", 3],
                          ["Weak", "relief", "Heavy.B", "Tank", 100, 1, 20]),
        "Directional valves": way(), "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]"], ["light", 1, "retract", -20],
                       ["heavy", 1, "retract", -60]],
    })  # fmt: skip
    # 20.5 bar at most at B: light p_A = 20.5 phi + 39.8 = 55 < 61.5, lifted; heavy 15 + 119 = 135 > 61.5, shut
    assert found.actuators.state[0].tolist() == [State.MOVING, State.STALLED]
    assert flow(found, "Lock")[0] < 0
    assert flow(found, "Lock")[1] == 0


def test_a_low_pressure_pump_unloads() -> None:
    # unloading opens at 60 bar on P: below it 60 L/min drive the ram, at it both pumps share so that P stays at 60,
    # above it the low pump runs to tank at 5 (50 / 80)² bar
    found = run({
        "Pumps": [PUMP, ["High", "gear", "fixed", 10, 1000, 100, "P"], ["Low", "gear", "fixed", 50, 1000, 100, "L"]],
        "Valves": piloted(["Return", "check", "L", "P", 80, 5, 0],
                          ["Unload", "unloading", "L", "Tank", 80, 5, 60, "P"]),
        "Directional valves": way(), "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]"], ["fast", 1, "extend", 10],
                       ["between", 1, "extend", 29.8], ["press", 1, "extend", 80]],
    })  # fmt: skip
    assert found.actuators.flow[0, [0, 2]] / L_MIN == pytest.approx([60, 10], rel=1e-7)
    assert at(found, "P")[1] == pytest.approx(60, rel=1e-6)
    assert at(found, "L")[2] == pytest.approx(5 * (50 / 80) ** 2, rel=1e-6)
    # between: what the ram takes at 60 bar, 60 - 29.8 kN / A = k (Q² + phi³ Q²), k = 10 / 80²
    spare = 60 - 29.8e3 / BORE / BAR
    assert found.actuators.flow[0, 1] / L_MIN == pytest.approx(np.sqrt(spare / (10 / 6400 * (1 + PHI**3))), rel=1e-5)


def test_sequence_and_reducing_valves_hold_their_side() -> None:
    # sequence keeps P at 100 or more; reducing keeps b at 50 or less: 50 - 30 bar over a throttle of 20 L/min at 20 bar
    found = run({
        "Pumps": TIGHT,
        "Valves": piloted(["First", "sequence", "P", "a", 80, 5, 100], ["Reduced", "reducing", "P", "b", 80, 5, 50],
                          ["Throttle", "throttle", "c", "Tank", 20, 20]),
        "Actuators": [["Actuator", "Kind", "Port A", "Port B"], ["One", "constant pressure", "a", "Tank"],
                      ["Two", "constant pressure", "b", "c"]],
        "Duty cycle": [["Phase", "Duration [s]", "One move", "One load [bar]", "Two move", "Two load [bar]"],
                       ["both", 1, "on", 30, "on", 30], ["blocked", 1, "on", 30, "on", 70],
                       ["low", 1, None, None, "on", 1]],
    })  # fmt: skip
    assert at(found, "P")[:2] == pytest.approx([100, 100], rel=1e-6)
    assert at(found, "b")[0] == pytest.approx(50, rel=1e-6)
    assert found.actuators.flow[1, 0] / L_MIN == pytest.approx(20, rel=1e-6)
    assert found.actuators.state[1, 1] == State.STALLED
    assert found.actuators.flow[0, 1] / L_MIN == pytest.approx(50, rel=1e-6)
    # alone with 1 bar: 50 - 1 = 49 bar over the throttle, 20 sqrt(49 / 20) L/min, the rest over the relief
    assert found.actuators.flow[1, 2] / L_MIN == pytest.approx(20 * np.sqrt(49 / 20), rel=1e-6)


def test_priority_serves_its_first_consumer() -> None:
    # 20 L/min first; first at 100 bar and surplus at 30: p_From = 100 + 5 (20 / 80)²; blocked: all to Port 3;
    # surplus blocked: the rest over the relief
    found = run({
        "Pumps": TIGHT,
        "Valves": piloted(["Steering first", "priority", "P", "a", 80, 5, None, None, None, None, 20, "b"]),
        "Actuators": [["Actuator", "Kind", "Port A", "Port B"], ["First", "constant pressure", "a", "Tank"],
                      ["Rest", "constant pressure", "b", "Tank"]],
        "Duty cycle": [["Phase", "Duration [s]", "First move", "First load [bar]", "Rest move", "Rest load [bar]"],
                       ["hard", 1, "on", 100, "on", 30], ["easy", 1, "on", 30, "on", 100],
                       ["blocked", 1, None, None, "on", 30], ["no rest", 1, "on", 30, None, None]],
    })  # fmt: skip
    # pressures that pilots compare are found to 3 Pa, see DEVELOPERS.md; here that is 2e-5 L/min
    assert found.actuators.flow[0] / L_MIN == pytest.approx([20, 20, 0, 20], abs=1e-4)
    assert found.actuators.flow[1] / L_MIN == pytest.approx([30, 30, 50, 0], abs=1e-4)
    wide = 5 / 80**2
    expected = [100 + wide * 400, 100 + wide * 900, 30 + wide * 2500, 206]
    assert at(found, "P") == pytest.approx(expected, rel=1e-6)


def test_a_three_way_compensator_keeps_a_fixed_pump_at_the_load() -> None:
    # signal + 12 bar; idle: 12 bar; a section asks for more than there is: the valve shuts
    found = run({
        "Pumps": TIGHT,
        "Valves": piloted(["Compensator", "load-sensing unloading", "P", "Tank", 80, 5, 12, "V"]),
        "Directional valves": [["Section", "Bank", "P-A [L/min]", "Compensator", "Port T", "Port P"],
                               ["S1", "V", 80, "individual", "Tank", "P"]],
        "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [bar]", "Heavy speed [mm/s]"],
                       ["one", 1, "extend", 100, 100], ["idle", 1, None, None, None], ["all", 1, "extend", 100, 200]],
    })  # fmt: skip
    assert at(found, "P")[:2] == pytest.approx([100 + 10 * PHI**3 + 12, 12], rel=1e-6)
    assert flow(found, "Compensator") == pytest.approx([50 - ASKED, 50, 0], rel=1e-6, abs=1e-6)
    assert found.actuators.flow[0, 2] / L_MIN == pytest.approx(50, rel=1e-6)


def test_regeneration_speeds_up_by_the_rod() -> None:
    # B's oil joins P: the ram takes Q A / (A - ring); v = Q / A_rod
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF], "Directional valves": way(400, "extend"),
        "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]"], ["out", 1, "extend", 2]],
    })  # fmt: skip
    assert found.actuators.speed[0, 0] == pytest.approx(50 * L_MIN / (BORE - RING), rel=1e-7)


def test_tandem_and_series_feeds() -> None:
    # one path 80 L/min at 10 bar everywhere: k = 10 / 6400. Tandem: the first takes all of P, the second is cut off;
    # alone it stands behind one gallery part. Series: the first's return feeds the second.
    k, moves = 10 / 6400, ["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]", "Light move", "Light load [kN]"]
    cycle: Rows = [moves, ["both", 1, "extend", 20, "extend", 10], ["second", 1, None, None, "extend", 10],
                   ["neutral", 1, None, None, None, None]]  # fmt: skip
    load = {name: force * 1e3 / BORE / BAR for name, force in (("Heavy", 20), ("Light", 10))}

    def feeding(feed: str) -> object:
        return run({
            "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
            "Directional valves": [["Section", "Bank", "Feed", "P-A [L/min]", "Centre", "Port P", "Port T"],
                                   ["S1", "B", feed, 80, "open", "P", "Tank"], ["S2", "B", feed, 80, "open", "P", "Tank"]],
            "Actuators": RAMS, "Duty cycle": cycle,
        })  # fmt: skip

    tandem, series = feeding("tandem"), feeding("series")
    one = load["Heavy"] + k * 2500 * (1 + PHI**3)
    two = load["Light"] + k * 2500 * (1 + PHI**3) + k * 2500
    assert at(tandem, "P") == pytest.approx([one, two, 2 * k * 2500], rel=1e-7)
    assert tandem.actuators.state[1].tolist() == [State.STALLED, State.MOVING, State.HELD]
    # series: the second takes 50 phi; its port P stands at its own need, which is the back pressure of the first
    q = 50 * PHI
    behind = load["Light"] + k * q**2 * (1 + PHI**3)
    assert series.actuators.flow[1, 0] / L_MIN == pytest.approx(q, rel=1e-7)
    out = k * q**2 + behind
    assert at(series, "P")[0] == pytest.approx(load["Heavy"] + PHI * out + k * 2500, rel=1e-7)


def test_float_joins_both_sides_to_the_return() -> None:
    # without a load it stands; 2 kN that pull it out: p_A A - p_B ring = -F with Q_B = phi Q_A through B-T and Q_A drawn
    # through A-T: -k Q² - phi k phi² Q² = -F / A
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF], "Directional valves": way(), "Actuators": ONE,
        "Duty cycle": [["Phase", "Duration [s]", "Heavy move", "Heavy load [kN]"], ["free", 1, "float", None],
                       ["pulled", 1, "float", -0.2]],
    })  # fmt: skip
    assert found.actuators.state[0].tolist() == [State.FLOATING, State.FLOATING]
    q = np.sqrt(0.2e3 / BORE / BAR / (10 / 6400 * (1 + PHI**3)))
    assert found.actuators.flow[0] / L_MIN == pytest.approx([0, q], rel=1e-7)
    assert found.pumps.pressure[0] / BAR == pytest.approx([210, 210], rel=1e-8)  # P is shut


def test_slip_as_it_was_measured_and_a_drain_line() -> None:
    # 46 of 50 L/min at 160 bar and 1000 rpm on 32 mm²/s: slip 4 x p / 160 / r; through a drain line of 2 m x 8 mm it
    # raises the case, laminar by hand: 128 mu L Q / (pi D⁴) and the ends
    found = run({
        "Pumps": [["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Outlet", "Drain to",
                   "Test flow [L/min]", "Test pressure [bar]", "Test speed [rpm]"],
                  ["Pump", "piston", "fixed", 50, 1000, "P", "D", 46, 160, 1000]],
        "Lines": [["Line", "From", "To", "Service", "Inside diameter [mm]", "Length [m]"],
                  ["Drain", "D", "Tank", "drain", 8, 2]],
        "Valves": [VALVE, RELIEF],
        "Actuators": [["Actuator", "Kind", "Port A", "Port B"], ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [["Phase", "Duration [s]", "Load move", "Load load [bar]"], ["on", 1, "on", 120]],
    }, oil=[["Item", "Value", "Unit"], ["Viscosity grade", 46, None], ["Pressure-viscosity coefficient", 0, "1/GPa"]])  # fmt: skip
    slip = 4 * 120 / 160 / (46 / 32) ** 0.5
    assert flow(found, "Drain")[0] == pytest.approx(slip, rel=1e-6)
    mu, q = found.viscosity[0] * found.density[0], slip * L_MIN
    laminar = 128 * mu * 2 * q / (np.pi * 0.008**4) + found.density[0] / 2 * (q / (np.pi / 4 * 0.008**2)) ** 2
    assert at(found, "D")[0] * BAR == pytest.approx(laminar, rel=1e-3)  # Churchill is 64 / Re within that here
