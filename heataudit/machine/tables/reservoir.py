"""Sheet Reservoir: the tank, what gives off heat, and the cooler that is there."""

from __future__ import annotations

import pandas as pd

from heataudit.machine.schema import Default, Table, Tables
from heataudit.machine.tables._columns import (
    flag,
    flow,
    length_mm,
    number,
    power,
    reference,
    share,
    temperature,
    volume,
    word,
)

FILLING = 0.8
LENGTH_TO_WIDTH = 1.5


def _width(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return (rows["oil_volume"] / FILLING / LENGTH_TO_WIDTH) ** (1 / 3)


def _length(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return LENGTH_TO_WIDTH * _width(rows, tables)


BOX = "1.5 : 1 : 1 holding the oil volume / 0.8"

RESERVOIR = Table(
    sheet="Reservoir",
    key="reservoir",
    help="The tank, what else gives off heat, and the cooler that is there.",
    settings=True,
    components=False,
    columns=(
        volume(header="Oil volume", help="Oil in the tank.", above=0.0, must=True),
        length_mm(header="Length", help="Of the tank, inside.", above=0.0, default=Default(_length, BOX, 0.2)),
        length_mm(header="Width", help="Of the tank, inside.", above=0.0, default=Default(_width, BOX, 0.2)),
        length_mm(header="Height", help="Of the tank, inside.", above=0.0, default=Default(_width, BOX, 0.2)),
        word(
            header="Air movement", help="How the air moves round the tank.",
            words=("enclosed", "still", "draught", "fan"), default=Default("still", "usual indoors"),
        ),
        number(
            header="Heat transfer coefficient", dimension="heat transfer coefficient", unit_name="W/(m²·K)", above=0.0,
            help="Of the tank's walls; given, it goes before the calculation.",
            default=Default(None, "by air movement", shown="calculated"),
        ),
        flag(
            header="Raised", help="yes: the floor of the tank gives off heat too.",
            default=Default("no", "stands on the floor"),
        ),
        number(
            header="Steel mass", help="Steel that warms and cools with the oil.", dimension="mass", unit_name="kg",
            at_least=0.0, default=Default(0.0, "none given"),
        ),
        number(
            header="Extra surface", help="Lines, cylinders and manifolds that give off heat.", dimension="area",
            unit_name="m²", at_least=0.0, default=Default(0.0, "none given"),
        ),
        power(
            header="Other heat", help="Engine bay, submerged motor, hot mould: heat from outside the hydraulics.",
            default=Default(0.0, "none given"),
        ),
        number(
            header="Cooler capacity", dimension="conductance", unit_name="kW/K", at_least=0.0,
            help="The existing cooler: heat per kelvin of oil inlet less coolant inlet temperature.",
            default=Default(0.0, "no cooler"),
        ),
        reference(
            header="Cooler flow from", refers_to=("drives", "pumps", "lines", "valves", "sections", "actuators"),
            help="The component whose flow passes the cooler, or offline for a circuit of its own.",
            words=("offline",), default=Default("offline", "a circuit of its own"),
        ),
        flow(header="Cooler oil flow", help="Oil flow of the offline circuit.", above=0.0),
        temperature(
            header="Cooler coolant temperature", help="Temperature of the air or water that reaches the cooler.",
            at_least=-60.0, at_most=90.0,
            default=Default(None, "air-cooled", shown="ambient; design ambient for sizing"),
        ),
        share(
            header="Cooler reserve", help="For fouling, on top of what is required.", at_least=0.0, at_most=200.0,
            default=Default(10.0, "common practice"),
        ),
    ),
    example={},
)  # fmt: skip
"""Schema of the sheet Reservoir."""
