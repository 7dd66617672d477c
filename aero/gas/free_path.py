"""The mean free path, three definitions, always named."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import Floats, floats
from aero.errors import choose
from aero.gas.species import REFERENCE_TEMPERATURE, VHS_DIAMETER, VHS_OMEGA, present, species_major
from aero.gas.viscosity import viscosity

HARD_SPHERE_DIAMETER = 3.65e-10  # m, effective collision diameter of air: [StandardAtmosphere1976] part 1.3.6

# pi d_pq^2 sqrt(1 + m_p/m_q), with d_pq the mean diameter of the pair
_PAIRS = (
    math.pi
    * (0.5 * (VHS_DIAMETER[:, None] + VHS_DIAMETER[None, :])) ** 2
    * np.sqrt(1.0 + MOLECULE_MASS[:, None] / MOLECULE_MASS[None, :])
)


def hard_sphere(air: Air) -> Floats:
    """Return the free path of hard spheres of the standard's diameter, 1/(sqrt(2) pi d^2 n).

    Notes
    -----
    d = 3.65e-10 m for every mixture and temperature, as the 1976 standard has it [StandardAtmosphere1976].

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(hard_sphere(sea_level_air())):.4e}"
    '6.6334e-08'
    """
    return floats(1.0 / (math.sqrt(2.0) * math.pi * HARD_SPHERE_DIAMETER**2) / air.number_density)


def viscosity_based(air: Air) -> Floats:
    """Return the free path that hard spheres of the air's viscosity would have, (mu/p) sqrt(pi k T/(2 m)).

    Notes
    -----
    The definition of aerosol science [Jennings1988]; m is the mean molecular mass.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(viscosity_based(sea_level_air())):.3e}"
    '6.366e-08'
    """
    return viscosity_path(air, viscosity(air))


def viscosity_path(air: Air, air_viscosity: Floats) -> Floats:
    """Return the viscosity-based free path where the viscosity [Pa s] is already at hand."""
    speed = np.sqrt(0.5 * math.pi * air.gas_constant * air.temperature)
    return floats(air_viscosity * speed / air.pressure)


def variable_hard_sphere(air: Air) -> Floats:
    """Return the free path of a mixture of variable hard spheres, the one DSMC cells are sized by.

    Notes
    -----
    Per species 1/sum_q[pi d_pq^2 n_q (T_ref/T)^(w_pq - 1/2) sqrt(1 + m_p/m_q)], averaged over mole fractions;
    d_pq and w_pq are the means of the pair [Bird1994]. It grows with temperature: longer than `hard_sphere`
    above about 775 K in sea-level air, and at any temperature in atomic oxygen.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(variable_hard_sphere(sea_level_air())):.2e}"
    '5.20e-08'
    """
    n = species_major(air)
    held = present(n)
    if not held:
        return np.full(air.temperature.shape, np.nan)
    # (T_ref/T)^(w_pq - 1/2) with w_pq a mean falls apart into one factor of p and one of q
    cooling = (-0.5) * np.log(air.temperature.reshape(-1) * (1.0 / REFERENCE_TEMPERATURE))
    shrink = {w: np.exp((w - 0.5) * cooling) for w in {float(VHS_OMEGA[index]) for index in held}}
    target = np.empty((len(held), n.shape[1]))
    for row, index in enumerate(held):
        np.multiply(n[index], shrink[float(VHS_OMEGA[index])], out=target[row])
    rate = np.einsum("pq,qn->pn", _PAIRS[np.ix_(held, held)], target)
    total = floats(0.0)
    for row, index in enumerate(held):
        total = total + n[index] / (shrink[float(VHS_OMEGA[index])] * rate[row])
    return floats(total.reshape(air.temperature.shape) / air.number_density)


FREE_PATHS: dict[str, Callable[[Air], Floats]] = {
    "hard-sphere": hard_sphere,
    "vhs": variable_hard_sphere,
    "viscosity": viscosity_based,
}
"""Name of the definition -> function of the air."""


def mean_free_path(air: Air, definition: str = "hard-sphere") -> Floats:
    """Return the mean free path of the air at rest.

    Parameters
    ----------
    air : Air
    definition : str, optional
        A key of `FREE_PATHS`: "hard-sphere" (the 1976 standard's own), "vhs" or "viscosity".

    Returns
    -------
    (...,) array [m]

    Raises
    ------
    InputError
        If there is no such definition.

    Notes
    -----
    The definitions differ by 25 % at sea level and more at high temperature: physics, not error. A bridge's
    centre belongs to the definition it was fitted in.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(mean_free_path(sea_level_air()))*1e9:.1f} nm"
    '66.3 nm'
    >>> mean_free_path(sea_level_air(), "vsh")
    Traceback (most recent call last):
    aero.errors.InputError: free path is 'vsh', expected one of: hard-sphere, vhs, viscosity; \
did you mean 'vhs'?
    """
    return FREE_PATHS[choose(definition, FREE_PATHS, "free path")](air)


__all__ = [
    "FREE_PATHS",
    "HARD_SPHERE_DIAMETER",
    "hard_sphere",
    "mean_free_path",
    "variable_hard_sphere",
    "viscosity_based",
    "viscosity_path",
]
