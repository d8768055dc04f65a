"""The known units: their dimensions, their factors to SI, the ways in which people write them.

Inside the program pressures are in Pa, flows in m³/s, displacements in m³/rev, rotational speeds in rev/s,
temperatures in K and shares are fractions.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from functools import cache
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

Number = TypeVar("Number", float, NDArray[np.float64])


@dataclass(frozen=True)
class Unit:
    """A unit of a dimension: SI value = (value + zero) x factor."""

    name: str
    dimension: str
    factor: float
    zero: float = 0.0

    def to_si(self, value: Number) -> Number:
        """Value in SI units of a value in this unit.

        >>> unit("°C", "temperature").to_si(60.0)
        333.15
        """
        return (value + self.zero) * self.factor

    def from_si(self, value: Number) -> Number:
        """Value in this unit of a value in SI units.

        >>> round(unit("psi", "pressure").from_si(1e7), 3)
        1450.377
        """
        return value / self.factor - self.zero


class UnknownUnit(ValueError):
    """The text is no unit of the dimension."""


@cache
def units_of(dimension: str) -> dict[str, Unit]:
    """Units of a dimension by name, the usual one first.

    >>> list(units_of("flow"))[:3]
    ['L/min', 'm³/h', 'gpm']
    """
    return {name: Unit(name, dimension, *definition) for name, definition in _definitions()[dimension].items()}


@cache
def _definitions() -> dict[str, dict[str, tuple[float, ...]]]:
    """Dimension -> unit -> factor to SI, and the zero where a scale does not start at nought."""
    from scipy import constants as c

    per_minute, per_hour = 1 / c.minute, 1 / c.hour
    fahrenheit = c.degree_Fahrenheit
    sorted_by_dimension: dict[str, dict[str, tuple[float, ...]]] = {
        "number": {"-": (1.0,)},
        "share": {"%": (0.01,), "-": (1.0,)},
        "length": {"mm": (c.milli,), "cm": (c.centi,), "m": (1.0,), "in": (c.inch,), "ft": (c.foot,)},
        "area": {"m²": (1.0,), "cm²": (c.centi**2,), "mm²": (c.milli**2,), "ft²": (c.foot**2,), "in²": (c.inch**2,)},
        "volume": {"L": (c.liter,), "m³": (1.0,), "gal": (c.gallon,)},
        "mass": {"kg": (1.0,), "lb": (c.pound,), "t": (c.metric_ton,)},
        "time": {"s": (1.0,), "min": (c.minute,), "h": (c.hour,), "ms": (c.milli,)},
        "hours per year": {"h/yr": (1.0,)},
        "pressure": {
            "bar": (c.bar,), "MPa": (c.mega,), "kPa": (c.kilo,), "psi": (c.psi,), "GPa": (c.giga,), "Pa": (1.0,),
        },
        "inverse pressure": {
            "1/GPa": (c.nano,), "1/MPa": (c.micro,), "1/bar": (1 / c.bar,), "1/psi": (1 / c.psi,), "1/Pa": (1.0,),
        },
        "flow": {
            "L/min": (c.liter * per_minute,), "m³/h": (per_hour,), "gpm": (c.gallon * per_minute,),
            "L/h": (c.liter * per_hour,), "gal/h": (c.gallon * per_hour,), "m³/s": (1.0,),
        },
        "displacement": {
            "cm³/rev": (c.centi**3,), "in³/rev": (c.inch**3,), "L/rev": (c.liter,), "m³/rev": (1.0,),
        },
        "force": {"kN": (c.kilo,), "N": (1.0,), "lbf": (c.pound_force,)},
        "torque": {"N·m": (1.0,), "kN·m": (c.kilo,), "lbf·ft": (c.pound_force * c.foot,)},
        "power": {"kW": (c.kilo,), "W": (1.0,), "hp": (c.horsepower,), "Btu/h": (c.Btu * per_hour,)},
        "energy": {"kJ": (c.kilo,), "MJ": (c.mega,), "kWh": (c.kilo * c.hour,), "Btu": (c.Btu,), "J": (1.0,)},
        "temperature": {
            "°C": (1.0, c.zero_Celsius), "°F": (fahrenheit, c.zero_Celsius / fahrenheit - 32.0), "K": (1.0,),
        },
        "temperature difference": {"K": (1.0,), "°C": (1.0,), "°F": (fahrenheit,)},
        "temperature rate": {"K/min": (per_minute,), "°C/min": (per_minute,), "°F/min": (fahrenheit * per_minute,)},
        "viscosity": {"mm²/s": (c.milli**2,), "cSt": (c.milli**2,), "m²/s": (1.0,)},
        "density": {"kg/m³": (1.0,), "kg/L": (c.kilo,), "g/cm³": (c.kilo,), "lb/ft³": (c.pound / c.foot**3,)},
        "speed": {"mm/s": (c.milli,), "m/s": (1.0,), "in/s": (c.inch,), "ft/s": (c.foot,)},
        "rotational speed": {"rpm": (per_minute,), "rev/s": (1.0,)},
        "revolutions": {"rev": (1.0,)},
        "specific heat": {
            "kJ/(kg·K)": (c.kilo,), "J/(kg·K)": (1.0,), "Btu/(lb·°F)": (c.Btu / (c.pound * fahrenheit),),
        },
        "conductance": {"kW/K": (c.kilo,), "W/K": (1.0,), "Btu/(h·°F)": (c.Btu * per_hour / fahrenheit,)},
        "heat transfer coefficient": {
            "W/(m²·K)": (1.0,), "Btu/(h·ft²·°F)": (c.Btu * per_hour / (c.foot**2 * fahrenheit),),
        },
        "specific fuel consumption": {
            "g/kWh": (c.gram / (c.kilo * c.hour),), "kg/kWh": (1 / (c.kilo * c.hour),),
            "lb/(hp·h)": (c.pound / (c.horsepower * c.hour),),
        },
    }  # fmt: skip
    return sorted_by_dimension


SYNONYMS = {
    "-": ("", "1", "–", "—", "number"),
    "%": ("percent", "pct"),
    "mm": ("millimetre", "millimeter"), "in": ("inch", "inches", '"', "″"), "ft": ("foot", "feet", "'", "′"),
    "L": ("l", "litre", "liter", "dm3"), "gal": ("USgal", "gallon", "gallons"), "lb": ("lbs", "lbm"),
    "s": ("sec", "second", "seconds"), "min": ("minute", "minutes"), "h": ("hr", "hour", "hours"),
    "h/yr": ("h/year", "h/a", "hours/year", "hr/yr"),
    "psi": ("psig", "lbf/in2", "lb/in2"), "bar": ("barg", "bars"),
    "1/GPa": ("GPa-1",), "1/MPa": ("MPa-1",), "1/bar": ("bar-1",), "1/psi": ("psi-1",), "1/Pa": ("Pa-1",),
    "L/min": ("lpm", "lit/min", "litre/min", "liter/min", "dm3/min"), "L/h": ("lph", "L/hr"),
    "gpm": ("USgpm", "gal/min", "USgal/min"), "gal/h": ("gph", "gal/hr", "USgal/h"),
    "cm³/rev": ("cm3/r", "cm3/U", "cm3", "cc/rev", "mL/rev", "ccm/rev"), "in³/rev": ("in3/r", "in3", "cu.in/rev"),
    "N·m": ("N-m",), "lbf·ft": ("ft·lbf", "lb·ft", "ft·lb", "lbf-ft", "ft-lbf", "lb-ft", "ft-lb"),
    "°C": ("C", "Celsius"), "°F": ("F", "Fahrenheit"), "K": ("°K", "kelvin"),
    "K/min": ("K/minute",),
    "cSt": ("centistokes",),
    "rpm": ("rev/min", "r/min", "1/min", "min-1", "U/min"), "rev/s": ("rps", "1/s", "r/s"),
    "rev": ("revs", "revolutions", "turns"),
    "kJ/(kg·K)": ("kJ/kg/K", "kJ/(kg·°C)"), "J/(kg·K)": ("J/kg/K", "J/(kg·°C)"), "Btu/(lb·°F)": ("Btu/lb/°F",),
    "kW/K": ("kW/°C",), "W/K": ("W/°C",), "Btu/(h·°F)": ("Btu/hr/°F", "Btu/h/°F", "Btu/(hr·°F)"),
    "W/(m²·K)": ("W/m2/K", "W/(m2·°C)"), "Btu/(h·ft²·°F)": ("Btu/hr/ft2/°F", "Btu/h/ft2/°F", "Btu/(hr·ft2·°F)"),
    "lb/(hp·h)": ("lb/hp-hr", "lb/hp/h", "lb/(hp·hr)"),
}  # fmt: skip
"""Unit -> other ways to write it; signs, superscripts, dots and blanks need no entry."""


def _plain(text: str) -> str:
    """The text without what people write in many ways: superscripts, dots, blanks, brackets, the degree sign.

    >>> _plain("kJ / (kg·K)"), _plain("in³/rev"), _plain("deg F"), _plain("W m⁻² K⁻¹")
    ('kJ/kgK', 'in3/rev', '°F', 'Wm-2K-1')
    """
    text = unicodedata.normalize("NFKC", text).replace("−", "-").replace("º", "°")
    text = re.sub(r"deg\.?\s*(?=[CFK]\b)", "°", text, flags=re.IGNORECASE)
    return re.sub(r"[\s·⋅∙•*.()^]", "", text)


@cache
def _spellings(dimension: str) -> tuple[dict[str, Unit], dict[str, Unit]]:
    """Units by plain spelling: exactly, and with letter case folded."""
    exact: dict[str, Unit] = {}
    for name, known in units_of(dimension).items():
        for spelling in (name, *SYNONYMS.get(name, ())):
            exact.setdefault(_plain(spelling), known)
    folded: dict[str, Unit] = {}
    for spelling, known in exact.items():
        folded.setdefault(spelling.casefold(), known)
    return exact, folded


def unit(text: str, dimension: str) -> Unit:
    """Find the unit that a text names.

    Letter case does not matter, save where it would change milli into mega.

    Parameters
    ----------
    text
        What was typed, such as `mm2/s`, `N m` or `degC`.
    dimension
        What it must measure, such as "pressure".

    Raises
    ------
    UnknownUnit
        The text is no unit of the dimension.

    Examples
    --------
    >>> unit("l/min", "flow").name, unit("MPA", "pressure").name, unit("Nm", "torque").name
    ('L/min', 'MPa', 'N·m')
    >>> unit("mPa", "pressure")  # doctest: +IGNORE_EXCEPTION_DETAIL
    Traceback (most recent call last):
        ...
    UnknownUnit: "mPa" is not a unit of pressure; use bar, MPa, kPa, psi, GPa or Pa
    """
    plain = _plain(text)
    exact, folded = _spellings(dimension)
    found = exact.get(plain)
    if found is None:
        found = folded.get(plain.casefold())
        if found is not None and _milli_or_mega(plain, found.name):
            found = None
    if found is None:
        raise UnknownUnit(f'"{text.strip()}" is not a unit of {dimension}; use {one_of(list(units_of(dimension)))}')
    return found


def is_unit(text: str, dimension: str) -> bool:
    """Whether a text is a unit of a dimension.

    >>> is_unit("psi", "pressure"), is_unit("psi", "force")
    (True, False)
    """
    try:
        unit(text, dimension)
    except UnknownUnit:
        return False
    return True


def _milli_or_mega(typed: str, name: str) -> bool:
    """Whether the typed text could mean a thousandth where the unit is a million-fold, or the other way round."""
    mixed = typed.upper() != typed and typed.lower() != typed
    return mixed and typed[:1] in "mM" and name[:1] in "mM" and typed[0] != name[0]


def one_of(words: list[str], quote: str = "") -> str:
    """Words as a list in a sentence.

    >>> one_of(["a", "b", "c"], quote='"')
    '"a", "b" or "c"'
    """
    quoted = [f"{quote}{word}{quote}" for word in words]
    return quoted[0] if len(quoted) == 1 else f"{', '.join(quoted[:-1])} or {quoted[-1]}"


US_UNITS = {
    "mm": ("length", "in"), "m": ("length", "ft"), "m²": ("area", "ft²"), "L": ("volume", "gal"),
    "m³": ("volume", "gal"), "kg": ("mass", "lb"), "bar": ("pressure", "psi"), "MPa": ("pressure", "psi"),
    "L/min": ("flow", "gpm"), "L/h": ("flow", "gal/h"), "cm³/rev": ("displacement", "in³/rev"),
    "kN": ("force", "lbf"), "N·m": ("torque", "lbf·ft"), "kW": ("power", "hp"), "kJ": ("energy", "Btu"),
    "°C": ("temperature", "°F"), "K": ("temperature difference", "°F"), "K/min": ("temperature rate", "°F/min"),
    "kg/m³": ("density", "lb/ft³"), "mm/s": ("speed", "in/s"), "m/s": ("speed", "ft/s"),
    "kW/K": ("conductance", "Btu/(h·°F)"), "kJ/(kg·K)": ("specific heat", "Btu/(lb·°F)"),
    "W/(m²·K)": ("heat transfer coefficient", "Btu/(h·ft²·°F)"), "g/kWh": ("specific fuel consumption", "lb/(hp·h)"),
}  # fmt: skip
"""Unit of an SI report -> its dimension and the unit of a US report; a unit that is missing is the same in both."""


@dataclass(frozen=True)
class Shown:
    """How a report shows a quantity: shown value = value x factor + shift."""

    unit: str
    factor: float = 1.0
    shift: float = 0.0


def shown(unit_name: str, system: str) -> Shown:
    """How a report in `system` ("SI" or "US") shows a quantity that the program gives in `unit_name`.

    >>> shown("bar", "SI").unit, shown("bar", "US").unit, round(shown("bar", "US").factor, 4)
    ('bar', 'psi', 14.5038)
    >>> celsius = shown("°C", "US")
    >>> round(60 * celsius.factor + celsius.shift, 9)
    140.0
    """
    if system == "SI" or unit_name not in US_UNITS:
        return Shown(unit_name)
    dimension, us_name = US_UNITS[unit_name]
    given, wanted = units_of(dimension)[unit_name], units_of(dimension)[us_name]
    return Shown(us_name, given.factor / wanted.factor, given.zero * given.factor / wanted.factor - wanted.zero)
