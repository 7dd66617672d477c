"""Ratio of heat capacities and speed of sound of the mixture."""

from __future__ import annotations

import numpy as np

from aero.air.state import Air
from aero.arrays import Floats, floats
from aero.gas.species import DEGREES_OF_FREEDOM, mixture_weight, species_major

STANDARD_RATIO = 1.4
"""Heat-capacity ratio of air below 86 km, exact by definition: [StandardAtmosphere1976] part 1.3.10."""


def heat_capacity_ratio(air: Air) -> Floats:
    """Return the ratio of the heat capacities at constant pressure and volume.

    Parameters
    ----------
    air : Air

    Returns
    -------
    (...,) array

    Notes
    -----
    Above 90 km 1 + 1/(c_v/k), c_v = 3/2 k an atom and 5/2 k a diatomic molecule: between 7/5 and 5/3.
    Below 80 km exactly 1.4, the 1976 standard's own (the mixture with its argon would give 1.4015, 0.05 %
    more in the speed of sound); a cubic step from 80 to 90 km joins the two. The standard defines no speed
    of sound above 86 km. Vibration, dissociation and ionisation count as frozen: true of the air at rest up
    to about 600 K (N2 and O2), and above where the air is mostly atoms.

    References
    ----------
    [StandardAtmosphere1976]

    Examples
    --------
    >>> from aero.gas.samples import mixed_air, sea_level_air
    >>> float(heat_capacity_ratio(sea_level_air()))
    1.4
    >>> oxygen = mixed_air(1000.0, 1e14, [0, 0, 1, 0, 0, 0, 0], altitude=400e3)
    >>> f"{float(heat_capacity_ratio(oxygen)):.4f}"
    '1.6667'
    """
    weight = mixture_weight(air.altitude)
    if not np.any(weight):
        return np.full(air.temperature.shape, STANDARD_RATIO)
    freedom = np.einsum("i,ij->j", DEGREES_OF_FREEDOM, species_major(air)).reshape(air.temperature.shape)
    return floats(STANDARD_RATIO + weight * ((1.0 - STANDARD_RATIO) + 2.0 * air.number_density / freedom))


def sound_speed(air: Air) -> Floats:
    """Return the speed of sound, sqrt(gamma R T), at frozen composition.

    Parameters
    ----------
    air : Air

    Returns
    -------
    (...,) array [m/s]

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(sound_speed(sea_level_air())):.1f} m/s"
    '340.3 m/s'
    """
    return floats(np.sqrt(heat_capacity_ratio(air) * air.gas_constant * air.temperature))
