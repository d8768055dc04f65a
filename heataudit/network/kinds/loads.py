"""The highest pressure that loads cause at a port, for valves that are set by it."""

from __future__ import annotations

from collections import defaultdict
from typing import Any

import numpy as np

from heataudit.machine import Cycle, Machine, Move, Ports, rows
from heataudit.network.linear import Array
from heataudit.network.topology import reached
from heataudit.physics.actuators import cylinder_areas, double_rod_areas, plunger_areas

FORWARD = (Move.EXTEND, Move.FORWARD, Move.ON, Move.PRESS)


def highest_load_pressure(machine: Machine, ports: Ports, node: int) -> float:
    """Highest pressure [Pa] that the loads of the duty cycle cause at a node, friction and other pressures left out.

    The actuators are those whose ports lines join to the node.
    """
    around: dict[int, set[int]] = defaultdict(set)
    for line in rows(machine.lines):
        start, end = ports.node(line.from_), ports.node(line.to)
        around[start].add(end)
        around[end].add(start)
    joined = reached(around, node)
    highest = 0.0
    for actuator in rows(machine.actuators):
        side_a = ports.node(actuator.port_a) in joined
        side_b = bool(actuator.port_b) and ports.node(actuator.port_b) in joined
        for is_here, area, supports in zip((side_a, side_b), _areas(actuator), (1.0, -1.0), strict=True):
            if is_here and area > 0:
                pushed = supports * _push(machine.cycle, actuator)
                highest = max(highest, float(np.max(pushed, initial=0.0)) / area)
    return highest


def _push(cycle: Cycle, actuator: Any) -> Array:
    """Force [N] or torque [N·m] against extending or turning forward, of every phase, 0 where none is typed."""
    load = np.nan_to_num(cycle.value(actuator.name, "load"))
    moves = cycle.moves.get(actuator.name, np.zeros(len(cycle), np.int8))
    forward = np.isin(moves, [int(m) for m in (*FORWARD, Move.FLOAT)])
    areas = np.where(forward, *_areas(actuator))
    load = load + np.nan_to_num(cycle.value(actuator.name, "load_pressure")) * areas
    return np.where(forward, load, -load)


def _areas(actuator: Any) -> tuple[float, float]:
    """Areas [m²; m³/rad of a motor] at A and at B."""
    if actuator.kind == "motor":
        per_radian = actuator.displacement * actuator.count / (2.0 * np.pi)
        return per_radian, per_radian
    if actuator.kind == "constant pressure":
        return 1.0, 1.0
    if actuator.kind == "plunger":
        return float(plunger_areas(actuator.bore, actuator.count)[0]), 0.0
    areas = cylinder_areas if actuator.kind == "cylinder" else double_rod_areas
    first, second = areas(actuator.bore, actuator.rod, actuator.count)
    return float(first), float(second)
