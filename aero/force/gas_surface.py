"""How molecules leave a surface they strike: models of gas-surface interaction, for one element and species.

Pressure and shear are on the dynamic pressure of the species. The element's normal makes the cosine c with
the direction the flow comes from; S is the species' speed ratio, T_w/T the wall ratio.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.force.cll_kernel import reflected_momentum
from aero.force.elements import SQRT_PI, incident

__all__ = [
    "GAS_SURFACE",
    "Accommodation",
    "cercignani_lampis_lord",
    "cll_energy_accommodation",
    "element",
    "energy_excess",
    "maxwell",
    "reflected_momentum",
]

_NOTHING = 1e-280  # flux over that of a gas at rest; smaller ones come near the end of what a float holds


class Accommodation(NamedTuple):
    """Every coefficient a model may take, each 0 to 1, tangential momentum to 2 (thrown back).

    Attributes
    ----------
    energy, diffuse_fraction : (...,) array
        Of Maxwell's model.
    normal_energy, tangential_momentum : (...,) array
        Of the Cercignani-Lampis-Lord model.
    """

    energy: Floats
    diffuse_fraction: Floats
    normal_energy: Floats
    tangential_momentum: Floats


_Model = Callable[[Floats, Floats, Floats, Accommodation], tuple[Floats, Floats]]


def element(
    model: str,
    speed_ratio: ArrayLike,
    cosine: ArrayLike,
    wall_ratio: ArrayLike,
    *,
    energy_accommodation: ArrayLike = 1.0,
    diffuse_fraction: ArrayLike = 1.0,
    normal_energy_accommodation: ArrayLike = 1.0,
    tangential_momentum_accommodation: ArrayLike = 1.0,
) -> tuple[Floats, Floats]:
    """Return pressure and shear of one element on the dynamic pressure of one species.

    Parameters
    ----------
    model : str
        A key of `GAS_SURFACE`.
    speed_ratio : (...,) array
        V/sqrt(2kT/m) of the species.
    cosine : (...,) array
        Between the outward normal and the direction the flow comes from.
    wall_ratio : (...,) array
        T_w/T.
    energy_accommodation, diffuse_fraction : (...,) array, optional
        Taken by `maxwell` alone.
    normal_energy_accommodation, tangential_momentum_accommodation : (...,) array, optional
        Taken by `cll` alone.

    Returns
    -------
    pressure, shear : (...,) array
        Of the incident and the leaving molecules together; the arguments broadcast. NaN at speed ratio 0.

    Raises
    ------
    ValueError
        If the model is unknown or a coefficient lies outside its range.

    References
    ----------
    [Schaaf1958], [CercignaniLampis1971], [Lord1991]

    Examples
    --------
    >>> pressure, shear = element("cll", 8.0, 1.0, 0.3)
    >>> same, _ = element("maxwell", 8.0, 1.0, 0.3)
    >>> bool(abs(pressure - same) < 1e-6)
    True
    """
    if model not in GAS_SURFACE:
        raise ValueError(f"no gas-surface model '{model}', expected one of {', '.join(GAS_SURFACE)}")
    given = {
        "energy_accommodation": floats(energy_accommodation),
        "diffuse_fraction": floats(diffuse_fraction),
        "normal_energy_accommodation": floats(normal_energy_accommodation),
        "tangential_momentum_accommodation": floats(tangential_momentum_accommodation),
    }
    for name, values in given.items():
        most = 2.0 if name == "tangential_momentum_accommodation" else 1.0
        if np.any((values < 0.0) | (values > most)):
            raise ValueError(f"{name} must lie in 0 to {most:g}, it is {values.min():g} to {values.max():g}")
    ratio = floats(speed_ratio)
    ratio = np.where(ratio == 0.0, np.nan, ratio)
    return GAS_SURFACE[model](ratio, floats(cosine), floats(wall_ratio), Accommodation(*given.values()))


def maxwell(
    ratio: Floats, cosine: Floats, wall_ratio: Floats, coefficients: Accommodation
) -> tuple[Floats, Floats]:
    """Return pressure and shear where a share of the molecules leaves diffusely and the rest like light.

    Notes
    -----
    p/q = (2 - sigma) P + sigma W sqrt(T_e/T), tau/q = sigma T with P, T, W of `aero.force.elements`;
    2 k T_e = (1 - alpha) E_i + alpha 2 k T_w, E_i the mean translational energy of the molecules that strike
    this element. alpha = 1 is diffuse re-emission at wall temperature, sigma = 0 specular reflection.

    References
    ----------
    [Maxwell1879], [Schaaf1958], [Sentman1961]
    """
    momentum, number, drift = incident(ratio * cosine)
    square = ratio * ratio
    half_energy = 0.5 * (square + energy_excess(number, drift))
    alpha, sigma = coefficients.energy, coefficients.diffuse_fraction
    emission = (1.0 - alpha) * half_energy + alpha * wall_ratio
    pressure = (2.0 - sigma) * momentum + sigma * 0.5 * number * np.sqrt(emission)
    return pressure / square, sigma * _incident_shear(ratio, cosine, number)


def cercignani_lampis_lord(
    ratio: Floats, cosine: Floats, wall_ratio: Floats, coefficients: Accommodation
) -> tuple[Floats, Floats]:
    """Return pressure and shear of the Cercignani-Lampis kernel in Lord's form.

    Notes
    -----
    A molecule of normal speed u (over sqrt(2kT_w/m)) leaves with a normal speed of Rice distribution,
    R(v|u) = (2v/a) I0(2 sqrt(1-a) u v/a) exp(-(v^2 + (1-a) u^2)/a), a the normal energy accommodation, and
    on average keeps 1 - sigma_t of its tangential momentum. The mean of v is
    sqrt(pi a)/2 exp(-x/2) [(1+x) I0(x/2) + x I1(x/2)], x = (1-a) u^2/a; here its mean over the incident
    flux, by Gauss's rule (derived; no fit). a = sigma_t = 1 is Maxwell's diffuse wall with full
    accommodation, a = sigma_t = 0 specular reflection.

    References
    ----------
    [CercignaniLampis1971], [Lord1991]
    """
    normal = ratio * cosine
    momentum, number, _ = incident(normal)
    leaving = reflected_momentum(normal, wall_ratio, coefficients.normal_energy)
    pressure = (momentum + leaving) / (ratio * ratio)
    shear = coefficients.tangential_momentum * _incident_shear(ratio, cosine, number)
    return pressure, np.broadcast_to(shear, pressure.shape) + 0.0 * pressure


def energy_excess(number: Floats, drift: Floats) -> Floats:
    """Return the mean energy over kT of the molecules that strike an element, less S^2.

    Parameters
    ----------
    number, drift : (...,) array
        From `aero.force.elements.incident`.

    Notes
    -----
    2 + drift/(2 number). Far on the lee side, where rounding has eaten both, 2: nothing strikes there.

    Examples
    --------
    >>> energy_excess(np.array([1.0, 0.0]), np.array([0.0, 0.0]))
    array([2., 2.])
    """
    strikes = number > _NOTHING
    return 2.0 + 0.5 * np.where(strikes, drift / np.where(strikes, number, 1.0), 0.0)


def _incident_shear(ratio: Floats, cosine: Floats, number: Floats) -> Floats:
    sine = np.sqrt(np.maximum(1.0 - cosine * cosine, 0.0))  # rounding may leave -1e-17
    return floats(sine * number / (SQRT_PI * ratio))


GAS_SURFACE: dict[str, _Model] = {"maxwell": maxwell, "cll": cercignani_lampis_lord}
"""Name in a vehicle file and on the command line -> model."""


def cll_energy_accommodation(
    speed_ratio: ArrayLike,
    cosine: ArrayLike,
    wall_ratio: ArrayLike,
    normal_energy_accommodation: ArrayLike,
    tangential_momentum_accommodation: ArrayLike,
) -> Floats:
    """Return the share of translational energy that a Cercignani-Lampis-Lord element accommodates.

    Returns
    -------
    (...,) array
        (E_i - E_r)/(E_i - E_w), to compare with Maxwell's: sigma alpha. NaN where E_i = E_w and where nothing strikes.

    Notes
    -----
    The kernel takes a of the normal energy above the wall's and sigma_t (2 - sigma_t) of the tangential.

    References
    ----------
    [Lord1991]

    Examples
    --------
    >>> float(cll_energy_accommodation(50.0, 1.0, 0.3, 0.5, 1.0).round(3))
    0.5
    """
    ratio, c, wall = floats(speed_ratio), floats(cosine), floats(wall_ratio)
    _, number, drift = incident(ratio * c)
    square = ratio * ratio
    excess = np.where(number > _NOTHING, energy_excess(number, drift), np.nan)
    normal = square * c * c + excess - 1.0 - wall
    along = square * (1.0 - c * c) + 1.0 - wall
    t = floats(tangential_momentum_accommodation)
    total = normal + along
    taken = floats(normal_energy_accommodation) * normal + t * (2.0 - t) * along
    return np.where(total == 0.0, np.nan, taken / np.where(total == 0.0, 1.0, total))
