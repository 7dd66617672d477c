"""Radiative heating of a stagnation point by the shock-heated air in front of it."""

from __future__ import annotations

from functools import cache
from importlib.resources import files

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

_SPEEDS = (10000.0, 16000.0)  # m/s, stated range of the fit [TauberSutton1991]
_LOWEST = 9000.0  # m/s, first row of the table; below it radiation is taken as none
_DENSITIES = (6.66e-5, 6.31e-4)  # kg/m3, same
_RADII = (0.3, 3.0)  # m, same

RADIATIVE_VALIDITY: dict[int, str] = {
    0: "below 9 km/s: taken as zero",
    1: "in the range of the fit",
    2: "outside the range of the fit in speed (9-10 km/s), density or nose radius: continued",
    3: "above 16 km/s: no answer",
    4: "density below the range (above about 70 km): the shock layer is not in equilibrium",
}
"""What the codes of `radiative_validity` mean."""


@cache
def _table() -> tuple[Floats, Floats]:
    text = files("aero.heat").joinpath("tauber_sutton_1991.csv").read_text(encoding="utf-8")
    rows = [line.split(",") for line in text.splitlines() if line[:1].isdigit()]
    speed, value = np.array(rows, dtype=np.float64).T
    return speed, value


def radiative_flux(density: ArrayLike, speed: ArrayLike, nose_radius: ArrayLike) -> Floats:
    """Return the radiative heat flux of air in equilibrium to a stagnation point.

    Parameters
    ----------
    density : (...,) array_like [kg/m3]
        Of the free stream.
    speed : (...,) array_like [m/s]
    nose_radius : array_like [m]

    Returns
    -------
    (...,) array [W/m2]
        0 below 9 km/s, NaN above 16 km/s where the table ends; elsewhere outside the range of the fit the
        formula is continued and `radiative_validity` says so.

    Notes
    -----
    4.736e4 R^a rho^1.22 f(V) W/cm2, a = min(1.072e6 V^-1.88 rho^-0.325, a_max), a_max 1 up to R = 1 m, 0.6
    up to 2 m, 0.5 above; f(V) linear between the rows of the table.

    References
    ----------
    [TauberSutton1991]

    Examples
    --------
    >>> round(float(radiative_flux(8.57e-5, 11310.0, 0.935)) / 1e6, 2)
    1.02
    """
    rho, v, radius = np.broadcast_arrays(floats(density), floats(speed), floats(nose_radius))
    if np.any(radius <= 0.0):
        raise ValueError("nose_radius must be positive; it is in metres")
    flux = np.array(np.where(np.isnan(rho + v), np.nan, 0.0))
    fast = v >= _LOWEST
    if not fast.any():
        return flux
    rho, v, radius = rho[fast], v[fast], radius[fast]
    speeds, values = _table()
    f = np.interp(v, speeds, values, right=np.nan)
    highest = np.where(radius <= 1.0, 1.0, np.where(radius <= 2.0, 0.6, 0.5))
    with np.errstate(divide="ignore"):  # no air: the exponent grows without bound and is held at its highest
        exponent = np.minimum(1.072e6 * v**-1.88 * rho**-0.325, highest)
    flux[fast] = 4.736e4 * 1e4 * radius**exponent * rho**1.22 * f  # 1e4: W/cm2 to W/m2
    return flux


def radiative_validity(
    density: ArrayLike, speed: ArrayLike, nose_radius: ArrayLike
) -> np.ndarray[tuple[int, ...], np.dtype[np.int8]]:
    """Return a code for each point that says how far the radiative flux may be trusted.

    The codes are the keys of `RADIATIVE_VALIDITY`. Low density (4) is told apart from the other ways of
    leaving the range (2), for there the shock layer is out of equilibrium and may radiate several times
    more or far less.

    Examples
    --------
    >>> radiative_validity(1e-4, [8000.0, 9500.0, 12000.0, 17000.0], 1.0).tolist()
    [0, 2, 1, 3]
    """
    rho, v, radius = np.broadcast_arrays(floats(density), floats(speed), floats(nose_radius))
    code = np.zeros(v.shape, dtype=np.int8)
    fast = v >= _LOWEST
    if not fast.any():
        return code
    outside = (v < _SPEEDS[0]) | (rho > _DENSITIES[1]) | (radius < _RADII[0]) | (radius > _RADII[1])
    code = np.where(fast, np.where(outside, 2, 1), 0)
    code = np.where(fast & (rho < _DENSITIES[0]), 4, code)
    return np.where(v > _SPEEDS[1], 3, code).astype(np.int8)


def radiative_sigma(validity: ArrayLike) -> Floats:
    """Return the 1-sigma of ln q: 0.40 in the range of the fit, ln 2 outside it (judgement).

    Examples
    --------
    >>> radiative_sigma([1, 2]).round(2).tolist()
    [0.4, 0.69]
    """
    code = np.asarray(validity)
    return np.where(code == 0, 0.0, np.where(code == 1, 0.40, float(np.log(2.0))))
