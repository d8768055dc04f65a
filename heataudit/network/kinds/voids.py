"""Void sources: what an actuator's port draws when its oil fails to follow."""

from __future__ import annotations

from heataudit.network.branches import Branch
from heataudit.network.plant import Plant

VOID_SHARE = 0.9
"""Share [-] of the local atmosphere by which a port falls below it before a void opens."""


def make(plant: Plant) -> list[Branch]:
    """A source at each actuator port that holds it at -0.9 x the local atmosphere (gauge) and no lower."""
    branches = []
    seen = {0}
    for actuator in plant.rows_of("actuators"):
        for label in (actuator.port_a, actuator.port_b):
            if not label or plant.node(label) in seen:
                continue
            node = plant.node(label)
            seen.add(node)
            branches.append(
                Branch(f"{label} void", "void", 0, node, constant=VOID_SHARE * plant.atmosphere, low=0.0, lazy=True)
            )
    return branches
