"""Units of the answers, and numbers as a practitioner reads them."""

from __future__ import annotations

import math

BAR = 1e5
"""One bar [Pa]."""

L_MIN = 1e-3 / 60
"""One litre a minute [m³/s]."""

KWH = 3.6e6
"""One kilowatt-hour [J]."""

HOUR = 3600.0
"""One hour [s]."""


def sig(value: float, digits: int = 3) -> str:
    """A number to three significant figures, never with an exponent.

    Parameters
    ----------
    value
        Any number [any unit].
    digits
        Significant figures [-].

    Examples
    --------
    >>> sig(12345.6), sig(0.012345), sig(99.96), sig(0.0), sig(-0.4)
    ('12300', '0.0123', '100', '0', '-0.4')
    """
    if value == 0 or not math.isfinite(value):
        return f"{value:g}"
    rounded = float(f"{value:.{digits - 1}e}")
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
    text = f"{rounded:.{decimals}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text
