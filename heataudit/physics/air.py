"""Air: the standard atmosphere over altitude, and properties for natural convection.

Dry air as a perfect gas, R = 287.05287 J/(kg·K). The constants of ISO 2533:1975 are from memory.
"""

from __future__ import annotations

import numpy as np

from heataudit.physics.arrays import Array, Numbers

GAS_CONSTANT = 287.05287
"""Specific gas constant of dry air [J/(kg·K)] (ISO 2533)."""

SEA_LEVEL_PRESSURE = 101325.0
"""Pressure of the standard atmosphere at sea level [Pa] (ISO 2533)."""

SPECIFIC_HEAT = 3.5 * GAS_CONSTANT
"""Specific heat of air at constant pressure [J/(kg·K)], kappa = 1.4 (ISO 2533)."""


def standard_temperature(altitude: Numbers) -> Array:
    """Temperature [K] of the standard atmosphere: 288.15 - 0.0065 H.

    Parameters
    ----------
    altitude
        Geopotential altitude H [m], any shape, -2000 to 11000.

    Notes
    -----
    Source: ISO 2533:1975.
    """
    return 288.15 - 0.0065 * np.asarray(altitude)


def standard_pressure(altitude: Numbers) -> Array:
    """Pressure [Pa, absolute] of the standard atmosphere: 101325 (T / 288.15)^5.25588.

    Parameters
    ----------
    altitude
        Geopotential altitude H [m], any shape, -2000 to 11000.

    Notes
    -----
    Source: ISO 2533:1975.
    """
    return np.asarray(SEA_LEVEL_PRESSURE * (standard_temperature(altitude) / 288.15) ** 5.25588)[()]


def density(pressure: Numbers, temperature: Numbers) -> Array:
    """Density of air [kg/m³]: p / (R T).

    Parameters
    ----------
    pressure
        Absolute pressure p [Pa], any shape.
    temperature
        Air temperature T [K], any shape.

    Notes
    -----
    Source: perfect gas, R as in ISO 2533:1975.
    """
    return np.asarray(pressure) / (GAS_CONSTANT * np.asarray(temperature))


def viscosity(temperature: Numbers) -> Array:
    """Dynamic viscosity of air [Pa·s]: 1.458e-6 T^1.5 / (T + 110.4).

    Parameters
    ----------
    temperature
        Air temperature T [K], any shape, 200 to 500.

    Notes
    -----
    Source: Sutherland's formula as in ISO 2533:1975 and the US Standard Atmosphere 1976, eq. 51.
    """
    t = np.asarray(temperature, float)
    return 1.458e-6 * t**1.5 / (t + 110.4)


def thermal_conductivity(temperature: Numbers) -> Array:
    """Thermal conductivity of air [W/(m·K)]: 2.648151e-3 T^1.5 / (T + 245.4 x 10^(-12/T)).

    Parameters
    ----------
    temperature
        Air temperature T [K], any shape, 200 to 500.

    Notes
    -----
    Source: ISO 2533:1975; the US Standard Atmosphere 1976, eq. 53, has 2.64638e-3.
    """
    t = np.asarray(temperature, float)
    return np.asarray(2.648151e-3 * t**1.5 / (t + 245.4 * np.power(10.0, -12 / t)))[()]


def prandtl(temperature: Numbers) -> Array:
    """Prandtl number of air [-]: mu c / k.

    Parameters
    ----------
    temperature
        Air temperature [K], any shape, 200 to 500.
    """
    return viscosity(temperature) * SPECIFIC_HEAT / thermal_conductivity(temperature)
