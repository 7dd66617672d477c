"""The U.S. Standard Atmosphere 1976 above 86 km: each gas diffuses through the others.

Written in the standard's own variables and integrated once into a dense table. All equation and table
numbers are those of [StandardAtmosphere1976].
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np

from aero.air.cubic import hermite
from aero.air.layers_1976 import GAS_CONSTANT, GRAVITY, MOLAR_MASS_0, RADIUS
from aero.arrays import Floats

BOTTOM = 86e3  # m
CEILING = 1000e3  # m
CELL = 250.0  # m; every height at which a formula changes is a multiple of it
HYDROGEN_FROM = 150e3  # m: the standard gives no atomic hydrogen below

# Temperature, eqs. 25-31
T_7 = 186.8673  # K, 86-91 km
T_9 = 240.0  # K at 110 km
T_10 = 360.0  # K at 120 km
T_INFINITY = 1000.0  # K
LAPSE_9 = 12e-3  # K/m, 110-120 km
ELLIPSE = (263.1905, -76.3232, -19.9429e3)  # K, K, m: T_c, A, a of eq. 27

EDDY = 120.0  # m2/s, K of eq. 7a: 86-95 km
HYDROGEN_500 = 8.0e10  # 1/m3 at 500 km, section 1.3.2
HYDROGEN_FLUX = 7.2e11  # 1/(m2 s), eq. 39


@dataclass(frozen=True)
class Gas:
    """One row of the standard's tables 6 to 9.

    Attributes
    ----------
    molar_mass : float [kg/kmol]
    at_86_km : float [1/m3]
        Number density at 86 km, table 9.
    a, b : float [1/(m s), -]
        Molecular diffusion D = (a/N)(T/273.15)^b, eq. 8, table 6.
    alpha : float
        Thermal diffusion coefficient, table 6.
    Q, U, W, q, u, w : float [km-3, km, km-3, km-3, km, km-3]
        Vertical flux, eq. 37, table 7; the second set acts from 86 to 97 km only.
    """

    molar_mass: float
    at_86_km: float
    a: float = 0.0
    b: float = 0.0
    alpha: float = 0.0
    Q: float = 0.0
    U: float = 86.0
    W: float = 0.0
    q: float = 0.0
    u: float = 97.0
    w: float = 0.0


GASES = {
    "N2": Gas(28.0134, 1.129794e20),
    "O": Gas(
        15.9994, 8.6e16, 6.986e20, 0.750, 0.0,
        Q=-5.809644e-4, U=56.90311, W=2.706240e-5, q=-3.416248e-3, u=97.0, w=5.008765e-4,
    ),
    "O2": Gas(31.9988, 3.030898e19, 4.863e20, 0.750, 0.0, Q=1.366212e-4, W=8.333333e-5),
    "Ar": Gas(39.948, 1.351400e18, 4.487e20, 0.870, 0.0, Q=9.434079e-5, W=8.333333e-5),
    "He": Gas(4.0026, 7.5817e14, 1.700e21, 0.691, -0.40, Q=-2.457369e-4, W=6.666667e-4),
    "H": Gas(1.00797, 0.0, 3.305e21, 0.500, -0.25),
}  # fmt: skip


def temperature(altitude: Floats) -> tuple[Floats, Floats]:
    """Return kinetic temperature and its gradient from 86 to 1000 km [K, K/m] (eqs. 25, 27, 29, 31).

    Examples
    --------
    >>> import numpy as np
    >>> temperature(np.array([100e3, 500e3]))[0].round(2)
    array([195.08, 999.24])
    """
    centre, amplitude, semi_axis = ELLIPSE
    x = np.clip((altitude - 91e3) / semi_axis, -0.999, 0.0)
    root = np.sqrt(1.0 - x * x)
    lapse = LAPSE_9 / (T_INFINITY - T_10)
    stretch = (RADIUS + 120e3) / (RADIUS + altitude)
    fall = (T_INFINITY - T_10) * np.exp(-lapse * (altitude - 120e3) * stretch)
    bands = [altitude < 91e3, altitude < 110e3, altitude < 120e3]
    value = np.select(
        bands, [T_7, centre + amplitude * root, T_9 + LAPSE_9 * (altitude - 110e3)], T_INFINITY - fall
    )
    slope = np.select(
        bands, [0.0, -amplitude / semi_axis * x / root, LAPSE_9], lapse * fall * stretch * stretch
    )
    return value, slope


def eddy_diffusion(altitude: Floats) -> Floats:
    """Return the eddy diffusion coefficient K [m2/s] (eqs. 7a-7c).

    Examples
    --------
    >>> import numpy as np
    >>> eddy_diffusion(np.array([90e3, 105e3, 120e3])).round(2)
    array([120.  ,  85.98,   0.  ])
    """
    km = altitude * 1e-3
    gap = 400.0 - np.square(np.maximum(km - 95.0, 0.0))
    inside = gap > 0.0
    return np.where(inside, EDDY * np.exp(1.0 - 400.0 / np.where(inside, gap, 1.0)), 0.0)


def flux_term(gas: Gas, altitude: Floats) -> Floats:
    """Return v/(D + K), the drift in the vertical flux of a gas [1/m] (eq. 37)."""
    km = altitude * 1e-3
    above = km - gas.U
    term = gas.Q * above**2 * np.exp(-gas.W * above**3)
    below = np.maximum(gas.u - km, 0.0)  # the second part ends at 97 km
    return (term + gas.q * below**2 * np.exp(-gas.w * below**3)) * 1e-3


def _molecular_diffusion(gas: Gas, through: Floats, temperature_: Floats) -> Floats:
    """D of eq. 8 [m2/s]."""
    return gas.a / through * np.exp(gas.b * np.log(temperature_ / 273.15))


class _Column:
    """Cells of the integration: each quantity at left end, middle and right end, as (cells, 3)."""

    def __init__(self) -> None:
        edges = BOTTOM + CELL * np.arange(round((CEILING - BOTTOM) / CELL) + 1)
        left = edges[:-1]
        self.altitude = np.stack([left, left + 0.5 * CELL, left + CELL], axis=1)
        self.temperature, self.gradient = temperature(self.altitude)
        self.gravity = GRAVITY * np.square(RADIUS / (RADIUS + self.altitude))  # eq. 17
        self.g_over_rt = self.gravity / (GAS_CONSTANT * self.temperature)
        self.eddy = eddy_diffusion(self.altitude)
        self.mixed = self.altitude[:, 1:2] < 100e3

    @staticmethod
    def integral(f: Floats) -> Floats:
        """Integral of `f` from the bottom to each point (Simpson's rule and its half-cell companion)."""
        full = CELL / 6.0 * (f[:, 0] + 4.0 * f[:, 1] + f[:, 2])
        half = CELL / 24.0 * (5.0 * f[:, 0] + 8.0 * f[:, 1] - f[:, 2])
        start = np.concatenate([[0.0], np.cumsum(full)])
        return np.stack([start[:-1], start[:-1] + half, start[1:]], axis=1)

    def solve(self, gas: Gas, f: Floats) -> tuple[Floats, Floats]:
        """Log number density and its slope for a drift `f` + flux (eq. 36)."""
        log_n = np.log(gas.at_86_km * T_7) - np.log(self.temperature) - self.integral(f)
        return log_n, -self.gradient / self.temperature - f

    def mean_mass(self, above: Floats | float) -> Floats:
        """Mean molar mass M of the air a gas is mixed with: the sea-level one up to 100 km, then `above`."""
        return np.where(self.mixed, MOLAR_MASS_0, above)

    def diffuse(self, gas: Gas, through: Floats, mean_mass: Floats) -> tuple[Floats, Floats]:
        """Solve eq. 36 for a gas that diffuses through a number density `through` of a mean molar mass."""
        d = _molecular_diffusion(gas, through, self.temperature)
        share = d / (d + self.eddy)
        mass = share * gas.molar_mass + (1.0 - share) * mean_mass
        thermal = gas.alpha * share * self.gradient / self.temperature
        return self.solve(gas, self.g_over_rt * mass + thermal + flux_term(gas, self.altitude))

    def hydrogen(self, through: Floats) -> tuple[Floats, Floats]:
        """Solve eq. 39, from 500 km down with the upward flux and up without; -inf below 150 km."""
        gas = GASES["H"]
        d = _molecular_diffusion(gas, through, self.temperature)
        at_500 = round((500e3 - BOTTOM) / CELL)
        tau = self.integral(self.g_over_rt * gas.molar_mass)
        tau = tau - tau[at_500, 0]  # eq. 40
        ratio = np.log(self.temperature / self.temperature[at_500, 0])
        growth = np.exp((1.0 + gas.alpha) * ratio + tau)
        flux = np.where(self.altitude[:, 1:2] < 500e3, HYDROGEN_FLUX, 0.0)
        lost = self.integral(flux / d * growth)
        with np.errstate(divide="ignore"):
            shown = self.altitude[:, 1:2] > HYDROGEN_FROM
            n = np.where(shown, (HYDROGEN_500 - lost + lost[at_500, 0]) / growth, 0.0)
            log_n = np.log(n)
        drift = (1.0 + gas.alpha) * self.gradient / self.temperature + self.g_over_rt * gas.molar_mass
        slope = np.where(shown, -flux / d / np.where(shown, n, 1.0) - drift, 0.0)
        return log_n, slope


@cache
def table() -> dict[str, Floats]:
    """Return the integrated table: cubic coefficients (4, cells) of temperature and of each ln n.

    Returns
    -------
    dict of (4, cells) arrays
        Keys "temperature", "N2", "O2", "O", "Ar", "He", "H"; natural logarithm of 1/m3 for the gases,
        minus infinity where the standard has none.

    Notes
    -----
    The equations are coupled one way only, so each is a quadrature: N2 alone; O and O2 through N2; Ar and He
    through N2, O and O2; H through all. Above 100 km the mean molar mass is that of N2 for N2, O and O2,
    and that of N2, O and O2 together for Ar and He: with it the printed argon and helium come out to
    their digits, with nitrogen's alone they lie 0.35 and 0.08 % off. Simpson's rule over 250 m cells with
    one-sided ends: halving the cells moves no density by more than 4e-7 (just under 110 km, where the
    gradient bends most).
    """
    column = _Column()
    mass = column.mean_mass(GASES["N2"].molar_mass)
    n: dict[str, tuple[Floats, Floats]] = {}
    n["N2"] = column.solve(GASES["N2"], column.g_over_rt * mass)  # eq. 33 in the form of eq. 36
    through = np.exp(n["N2"][0])
    n["O"], n["O2"] = (column.diffuse(GASES[name], through, mass) for name in ("O", "O2"))
    three = {name: np.exp(n[name][0]) for name in ("N2", "O", "O2")}
    through = three["N2"] + three["O"] + three["O2"]
    weighed = np.sum([GASES[name].molar_mass * three[name] for name in three], axis=0)
    mass = column.mean_mass(weighed / through)
    n["Ar"], n["He"] = (column.diffuse(GASES[name], through, mass) for name in ("Ar", "He"))
    through = through + np.exp(n["Ar"][0]) + np.exp(n["He"][0])
    n["H"] = column.hydrogen(through)
    out = {"temperature": _cells(column.temperature, column.gradient)}
    out |= {name: _cells(*n[name]) for name in ("N2", "O2", "O", "Ar", "He", "H")}
    return out


def _cells(value: Floats, slope: Floats) -> Floats:
    absent = ~np.isfinite(value[:, 0])
    safe = np.where(np.isfinite(value), value, 0.0)
    out = hermite(safe[:, 0], safe[:, 2], slope[:, 0], slope[:, 2], CELL)
    out[:, absent] = 0.0
    out[0, absent] = -np.inf
    return np.ascontiguousarray(out)
