"""Hydraulic oil: viscosity, density, specific heat and conductivity.

All correlations hold for petroleum oils.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from heataudit.physics.arrays import Array, Numbers
from heataudit.physics.constants import KELVIN
from heataudit.physics.grades import class_midpoint, viscosity_100_from_index


def walther_constants(
    viscosity_1: Numbers, viscosity_2: Numbers, temperature_1: Numbers = 313.15, temperature_2: Numbers = 373.15
) -> tuple[Array, Array]:
    """Give the constants A and B [-] of log10 log10(nu + 0.7) = A - B log10 T through two points, nu in mm²/s, T in K.

    Parameters
    ----------
    viscosity_1
        Kinematic viscosity at the first temperature [m²/s], any shape.
    viscosity_2
        Kinematic viscosity at the second temperature [m²/s], any shape.
    temperature_1
        First temperature [K], any shape; 40 °C by default.
    temperature_2
        Second temperature [K], any shape; 100 °C by default.

    Notes
    -----
    Source: ASTM D341 (Walther's equation).
    """
    z_1, z_2 = (np.log10(np.log10(np.asarray(nu) * 1e6 + 0.7)) for nu in (viscosity_1, viscosity_2))
    log_1, log_2 = np.log10(temperature_1), np.log10(temperature_2)
    b = (z_1 - z_2) / (log_2 - log_1)
    return z_1 + b * log_1, b


def viscosity(temperature: Numbers, a: Numbers, b: Numbers) -> Array:
    """Kinematic viscosity [m²/s]: log10 log10(nu + 0.7) = A - B log10 T, nu in mm²/s, T in K.

    Parameters
    ----------
    temperature
        Oil temperature [K], any shape.
    a
        Constant A [-], any shape.
    b
        Constant B [-], any shape.

    Notes
    -----
    Valid above 2 mm²/s and above the pour point; some 10 % off where it is carried 40 K beyond its two points.
    Source: ASTM D341 (Walther's equation).
    """
    return (10 ** (10 ** (np.asarray(a) - b * np.log10(temperature))) - 0.7) * 1e-6


def temperature_of_viscosity(viscosity: Numbers, a: Numbers, b: Numbers) -> Array:
    """Temperature [K] at which an oil has a kinematic viscosity: the inverse of `viscosity`.

    Parameters
    ----------
    viscosity
        Kinematic viscosity [m²/s], any shape.
    a
        Constant A [-], any shape.
    b
        Constant B [-], any shape.

    Notes
    -----
    Source: ASTM D341 (Walther's equation), solved for T.
    """
    z = np.log10(np.log10(np.asarray(viscosity) * 1e6 + 0.7))
    return np.asarray(10 ** ((a - z) / b))


def pressure_factor(pressure: Numbers, coefficient: Numbers) -> Array:
    """Viscosity under pressure as a multiple [-] of that at zero gauge: exp(alpha p), 1 where p is negative.

    Parameters
    ----------
    pressure
        Gauge pressure [Pa], any shape.
    coefficient
        Pressure-viscosity coefficient alpha [1/Pa], any shape; 15 to 25 per GPa for mineral oils.

    Notes
    -----
    Valid to some 500 bar. Source: C. Barus, Am. J. Science 45 (1893) 87.
    """
    return np.asarray(np.exp(np.maximum(pressure, 0.0) * coefficient))


def density(temperature: Numbers, density_15: Numbers) -> Array:
    """Density [kg/m³]: rho15 exp(-a dT (1 + 0.8 a dT)), a = 0.6278 / rho15, dT from 15 °C.

    Parameters
    ----------
    temperature
        Oil temperature [K], any shape.
    density_15
        Density at 15 °C [kg/m³], any shape; 801 to 1163.

    Notes
    -----
    At atmospheric pressure. Source: API MPMS 11.1 (ASTM D1250, ISO 91), lubricating oils, table 54D.
    """
    expansion = 0.6278 / np.asarray(density_15)
    change = expansion * (np.asarray(temperature) - (KELVIN + 15))
    return np.asarray(density_15) * np.exp(-change * (1 + 0.8 * change))


def relative_density(density_15: Numbers) -> Array:
    """Density relative to that of water [-], both at 60 °F: rho15 / 999.0.

    Parameters
    ----------
    density_15
        Density at 15 °C [kg/m³], any shape.

    Notes
    -----
    Water at 60 °F: 999.0 kg/m³. The oil's change from 15 °C to 60 °F (0.04 %) is left out.
    """
    return np.asarray(density_15) / 999.0


def specific_heat(temperature: Numbers, density_15: Numbers) -> Array:
    """Specific heat [J/(kg·K)]: c = (0.388 + 0.00045 t_F) / sqrt(s) Btu/(lb·°F), s the relative density at 60 °F.

    Parameters
    ----------
    temperature
        Oil temperature [K], any shape; 0 to 200 °C.
    density_15
        Density at 15 °C [kg/m³], any shape; 750 to 960.

    Notes
    -----
    Good to 2 to 4 %. Source: C. S. Cragoe, NBS Miscellaneous Publication 97 (1929), after secondary texts; the
    accuracy is from memory.
    """
    fahrenheit = 1.8 * (np.asarray(temperature) - KELVIN) + 32
    return (0.388 + 0.00045 * fahrenheit) / np.sqrt(relative_density(density_15)) * 4186.8


def thermal_conductivity(temperature: Numbers, density_15: Numbers) -> Array:
    """Thermal conductivity [W/(m·K)]: k = 0.1172 (1 - 0.00054 t) / s, t in °C, s the relative density at 60 °F.

    Parameters
    ----------
    temperature
        Oil temperature [K], any shape; 0 to 200 °C.
    density_15
        Density at 15 °C [kg/m³], any shape; 750 to 960.

    Notes
    -----
    Good to 10 %. Source: C. S. Cragoe, NBS Miscellaneous Publication 97 (1929); form and accuracy from memory.
    """
    celsius = np.asarray(temperature) - KELVIN
    return 0.1172 * (1 - 0.00054 * celsius) / relative_density(density_15)


@dataclass(frozen=True)
class Oil:
    """One oil.

    Parameters
    ----------
    viscosity_40
        Kinematic viscosity at 40 °C [m²/s].
    viscosity_100
        Kinematic viscosity at 100 °C [m²/s].
    density_15
        Density at 15 °C [kg/m³].
    given_specific_heat
        Specific heat [J/(kg·K)] where it is known, else None: Cragoe's formula.
    pressure_coefficient
        Pressure-viscosity coefficient [1/Pa].
    bulk_modulus
        Bulk modulus [Pa].

    Raises
    ------
    ValueError
        The viscosity at 100 °C is unknown (NaN) or not between 0.3 mm²/s and that at 40 °C.
    """

    viscosity_40: float
    viscosity_100: float
    density_15: float = 870.0
    given_specific_heat: float | None = None
    pressure_coefficient: float = 20e-9
    bulk_modulus: float = 1.4e9

    def __post_init__(self) -> None:
        """Refuse viscosities through which no curve falls with temperature."""
        if not 0.3e-6 < self.viscosity_100 < self.viscosity_40:
            raise ValueError(
                f"the viscosity at 100 °C is {self.viscosity_100 * 1e6:g} mm²/s; it must be between 0.3 mm²/s and that "
                f"at 40 °C, {self.viscosity_40 * 1e6:g} mm²/s"
            )

    @classmethod
    def from_settings(
        cls,
        *,
        viscosity_grade: float = 46,
        viscosity_index: float = 100.0,
        viscosity_at_40: float | None = None,
        viscosity_at_100: float | None = None,
        density: float = 870.0,
        specific_heat: float | None = None,
        pressure_viscosity_coefficient: float = 20e-9,
        bulk_modulus: float = 1.4e9,
    ) -> Oil:
        """Oil as its label tells it; viscosities that are given go before grade and index.

        Parameters
        ----------
        viscosity_grade
            ISO viscosity grade [mm²/s, as it is named].
        viscosity_index
            Viscosity index [-].
        viscosity_at_40
            Kinematic viscosity at 40 °C [m²/s], or None: the midpoint of the grade.
        viscosity_at_100
            Kinematic viscosity at 100 °C [m²/s], or None: by the index.
        density
            Density at 15 °C [kg/m³].
        specific_heat
            Specific heat [J/(kg·K)], or None: Cragoe's formula.
        pressure_viscosity_coefficient
            Pressure-viscosity coefficient [1/Pa].
        bulk_modulus
            Bulk modulus [Pa].

        Raises
        ------
        ValueError
            The grade is none of ISO 3448, or no viscosity at 100 °C belongs to the index.
        """
        nu40 = class_midpoint(viscosity_grade) if viscosity_at_40 is None else viscosity_at_40
        nu100 = float(viscosity_100_from_index(nu40, viscosity_index)) if viscosity_at_100 is None else viscosity_at_100
        return cls(nu40, nu100, density, specific_heat, pressure_viscosity_coefficient, bulk_modulus)

    @cached_property
    def walther(self) -> tuple[Array, Array]:
        """Constants A and B [-] of Walther's equation."""
        return walther_constants(self.viscosity_40, self.viscosity_100)

    def viscosity(self, temperature: Numbers, pressure: Numbers = 0.0) -> Array:
        """Kinematic viscosity [m²/s].

        Parameters
        ----------
        temperature
            Oil temperature [K], any shape.
        pressure
            Gauge pressure [Pa], any shape.
        """
        factor = pressure_factor(pressure, self.pressure_coefficient)
        return viscosity(temperature, *self.walther) * factor

    def temperature_of_viscosity(self, viscosity: Numbers) -> Array:
        """Temperature [K] at which the oil has a kinematic viscosity at zero gauge.

        Parameters
        ----------
        viscosity
            Kinematic viscosity [m²/s], any shape.
        """
        return temperature_of_viscosity(viscosity, *self.walther)

    def density(self, temperature: Numbers) -> Array:
        """Density [kg/m³].

        Parameters
        ----------
        temperature
            Oil temperature [K], any shape.
        """
        return density(temperature, self.density_15)

    def specific_heat(self, temperature: Numbers) -> Array:
        """Specific heat [J/(kg·K)].

        Parameters
        ----------
        temperature
            Oil temperature [K], any shape.
        """
        if self.given_specific_heat is not None:
            return np.full(np.shape(temperature), self.given_specific_heat)
        return specific_heat(temperature, self.density_15)
