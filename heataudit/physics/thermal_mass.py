"""One thermal mass: the oil and steel of a machine as a body of one temperature, C dT/dt = P - UA (T - Ta)."""

from __future__ import annotations

import numpy as np

from heataudit.physics.arrays import Array, Numbers

STEEL_SPECIFIC_HEAT = 460.0
"""Specific heat of steel [J/(kg·K)] (common practice)."""


def heat_capacity(volume: Numbers, density: Numbers, specific_heat: Numbers, steel_mass: Numbers = 0.0) -> Array:
    """Heat capacity of oil and steel together [J/K]: rho V c + 460 J/(kg·K) x steel.

    Parameters
    ----------
    volume
        Oil volume V [m³], any shape.
    density
        Density of the oil rho [kg/m³], any shape.
    specific_heat
        Specific heat of the oil c [J/(kg·K)], any shape.
    steel_mass
        Mass of steel that warms with the oil [kg], any shape.
    """
    return np.asarray(volume) * density * specific_heat + STEEL_SPECIFIC_HEAT * np.asarray(steel_mass)


def steady_temperature(ambient: Numbers, heat: Numbers, conductance: Numbers) -> Array:
    """Temperature [K] at which as much heat leaves as enters: Ta + P / UA.

    Parameters
    ----------
    ambient
        Ambient temperature Ta [K], any shape.
    heat
        Heat that enters P [W], any shape.
    conductance
        Heat given off per kelvin UA [W/K], any shape, above 0.
    """
    return ambient + np.asarray(heat) / conductance


def temperature_after(time: Numbers, start: Numbers, steady: Numbers, time_constant: Numbers) -> Array:
    """Temperature [K] some time after the start: T_steady + (T_start - T_steady) exp(-t / tau).

    Parameters
    ----------
    time
        Time t [s], any shape.
    start
        Temperature at the start [K], any shape.
    steady
        Steady temperature [K], any shape.
    time_constant
        Time constant tau = C / UA [s], any shape.
    """
    return np.asarray(steady + (np.asarray(start) - steady) * np.exp(-np.asarray(time) / time_constant))[()]


def time_to_reach(temperature: Numbers, start: Numbers, steady: Numbers, time_constant: Numbers) -> Array:
    """Time [s] to reach a temperature between start and steady: the inverse of `temperature_after`; else infinite.

    Parameters
    ----------
    temperature
        Temperature to be reached [K], any shape.
    start
        Temperature at the start [K], any shape.
    steady
        Steady temperature [K], any shape.
    time_constant
        Time constant C / UA [s], any shape.
    """
    way, left = np.asarray(steady, float) - start, np.asarray(steady, float) - temperature
    with np.errstate(divide="ignore", invalid="ignore"):
        share = np.divide(left, way)
        reached = (share > 0) & (share <= 1)
        return np.asarray(np.where(reached, -time_constant * np.log(share), np.inf))[()]
