from dataclasses import replace

import numpy as np
import pytest

from heataudit.audit.transport import passing
from heataudit.machine import connect
from tests.audit.fixture import BAR, L_MIN, press, solution

MACHINE, SOLUTION = press(), solution()


def test_all_heat_upstream_since_the_tank_reaches_the_return_line() -> None:
    flow, heat = passing(MACHINE, MACHINE.cycle, SOLUTION, "Return")
    own = SOLUTION.components.heat[1]
    # energy: all heat of a phase but the line's own passes it, for nothing leaves before
    assert heat == pytest.approx(SOLUTION.heat - own, rel=1e-6)
    assert flow == pytest.approx(np.array([30, 30, 40]) * L_MIN)


def test_only_the_pumps_heat_reaches_the_feed_line() -> None:
    _, heat = passing(MACHINE, MACHINE.cycle, SOLUTION, "Feed")
    assert heat == pytest.approx([1000, 500, 200], rel=1e-6)


def test_slip_takes_its_heat_to_the_drain() -> None:
    slip = 3 * L_MIN
    slipping = replace(SOLUTION, pumps=replace(SOLUTION.pumps, slip=np.full((1, 3), slip)))
    _, heat = passing(MACHINE, MACHINE.cycle, slipping, "Feed")
    torque_losses = np.array([1000, 500, 200]) - slip * np.array([60, 5, 4]) * BAR
    # exact arithmetic: 43 L/min take up what the torque loses, 40 of them go on
    assert heat == pytest.approx(torque_losses * 40 / 43, rel=1e-6)


def test_heat_parts_as_the_flow_does() -> None:
    """A quarter of the pump's oil goes over the relief valve and takes a quarter of the heat that arrives there."""
    flow = SOLUTION.components.flow.copy()
    flow[2] = 10 * L_MIN
    flow[0] = 30 * L_MIN
    parted = replace(SOLUTION, components=replace(SOLUTION.components, flow=flow))
    _, over_relief = passing(MACHINE, MACHINE.cycle, parted, "Main relief")
    _, onward = passing(MACHINE, MACHINE.cycle, parted, "Feed")
    assert over_relief == pytest.approx([250, 125, 50], rel=1e-6)
    assert onward == pytest.approx([750, 375, 150], rel=1e-6)


def test_a_closed_loop_keeps_its_heat_until_slip_takes_it_out() -> None:
    """Pump and motor in a ring: all heat made in the ring leaves with the slip, whichever way the pump turns."""
    ring = replace(
        MACHINE, pumps=MACHINE.pumps.assign(suction="Press.T"),
        lines=MACHINE.lines.assign(from_=["P1", "Press.P"], to=["Press.P", "Press.T"]),
    )  # fmt: skip
    heat = 1000.0
    for sign in (1.0, -1.0):
        flow, slip = sign * 40 * L_MIN, sign * 2 * L_MIN
        flows = np.zeros_like(SOLUTION.components.flow)
        flows[:2] = flow
        ports = connect(ring.pumps, ring.lines, ring.valves, ring.sections, ring.actuators)
        closed = replace(
            SOLUTION, ports=ports, pressure=np.zeros((len(ports), 3)),
            components=replace(SOLUTION.components, flow=flows, heat=0 * flows, return_heat=0 * flows),
            pumps=replace(
                SOLUTION.pumps, flow=np.full((1, 3), flow), slip=np.full((1, 3), slip), heat=np.full((1, 3), heat)
            ),
            actuators=replace(SOLUTION.actuators, flow=np.zeros((1, 3)), heat=np.zeros((1, 3))),
        )  # fmt: skip
        drained, carried = passing(ring, ring.cycle, closed, "Pump 1 drain")
        assert drained == pytest.approx(np.full(3, 2 * L_MIN))
        assert carried == pytest.approx(np.full(3, heat), rel=1e-6)  # energy


def test_where_nothing_flows_nothing_arrives() -> None:
    flow, heat = passing(MACHINE, MACHINE.cycle, SOLUTION, "Main relief")
    assert not flow.any()
    assert not heat.any()
