"""What the two charts over temperature and time share: a plot with the names of its curves at the right."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.report.charts.palette import INK
from heataudit.report.charts.style import MARGIN, SMALL, WIDTH, axes_between, spread, text_size, wrap

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEFT, NAMES, BOTTOM = 0.75, 1.6, 0.55

BEHIND = {"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 0.5}
"""What keeps curves away from a text that lies on them."""


class Curve(NamedTuple):
    """A curve with its name, colour and line style."""

    name: str
    x: NDArray[np.float64]
    y: NDArray[np.float64]
    colour: str
    style: object = "-"


def plot(figure: Figure, top: float, curves: Sequence[Curve], limits: tuple[float, float, float, float]) -> Axes:
    """Axes with curves, named at their right ends; limits are left, right, low, high."""
    written = [wrap(curve.name, NAMES, SMALL, lines=3) for curve in curves]
    width = WIDTH - LEFT - MARGIN - 0.1 - max(text_size(text, SMALL)[0] for text in written)
    axes = axes_between(figure, LEFT, LEFT + width, BOTTOM, top)
    height = top - BOTTOM
    axes.set(xlim=limits[:2], ylim=limits[2:])
    ends = []
    for curve in curves:
        axes.plot(curve.x, curve.y, color=curve.colour, linestyle=curve.style, linewidth=2.0)
        end = float(np.interp(limits[1], curve.x, curve.y))
        ends.append((min(max(end, limits[2]), limits[3]) - limits[2]) / (limits[3] - limits[2]) * height)
    sizes = [text_size(text, SMALL)[1] + 0.05 for text in written]
    for curve, text, y in zip(curves, written, spread(ends, sizes, 0.0, height), strict=True):
        axes.text(
            1 + 0.08 / width, y / height, text, transform=axes.transAxes, fontsize=SMALL, va="center",
            color=curve.colour, linespacing=1.15,
        )  # fmt: skip
    return axes


def limit_line(axes: Axes, value: float, text: str, vertical: bool) -> None:
    """A dashed line at a limit, with its name along it."""
    line = axes.axvline if vertical else axes.axhline
    line(value, color=INK, linestyle=(0, (5, 3)), linewidth=1.0)
    if vertical:
        low, high = axes.get_xlim()
        left = value > low + 0.6 * (high - low)
        axes.annotate(
            text, (value, 1), xycoords=("data", "axes fraction"), xytext=(-4 if left else 4, -2),
            textcoords="offset points", ha="right" if left else "left", va="top", fontsize=SMALL, bbox=BEHIND,
        )  # fmt: skip
    else:
        axes.annotate(
            text, (1, value), xycoords=("axes fraction", "data"), xytext=(-2, 3), textcoords="offset points",
            ha="right", va="bottom", fontsize=SMALL, bbox=BEHIND,
        )  # fmt: skip
