"""Sheet Readings: what was measured on the machine."""

from __future__ import annotations

from heataudit.machine.schema import Table
from heataudit.machine.tables._columns import number, text, word

QUANTITIES = {
    "pressure": ("pressure",),
    "flow": ("flow",),
    "speed": ("speed", "rotational speed"),
    "shaft power": ("power",),
    "electrical power": ("power",),
    "drain flow": ("flow",),
    "oil temperature": ("temperature",),
    "heating rate": ("temperature rate",),
}
"""Quantity -> what its unit may measure."""

READINGS = Table(
    sheet="Readings",
    key="readings",
    help="What was measured on the machine, to be set beside what is computed.",
    components=False,
    answered=False,
    columns=(
        text(header="Phase", help="Blank for the oil temperature and the heating rate."),
        text(header="Where", help="A port label, a component, or Tank."),
        word(header="Quantity", help="What was measured.", words=tuple(QUANTITIES), must=True),
        number(header="Value", help="What was read.", bare=True, must=True),
        text(header="Unit", help="Blank: bar, L/min, mm/s or rpm, kW, °C, K/min."),
        number(header="Plus-minus", help="Half the width of the range, in the same unit.", at_least=0.0, bare=True),
    ),
    example={"phase": "Lift", "where": "P1", "quantity": "pressure", "value": 158, "unit": "bar", "plus_minus": 2},
)  # fmt: skip
"""Schema of the sheet Readings."""
