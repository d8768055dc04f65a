"""Sheet Tolerances: how well inputs are known."""

from __future__ import annotations

from heataudit.machine.schema import Default, Table
from heataudit.machine.tables._columns import flag, number, share, text

TOLERANCES = Table(
    sheet="Tolerances",
    key="tolerances",
    help="How well inputs are known: half the width of the range that holds 95 of 100.",
    components=False,
    answered=False,
    columns=(
        text(header="Sheet", help="Sheet of the input.", must=True),
        text(header="Row", help="The component's name, or the item; * for every row.", must=True),
        text(header="Column", help="Its column; blank for an item."),
        share(header="Plus-minus", help="Relative.", above=0.0),
        number(header="Plus-minus (own unit)", help="In the unit of the input.", above=0.0, bare=True),
        flag(header="Fit", help="yes: readings may adjust this input.", default=Default("no", "usual")),
    ),
    example={
        "sheet": "Pumps", "row": "Main pump", "column": "Volumetric efficiency", "plus_minus": 4, "fit": "yes",
    },
)  # fmt: skip
"""Schema of the sheet Tolerances."""
