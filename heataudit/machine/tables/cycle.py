"""Sheet Duty cycle: phases, and what they ask of each component."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from heataudit.machine.schema import Column, Default, Table
from heataudit.machine.tables._columns import number, power, text
from heataudit.machine.tables.actuators import LINEAR, MOVES

CYCLE = Table(
    sheet="Duty cycle",
    key="cycle",
    help="The phases of a cycle in order, and what they ask of each component.",
    must=True,
    components=False,
    columns=(
        text(header="Phase", help="Name of the phase."),
        number(
            header="Time", help="Of a log: when the row begins, instead of Duration.", dimension="time", unit_name="s"
        ),
        number(header="Duration", help="Of one repeat.", dimension="time", unit_name="s", above=0.0, must=True),
        number(
            header="Repeats", help="How often the phase runs back to back.", above=0.0,
            default=Default(1.0, "once"),
        ),
        power(header="Other heat", help="Heat from outside the hydraulics.", default=Default(0.0, "none given")),
    ),
    example={"phase": "Lift", "duration": 6, "repeats": 1},
)  # fmt: skip
"""The columns of the duty cycle that every machine has."""

EXAMPLE_COMMANDS = {"Lift cylinder move": "extend", "Lift cylinder load [kN]": 40, "Lift cylinder speed [mm/s]": 60}
"""Columns of a component with what they may hold, for the example row."""

Measure = tuple[str, str]

LINEAR_SPEED: Measure = ("speed", "mm/s")
ROTATION: Measure = ("rotational speed", "rpm")
BAR: Measure = ("pressure", "bar")
PERCENT: Measure = ("share", "%")


@dataclass(frozen=True, kw_only=True)
class Command:
    """A column `<component> <quantity>` of the duty cycle.

    Attributes
    ----------
    quantity
        What follows the component's name in the header.
    table
        Key of the table that lists the component.
    measures
        Kind of the component (its word in column `by`) -> what the column may measure, with the usual unit; a header
        without a unit has the first. Kinds that are missing have no such column.
    bounds
        Of the values, in the usual unit.
    words
        Kind -> words, for a column that holds words.
    """

    quantity: str
    table: str
    help: str
    by: str = "kind"
    measures: Mapping[str, tuple[Measure, ...]]
    words: Mapping[str, tuple[str, ...]] | None = None
    at_least: float | None = None
    at_most: float | None = None

    def column(self, component: str, kind: str, measure: Measure) -> Column:
        """The column of one component, for one of its measures."""
        header = f"{component} {self.quantity}"
        if self.words is not None:
            return Column(
                header=header, help=self.help, holds="word", words=self.words[kind],
                default=Default("hold", "not commanded", listed=False),
            )  # fmt: skip
        dimension, unit_name = measure
        column = Column(header=header, help=self.help, dimension=dimension, unit_name=unit_name)
        return replace(column, at_least=self.at_least, at_most=self.at_most)


_MOTION = {**dict.fromkeys(LINEAR, (LINEAR_SPEED,)), "motor": (ROTATION,)}
_TRAVEL = {**dict.fromkeys(LINEAR, (("length", "mm"),)), "motor": (("revolutions", "rev"),)}
_LOAD = {
    **dict.fromkeys(LINEAR, (("force", "kN"), BAR)), "motor": (("torque", "N·m"), BAR), "constant pressure": (BAR,),
}  # fmt: skip
_GAUGE = {**dict.fromkeys((*LINEAR, "motor"), (BAR,))}
_EVERY_PUMP = ("fixed", "pressure compensated", "load sensing", "speed controlled", "set displacement")

COMMANDS = (
    Command(
        quantity="move", table="actuators", measures=dict.fromkeys(MOVES, ()), words=MOVES,
        help="What the actuator does; blank: hold.",
    ),
    Command(
        quantity="load", table="actuators", measures=_LOAD,
        help="Positive against the move, negative with it; in bar at the inlet.",
    ),
    Command(
        quantity="inlet", table="actuators", measures=_GAUGE, at_least=-1.0,
        help="Gauge reading at the inlet, instead of a load.",
    ),
    Command(
        quantity="outlet", table="actuators", measures=_GAUGE, at_least=-1.0,
        help="Gauge reading at the outlet; blank: computed.",
    ),
    Command(
        quantity="speed", table="actuators", measures=_MOTION, at_least=0.0, help="Speed asked for."
    ),
    Command(
        quantity="travel", table="actuators", measures=_TRAVEL, at_least=0.0, help="Travel asked for in the Duration."
    ),
    Command(
        quantity="opening", table="actuators", measures=dict.fromkeys(MOVES, (PERCENT,)), at_least=0.0, at_most=100.0,
        help="How far the spool stands open, or may open.",
    ),
    Command(
        quantity="speed", table="drives", measures=dict.fromkeys(("electric", "diesel"), (ROTATION,)), at_least=0.0,
        help="Speed of the drive.",
    ),
    Command(
        quantity="speed", table="pumps", by="control", measures=dict.fromkeys(_EVERY_PUMP, (ROTATION,)), at_least=0.0,
        help="Speed of the pump; 0: stopped.",
    ),
    Command(
        quantity="setting", table="pumps", by="control", measures=dict.fromkeys(_EVERY_PUMP[1:], (BAR,)), at_least=0.0,
        help="Pressure setting of the pump.",
    ),
    Command(
        quantity="displacement", table="pumps", by="control", measures={"set displacement": (PERCENT,)},
        at_least=-100.0, at_most=100.0, help="Share of the full displacement.",
    ),
    Command(
        quantity="opening", table="valves", measures={"throttle": (PERCENT,)}, at_least=0.0, at_most=100.0,
        help="Opening of the throttle; blank: fully open.",
    ),
    Command(
        quantity="setting", table="valves", measures=dict.fromkeys(("relief", "reducing", "unloading"), (BAR,)),
        at_least=0.0, help="Opening pressure in this phase.",
    ),
)  # fmt: skip
"""The columns that a component adds to the duty cycle."""
