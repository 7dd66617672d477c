"""Stagnation heating by Fay and Riddell, with the boundary layer's edge from air in equilibrium."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.heat.convective import wall_enthalpy
from aero.heat.equilibrium_air import EquilibriumState, StagnationLine, stagnation_line

PRANDTL, LEWIS = 0.71, 1.4  # the values of [FayRiddell1958]
LEWIS_EQUILIBRIUM, LEWIS_FROZEN = 0.52, 0.63  # exponents of an equilibrium and a frozen boundary layer, same
_WALL_GAS_CONSTANT = 287.053  # J/(kg K), the wall's air is recombined (U.S. Standard Atmosphere 1976)
COLD_WALL = 300.0  # K, for which the table holds
_TABLE_TEMPERATURE = 230.0  # K, between the 190 and 270 K that air takes from 20 to 100 km
TABLE_SPEEDS = (1500.0, 13000.0)  # m/s; outside, the table's edge is continued
TABLE_DENSITIES = (1e-7, 1e-1)  # kg/m3, same
_SPEED_STEP, _DECADE_STEP = 125.0, 0.25


@dataclass(frozen=True, eq=False)
class FayRiddell:
    """Stagnation-point heating of a sphere by Fay and Riddell, and what it rests on.

    Attributes
    ----------
    heat_flux : (...,) array [W/m2]
        To a fully catalytic wall, positive into it.
    dissociation_share : (...,) array
        h_D/h_0 at the edge: what recombination at the wall sets free.
    velocity_gradient : (...,) array [1/s]
    line : StagnationLine
        The air behind the shock and at rest.
    """

    heat_flux: Floats
    dissociation_share: Floats
    velocity_gradient: Floats
    line: StagnationLine


def fay_riddell(
    density: ArrayLike,
    temperature: ArrayLike,
    speed: ArrayLike,
    nose_radius: ArrayLike,
    wall_temperature: ArrayLike,
    transport: str = "sutherland",
) -> FayRiddell:
    """Return the heating of a sphere's stagnation point by a laminar boundary layer in equilibrium.

    Parameters
    ----------
    density : (...,) array_like [kg/m3]
    temperature : (...,) array_like [K]
        Of the free stream.
    speed : (...,) array_like [m/s]
    nose_radius : array_like [m]
    wall_temperature : (...,) array_like [K]
    transport : {"sutherland", "blottner"}
        Viscosity at the edge: Sutherland's law continued, with which the published constants were computed
        (from memory), or that of the mixture.

    Returns
    -------
    FayRiddell
        NaN where the flow is slower than 1.2 times the speed of sound, or an input is NaN.

    Raises
    ------
    ValueError
        If the radius is not positive or the transport unknown.

    Notes
    -----
    q = 0.763 Pr^-0.6 (rho_e mu_e)^0.4 (rho_w mu_w)^0.1 sqrt(du/dx) (h_0 - h_w) [1 + (Le^0.52 - 1) h_D/h_0],
    du/dx = (1/R_n) sqrt(2 (p_e - p)/rho_e), Pr 0.71, Le 1.4. h_D counts the energy of formation of all
    particles at the edge, ionisation included. The wall's air is recombined, its viscosity Sutherland's.
    Fitted to computations from 1.5 to 7.5 km/s or so (from memory): above about 9 km/s, where air ionises,
    an extrapolation. At 7.5 km/s the mixture's own viscosity gives 1.2 times the flux, but the published
    constants were not computed with it.

    References
    ----------
    [FayRiddell1958], [Blottner1971]

    Examples
    --------
    >>> found = fay_riddell(8.57e-5, 210.0, 11310.0, 0.935, 810.0)
    >>> round(float(found.heat_flux) / 1e6, 2), round(float(found.dissociation_share), 2)
    (2.47, 0.68)
    """
    radius, wall = floats(nose_radius), floats(wall_temperature)
    if np.any(radius <= 0.0):
        raise ValueError("nose_radius must be positive; it is in metres")
    if transport not in TRANSPORT:
        raise ValueError(f"transport is '{transport}', expected one of: {', '.join(TRANSPORT)}")
    line = stagnation_line(density, temperature, speed)
    edge = line.edge
    viscosity = TRANSPORT[transport](edge)
    gradient = np.sqrt(2.0 * (edge.pressure - line.free_stream_pressure) / edge.density) / radius
    wall_mass = edge.pressure / (_WALL_GAS_CONSTANT * wall) * sutherland(wall)
    share = edge.formation_enthalpy / edge.enthalpy
    lewis = 1.0 + (LEWIS**LEWIS_EQUILIBRIUM - 1.0) * share
    conductance = 0.763 * PRANDTL**-0.6 * (edge.density * viscosity) ** 0.4 * wall_mass**0.1
    flux = conductance * np.sqrt(gradient) * lewis * (edge.enthalpy - wall_enthalpy(wall))
    return FayRiddell(floats(flux), floats(share), floats(gradient), line)


def sutherland(temperature: ArrayLike) -> Floats:
    """Return the viscosity of air by Sutherland's law with the standard's constants [Pa s].

    Examples
    --------
    >>> float(sutherland(300.0).round(7))
    1.85e-05
    """
    T = floats(temperature)
    return floats(1.458e-6 * T * np.sqrt(T) / (T + 110.4))  # [StandardAtmosphere1976]


TRANSPORT: dict[str, Callable[[EquilibriumState], Floats]] = {
    "sutherland": lambda edge: sutherland(edge.temperature),
    "blottner": lambda edge: edge.viscosity,
}
"""Viscosity at the edge of the boundary layer by name."""


@lru_cache(maxsize=1)
def _table() -> tuple[Floats, Floats]:
    """Return q sqrt(R)/(sqrt(rho) V^3) and h_D/h_0 over (log10 density, speed)."""
    speeds = np.arange(TABLE_SPEEDS[0], TABLE_SPEEDS[1] + 1.0, _SPEED_STEP)
    low, high = np.log10(TABLE_DENSITIES)
    densities = 10.0 ** np.arange(low, high + 0.01, _DECADE_STEP)[:, None]
    found = fay_riddell(densities, _TABLE_TEMPERATURE, speeds, 1.0, COLD_WALL)
    return found.heat_flux / (np.sqrt(densities) * speeds**3), found.dissociation_share


def _look_up(table: Floats, density: Floats, speed: Floats) -> Floats:
    low, high = np.log10(TABLE_DENSITIES)
    with np.errstate(divide="ignore"):  # no air: the table's edge
        decade = np.log10(density)
    row = (np.clip(decade, low, high) - low) / _DECADE_STEP
    column = (np.clip(speed, *TABLE_SPEEDS) - TABLE_SPEEDS[0]) / _SPEED_STEP
    unknown = np.isnan(row + column)
    row, column = np.where(unknown, 0.0, row), np.where(unknown, 0.0, column)
    i = np.minimum(row.astype(np.intp), table.shape[0] - 2)
    j = np.minimum(column.astype(np.intp), table.shape[1] - 2)
    y, x = row - i, column - j
    below = table[i, j] * (1.0 - x) + table[i, j + 1] * x
    above = table[i + 1, j] * (1.0 - x) + table[i + 1, j + 1] * x
    return floats(np.where(unknown, np.nan, below * (1.0 - y) + above * y))


def fay_riddell_cold(density: Floats, speed: Floats, nose_radius: Floats) -> Floats:
    """Return the heat flux to a wall of 300 K from a table in density and speed [W/m2].

    Notes
    -----
    The table holds q sqrt(R_n)/(sqrt(rho) V^3) of `fay_riddell` with a free stream of 230 K, made at first
    use in a tenth of a second. Against the formula itself it errs by less than 0.05 % between its nodes, and
    by 2.5 % at 2 km/s, 0.6 % at 4 km/s, less beyond, where the air has 190 or 270 K instead; scaling to a hot
    wall by enthalpy leaves out (rho_w mu_w)^0.1, 3 % at 800 K and 6 % at 1500 K. Outside 1.5 to 13 km/s and
    1e-7 to 0.1 kg/m3 the table's edge is continued as sqrt(rho) V^3.

    Examples
    --------
    >>> f"{float(fay_riddell_cold(np.array(8.57e-5), np.array(11310.0), np.array(0.935))):.3g}"
    '2.57e+06'
    """
    factor = _look_up(_table()[0], density, speed)
    return floats(factor * np.sqrt(density / nose_radius) * (speed * speed * speed))


def dissociation_share(density: ArrayLike, speed: ArrayLike) -> Floats:
    """Return h_D/h_0 at the edge of the boundary layer: the share of enthalpy that recombination sets free.

    Parameters
    ----------
    density : (...,) array_like [kg/m3]
        Of the free stream.
    speed : (...,) array_like [m/s]

    Notes
    -----
    From the same table; between nodes within 0.003. Below 1.5 km/s the value there, less than 0.001 in air of
    1e-4 kg/m3.

    Examples
    --------
    >>> dissociation_share(8.57e-5, [2000.0, 5000.0, 7500.0]).round(2).tolist()
    [0.02, 0.51, 0.69]
    """
    rho, v = np.broadcast_arrays(floats(density), floats(speed))
    return _look_up(_table()[1], floats(rho), floats(v))
