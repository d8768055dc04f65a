"""Which components lie behind which: ways through the lines and valves of a machine."""

from __future__ import annotations

from collections import defaultdict
from typing import Any

import pandas as pd

from heataudit.machine import TANK, Machine, Ports


def rows_of(table: pd.DataFrame) -> list[Any]:
    """Components of a table as named tuples."""
    return list(table.itertuples(index=False))


def actuators_behind(machine: Machine, ports: Ports, valve: str) -> list[str]:
    """Actuators on the load side (From) of a valve, reached through lines and valves but not through the valve itself.

    Parameters
    ----------
    machine
        Gives lines, valves and actuators.
    ports
        Nodes of the machine.
    valve
        Name of the valve.
    """
    ways: dict[int, set[int]] = defaultdict(set)
    for table in (machine.lines, machine.valves[machine.valves["name"] != valve]):
        for start, end in zip(table["from_"], table["to"], strict=True):
            ways[ports.node(start)].add(ports.node(end))
            ways[ports.node(end)].add(ports.node(start))
    own = machine.valves[machine.valves["name"] == valve].iloc[0]
    seen = {ports.node(TANK), ports.node(own["to"])}
    waiting = [ports.node(own["from_"])]
    while waiting:
        node = waiting.pop()
        if node not in seen:
            seen.add(node)
            waiting += ways[node]
    seen -= {ports.node(TANK), ports.node(own["to"])}
    return [
        actuator.name for actuator in rows_of(machine.actuators)
        if any(label and ports.node(label) in seen for label in (actuator.port_a, actuator.port_b))
    ]  # fmt: skip
