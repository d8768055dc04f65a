"""Sheet Directional valves: spool sections, alone or in banks."""

from __future__ import annotations

import numpy as np
import pandas as pd

from heataudit.machine.schema import Column, Default, Table, Tables
from heataudit.machine.sizes import path_flow
from heataudit.machine.tables._columns import flow, name, port, pressure, share, size, text, word

OPEN = ("open",)


def _own_name(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["name"]


def _bank_p(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["bank"] + ".P"


def _bank_t(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["bank"] + ".T"


def _own_a(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["name"] + ".A"


def _own_b(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["name"] + ".B"


def _beyond(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    """The power-beyond outlet that another section of the bank names, else the return port of the bank's last."""
    bank = rows["bank"].str.casefold()
    named = rows["port_n"].replace("", np.nan).groupby(bank).transform("first")
    return named.fillna(rows.groupby(bank)["port_t"].transform("last"))


def _by_size(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    def read(text: str) -> float:
        try:
            return path_flow(text)
        except ValueError:
            return np.nan

    return rows["size"].map(read).astype(float)


def _as_p_a(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["p_a"]


def _path(header: str, help: str) -> Column:
    return flow(header=header, help=help, at_least=0.0, default=Default(_as_p_a, "as P-A", 0.3))


SECTIONS = Table(
    sheet="Directional valves",
    key="sections",
    help="One row for each spool section; sections with the same Bank share its ports.",
    columns=(
        name("Section", "Name of the spool section."),
        text(
            header="Bank", help="Sections with the same bank share <Bank>.P and <Bank>.T.",
            default=Default(_own_name, "a valve of its own", listed=False),
        ),
        word(
            header="Feed", help="How the section is fed.", words=("parallel", "tandem", "series"),
            default=Default("parallel", "usual"),
        ),
        port(header="Port P", help="Port label.", default=Default(_bank_p, "the bank's label", listed=False)),
        port(header="Port T", help="Port label.", default=Default(_bank_t, "the bank's label", listed=False)),
        port(header="Port A", help="Port label.", default=Default(_own_a, "its own label", listed=False)),
        port(header="Port B", help="Port label.", default=Default(_own_b, "its own label", listed=False)),
        port(
            header="Port N", help="End of the open-centre gallery; another label than Port T is a power-beyond outlet.",
            default=Default(_beyond, "the bank's label", listed=False),
        ),
        size(header="Size", help="NG6, NG10, NG16 or NG25; gives P-A where that is blank."),
        pressure(
            header="Rated drop", help="Drop over one path at the flows given here.", above=0.0,
            default=Default(10.0, "usual, per path"),
        ),
        flow(
            header="P-A", help="Flow through the fully open path at the rated drop; 0: there is no such path.",
            at_least=0.0, must=True, missing="give it, or a Size such as NG10", instead="size",
            default=Default(_by_size, "by Size {size}", 0.3),
        ),
        _path("P-B", "As P-A, from P to B."),
        _path("A-T", "As P-A, from A to T."),
        _path("B-T", "As P-A, from B to T."),
        word(
            header="Centre", words=("closed", "open"), default=Default("closed", "usual for a single valve"),
            help="open: in neutral the pump's oil passes through a gallery.",
        ),
        flow(
            header="Bypass", help="Gallery flow of this section in neutral at the rated drop.", above=0.0, by="centre",
            only_for=OPEN, default={"open": Default(_as_p_a, "as P-A", 0.3)},
        ),
        share(
            header="Bypass closed at", help="Opening at which the gallery is shut.", above=0.0, at_most=100.0,
            by="centre", only_for=OPEN, default={"open": Default(75.0, "usual", 0.15)},
        ),
        word(
            header="Compensator", help="What keeps the flow independent of the load.",
            words=("none", "individual", "flow sharing"),
            default=Default("none", "usual"),
        ),
        word(
            header="Regeneration", help="extend: extending, oil from the rod side joins the feed.",
            words=("none", "extend"), default=Default("none", "usual"),
        ),
    ),
    example={"name": "Lift", "bank": "Main", "port_t": "Tank", "size": "NG10", "centre": "open"},
)  # fmt: skip
"""Schema of the sheet Directional valves."""
