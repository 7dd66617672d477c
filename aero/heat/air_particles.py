"""The particles of hot air: energies, partition functions, and how viscous their mixture is."""

from __future__ import annotations

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import AVOGADRO, BOLTZMANN

PARTICLES = ("N2", "O2", "NO", "N", "O", "NO+", "N+", "O+", "e-")  # the order of the last axis
_PLANCK = 6.62607015e-34  # J s, exact (SI 2019)
_ELECTRON = 9.1093837e-31  # kg, CODATA 2018
ATOMS = floats([[2, 0], [0, 2], [1, 1], [1, 0], [0, 1], [1, 1], [1, 0], [0, 1], [0, 0]])
"""Atoms of N and of O in each particle."""
CHARGE = floats([0, 0, 0, 0, 0, 1, 1, 1, -1])
MASS = ATOMS @ floats([14.0067e-3, 15.9994e-3]) / AVOGADRO - _ELECTRON * CHARGE
"""kg."""

# Dissociation and ionisation energies over k [K]: 9.759, 5.116, 6.497 eV; 14.534, 13.618, 9.264 eV
# ([Vincenti1965], [HuberHerzberg1979], values from memory)
_D_N2, _D_O2, _D_NO = 113250.0, 59370.0, 75390.0
_I_N, _I_O, _I_NO = 168660.0, 158030.0, 107500.0
_FROM_ATOMS = floats([-_D_N2, -_D_O2, -_D_NO, 0.0, 0.0, -_D_NO + _I_NO, _I_N, _I_O, 0.0])
FORMATION = _FROM_ATOMS + 0.5 * (ATOMS @ floats([_D_N2, _D_O2]))
"""Energy of formation from N2 and O2 at 0 K, over k [K]."""

# Rotational temperature [K] times symmetry number, and vibrational temperature [K], of the molecules
_ROTOR = {0: (2 * 2.88, 3371.0), 1: (2 * 2.07, 2256.0), 2: (2.45, 2719.0), 5: (2.87, 3373.0)}
# Electronic levels: (weight, energy over k [K]) [Vincenti1965] (values from memory)
_LEVELS: tuple[tuple[tuple[float, float], ...], ...] = (
    ((1, 0.0),),
    ((3, 0.0), (2, 11390.0), (1, 18990.0)),
    ((2, 0.0), (2, 174.0)),
    ((4, 0.0), (10, 27660.0), (6, 41490.0)),
    ((5, 0.0), (3, 228.0), (1, 326.0), (5, 22830.0), (1, 48620.0)),
    ((1, 0.0),),
    ((1, 0.0), (3, 70.0), (5, 188.0), (5, 22037.0), (1, 47029.0)),
    ((4, 0.0), (10, 38575.0), (6, 58226.0)),
    ((2, 0.0),),
)
# Viscosity of N2, O2, NO, N, O: 0.1 exp[(A ln T + B) ln T + C] kg/(m s) [Blottner1971] (values from memory)
_BLOTTNER = floats(
    [
        [0.0268142, 0.3177838, -11.3155513],
        [0.0449290, -0.0826158, -9.2019475],
        [0.0436378, -0.0335511, -9.5767430],
        [0.0115572, 0.6031679, -12.4327495],
        [0.0203144, 0.4294404, -11.6031403],
    ]
)


def partition(temperature: Floats) -> tuple[Floats, Floats]:
    """Return the logarithm of the partition function per volume and the enthalpy of each particle.

    Parameters
    ----------
    temperature : (...,) array [K]

    Returns
    -------
    log_partition : (..., 9) array
        ln(Q/V) with V in m3, energies above N2 and O2 at 0 K.
    enthalpy : (..., 9) array [K]
        Per particle over k, above N2 and O2 at 0 K.

    Notes
    -----
    Translation (2 pi m k T/h^2)^(3/2); rotation T/(sigma theta_r); vibration 1/(1 - exp(-theta_v/T));
    electronic levels below about 60000 K.

    References
    ----------
    [Vincenti1965]

    Examples
    --------
    >>> round(float(partition(np.array(300.0))[1][0] / 300.0), 2)  # 7/2 kT of a diatomic molecule
    3.5
    """
    T = temperature[..., None]
    log_q = 1.5 * np.log(2.0 * np.pi * BOLTZMANN / _PLANCK**2 * MASS * T) - FORMATION / T
    enthalpy = 2.5 * T + FORMATION
    for index, (rotation, vibration) in _ROTOR.items():
        x = vibration / temperature
        log_q[..., index] += np.log(temperature / rotation) - np.log1p(-np.exp(-x))
        enthalpy[..., index] += temperature + vibration * np.exp(-x) / -np.expm1(-x)
    for index, levels in enumerate(_LEVELS):
        weights = [g * np.exp(-energy / temperature) for g, energy in levels]
        total = sum(weights[1:], start=weights[0])
        log_q[..., index] += np.log(total)
        if len(levels) > 1:
            excited = sum(w * energy for w, (_, energy) in zip(weights, levels, strict=True))
            enthalpy[..., index] += excited / total
    return log_q, enthalpy


def viscosity_of(temperature: ArrayLike, number: ArrayLike) -> Floats:
    """Return the viscosity of hot air of a given composition.

    Parameters
    ----------
    temperature : (...,) array_like [K]
    number : (..., 9) array_like
        Particles in the order of `PARTICLES`, in any one unit.

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    Fits per species from 1000 to 30000 K [Blottner1971] in Wilke's mixture rule [Wilke1950]. Ions count as
    their neutral and electrons not at all: above some percent of ionisation (about 10 km/s) the true value is
    lower (judgement).

    Examples
    --------
    >>> float(viscosity_of(2000.0, [79, 21, 0, 0, 0, 0, 0, 0, 0]).round(7))
    6.59e-05
    """
    n, log_t = floats(number), np.log(floats(temperature))
    neutral = n[..., :5].copy()
    for ion, atom in ((5, 2), (6, 3), (7, 4)):
        neutral[..., atom] += n[..., ion]
    share = neutral / neutral.sum(axis=-1, keepdims=True)
    a, b, c = _BLOTTNER.T
    mu = 0.1 * np.exp((a * log_t[..., None] + b) * log_t[..., None] + c)
    mass = MASS[:5]
    result = np.zeros(log_t.shape)
    for i in range(5):
        root = 1.0 + np.sqrt(mu[..., i, None] / mu) * (mass / mass[i]) ** 0.25
        spread = (share * root * root / np.sqrt(8.0 * (1.0 + mass[i] / mass))).sum(axis=-1)
        result += share[..., i] * mu[..., i] / spread
    return result
