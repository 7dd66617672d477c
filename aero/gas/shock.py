"""The normal shock before a blunt body, and the mean free path behind it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.gas.flow import Flow

STAND_OFF = 0.78  # of R_n rho_1/rho_2, blunt axisymmetric nose at high Mach number: [Seiff1962], from memory


class NormalShock(NamedTuple):
    """Ratios across a normal shock, behind over before; NaN where the stream is subsonic."""

    density_ratio: Floats
    temperature_ratio: Floats
    pressure_ratio: Floats


def normal_shock(mach: ArrayLike, gamma: ArrayLike) -> NormalShock:
    """Return the density, temperature and pressure ratios across a normal shock.

    Parameters
    ----------
    mach : (...,) array
        NaN answers below 1: there is no shock.
    gamma : (...,) array
        Heat-capacity ratio.

    Returns
    -------
    NormalShock
        (...,) arrays, behind over before.

    Notes
    -----
    Rankine and Hugoniot for a calorically perfect gas. Real air dissociates behind strong shocks: its density
    ratio at entry speeds is about twice, its temperature ratio a third, of what stands here.

    References
    ----------
    [NACA1135] eqs. 93-95 (numbers from memory)

    Examples
    --------
    >>> [round(float(x), 4) for x in normal_shock(2.0, 1.4)]
    [2.6667, 1.6875, 4.5]
    """
    M, g = floats(mach), floats(gamma)
    M_squared = np.where(M >= 1.0, M * M, np.nan)
    density = (g + 1.0) * M_squared / ((g - 1.0) * M_squared + 2.0)
    pressure = 1.0 + 2.0 * g / (g + 1.0) * (M_squared - 1.0)
    return NormalShock(floats(density), floats(pressure / density), floats(pressure))


def free_path_behind_shock(mean_free_path: ArrayLike, flow: Flow, omega: ArrayLike) -> Floats:
    """Return the mean free path behind a normal shock.

    Parameters
    ----------
    mean_free_path : (...,) array [m]
        Before the shock, in any definition.
    flow : Flow
    omega : (...,) array
        Viscosity exponent, as from `mixture_omega`.

    Returns
    -------
    (...,) array [m]
        NaN where the stream is subsonic.

    Notes
    -----
    lambda_2 = lambda_1 (rho_1/rho_2)(T_2/T_1)^(w - 1/2): the path of variable hard spheres at the density and
    temperature behind a perfect-gas shock [Bird1994]. With hard spheres (w = 1/2) it is a fixed share of the
    free-stream path and says nothing new.

    Examples
    --------
    >>> from aero.gas import flow, sea_level_air
    >>> f"{float(free_path_behind_shock(66.3e-9, flow(sea_level_air(), 3402.9), 0.74))*1e9:.1f} nm"
    '23.9 nm'
    """
    shock = normal_shock(flow.mach, flow.heat_capacity_ratio)
    stretch = np.exp((floats(omega) - 0.5) * np.log(shock.temperature_ratio))
    return floats(floats(mean_free_path) * stretch / shock.density_ratio)


def stand_off(nose_radius: ArrayLike, density_ratio: ArrayLike) -> Floats:
    """Return how far the shock stands before a blunt nose, about 0.78 R_n rho_1/rho_2.

    Parameters
    ----------
    nose_radius : (...,) array [m]
    density_ratio : (...,) array
        Behind the shock over before it, as from `normal_shock`, or of equilibrium air.

    Returns
    -------
    (...,) array [m]

    Notes
    -----
    For spheres in the hypersonic continuum [Seiff1962]; about 10 % (judgement).

    Examples
    --------
    >>> f"{float(stand_off(1.0, 6.0)):.3f} m"
    '0.130 m'
    """
    return floats(STAND_OFF * floats(nose_radius) / floats(density_ratio))
