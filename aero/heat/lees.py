"""Laminar heating along a blunt body of revolution without incidence, as a share of the stagnation point's."""

from __future__ import annotations

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

_NEAR = 1e-3  # rad from the stagnation point: there the ratio is 1 to 1e-6


def hemisphere_ratio(angle: ArrayLike, pressure_ratio: ArrayLike = 0.0) -> Floats:
    """Return the laminar heat flux on a hemisphere over that of its stagnation point.

    Parameters
    ----------
    angle : (...,) array_like [rad]
        From the stagnation point, 0 to pi/2.
    pressure_ratio : (...,) array_like
        Free-stream over stagnation pressure e; 0 at high Mach number.

    Returns
    -------
    (...,) array
        NaN outside 0 to pi/2.

    Notes
    -----
    2 t sin t (cos^2 t (1 - e) + e)/sqrt(D), D = (1 - e)(t^2 - t sin 4t/2 + (1 - cos 4t)/8)
    + 4 e (t^2 - t sin 2t + (1 - cos 2t)/2): modified Newtonian pressure, velocity at the edge proportional
    to t, cold wall, (rho mu) proportional to pressure.

    References
    ----------
    [Lees1956]

    Examples
    --------
    >>> hemisphere_ratio(np.radians([0.0, 45.0, 90.0])).round(3).tolist()
    [1.0, 0.596, 0.0]
    """
    t, e = np.broadcast_arrays(floats(angle), floats(pressure_ratio))
    inside = (t >= 0.0) & (t <= 0.5 * np.pi + 1e-12)
    safe = np.where(inside & (t > _NEAR), t, 1.0)
    cosine = np.maximum(np.cos(safe), 0.0)
    pressure = (1.0 - e) * cosine * cosine + e
    ratio = 2.0 * safe * np.sin(safe) * pressure / np.sqrt(_integral(safe, floats(e)))
    return floats(np.where(inside, np.where(t > _NEAR, ratio, 1.0), np.nan))


def _integral(t: Floats, e: Floats) -> Floats:
    """Return 16 times the integral of (p/p_s) t sin^2 t, the D of the formula."""
    newtonian = t * t - 0.5 * t * np.sin(4.0 * t) + 0.125 * (1.0 - np.cos(4.0 * t))
    uniform = t * t - t * np.sin(2.0 * t) + 0.5 * (1.0 - np.cos(2.0 * t))
    return floats((1.0 - e) * newtonian + 4.0 * e * uniform)


def sphere_cone_ratio(
    radius: ArrayLike, nose_radius: float, half_angle: float, pressure_ratio: ArrayLike = 0.0
) -> Floats:
    """Return the laminar heat flux on a spherically blunted cone over that of its stagnation point.

    Parameters
    ----------
    radius : (...,) array_like [m]
        Distance from the axis.
    nose_radius : float [m]
    half_angle : float [rad]
        Of the cone, above 0 and below pi/2.
    pressure_ratio : (...,) array_like
        Free-stream over stagnation pressure.

    Returns
    -------
    (...,) array

    Notes
    -----
    On the cap `hemisphere_ratio`. On the cone pressure and velocity stay those of its edge with the cap:
    q/q_s = sqrt(3 p_c t_c)/2 x/sqrt(x^3 - cot^3 + 3 D(t_c)/(16 p_c t_c sin^2)), x the distance from the
    cone's apex over R_n, t_c = pi/2 - half angle. Supersonic flow along the cone: half angles up to some 50
    degrees; beyond, where the sonic line moves to the shoulder, the true flux there is higher.

    References
    ----------
    [Lees1956]

    Examples
    --------
    >>> sphere_cone_ratio([0.0, 0.27 * np.cos(0.9599), 0.45], 0.27, 0.9599).round(3).tolist()  # 55 deg
    [1.0, 0.746, 0.39]
    """
    if not (nose_radius > 0.0 and 0.0 < half_angle < 0.5 * np.pi):
        raise ValueError("nose_radius must be positive and half_angle lie between 0 and pi/2")
    r, e = (floats(a) for a in np.broadcast_arrays(floats(radius) / nose_radius, floats(pressure_ratio)))
    sine, cosine = np.sin(half_angle), np.cos(half_angle)
    end = floats(0.5 * np.pi - half_angle)
    cap = hemisphere_ratio(np.arcsin(np.minimum(r, cosine)), e)
    pressure = (1.0 - e) * sine * sine + e
    x = np.maximum(r, cosine) / sine
    start = 3.0 * _integral(end, e) / (16.0 * pressure * end * sine * sine) - (cosine / sine) ** 3
    cone = np.sqrt(0.75 * pressure * end) * x / np.sqrt(x * x * x + start)
    return floats(np.where(r <= cosine, cap, cone))
