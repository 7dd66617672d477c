"""Laminar friction of slender bodies and plates by a reference temperature.

Blunt bodies get none: their bridges between the limits were fitted to continuum coefficients without
friction, and counting it twice would be worse than leaving its few per cent out. Slender bodies and plates
would have next to no continuum drag without it.
"""

from __future__ import annotations

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import Cone, FlatPlate, Shape, SphereCone

FRICTION_CLASSES = ("slender", "flat-plate")
HELD_KNUDSEN = 0.01  # beyond it friction stays as it is there: judgement, the layer is no longer thin
SUTHERLAND = 110.4  # K, [StandardAtmosphere1976]
RECOVERY = 0.845  # sqrt of the Prandtl number 0.714, laminar
PLATE = 1.328  # Blasius, mean of both the plate's ends
CONE = 2.0 / np.sqrt(3.0)  # mean of a cone over mean of a plate of its slant length, Mangler's transformation


def plate_friction(
    reynolds: ArrayLike,
    mach: ArrayLike,
    heat_capacity_ratio: ArrayLike,
    temperature: ArrayLike,
    wall_temperature: ArrayLike,
    *,
    edge_speed: ArrayLike = 1.0,
    edge_pressure: ArrayLike = 1.0,
) -> Floats:
    """Return the mean laminar friction coefficient of a plate on the free-stream dynamic pressure.

    Parameters
    ----------
    reynolds : (...,) array
        Free-stream, on the plate's length.
    mach, heat_capacity_ratio : (...,) array
        Free-stream.
    temperature, wall_temperature : (...,) array [K]
    edge_speed, edge_pressure : (...,) array, optional
        At the edge of the layer over free-stream.

    Returns
    -------
    (...,) array
        NaN at Reynolds number 0.

    Notes
    -----
    c_f = 1.328 u^(3/2) sqrt(p C*)/sqrt(Re), C* = (mu*/mu)(T/T*), T* = 0.5 (T_e + T_w) + 0.22 (T_r - T_e);
    T_e from the total enthalpy, T_r with the laminar recovery factor; Sutherland's viscosity of air. Perfect
    gas, laminar. The temperature enters as its power -0.15, so real-gas errors in T* of a factor 3 move
    friction by 15 %.

    References
    ----------
    [Eckert1955]

    Examples
    --------
    >>> round(float(plate_friction(1e4, 0.01, 1.4, 288.0, 288.0)), 5)
    0.01328
    """
    Re, M, gamma = floats(reynolds), floats(mach), floats(heat_capacity_ratio)
    T, wall, u = floats(temperature), floats(wall_temperature), floats(edge_speed)
    kinetic = 0.5 * (gamma - 1.0) * M * M
    edge = 1.0 + kinetic * (1.0 - u * u)
    star = 0.5 * (edge + wall / T) + 0.22 * RECOVERY * kinetic * u * u
    viscous = np.sqrt(star) * (T + SUTHERLAND) / (star * T + SUTHERLAND)
    inverse = np.where(Re > 0.0, 1.0 / np.where(Re > 0.0, Re, 1.0), np.nan)
    return floats(PLATE * u * np.sqrt(u * floats(edge_pressure) * viscous * inverse))


def held_reynolds(reynolds: ArrayLike, knudsen: ArrayLike) -> Floats:
    """Return the Reynolds number at Knudsen number 0.01 where the Knudsen number is larger, else itself.

    Examples
    --------
    >>> held_reynolds([1000.0, 10.0], [0.001, 1.0])
    array([1000., 1000.])
    """
    return floats(reynolds) * np.maximum(floats(knudsen) / HELD_KNUDSEN, 1.0)


def axial_friction(
    shape: Shape,
    reynolds_per_m: ArrayLike,
    knudsen: ArrayLike,
    mach: ArrayLike,
    heat_capacity_ratio: ArrayLike,
    temperature: ArrayLike,
    wall_temperature: ArrayLike,
    pressure_coefficient: ArrayLike,
    angle_of_attack: ArrayLike,
) -> Floats:
    """Return the axial force of friction over dynamic pressure [m2], 0 for blunt bodies and meshes.

    Parameters
    ----------
    shape : Shape
    reynolds_per_m : (...,) array [1/m]
    knudsen : (...,) array
        On the reference length; only says from where friction is held.
    mach, heat_capacity_ratio : (...,) array
    temperature, wall_temperature : (...,) array [K]
    pressure_coefficient : (...,) array
        At the stagnation point.
    angle_of_attack : (...,) array [rad]

    Notes
    -----
    Plate: both faces, speed V |cos a| at the edge, Newtonian pressure on the face in the flow and free-stream
    pressure on the other. Cone: speed V cos(half angle), Newtonian pressure at zero angle of attack, times
    cos(a)^(3/2), 0 base first; a spherical nose is taken as part of the cone. Positive towards the rear.
    """
    known = isinstance(shape, (Cone, SphereCone, FlatPlate))
    if not known or shape.body_class not in FRICTION_CLASSES:
        return np.zeros(np.broadcast_shapes(np.shape(mach), np.shape(angle_of_attack)))
    cosine, sine = np.cos(floats(angle_of_attack)), np.sin(floats(angle_of_attack))
    M, gamma = floats(mach), floats(heat_capacity_ratio)
    stagnation_rise = 0.5 * gamma * M * M * floats(pressure_coefficient)
    speed = np.abs(cosine)

    def mean(length: float, edge_speed: ArrayLike, rise: ArrayLike) -> Floats:
        reynolds = held_reynolds(floats(reynolds_per_m) * length, knudsen)
        pressure = 1.0 + stagnation_rise * floats(rise)
        return plate_friction(
            reynolds, M, gamma, temperature, wall_temperature, edge_speed=edge_speed, edge_pressure=pressure
        )

    if isinstance(shape, FlatPlate):
        both = mean(shape.length, speed, sine * sine) + mean(shape.length, speed, 0.0)
        return np.sign(cosine) * both * shape.frontal_area
    if isinstance(shape, (Cone, SphereCone)):
        along, across = np.cos(shape.half_angle), np.sin(shape.half_angle)
        local = CONE * mean(shape.base_radius / across, along, across * across)
        ahead = np.maximum(cosine, 0.0)  # base first, the side lies in the wake
        return floats(ahead * np.sqrt(ahead) * local * along * shape.frontal_area / across)
    raise ValueError(f"no friction model for a {shape.kind}")
