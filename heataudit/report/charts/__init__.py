"""Charts: one file each as PNG and SVG, named after what it shows."""

from __future__ import annotations

from collections.abc import Callable
from importlib import import_module
from pathlib import Path

from heataudit.audit.model import Audit
from heataudit.report.quantities import System

CHARTS = (
    "energy-flow", "losses-ranked", "cycle-timeline", "pressure-flow-rectangles", "line-velocities", "heat-balance",
    "warm-up", "cooler-curves", "cooler-drop",
)  # fmt: skip
"""Charts by name; each is drawn by the module of that name."""


def chart_files() -> list[str]:
    """Names of all files that `write_charts` may write."""
    return [f"{name}.{kind}" for name in CHARTS for kind in ("png", "svg")]


def write_charts(
    audit: Audit, folder: Path, system: System, tell: Callable[[str], None] = lambda text: None
) -> dict[str, Path]:
    """Draw all charts of which the audit has something to show.

    Parameters
    ----------
    audit
        The answers.
    folder
        Where to write.
    system
        "SI" or "US".
    tell
        Hears what is being drawn.

    Returns
    -------
    Paths of the PNG files by name.
    """
    from heataudit.report.charts.style import chart_style, save

    pictures = {}
    with chart_style():
        for name in CHARTS:
            tell(f"charts/{name}")
            figure = import_module(f"{__name__}.{name.replace('-', '_')}").draw(audit, system)
            if figure is not None:
                pictures[name] = save(figure, folder, name)
    return pictures
