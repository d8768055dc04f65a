"""Sheet Oil: what the label of the oil says."""

from __future__ import annotations

from heataudit.machine.schema import Default, Table
from heataudit.machine.tables._columns import number, viscosity

GRADES = (2, 3, 5, 7, 10, 15, 22, 32, 46, 68, 100, 150, 220, 320, 460, 680, 1000, 1500, 2200, 3200)
"""Viscosity grades of ISO 3448."""

OIL = Table(
    sheet="Oil",
    key="oil",
    help="What the label or the data sheet of the oil says.",
    settings=True,
    components=False,
    columns=(
        number(
            header="Viscosity grade", help="ISO 3448 (VG); gives the viscosity at 40 °C.", among=GRADES, bare=True,
            default=Default(46.0, "most used grade"),
        ),
        number(
            header="Viscosity index", help="ASTM D2270; about 100 for plain mineral oil.", above=0.0, at_most=400.0,
            bare=True, default=Default(100.0, "plain mineral oil"),
        ),
        viscosity(header="Viscosity at 40", help="Measured viscosity at 40 °C; goes before the grade.", above=0.0),
        viscosity(header="Viscosity at 100", help="Measured viscosity at 100 °C; goes before the index.", above=0.0),
        number(
            header="Density", help="Density at 15 °C.", dimension="density", unit_name="kg/m³", at_least=500.0,
            at_most=2000.0, default=Default(870.0, "mineral oil"),
        ),
        number(
            header="Specific heat", help="Of the oil.", dimension="specific heat", unit_name="kJ/(kg·K)",
            above=0.0, default=Default(None, "depends on temperature", shown="by Cragoe's formula"),
        ),
        number(
            header="Pressure-viscosity coefficient", dimension="inverse pressure", unit_name="1/GPa", at_least=0.0,
            at_most=100.0, help="How viscosity rises with pressure in lines (Barus); 0 switches it off.",
            default=Default(20.0, "mineral oil"),
        ),
        number(
            header="Bulk modulus", help="Stiffness of the oil, for what is lost when a volume is let down.",
            dimension="pressure", unit_name="GPa", above=0.0, default=Default(1.4, "mineral oil with little air"),
        ),
    ),
    example={},
)  # fmt: skip
"""Schema of the sheet Oil."""
