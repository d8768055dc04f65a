"""Where the energy of a cycle goes: from the pump shafts into useful work and losses."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import GROUP_COLOURS, INK, QUIET
from heataudit.report.charts.style import (
    MARGIN,
    SMALL,
    WIDTH,
    drawing,
    nothing_to_show,
    spread,
    text_size,
    titled_figure,
)
from heataudit.report.quantities import System, quantity
from heataudit.report.words import GROUP_NAMES, ranked_groups, share_text

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from matplotlib.patches import PathPatch

BODY = 3.2
LABEL = 0.21
"""Height that the label of a stream needs [in]."""

GAP = 0.06
BLOCK = 0.13
LIFTING = "#AFC7B8"
"""Colour of work that lifts oil: pale useful work."""

NEGLIGIBLE = 0.01
"""Share below which lifted oil and what loads give back are not drawn."""


class Stream(NamedTuple):
    """Energy that comes in or goes out: name, energy [kJ], colour."""

    name: str
    energy: float
    colour: str


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    coming, going = streams(audit)
    shaft = audit.cycle.shaft_energy_kJ
    whole, what = (shaft, "the shaft energy") if shaft > 0 else (sum(s.energy for s in coming), "what comes in")
    if not coming or not going:
        return nothing_to_show(_title(audit), "No energy comes in or goes out in this cycle.")
    figure, top = titled_figure(_title(audit), f"Energy of one duty cycle; shares are of {what}.", BODY)
    axes = drawing(figure)
    left = MARGIN + max(text_size(s.name, bold=True)[0] for s in coming) + 0.12
    right = WIDTH - MARGIN - max(text_size(_label(s, whole, system))[0] for s in going) - 0.85
    middle = (MARGIN + top) / 2
    slots, scale = _slots([s.energy for s in going], top - MARGIN)
    _draw_coming(axes, coming, (left, middle, scale), system)
    start = middle + scale * sum(s.energy for s in going) / 2
    slot_top = middle + (sum(slots) + GAP * (len(slots) - 1)) / 2
    for stream, slot in zip(going, slots, strict=True):
        thick = stream.energy * scale
        centre = slot_top - slot / 2
        axes.add_patch(_ribbon((left + BLOCK, start), (right, centre + thick / 2), thick, stream.colour))
        axes.add_patch(_bar(right, centre, thick, stream.colour))
        axes.text(right + BLOCK + 0.08, centre, _label(stream, whole, system), va="center", ha="left")
        start -= thick
        slot_top -= slot + GAP
    return figure


def streams(audit: Audit) -> tuple[list[Stream], list[Stream]]:
    """Energies that come in and go out; both add up to the same, save for what is negligible.

    Parameters
    ----------
    audit
        The answers.
    """
    cycle = audit.cycle
    least = NEGLIGIBLE * max(abs(cycle.shaft_energy_kJ), cycle.heat_energy_kJ, cycle.useful_energy_kJ)
    signed = [
        Stream("Pump shafts", cycle.shaft_energy_kJ, INK),
        Stream("Driving loads", cycle.returned_energy_kJ, QUIET),
        Stream("Lifted oil", -cycle.lifting_energy_kJ, LIFTING),
    ]
    coming = [s for s in signed if s.energy > least]
    back = [Stream(s.name, -s.energy, s.colour) for s in signed if -s.energy > least]
    useful = Stream(GROUP_NAMES["load"], cycle.useful_energy_kJ, GROUP_COLOURS["load"])
    losses = [Stream(GROUP_NAMES[group], energy, GROUP_COLOURS[group]) for group, energy in ranked_groups(audit)]
    return coming, [s for s in (useful, *back, *losses) if s.energy > 0]


def _title(audit: Audit) -> str:
    efficiency, groups = audit.cycle.efficiency, ranked_groups(audit)
    if efficiency is None or not groups:
        return "Where the energy goes"
    name, energy = GROUP_NAMES[groups[0][0]].lower(), groups[0][1]
    largest = share_text(energy / audit.cycle.shaft_energy_kJ)
    return f"{share_text(efficiency)} of the shaft energy does useful work; largest loss: {name}, {largest}"


def _label(stream: Stream, whole: float, system: System) -> str:
    return f"{stream.name}  {quantity(stream.energy, 'kJ', system)}, {share_text(stream.energy / whole)}"


def _slots(energies: list[float], height: float) -> tuple[list[float], float]:
    """Heights [in] that streams get, no less than their labels need, and the scale [in/kJ] that makes all fit."""
    room = height - GAP * (len(energies) - 1)
    low, high = 0.0, room / sum(energies)
    for _ in range(50):
        scale = (low + high) / 2
        fits = sum(max(energy * scale, LABEL) for energy in energies) <= room
        low, high = (scale, high) if fits else (low, scale)
    return [max(energy * low, LABEL) for energy in energies], low


def _draw_coming(axes: Axes, coming: list[Stream], place: tuple[float, float, float], system: System) -> None:
    """Blocks of what comes in, their labels to the left."""
    left, middle, scale = place
    edge = middle + scale * sum(s.energy for s in coming) / 2
    centres = []
    for stream in coming:
        thick = stream.energy * scale
        centres.append(edge - thick / 2)
        axes.add_patch(_bar(left, edge - thick / 2, thick, stream.colour))
        edge -= thick
    low, high = MARGIN, axes.get_ylim()[1] - MARGIN
    for stream, y in zip(coming, spread(centres, [0.42] * len(coming), low, high), strict=True):
        axes.text(left - 0.08, y + 0.09, stream.name, ha="right", va="center", fontweight="bold")
        axes.text(left - 0.08, y - 0.09, quantity(stream.energy, "kJ", system), ha="right", va="center", fontsize=SMALL)


def _bar(left: float, centre: float, thick: float, colour: str) -> PathPatch:
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path

    low, high, right = centre - thick / 2, centre + thick / 2, left + BLOCK
    path = Path([(left, low), (right, low), (right, high), (left, high), (left, low)], closed=True)
    return PathPatch(path, facecolor=colour, edgecolor="none")


def _ribbon(start: tuple[float, float], end: tuple[float, float], thick: float, colour: str) -> PathPatch:
    """A stream between two upper corners, leaving and arriving level."""
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path

    (x0, y0), (x1, y1) = start, end
    bend = (x0 + x1) / 2
    points = [
        (x0, y0), (bend, y0), (bend, y1), (x1, y1), (x1, y1 - thick), (bend, y1 - thick), (bend, y0 - thick),
        (x0, y0 - thick), (x0, y0),
    ]  # fmt: skip
    codes = [Path.MOVETO, *[Path.CURVE4] * 3, Path.LINETO, *[Path.CURVE4] * 3, Path.CLOSEPOLY]
    return PathPatch(Path(points, codes), facecolor=colour, edgecolor="white", linewidth=0.5, alpha=0.85)
