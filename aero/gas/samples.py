"""Air made by hand from temperature, density and mole fractions: for examples, tests and wind tunnels."""

from __future__ import annotations

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, floats
from aero.constants import BOLTZMANN
from aero.gas.species import STANDARD_FRACTIONS


def mixed_air(
    temperature: ArrayLike,
    number_density: ArrayLike,
    mole_fractions: ArrayLike = STANDARD_FRACTIONS,
    altitude: ArrayLike = 0.0,
    model: str = "by hand",
) -> Air:
    """Return an ideal-gas `Air` of the mole fractions given.

    Parameters
    ----------
    temperature : (...,) array [K]
    number_density : (...,) array [1/m3]
    mole_fractions : (7,) or (..., 7) array, optional
        In the order of `aero.air.state.SPECIES`; scaled to add up to 1. Sea-level air by default.
    altitude : (...,) array [m], optional
        Below 90 km the laws of the 1976 standard for air replace those of the mixture, wholly below 80 km:
        give an altitude above 90 km for any other gas.
    model : str, optional

    Returns
    -------
    Air

    Examples
    --------
    >>> air = mixed_air(200.0, 1.699e19, [0, 0, 0, 0, 1, 0, 0], altitude=100e3)
    >>> f"{float(air.density):.4e} kg/m3 of argon"
    '1.1270e-06 kg/m3 of argon'
    """
    fractions = floats(mole_fractions)
    fractions = fractions / fractions.sum(axis=-1, keepdims=True)
    T, n, h = np.broadcast_arrays(floats(temperature), floats(number_density), floats(altitude))
    by_species = np.moveaxis(np.broadcast_to(fractions, (*T.shape, fractions.shape[-1])), -1, 0)
    species = np.moveaxis(np.ascontiguousarray(by_species * n), 0, -1)
    density = floats(np.tensordot(species, MOLECULE_MASS, axes=(-1, 0)))
    return Air(model, floats(h), floats(T), floats(n * BOLTZMANN * T), density, floats(n), species)


def sea_level_air() -> Air:
    """Return air at 288.15 K and 101325 Pa, the sea level of the 1976 standard.

    Examples
    --------
    >>> f"{float(sea_level_air().density):.4f} kg/m3"
    '1.2248 kg/m3'
    """
    return mixed_air(288.15, 101325.0 / (BOLTZMANN * 288.15))  # [StandardAtmosphere1976]
