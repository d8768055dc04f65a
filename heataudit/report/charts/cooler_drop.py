"""What the chosen cooler drops over its oil flow, with warm and with cold oil."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from heataudit.audit.figures import BAR, L_MIN
from heataudit.audit.model import Audit
from heataudit.report.charts.palette import COOLER, HEAT, INK
from heataudit.report.charts.style import nice_top, titled_figure
from heataudit.report.charts.temperatures import Curve, plot
from heataudit.report.quantities import System, convert, quantity

if TYPE_CHECKING:
    from matplotlib.figure import Figure

BODY = 2.8


def draw(audit: Audit, system: System) -> Figure | None:
    """The chart; None where no cooler is chosen or none of its drops is listed.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    cooler = audit.cooler
    if cooler.choice is None or cooler.drop_hot_bar is None or cooler.drop_cold_bar is None:
        return None
    rows = audit.machine.coolers
    rows = rows[rows["name"] == cooler.choice].sort_values("oil_flow")
    flow, listed = rows["oil_flow"].to_numpy(float) / L_MIN, rows["pressure_drop"].to_numpy(float) / BAR
    at = float(flow[-1] if cooler.oil_flow_L_min is None else cooler.oil_flow_L_min)
    per_listed = 1.0 / float(np.interp(at, flow, listed))
    x, unit_x = convert(flow, "L/min", system)
    curves, ends = [], {"cold": cooler.drop_cold_bar, "warm": cooler.drop_hot_bar}
    temperatures = {"cold": audit.thermal.start_temperature_C, "warm": audit.thermal.highest_temperature_C}
    for state, colour, style in (("cold", COOLER, (0, (6, 2))), ("warm", HEAT, "-")):
        drops, unit_y = convert(listed * per_listed * ends[state], "bar", system)
        name = f"Oil {state}, {quantity(temperatures[state], '°C', system)}"
        curves.append(Curve(name, x, drops, colour, style))
    title = (
        f"{cooler.choice} drops {quantity(cooler.drop_hot_bar, 'bar', system)} on warm oil and "
        f"{quantity(cooler.drop_cold_bar, 'bar', system)} on cold"
    )
    figure, top = titled_figure(
        title, "In proportion to viscosity; the diamonds are at the oil flow that counts.", BODY
    )
    high = nice_top(1.1 * max(float(curve.y.max()) for curve in curves))
    axes = plot(figure, top, curves, (0.0, 1.08 * float(x.max()), 0.0, high))
    for curve in curves:
        axes.plot(curve.x, curve.y, "o", color=curve.colour, markersize=4)
        place = float(convert(at, "L/min", system)[0])
        axes.plot(place, float(np.interp(place, curve.x, curve.y)), "D", color=INK, markersize=6)
    axes.set_xlabel(f"Oil flow [{unit_x}]")
    axes.set_ylabel(f"Pressure drop [{unit_y}]")
    return figure
