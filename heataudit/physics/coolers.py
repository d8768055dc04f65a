"""Heat exchangers: effectiveness and number of transfer units, mean temperature difference, coolers by capacity."""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal

import numpy as np

from heataudit.physics.arrays import Array, Numbers

Arrangement = Literal[
    "counterflow",
    "parallel",
    "crossflow",
    "crossflow approximate",
    "crossflow, mixed Cmin",
    "crossflow, mixed Cmax",
    "shell and tube",
]
"""Flow arrangements; `crossflow` has both streams unmixed, `shell and tube` an even number of tube passes per shell."""

REFERENCE_AIR_DENSITY = 1.204
"""Density of air [kg/m³] at which air coolers are rated: 20 °C at sea level."""

AIR_DENSITY_EXPONENT = 0.8
"""Exponent [-] of a cooler's capacity over air density (common practice: turbulent convection, Nu as Re^0.8)."""

MOST_UNITS = 100.0
"""Number of transfer units [-] above which an effectiveness counts as out of reach."""

TINY = 1e-200
"""What stands for 0 [-] where a formula divides by it: the limit is then exact."""


def _gap(ratio: Array) -> Array:
    """How far the capacity ratio [-] is below 1; never nil, so that the formulas hold in the limit."""
    return np.asarray(np.maximum(1.0 - ratio, TINY))


def _counterflow(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of counterflow."""
    gap = _gap(ratio)
    part = np.expm1(-ntu * gap)
    return np.asarray(-part / (gap - ratio * part))[()]


def _parallel(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of parallel flow."""
    return np.asarray(-np.expm1(-ntu * (1.0 + ratio)) / (1.0 + ratio))[()]


def _crossflow(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of crossflow, both streams unmixed, by Mason's series.

    eps = sum over n of P(n + 1, N) P(n + 1, r N) / (r N), P the regularised lower incomplete gamma function.
    """
    from scipy.special import gammainc

    other = np.maximum(ratio * ntu, TINY)
    most = float(np.max(other, initial=0.0))
    orders = np.arange(1, int(most + 9 * np.sqrt(most)) + 10).reshape(-1, *np.ones(np.ndim(other), int))
    terms = gammainc(orders, ntu) * gammainc(orders, other)
    return np.asarray(np.sum(terms, axis=0) / other)[()]


def _crossflow_approximate(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of crossflow, both streams unmixed, by the usual short formula."""
    r = np.maximum(ratio, TINY)
    return np.asarray(-np.expm1(np.power(ntu, 0.22) / r * np.expm1(-r * np.power(ntu, 0.78))))[()]


def _crossflow_mixed_least(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of crossflow, the stream of least capacity rate mixed."""
    r = np.maximum(ratio, TINY)
    return np.asarray(-np.expm1(np.expm1(-r * ntu) / r))[()]


def _crossflow_mixed_most(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of crossflow, the stream of greatest capacity rate mixed."""
    r = np.maximum(ratio, TINY)
    return np.asarray(-np.expm1(r * np.expm1(-ntu)) / r)[()]


def _one_shell(ntu: Array, ratio: Array) -> Array:
    """Effectiveness [-] of one shell pass with an even number of tube passes."""
    root = np.sqrt(1.0 + ratio * ratio)
    climb = np.tanh(0.5 * ntu * root)
    return np.asarray(2.0 * climb / ((1.0 + ratio) * climb + root))[()]


def _shells_in_series(one: Array, ratio: Array, shells: int) -> Array:
    """Effectiveness [-] of equal shells in series in overall counterflow."""
    gap = _gap(ratio)
    part = np.expm1(shells * np.log1p(one * gap / (1.0 - one)))
    return np.asarray(part / (part + gap))[()]


LAWS: dict[str, Callable[[Array, Array], Array]] = {
    "counterflow": _counterflow,
    "parallel": _parallel,
    "crossflow": _crossflow,
    "crossflow approximate": _crossflow_approximate,
    "crossflow, mixed Cmin": _crossflow_mixed_least,
    "crossflow, mixed Cmax": _crossflow_mixed_most,
    "shell and tube": _one_shell,
}


def effectiveness(ntu: Numbers, capacity_ratio: Numbers, arrangement: Arrangement, shells: int = 1) -> Array:
    """Effectiveness [-]: heat over the most that the two inlet temperatures allow.

    Parameters
    ----------
    ntu
        Number of transfer units UA / C_min [-], any shape.
    capacity_ratio
        Lesser over greater capacity rate C_min / C_max [-], any shape, 0 to 1.
    arrangement
        Flow arrangement.
    shells
        Number of equal shells in series [-]; `shell and tube` only, `ntu` is that of all together.

    Notes
    -----
    Source: W. M. Kays and A. L. London, Compact Heat Exchangers, 3rd ed., chapter 2 (from memory); `crossflow` by the
    series of J. L. Mason (1955), exact; `crossflow approximate` is up to 4 % low below NTU 1.

    Examples
    --------
    >>> float(effectiveness(1.0, 1.0, "counterflow"))
    0.5
    """
    units, ratio = np.broadcast_arrays(np.asarray(ntu, float), np.asarray(capacity_ratio, float))
    if arrangement == "shell and tube" and shells > 1:
        return _shells_in_series(_one_shell(units / shells, ratio), ratio, shells)
    law = LAWS[arrangement]
    return law(units, ratio)


def transfer_units(wanted: Numbers, capacity_ratio: Numbers, arrangement: Arrangement, shells: int = 1) -> Array:
    """Number of transfer units UA / C_min [-] that an effectiveness needs; NaN where 100 units do not reach it.

    Parameters
    ----------
    wanted
        Effectiveness [-], any shape, 0 to less than 1.
    capacity_ratio
        Lesser over greater capacity rate [-], any shape, 0 to 1.
    arrangement
        Flow arrangement.
    shells
        Number of equal shells in series [-]; `shell and tube` only.

    Notes
    -----
    The root of `effectiveness`, which rises with the number of transfer units up to what the arrangement can reach.
    """
    from scipy.optimize.elementwise import find_root

    goal, ratio = np.broadcast_arrays(np.asarray(wanted, float), np.asarray(capacity_ratio, float))

    def excess(ntu: Array, goal: Array, ratio: Array) -> Array:
        return effectiveness(ntu, ratio, arrangement, shells) - goal

    found = find_root(excess, (np.zeros_like(goal), np.full_like(goal, MOST_UNITS)), args=(goal, ratio))
    return np.where(found.success, found.x, np.nan)[()]


def log_mean_difference(difference_1: Numbers, difference_2: Numbers) -> Array:
    """Logarithmic mean temperature difference [K]: (d1 - d2) / ln(d1 / d2); their value where both are equal.

    Parameters
    ----------
    difference_1
        Temperature difference at one end of the exchanger [K], any shape, above 0.
    difference_2
        Temperature difference at the other end [K], any shape, above 0.

    Notes
    -----
    Source: definition; Kays and London, chapter 2 (from memory).
    """
    d1, d2 = np.broadcast_arrays(np.asarray(difference_1, float), np.asarray(difference_2, float))
    near = np.abs(d1 - d2) < 1e-6 * np.abs(d2)
    logarithm = np.where(near, 1.0, np.log(d1 / d2))
    return np.asarray(np.where(near, 0.5 * (d1 + d2), (d1 - d2) / logarithm))[()]


def capacity_rate(flow: Numbers, density: Numbers, specific_heat: Numbers) -> Array:
    """Heat that a stream carries per kelvin [W/K]: rho c Q.

    Parameters
    ----------
    flow
        Flow Q [m³/s], any shape.
    density
        Density rho [kg/m³], any shape.
    specific_heat
        Specific heat c [J/(kg·K)], any shape.
    """
    return np.asarray(flow) * density * specific_heat


def oil_inlet_temperature(tank_temperature: Numbers, heat: Numbers, oil_rate: Numbers) -> Array:
    """Temperature [K] of the oil that reaches a cooler: tank + heat / (rho c Q).

    Parameters
    ----------
    tank_temperature
        Tank temperature [K], any shape.
    heat
        Heat that the oil took up since the tank [W], any shape.
    oil_rate
        Capacity rate of the oil [W/K], any shape, above 0.
    """
    return tank_temperature + np.asarray(heat) / oil_rate


def capacity_per_kelvin(heat: Numbers, oil_inlet: Numbers, coolant_inlet: Numbers) -> Array:
    """Capacity [W/K] that takes a heat away: heat / (oil inlet - coolant inlet); infinite without a difference.

    Parameters
    ----------
    heat
        Heat to be taken away [W], any shape; nothing is needed where it is negative.
    oil_inlet
        Oil temperature at the cooler's inlet [K], any shape.
    coolant_inlet
        Temperature of the air or water at the cooler's inlet [K], any shape.
    """
    needed = np.maximum(heat, 0.0)
    difference = np.maximum(np.asarray(oil_inlet) - coolant_inlet, 0.0)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(needed > 0, np.divide(needed, difference), 0.0)[()]


def air_density_factor(density: Numbers) -> Array:
    """Capacity of an air cooler in thin air over its rated one [-]: (rho / 1.204)^0.8, at most 1.

    Parameters
    ----------
    density
        Density of the air at the cooler's inlet [kg/m³], any shape.

    Notes
    -----
    The fan moves the same volume, so the mass falls with density, and the film with its power 0.8 (turbulent
    convection, Dittus and Boelter 1930). Common practice.
    """
    return np.asarray(np.minimum((np.asarray(density) / REFERENCE_AIR_DENSITY) ** AIR_DENSITY_EXPONENT, 1.0))[()]


def effectiveness_of_capacity(capacity: Numbers, oil_rate: Numbers, coolant_rate: Numbers) -> Array:
    """Effectiveness [-] of a cooler of known capacity: capacity / C_min.

    Parameters
    ----------
    capacity
        Heat per kelvin of oil inlet less coolant inlet temperature [W/K], any shape.
    oil_rate
        Capacity rate of the oil [W/K], any shape, above 0.
    coolant_rate
        Capacity rate of the coolant [W/K], any shape, above 0.
    """
    return np.asarray(capacity / np.minimum(oil_rate, coolant_rate))[()]


def exchanger_conductance(
    capacity: Numbers, oil_rate: Numbers, coolant_rate: Numbers, arrangement: Arrangement = "counterflow"
) -> Array:
    """Conductance UA [W/K] of a cooler, from its capacity at rated flows; NaN where no exchanger has that capacity.

    Parameters
    ----------
    capacity
        Heat per kelvin of oil inlet less coolant inlet temperature [W/K], any shape.
    oil_rate
        Capacity rate of the oil [W/K], any shape, above 0.
    coolant_rate
        Capacity rate of the coolant [W/K], any shape, above 0.
    arrangement
        Flow arrangement.
    """
    least, greatest = np.minimum(oil_rate, coolant_rate), np.maximum(oil_rate, coolant_rate)
    wanted = effectiveness_of_capacity(capacity, oil_rate, coolant_rate)
    return transfer_units(wanted, least / greatest, arrangement) * least


def exchanger_capacity(
    conductance: Numbers, oil_rate: Numbers, coolant_rate: Numbers, arrangement: Arrangement = "counterflow"
) -> Array:
    """Heat per kelvin of oil inlet less coolant inlet temperature [W/K]: effectiveness x C_min.

    Parameters
    ----------
    conductance
        Conductance UA [W/K], any shape.
    oil_rate
        Capacity rate of the oil [W/K], any shape, above 0.
    coolant_rate
        Capacity rate of the coolant [W/K], any shape, above 0.
    arrangement
        Flow arrangement.
    """
    least, greatest = np.minimum(oil_rate, coolant_rate), np.maximum(oil_rate, coolant_rate)
    return effectiveness(conductance / least, least / greatest, arrangement) * least
