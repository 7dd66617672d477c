"""From inertial to air-relative motion, and from other kinds of altitude to geodetic.

The air turns with the Earth as a solid body (no wind), so a point at geodetic latitude phi and altitude h
moves east at omega (N + h) cos(phi) in the inertial frame.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeAlias

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import EARTH_FLATTENING, EARTH_RADIUS, EARTH_ROTATION

ECCENTRICITY_SQUARED = EARTH_FLATTENING * (2.0 - EARTH_FLATTENING)  # WGS84
GEOPOTENTIAL_RADIUS = 6356766.0  # m, r0 of the U.S. Standard Atmosphere, 1976
VELOCITY_FRAMES = ("air", "inertial")

Motion: TypeAlias = tuple[Floats, Floats, Floats]


def axis_distance(altitude: ArrayLike, latitude: ArrayLike) -> Floats:
    """Return the distance from the Earth's axis.

    Parameters
    ----------
    altitude : (...,) array [m]
        Geodetic.
    latitude : (...,) array [rad]
        Geodetic.

    Returns
    -------
    (...,) array [m]

    Notes
    -----
    p = (N + h) cos(phi), N = a / sqrt(1 - e^2 sin^2(phi)), the WGS84 ellipsoid [WGS84].

    Examples
    --------
    >>> float(axis_distance(0.0, 0.0))
    6378137.0
    """
    sine = np.sin(floats(latitude))
    normal = EARTH_RADIUS / np.sqrt(1.0 - ECCENTRICITY_SQUARED * sine * sine)
    return floats((normal + floats(altitude)) * np.cos(floats(latitude)))


def air_relative(
    speed: ArrayLike,
    flight_path_angle: ArrayLike,
    heading: ArrayLike,
    altitude: ArrayLike,
    latitude: ArrayLike,
) -> Motion:
    """Turn inertial speed, flight-path angle and heading into those relative to the turning air.

    Parameters
    ----------
    speed : (...,) array [m/s]
    flight_path_angle : (...,) array [rad]
        Above the local horizontal.
    heading : (...,) array [rad]
        Of the horizontal velocity, clockwise from north.
    altitude : (...,) array [m]
        Geodetic.
    latitude : (...,) array [rad]
        Geodetic.

    Returns
    -------
    tuple of (...,) arrays
        Speed [m/s], flight-path angle [rad] and heading [rad, 0 to 2 pi].

    Notes
    -----
    v_air = v - omega x r. In east, north, up only the east component changes, by -omega p, with p the
    distance from the axis. No wind. All directions refer to the same local horizontal.

    Examples
    --------
    An equatorial satellite flying east loses 465 m/s and the altitude's share:

    >>> speed, angle, heading = air_relative(7668.0, 0.0, np.pi / 2, 400e3, 0.0)
    >>> round(float(speed), 1)
    7173.7
    """
    return _shifted(speed, flight_path_angle, heading, -EARTH_ROTATION * axis_distance(altitude, latitude))


def inertial(
    speed: ArrayLike,
    flight_path_angle: ArrayLike,
    heading: ArrayLike,
    altitude: ArrayLike,
    latitude: ArrayLike,
) -> Motion:
    """Turn air-relative speed, flight-path angle and heading into inertial ones.

    The inverse of `air_relative`, with the same parameters and results.

    Examples
    --------
    >>> speed, angle, heading = inertial(0.0, 0.0, 0.0, 0.0, 0.0)
    >>> round(float(speed), 1), round(float(np.degrees(heading)), 6)
    (465.1, 90.0)
    """
    return _shifted(speed, flight_path_angle, heading, EARTH_ROTATION * axis_distance(altitude, latitude))


def _shifted(speed: ArrayLike, path: ArrayLike, heading: ArrayLike, eastward: Floats) -> Motion:
    level = floats(speed) * np.cos(floats(path))
    up = floats(speed) * np.sin(floats(path))
    east = level * np.sin(floats(heading)) + eastward
    north = level * np.cos(floats(heading))
    level = np.hypot(east, north)
    turned = np.arctan2(east, north)
    turned = np.where(turned < 0.0, turned + 2.0 * np.pi, turned)
    return floats(np.hypot(level, up)), floats(np.arctan2(up, level)), floats(turned)


def from_geodetic(altitude: ArrayLike, latitude: ArrayLike) -> Floats:
    """Return a geodetic altitude as it is: the entry for the default kind."""
    return floats(np.broadcast_arrays(floats(altitude), floats(latitude))[0])


def from_geopotential(altitude: ArrayLike, latitude: ArrayLike) -> Floats:
    """Return the geometric altitude of a geopotential one.

    Parameters
    ----------
    altitude : (...,) array [m]
        Geopotential.
    latitude : (...,) array [rad]
        Not used: the 1976 standard has one gravity for all latitudes.

    Returns
    -------
    (...,) array [m]

    Notes
    -----
    z = r0 H / (r0 - H), r0 = 6356.766 km [StandardAtmosphere1976]; equation from memory.

    Examples
    --------
    >>> round(float(from_geopotential(84852.0, 0.0)), 0)
    86000.0
    """
    height = floats(np.broadcast_arrays(floats(altitude), floats(latitude))[0])
    return floats(GEOPOTENTIAL_RADIUS * height / (GEOPOTENTIAL_RADIUS - height))


def from_geocentric(altitude: ArrayLike, latitude: ArrayLike) -> Floats:
    """Return the geodetic altitude of a height over a sphere of the equatorial radius.

    Parameters
    ----------
    altitude : (...,) array [m]
        Distance from the centre less the equatorial radius.
    latitude : (...,) array [rad]
        Geodetic.

    Returns
    -------
    (...,) array [m]

    Notes
    -----
    With r^2 = (N + h)^2 cos^2(phi) + (N (1 - e^2) + h)^2 sin^2(phi) given, h is a root of
    h^2 + 2 A h + C = 0, A = N (1 - e^2 sin^2(phi)), C = the right side at h = 0 less r^2; the form
    h = -C / (A + sqrt(A^2 - C)) loses no digits near the ground.

    Examples
    --------
    The pole lies 21,385 m nearer to the centre than the equator:

    >>> abs(float(from_geocentric(6356752.3142 - 6378137.0, np.pi / 2))) < 1e-3
    True
    """
    radius = EARTH_RADIUS + floats(altitude)
    sine, cosine = np.sin(floats(latitude)), np.cos(floats(latitude))
    normal = EARTH_RADIUS / np.sqrt(1.0 - ECCENTRICITY_SQUARED * sine * sine)
    ground = np.hypot(normal * cosine, normal * (1.0 - ECCENTRICITY_SQUARED) * sine)
    linear = normal * (1.0 - ECCENTRICITY_SQUARED * sine * sine)
    constant = (ground - radius) * (ground + radius)
    return floats(-constant / (linear + np.sqrt(linear * linear - constant)))


ALTITUDE_KINDS: dict[str, Callable[[ArrayLike, ArrayLike], Floats]] = {
    "geodetic": from_geodetic,
    "geocentric": from_geocentric,
    "geopotential": from_geopotential,
}
"""Kind of altitude -> function of (altitude, latitude) that gives the geodetic one."""
