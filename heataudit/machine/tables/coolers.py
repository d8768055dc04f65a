"""Sheet Coolers: a list to choose from."""

from __future__ import annotations

from heataudit.machine.schema import Default, Table
from heataudit.machine.tables._columns import flow, name, number, power, pressure, word

COOLERS = Table(
    sheet="Coolers",
    key="coolers",
    help="Coolers to choose from; several rows with one name are one cooler's curve over oil flow.",
    columns=(
        name("Cooler", "Name of the cooler."),
        word(header="Kind", help="What cools the oil.", words=("air", "water"), default=Default("air", "usual")),
        flow(header="Oil flow", help="Oil flow of this row.", above=0.0, must=True),
        number(
            header="Capacity", dimension="conductance", unit_name="kW/K", above=0.0, must=True,
            help="Heat per kelvin of oil inlet less coolant inlet temperature.",
        ),
        flow(header="Water flow", help="Of a water cooler.", above=0.0, must=True, only_for=("water",)),
        pressure(header="Pressure drop", help="Of the oil.", at_least=0.0, default=Default(0.0, "none given")),
        power(header="Fan power", help="Of an air cooler.", at_least=0.0, default=Default(0.0, "none given")),
        number(header="Price", help="In the report's currency.", at_least=0.0, bare=True),
    ),
    example={"name": "Cooler A", "kind": "air", "oil_flow": 60, "capacity": 0.25, "fan_power": 0.4, "price": 900},
)  # fmt: skip
"""Schema of the sheet Coolers."""
