"""Sheet Actuators: cylinders, motors and other consumers."""

from __future__ import annotations

import pandas as pd

from heataudit.machine.schema import Default, Table, Tables
from heataudit.machine.tables._columns import displacement, efficiency, length_mm, name, number, port, reference, volume
from heataudit.machine.tables._columns import word as word_
from heataudit.machine.tables.lines import own_ports, own_ports_b

KINDS = ("cylinder", "plunger", "double rod", "motor", "constant pressure")
LINEAR = ("cylinder", "plunger", "double rod")
RODDED = ("cylinder", "double rod")
TWO_PORTS = ("cylinder", "double rod", "motor", "constant pressure")

MOVES = {
    "cylinder": ("hold", "extend", "retract", "press", "float"),
    "plunger": ("hold", "extend", "retract", "press", "float"),
    "double rod": ("hold", "extend", "retract", "press", "float"),
    "motor": ("hold", "forward", "reverse", "float"),
    "constant pressure": ("hold", "on", "float"),
}
"""Kind -> moves that the duty cycle may command."""

_LEAK_FREE = Default(100.0, "tight seals", 0.02)
_SEAL_FRICTION = Default(95.0, "seal friction", 0.04)


def _port_b(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return own_ports_b(rows, tables).where(rows["kind"] != "plunger", "")


ACTUATORS = Table(
    sheet="Actuators",
    key="actuators",
    help="Cylinders, motors and what else uses oil.",
    columns=(
        name("Actuator", "Name of the actuator."),
        word_(header="Kind", help="What it is.", words=KINDS, must=True),
        reference(
            header="Section", help="The section of a directional valve that commands it.", refers_to=("sections",)
        ),
        length_mm(header="Bore", help="Diameter of the piston or plunger.", above=0.0, must=True, only_for=LINEAR),
        length_mm(header="Rod", help="Diameter of the rod.", above=0.0, must=True, only_for=RODDED),
        number(
            header="Count", at_least=1.0, whole=True, default=Default(1.0, "usual"),
            help="Equal ones side by side: the load is the total, the speed each one's.",
        ),
        displacement(header="Displacement", help="Of a motor.", above=0.0, must=True, only_for=("motor",)),
        efficiency(
            header="Volumetric efficiency", help="What does not leak.", only_for=(*LINEAR, "motor"),
            default={**dict.fromkeys(LINEAR, _LEAK_FREE), "motor": Default(95.0, "usual for a motor", 0.04)},
        ),
        efficiency(
            header="Mechanical efficiency", help="What friction leaves.", only_for=(*LINEAR, "motor"),
            default={**dict.fromkeys(LINEAR, _SEAL_FRICTION), "motor": Default(92.0, "usual for a motor", 0.04)},
        ),
        volume(
            header="Trapped volume", at_least=0.0, default=Default(0.0, "none given"),
            help="Oil that is let down from pressure each time a press or a loaded move ends.",
        ),
        port(header="Port A", help="Port label.", default=Default(own_ports, "its own label", listed=False)),
        port(
            header="Port B", help="Port label.", only_for=TWO_PORTS,
            default=Default(_port_b, "its own label", listed=False),
        ),
    ),
    example={"name": "Lift cylinder", "kind": "cylinder", "section": "Lift", "bore": 80, "rod": 45},
)  # fmt: skip
"""Schema of the sheet Actuators."""
