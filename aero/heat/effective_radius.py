"""The radius a blunt body heats as, where its sonic line sits at the shoulder and not on the nose."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import SphereCone

if TYPE_CHECKING:
    from aero.body import Vehicle

FLAT_FACE = 3.3  # effective over body radius of a flat face across the flow: 0.55 of a hemisphere's heating,
# [Lees1956] and [ZobySullivan1966], value from memory
SHOULDER_ANGLE = np.radians(50.0)  # half angle from which the sonic line reaches the shoulder (judgement)
RADIUS_SIGMA = 0.15  # relative 1-sigma of an effective radius that differs from the nose's (judgement)


@dataclass(frozen=True)
class HeatingRadius:
    """Radius for stagnation heating.

    Attributes
    ----------
    radius : float [m]
    sigma : float
        Relative 1-sigma of the radius; the heat flux goes with its root. 0 for a stated or a nose's own.
    source : str
        Where it comes from, in words for a note.
    """

    radius: float
    sigma: float
    source: str


def effective_nose_radius(nose_radius: ArrayLike, base_radius: ArrayLike, half_angle: ArrayLike) -> Floats:
    """Return the radius of the sphere that heats as a spherically blunted cone does.

    Parameters
    ----------
    nose_radius, base_radius : (...,) array_like [m]
    half_angle : (...,) array_like [rad]
        Of the cone where it meets the shoulder. A capsule's spherical segment without a cone has
        arccos(base_radius/nose_radius).

    Returns
    -------
    (...,) array [m]
        The nose radius itself up to half angles of 50 degrees.

    Raises
    ------
    ValueError
        If the nose does not fit the base.

    Notes
    -----
    In terms of the velocity gradient over that of a sphere of the base radius, K = R_b/R_eff: a spherical
    segment takes K linear in its edge cosine c = cos(half angle), from 1/3.3 for a flat face to c where
    c = cos 50 deg, from which on the nose alone rules. A cone of the same angle with a smaller nose adds
    (1 - w)(R_b/R_n - c), w = ((half angle - 50 deg)/40 deg)^2. Own approximation between the flat face and
    the sphere (judgement); a sharp shoulder is taken, a rounded one lowers the radius by up to 10 %.

    References
    ----------
    [ZobySullivan1966]

    Examples
    --------
    >>> shallow = np.arccos(1.956 / 4.694)  # a capsule's heat shield: R_b 1.956 m, R_n 4.694 m
    >>> effective_nose_radius([0.5, 4.694, 0.66], [1.0, 1.956, 1.32], [np.pi / 4, shallow, 1.2217]).round(2)
    array([0.5 , 3.74, 0.76])
    """
    nose, base, angle = floats(nose_radius), floats(base_radius), floats(half_angle)
    cosine, slope = np.cos(angle), base / nose
    if np.any(slope < cosine * (1.0 - 1e-6)):
        raise ValueError("nose_radius times cos(half_angle) must not exceed base_radius")
    edge = np.cos(SHOULDER_ANGLE)
    flat = 1.0 / FLAT_FACE
    segment = np.where(angle > SHOULDER_ANGLE, flat + (edge - flat) * cosine / edge, cosine)
    weight = np.clip((angle - SHOULDER_ANGLE) / (0.5 * np.pi - SHOULDER_ANGLE), 0.0, 1.0) ** 2
    return floats(base / (segment + (1.0 - weight) * (slope - cosine)))


def heating_radius(vehicle: Vehicle) -> HeatingRadius | None:
    """Return the radius a vehicle's stagnation heating is computed with, or None when it has none.

    Notes
    -----
    `[heating] effective_nose_radius` when it is a length; by `effective_nose_radius` when it is true and the
    shape is a sphere-cone without a stated nose radius; else the nose radius of the vehicle.

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> heating_radius(Vehicle.from_shape(Sphere(diameter=1.0)))
    HeatingRadius(radius=0.5, sigma=0.0, source='nose radius')
    """
    wanted, nose = vehicle.effective_nose_radius, vehicle.nose_radius
    if not isinstance(wanted, bool):
        return HeatingRadius(float(wanted), 0.0, "stated effective radius")
    if nose is None:
        return None
    shape = vehicle.shape
    if wanted and isinstance(shape, SphereCone) and not vehicle.states_nose_radius:
        radius = float(effective_nose_radius(shape.nose_radius, shape.base_radius, shape.half_angle))
        if abs(radius / nose - 1.0) > 1e-9:
            return HeatingRadius(radius, RADIUS_SIGMA, "effective radius, sonic line at the shoulder")
    return HeatingRadius(nose, 0.0, "nose radius")
