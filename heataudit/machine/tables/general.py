"""Sheet Machine: what is audited, where, for how many hours and at what price."""

from __future__ import annotations

import pandas as pd

from heataudit.machine.schema import Default, Table, Tables
from heataudit.machine.tables._columns import number, temperature, text, word

DESIGN_MARGIN_K = 10.0
HIGHEST_ELECTRIC_C = 60.0
HIGHEST_DIESEL_C = 80.0


def _ambient(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["ambient_temperature"]


def _design_ambient(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["ambient_temperature"] + DESIGN_MARGIN_K


def _highest(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    diesel = (tables["drives"]["kind"] == "diesel").any()
    celsius = HIGHEST_DIESEL_C if diesel else HIGHEST_ELECTRIC_C
    return pd.Series(GENERAL["highest_oil_temperature"].unit.to_si(celsius), index=rows.index)


GENERAL = Table(
    sheet="Machine",
    key="general",
    help="What is audited, where it stands, how many hours it works and what energy costs.",
    settings=True,
    components=False,
    columns=(
        text(header="Machine", help="Title of the report.", must=True),
        text(header="Site", help="Where the machine stands; free text."),
        text(header="Prepared by", help="Who filled in this workbook; free text."),
        word(
            header="Report units", help="Units of the report.", words=("SI", "US"),
            default=Default("SI", "usual"),
        ),
        temperature(
            header="Ambient temperature", help="Typical air temperature over the year, for energy figures.",
            at_least=-60.0, at_most=70.0, default=Default(25.0, "common practice"),
        ),
        temperature(
            header="Design ambient temperature", help="Hottest air temperature expected, for the cooler.",
            at_least=-60.0, at_most=70.0, default=Default(_design_ambient, "ambient + 10 K"),
        ),
        temperature(
            header="Start temperature", help="Oil temperature at a cold start.", at_least=-60.0, at_most=120.0,
            default=Default(_ambient, "ambient"),
        ),
        temperature(
            header="Oil temperature", help="The audit is made at it, where it is given.", at_least=-60.0, at_most=150.0,
            default=Default(None, "solved", shown="the temperature at which heat in and out agree"),
        ),
        temperature(
            header="Highest oil temperature", help="The cooler must hold it.", at_least=0.0, at_most=150.0,
            default=Default(_highest, "60 °C with electric drives, 80 °C with a diesel engine"),
        ),
        number(
            header="Altitude", help="Height above sea level; sets air density and local atmosphere (ISO 2533).",
            dimension="length", unit_name="m", at_least=-500.0, at_most=11000.0, default=Default(0.0, "sea level"),
        ),
        number(
            header="Operating hours", help="Hours a year in which the duty cycle runs.", dimension="hours per year",
            unit_name="h/yr", above=0.0, at_most=8784.0, default=Default(2000.0, "one shift"),
        ),
        number(
            header="Energy price", at_least=0.0, bare=True,
            help="Price of a kWh (electric drives) or of a litre (diesel). Blank: no money in the report.",
        ),
        text(header="Currency", help="Currency of prices and costs.", default=Default("EUR", "usual")),
        number(
            header="CO2 factor", at_least=0.0, bare=True,
            help="CO2 in kg per kWh (electric drives) or per litre (diesel). Blank: no CO2 in the report.",
        ),
    ),
    example={},
)  # fmt: skip
"""Schema of the sheet Machine."""
