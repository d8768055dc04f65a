"""Cylinders and motors: areas, force and torque balance, flow, and the energy of decompression.

A positive load opposes the move, a negative one drives it. With several equal cylinders the load is the total one, the
speed that of each, and the areas are those of all together.
"""

from __future__ import annotations

import numpy as np

from heataudit.physics.arrays import Array, Numbers


def cylinder_areas(bore: Numbers, rod: Numbers, count: Numbers = 1) -> tuple[Array, Array]:
    """Areas [m²] at the bore side and at the rod side, of all cylinders together.

    Parameters
    ----------
    bore
        Bore [m], any shape.
    rod
        Rod diameter [m], any shape, less than the bore.
    count
        Number of equal cylinders [-], any shape.
    """
    piston = np.pi / 4 * np.square(bore) * np.asarray(count)
    return piston, piston - np.pi / 4 * np.square(rod) * np.asarray(count)


def plunger_areas(bore: Numbers, count: Numbers = 1) -> tuple[Array, Array]:
    """Areas [m²] of a plunger cylinder: that of the plunger, and none.

    Parameters
    ----------
    bore
        Diameter of the plunger [m], any shape.
    count
        Number of equal cylinders [-], any shape.
    """
    area, _ = cylinder_areas(bore, 0.0, count)
    return area, np.zeros_like(area)


def double_rod_areas(bore: Numbers, rod: Numbers, count: Numbers = 1) -> tuple[Array, Array]:
    """Areas [m²] of a double rod cylinder: the annulus on either side.

    Parameters
    ----------
    bore
        Bore [m], any shape.
    rod
        Rod diameter [m], any shape, less than the bore.
    count
        Number of equal cylinders [-], any shape.
    """
    _, annulus = cylinder_areas(bore, rod, count)
    return annulus, annulus


def effort(load: Numbers, efficiency: Numbers) -> Array:
    """Force [N] or torque [N·m] that the oil must bring: load / eta where the load opposes, load x eta where it drives.

    Parameters
    ----------
    load
        Force [N] or torque [N·m], signed, any shape.
    efficiency
        Mechanical efficiency [-], any shape.

    Notes
    -----
    Friction always costs, whichever way the power goes (common practice).
    """
    return np.where(np.asarray(load) >= 0, np.divide(load, efficiency), np.multiply(load, efficiency))[()]


def load_of_effort(effort: Numbers, efficiency: Numbers) -> Array:
    """Load [N] or [N·m] that an effort of the oil moves: the inverse of `effort`.

    Parameters
    ----------
    effort
        Net force [N] or torque [N·m] of the oil on the moving part, signed, any shape.
    efficiency
        Mechanical efficiency [-], any shape.
    """
    return np.where(np.asarray(effort) >= 0, np.multiply(effort, efficiency), np.divide(effort, efficiency))[()]


def inlet_pressure(
    load: Numbers, outlet_pressure: Numbers, inlet_area: Numbers, outlet_area: Numbers, efficiency: Numbers
) -> Array:
    """Pressure [Pa] at the inlet of a moving cylinder, from p_in A_in - p_out A_out = F / eta (F eta if F drives).

    Parameters
    ----------
    load
        Load F, total [N], signed, any shape.
    outlet_pressure
        Pressure at the outlet [Pa], any shape.
    inlet_area
        Area at the inlet [m²], any shape, above 0.
    outlet_area
        Area at the outlet [m²], any shape.
    efficiency
        Mechanical efficiency [-], any shape.
    """
    return (effort(load, efficiency) + np.asarray(outlet_pressure) * outlet_area) / inlet_area


def load_from_pressures(
    inlet_pressure: Numbers, outlet_pressure: Numbers, inlet_area: Numbers, outlet_area: Numbers, efficiency: Numbers
) -> Array:
    """Load F [N] behind gauge readings: the inverse of `inlet_pressure`.

    A load typed as a pressure p is that pressure at the inlet against an empty outlet: F = p A_in eta where p >= 0,
    F = p A_in / eta where p < 0.

    Parameters
    ----------
    inlet_pressure
        Pressure at the inlet [Pa], any shape.
    outlet_pressure
        Pressure at the outlet [Pa], any shape; 0 for a load typed as a pressure.
    inlet_area
        Area at the inlet [m²], any shape.
    outlet_area
        Area at the outlet [m²], any shape.
    efficiency
        Mechanical efficiency [-], any shape.
    """
    net = np.asarray(inlet_pressure) * inlet_area - np.asarray(outlet_pressure) * outlet_area
    return load_of_effort(net, efficiency)


def cylinder_flow(speed: Numbers, inlet_area: Numbers, volumetric_efficiency: Numbers = 1.0) -> Array:
    """Flow [m³/s] into the inlet of a cylinder: v A_in / eta_v.

    Parameters
    ----------
    speed
        Speed v of each cylinder [m/s], any shape.
    inlet_area
        Area at the inlet, of all cylinders [m²], any shape.
    volumetric_efficiency
        Volumetric efficiency [-], any shape; what leaks goes to the outlet side.
    """
    return np.asarray(speed) * inlet_area / volumetric_efficiency


def cylinder_speed(flow: Numbers, inlet_area: Numbers, volumetric_efficiency: Numbers = 1.0) -> Array:
    """Speed [m/s] of each cylinder: Q_in eta_v / A_in.

    Parameters
    ----------
    flow
        Flow into the inlet Q_in [m³/s], any shape.
    inlet_area
        Area at the inlet, of all cylinders [m²], any shape.
    volumetric_efficiency
        Volumetric efficiency [-], any shape.
    """
    return np.asarray(flow) * volumetric_efficiency / inlet_area


def motor_drop(torque: Numbers, displacement: Numbers, efficiency: Numbers) -> Array:
    """Pressure drop [Pa] of a turning motor, from dp D / (2 pi) = T / eta_m (T eta_m if T drives).

    Parameters
    ----------
    torque
        Load torque T [N·m], signed, any shape.
    displacement
        Displacement D [m³/rev], any shape.
    efficiency
        Mechanical efficiency [-], any shape.

    Notes
    -----
    Efficiencies as ISO 4391 defines and ISO 4409 measures them.
    """
    return 2 * np.pi * effort(torque, efficiency) / displacement


def motor_torque(drop: Numbers, displacement: Numbers, efficiency: Numbers) -> Array:
    """Load torque T [N·m] that a pressure drop moves: the inverse of `motor_drop`.

    Parameters
    ----------
    drop
        Pressure drop [Pa], signed, any shape.
    displacement
        Displacement D [m³/rev], any shape.
    efficiency
        Mechanical efficiency [-], any shape.
    """
    return load_of_effort(np.asarray(drop) * displacement / (2 * np.pi), efficiency)


def motor_flow(speed: Numbers, displacement: Numbers, volumetric_efficiency: Numbers, torque: Numbers = 0.0) -> Array:
    """Flow [m³/s] through a motor: D n / eta_v, and D n eta_v where the load drives it (T < 0).

    Parameters
    ----------
    speed
        Speed n [rev/s], any shape.
    displacement
        Displacement D [m³/rev], any shape.
    volumetric_efficiency
        Volumetric efficiency [-], any shape; what leaks goes to the outlet.
    torque
        Load torque T [N·m], signed, any shape: only its sign matters.
    """
    ideal = np.asarray(displacement) * speed
    return np.where(np.asarray(torque) >= 0, ideal / volumetric_efficiency, ideal * volumetric_efficiency)[()]


def motor_speed(flow: Numbers, displacement: Numbers, volumetric_efficiency: Numbers, torque: Numbers = 0.0) -> Array:
    """Speed [rev/s] of a motor: the inverse of `motor_flow`.

    Parameters
    ----------
    flow
        Flow through the motor [m³/s], any shape.
    displacement
        Displacement D [m³/rev], any shape.
    volumetric_efficiency
        Volumetric efficiency [-], any shape.
    torque
        Load torque [N·m], signed, any shape: only its sign matters.
    """
    ideal = np.asarray(flow) / displacement
    return np.where(np.asarray(torque) >= 0, ideal * volumetric_efficiency, ideal / volumetric_efficiency)[()]


def decompression_energy(pressure: Numbers, volume: Numbers, bulk_modulus: Numbers) -> Array:
    """Heat [J] of letting down a trapped volume once: p² V / (2 K).

    Parameters
    ----------
    pressure
        Gauge pressure p before [Pa], any shape.
    volume
        Trapped volume V [m³], any shape.
    bulk_modulus
        Bulk modulus K [Pa], any shape.

    Notes
    -----
    The elastic energy of a liquid of constant bulk modulus; the walls are rigid.
    """
    return np.square(np.maximum(pressure, 0.0)) * volume / (2.0 * np.asarray(bulk_modulus))
