"""The coolers to choose from, over oil flow, against what is needed."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from heataudit.audit.figures import L_MIN
from heataudit.audit.model import Audit
from heataudit.report.charts.palette import COOLER, INK, QUIET, WITHIN
from heataudit.report.charts.style import nice_top, titled_figure
from heataudit.report.charts.temperatures import Curve, limit_line, plot
from heataudit.report.quantities import System, convert, quantity

if TYPE_CHECKING:
    from matplotlib.figure import Figure

BODY = 3.0
MOST = 12
"""Coolers that are drawn: the first of the ranking."""


def draw(audit: Audit, system: System) -> Figure | None:
    """The chart; None where no coolers are listed or no capacity is required.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    cooler, listed = audit.cooler, audit.machine.coolers
    if not len(listed) or not np.isfinite(cooler.required_kW_K) or cooler.required_kW_K <= 0:
        return None
    needed = cooler.required_kW_K * (1 + cooler.reserve_percent / 100)
    names = [str(name) for name in cooler.options["cooler"]][:MOST]
    curves = []
    for name in names:
        rows = listed[listed["name"] == name].sort_values("oil_flow")
        flow = convert(rows["oil_flow"].to_numpy(float) / L_MIN, "L/min", system)[0]
        capacity = convert(rows["capacity"].to_numpy(float) / 1e3, "kW/K", system)[0]
        chosen = name == cooler.choice
        label = f"{name} (choice)" if chosen else name
        curves.append(Curve(label, flow, capacity, COOLER if chosen else QUIET, "-" if chosen else (0, (3, 1.5))))
    figure, top = titled_figure(_title(audit, needed, system), _remark(audit), BODY)
    limit, unit = convert(needed, "kW/K", system)
    high = nice_top(1.1 * max([float(limit)] + [float(c.y.max()) for c in curves]))
    right = 1.08 * max(float(c.x.max()) for c in curves)
    axes = plot(figure, top, curves, (0.0, right, 0.0, high))
    for curve in curves:
        axes.plot(curve.x, curve.y, "o", color=curve.colour, markersize=4)
    axes.axhspan(0, float(limit), color=WITHIN, alpha=0.15, linewidth=0)
    limit_line(axes, float(limit), f"needed {quantity(needed, 'kW/K', system)}", vertical=False)
    if cooler.oil_flow_L_min is not None:
        axes.plot(float(convert(cooler.oil_flow_L_min, "L/min", system)[0]), float(limit), "D", color=INK, markersize=6)
    axes.set_xlabel(f"Oil flow [{convert(0.0, 'L/min', system)[1]}]")
    axes.set_ylabel(f"Capacity [{unit}]")
    return figure


def _remark(audit: Audit) -> str:
    parts = ["As listed, before air density, altitude and water flow are allowed for."]
    if audit.cooler.oil_flow_L_min is not None:
        parts.append("The diamond is the case for which the cooler is sized.")
    if len(audit.cooler.options) > MOST:
        parts.append(f"The first {MOST} of {len(audit.cooler.options)}.")
    return " ".join(parts)


def _title(audit: Audit, needed: float, system: System) -> str:
    cooler = audit.cooler
    need = f"{quantity(needed, 'kW/K', system)} are needed, reserve included"
    if not cooler.needed:
        return f"{need}: the existing cooler has {quantity(cooler.existing_kW_K, 'kW/K', system)}"
    return f"{need}: {cooler.choice} is the choice" if cooler.choice else f"{need}: no listed cooler is enough"
