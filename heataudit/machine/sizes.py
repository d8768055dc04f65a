"""Nominal sizes as they are written on drawings: hoses, tubes and spool valves."""

from __future__ import annotations

import re

from heataudit.machine.units import units_of

DASH_SIZES = (3, 4, 5, 6, 8, 10, 12, 16, 20, 24, 32)
"""Dash sizes [1/16 in] of hoses in common use."""

DASH_OF_DN = {6: 4, 8: 5, 10: 6, 12: 8, 16: 10, 20: 12, 25: 16, 32: 20, 40: 24, 50: 32}
"""Nominal diameters DN [mm] and the dash sizes [1/16 in] that they stand for."""

TUBE_WALLS = {
    6: (1, 1.5), 8: (1, 1.5, 2), 10: (1, 1.5, 2), 12: (1, 1.5, 2, 2.5), 14: (1.5, 2, 2.5), 15: (1, 1.5, 2),
    16: (1.5, 2, 2.5, 3), 18: (1.5, 2), 20: (2, 2.5, 3, 4), 22: (1.5, 2, 2.5), 25: (2, 2.5, 3, 4, 5), 28: (2, 2.5, 3),
    30: (2.5, 3, 4, 5), 35: (2, 2.5, 3, 4), 38: (3, 4, 5, 6), 42: (2, 3, 4),
}  # fmt: skip
"""Outside diameters [mm] of precision steel tubes and their walls [mm] in common use (EN 10305-4)."""

FLOW_OF_NG = {6: 60, 10: 120, 16: 300, 25: 650}
"""Nominal sizes NG of directional valves and the flow [L/min] of one fully open path at 10 bar."""

DASH = re.compile(r"[-−–]\s*(\d+)(?:\.0)?")
DN = re.compile(r"DN\s*(\d+)", re.IGNORECASE)
TUBE = re.compile(r"(\d+(?:\.\d+)?)\s*[x×*]\s*(\d+(?:\.\d+)?)", re.IGNORECASE)
NG = re.compile(r"(?:NG)?\s*(\d+)(?:\.0)?", re.IGNORECASE)


def inside_diameter(size: str) -> float:
    """Inside diameter [m] of a nominal size: `-8` (dash size, 1/16 in), `DN20`, or `25x3` (tube, outside x wall in mm).

    A dash size is the inside diameter in sixteenths of an inch; a DN that stands for a dash size has its diameter,
    another DN n is n mm; a tube's inside diameter is outside less two walls. Common practice (ISO 4397 for DN, from
    memory).

    Raises
    ------
    ValueError
        The text is none of the three, or the wall leaves no bore.

    Examples
    --------
    >>> [round(inside_diameter(size), 5) for size in ("-8", "DN20", "25x3")]
    [0.0127, 0.01905, 0.019]
    """
    text = size.strip().replace(",", ".")
    inch = units_of("length")["in"].factor
    if found := DASH.fullmatch(text):
        diameter = int(found[1]) / 16 * inch
    elif found := DN.fullmatch(text):
        nominal = int(found[1])
        diameter = DASH_OF_DN[nominal] / 16 * inch if nominal in DASH_OF_DN else nominal / 1000
    elif found := TUBE.fullmatch(text):
        diameter = (float(found[1]) - 2 * float(found[2])) / 1000
    else:
        raise ValueError("it must be a dash size (-8), a nominal size (DN20) or a tube, outside x wall in mm (25x3)")
    if diameter <= 0:
        raise ValueError("it leaves no bore; the two walls must be thinner than the outside diameter")
    return diameter


def path_flow(size: str) -> float:
    """Flow [m³/s] of one fully open metering path at 10 bar of a directional valve of nominal size NG.

    Raises
    ------
    ValueError
        The text is no known size.

    Examples
    --------
    >>> round(path_flow("NG10") * 60e3, 9)
    120.0
    """
    found = NG.fullmatch(size.strip())
    if not found or int(found[1]) not in FLOW_OF_NG:
        known = ", ".join(f"NG{n}" for n in FLOW_OF_NG)
        raise ValueError(f"it must be one of {known}; for another size leave it blank and give the flow P-A")
    return FLOW_OF_NG[int(found[1])] * units_of("flow")["L/min"].factor


def larger_sizes(size: str) -> tuple[str, ...]:
    """Sizes of the same series with a larger bore, smallest first; none where the series ends.

    A tube is followed by one tube for each larger outside diameter: the thinnest wall whose ratio to the outside
    diameter, and with it the pressure that the tube bears, is not less.

    Parameters
    ----------
    size
        The size as it is written on a drawing.

    Raises
    ------
    ValueError
        The text is no size.

    Examples
    --------
    >>> larger_sizes("-16"), larger_sizes("DN32"), larger_sizes("30x3")
    (('-20', '-24', '-32'), ('DN40', 'DN50'), ('35x4', '38x4'))
    """
    bore = inside_diameter(size)
    if found := TUBE.fullmatch(size.strip().replace(",", ".")):
        outside, wall = float(found[1]), float(found[2])
        series = []
        for larger, walls in TUBE_WALLS.items():
            bearing = [thickness for thickness in walls if thickness / larger >= wall / outside]
            if larger > outside and bearing:
                series.append(f"{larger}x{min(bearing):g}")
    elif size.strip().startswith("-"):
        series = [f"-{dash}" for dash in DASH_SIZES]
    else:
        series = [f"DN{nominal}" for nominal in DASH_OF_DN]
    return tuple(candidate for candidate in series if inside_diameter(candidate) > bore)
