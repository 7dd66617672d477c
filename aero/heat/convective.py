"""Convective heating of a stagnation point in the continuum: correlations and the hot wall."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

_AIR_GAS_CONSTANT = 287.053  # J/(kg K), sea-level air (U.S. Standard Atmosphere 1976)
_VIBRATION = ((0.79, 3393.0), (0.21, 2274.0))
"""Mole fraction and vibrational temperature [K] of N2 and O2: 2358.6 and 1580.2 per cm [HuberHerzberg1979],
values from memory."""


@dataclass(frozen=True)
class Correlation:
    """A published fit of the stagnation-point heat flux to a cold wall; call it with the flow.

    Attributes
    ----------
    function : callable
        (density [kg/m3], speed [m/s], nose_radius [m]) -> heat flux [W/m2].
    speeds, densities : (float, float)
        Range of the fit [m/s], [kg/m3].
    density_exponent : float
        d ln q/d ln rho.
    reference_temperature : float
        Wall temperature at which the fit holds [K]; 0 where it neglects the wall's enthalpy.
    strict_speeds : bool
        Whether there is no answer (NaN) outside `speeds`; otherwise the power law is continued.
    source : str
        Where it is published.
    """

    function: Callable[[Floats, Floats, Floats], Floats]
    speeds: tuple[float, float]
    densities: tuple[float, float]
    density_exponent: float
    reference_temperature: float
    strict_speeds: bool
    source: str

    def __call__(self, density: ArrayLike, speed: ArrayLike, nose_radius: ArrayLike) -> Floats:
        """Return the heat flux to a cold wall [W/m2]."""
        radius = floats(nose_radius)
        if np.any(radius <= 0.0):
            raise ValueError("nose_radius must be positive; it is in metres")
        return self.function(floats(density), floats(speed), radius)

    def covers(self, density: ArrayLike, speed: ArrayLike) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
        """Return whether each point lies in the range of the fit."""
        rho, v = floats(density), floats(speed)
        low, high = self.densities
        return (v >= self.speeds[0]) & (v <= self.speeds[1]) & (rho >= low) & (rho <= high)


def _sutton_graves(density: Floats, speed: Floats, nose_radius: Floats) -> Floats:
    constant = 1.7415e-4  # kg^0.5/m, Earth air [SuttonGraves1971]
    return constant * np.sqrt(density / nose_radius) * (speed * speed * speed)


def _detra_kemp_riddell(density: Floats, speed: Floats, nose_radius: Floats) -> Floats:
    # [DetraKempRiddell1957] in SI: 7925 m/s is 26,000 ft/s, 1.225 kg/m3 sea-level air
    return 110.35e6 * np.sqrt(density / (1.225 * nose_radius)) * (speed / 7925.0) ** 3.15


def _brandis_johnston(density: Floats, speed: Floats, nose_radius: Floats) -> Floats:
    # [BrandisJohnston2014], printed in W/cm2: 1e4 turns it into W/m2
    slow = 7.455e-9 * 1e4 * density**0.4705 * speed**3.089
    fast = 1.270e-6 * 1e4 * density**0.4678 * speed**2.524
    flux = np.where(speed < 9500.0, slow, fast) * nose_radius**-0.52
    outside = ((speed < 3000.0) & (speed > 0.0)) | (speed > 17000.0)
    return np.where(outside, np.nan, np.where(speed == 0.0, 0.0, flux))


def _fay_riddell(density: Floats, speed: Floats, nose_radius: Floats) -> Floats:
    from aero.heat.fay_riddell import fay_riddell_cold  # its table is made at first use

    return fay_riddell_cold(density, speed, nose_radius)


CONVECTIVE: dict[str, Correlation] = {
    "sutton-graves": Correlation(
        _sutton_graves,
        (2000.0, 15000.0),  # total enthalpy 2.3 to 116 MJ/kg, from memory
        (0.0, np.inf),
        0.5,
        0.0,
        False,
        "Sutton & Graves 1971, NASA TR R-376",
    ),
    "detra-kemp-riddell": Correlation(
        _detra_kemp_riddell,
        (2000.0, 8000.0),  # satellite speeds and below, from memory
        (0.0, np.inf),
        0.5,
        300.0,
        False,
        "Detra, Kemp & Riddell 1957, Jet Propulsion 27",
    ),
    "brandis-johnston": Correlation(
        _brandis_johnston,
        (3000.0, 17000.0),
        (1e-5, 5e-3),
        0.47,
        0.0,
        True,
        "Brandis & Johnston 2014, AIAA 2014-2374",
    ),
    "fay-riddell": Correlation(
        _fay_riddell,
        (1500.0, 9000.0),  # table from 1.5 km/s; above 9 km/s ionised air (judgement)
        (1e-7, 1e-1),
        0.50,
        300.0,
        False,
        "Fay & Riddell 1958, J. Aeronautical Sciences 25, edge in equilibrium",
    ),
}
"""Convective correlations by name; the first is the default."""


def wall_enthalpy(temperature: ArrayLike) -> Floats:
    """Return the enthalpy of air at the wall, recombined to N2 and O2 [J/kg].

    Parameters
    ----------
    temperature : (...,) array_like [K]

    Notes
    -----
    Rigid rotation and harmonic vibration: 7/2 R T + R sum x theta/(exp(theta/T) - 1). Air tables give 2.25
    MJ/kg at 2000 K, 0.3 MJ/kg at 300 K.

    Examples
    --------
    >>> wall_enthalpy([300.0, 2000.0]).round(-3).tolist()
    [301000.0, 2247000.0]
    """
    return enthalpy_and_slope(floats(temperature))[0]


def enthalpy_and_slope(temperature: Floats) -> tuple[Floats, Floats]:
    """Return the wall's enthalpy [J/kg] and its derivative, the heat capacity [J/(kg K)]."""
    height = 3.5 * temperature
    slope = np.full_like(temperature, 3.5)
    with np.errstate(divide="ignore", invalid="ignore"):
        for share, theta in _VIBRATION:
            decay = np.exp(-theta / temperature)
            quanta = decay / (1.0 - decay)
            height = height + share * theta * quanta
            slope = slope + share * (theta / temperature) ** 2 * quanta * (1.0 + quanta)
    return _AIR_GAS_CONSTANT * height, _AIR_GAS_CONSTANT * slope


def hot_wall_factor(
    total_enthalpy: ArrayLike, wall_enthalpy: ArrayLike, reference_enthalpy: ArrayLike = 0.0
) -> Floats:
    """Return what a hot wall leaves of the heat flux to a cold one.

    Parameters
    ----------
    total_enthalpy, wall_enthalpy : (...,) array_like [J/kg]
        Of the flow, and of its gas at the wall's temperature.
    reference_enthalpy : array_like [J/kg], optional
        At the wall temperature the cold correlation holds for.

    Returns
    -------
    (...,) array
        (h_0 - h_w)/(h_0 - h_ref); negative where the wall is hotter than the flow brought to rest.

    Notes
    -----
    h_ref is held below a quarter of h_0. That leaves the published form untouched above about 1.4 km/s, and
    keeps the sign that of h_0 - h_w below, where the published denominator passes through 0 and the
    correlations are not meant to hold (judgement).

    Examples
    --------
    >>> float(hot_wall_factor(30e6, 3e6))
    0.9
    """
    total = floats(total_enthalpy)
    reference = np.minimum(floats(reference_enthalpy), 0.25 * total)
    return (total - floats(wall_enthalpy)) / (total - reference)


def convective_flux(
    density: ArrayLike,
    speed: ArrayLike,
    nose_radius: ArrayLike,
    total_enthalpy: ArrayLike,
    wall_temperature: ArrayLike,
    correlation: str = "sutton-graves",
) -> Floats:
    """Return the continuum convective heat flux to a stagnation point, positive into the wall.

    Parameters
    ----------
    density : (...,) array_like [kg/m3]
    speed : (...,) array_like [m/s]
    nose_radius : array_like [m]
        Effective radius: a blunt capsule whose sonic line sits at the shoulder does not heat as R_n^-1/2 of
        its nose [ZobySullivan1966].
    total_enthalpy : (...,) array_like [J/kg]
    wall_temperature : (...,) array_like [K]
    correlation : str
        Key of `CONVECTIVE`.

    Returns
    -------
    (...,) array [W/m2]
        0 at speed 0; NaN outside the speeds of a correlation that has no answer there.

    Raises
    ------
    ValueError
        For an unknown correlation or a radius that is not positive.

    Notes
    -----
    All correlations assume an equilibrium, fully catalytic wall; a non-catalytic one may see half
    (judgement), which the band carries.

    Examples
    --------
    >>> q = convective_flux(8.57e-5, 11310.0, 0.935, 64.2e6, 0.1)
    >>> round(float(q) / 1e6, 2)
    2.41
    """
    chosen = correlation_named(correlation)
    cold = chosen(density, speed, nose_radius)
    reference = reference_enthalpy(chosen)
    return cold * hot_wall_factor(total_enthalpy, wall_enthalpy(wall_temperature), reference)


def correlation_named(name: str) -> Correlation:
    """Return a correlation of `CONVECTIVE`, or say which there are."""
    if name not in CONVECTIVE:
        raise ValueError(f"correlation is '{name}', expected one of: {', '.join(CONVECTIVE)}")
    return CONVECTIVE[name]


def reference_enthalpy(correlation: Correlation) -> float:
    """Return the wall enthalpy a correlation holds for [J/kg]."""
    if correlation.reference_temperature == 0.0:
        return 0.0
    return float(wall_enthalpy(correlation.reference_temperature))


def convective_sigma(speed: ArrayLike) -> Floats:
    """Return the relative 1-sigma of a convective correlation: 12 % below 8 km/s, 20 % above (judgement).

    The published correlations themselves differ by 20 % at 11 km/s.

    Examples
    --------
    >>> convective_sigma([7500.0, 11000.0]).tolist()
    [0.12, 0.2]
    """
    return np.where(floats(speed) < 8000.0, 0.12, 0.20)
