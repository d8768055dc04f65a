"""Boxes of a chart's texts as they are drawn, for finding labels that overlap or are cut off."""

from __future__ import annotations

from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from matplotlib.figure import Figure
    from matplotlib.text import Text
    from matplotlib.transforms import Bbox

SLACK = 0.5
"""What boxes may overlap, or lie outside [px]: half a pixel of rounding."""


def text_boxes(figure: Figure) -> list[tuple[Text, Bbox]]:
    """All texts that are drawn, with their boxes [px]."""
    from matplotlib.axis import Axis
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.text import Text

    canvas = FigureCanvasAgg(figure)
    canvas.draw()  # type: ignore[no-untyped-call]
    renderer = canvas.get_renderer()  # type: ignore[no-untyped-call]
    hidden = set()
    for axis in figure.findobj(Axis):
        low, high = sorted(axis.get_view_interval())
        slack = 1e-9 * (high - low)
        for tick in [*axis.get_major_ticks(), *axis.get_minor_ticks()]:
            if not low - slack <= tick.get_loc() <= high + slack or not axis.get_visible():
                hidden |= {tick.label1, tick.label2}
    for axes in figure.axes:
        if not axes.axison:
            hidden |= {text for axis in (axes.xaxis, axes.yaxis) for text in axis.findobj(Text)}
    drawn = [
        text for text in figure.findobj(Text) if text.get_visible() and text.get_text().strip() and text not in hidden
    ]
    return [(text, text.get_window_extent(renderer)) for text in drawn]


def overlaps(figure: Figure) -> list[tuple[str, str]]:
    """Pairs of texts whose boxes overlap."""
    pairs = combinations(text_boxes(figure), 2)
    return [(a.get_text(), b.get_text()) for (a, first), (b, second) in pairs if _overlap(first, second)]


def _overlap(first: Bbox, second: Bbox) -> bool:
    low = np.maximum(first.min, second.min)
    high = np.minimum(first.max, second.max)
    return bool(np.all(high - low > SLACK))


def clipped(figure: Figure) -> list[str]:
    """Texts that reach beyond the figure."""
    page = figure.bbox
    return [
        text.get_text() for text, box in text_boxes(figure)
        if np.any(np.subtract(page.min, box.min) > SLACK) or np.any(np.subtract(box.max, page.max) > SLACK)
    ]  # fmt: skip
