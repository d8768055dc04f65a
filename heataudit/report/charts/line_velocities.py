"""How fast the oil runs in the lines, against the guideline of each."""

from __future__ import annotations

from collections.abc import Hashable, Mapping
from typing import TYPE_CHECKING

import numpy as np
import pandas as pd

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import BEYOND, INK, QUIET, WITHIN
from heataudit.report.charts.style import (
    MARGIN,
    SMALL,
    WIDTH,
    axes_between,
    nothing_to_show,
    text_size,
    titled_figure,
    wrap,
)
from heataudit.report.quantities import System, convert, grouped

if TYPE_CHECKING:
    from matplotlib.figure import Figure

MOST = 30
"""Lines that are drawn: those that come nearest to their guideline or are furthest above it."""

ROW, BOTTOM = 0.27, 0.52
NAME_WIDTH = 2.3


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    table = audit.lines
    if not len(table):
        return nothing_to_show("Velocities in the lines", "The workbook has no lines.")
    over = table["velocity_m_s"].abs() / table["guideline_m_s"]
    shown = table.loc[over.sort_values(ascending=False, kind="stable").index[:MOST]]
    _, unit = convert(0.0, "m/s", system)
    speed, guide = (convert(shown[key].abs().to_numpy(float), "m/s", system)[0] for key in (
        "velocity_m_s", "guideline_m_s"
    ))  # fmt: skip
    figure, top = titled_figure(_title(over), _remark(table, shown), BOTTOM + ROW * len(shown))
    names = [wrap(f"{row['line']}, {row['size'] or row['service']}", NAME_WIDTH, lines=1)
             for row in shown.to_dict("records")]  # fmt: skip
    labels = [_label(s, g, row, unit) for s, g, row in zip(speed, guide, shown.to_dict("records"), strict=True)]
    left = MARGIN + max(text_size(name)[0] for name in names) + 0.1
    room = WIDTH - MARGIN - left
    farthest = np.maximum(speed, guide)
    widths = np.array([text_size(label, SMALL)[0] for label in labels])
    scale = float(np.min((room - widths - 0.15) / farthest))
    axes = axes_between(figure, left, WIDTH - MARGIN, BOTTOM, top)
    axes.set(xlim=(0, room / scale), ylim=(len(shown) - 0.4, -0.6), yticks=range(len(shown)), yticklabels=names)
    axes.tick_params(axis="y", length=0, labelsize="medium")
    colours = [BEYOND if fast else WITHIN for fast in speed > guide]
    axes.barh(range(len(shown)), speed, 0.62, color=colours)
    for y, (mark, end, label) in enumerate(zip(guide, farthest, labels, strict=True)):
        axes.plot([mark, mark], [y - 0.42, y + 0.42], color=INK, linewidth=2.2, solid_capstyle="butt")
        axes.text(end + 0.08 / scale, y, label, va="center", fontsize=SMALL, color=QUIET)
    axes.set_xlabel(f"Velocity [{unit}]")
    return figure


def _label(speed: float, guide: float, row: Mapping[Hashable, object], unit: str) -> str:
    phase = wrap(str(row["phase"]), 1.5, SMALL, lines=1)
    if speed == 0:
        return "no flow"
    return f"{grouped(float(speed))} {unit}, guideline {grouped(float(guide))}, in {phase}"


def _title(over: pd.Series) -> str:
    fast = int((over > 1).sum())
    if not fast:
        return "All lines keep their guideline velocity"
    lines = f"{fast} of {len(over)} lines" if len(over) > 1 else "The only line"
    return f"{lines} {'are' if fast > 1 else 'is'} faster than the guideline, up to {over.max():.2g} times"


def _remark(table: pd.DataFrame, shown: pd.DataFrame) -> str:
    text = "Fastest phase of each line; the black mark is the guideline for its service and pressure."
    if len(shown) == len(table):
        return text
    return f"{text} The {len(shown)} of {len(table)} lines that are nearest to their guideline or above it."
