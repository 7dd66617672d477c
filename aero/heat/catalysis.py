"""What a wall that does not let atoms recombine spares itself of the continuum heat flux."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import GAS_CONSTANT
from aero.heat.fay_riddell import LEWIS, LEWIS_FROZEN

if TYPE_CHECKING:
    from aero.body.surface import Surface

_ATOM_MASS = 14.45e-3  # kg/mol, N and O atoms of air in the proportion of air


def catalytic_factor(dissociation_share: ArrayLike, recombined: ArrayLike) -> Floats:
    """Return the continuum heat flux to a wall over that to a fully catalytic one.

    Parameters
    ----------
    dissociation_share : (...,) array_like
        h_D/h_0 at the edge, as `aero.heat.dissociation_share` gives.
    recombined : (...,) array_like
        Share of the atoms reaching the wall by diffusion that recombine there, 0 to 1, as `recombined_share`
        gives.

    Returns
    -------
    (...,) array
        1 for a fully catalytic wall; for one that is not at all, 0.44 at 5 km/s and 0.27 at 7.5 km/s.

    Raises
    ------
    ValueError
        If a share lies outside 0 to 1.

    Notes
    -----
    [1 + (Le^0.63 phi - 1) d]/[1 + (Le^0.63 - 1) d], d the dissociation share, phi the share recombined: a
    boundary layer frozen between an edge in equilibrium and the wall, so the least heat a non-catalytic wall can
    see. In denser air, below about 60 km (judgement), atoms recombine before they reach the wall and the true
    factor is nearer 1; in thinner air the shock layer holds fewer atoms than in equilibrium, with the same
    effect. Flight experience is about a half (judgement).

    References
    ----------
    [Goulard1958], [FayRiddell1958]

    Examples
    --------
    >>> catalytic_factor(0.5, [1.0, 0.5, 0.0]).round(3).tolist()
    [1.0, 0.724, 0.447]
    """
    d, phi = floats(dissociation_share), floats(recombined)
    for name, value in (("dissociation_share", d), ("recombined", phi)):
        if np.any((value < 0.0) | (value > 1.0)):
            raise ValueError(f"{name} must lie in 0 to 1; it is {value.min():g} to {value.max():g}")
    lewis = LEWIS**LEWIS_FROZEN
    return floats((1.0 + (lewis * phi - 1.0) * d) / (1.0 + (lewis - 1.0) * d))


def recombined_share(
    recombination: ArrayLike, wall_temperature: ArrayLike, pressure: ArrayLike, conductance: ArrayLike
) -> Floats:
    """Return the share of atoms diffusing to a wall that recombine on it.

    Parameters
    ----------
    recombination : (...,) array_like
        Probability gamma that a striking atom recombines, 0 to 1.
    wall_temperature : (...,) array_like [K]
    pressure : (...,) array_like [Pa]
        At the wall.
    conductance : (...,) array_like [kg/(m2 s)]
        Heat flux over enthalpy difference without dissociation.

    Returns
    -------
    (...,) array

    Raises
    ------
    ValueError
        If gamma lies outside 0 to 1.

    Notes
    -----
    phi = rho_w k_w/(rho_w k_w + g): k_w = 2 gamma/(2 - gamma) sqrt(R T_w/(2 pi M)) is the speed at which the
    wall consumes atoms, g = Le^(2/3) times the conductance is what diffusion brings (analogy of heat and
    mass). The gas at the wall counts as atoms, one gamma for O and N.

    References
    ----------
    [Goulard1958]

    Examples
    --------
    >>> recombined_share([0.0, 0.01, 1.0], 1500.0, 5000.0, 0.03).round(2).tolist()
    [0.0, 0.36, 0.99]
    """
    gamma, wall = floats(recombination), floats(wall_temperature)
    if np.any((gamma < 0.0) | (gamma > 1.0)):
        raise ValueError(f"recombination must lie in 0 to 1; it is {gamma.min():g} to {gamma.max():g}")
    specific = GAS_CONSTANT / _ATOM_MASS
    density = floats(pressure) / (specific * wall)
    consumed = density * 2.0 * gamma / (2.0 - gamma) * np.sqrt(specific * wall / (2.0 * np.pi))
    with np.errstate(invalid="ignore"):  # nothing arrives and nothing is consumed
        return floats(consumed / (consumed + LEWIS ** (2.0 / 3.0) * floats(conductance)))


def catalysis_of(
    surface: Surface,
    share: ArrayLike,
    wall_temperature: ArrayLike,
    pressure: ArrayLike,
    conductance: ArrayLike,
) -> Floats:
    """Return the factor of a surface as its vehicle file describes it: full, partial or none.

    Parameters
    ----------
    surface : Surface
    share : (...,) array_like
        h_D/h_0 at the edge.
    wall_temperature, pressure, conductance : (...,) array_like
        As for `recombined_share`; the conductance is that of the fully catalytic wall.

    Examples
    --------
    >>> from aero.body.surface import Surface
    >>> float(catalysis_of(Surface(), 0.5, 1000.0, 1e3, 0.01))
    1.0
    """
    d = floats(share)
    if surface.catalysis == "full":
        return np.ones_like(d)
    bare = floats(conductance) / (1.0 + (LEWIS**LEWIS_FROZEN - 1.0) * d)
    found = recombined_share(surface.recombination, wall_temperature, pressure, bare)
    return catalytic_factor(d, np.where(floats(conductance) > 0.0, found, 1.0))
