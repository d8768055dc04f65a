"""Pump pressure times pump flow, split into what the load takes and what is wasted; a panel for each phase."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pandas as pd

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import GROUP_COLOURS, INK, on
from heataudit.report.charts.style import (
    MARGIN,
    SMALL,
    WIDTH,
    axes_between,
    drawing,
    nice_top,
    nothing_to_show,
    text_size,
    titled_figure,
    wrap,
)
from heataudit.report.quantities import System, convert, quantity
from heataudit.report.words import GROUP_NAMES, share_text

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

MOST_PANELS = 12
PANEL, PANEL_GAP, LEFT = 1.35, 0.85, 0.62
KEY_ROW = 0.22

HATCHES = {"overflow": "xxx", "bypass": "///", "idle": "...", "metering": "\\\\\\"}
"""Patterns of the wastes that mending removes first, for grey print."""


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    numbers = drawn_phases(audit)
    if not numbers:
        return nothing_to_show("Pump pressure times pump flow", "The pumps deliver no power in this cycle.")
    columns = min(len(numbers), 3)
    rows = -(-len(numbers) // columns)
    used = [part for part in GROUP_COLOURS if (audit.rectangles["part"] == part).any()]
    key = _key_rows(used)
    body = rows * (PANEL + PANEL_GAP) + len(key) * KEY_ROW + MARGIN
    figure, top = titled_figure(_title(audit, numbers), _remark(audit, numbers), body)
    width = (WIDTH - MARGIN) / columns
    for k, number in enumerate(numbers):
        row, column = divmod(k, columns)
        upper = top - 0.38 - row * (PANEL + PANEL_GAP)
        left = column * width + LEFT
        axes = axes_between(figure, left, (column + 1) * width - 0.08, upper - PANEL, upper)
        table = audit.rectangles[audit.rectangles["phase_number"] == number]
        _draw_panel(axes, table, width - LEFT - 0.08, system)
    _draw_key(figure, key)
    return figure


def drawn_phases(audit: Audit) -> list[int]:
    """Numbers of the phases with the most energy that have rectangles, in the order of the cycle.

    Parameters
    ----------
    audit
        The answers.
    """
    power = audit.rectangles.groupby("phase_number")["power_kW"].sum()
    time = (audit.phases["duration_s"] * audit.phases["repeats"]).to_numpy(float)
    energy = power * time[power.index.to_numpy(int)]
    return sorted(int(n) for n in energy.sort_values(ascending=False, kind="stable").index[:MOST_PANELS])


def _draw_panel(axes: Axes, table: pd.DataFrame, width: float, system: System) -> None:
    """The parts of one phase's rectangle, named where the name fits in."""
    from matplotlib.patches import Rectangle

    to_flow, to_pressure = convert(1.0, "L/min", system), convert(1.0, "bar", system)
    right = nice_top(float((table["flow_start_L_min"] + table["flow_width_L_min"]).max() * to_flow[0]))
    upper = nice_top(float((table["pressure_start_bar"] + table["pressure_height_bar"]).max() * to_pressure[0]))
    axes.set(xlim=(0, right), ylim=(0, upper))
    for part in table.to_dict("records"):
        x, w = part["flow_start_L_min"] * to_flow[0], part["flow_width_L_min"] * to_flow[0]
        y, h = part["pressure_start_bar"] * to_pressure[0], part["pressure_height_bar"] * to_pressure[0]
        colour = GROUP_COLOURS[part["part"]]
        axes.add_patch(Rectangle((x, y), w, h, facecolor=colour, edgecolor="white", linewidth=0.7))
        name = GROUP_NAMES[part["part"]]
        text_width, text_height = text_size(name, SMALL)
        if text_width < w / right * width - 0.06 and text_height < h / upper * PANEL:
            axes.text(x + w / 2, y + h / 2, name, ha="center", va="center", fontsize=SMALL, color=on(colour))
        elif part["part"] in HATCHES:
            axes.add_patch(Rectangle(
                (x, y), w, h, fill=False, hatch=HATCHES[part["part"]], edgecolor=on(colour), linewidth=0, alpha=0.35
            ))  # fmt: skip
    _ticks(axes)
    axes.set_xlabel(f"Flow [{to_flow[1]}]", fontsize=SMALL, labelpad=1)
    axes.set_ylabel(f"Pressure [{to_pressure[1]}]", fontsize=SMALL, labelpad=1)
    power = quantity(float(table["power_kW"].sum()), "kW", system)
    name = wrap(str(table["phase"].iloc[0]), width, SMALL, bold=True, lines=1)
    for text, weight, inches in ((name, "bold", 0.20), (power, "normal", 0.05)):
        axes.text(0, 1 + inches / PANEL, text, transform=axes.transAxes, fontsize=SMALL, fontweight=weight)


def _ticks(axes: Axes) -> None:
    from matplotlib.ticker import MaxNLocator

    axes.xaxis.set_major_locator(MaxNLocator(3, steps=[1, 2, 2.5, 5, 10]))
    axes.yaxis.set_major_locator(MaxNLocator(3, steps=[1, 2, 2.5, 5, 10]))
    axes.tick_params(length=2, pad=1.5)


def _key_rows(parts: list[str]) -> list[list[tuple[str, float]]]:
    """Parts with the places [in] of their names, in as many rows as they need."""
    rows: list[list[tuple[str, float]]] = [[]]
    x = MARGIN
    for part in parts:
        need = text_size(GROUP_NAMES[part], SMALL)[0] + 0.45
        if rows[-1] and x + need > WIDTH - MARGIN:
            rows.append([])
            x = MARGIN
        rows[-1].append((part, x))
        x += need
    return rows


def _draw_key(figure: Figure, rows: list[list[tuple[str, float]]]) -> None:
    from matplotlib.patches import Rectangle

    axes = drawing(figure)
    axes.set_zorder(-1)
    for k, row in enumerate(reversed(rows)):
        y = MARGIN + k * KEY_ROW
        for part, x in row:
            axes.add_patch(Rectangle((x, y), 0.2, 0.13, facecolor=GROUP_COLOURS[part], edgecolor=INK, linewidth=0.3))
            if part in HATCHES:
                axes.add_patch(Rectangle(
                    (x, y), 0.2, 0.13, fill=False, hatch=HATCHES[part], edgecolor=on(GROUP_COLOURS[part]),
                    linewidth=0, alpha=0.35,
                ))  # fmt: skip
            axes.text(x + 0.26, y + 0.065, GROUP_NAMES[part], fontsize=SMALL, va="center")


def _title(audit: Audit, numbers: list[int]) -> str:
    time = (audit.phases["duration_s"] * audit.phases["repeats"]).to_numpy(float)
    table = audit.rectangles[audit.rectangles["phase_number"].isin(numbers)]
    energy = table["power_kW"] * time[table["phase_number"].to_numpy(int)]
    load = float(energy[table["part"] == "load"].sum() / energy.sum())
    where = "" if len(numbers) == len(audit.phases) else " of these phases"
    return f"{share_text(load)} of the oil's power{where} reaches the loads; the other areas are lost"


def _remark(audit: Audit, numbers: list[int]) -> str:
    scales = "Areas are powers; each panel has its own scales."
    if len(numbers) == len(audit.phases):
        return scales
    delivering = int((np.abs(audit.solution.pumps.flow).sum(axis=0) > 0).sum())
    if len(numbers) == delivering:
        return f"{scales} Phases in which no pump delivers are left out."
    return f"{scales} The {len(numbers)} of {len(audit.phases):,} phases with the most energy."
