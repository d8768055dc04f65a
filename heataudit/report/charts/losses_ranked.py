"""Which components make the heat, the largest first."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pandas as pd

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import GROUP_COLOURS, INK
from heataudit.report.charts.style import (
    MARGIN,
    WIDTH,
    axes_between,
    nothing_to_show,
    text_size,
    titled_figure,
    wrap,
)
from heataudit.report.quantities import System, quantity
from heataudit.report.words import GROUP_NAMES, share_text

if TYPE_CHECKING:
    from matplotlib.figure import Figure

MOST = 15
"""Components that have a bar of their own."""

ROW = 0.29
NAME_WIDTH = 2.1


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    table, rest = ranked(audit.losses)
    total = audit.cycle.heat_energy_kJ
    if not len(table) or total <= 0:
        return nothing_to_show("Losses by component", "Nothing makes heat in this cycle.")
    rows = len(table) + (rest.size > 0)
    remark = "Heat in one duty cycle, its share, and the kind of loss."
    figure, top = titled_figure(_title(table, total), remark, MARGIN + ROW * rows)
    names = [wrap(str(name), NAME_WIDTH, lines=1) for name in table.index]
    ends = table.sum(axis=1).tolist()
    labels = [_label(table.loc[name], total, system) for name in table.index]
    if rest.size:
        names.append(f"The other {rest.size}")
        ends.append(float(rest.sum()))
        labels.append(f"{quantity(ends[-1], 'kJ', system)}, {share_text(ends[-1] / total)}")
    left = MARGIN + max(text_size(name)[0] for name in names) + 0.1
    axes = axes_between(figure, left, WIDTH - MARGIN, MARGIN, top)
    room = WIDTH - MARGIN - left
    scale = min((room - text_size(label)[0] - 0.12) / end for label, end in zip(labels, ends, strict=True))
    axes.set(xlim=(0, room), ylim=(rows - 0.4, -0.6), yticks=range(rows), yticklabels=names, xticks=[])
    axes.spines["bottom"].set_visible(False)
    axes.tick_params(axis="y", length=0, labelsize="medium")
    for y, component in enumerate(table.index):
        start = 0.0
        for group, energy in table.loc[component].items():
            width = energy * scale
            axes.barh(y, width, 0.68, start, color=GROUP_COLOURS[str(group)], edgecolor="white", linewidth=0.5)
            start += width
    if rest.size:
        axes.barh(rows - 1, ends[-1] * scale, 0.68, color="white", edgecolor=INK, linewidth=0.6, hatch="////")
    for y, (label, end) in enumerate(zip(labels, ends, strict=True)):
        axes.text(end * scale + 0.07, y, label, va="center")
    return figure


def ranked(losses: pd.DataFrame) -> tuple[pd.DataFrame, pd.Series]:
    """Heat [kJ] of the largest components by group, and of each of the others.

    Parameters
    ----------
    losses
        As in `Audit.losses`.
    """
    found = losses[losses["heat_kJ"] > 0]
    table = found.pivot_table(index="component", columns="group", values="heat_kJ", aggfunc="sum", fill_value=0.0)
    sums = table.sum(axis=1).sort_values(ascending=False, kind="stable")
    own = MOST if len(sums) > MOST + 1 else len(sums)
    order = [group for group in GROUP_COLOURS if group in table.columns]
    return table.loc[sums.index[:own], order], sums.iloc[own:]


def _title(table: pd.DataFrame, total: float) -> str:
    ends = table.sum(axis=1)
    first = f"{ends.index[0]} makes {share_text(ends.iloc[0] / total)} of the heat"
    return first if len(ends) < 4 else f"{first}; the first three make {share_text(ends.iloc[:3].sum() / total)}"


def _label(row: pd.Series, total: float, system: System) -> str:
    """Heat, share and groups, the largest group first."""
    parts = row[row > 0.02 * row.sum()].sort_values(ascending=False)
    kinds = " + ".join(GROUP_NAMES[str(group)].lower() for group in parts.index[:3])
    return f"{quantity(row.sum(), 'kJ', system)}, {share_text(row.sum() / total)}, {kinds}"
