"""Lines, suction lines and drives by hand: Hooper's bends, lift, lines side by side, ratios, stopped pumps."""

from __future__ import annotations

from typing import Any

import fluids
import numpy as np
import pytest

from tests.network.small import BAR, L_MIN, PUMP, RELIEF, TIGHT, VALVE, at, drop, flow, run
from tests.workbooks import Rows

CONSUMER = ["Actuator", "Kind", "Port A", "Port B"]
CYCLE = ["Phase", "Duration [s]", "Load move", "Load load [bar]"]
LINE = ["Line", "From", "To", "Inside diameter [mm]", "Length [m]", "Bends [-]", "Bend type", "Rise [m]", "Count [-]",
        "Loss coefficient [-]", "Ends [-]", "Roughness [mm]"]  # fmt: skip
THIN = [["Item", "Value"], ["Viscosity grade", 46], ["Pressure-viscosity coefficient", 0]]


def by_hand(q: float, found: Any, bend: tuple[int, float, float], count: int, more: float) -> float:
    """Friction [bar] of a 16 mm line of 8 m, roughness 0.05 mm, without Barus."""
    speed = q * L_MIN / count / (np.pi / 4 * 0.016**2)
    reynolds = speed * 0.016 / found.viscosity[0]
    friction = fluids.friction.Churchill_1977(Re=reynolds, eD=0.05 / 16)
    n, k1, k_infinity = bend
    # two-K method: K = K1 / Re + K_inf (1 + 1 / D_inch) (Hooper 1981; `fluids.fittings.Hooper2K`)
    loss = n * fluids.fittings.Hooper2K(Di=0.016 / 0.0254, Re=reynolds, K1=k1, Kinfty=k_infinity)
    return (friction * 8 / 0.016 + loss + more) * found.density[0] * speed**2 / 2 / BAR


@pytest.mark.parametrize(
    ("kind", "k1", "k_infinity"), [("swept", 800, 0.20), ("elbow", 800, 0.40), ("drilled", 1000, 1.15)]
)
@pytest.mark.parametrize(("count", "temperature"), [(1, 40), (1, 90), (3, 40)])
def test_bends_ends_and_lines_side_by_side(
    kind: str, k1: float, k_infinity: float, count: int, temperature: int
) -> None:
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Lines": [LINE, ["Pipe", "P", "a", 16, 8, 5, kind, 0, count, 2.5, 1, 0.05]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "a", "Tank"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 100]],
    }, oil=THIN, temperature=temperature)  # fmt: skip
    assert drop(found, "Pipe")[0] == pytest.approx(by_hand(50, found, (5, k1, k_infinity), count, 2.5 + 0.5), rel=1e-8)


def test_lifting_is_work_and_not_heat() -> None:
    # 4 m up: rho g h more at the pump; heat is friction only; coming down the lift is given back
    def machine(rise: float) -> dict[str, Rows]:
        return {
            "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
            "Lines": [LINE, ["Pipe", "P", "a", 16, 8, 0, "swept", rise, 1, 0, 2, 0.05]],
            "Actuators": [CONSUMER, ["Load", "constant pressure", "a", "Tank"]],
            "Duty cycle": [CYCLE, ["on", 1, "on", 100]],
        }  # fmt: skip

    up, level, down = (run(machine(rise), oil=THIN) for rise in (4.0, 0.0, -4.0))
    lift = level.density[0] * 9.80665 * 4.0
    for found, sign in ((up, 1), (down, -1)):
        assert found.pumps.pressure[0] - level.pumps.pressure[0] == pytest.approx([sign * lift], rel=1e-6)
        assert found.lifting_power == pytest.approx([sign * lift * 50 * L_MIN], rel=1e-9)
        assert found.components.heat.sum() == pytest.approx(level.components.heat.sum(), rel=1e-8)


def test_a_return_line_may_be_drawn_empty() -> None:
    # oil falls 3 m to the tank through a wide line: the port above stands below the tank by what friction leaves
    found = run({
        "Pumps": TIGHT, "Valves": [VALVE, RELIEF],
        "Lines": [LINE, ["Back", "b", "Tank", 40, 3, 0, "swept", -3, 1, 0, 2, 0.01]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "b"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 50]],
    }, oil=THIN)  # fmt: skip
    p = at(found, "b")[0] * BAR
    assert p < 0
    assert p == pytest.approx(drop(found, "Back")[0] * BAR, abs=1e-3)
    assert found.pumps.pressure[0, 0] == pytest.approx(50 * BAR + p, rel=1e-9)


def test_a_suction_line_carries_the_slip_too() -> None:
    # Q + slip = D n passes the suction line; the drain (here its own line) carries the slip; slip and torque go with
    # outlet less inlet; power at the shaft = hydraulic power + heat
    found = run({
        "Pumps": [[*PUMP, "Suction", "Drain to"], ["Pump", "piston", "fixed", 50, 1000, 90, "P", "S", "D"]],
        "Valves": [VALVE, RELIEF],
        "Lines": [LINE, ["Suck", "Tank", "S", 25, 2, 1, "elbow", 0.5, 1, 0, 2, 0.01],
                  ["Drain", "D", "Tank", 8, 2, 0, "swept", 0, 1, 0, 2, 0.01]],
        "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [CYCLE, ["on", 1, "on", 150]],
    })  # fmt: skip
    inlet = at(found, "S")[0]
    assert inlet < 0
    assert found.pumps.inlet_pressure[0, 0] / BAR == pytest.approx(inlet, rel=1e-9)
    slip = 50 * 0.10 * (150 - inlet) / 200 / np.sqrt(46 / 32)
    assert flow(found, "Suck") == pytest.approx([50], rel=1e-9)
    assert flow(found, "Drain") == pytest.approx([slip], rel=1e-7)
    assert found.pumps.flow[0] / L_MIN == pytest.approx([50 - slip], rel=1e-7)


def test_pumps_follow_their_drives() -> None:
    # one drive, ratios 1 and 0.5 (rated 2000 and 1000 rpm): 20 + 25 L/min at 1000 rpm of it; at 1500 half as much more;
    # a pump's own speed in the cycle goes first; at no speed nothing turns
    found = run({
        "Drives": [["Drive", "Kind", "Speed [rpm]"], ["Engine", "diesel", 2000]],
        "Pumps": [["Pump", "Type", "Control", "Drive", "Speed ratio [-]", "Displacement [cm³/rev]",
                   "Volumetric efficiency [%]", "Outlet"], ["Big", "gear", "fixed", "Engine", 1, 20, 100, "P"],
                  ["Small", "gear", "fixed", "Engine", 0.5, 50, 100, "P"]],
        "Valves": [VALVE, RELIEF], "Actuators": [CONSUMER, ["Load", "constant pressure", "P", "Tank"]],
        "Duty cycle": [[*CYCLE, "Engine speed [rpm]", "Small speed [rpm]"], ["idle", 1, "on", 60, 1000, None],
                       ["work", 1, "on", 60, 1500, None], ["rated", 1, "on", 60, None, None],
                       ["own", 1, "on", 60, None, 100], ["off", 1, "on", 60, 0, None]],
    })  # fmt: skip
    assert found.pumps.flow[0] / L_MIN == pytest.approx([20, 30, 40, 40, 0], rel=3e-9)
    assert found.pumps.flow[1] / L_MIN == pytest.approx([25, 37.5, 50, 5, 0], rel=3e-9)
    assert found.pumps.speed[1] * 60 == pytest.approx([500, 750, 1000, 100, 0])
    # T = D p / 2 pi + T_loss (0.75 p / 200 + 0.25 n / n_rated r), T_loss = D 200 bar / 2 pi (1 / 0.9 - 1), at half speed
    r = np.sqrt(46 / 32)
    torque = 50e-6 * BAR / (2 * np.pi) * (60 + 200 * (1 / 0.9 - 1) * (0.75 * 0.3 + 0.25 * 0.5 * r))
    assert found.pumps.shaft_power[1, 0] == pytest.approx(torque * 2 * np.pi * 500 / 60, rel=1e-7)
    assert (found.pumps.shaft_power[:, 4] == 0).all()


def test_passive_valves_pass_both_ways() -> None:
    # one pump to port a, another to b: what runs between them turns round with the loads; a flow control limits only
    # from From to To, a throttle and a filter are the same both ways
    def machine(kind: str, here: float, there: float) -> dict[str, Rows]:
        return {
            "Pumps": [PUMP, ["One", "gear", "fixed", 40, 1000, 100, "a"], ["Two", "gear", "fixed", 40, 1000, 100, "b"]],
            "Valves": [[*VALVE, "Set flow [L/min]", "Rated viscosity [mm²/s]"],
                       ["R1", "relief", "a", "Tank", 100, 20, 300, None, None],
                       ["R2", "relief", "b", "Tank", 100, 20, 300, None, None],
                       ["Way", kind, "a", "b", 20, 10, None, 5 if kind == "flow control" else None,
                        46 if kind == "filter" else None]],
            "Actuators": [CONSUMER, ["Load", "constant pressure", "a", "Tank"], ["More", "constant pressure", "b", "Tank"]],
            "Duty cycle": [[*CYCLE, "More move", "More load [bar]"], ["on", 1, "on", here, "on", there]],
        }  # fmt: skip

    root = 20 * np.sqrt(0.5)
    for kind, ahead, back in (("throttle", root, -root), ("flow control", 5, -root), ("filter", 10, -10)):
        assert flow(run(machine(kind, 65, 60)), "Way") == pytest.approx([ahead], rel=1e-7)
        assert flow(run(machine(kind, 60, 65)), "Way") == pytest.approx([back], rel=1e-7)
