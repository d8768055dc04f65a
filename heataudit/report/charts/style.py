"""What all charts share: figures in inches, measured text, titles, saving."""

from __future__ import annotations

import math
import re
import warnings
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any, cast

from heataudit.report.charts.palette import INK, QUIET
from heataudit.report.safe import printable

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

WIDTH = 7.5
"""Of a chart [in]: a page's width between its margins."""

MARGIN = 0.12
"""Free space round a chart [in]."""

SMALL, NORMAL, TITLE = 8.0, 9.0, 11.5
"""Font sizes [pt]."""

DPI = 200

RC = {
    "font.family": ["DejaVu Sans"], "font.size": NORMAL, "text.color": INK, "text.parse_math": False,
    "axes.edgecolor": QUIET, "axes.labelcolor": INK, "axes.linewidth": 0.8, "axes.spines.top": False,
    "axes.spines.right": False, "axes.unicode_minus": False, "xtick.color": QUIET, "ytick.color": QUIET,
    "xtick.labelsize": SMALL, "ytick.labelsize": SMALL, "xtick.labelcolor": INK, "ytick.labelcolor": INK,
    "hatch.linewidth": 0.6, "svg.hashsalt": "heataudit", "svg.fonttype": "path", "path.simplify": True,
}  # fmt: skip


@contextmanager
def chart_style() -> Iterator[None]:
    """Settings under which charts are drawn and saved."""
    import matplotlib

    with matplotlib.rc_context(cast(Any, RC)), warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph .* missing")  # a name in a script that the font lacks
        yield


def titled_figure(title: str, remark: str, body: float) -> tuple[Figure, float]:
    """A figure that says at its top what it shows, in up to three lines, and a remark below.

    Parameters
    ----------
    title
        The finding, in a sentence.
    remark
        How to read the drawing; "" for none.
    body
        Height of the drawing below [in].

    Returns
    -------
    The figure, and the distance [in] from its bottom to the top of the body.
    """
    from matplotlib.figure import Figure

    parts = [(wrap(text, WIDTH - 2 * MARGIN, size, bold, lines=3), size, bold, colour) for text, size, bold, colour in (
        (title, TITLE, True, INK), (remark, SMALL, False, QUIET)
    ) if text]  # fmt: skip
    height = body + MARGIN + 0.05 + sum(text_size(text, size, bold)[1] + 0.05 for text, size, bold, _ in parts)
    figure = Figure(figsize=(WIDTH, height), facecolor="white")
    top = height - MARGIN
    for text, size, bold, colour in parts:
        figure.text(
            MARGIN / WIDTH, top / height, text, fontsize=size, fontweight="bold" if bold else "normal", color=colour,
            va="top", ha="left", linespacing=1.25,
        )  # fmt: skip
        top -= text_size(text, size, bold)[1] + 0.05
    return figure, body


def axes_between(figure: Figure, left: float, right: float, bottom: float, top: float) -> Axes:
    """Axes between distances [in] from the figure's left and bottom."""
    width, height = figure.get_size_inches()
    return figure.add_axes((left / width, bottom / height, (right - left) / width, (top - bottom) / height))


def drawing(figure: Figure) -> Axes:
    """Axes over the whole figure without frame or ticks; its units are inches."""
    width, height = figure.get_size_inches()
    axes = figure.add_axes((0, 0, 1, 1))
    axes.set(xlim=(0, width), ylim=(0, height))
    axes.axis("off")
    return axes


@cache
def text_size(text: str, size: float = NORMAL, bold: bool = False) -> tuple[float, float]:
    """Width and height [in] of a text of one or more lines."""
    from matplotlib.font_manager import FontProperties
    from matplotlib.textpath import TextToPath

    font = FontProperties(family="DejaVu Sans", size=size, weight="bold" if bold else "normal")
    measure = TextToPath().get_text_width_height_descent
    with chart_style():
        widths = [measure(line, font, False)[0] for line in text.split("\n")]
    return max(widths) / 72, len(widths) * size * 1.25 / 72


def wrap(text: str, width: float, size: float = NORMAL, bold: bool = False, lines: int = 2) -> str:
    """A text in lines no wider than a width [in]; of what is too long for the last one the middle goes.

    Names in a workbook often begin alike, so their ends are kept.
    """
    unbroken = re.sub(r"(?<=[\d–]) (?=[%°a-zA-Z])", "\N{NO-BREAK SPACE}", printable(text))
    words, found = unbroken.split(" "), [""]
    for word in words:
        longer = f"{found[-1]} {word}".strip()
        if text_size(longer, size, bold)[0] <= width or not found[-1]:
            found[-1] = longer
        else:
            found.append(word)
    if len(found) > lines:
        found = [*found[: lines - 1], " ".join(found[lines - 1 :])]
    return "\n".join(_cut(line, width, size, bold) for line in found)


def _cut(line: str, width: float, size: float, bold: bool) -> str:
    if text_size(line, size, bold)[0] <= width:
        return line
    kept = len(line)
    shorter = line
    while kept > 2 and text_size(shorter, size, bold)[0] > width:
        kept -= 1
        start = kept * 2 // 5
        shorter = f"{line[:start].rstrip()}…{line[len(line) - (kept - start) :].lstrip()}"
    return shorter


def spread(wanted: Sequence[float], sizes: Sequence[float], low: float, high: float) -> list[float]:
    """Middles of labels along a line, as near to those wanted as they may be without touching.

    >>> spread([1.0, 1.1], [1.0, 1.0], 0.0, 4.0)
    [0.55, 1.55]
    """
    order = sorted(range(len(wanted)), key=lambda k: wanted[k])
    blocks: list[tuple[list[int], float]] = []

    def middle(members: list[int]) -> float:
        """Centre of a block of labels that stand one above the other."""
        offset, wishes, total = 0.0, 0.0, sum(sizes[k] for k in members)
        for k in members:
            wishes += wanted[k] - (offset + sizes[k] / 2 - total / 2)
            offset += sizes[k]
        return min(max(wishes / len(members), low + total / 2), max(high - total / 2, low + total / 2))

    for k in order:
        members = [k]
        while blocks:
            before, centre = blocks[-1]
            top = centre + sum(sizes[j] for j in before) / 2
            if top <= middle(members) - sum(sizes[j] for j in members) / 2 + 1e-12:
                break
            members = [*before, *members]
            blocks.pop()
        blocks.append((members, middle(members)))
    placed = [0.0] * len(wanted)
    for members, centre in blocks:
        start = centre - sum(sizes[k] for k in members) / 2
        for k in members:
            placed[k] = start + sizes[k] / 2
            start += sizes[k]
    return placed


def nice_top(value: float) -> float:
    """A limit of an axis just above a value that is not negative."""
    return value * 1.06 if math.isfinite(value) and value > 0 else 1.0


def nothing_to_show(title: str, text: str) -> Figure:
    """A sentence in place of a drawing."""
    figure, _ = titled_figure(title, "", 1.0)
    figure.text(0.5, 0.45, text, ha="center", va="center", color=QUIET)
    return figure


def save(figure: Figure, folder: Path, name: str) -> Path:
    """Write a chart as PNG and as SVG; the PNG's path."""
    picture = folder / f"{name}.png"
    png: dict[str, Any] = {"Software": None}
    figure.savefig(picture, dpi=DPI, metadata=png)
    figure.savefig(folder / f"{name}.svg", metadata={"Date": None})
    return picture
