"""Lines: friction, bends, pressure drop with its slope, lift, and guideline velocities."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from heataudit.physics.arrays import Array, Numbers
from heataudit.physics.constants import INCH, STANDARD_GRAVITY

END_LOSS = 0.5
"""Loss coefficient [-] of one end of a line (common practice: a sharp entrance)."""

SURELY_LAMINAR = 700.0
"""Reynolds number [-] up to which Churchill's friction factor is 64/Re to within 1e-18."""

BLOCK = 8192
"""Numbers [-] that `line_drop` handles at a time: what it needs in between then stays in the processor's cache."""

BEND_CONSTANTS = {"swept": (800.0, 0.20), "elbow": (800.0, 0.40), "drilled": (1000.0, 1.15)}
"""K1 and K_inf [-] of a 90° bend: long radius, standard screwed elbow, mitre (Hooper 1981)."""

GUIDELINE_VELOCITIES = {"suction": 1.0, "drain": 2.0, "return": 3.0, "pressure": 5.0}
"""Guideline velocities [m/s] by service (common practice)."""

HIGH_PRESSURE, HIGH_PRESSURE_VELOCITY = 210e5, 6.0
"""Pressure [Pa] above which a pressure line may run at the velocity [m/s] (common practice)."""


def _laminar_multiple(reynolds: Array, relative_roughness: Numbers) -> tuple[Array, Array]:
    """Churchill's f Re / 64 [-] and d(Re f Re / 64)/dRe [-]; both are 1 in laminar flow.

    Below `SURELY_LAMINAR` they differ from 1 by less than the resolution of the numbers, so nothing is computed there.
    """
    re, rough = np.broadcast_arrays(reynolds, relative_roughness)
    multiple, growth = np.ones(re.shape), np.ones(re.shape)
    places = np.flatnonzero(re > SURELY_LAMINAR)
    if places.size:
        multiple.ravel()[places], growth.ravel()[places] = _churchill(re.ravel()[places], rough.ravel()[places])
    return multiple, growth


def _churchill(re: Array, relative_roughness: Array) -> tuple[Array, Array]:
    """What `_laminar_multiple` gives, for Reynolds numbers [-] from 1 to 1e15.

    With x = Re/37530, t = 2.457 ln(1 / ((7/Re)^0.9 + 0.27 e)), so that A = t^16 and B = x^-16, and z = 1 / (A + B):

        (f Re / 64)^12 = 1 + E,   E = (Re / 8)^12 z^1.5,   dln E/dln Re = 36 - 24 z t^15 (t + dt/dln Re).

    High powers are products; powers of 2 and their logarithms are the fastest of their kind.
    """
    re = np.minimum(re, 1e15)
    power = np.exp2(0.9 * np.log2(re * (1 / 7)))
    rough = 1.0 + 0.27 * relative_roughness * power
    t = 2.457 * np.log(power / rough)
    x2 = np.square(re * (1 / 37530))
    x4 = x2 * x2
    x8 = x4 * x4
    x16 = x8 * x8
    t2 = t * t
    t4 = t2 * t2
    t8 = t4 * t4
    z = x16 / (1.0 + t8 * t8 * x16)
    excess = (37530 / 8) ** 12 * x8 * x4 * z * np.sqrt(z)
    whole = 1.0 + excess
    multiple = np.exp2(np.log2(whole) * (1 / 12))
    steepness = z * (t8 * t4 * t2 * t) * (t + (2.457 * 0.9) / rough)
    return multiple, multiple * (1.0 + excess / whole * (3.0 - 2.0 * steepness))


def friction_times_reynolds(reynolds: Numbers, relative_roughness: Numbers) -> Array:
    """Darcy friction factor times Reynolds number, f Re [-]: finite at rest, where it is 64.

    Parameters
    ----------
    reynolds
        Reynolds number [-], any shape, 0 or more.
    relative_roughness
        Roughness over inside diameter [-], any shape.

    Notes
    -----
    Valid for Re up to 1e15, held above. Source: S. W. Churchill, Chemical Engineering 84 (7 November 1977) 91.
    """
    return 64.0 * _laminar_multiple(np.asarray(reynolds, float), relative_roughness)[0][()]


def churchill_friction(reynolds: Numbers, relative_roughness: Numbers) -> Array:
    """Darcy friction factor f [-] of laminar, transitional and turbulent flow; infinite at rest.

    f = 8 [(8/Re)^12 + (A + B)^-1.5]^(1/12), A = [2.457 ln(1 / ((7/Re)^0.9 + 0.27 e))]^16, B = (37530/Re)^16.

    Parameters
    ----------
    reynolds
        Reynolds number [-], any shape, 0 or more.
    relative_roughness
        Roughness over inside diameter e [-], any shape.

    Notes
    -----
    Valid for Re up to 1e15; within 3.5 % of Colebrook's equation above Re 4000. Source: S. W. Churchill, Chemical
    Engineering 84 (7 November 1977) 91.

    Examples
    --------
    >>> round(float(churchill_friction(100.0, 0.0)), 6)
    0.64
    """
    with np.errstate(divide="ignore"):
        return np.asarray(friction_times_reynolds(reynolds, relative_roughness) / reynolds)[()]


def bend_coefficients(bend_type: str, diameter: Numbers) -> tuple[float, Array]:
    """Two-K coefficients of one 90° bend: K1 [-] and K_inf (1 + 1/D_inch) [-], for K = K1/Re + K_inf (1 + 1/D_inch).

    Parameters
    ----------
    bend_type
        `swept`, `elbow` or `drilled`.
    diameter
        Inside diameter [m], any shape.

    Notes
    -----
    Source: W. B. Hooper, Chemical Engineering 88 (24 August 1981) 96; a drilled block is taken as a mitre.
    """
    k1, kinf = BEND_CONSTANTS[bend_type]
    return k1, kinf * (1.0 + INCH / np.asarray(diameter))


def loss_coefficient(reynolds: Numbers, bends_k1: Numbers, bends_kinf: Numbers, minor_k: Numbers) -> Array:
    """Loss coefficient K [-] of a line's bends, ends and fittings: bends K1/Re + bends K_inf (1 + 1/D_inch) + K.

    Parameters
    ----------
    reynolds
        Reynolds number [-], any shape, above 0.
    bends_k1
        Number of bends times K1 [-], any shape.
    bends_kinf
        Number of bends times K_inf (1 + 1/D_inch) [-], any shape.
    minor_k
        Loss coefficient of ends and fittings [-], any shape.

    Notes
    -----
    Source: W. B. Hooper, Chemical Engineering 88 (24 August 1981) 96.
    """
    return bends_k1 / np.asarray(reynolds) + bends_kinf + minor_k


def velocity(flow: Numbers, diameter: Numbers, count: Numbers = 1.0) -> Array:
    """Mean velocity [m/s] in each of some equal lines: Q / (count pi D² / 4).

    Parameters
    ----------
    flow
        Flow of all lines together [m³/s], any shape.
    diameter
        Inside diameter [m], any shape.
    count
        Number of equal lines side by side [-], any shape.
    """
    return np.asarray(flow) / (0.25 * np.pi * np.square(diameter) * count)


def reynolds_number(velocity: Numbers, diameter: Numbers, viscosity: Numbers) -> Array:
    """Reynolds number [-]: |v| D / nu.

    Parameters
    ----------
    velocity
        Mean velocity [m/s], any shape.
    diameter
        Inside diameter [m], any shape.
    viscosity
        Kinematic viscosity [m²/s], any shape.
    """
    return np.asarray(np.abs(velocity)) * diameter / viscosity


class LineShape(NamedTuple):
    """What a line is to its oil; numbers or arrays that broadcast against each other.

    Parameters
    ----------
    diameter
        Inside diameter D [m].
    length
        Length L [m].
    roughness
        Roughness of the wall [m].
    bends_k1
        Number of bends times K1 [-].
    bends_kinf
        Number of bends times K_inf (1 + 1/D_inch) [-].
    minor_k
        Loss coefficient of ends and fittings [-].
    parallel
        Number of equal lines side by side, which share the flow [-].
    """

    diameter: Numbers
    length: Numbers
    roughness: Numbers
    bends_k1: Numbers
    bends_kinf: Numbers
    minor_k: Numbers
    parallel: Numbers


def _block_drop(flow: Array, viscosity: Array, density: Array, *shape: Array) -> tuple[Array, Array]:
    """What `line_drop` gives, for one-dimensional arrays of one length; `shape` as in `LineShape`."""
    diameter, length, roughness, bends_k1, bends_kinf, minor_k, parallel = shape
    per_flow = 1.0 / (0.25 * np.pi * diameter * diameter * parallel)
    speed = flow * per_flow
    reynolds = reynolds_number(speed, diameter, viscosity)
    multiple, growth = _laminar_multiple(reynolds, roughness / diameter)
    pipe = 64.0 * length / diameter
    fittings = (bends_kinf + minor_k) * reynolds
    viscous = 0.5 * density * viscosity / diameter
    drop = viscous * speed * (multiple * pipe + bends_k1 + fittings)
    slope = viscous * per_flow * (growth * pipe + bends_k1 + 2.0 * fittings)
    return drop, slope


def line_drop(flow: Numbers, line: LineShape, viscosity: Numbers, density: Numbers) -> tuple[Array, Array]:
    """Frictional pressure drop of a whole line [Pa] and its slope over flow [Pa·s/m³].

    dp = (f L/D + K1/Re + K) rho v |v| / 2 = rho nu v / (2 D) (f Re L/D + K1 + K Re), with Churchill's f.

    Parameters
    ----------
    flow
        Flow of all equal lines together [m³/s], signed, any shape.
    line
        The line, or arrays of lines.
    viscosity
        Kinematic viscosity nu [m²/s], any shape.
    density
        Density rho [kg/m³], any shape.

    Notes
    -----
    The drop is odd in flow and rises with it; drop and slope are exact and finite at rest. The slope is the
    analytic derivative. Fastest with arrays of one memory layout. Sources: Darcy and Weisbach; Churchill 1977;
    Hooper 1981.
    """
    access: list[Any] = [["readonly"]] * 10 + [["writeonly", "allocate"]] * 2
    walk = np.nditer(
        [flow, viscosity, density, *line, None, None],
        flags=["buffered", "external_loop", "zerosize_ok"],
        op_flags=access,
        op_dtypes=[np.float64] * 12,
        casting="same_kind",
        buffersize=BLOCK,
    )
    with walk:
        for *block, drop, slope in walk:
            drop[...], slope[...] = _block_drop(*block)
        *_, drop, slope = walk.operands
    return drop[()], slope[()]


def lift_pressure(density: Numbers, rise: Numbers) -> Array:
    """Pressure [Pa] that lifting the oil takes: rho g h. It is no heat.

    Parameters
    ----------
    density
        Density [kg/m³], any shape.
    rise
        Height of the line's end above its start [m], any shape.
    """
    return np.asarray(density) * STANDARD_GRAVITY * rise


def guideline_velocity(service: str, pressure: Numbers = 0.0) -> Array:
    """Velocity [m/s] that a line of some service should not pass.

    Parameters
    ----------
    service
        `suction`, `drain`, `return` or `pressure`.
    pressure
        Gauge pressure in the line [Pa], any shape; it matters for `pressure` only.

    Notes
    -----
    Common practice: suction 1, drain 2, return 3, pressure 5 m/s, 6 m/s above 210 bar.
    """
    usual = GUIDELINE_VELOCITIES[service]
    fast = HIGH_PRESSURE_VELOCITY if service == "pressure" else usual
    return np.where(np.asarray(pressure) > HIGH_PRESSURE, fast, usual)[()]
