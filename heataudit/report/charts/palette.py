"""One colour per meaning, the same in every chart.

The colours of the energy groups differ in lightness by 5 or more, so that they stay apart in grey print, and were
chosen by search so that any two stay apart for people who see red, green or blue weakly (tests/report/test_palette.py).
"""

from __future__ import annotations

GROUP_COLOURS = {
    "load": "#017159", "pump": "#3B398F", "idle": "#A7C4E6", "bypass": "#309AF5", "metering": "#EA9A02",
    "lines": "#F4D574", "overflow": "#D83915", "lowering": "#634B79", "actuators": "#788E58", "other": "#35302B",
}  # fmt: skip
"""Useful work and the loss groups."""

INK = "#1F2A33"
"""Text, axes, shaft power."""

QUIET = "#66717A"
"""Text and lines that stay in the background."""

BAND = "#EEF1F3"
"""Every second phase of a timeline."""

HEAT = "#9C1F4D"
"""Heat that comes in, oil without a cooler."""

TANK = "#8C979F"
"""Heat that the tank gives off."""

COOLER = "#006C9E"
"""Heat that tank and cooler give off, oil with the cooler."""

WITHIN, BEYOND = "#8FA3B0", HEAT
"""What keeps a guideline, and what does not."""

PUMP_STYLES = ("-", (0, (4, 1.5)), (0, (1.2, 1.2)), (0, (6, 1.5, 1.2, 1.5)))
"""Line styles that tell pumps apart."""


def on(colour: str) -> str:
    """Colour of text that is readable on a colour.

    >>> on("#F4D574"), on("#3B398F")
    ('#0B1117', '#FFFFFF')
    """
    return max(("#0B1117", "#FFFFFF"), key=lambda text: contrast(text, colour))


def contrast(first: str, second: str) -> float:
    """Contrast ratio [-] of two colours (WCAG 2.1, 1.4.3).

    >>> round(contrast("#FFFFFF", "#000000"), 6)
    21.0
    """
    darker, lighter = sorted((luminance(first), luminance(second)))
    return (lighter + 0.05) / (darker + 0.05)


def luminance(colour: str) -> float:
    """Relative luminance [-] of an sRGB colour (IEC 61966-2-1).

    >>> round(luminance("#FFFFFF"), 6), luminance("#000000")
    (1.0, 0.0)
    """
    parts = [int(colour[k : k + 2], 16) / 255 for k in (1, 3, 5)]
    red, green, blue = (p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue
