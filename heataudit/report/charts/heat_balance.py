"""Heat that comes in and goes out over the oil's temperature, and where the two agree."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from scipy.interpolate import PchipInterpolator

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import COOLER, HEAT, INK, TANK
from heataudit.report.charts.style import NORMAL, nice_top, titled_figure
from heataudit.report.charts.temperatures import BEHIND, Curve, limit_line, plot
from heataudit.report.quantities import System, convert, quantity
from heataudit.report.words import oil_sentence

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

BODY = 3.0
ROOM = 0.15
"""Share of the axis that a temperature written beside a point takes."""


def draw(audit: Audit, system: System) -> Figure:
    """The chart.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    thermal = audit.thermal
    table = thermal.heat_curve
    oil = table["oil_C"].to_numpy(float)
    hottest = max(
        [thermal.highest_temperature_C, audit.conditions.ambient_temperature_C + 40]
        + [t for t in (thermal.equilibrium_C, thermal.equilibrium_without_cooler_C) if t is not None]
    )
    fine = np.linspace(oil[0], min(max(hottest + 12, oil[0] + 20), oil[-1]), 200)
    heat, tank, both = (PchipInterpolator(oil, table[key])(fine) for key in (
        "heat_kW", "tank_kW", "tank_and_cooler_kW"
    ))  # fmt: skip
    cooled = audit.cooler.existing_kW_K > 0

    def shown(x: object, y: object) -> tuple[object, object]:
        return convert(x, "°C", system)[0], convert(y, "kW", system)[0]  # type: ignore[arg-type]

    curves = [Curve("Heat of the machine", *shown(fine, heat), HEAT)]  # type: ignore[arg-type]
    curves.append(Curve("Given off by the tank", *shown(fine, tank), TANK, (0, (6, 2))))  # type: ignore[arg-type]
    if cooled:
        curves.append(Curve("Tank and existing cooler", *shown(fine, both), COOLER))  # type: ignore[arg-type]
    ambient = quantity(audit.conditions.ambient_temperature_C, "°C", system)
    figure, top = titled_figure(oil_sentence(audit, system), f"Means over the duty cycle at {ambient} ambient.", BODY)
    high = nice_top(1.1 * max(float(curves[0].y.max()), 0.0))
    low = min(0.0, float(curves[0].y.min()))
    axes = plot(figure, top, curves, (float(curves[0].x[0]), float(curves[0].x[-1]), low, high))
    highest = thermal.highest_temperature_C
    limit = float(convert(highest, "°C", system)[0])
    limit_line(axes, limit, f"highest {quantity(highest, '°C', system)}", vertical=True)
    ends = {thermal.equilibrium_without_cooler_C, thermal.equilibrium_C if cooled else None}
    for end in sorted(end for end in ends if end is not None and fine[0] <= end <= fine[-1]):
        point = shown(end, float(np.interp(end, fine, heat)))
        _mark(axes, (float(point[0]), float(point[1])), quantity(end, "°C", system), limit)  # type: ignore[arg-type]
    axes.set_xlabel(f"Oil temperature [{convert(0.0, '°C', system)[1]}]")
    axes.set_ylabel(f"Heat [{convert(0.0, 'kW', system)[1]}]")
    return figure


def _mark(axes: Axes, point: tuple[float, float], text: str, limit: float) -> None:
    """A crossing point with its temperature below, on the side away from the limit where there is room."""
    low, high = axes.get_xlim()
    left = point[0] < limit and point[0] > low + ROOM * (high - low)
    side = -1 if left or point[0] > high - ROOM * (high - low) else 1
    axes.plot(*point, "o", color=INK, markersize=6, zorder=5)
    axes.annotate(
        text, point, xytext=(6 * side, -6), textcoords="offset points", ha="left" if side > 0 else "right", va="top",
        fontsize=NORMAL, fontweight="bold", bbox=BEHIND,
    )  # fmt: skip
