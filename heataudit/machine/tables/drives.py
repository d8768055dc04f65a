"""Sheet Drives: electric motors and engines that turn pumps."""

from __future__ import annotations

from heataudit.machine.schema import Default, Table
from heataudit.machine.tables._columns import efficiency, flow, name, number, power, rotation, word

ELECTRIC = ("electric",)
DIESEL = ("diesel",)

DRIVES = Table(
    sheet="Drives",
    key="drives",
    help="Electric motors and engines; without this sheet each pump has an electric motor of its own.",
    columns=(
        name("Drive", "Name of the motor or engine."),
        word(
            header="Kind", help="Electric motor or diesel engine.", words=("electric", "diesel"),
            default=Default("electric", "usual"),
        ),
        rotation(
            header="Speed", help="Speed of the shaft; the duty cycle may give another for each phase.", above=0.0
        ),
        power(header="Power limit", help="Rated power; passing it is reported.", above=0.0),
        efficiency(
            header="Efficiency", help="Of an electric motor, at load.", only_for=ELECTRIC,
            default={"electric": Default(92.0, "common practice", 0.03)},
        ),
        power(
            header="No-load power", help="What an electric motor takes when it turns without load.", at_least=0.0,
            only_for=ELECTRIC,
            default={"electric": Default(None, "common practice", shown="3 % of the drive's largest power")},
        ),
        number(
            header="Specific fuel consumption", help="Of a diesel engine, per shaft energy.", only_for=DIESEL,
            dimension="specific fuel consumption", unit_name="g/kWh", above=0.0,
            default={"diesel": Default(230.0, "common practice", 0.1)},
        ),
        flow(
            header="Idle fuel", help="What a diesel engine burns when it turns without load.", unit_name="L/h",
            at_least=0.0, only_for=DIESEL,
            default={"diesel": Default(None, "common practice", shown="10 % of the drive's largest burn")},
        ),
    ),
    example={"name": "Motor", "kind": "electric", "speed": 1480, "power_limit": 30, "efficiency": 93},
)  # fmt: skip
"""Schema of the sheet Drives."""
