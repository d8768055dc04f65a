"""What an oil's label says: ISO viscosity classes and the viscosity index."""

from __future__ import annotations

import numpy as np

from heataudit.physics import viscosity_index_table as table
from heataudit.physics.arrays import Array, Numbers

CLASS_MIDPOINTS = {
    2: 2.2e-6, 3: 3.2e-6, 5: 4.6e-6, 7: 6.8e-6, 10: 10e-6, 15: 15e-6, 22: 22e-6, 32: 32e-6, 46: 46e-6, 68: 68e-6,
    100: 100e-6, 150: 150e-6, 220: 220e-6, 320: 320e-6, 460: 460e-6, 680: 680e-6, 1000: 1000e-6, 1500: 1500e-6,
    2200: 2200e-6, 3200: 3200e-6,
}  # fmt: skip
"""ISO 3448 viscosity grades [-] and their midpoint viscosities [m²/s] at 40 °C."""

CLASS_HALF_WIDTH = 0.1
"""Half-width [-] of a viscosity class, as a share of its midpoint (ISO 3448)."""

LEAST_INDEXED = 2e-6
"""Viscosity at 100 °C [m²/s] below which no viscosity index is defined (ASTM D2270)."""


def class_midpoint(grade: float) -> float:
    """Viscosity at 40 °C [m²/s] in the middle of an ISO viscosity class.

    Parameters
    ----------
    grade
        ISO viscosity grade [mm²/s, as it is named], such as 46.

    Raises
    ------
    ValueError
        The grade is none of ISO 3448.

    Notes
    -----
    Source: ISO 3448:1992, table of classes.

    Examples
    --------
    >>> class_midpoint(46)
    4.6e-05
    """
    if grade not in CLASS_MIDPOINTS:
        allowed = ", ".join(str(known) for known in CLASS_MIDPOINTS)
        raise ValueError(f"ISO VG {grade:g} is not a viscosity grade of ISO 3448; they are {allowed}")
    return CLASS_MIDPOINTS[int(grade)]


def viscosity_class(viscosity_40: float) -> int | None:
    """Give the ISO viscosity grade [-] to which an oil belongs, or None: the classes leave gaps.

    Parameters
    ----------
    viscosity_40
        Kinematic viscosity at 40 °C [m²/s].

    Notes
    -----
    A class reaches from -10 % to +10 % of its midpoint, limits included. Source: ISO 3448:1992, table of classes;
    that the limits belong to the class is from memory.

    Examples
    --------
    >>> viscosity_class(44e-6)
    46
    >>> viscosity_class(38e-6) is None
    True
    """
    rounding = 1e-9
    for grade, midpoint in CLASS_MIDPOINTS.items():
        if abs(viscosity_40 / midpoint - 1) <= CLASS_HALF_WIDTH + rounding:
            return grade
    return None


def _reference_oils(viscosity_100: Array) -> tuple[Array, Array]:
    """Viscosities at 40 °C, L and H of ASTM D2270 [mm²/s], for viscosities at 100 °C [mm²/s]."""
    y = viscosity_100
    above = y > table.Y[-1]
    low = np.where(above, (0.8353 * y + 14.67) * y - 216, np.interp(y, table.Y, table.L))
    high = np.where(above, (0.1684 * y + 11.85) * y - 97, np.interp(y, table.Y, table.H))
    return low, high


def viscosity_index(viscosity_40: Numbers, viscosity_100: Numbers) -> Array:
    """Viscosity index [-] of an oil; NaN where it is not defined.

    Up to 100 (procedure A) VI = 100 (L - U) / (L - H); above (procedure B) VI = 100 + (10^N - 1) / 0.00715 with
    N = (log H - log U) / log Y. U and Y are the viscosities at 40 °C and 100 °C [mm²/s], L and H those at 40 °C of
    the reference oils of index 0 and 100.

    Parameters
    ----------
    viscosity_40
        Kinematic viscosity at 40 °C [m²/s], any shape.
    viscosity_100
        Kinematic viscosity at 100 °C [m²/s], any shape; not defined below 2 mm²/s.

    Notes
    -----
    Source: ASTM D2270 (ISO 2909), 5.1 and 6.1, table 1 interpolated linearly; above 70 mm²/s the polynomials of
    5.1.2.
    """
    u, y = np.asarray(viscosity_40) * 1e6, np.asarray(viscosity_100) * 1e6
    low, high = _reference_oils(y)
    power = np.log(high / u) / np.log(np.maximum(y, 2.0))
    index = np.where(u > high, 100 * (low - u) / (low - high), 100 + (10**power - 1) / 0.00715)
    return np.where(y >= LEAST_INDEXED * 1e6, index, np.nan)[()]


def viscosity_100_from_index(viscosity_40: Numbers, index: Numbers) -> Array:
    """Viscosity at 100 °C [m²/s] of an oil of known viscosity index; NaN where there is none above 2 mm²/s.

    Parameters
    ----------
    viscosity_40
        Kinematic viscosity at 40 °C [m²/s], any shape.
    index
        Viscosity index [-], any shape.

    Notes
    -----
    The root of `viscosity_index`, which rises with the viscosity at 100 °C. Source: ASTM D2270 (ISO 2909).
    """
    from scipy.optimize.elementwise import find_root

    nu40, wanted = np.broadcast_arrays(np.asarray(viscosity_40, float), np.asarray(index, float))

    def excess(logarithm: Array, nu40: Array, wanted: Array) -> Array:
        return viscosity_index(nu40, np.exp(logarithm)) - wanted

    lowest, highest = np.log(LEAST_INDEXED * (1 + 1e-12)), np.log(np.maximum(nu40, 1.01 * LEAST_INDEXED))
    found = find_root(excess, (np.full_like(highest, lowest), highest), args=(nu40, wanted))
    return np.where(found.success, np.exp(found.x), np.nan)[()]
