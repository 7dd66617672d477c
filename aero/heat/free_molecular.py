"""Heating of a stagnation element by molecules that meet it without meeting each other."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from scipy.special import erfc

from aero.air.state import MOLECULE_MASS, SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.constants import BOLTZMANN

if TYPE_CHECKING:
    from aero.gas import Flow

_SQRT_PI = float(np.sqrt(np.pi))
_SPEED_PER_SQRT_KT = np.sqrt(2.0 / MOLECULE_MASS)  # most probable speed over sqrt(kT)
_ROTATION = np.array([1.0 if name in ("N2", "O2") else 0.0 for name in SPECIES])
"""Internal energy carried by a molecule, in units of kT: two rotations of a diatomic, none of an atom."""
_LIMIT = 6.0  # speed ratio above which erfc(S) < 2.2e-17 and the thermal spread no longer shows


def energy_fluxes(air: Air, flow: Flow) -> tuple[Floats, Floats]:
    """Return what the oncoming molecules bring to a stagnation element, and what they carry off.

    Parameters
    ----------
    air : Air
        Air of shape (...,).
    flow : Flow
        Its motion past the body, of the same shape.

    Returns
    -------
    incident : (...,) array [W/m2]
        Translational and rotational energy striking the element.
    emitted_per_kelvin : (...,) array [W/(m2 K)]
        Energy that leaves with molecules re-emitted in balance with the wall, divided by its temperature.

    Notes
    -----
    For each species, with s its speed ratio, c = sqrt(2kT/m) and chi = exp(-s^2) + sqrt(pi) s (1 + erf s),
    the number flux is N = n c chi/(2 sqrt(pi)), the incident energy
    N k T (s^2 + 5/2 + j) - n c k T exp(-s^2)/(4 sqrt(pi)), the emitted energy N k T_w (2 + j); j = 1 for
    diatomic molecules, 0 for atoms [Bird1994]. Vibration, and the heat of recombining at the wall, are left
    out. Above s = 6 the limits N = n V are taken, to rounding the same.

    Examples
    --------
    >>> from aero.gas import flow, sea_level_air
    >>> air = sea_level_air()
    >>> incident, emitted = energy_fluxes(air, flow(air, 7500.0))
    >>> f"{float(incident / (0.5 * air.density * 7500.0**3)):.3f}"  # of rho V^3/2
    '1.010'
    """
    kt = BOLTZMANN * air.temperature
    speed = flow.speed
    diatomic = air.species[..., 0] + air.species[..., 1]
    incident = np.array(
        speed * (0.5 * air.density * speed * speed + kt * (2.5 * air.number_density + diatomic))
    )
    emitted = np.array(BOLTZMANN * speed * (2.0 * air.number_density + diatomic))
    thermal = np.sqrt(kt)
    for index, rotation in enumerate(_ROTATION):
        number = air.species[..., index]
        ratio = flow.speed_ratio_species[..., index]
        slow = (ratio < _LIMIT) & (number > 0.0)
        if not slow.any():
            continue
        where = ... if slow.all() else slow
        number, ratio, energy, root = number[where], ratio[where], kt[where], thermal[where]
        half = 0.5 * number * _SPEED_PER_SQRT_KT[index] * root
        bell = np.exp(-ratio * ratio) / _SQRT_PI
        excess = half * (bell - ratio * erfc(ratio))  # number flux beyond n V
        incident[where] += energy * ((ratio * ratio + 2.5 + rotation) * excess - 0.5 * half * bell)
        emitted[where] += BOLTZMANN * (2.0 + rotation) * excess
    return incident, emitted


def element_energy_fluxes(air: Air, flow: Flow, cosine: ArrayLike) -> tuple[Floats, Floats]:
    """Return what the oncoming molecules bring to inclined elements, and what they carry off.

    Parameters
    ----------
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    cosine : (n,) array_like
        Between each element's outward normal and the direction the flow comes from.

    Returns
    -------
    incident : (..., n) array [W/m2]
    emitted_per_kelvin : (..., n) array [W/(m2 K)]

    Notes
    -----
    As `energy_fluxes`, with s_n = s cosine in chi and in the exponential and s itself in the energy a
    molecule carries: N k T (s^2 + 5/2 + j) - n c k T exp(-s_n^2)/(4 sqrt(pi)) [Bird1994].

    Examples
    --------
    >>> from aero.gas import flow, sea_level_air
    >>> air = sea_level_air()
    >>> incident, _ = element_energy_fluxes(air, flow(air, 7500.0), [1.0, 0.5, -1.0])
    >>> (incident / (0.5 * air.density * 7500.0**3)).round(3).tolist()
    [1.01, 0.505, 0.0]
    """
    towards = floats(cosine)
    kt = (BOLTZMANN * air.temperature)[..., None]
    incident = np.zeros(np.broadcast_shapes(kt.shape, towards.shape))
    emitted = np.zeros_like(incident)
    for index, rotation in enumerate(_ROTATION):
        number = air.species[..., index, None]
        if not (number > 0.0).any():
            continue
        ratio = flow.speed_ratio_species[..., index, None]
        normal = ratio * towards
        half = 0.5 * number * _SPEED_PER_SQRT_KT[index] * np.sqrt(kt)
        bell = np.exp(-normal * normal) / _SQRT_PI
        striking = half * (bell + normal * erfc(-normal))
        incident += kt * (striking * (ratio * ratio + 2.5 + rotation) - 0.5 * half * bell)
        emitted += BOLTZMANN * (2.0 + rotation) * striking
    return incident, emitted


def free_molecular_flux(
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    diffuse_fraction: ArrayLike = 1.0,
) -> Floats:
    """Return the free-molecular heat flux to a stagnation element, positive into the wall.

    Parameters
    ----------
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    wall_temperature : (...,) array_like [K]
    accommodation : (...,) array_like
        Energy accommodation of the molecules that leave diffusely, 0 to 1.
    diffuse_fraction : array_like, optional
        Maxwell's share of molecules that leave diffusely; the rest leave mirror-like and bring no heat.

    Returns
    -------
    (...,) array [W/m2]
        sigma alpha (E_i - E_w); negative where the wall is hotter than what strikes it; 0 at speed 0 by
        convention; NaN where an input is.

    Notes
    -----
    Tends to sigma alpha rho V^3/2 at high speed. The element faces the flow: flat, normal to it.

    References
    ----------
    [Bird1994], [Schaaf1958]
    """
    incident, emitted = energy_fluxes(air, flow)
    net = incident - emitted * floats(wall_temperature)
    flux = floats(accommodation) * floats(diffuse_fraction) * net
    return np.where(flow.speed == 0.0, 0.0, flux)
