"""Pumps and their drives: slip, torque, power and what the drive takes in."""

from __future__ import annotations

import numpy as np

from heataudit.physics.arrays import Array, Numbers

DIESEL_DENSITY = 840.0
"""Density of diesel fuel [kg/m³] (common practice)."""


def viscosity_ratio(viscosity: Numbers, rated_viscosity: Numbers, exponent: Numbers = 0.5) -> Array:
    """Ratio r [-] by which slip falls and viscous torque grows: (nu / rated nu)^m.

    Parameters
    ----------
    viscosity
        Kinematic viscosity at tank temperature and zero gauge [m²/s], any shape.
    rated_viscosity
        Kinematic viscosity at which the efficiencies hold [m²/s], any shape.
    exponent
        Viscosity exponent m [-], any shape: 1 is laminar slip (Wilson), 0.5 is a judgement after measured pumps.

    Notes
    -----
    Source for m = 1: W. E. Wilson, Trans. ASME 68 (1946).
    """
    return np.asarray(np.power(np.asarray(viscosity) / rated_viscosity, exponent))


def slip_coefficient(
    displacement: Numbers,
    rated_speed: Numbers,
    volumetric_efficiency: Numbers,
    rated_pressure: Numbers,
    ratio: Numbers = 1.0,
) -> Array:
    """Slip flow per pressure [m³/(s·Pa)]: D n_rated (1 - eta_v) / (p_rated r).

    Parameters
    ----------
    displacement
        Displacement D [m³/rev], any shape.
    rated_speed
        Rated speed [rev/s], any shape.
    volumetric_efficiency
        Volumetric efficiency at the rated point [-], any shape.
    rated_pressure
        Rated pressure [Pa], any shape.
    ratio
        Viscosity ratio r to the rated point [-], any shape.

    Notes
    -----
    Efficiencies as ISO 4391 defines and ISO 4409 measures them; slip in proportion to pressure: W. E. Wilson, Trans.
    ASME 68 (1946).
    """
    rated_slip = np.asarray(displacement) * rated_speed * (1.0 - np.asarray(volumetric_efficiency))
    return rated_slip / (np.asarray(rated_pressure) * ratio)


def slip_coefficient_from_test(
    displacement: Numbers, speed: Numbers, flow: Numbers, pressure: Numbers, ratio: Numbers = 1.0
) -> Array:
    """Slip flow per pressure [m³/(s·Pa)], from a flow test: (D n - Q) / (p r).

    Parameters
    ----------
    displacement
        Displacement D [m³/rev], any shape.
    speed
        Test speed n [rev/s], any shape.
    flow
        Flow measured Q [m³/s], any shape.
    pressure
        Test pressure p [Pa], any shape.
    ratio
        Viscosity ratio r to the test [-], any shape.
    """
    return (np.asarray(displacement) * speed - flow) / (np.asarray(pressure) * ratio)


def slip_flow(drop: Numbers, coefficient: Numbers) -> Array:
    """Slip flow [m³/s], with the sign of the pressure: coefficient x dp.

    Parameters
    ----------
    drop
        Outlet less inlet pressure [Pa], signed, any shape.
    coefficient
        Slip flow per pressure [m³/(s·Pa)], any shape.
    """
    return np.asarray(coefficient) * drop


def delivered_flow(displacement: Numbers, speed: Numbers, slip: Numbers) -> Array:
    """Flow [m³/s] that leaves the outlet: D n - slip. The suction line carries D n, the drain the slip.

    Parameters
    ----------
    displacement
        Displacement in use D [m³/rev], any shape.
    speed
        Speed n [rev/s], any shape.
    slip
        Slip flow [m³/s], any shape.
    """
    return np.asarray(displacement) * speed - slip


def rated_loss_torque(displacement: Numbers, rated_pressure: Numbers, hydromechanical_efficiency: Numbers) -> Array:
    """Torque loss [N·m] at the rated point: D p_rated / (2 pi) (1 / eta_hm - 1).

    Parameters
    ----------
    displacement
        Displacement D [m³/rev], any shape.
    rated_pressure
        Rated pressure [Pa], any shape.
    hydromechanical_efficiency
        Hydromechanical efficiency at the rated point [-], any shape.

    Notes
    -----
    Efficiencies as ISO 4391 defines and ISO 4409 measures them.
    """
    ideal = np.asarray(displacement) * rated_pressure / (2 * np.pi)
    return ideal * (1.0 / np.asarray(hydromechanical_efficiency) - 1.0)


def loss_torque(
    rated_loss: Numbers, viscous_share: Numbers, relative_pressure: Numbers, relative_speed: Numbers, ratio: Numbers
) -> Array:
    """Torque loss [N·m]: T_loss [(1 - s) |dp| / p_rated + s (n / n_rated) r]; never negative.

    Parameters
    ----------
    rated_loss
        Torque loss at the rated point [N·m], any shape.
    viscous_share
        Viscous share s of it [-], any shape.
    relative_pressure
        Pressure over rated pressure [-], signed, any shape.
    relative_speed
        Speed over rated speed [-], 0 or more, any shape.
    ratio
        Viscosity ratio r [-], any shape.

    Notes
    -----
    After W. E. Wilson, Trans. ASME 68 (1946): a Coulomb part in proportion to pressure and a viscous part in
    proportion to speed.
    """
    coulomb = (1.0 - np.asarray(viscous_share)) * np.abs(relative_pressure)
    return np.asarray(rated_loss) * (coulomb + viscous_share * np.asarray(relative_speed) * ratio)


def shaft_torque(displacement: Numbers, drop: Numbers, loss: Numbers) -> Array:
    """Torque at the shaft [N·m]: D dp / (2 pi) + loss; negative where the pump drives its drive.

    Parameters
    ----------
    displacement
        Displacement in use D [m³/rev], signed, any shape.
    drop
        Outlet less inlet pressure [Pa], signed, any shape.
    loss
        Torque loss [N·m], any shape.
    """
    return np.asarray(displacement) * drop / (2 * np.pi) + loss


def shaft_power(torque: Numbers, speed: Numbers) -> Array:
    """Power at the shaft [W]: 2 pi n T.

    Parameters
    ----------
    torque
        Torque T [N·m], any shape.
    speed
        Speed n [rev/s], any shape.
    """
    return 2 * np.pi * np.asarray(speed) * torque


def limited_displacement(displacement: Numbers, drop: Numbers, power_limit: Numbers, rated_speed: Numbers) -> Array:
    """Displacement [m³/rev] that a power limit leaves: at most limit / (n_rated dp), a limit of torque.

    Parameters
    ----------
    displacement
        Displacement without the limit [m³/rev], any shape.
    drop
        Outlet less inlet pressure [Pa], any shape; without pressure nothing is limited.
    power_limit
        Power limit [W], any shape, infinite where there is none.
    rated_speed
        Rated speed [rev/s], any shape.
    """
    with np.errstate(divide="ignore"):
        most = np.divide(power_limit, np.asarray(rated_speed) * np.maximum(drop, 0.0))
    return np.asarray(np.minimum(displacement, most))


def electric_input(shaft_power: Numbers, efficiency: Numbers, no_load_power: Numbers = 0.0) -> Array:
    """Electric power [W] that a motor takes while it turns: P / eta + no-load power.

    Parameters
    ----------
    shaft_power
        Sum of the shaft powers of its pumps [W], any shape; where it is negative nothing is given back.
    efficiency
        Efficiency at load [-], any shape.
    no_load_power
        No-load power [W], any shape.

    Notes
    -----
    Common practice; that a driven motor gives nothing back is the cautious choice.
    """
    return np.asarray(np.maximum(shaft_power, 0.0) / efficiency + no_load_power)[()]


def fuel_flow(
    shaft_power: Numbers,
    specific_consumption: Numbers,
    idle_flow: Numbers = 0.0,
    fuel_density: Numbers = DIESEL_DENSITY,
) -> Array:
    """Fuel [m³/s] that a diesel engine burns while it turns: idle fuel + specific consumption x P / density.

    Parameters
    ----------
    shaft_power
        Sum of the shaft powers of its pumps [W], any shape; where it is negative only the idle fuel is burnt.
    specific_consumption
        Specific fuel consumption [kg/J], any shape; 1 g/kWh is 1e-3 / 3.6e6 kg/J.
    idle_flow
        Idle fuel [m³/s], any shape.
    fuel_density
        Density of the fuel [kg/m³], any shape.

    Notes
    -----
    A straight burn line (Willans) is common practice.
    """
    return idle_flow + np.asarray(specific_consumption) * np.maximum(shaft_power, 0.0) / fuel_density
