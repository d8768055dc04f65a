"""Sheet Lines: hoses, tubes and drillings."""

from __future__ import annotations

import numpy as np
import pandas as pd

from heataudit.machine.schema import Default, Table, Tables
from heataudit.machine.sizes import inside_diameter
from heataudit.machine.tables._columns import length_m, length_mm, name, number, port, size, word


def own_ports(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    """A component's own port A."""
    return rows["name"] + ".A"


def own_ports_b(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    """A component's own port B."""
    return rows["name"] + ".B"


def _diameter(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    def read(text: str) -> float:
        try:
            return inside_diameter(text)
        except ValueError:
            return np.nan

    return rows["size"].map(read).astype(float)


LINES = Table(
    sheet="Lines",
    key="lines",
    help="Hoses, tubes and drillings that connect ports.",
    columns=(
        name("Line", "Name of the line."),
        port(header="From", help="Port label.", default=Default(own_ports, "its own label", listed=False)),
        port(header="To", help="Port label.", default=Default(own_ports_b, "its own label", listed=False)),
        word(
            header="Service", help="Picks the guideline for velocity.",
            words=("pressure", "return", "suction", "drain"), default=Default("pressure", "usual"),
        ),
        size(header="Size", help="-8 (dash size, 1/16 in), DN20, or 25x3 (tube, outside x wall in mm)."),
        length_mm(
            header="Inside diameter", help="Instead of Size.", above=0.0, must=True, instead="size",
            missing="give it, or a Size", default=Default(_diameter, "by Size {size}"),
        ),
        length_m(header="Length", help="Length of the line.", above=0.0, must=True),
        number(header="Bends", help="Number of 90° bends.", at_least=0.0, default=Default(0.0, "none given")),
        word(
            header="Bend type", help="How the bends are made.", words=("swept", "elbow", "drilled"),
            default=Default("swept", "usual"),
        ),
        number(header="Ends", help="Number of end fittings.", at_least=0.0, default=Default(2.0, "one at each end")),
        number(
            header="Loss coefficient", help="Of what else is in the line, referred to its bore.", at_least=0.0,
            default=Default(0.0, "none given"),
        ),
        length_mm(
            header="Roughness", help="Of the wall.", at_least=0.0, default=Default(0.01, "drawn tube or hose", 0.5)
        ),
        length_m(header="Rise", help="Height of To above From.", default=Default(0.0, "level")),
        number(
            header="Count", help="Equal lines side by side.", at_least=1.0, whole=True, default=Default(1.0, "usual")
        ),
    ),
    example={"name": "Pressure hose", "from_": "P1", "to": "Main.P", "size": "DN20", "length": 2.5, "bends": 2},
)  # fmt: skip
"""Schema of the sheet Lines."""
