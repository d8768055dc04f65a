"""Sheet Valves: valves, filters and coolers with two ports."""

from __future__ import annotations

from typing import Literal

import pandas as pd

from heataudit.machine.schema import Default, Table, Tables
from heataudit.machine.tables._columns import flag, flow, name, number, port, pressure, reference, viscosity, word
from heataudit.machine.tables.lines import own_ports, own_ports_b

KINDS = (
    "check", "relief", "throttle", "flow control", "counterbalance", "filter", "cooler", "pilot-operated check",
    "unloading", "sequence", "reducing", "load-sensing unloading", "priority",
)  # fmt: skip

PASSES: dict[str, Literal["both", "forward"]] = {
    "check": "forward", "relief": "forward", "throttle": "both", "flow control": "both", "filter": "both",
    "cooler": "both", "pilot-operated check": "forward", "unloading": "both", "sequence": "both",
    "load-sensing unloading": "forward", "priority": "forward",
}  # fmt: skip
"""Kind -> in which directions oil finds a way through at some pressure; the others may stay shut at any."""

PUMP_FLOW = ("relief", "unloading", "load-sensing unloading")
PRESET = ("relief", "unloading", "sequence", "reducing", "load-sensing unloading")
PILOTED = ("counterbalance", "pilot-operated check", "unloading", "load-sensing unloading")
LOW_DROP = ("check", "filter", "cooler", "pilot-operated check")
OVERRIDE = 0.15


def _largest_pump_flow(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    pumps = tables["pumps"]
    return pd.Series((pumps["displacement"] * pumps["speed"]).max(), index=rows.index, dtype=float)


def _override(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return OVERRIDE * rows["opening_pressure"]


PUMP_FLOW_DEFAULT = Default(_largest_pump_flow, "the largest pump flow", 0.3)
RATED_DROPS = {kind: Default(5.0 if kind in LOW_DROP else 10.0, f"usual for a {kind}", 0.3) for kind in KINDS}

VALVES = Table(
    sheet="Valves",
    key="valves",
    help="Valves and filters with two ports, and what else oil passes on its way.",
    columns=(
        name("Valve", "Name of the valve."),
        word(
            header="Kind", words=KINDS, must=True,
            help="What it is. A shut-off valve is a throttle that the duty cycle sets to 0 or 100 %.",
        ),
        port(header="From", help="Port label.", default=Default(own_ports, "its own label", listed=False)),
        port(header="To", help="Port label.", default=Default(own_ports_b, "its own label", listed=False)),
        flow(
            header="Rated flow", help="Flow that passes at the rated drop.", above=0.0, must=True,
            default=dict.fromkeys(PUMP_FLOW, PUMP_FLOW_DEFAULT),
        ),
        pressure(
            header="Rated drop", above=0.0,
            help="Drop at the rated flow; for a relief valve what it rises above its opening pressure.",
            default={**RATED_DROPS, "relief": Default(_override, "15 % of the opening pressure", 0.5)},
        ),
        viscosity(
            header="Rated viscosity", help="At which a filter or cooler has its rated drop.", above=0.0,
            only_for=("filter", "cooler"),
            default=dict.fromkeys(("filter", "cooler"), Default(32.0, "common test viscosity")),
        ),
        pressure(
            header="Opening pressure", help="Where it starts to open: its setting.", at_least=0.0, must=True,
            only_for=(*PRESET, "check", "counterbalance", "pilot-operated check"),
            default={
                "check": Default(0.0, "no spring given"), "pilot-operated check": Default(0.0, "no spring given"),
                "counterbalance": Default(None, "estimate", 0.2, shown="1.3 x the highest load pressure"),
            },
        ),
        flow(
            header="Set at flow", help="The setting was read at this flow, not at cracking.", above=0.0,
            only_for=("relief",),
        ),
        flow(
            header="Set flow", help="What it lets pass at most.", above=0.0, must=True,
            only_for=("flow control", "priority"),
        ),
        reference(
            header="Pilot from", help="Port label, or bank, whose pressure pilots it.", must=True, only_for=PILOTED
        ),
        number(
            header="Pilot ratio", help="Pilot area / seat area.", above=0.0,
            only_for=("counterbalance", "pilot-operated check"),
            default={
                "counterbalance": Default(4.0, "usual", 0.3), "pilot-operated check": Default(3.0, "usual", 0.3),
            },
        ),
        flag(
            header="Vented", help="yes: pressure behind the valve does not act on its setting.",
            only_for=("counterbalance",), default={"counterbalance": Default("no", "usual")},
        ),
        port(header="Port 3", help="Port label of a priority valve's surplus outlet.", only_for=("priority",)),
    ),
    example={
        "name": "Main relief", "kind": "relief", "from_": "P1", "to": "Tank", "opening_pressure": 210,
    },
)  # fmt: skip
"""Schema of the sheet Valves."""
