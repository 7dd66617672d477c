"""Mean normal momentum that molecules leave a Cercignani-Lampis-Lord wall with."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from scipy.special import i0e, i1e

from aero.arrays import ArrayLike, Floats, floats
from aero.force.elements import SQRT_PI, incident

LEGENDRE, HERMITE = 24, 8  # nodes over the incident normal speed; 1e-7 of the reflected pressure
FAST = 6.0  # normal speed ratio above which exp(-s^2) < 3e-16 and no molecule is left at the cut at zero
_DEGREE, _SCALE = 14, 3.0  # polynomial for the Rice mean: 2.2e-8 relative, measured against its Bessel form


def reflected_momentum(
    normal_speed_ratio: ArrayLike, wall_ratio: ArrayLike, normal_energy_accommodation: ArrayLike
) -> Floats:
    """Return the normal momentum that leaves a Cercignani-Lampis-Lord wall, over rho R T.

    Parameters
    ----------
    normal_speed_ratio : (...,) array
        s = S cos(theta).
    wall_ratio : (...,) array
    normal_energy_accommodation : (...,) array

    Notes
    -----
    2 int_0^inf xi exp(-(xi - s)^2)/sqrt(pi) v(xi) d xi with v the mean speed a molecule of normal speed xi
    leaves with, both over sqrt(2kT/m). Below s = 6 by 24 Gauss-Legendre nodes between the speeds that matter,
    above by 8 Gauss-Hermite nodes around s.

    Examples
    --------
    >>> momentum, _, _ = incident(2.0)
    >>> bool(abs(reflected_momentum(2.0, 0.3, 0.0) - momentum) < 1e-12)  # specular
    True
    """
    s, wall, a = np.broadcast_arrays(
        floats(normal_speed_ratio), floats(wall_ratio), floats(normal_energy_accommodation)
    )
    shape = s.shape
    s, spread, kept = s.ravel(), (wall * a).ravel(), 1.0 - a.ravel()
    result = np.full(s.shape, np.nan)
    exact = spread == 0.0  # no spread: every molecule keeps sqrt(1 - a) of its normal speed
    if exact.any():
        result[exact] = np.sqrt(kept[exact]) * incident(s[exact])[0]
    fast = s > FAST
    for chosen, rule in ((~exact & fast, _around_drift), (~exact & ~fast, _from_zero)):
        if chosen.any():
            result[chosen] = rule(s[chosen], spread[chosen], kept[chosen])
    return result.reshape(shape)


def _around_drift(s: Floats, spread: Floats, kept: Floats) -> Floats:
    total = np.zeros_like(s)
    for node, weight in zip(*np.polynomial.hermite.hermgauss(HERMITE), strict=True):
        speed = s + node
        total += weight * speed * rice_mean(speed * speed, spread, kept)
    return total * (2.0 / SQRT_PI)


def _from_zero(s: Floats, spread: Floats, kept: Floats) -> Floats:
    """Gauss-Legendre up to where exp(-(xi-s)^2) has fallen by exp(-36) from its largest value."""
    top = s + np.sqrt(np.minimum(s, 0.0) ** 2 + 36.0)
    total = np.zeros_like(s)
    for node, weight in zip(*np.polynomial.legendre.leggauss(LEGENDRE), strict=True):
        speed = top * (0.5 * (node + 1.0))
        distance = speed - s
        density = np.exp(-distance * distance)
        total += weight * density * speed * rice_mean(speed * speed, spread, kept)
    return total * top / SQRT_PI


def rice_mean(square: Floats, spread: Floats, kept: Floats) -> Floats:
    """Return the mean of the Rice distribution of reflected normal speeds.

    Parameters
    ----------
    square : (...,) array
        Incident normal speed squared.
    spread : (...,) array
        a T_w/T, more than 0.
    kept : (...,) array
        1 - a.

    Notes
    -----
    sqrt(pi spread)/2 g(x), x = kept square/spread; g(x) = sqrt(1 + 4x/pi) times a polynomial in
    x/(x + 3), which is right at both ends and 2.2e-8 off between.

    Examples
    --------
    >>> round(float(rice_mean(np.array(4.0), np.array(1e-9), np.array(1.0))), 6)
    2.0
    """
    held, wide = kept * square, _SCALE * spread
    place = (held - wide) / (held + wide)  # (x - 3)/(x + 3), which no narrow kernel overflows
    first, *rest = _polynomial()
    factor = np.full_like(place, first)
    for coefficient in rest:
        factor *= place
        factor += coefficient
    return 0.5 * SQRT_PI * np.sqrt(spread + (4.0 / np.pi) * held) * factor


@lru_cache(maxsize=1)
def _polynomial() -> tuple[float, ...]:
    """Return the coefficients of g(x)/sqrt(1 + 4x/pi), highest power first, fitted at Chebyshev nodes."""
    place = np.cos(np.pi * (np.arange(_DEGREE + 1) + 0.5) / (_DEGREE + 1))
    x = _SCALE * (1.0 + place) / (1.0 - place)
    bessel = (1.0 + x) * i0e(x / 2.0) + x * i1e(x / 2.0)
    fit = np.polynomial.Chebyshev.fit(place, bessel / np.sqrt(1.0 + 4.0 * x / np.pi), _DEGREE, domain=[-1, 1])
    return tuple(float(value) for value in fit.convert(kind=np.polynomial.Polynomial).coef[::-1])
