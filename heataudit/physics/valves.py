"""Two-port valves: the coefficients of each law and the law itself.

A law gives the pressure drop [Pa] that a flow needs as  constant + linear q + quadratic q |q|,  or its inverse.
"""

from __future__ import annotations

import numpy as np

from heataudit.physics.arrays import Array, Numbers


def throttle_coefficient(rated_flow: Numbers, rated_drop: Numbers, opening: Numbers = 1.0) -> Array:
    """Coefficient k [Pa·s²/m⁶] of dp = k Q |Q|: rated drop / (rated flow x opening)²; infinite where shut.

    Parameters
    ----------
    rated_flow
        Flow through the fully open path at the rated drop [m³/s], any shape.
    rated_drop
        Rated drop [Pa], any shape.
    opening
        Share of the path that is open [-], any shape, 0 to 1.

    Notes
    -----
    Turbulent orifice, on the oil of the rating. Source: Bernoulli and Torricelli; ISO 4411 measures such curves.

    Examples
    --------
    >>> k = throttle_coefficient(1e-3, 5e5)
    >>> float(throttle_flow(20e5, k))
    0.002
    """
    with np.errstate(divide="ignore"):
        return np.divide(rated_drop, np.square(np.asarray(rated_flow) * opening))


def throttle_drop(flow: Numbers, quadratic: Numbers) -> Array:
    """Pressure drop [Pa] of a throttle: k Q |Q|.

    Parameters
    ----------
    flow
        Flow [m³/s], signed, any shape.
    quadratic
        Coefficient k [Pa·s²/m⁶], any shape, finite.
    """
    return np.asarray(quadratic) * flow * np.abs(flow)


def throttle_flow(drop: Numbers, quadratic: Numbers) -> Array:
    """Flow [m³/s] through a throttle: sqrt(dp / k), with the sign of dp; 0 where shut (k infinite).

    Parameters
    ----------
    drop
        Pressure drop [Pa], signed, any shape.
    quadratic
        Coefficient k [Pa·s²/m⁶], any shape.
    """
    return np.asarray(np.sign(drop) * np.sqrt(np.abs(drop) / np.asarray(quadratic)))


def check_drop(flow: Numbers, opening_pressure: Numbers, quadratic: Numbers) -> Array:
    """Pressure drop [Pa] of an open check valve: p0 + k Q²; at rest the opening pressure.

    Parameters
    ----------
    flow
        Flow [m³/s], 0 or more, any shape.
    opening_pressure
        Opening pressure p0 [Pa], any shape.
    quadratic
        Coefficient k [Pa·s²/m⁶], any shape, finite; its rated drop is counted above p0.
    """
    return opening_pressure + np.asarray(quadratic) * np.square(flow)


def check_flow(drop: Numbers, opening_pressure: Numbers, quadratic: Numbers) -> Array:
    """Flow [m³/s] through a check valve: sqrt((dp - p0) / k), nothing below p0 and nothing backwards.

    Parameters
    ----------
    drop
        Pressure drop [Pa], signed, any shape.
    opening_pressure
        Opening pressure p0 [Pa], 0 or more, any shape.
    quadratic
        Coefficient k [Pa·s²/m⁶], any shape.
    """
    return np.asarray(np.sqrt(np.maximum(np.asarray(drop) - opening_pressure, 0.0) / quadratic))


def proportional_coefficient(rated_flow: Numbers, rated_drop: Numbers) -> Array:
    """Override S [Pa·s/m³] of a relief valve, dp = p0 + S Q: rated drop / rated flow.

    Parameters
    ----------
    rated_flow
        Rated flow [m³/s], any shape.
    rated_drop
        Pressure rise from cracking to the rated flow [Pa], any shape.

    Notes
    -----
    An override in proportion to flow is common practice.
    """
    return np.asarray(rated_drop) / rated_flow


def cracking_pressure(setting: Numbers, override: Numbers, set_at_flow: Numbers = 0.0) -> Array:
    """Opening pressure p0 [Pa] of a relief valve that was set while a flow passed: setting - S x flow.

    Parameters
    ----------
    setting
        Setting [Pa], any shape.
    override
        Override S [Pa·s/m³], any shape.
    set_at_flow
        Flow at which the setting was read [m³/s], any shape; 0 is cracking.
    """
    return setting - np.asarray(override) * set_at_flow


def relief_drop(flow: Numbers, opening_pressure: Numbers, override: Numbers) -> Array:
    """Pressure drop [Pa] of an open relief valve: p0 + S Q.

    Parameters
    ----------
    flow
        Flow [m³/s], 0 or more, any shape.
    opening_pressure
        Opening pressure p0 [Pa], any shape.
    override
        Override S [Pa·s/m³], any shape.
    """
    return np.asarray(opening_pressure) + override * np.asarray(flow)


def relief_flow(drop: Numbers, opening_pressure: Numbers, override: Numbers) -> Array:
    """Flow [m³/s] over a relief valve: (dp - p0) / S, nothing below p0.

    Parameters
    ----------
    drop
        Pressure drop [Pa], signed, any shape.
    opening_pressure
        Opening pressure p0 [Pa], any shape.
    override
        Override S [Pa·s/m³], any shape, above 0.
    """
    return np.asarray(np.maximum(np.asarray(drop) - opening_pressure, 0.0) / override)


def viscous_coefficient(
    rated_flow: Numbers, rated_drop: Numbers, viscosity: Numbers, rated_viscosity: Numbers = 32e-6
) -> Array:
    """Coefficient R [Pa·s/m³] of a filter or cooler, dp = R Q: rated drop / rated flow x nu / rated nu.

    Parameters
    ----------
    rated_flow
        Rated flow [m³/s], any shape.
    rated_drop
        Drop at the rated flow and viscosity [Pa], any shape.
    viscosity
        Kinematic viscosity of the oil [m²/s], any shape.
    rated_viscosity
        Kinematic viscosity of the rating [m²/s], any shape.

    Notes
    -----
    Laminar flow through narrow passages (Darcy's law; ISO 3968 rates filters so). The law holds in both directions.
    """
    return np.asarray(rated_drop) / rated_flow * viscosity / rated_viscosity


def flow_control_flow(drop: Numbers, quadratic: Numbers, set_flow: Numbers) -> Array:
    """Flow [m³/s] through a flow control valve: the throttle law, but never more than the set flow forwards.

    Parameters
    ----------
    drop
        Pressure drop [Pa], signed, any shape.
    quadratic
        Coefficient k of the throttle law [Pa·s²/m⁶], any shape.
    set_flow
        Set flow [m³/s], 0 or more, any shape.
    """
    return np.asarray(np.minimum(throttle_flow(drop, quadratic), set_flow))
