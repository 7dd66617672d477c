"""Heat that atoms of oxygen give up when they pair into molecules on the surface they strike."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from scipy.special import erfc

from aero.air.state import MOLECULE_MASS, SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.constants import BOLTZMANN

if TYPE_CHECKING:
    from aero.gas import Flow

ELECTRONVOLT = 1.602176634e-19  # J, exact (SI 2019)
OXYGEN_BOND = 5.117  # eV to split O2 at 0 K [HuberHerzberg1979]; value from memory
ENERGY_PER_ATOM = 0.5 * OXYGEN_BOND * ELECTRONVOLT  # J, half a bond
_OXYGEN = SPECIES.index("O")


def oxygen_flux(air: Air, flow: Flow, cosine: ArrayLike = 1.0) -> Floats:
    """Return the number of oxygen atoms that strike an element, a second and square metre.

    Parameters
    ----------
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    cosine : (...,) array, optional
        Between the outward normal and the direction the flow comes from; 1 at the stagnation point. It
        broadcasts with the points.

    Returns
    -------
    (...,) array [1/(m2 s)]

    Notes
    -----
    n c chi(s)/(2 sqrt(pi)), chi = exp(-s^2) + sqrt(pi) s (1 + erf s), c = sqrt(2kT/m), s = (V/c) cosine
    [Bird1994]; tends to n V cosine at high speed, and is n c/(2 sqrt(pi)) at rest. Anomalous oxygen counts.

    Examples
    --------
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0, 0, 1, 0, 0, 0, 0], altitude=250e3)
    >>> f"{float(oxygen_flux(air, flow(air, 7500.0))):.3e}"  # n V
    '7.500e+18'
    """
    number = air.species[..., _OXYGEN]
    thermal = np.sqrt(2.0 * BOLTZMANN * air.temperature / MOLECULE_MASS[_OXYGEN])
    s = flow.speed / thermal * floats(cosine)
    drift = s * erfc(-s)
    return floats(0.5 * number * thermal * (np.exp(-s * s) / np.sqrt(np.pi) + drift))


def recombination_flux(air: Air, flow: Flow, efficiency: ArrayLike, cosine: ArrayLike = 1.0) -> Floats:
    """Return the heat that recombining oxygen gives a surface in free-molecular flow.

    Parameters
    ----------
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    efficiency : (...,) array
        Share of the striking atoms that leave as molecules, 0 to 1.
    cosine : (...,) array, optional
        Between the outward normal and the direction the flow comes from; 1 at the stagnation point.

    Returns
    -------
    (...,) array [W/m2]
        To add to the flux of kinetic energy; it does not depend on wall temperature or accommodation.

    Raises
    ------
    ValueError
        If an efficiency lies outside 0 to 1.

    Notes
    -----
    Efficiency times the atoms' flux times half a bond of O2, 2.558 eV an atom. At 7.5 km/s an atom brings
    4.66 eV of kinetic energy, so a fully catalytic wall gains half as much again from atomic oxygen. All of
    the bond's energy is taken to stay in the wall; molecules that leave excited would carry some off
    (judgement: an upper bound). Only oxygen atoms of the free stream count.

    References
    ----------
    [Bird1994], [HuberHerzberg1979]

    Examples
    --------
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0, 0, 1, 0, 0, 0, 0], altitude=250e3)
    >>> f"{float(recombination_flux(air, flow(air, 7500.0), 1.0)):.3f}"
    '3.074'
    """
    share = floats(efficiency)
    if np.any((share < 0.0) | (share > 1.0)):
        raise ValueError(f"efficiency must lie in 0 to 1; it ranges {share.min():g} to {share.max():g}")
    return floats(share * ENERGY_PER_ATOM * oxygen_flux(air, flow, cosine))
