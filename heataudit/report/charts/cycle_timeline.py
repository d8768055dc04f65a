"""Pressure, flow and power over the cycle."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.audit.figures import BAR, L_MIN
from heataudit.audit.model import Audit
from heataudit.report.charts.palette import BAND, GROUP_COLOURS, HEAT, INK, PUMP_STYLES, QUIET
from heataudit.report.charts.style import (
    SMALL,
    WIDTH,
    axes_between,
    nice_top,
    spread,
    text_size,
    titled_figure,
    wrap,
)
from heataudit.report.quantities import System, convert, quantity

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from matplotlib.ticker import MaxNLocator

Floats = NDArray[np.float64]

PANEL, PANEL_GAP, BOTTOM = 1.35, 0.14, 0.55
NAME_LENGTH = 1.35
"""Longest a phase's name may be when it stands upright [in]."""

MOST_PUMPS = len(PUMP_STYLES)
MOST_STEPS = 400
"""Phases beyond which several are drawn as one: no more could be seen."""

LEFT, RIGHT_NAMES = 0.75, 1.25


class Curve(NamedTuple):
    """A quantity over the phases: name, values by phase, colour, line style."""

    name: str
    values: Floats
    colour: str
    style: object = "-"


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    time = (audit.phases["duration_s"] * audit.phases["repeats"]).to_numpy(float)
    edges, unit = _axis_of_time(np.concatenate([[0.0], np.cumsum(time)]))
    plot_width = WIDTH - RIGHT_NAMES - LEFT
    names, upright = phase_names(audit, edges, plot_width)
    heights = [text_size(n)[0] if upright else text_size(n, SMALL)[1] for n in names.values()]
    strip = max(heights, default=0.0) + 0.1
    body = strip + 3 * PANEL + 2 * PANEL_GAP + BOTTOM
    figure, top = titled_figure(_title(audit, system), _remark(audit, names), body)
    for number, (title, curves) in enumerate(panels(audit, system)):
        upper = top - strip - number * (PANEL + PANEL_GAP)
        axes = axes_between(figure, LEFT, WIDTH - RIGHT_NAMES, upper - PANEL, upper)
        _draw_panel(axes, edges, curves)
        axes.set_ylabel(title)
        axes.tick_params(labelbottom=number == 2)
        if number == 0:
            _name_phases(axes, edges, names, upright)
        if number == 2:
            axes.set_xlabel(f"Time [{unit}]")
    return figure


def _axis_of_time(seconds: Floats) -> tuple[Floats, str]:
    span = seconds[-1]
    if span > 3 * 3600:
        return seconds / 3600, "h"
    return (seconds / 60, "min") if span > 600 else (seconds, "s")


def panels(audit: Audit, system: System) -> list[tuple[str, list[Curve]]]:
    """Axis titles and curves of the three panels.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    pumps, phases = audit.solution.pumps, audit.phases
    time = (phases["duration_s"] * phases["repeats"]).to_numpy(float)
    most = np.sort(np.argsort(-(pumps.shaft_power @ time), kind="stable")[:MOST_PUMPS])
    pressures, flows = [], []
    for k, style in zip(most, PUMP_STYLES, strict=False):
        name, colour = pumps.name[k], GROUP_COLOURS["pump"]
        pressures.append(Curve(name, convert(pumps.pressure[k] / BAR, "bar", system)[0], colour, style))
        flows.append(Curve(name, convert(pumps.flow[k] / L_MIN, "L/min", system)[0], colour, style))
    powers = [
        Curve(name, convert(phases[key].to_numpy(float), "kW", system)[0], colour, style)
        for name, key, colour, style in (
            ("Shaft", "shaft_power_kW", INK, "-"), ("Heat", "heat_kW", HEAT, (0, (4, 1.5))),
            ("Useful", "useful_power_kW", GROUP_COLOURS["load"], (0, (1.2, 1.2))),
        )
    ]  # fmt: skip
    units = [convert(0.0, unit, system)[1] for unit in ("bar", "L/min", "kW")]
    titles = (f"Pressure [{units[0]}]", f"Flow [{units[1]}]", f"Power [{units[2]}]")
    return list(zip(titles, (pressures, flows, powers), strict=True))


def _draw_panel(axes: Axes, edges: Floats, curves: list[Curve]) -> None:
    """Step lines, each with its name at the right end."""
    axes.set_xlim(edges[0], edges[-1])
    if len(edges) <= 200:
        for k in range(1, len(edges) - 1, 2):
            axes.axvspan(edges[k], edges[k + 1], color=BAND, linewidth=0, zorder=0)
    lowest = min(0.0, min(float(np.nanmin(curve.values)) for curve in curves))
    highest = max(float(np.nanmax(curve.values)) for curve in curves)
    axes.set_ylim(lowest * 1.06, nice_top(highest))
    axes.yaxis.set_major_locator(_few_ticks())
    width = 1.4 if len(edges) <= 100 else 0.8
    for curve in curves:
        coarse, low, mean, high = _thinned(edges, curve.values)
        if len(coarse) < len(edges):
            axes.fill_between(coarse[:-1], low, high, step="post", color=curve.colour, alpha=0.25, linewidth=0)
        axes.stairs(mean, coarse, baseline=None, color=curve.colour, linestyle=curve.style, linewidth=width)
    _name_curves(axes, [curve.name for curve in curves], curves)


def _few_ticks() -> MaxNLocator:
    from matplotlib.ticker import MaxNLocator

    return MaxNLocator(4, steps=[1, 2, 2.5, 5, 10])


def _thinned(edges: Floats, values: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    """Edges, and lowest, mean and highest value between them; phases are put together where there are very many."""
    step = -(-len(values) // MOST_STEPS)
    if step == 1:
        return edges, values, values, values
    starts = np.arange(0, len(values), step)
    coarse = np.append(edges[starts], edges[-1])
    time = np.diff(edges)
    mean = np.add.reduceat(values * time, starts) / np.add.reduceat(time, starts)
    return coarse, np.minimum.reduceat(values, starts), mean, np.maximum.reduceat(values, starts)


def _name_curves(axes: Axes, names: list[str], curves: list[Curve]) -> None:
    """Names beside the panel with a sample of the line, at the height of its end where there is room."""
    low, high = axes.get_ylim()
    per_unit = PANEL / (high - low)
    ends = [(float(curve.values[-1]) - low) * per_unit for curve in curves]
    written = [wrap(name, RIGHT_NAMES - 0.45, SMALL, lines=2) for name in names]
    sizes = [text_size(text, SMALL)[1] + 0.03 for text in written]
    width = WIDTH - RIGHT_NAMES - LEFT
    for curve, text, y in zip(curves, written, spread(ends, sizes, 0.0, PANEL), strict=True):
        x = 1 + 0.08 / width
        axes.plot(
            [x, x + 0.22 / width], [y / PANEL] * 2, transform=axes.transAxes, color=curve.colour,
            linestyle=curve.style, linewidth=1.4, clip_on=False,
        )  # fmt: skip
        axes.text(
            x + 0.27 / width, y / PANEL, text, transform=axes.transAxes, fontsize=SMALL, va="center", color=curve.colour
        )


def phase_names(audit: Audit, edges: Floats, width: float) -> tuple[dict[int, str], bool]:
    """Names of the phases that are wide enough for one, and whether they stand upright.

    Parameters
    ----------
    audit
        The answers.
    edges
        Times at which phases begin and end [any unit].
    width
        Of the plot [in].
    """
    wide = np.diff(edges) / edges[-1] * width
    repeats = audit.phases["repeats"].to_numpy(float)
    upright_height = text_size("X", SMALL)[1] + 0.02
    named = np.flatnonzero(wide >= upright_height)
    full = {
        int(k): str(audit.phases["phase"].iloc[k]) + (f" ×{repeats[k]:g}" if repeats[k] != 1 else "") for k in named
    }
    level = {k: wrap(name, float(wide[k]) - 0.04, SMALL, lines=3) for k, name in full.items()}
    if len(named) == len(wide) and not any("…" in text for text in level.values()):
        return level, False
    return {k: wrap(name, NAME_LENGTH, SMALL, lines=1) for k, name in full.items()}, True


def _name_phases(axes: Axes, edges: Floats, names: dict[int, str], upright: bool) -> None:
    for k, name in names.items():
        axes.annotate(
            name, ((edges[k] + edges[k + 1]) / 2, 1), xycoords=("data", "axes fraction"), xytext=(0, 4),
            textcoords="offset points", ha="center", va="bottom", fontsize=SMALL, rotation=90 if upright else 0,
            linespacing=1.1, color=QUIET if upright else INK,
        )  # fmt: skip


def _title(audit: Audit, system: System) -> str:
    phases = audit.phases
    if not len(phases) or float(phases["heat_kW"].max()) <= 0:
        return "Pressure, flow and power over the cycle"
    worst = phases.iloc[int(np.argmax(phases["heat_kW"].to_numpy()))]
    return f"Heat peaks at {quantity(float(worst['heat_kW']), 'kW', system)} in “{worst['phase']}”"


def _remark(audit: Audit, names: dict[int, str]) -> str:
    parts = []
    if len(names) < len(audit.phases):
        parts.append(f"{len(audit.phases):,} phases; those too short for a name have none.")
    if len(audit.phases) > MOST_STEPS:
        parts.append("Lines are means of neighbouring phases, shades their range.")
    if len(audit.solution.pumps.name) > MOST_PUMPS:
        parts.append(f"The {MOST_PUMPS} of {len(audit.solution.pumps.name)} pumps with the most energy.")
    return " ".join(parts)
