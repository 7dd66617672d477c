"""What a flight moves over: gravity, rotation, and the place of a position above the surface.

Positions are Cartesian and fixed to the turning planet [m]: origin at its centre, z along the axis of
rotation, x through latitude 0 and longitude 0. Such a frame has no singular points, so a flight may cross a
pole or stand vertical.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import EARTH_FLATTENING, EARTH_GM, EARTH_J2, EARTH_RADIUS, EARTH_ROTATION

Place: TypeAlias = tuple[Floats, Floats, Floats]
"""Latitude [rad], longitude [rad], altitude [m]."""
Axes: TypeAlias = tuple[Floats, Floats, Floats]
"""Unit vectors to the east, to the north and up."""


@dataclass(frozen=True)
class Planet:
    """Gravity, rotation and shape, as the integrator takes them.

    Attributes
    ----------
    gravity : callable
        Position (..., 3) [m] -> acceleration of gravity (..., 3) [m/s2], without the centrifugal part.
    potential : callable
        Position (..., 3) [m] -> potential of that gravity (...,) [J/kg].
    rotation : float [rad/s]
        Rate at which the frame, the surface and the air turn about z.
    gm : float [m3/s2]
        Gravitational parameter, for the apogee of a drag-free path; 0 where there is no gravity.
    radius : float [m]
        Radius from which the height of an apogee is counted.
    place : callable
        Position (..., 3) [m] -> (latitude, longitude, altitude).
    position : callable
        (latitude, longitude, altitude) -> position (..., 3) [m].
    axes : callable
        (latitude, longitude) -> unit vectors (..., 3) east, north and up.
    """

    gravity: Callable[[Floats], Floats]
    potential: Callable[[Floats], Floats]
    rotation: float
    gm: float
    radius: float
    place: Callable[[Floats], Place]
    position: Callable[[ArrayLike, ArrayLike, ArrayLike], Floats]
    axes: Callable[[ArrayLike, ArrayLike], Axes]


def earth(
    *,
    gm: float = EARTH_GM,
    j2: float = EARTH_J2,
    radius: float = EARTH_RADIUS,
    flattening: float = EARTH_FLATTENING,
    rotation: float = EARTH_ROTATION,
) -> Planet:
    """Return a rotating oblate planet, by default the Earth.

    Parameters
    ----------
    gm : float [m3/s2]
        Gravitational parameter.
    j2 : float
        Second zonal harmonic, unnormalised; 0 for a spherical field.
    radius : float [m]
        Equatorial radius, of the field and of the ellipsoid.
    flattening : float
        Flattening of the ellipsoid of altitude 0; 0 for a sphere.
    rotation : float [rad/s]
        Rate of rotation of the planet and its air.

    Returns
    -------
    Planet

    Examples
    --------
    >>> here = earth().position(0.0, 0.0, 120e3)
    >>> float(here[0]) - 120e3
    6378137.0
    """
    return Planet(
        gravity=lambda position: gravity(position, gm=gm, j2=j2, radius=radius),
        potential=lambda position: potential(position, gm=gm, j2=j2, radius=radius),
        rotation=rotation,
        gm=gm,
        radius=radius,
        place=lambda position: geodetic(position, radius=radius, flattening=flattening),
        position=lambda latitude, longitude, altitude: cartesian(
            latitude, longitude, altitude, radius=radius, flattening=flattening
        ),
        axes=local_axes,
    )


def potential(
    position: ArrayLike, *, gm: float = EARTH_GM, j2: float = EARTH_J2, radius: float = EARTH_RADIUS
) -> Floats:
    """Return the gravitational potential with its second zonal harmonic.

    Parameters
    ----------
    position : (..., 3) array [m]
    gm : float [m3/s2]
    j2 : float
    radius : float [m]

    Returns
    -------
    (...,) array [J/kg]
        Negative, 0 at infinity.

    Notes
    -----
    Phi = -GM/r [1 - J2 (R/r)^2 (3 sin^2 phi - 1)/2], sin phi = z/r [Kaula1966]. Higher harmonics are a
    thousandth of the J2 term and are left out.

    Examples
    --------
    >>> round(float(potential([7e6, 0.0, 0.0], j2=0.0)) / 1e6, 4)
    -56.9429
    """
    where = floats(position)
    square = np.sum(where * where, axis=-1)
    distance = np.sqrt(square)
    sine_square = where[..., 2] ** 2 / square
    return floats(-gm / distance * (1.0 - j2 * radius**2 / square * (1.5 * sine_square - 0.5)))


def gravity(
    position: ArrayLike, *, gm: float = EARTH_GM, j2: float = EARTH_J2, radius: float = EARTH_RADIUS
) -> Floats:
    """Return the acceleration of gravity, minus the gradient of `potential`.

    Parameters
    ----------
    position : (..., 3) array [m]
    gm : float [m3/s2]
    j2 : float
    radius : float [m]

    Returns
    -------
    (..., 3) array [m/s2]

    Notes
    -----
    g = -GM/r^3 [x (1 + q (1 - 5 s^2)), y (the same), z (1 + q (3 - 5 s^2))], q = 3/2 J2 (R/r)^2, s = z/r
    [Kaula1966]; a test holds it against the numerical gradient of the potential.

    Examples
    --------
    >>> round(float(gravity([6378137.0, 0.0, 0.0], j2=0.0)[0]), 4)
    -9.7983
    """
    where = floats(position)
    square = np.sum(where * where, axis=-1)
    sine_square = where[..., 2] ** 2 / square
    weight = 1.5 * j2 * radius**2 / square
    pull = -gm / (square * np.sqrt(square))
    result = np.empty_like(where)
    across = pull * (1.0 + weight * (1.0 - 5.0 * sine_square))
    result[..., 0] = across * where[..., 0]
    result[..., 1] = across * where[..., 1]
    result[..., 2] = pull * (1.0 + weight * (3.0 - 5.0 * sine_square)) * where[..., 2]
    return result


def cartesian(
    latitude: ArrayLike,
    longitude: ArrayLike,
    altitude: ArrayLike,
    *,
    radius: float = EARTH_RADIUS,
    flattening: float = EARTH_FLATTENING,
) -> Floats:
    """Return the position above an ellipsoid.

    Parameters
    ----------
    latitude, longitude : (...,) array [rad]
        Geodetic.
    altitude : (...,) array [m]
        Along the normal of the ellipsoid.
    radius : float [m]
        Equatorial radius.
    flattening : float

    Returns
    -------
    (..., 3) array [m]

    Examples
    --------
    >>> float(cartesian(np.pi / 2, 0.0, 0.0)[2].round(4))
    6356752.3142
    """
    phi, lam, height = np.broadcast_arrays(floats(latitude), floats(longitude), floats(altitude))
    eccentricity_square = flattening * (2.0 - flattening)
    normal = radius / np.sqrt(1.0 - eccentricity_square * np.sin(phi) ** 2)
    across = (normal + height) * np.cos(phi)
    along = (normal * (1.0 - eccentricity_square) + height) * np.sin(phi)
    return np.stack([across * np.cos(lam), across * np.sin(lam), along], axis=-1)


def geodetic(
    position: ArrayLike, *, radius: float = EARTH_RADIUS, flattening: float = EARTH_FLATTENING
) -> Place:
    """Return geodetic latitude, longitude and altitude of a position.

    Parameters
    ----------
    position : (..., 3) array [m]
        Not the centre of the planet.
    radius : float [m]
        Equatorial radius.
    flattening : float

    Returns
    -------
    latitude, longitude : (...,) array [rad]
    altitude : (...,) array [m]

    Notes
    -----
    Bowring's iteration on the parametric latitude, three times [Bowring1976]: from the surface to several
    Earth radii what is left is rounding, about 1e-9 m. The altitude is the projection on the normal, well
    conditioned at the equator and at the poles alike.

    Examples
    --------
    >>> latitude, longitude, altitude = geodetic(cartesian(0.5, 1.0, 120e3))
    >>> round(float(latitude), 12), round(float(longitude), 12), round(float(altitude), 6)
    (0.5, 1.0, 120000.0)
    """
    where = floats(position)
    x, y, z = where[..., 0], where[..., 1], where[..., 2]
    across = np.hypot(x, y)
    eccentricity_square = flattening * (2.0 - flattening)
    polar = radius * (1.0 - flattening)
    second_square = eccentricity_square / (1.0 - eccentricity_square)
    beta = np.arctan2(z, (1.0 - flattening) * across)
    for _ in range(3):
        latitude = np.arctan2(
            z + second_square * polar * np.sin(beta) ** 3,
            across - eccentricity_square * radius * np.cos(beta) ** 3,
        )
        beta = np.arctan2((1.0 - flattening) * np.sin(latitude), np.cos(latitude))
    sine = np.sin(latitude)
    surface = radius * np.sqrt(1.0 - eccentricity_square * sine * sine)
    altitude = across * np.cos(latitude) + z * sine - surface
    return floats(latitude), floats(np.arctan2(y, x)), floats(altitude)


def local_axes(latitude: ArrayLike, longitude: ArrayLike) -> Axes:
    """Return the unit vectors to the east, to the north and up (the geodetic normal).

    Parameters
    ----------
    latitude, longitude : (...,) array [rad]

    Returns
    -------
    east, north, up : (..., 3) array

    Examples
    --------
    >>> [float(component) for component in local_axes(0.0, 0.0)[2]]
    [1.0, 0.0, 0.0]
    """
    phi, lam = np.broadcast_arrays(floats(latitude), floats(longitude))
    sin_phi, cos_phi, sin_lam, cos_lam = np.sin(phi), np.cos(phi), np.sin(lam), np.cos(lam)
    east = np.stack([-sin_lam, cos_lam, np.zeros_like(lam)], axis=-1)
    north = np.stack([-sin_phi * cos_lam, -sin_phi * sin_lam, cos_phi], axis=-1)
    up = np.stack([cos_phi * cos_lam, cos_phi * sin_lam, sin_phi], axis=-1)
    return east, north, up


def apogee_height(position: Floats, velocity: Floats, planet: Planet) -> float:
    """Return the height of the apogee a drag-free flight from here would reach, infinite if it escapes.

    Parameters
    ----------
    position, velocity : (3,) array [m], [m/s]
        Velocity over the turning planet.
    planet : Planet
        For its rotation, its `gm` and its `radius`.

    Returns
    -------
    float [m]

    Notes
    -----
    The Kepler ellipse through the inertial velocity v + omega x r: the apogee is at a (1 + e), with
    a = -GM/(2E) and a (1 - e^2) = h^2/GM. J2 is left out; it moves an apogee by some kilometres.

    Examples
    --------
    >>> still = earth(rotation=0.0)
    >>> circular = np.sqrt(still.gm / 7e6)
    >>> round(apogee_height(np.array([7e6, 0, 0]), np.array([0, circular, 0]), still) / 1e3)
    622
    """
    x, y, z = (float(component) for component in position)
    u = float(velocity[0]) - planet.rotation * y
    v = float(velocity[1]) + planet.rotation * x
    w = float(velocity[2])
    energy = 0.5 * (u * u + v * v + w * w) - planet.gm / math.sqrt(x * x + y * y + z * z)
    if energy >= 0.0:
        return math.inf
    momentum_square = (y * w - z * v) ** 2 + (z * u - x * w) ** 2 + (x * v - y * u) ** 2
    major = -planet.gm / (2.0 * energy)
    # a circle rounds to either side of e = 0
    eccentricity = math.sqrt(max(0.0, 1.0 - momentum_square / (planet.gm * major)))
    return major * (1.0 + eccentricity) - planet.radius
