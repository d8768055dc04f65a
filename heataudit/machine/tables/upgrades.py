"""Sheet Upgrades: changes to compare."""

from __future__ import annotations

from heataudit.machine.schema import Default, Table
from heataudit.machine.tables._columns import name, number, text

UPGRADES = Table(
    sheet="Upgrades",
    key="upgrades",
    help="Changes to compare; each row changes one cell, rows with the same name are applied together.",
    components=False,
    answered=False,
    columns=(
        name("Upgrade", "Name of the change."),
        text(header="Sheet", help="Sheet of the cell that changes.", must=True),
        text(header="Row", help="The component's name, or the item; * for every row.", must=True),
        text(header="Column", help="Its column; blank for an item."),
        text(header="New value", help="In the unit of the column that it changes.", must=True),
        number(
            header="Cost", help="In the report's currency.", at_least=0.0, bare=True, default=Default(0.0, "none given")
        ),
        text(header="Note", help="Free text."),
    ),
    example={
        "name": "Larger hose", "sheet": "Lines", "row": "Pressure hose", "column": "Size", "new_value": "DN25",
        "cost": 150,
    },
)  # fmt: skip
"""Schema of the sheet Upgrades."""
