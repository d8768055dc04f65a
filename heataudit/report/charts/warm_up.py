"""How the oil warms up from the start, with and without the cooler."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from heataudit.audit.model import Audit
from heataudit.report.charts.palette import COOLER, HEAT
from heataudit.report.charts.style import titled_figure
from heataudit.report.charts.temperatures import Curve, limit_line, plot
from heataudit.report.quantities import System, convert, quantity

if TYPE_CHECKING:
    from matplotlib.figure import Figure

BODY = 2.8


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
    minutes = thermal.warm_up["time_min"].to_numpy(float)
    hours = minutes[-1] > 180
    time = minutes / 60 if hours else minutes
    cooled = audit.cooler.existing_kW_K > 0
    wanted = [("Without cooler" if cooled else "Oil", "without_cooler_C", HEAT, "-")]
    if cooled:
        wanted.append(("With the existing cooler", "with_cooler_C", COOLER, (0, (6, 2))))  # type: ignore[arg-type]
    curves = []
    for name, key, colour, style in wanted:
        warm = thermal.warm_up[key].to_numpy(float)
        known = np.isfinite(warm)  # past 120 °C it is not followed
        curves.append(Curve(name, time[known], convert(warm[known], "°C", system)[0], colour, style))
    limit = float(convert(thermal.highest_temperature_C, "°C", system)[0])
    remark = "Means over each duty cycle, repeated without a break."
    figure, top = titled_figure(_title(audit, cooled, system), remark, BODY)
    values = np.concatenate([curve.y for curve in curves] + [[limit]])
    low, high = float(values.min()), float(values.max())
    margin = 0.08 * max(high - low, 1.0)
    axes = plot(figure, top, curves, (0.0, float(time[-1]), low - margin, high + 1.5 * margin))
    limit_line(axes, limit, f"highest {quantity(thermal.highest_temperature_C, '°C', system)}", vertical=False)
    axes.set_xlabel(f"Time [{'h' if hours else 'min'}]")
    axes.set_ylabel(f"Oil temperature [{convert(0.0, '°C', system)[1]}]")
    return figure


def _title(audit: Audit, cooled: bool, system: System) -> str:
    thermal = audit.thermal
    start = quantity(thermal.start_temperature_C, "°C", system)
    if thermal.warm_up_min is None or thermal.equilibrium_C is None:
        return f"From {start} the oil grows hotter and hotter; it finds no balance"
    time = duration_text(thermal.warm_up_min)
    end = quantity(thermal.equilibrium_C, "°C", system)
    return f"From {start} the oil takes {time} to 95 % of the way to {end}{' with the cooler' if cooled else ''}"


def duration_text(minutes: float) -> str:
    """A time in words.

    >>> duration_text(42.4), duration_text(349.3)
    ('42 min', '5 h 49 min')
    """
    whole = round(minutes)
    return f"{whole} min" if whole < 120 else f"{whole // 60} h {whole % 60} min"
