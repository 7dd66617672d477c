"""Free-molecular force on a surface element and on whole bodies, as plain functions of the speed ratio.

One species, speed ratio S = V/sqrt(2kT/m). Every coefficient on the dynamic pressure is

    C = (2 - sigma) P + sigma T + sigma W sqrt(T_e/T)

with sigma the diffuse fraction, P the incident normal momentum, T the incident tangential momentum and W
the momentum of molecules that leave diffusely with temperature T_e.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from scipy.special import erf, erfc, i0e, i1e

from aero.arrays import ArrayLike, Floats, floats

SQRT_PI = float(np.sqrt(np.pi))


class Momentum(NamedTuple):
    """Parts of a coefficient, and the mean energy of the molecules that strike.

    Attributes
    ----------
    normal, tangential, emitted : (...,) array
        P, T and W of the module.
    energy_excess : (...,) array
        Mean translational energy of a striking molecule over kT, less S^2: from 2 (at rest) to 2.5.
    """

    normal: Floats
    tangential: Floats
    emitted: Floats
    energy_excess: Floats


def incident(normal_speed_ratio: ArrayLike) -> tuple[Floats, Floats, Floats]:
    """Return the momentum, number and drift functions of the normal speed ratio s = S cos(theta).

    Returns
    -------
    momentum : (...,) array
        s exp(-s^2)/sqrt(pi) + (s^2 + 1/2)(1 + erf s); incident pressure over rho R T.
    number : (...,) array
        exp(-s^2) + drift; number flux over n sqrt(kT/(2 pi m)).
    drift : (...,) array
        sqrt(pi) s (1 + erf s).

    References
    ----------
    [Schaaf1958], [Bird1994]

    Examples
    --------
    >>> momentum, number, drift = incident(0.0)
    >>> float(momentum), float(number), float(drift)
    (0.5, 1.0, 0.0)
    """
    s = floats(normal_speed_ratio)
    gauss = np.exp(-s * s)
    one_plus = erfc(-s)  # 1 + erf(s) without cancellation on the lee side
    drift = SQRT_PI * s * one_plus
    return s * gauss / SQRT_PI + (s * s + 0.5) * one_plus, gauss + drift, drift


def element(speed_ratio: ArrayLike, cosine: ArrayLike) -> tuple[Floats, Floats, Floats]:
    """Return pressure and shear of one element on the dynamic pressure.

    Parameters
    ----------
    speed_ratio : (...,) array
    cosine : (...,) array
        Cosine between the outward normal and the direction the flow comes from.

    Returns
    -------
    pressure : (...,) array
        Incident (P); a specular wall doubles it.
    shear : (...,) array
        Incident (T), along the surface.
    emitted : (...,) array
        Pressure of the diffusely emitted (W) at T_e = T.

    Notes
    -----
    p/q = (2 - sigma) P + sigma W sqrt(T_e/T), tau/q = sigma T.

    References
    ----------
    [Schaaf1958], [Sentman1961]

    Examples
    --------
    >>> pressure, shear, emitted = element(50.0, 1.0)
    >>> round(float(pressure), 3), round(float(shear), 3)
    (2.0, 0.0)
    """
    ratio, cosine = floats(speed_ratio), floats(cosine)
    momentum, number, _ = incident(ratio * cosine)
    sine = np.sqrt(np.maximum(1.0 - cosine * cosine, 0.0))  # rounding may leave -1e-17
    return momentum / (ratio * ratio), sine * number / (SQRT_PI * ratio), number / (2.0 * ratio * ratio)


def sphere(speed_ratio: ArrayLike) -> Momentum:
    """Return the closed form of a sphere on its frontal area.

    Notes
    -----
    P = T = 1/2 [(2S^2+1)/(sqrt(pi) S^3) exp(-S^2) + (4S^4+4S^2-1)/(2S^4) erf S], W = 2 sqrt(pi)/(3S). The
    mean energy follows from the same integrals (derived).

    References
    ----------
    [Schaaf1958], [Bird1994]

    Examples
    --------
    >>> parts = sphere(100.0)
    >>> round(float(parts.normal + parts.tangential), 3)
    2.0
    """
    s = floats(speed_ratio)
    square = s * s
    gauss, error = np.exp(-square), erf(s)
    total = (2.0 * square + 1.0) / (SQRT_PI * s * square) * gauss
    total += (4.0 * square * square + 4.0 * square - 1.0) / (2.0 * square * square) * error
    number = gauss + SQRT_PI * (s + 0.5 / s) * error
    drift = gauss + SQRT_PI * (s - 0.5 / s) * error
    return Momentum(total / 2.0, total / 2.0, 2.0 * SQRT_PI / (3.0 * s), 2.0 + 0.5 * drift / number)


def cylinder(speed_ratio: ArrayLike) -> Momentum:
    """Return the closed form of a cylinder across the flow on diameter times length, without ends.

    Notes
    -----
    P + T = sqrt(pi)/S exp(-y) [(S^2 + 3/2) I0(y) + (S^2 + 1/2) I1(y)], W = pi^(3/2)/(4S), y = S^2/2; the
    split and the mean energy follow from the same Bessel integrals (derived).

    References
    ----------
    [Schaaf1958], [Bird1994]

    Examples
    --------
    >>> parts = cylinder(9.129)
    >>> round(float(parts.normal + parts.tangential + parts.emitted * np.sqrt(500.0 / 200.0)), 3)
    2.259
    """
    s = floats(speed_ratio)
    square = s * s
    y = square / 2.0
    zero, one = i0e(y), i1e(y)
    second = 0.5 * (zero - one)  # mean of cos^2 exp(-s^2 cos^2)
    fourth = 0.25 * (2.0 * zero - 2.0 * one - one / y)  # mean of cos^4 exp(-s^2 cos^2)
    first_error = s * (zero + one) / SQRT_PI  # mean of cos erf(s cos)
    third_error = (2.0 * first_error + 2.0 * s / SQRT_PI * (second - fourth)) / 3.0
    normal = np.pi / square * (s / SQRT_PI * second + square * third_error + 0.5 * first_error)
    tangential = SQRT_PI / s * (zero + SQRT_PI * s * first_error - second - SQRT_PI * s * third_error)
    drift = square * (zero + one)
    return Momentum(normal, tangential, np.pi * SQRT_PI / (4.0 * s), 2.0 + 0.5 * drift / (zero + drift))


def cone(speed_ratio: ArrayLike, half_angle: ArrayLike) -> Momentum:
    """Return the closed form of the side of a cone at zero angle of attack on its base area.

    Notes
    -----
    All elements see the same flow: P = p, T = tau cot(half angle), W = w of one element at that angle.

    References
    ----------
    [Schaaf1958]

    Examples
    --------
    >>> bool(cone(20.0, np.pi / 6).normal < cone(20.0, np.pi / 3).normal)
    True
    """
    sine, cosine = np.sin(floats(half_angle)), np.cos(floats(half_angle))
    pressure, shear, emitted = element(speed_ratio, sine)
    _, number, drift = incident(floats(speed_ratio) * sine)
    return Momentum(pressure, shear * cosine / sine, emitted, 2.0 + 0.5 * drift / number)


class Slab(NamedTuple):
    """Drag and lift of two opposite faces, and the molecules that strike both, as `incident` counts them."""

    drag: Momentum
    lift: Momentum
    number: Floats


def slab(speed_ratio: ArrayLike, cosine: ArrayLike, lift_cosine: ArrayLike) -> Slab:
    """Return drag and lift of two opposite equal faces on the area of one.

    Parameters
    ----------
    speed_ratio : (...,) array
    cosine, lift_cosine : (...,) array
        Components of one face's normal towards the flow and along lift.

    Notes
    -----
    With c, l the components, s = S c, D = 2 s exp(-s^2)/sqrt(pi) + (2 s^2 + 1) erf s and
    N = 2 [exp(-s^2) + sqrt(pi) s erf s]: drag P = c D/S^2, T = (1 - c^2) N/(sqrt(pi) S),
    W = sqrt(pi) c^2/S; lift P = -l D/S^2, T = c l N/(sqrt(pi) S), W = -sqrt(pi) c l/S. A thin plate is one
    slab, a box three.

    References
    ----------
    [Schaaf1958], [Sentman1961]

    Examples
    --------
    >>> drag, lift, _ = slab(10.0, 1.0, 0.0)
    >>> round(float(drag.normal), 3), abs(float(lift.normal))
    (2.01, 0.0)
    """
    ratio, c, along = floats(speed_ratio), floats(cosine), floats(lift_cosine)
    s = ratio * c
    gauss, error = np.exp(-s * s), erf(s)
    pressure = (2.0 / SQRT_PI * s * gauss + (2.0 * s * s + 1.0) * error) / (ratio * ratio)
    drift = SQRT_PI * s * error
    number = gauss + drift
    shear = number * (2.0 / SQRT_PI) / ratio
    emitted = SQRT_PI * c / ratio
    excess = 2.0 + 0.5 * drift / number
    drag = Momentum(pressure * c, shear * (1.0 - c * c), emitted * c, excess)
    lift = Momentum(-pressure * along, shear * c * along, -emitted * along, excess)
    return Slab(drag, lift, 2.0 * number)


def plate(speed_ratio: ArrayLike, angle_of_attack: ArrayLike) -> tuple[Momentum, Momentum]:
    """Return drag and lift of a thin plate on the area of one face, both faces counted; see `slab`.

    Examples
    --------
    >>> drag, lift = plate(10.0, np.pi / 4)
    >>> bool(lift.normal > 0.0), bool(lift.tangential < 0.0)
    (True, True)
    """
    angle = floats(angle_of_attack)
    pair = slab(speed_ratio, np.sin(angle), -np.cos(angle))
    return pair.drag, pair.lift
