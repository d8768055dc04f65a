"""Reservoir: the heat that a tank gives off through its wetted surfaces.

The wall is taken to be as warm as the oil. An oil film of some 60 W/(m²·K) inside (common practice, order of
magnitude) would lower the heat of a tank in still air by about 15 %, which is as much as the correlations differ.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from heataudit.physics import air
from heataudit.physics.arrays import Array, Numbers
from heataudit.physics.constants import STANDARD_GRAVITY, STEFAN_BOLTZMANN

EMISSIVITY = 0.9
"""Emissivity [-] of a painted tank (common practice)."""

FIXED_COEFFICIENTS = {"enclosed": 6.0, "draught": 15.0, "fan": 25.0}
"""Heat transfer coefficients [W/(m²·K)] by air movement (common practice); `still` is computed."""

FILLED_SHARE = 0.8
"""Share [-] of a tank that oil fills where the tank's dimensions are not given (common practice)."""

LENGTH_OVER_WIDTH = 1.5
"""Length over width and height [-] of a tank whose dimensions are not given (common practice)."""


def default_dimensions(volume: float) -> tuple[float, float, float]:
    """Length, width and height [m] of a tank that is known by its oil only: 1.5 : 1 : 1, holding volume / 0.8.

    Parameters
    ----------
    volume
        Oil volume [m³].

    Examples
    --------
    >>> default_dimensions(1.2)
    (1.5, 1.0, 1.0)
    """
    side = float(np.cbrt(volume / FILLED_SHARE / LENGTH_OVER_WIDTH))
    return LENGTH_OVER_WIDTH * side, side, side


def rayleigh(surface_temperature: Numbers, air_temperature: Numbers, length: Numbers, pressure: Numbers) -> Array:
    """Rayleigh number [-] of air at a surface: g |dT| L³ Pr / (T nu²), properties at the mean temperature T.

    Parameters
    ----------
    surface_temperature
        Temperature of the surface [K], any shape.
    air_temperature
        Temperature of the air [K], any shape.
    length
        Characteristic length L [m], any shape.
    pressure
        Absolute pressure of the air [Pa], any shape.

    Notes
    -----
    Source: definition; Incropera and DeWitt, Fundamentals of Heat and Mass Transfer, chapter 9.
    """
    film = 0.5 * (np.asarray(surface_temperature) + air_temperature)
    kinematic = air.viscosity(film) / air.density(pressure, film)
    difference = np.abs(np.asarray(surface_temperature) - air_temperature)
    buoyancy = STANDARD_GRAVITY * np.asarray(difference) * length**3
    return buoyancy * air.prandtl(film) / (film * kinematic * kinematic)


def vertical_nusselt(rayleigh: Numbers, prandtl: Numbers) -> Array:
    """Nusselt number [-] of a vertical plate: {0.825 + 0.387 Ra^(1/6) / [1 + (0.492/Pr)^(9/16)]^(8/27)}².

    Parameters
    ----------
    rayleigh
        Rayleigh number on the height [-], any shape, up to 1e12.
    prandtl
        Prandtl number [-], any shape.

    Notes
    -----
    Source: S. W. Churchill and H. H. S. Chu, Int. J. Heat Mass Transfer 18 (1975) 1323, eq. 9 (number from memory).
    """
    spread = (1.0 + (0.492 / np.asarray(prandtl, float)) ** (9 / 16)) ** (8 / 27)
    return np.square(0.825 + 0.387 * np.asarray(rayleigh, float) ** (1 / 6) / spread)


def horizontal_nusselt(rayleigh: Numbers, rising: bool | np.ndarray) -> Array:
    """Nusselt number [-] of a horizontal plate; its length is area over perimeter.

    Where the air rises freely from the plate (warm face up, cold face down) the larger of 0.54 Ra^(1/4) and
    0.15 Ra^(1/3), else 0.27 Ra^(1/4).

    Parameters
    ----------
    rayleigh
        Rayleigh number on area over perimeter [-], any shape, 1e4 to 1e10.
    rising
        Whether the air leaves the plate freely, any shape.

    Notes
    -----
    Source: W. H. McAdams, Heat Transmission, 3rd ed. (1954), chapter 7; Incropera and DeWitt, chapter 9. There the
    first two forms meet with a step of 6 % at Ra 1e7; the larger of the two has none, so that the heat of a tank
    rises smoothly with its temperature.
    """
    quarter, third = np.power(rayleigh, 1 / 4), np.cbrt(rayleigh)
    return np.asarray(np.where(rising, np.maximum(0.54 * quarter, 0.15 * third), 0.27 * quarter))[()]


def radiation_coefficient(
    surface_temperature: Numbers, ambient_temperature: Numbers, emissivity: Numbers = EMISSIVITY
) -> Array:
    """Heat transfer coefficient of radiation [W/(m²·K)]: eps sigma (T² + Ta²) (T + Ta).

    Parameters
    ----------
    surface_temperature
        Temperature of the surface T [K], any shape.
    ambient_temperature
        Temperature of the surroundings Ta [K], any shape.
    emissivity
        Emissivity of the surface eps [-], any shape.

    Notes
    -----
    Source: Stefan and Boltzmann; a grey body in large surroundings.
    """
    squares = np.square(surface_temperature) + np.square(ambient_temperature)
    total = np.asarray(surface_temperature) + ambient_temperature
    return emissivity * STEFAN_BOLTZMANN * squares * total


def vertical_coefficient(
    surface_temperature: Numbers, air_temperature: Numbers, height: Numbers, pressure: Numbers
) -> Array:
    """Heat transfer coefficient of natural convection at a vertical wall [W/(m²·K)].

    Parameters
    ----------
    surface_temperature
        Temperature of the wall [K], any shape.
    air_temperature
        Temperature of the air [K], any shape.
    height
        Height of the wall [m], any shape.
    pressure
        Absolute pressure of the air [Pa], any shape.

    Notes
    -----
    Source: `vertical_nusselt`, `rayleigh`.
    """
    film = 0.5 * (np.asarray(surface_temperature) + air_temperature)
    number = rayleigh(surface_temperature, air_temperature, height, pressure)
    return vertical_nusselt(number, air.prandtl(film)) * air.thermal_conductivity(film) / height


def horizontal_coefficient(
    surface_temperature: Numbers, air_temperature: Numbers, length: Numbers, pressure: Numbers, facing_up: bool
) -> Array:
    """Heat transfer coefficient of natural convection at a horizontal face [W/(m²·K)].

    Parameters
    ----------
    surface_temperature
        Temperature of the face [K], any shape.
    air_temperature
        Temperature of the air [K], any shape.
    length
        Area over perimeter of the face [m], any shape.
    pressure
        Absolute pressure of the air [Pa], any shape.
    facing_up
        Whether the face looks up.

    Notes
    -----
    Source: `horizontal_nusselt`, `rayleigh`.
    """
    film = 0.5 * (np.asarray(surface_temperature) + air_temperature)
    number = rayleigh(surface_temperature, air_temperature, length, pressure)
    rising = (np.asarray(surface_temperature) >= air_temperature) == facing_up
    return horizontal_nusselt(number, rising) * air.thermal_conductivity(film) / length


@dataclass(frozen=True)
class Tank:
    """A tank and the air around it.

    Parameters
    ----------
    volume
        Oil volume [m³].
    length
        Inside length [m].
    width
        Inside width [m].
    height
        Inside height [m]; oil wets the walls up to volume / (length x width), at most this.
    raised
        Whether the floor gives off heat too.
    air_movement
        `enclosed`, `still`, `draught` or `fan`.
    given_coefficient
        Heat transfer coefficient of all surfaces [W/(m²·K)], or None.
    extra_surface
        Area of lines, cylinders and manifolds that give off heat [m²]: at the coefficient of the walls.
    pressure
        Absolute pressure of the air [Pa].
    emissivity
        Emissivity of the surfaces [-].
    """

    volume: float
    length: float
    width: float
    height: float
    raised: bool = False
    air_movement: str = "still"
    given_coefficient: float | None = None
    extra_surface: float = 0.0
    pressure: float = air.SEA_LEVEL_PRESSURE
    emissivity: float = EMISSIVITY

    @property
    def wetted_height(self) -> float:
        """Height of the oil [m]."""
        return min(self.volume / (self.length * self.width), self.height)

    @property
    def wall_area(self) -> float:
        """Wetted area of the four walls [m²]."""
        return 2 * (self.length + self.width) * self.wetted_height

    @property
    def plan_area(self) -> float:
        """Area of the top, and of the floor [m²]."""
        return self.length * self.width

    def coefficients(self, oil_temperature: Numbers, ambient_temperature: Numbers) -> tuple[Array, Array, Array]:
        """Heat transfer coefficients of walls, top and floor [W/(m²·K)].

        Parameters
        ----------
        oil_temperature
            Oil temperature [K], any shape.
        ambient_temperature
            Temperature of the air and the surroundings [K], any shape.
        """
        oil, ambient = np.broadcast_arrays(np.asarray(oil_temperature, float), np.asarray(ambient_temperature, float))
        given = self.given_coefficient
        fixed = FIXED_COEFFICIENTS.get(self.air_movement) if given is None else given
        if fixed is not None:
            same = np.full(oil.shape, fixed)
            return same, same, same
        plate = self.plan_area / (2 * (self.length + self.width))
        radiation = radiation_coefficient(oil, ambient, self.emissivity)
        walls = vertical_coefficient(oil, ambient, self.wetted_height, self.pressure)
        top = horizontal_coefficient(oil, ambient, plate, self.pressure, facing_up=True)
        floor = horizontal_coefficient(oil, ambient, plate, self.pressure, facing_up=False)
        return walls + radiation, top + radiation, floor + radiation

    def conductance(self, oil_temperature: Numbers, ambient_temperature: Numbers) -> Array:
        """Heat given off per kelvin [W/K]: sum of coefficient x area over walls, top, floor if raised, extra surface.

        Parameters
        ----------
        oil_temperature
            Oil temperature [K], any shape.
        ambient_temperature
            Temperature of the air and the surroundings [K], any shape.
        """
        walls, top, floor = self.coefficients(oil_temperature, ambient_temperature)
        floor_area = self.plan_area if self.raised else 0.0
        return walls * (self.wall_area + self.extra_surface) + top * self.plan_area + floor * floor_area

    def heat(self, oil_temperature: Numbers, ambient_temperature: Numbers) -> Array:
        """Heat given off [W]: conductance x (oil - ambient), negative where the oil is colder.

        Parameters
        ----------
        oil_temperature
            Oil temperature [K], any shape.
        ambient_temperature
            Temperature of the air and the surroundings [K], any shape.
        """
        difference = np.asarray(oil_temperature) - ambient_temperature
        return self.conductance(oil_temperature, ambient_temperature) * difference
