"""What is known of each molecule: size, freedom, doubt, and which of them a block of air holds."""

from __future__ import annotations

import math

import numpy as np

from aero.air.state import MOLECULE_MASS, SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats, readonly
from aero.constants import BOLTZMANN

REFERENCE_TEMPERATURE = 273.0
"""Temperature of the reference diameters [K], [Bird1994] appendix A."""

VHS_DIAMETER = readonly(
    [
        4.17e-10,  # N2: [Bird1994] appendix A
        4.07e-10,  # O2: same
        3.35e-10,  # O: fitted to atomic-oxygen viscosity, [BanksKockarts1973], value from memory. The often
        #            quoted 3.0e-10 with 0.80 is a diameter at 1000 K and makes oxygen 40-60 % too viscous.
        3.41e-10,  # N: one of the sets in use, value from memory
        4.17e-10,  # Ar: [Bird1994] appendix A
        2.33e-10,  # He: same
        2.50e-10,  # H: judgement, weak
    ]
)
"""Reference diameters of the variable hard spheres at 273 K [m], in the order of `SPECIES`."""

VHS_OMEGA = readonly([0.74, 0.77, 0.69, 0.74, 0.81, 0.66, 0.80])  # same sources as VHS_DIAMETER
"""Viscosity exponents of the variable hard spheres, in the order of `SPECIES`."""

CROSS_SECTION_UNCERTAINTY = readonly([0.05, 0.05, 0.20, 0.20, 0.05, 0.05, 0.50])  # judgement
"""Relative 1-sigma uncertainty of each collision cross-section, in the order of `SPECIES` (judgement)."""

DEGREES_OF_FREEDOM = readonly([5, 5, 3, 3, 3, 3, 3])
"""Excited degrees of freedom: translation, and rotation of the diatomics; vibration counts as frozen."""

STANDARD_FRACTIONS = readonly([0.78084, 0.209476, 0.0, 0.0, 0.00934, 5.24e-6, 0.0])
"""Mole fractions of sea-level air, [StandardAtmosphere1976] table 3 (carbon dioxide and traces left out)."""

MIXTURE_FROM = 80e3  # m, where the laws of the 1976 standard begin to give way to the mixture: judgement
MIXTURE_WHOLE = 90e3  # m, from where the mixture alone counts: judgement

_TWO_PI = 2.0 * math.pi


def vhs_viscosity(species: str, temperature: ArrayLike) -> Floats:
    """Return the viscosity of one gas of variable hard spheres.

    Parameters
    ----------
    species : str
        One of `SPECIES`.
    temperature : (...,) array [K]

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    mu = 15 sqrt(pi m k T_ref) / (2 pi d_ref^2 (5 - 2 w)(7 - 2 w)) (T/T_ref)^w, [Bird1994] eq. 4.62 (number
    from memory). Exact for the model in the first Chapman-Enskog approximation.

    Examples
    --------
    >>> f"{vhs_viscosity('N2', 273.0):.3e}"
    '1.658e-05'
    """
    index = SPECIES.index(species)
    omega, diameter = VHS_OMEGA[index], VHS_DIAMETER[index]
    momentum = math.sqrt(math.pi * MOLECULE_MASS[index] * BOLTZMANN * REFERENCE_TEMPERATURE)
    reference = 15.0 * momentum / (_TWO_PI * diameter**2 * (5.0 - 2.0 * omega) * (7.0 - 2.0 * omega))
    return floats(reference * (floats(temperature) / REFERENCE_TEMPERATURE) ** omega)


def species_major(air: Air) -> Floats:
    """Return the number densities as a (7, points) array, without a copy where memory already is so."""
    return np.moveaxis(air.species, -1, 0).reshape(len(SPECIES), -1)


def present(number_densities: Floats) -> list[int]:
    """Return the indices of the species of which the block holds any; NaN counts as present.

    Examples
    --------
    >>> present(np.array([[1.0, 2.0], [0.0, 0.0], [0.0, 3.0]]))
    [0, 2]
    """
    return [index for index, row in enumerate(number_densities) if np.any(row)]


def mixture_weight(altitude: Floats) -> Floats:
    """Return how far the mixture's laws replace those of the 1976 standard: 0 at 80 km, 1 at 90 km.

    Notes
    -----
    A cubic step, so that no derivative jumps. The 1976 standard prints its viscosity and speed of sound for
    fixed sea-level composition, up to 86 km; oxygen dissociates from about 85 km.

    Examples
    --------
    >>> mixture_weight(np.array([0.0, 85e3, 1e5])).tolist()
    [0.0, 0.5, 1.0]
    """
    x = (altitude - MIXTURE_FROM) * (1.0 / (MIXTURE_WHOLE - MIXTURE_FROM))
    x = np.minimum(np.maximum(x, 0.0), 1.0)
    return floats(x * x * (3.0 - 2.0 * x))


def mixture_omega(air: Air) -> Floats:
    """Return the mixture's viscosity exponent: the mean of the species' over mole fractions.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{mixture_omega(sea_level_air()):.3f}"
    '0.747'
    """
    return _mean(VHS_OMEGA, air)


def free_path_uncertainty(air: Air) -> Floats:
    """Return the relative 1-sigma uncertainty of the mean free path from the cross-sections.

    Parameters
    ----------
    air : Air

    Returns
    -------
    (...,) array
        sqrt(sum_i (x_i e_i)^2), with x_i the mole fractions and e_i `CROSS_SECTION_UNCERTAINTY`.

    Notes
    -----
    The path of a mixture of like molecules shifts by -x_i for a unit relative change of the cross-section of
    species i; the errors of the species are taken as independent. It holds for every definition of the path:
    it is the doubt about the molecules, not the choice of definition.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{free_path_uncertainty(sea_level_air()):.3f}"
    '0.040'
    """
    total = floats(0.0)
    for index, row in enumerate(species_major(air)):
        share = row * CROSS_SECTION_UNCERTAINTY[index]
        total = total + share * share
    return floats(np.sqrt(total).reshape(air.temperature.shape) / air.number_density)


def _mean(values: Floats, air: Air) -> Floats:
    """Return the mean of a species' property over mole fractions."""
    total = floats(np.einsum("i,ij->j", values, species_major(air)))
    return floats(total.reshape(air.temperature.shape) / air.number_density)
