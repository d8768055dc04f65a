"""Numbers and texts as a report shows them: SI or US units, to sensible figures."""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import cache
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from heataudit.audit.figures import sig
from heataudit.machine.units import US_UNITS, Shown, shown

System = Literal["SI", "US"]

SUFFIXES = {
    "_kW_K": "kW/K", "_W_m2K": "W/(m²·K)", "_kg_m3": "kg/m³", "_mm2_s": "mm²/s", "_mm_s": "mm/s", "_m_s": "m/s",
    "_L_min": "L/min", "_kWh": "kWh", "_rpm": "rpm", "_percent": "%", "_bar": "bar", "_min": "min", "_mm": "mm",
    "_kW": "kW", "_kJ": "kJ", "_kg": "kg", "_m": "m", "_s": "s", "_C": "°C", "_K": "K", "_L": "L",
}  # fmt: skip
"""End of a name -> its unit; the longer ends come first."""


def unit_of(key: str) -> str:
    """Unit with which a column's name ends, "" where it has none.

    >>> unit_of("velocity_m_s"), unit_of("offered_kW_K"), unit_of("share")
    ('m/s', 'kW/K', '')
    """
    return next((unit for suffix, unit in SUFFIXES.items() if key.endswith(suffix)), "")


def convert(values: float | NDArray[np.float64], unit: str, system: System) -> tuple[NDArray[np.float64], str]:
    """Values in a unit of the program as a report shows them, and the unit shown.

    Parameters
    ----------
    values
        Any shape [the unit].
    unit
        As in `SUFFIXES`.
    system
        "SI" or "US".
    """
    way = shown(unit, system)
    return np.asarray(values, float) * way.factor + way.shift, way.unit


def quantity(value: float | None, unit: str, system: System, digits: int = 3) -> str:
    """A number with its unit to three significant figures; a dash where there is none.

    >>> quantity(4.4775, "kW", "SI"), quantity(60.0, "°C", "US"), quantity(None, "bar", "SI")
    ('4.48 kW', '140 °F', '–')
    """
    if value is None or not np.isfinite(value):
        return "–"
    number, name = convert(value, unit, system)
    return f"{grouped(float(number), digits)} {name}".strip()


def grouped(value: float, digits: int = 3) -> str:
    """A number to some significant figures, thousands apart.

    >>> grouped(12345.6), grouped(0.0123456)
    ('12,300', '0.0123')
    """
    text = sig(value, digits)
    whole, point, rest = text.partition(".")
    return f"{int(whole):,}{point}{rest}" if abs(value) >= 1000 else text


def number_format(value: float) -> str:
    """Spreadsheet format that shows a number to about three significant figures.

    >>> number_format(12345.6), number_format(12.3), number_format(0.0123), number_format(0.0)
    ('#,##0', '0.0', '0.0000', '0')
    """
    if not np.isfinite(value) or value == 0:
        return "0"
    size = abs(value)
    if size >= 99.95:
        return "#,##0"
    if size < 5e-5:
        return "0.0E+0"
    decimals = int(np.clip(2 - np.floor(np.log10(float(f"{size:.2e}"))), 0, 4))
    return "0." + "0" * decimals


LIVE_FORMAT = "[>=99.95]#,##0;[>=9.995]0.0;0.000"
"""Format of a cell with a formula, whose size is not known beforehand."""


def restate(text: str, system: System, keep: Iterable[str] = ()) -> str:
    """A sentence of the audit with its numbers in the report's units.

    Parameters
    ----------
    text
        A sentence with numbers and units of the program.
    system
        "SI" or "US".
    keep
        Names of the user's own in which nothing is changed.

    Examples
    --------
    >>> restate("60 °C at Lift 2 m, 12 m up", "US", ["Lift 2 m"])
    '140 °F at Lift 2 m, 39.4 ft up'
    """
    if system == "SI":
        return text
    names = sorted({name for name in keep if name}, key=len, reverse=True)
    guarded = "|".join(re.escape(name) for name in names)
    pattern = re.compile(f"(?P<name>{guarded})|{_measure()}" if guarded else _measure())
    return pattern.sub(_restated, text)


@cache
def _measure() -> str:
    units = "|".join(re.escape(name) for name in sorted(US_UNITS, key=len, reverse=True))
    return rf"(?<![\w.,])(?P<number>[-−]?\d+(?:\.\d+)?) (?P<unit>{units})(?![\w/·²³°(])"


def _restated(found: re.Match[str]) -> str:
    if found["unit"] is None:
        return found[0]
    way: Shown = shown(found["unit"], "US")
    return f"{sig(float(found['number'].replace('−', '-')) * way.factor + way.shift)} {way.unit}"
