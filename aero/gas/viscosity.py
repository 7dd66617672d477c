"""Viscosity: Sutherland's law for cold air low down, Wilke's mixture of the species high up and when hot."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from aero.air.state import MOLAR_MASS, SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats, readonly
from aero.gas.species import VHS_OMEGA, mixture_weight, present, species_major, vhs_viscosity

SUTHERLAND_BETA = 1.458e-6  # kg/(s m K^1/2), [StandardAtmosphere1976] table 2
SUTHERLAND_TEMPERATURE = 110.4  # K, same; the 110 K printed in one place there is a misprint

FIT_TEMPERATURE = 300.0  # K, at which the fits below are anchored

# mu = mu_300 (T/300)^a exp(b (1/T - 1/300)). N2, O2, Ar, He: least greatest error against the dilute-gas
# viscosities of CoolProp 8.0 from 150 to 2000 K ([Lemmon2004]; helium [Arp1998]); greatest error there
# N2 0.35, O2 0.40, Ar 0.61, He 0.07 %. O, N, H: variable hard spheres, an exact power law.
_FITS: dict[str, tuple[float, float, float]] = {
    "N2": (1.7874e-5, 0.6144, -45.17),
    "O2": (2.0664e-5, 0.6168, -52.63),
    "Ar": (2.2804e-5, 0.6247, -59.00),
    "He": (1.9920e-5, 0.7158, 9.03),
}


def _fit(species: str) -> tuple[float, float, float]:
    if species in _FITS:
        return _FITS[species]
    return float(vhs_viscosity(species, FIT_TEMPERATURE)), float(VHS_OMEGA[SPECIES.index(species)]), 0.0


VISCOSITY_FITS = readonly([_fit(species) for species in SPECIES])
"""(7, 3): viscosity at 300 K [Pa s], exponent, and decay temperature b [K] of each species."""

AIR_FIT = (1.8512e-5, 0.6150, -46.94)
"""The same form for sea-level air: `wilke` from 300 to 100000 K to 0.014 %."""

SUTHERLAND_TO = 350.0  # K, hotter than the air of any altitude below 80 km: judgement
AIR_FIT_FROM = 600.0  # K, where Sutherland's law has fallen 2 % under measured air: judgement

# Wilke's bracket is (1 + v_i/v_j)^2 / sqrt(8 (1 + M_i/M_j)) with v = mu^(1/2) M^(-1/4), so that its square
# opens into three sums over j, each a constant 7x7 matrix times one row per species.
_WEIGHTS = 1.0 / np.sqrt(8.0 * (1.0 + MOLAR_MASS[:, None] / MOLAR_MASS[None, :]))
_ROOT_MASS = np.sqrt(MOLAR_MASS)
# ln v = _LOG + _POWER ln T + _DECAY / T
_POWER = 0.5 * VISCOSITY_FITS[:, 1]
_DECAY = 0.5 * VISCOSITY_FITS[:, 2]
_LOG = (
    0.5 * np.log(VISCOSITY_FITS[:, 0] / _ROOT_MASS)
    - _POWER * np.log(FIT_TEMPERATURE)
    - _DECAY / FIT_TEMPERATURE
)


def sutherland(temperature: ArrayLike) -> Floats:
    """Return the viscosity of air by Sutherland's law with the constants of the 1976 standard.

    Parameters
    ----------
    temperature : (...,) array [K]

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    mu = beta T^(3/2)/(T + S). Within 2 % of measured air from 150 to 600 K, 4 % low at 1000 K, 9 % at 2000 K.

    References
    ----------
    [StandardAtmosphere1976] eq. 51

    Examples
    --------
    >>> f"{sutherland(288.15):.4e}"
    '1.7894e-05'
    """
    T = floats(temperature)
    return floats(SUTHERLAND_BETA * T * np.sqrt(T) / (T + SUTHERLAND_TEMPERATURE))


def air_viscosity(temperature: ArrayLike) -> Floats:
    """Return the viscosity of air of sea-level composition, cold or hot.

    Parameters
    ----------
    temperature : (...,) array [K]

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    Sutherland's law up to 350 K; from 600 K the mixture's viscosity, as a fit; a cubic step between. So the
    cold air is the 1976 standard's to the digit, and at total temperatures the law is the one that holds high
    up: Sutherland's alone would lie 40 % lower at 100000 K and give Re_0 a false slope between 80 and 90 km.

    Examples
    --------
    >>> [f"{mu:.3e}" for mu in air_viscosity([288.15, 1000.0])]
    ['1.789e-05', '4.331e-05']
    """
    T = floats(temperature)
    mu = sutherland(T)
    x = np.clip((T - SUTHERLAND_TO) / (AIR_FIT_FROM - SUTHERLAND_TO), 0.0, 1.0)
    if not np.any(x):
        return mu
    at_300, power, decay = AIR_FIT
    fit = _power_law(T, at_300, power, decay)
    return floats(mu + x * x * (3.0 - 2.0 * x) * (fit - mu))


def _power_law(T: Floats, at_300: float, power: float, decay: float) -> Floats:
    exponent = power * np.log(T / FIT_TEMPERATURE) + decay * (1.0 / T - 1.0 / FIT_TEMPERATURE)
    return floats(at_300 * np.exp(exponent))


def species_viscosity(species: str, temperature: ArrayLike) -> Floats:
    """Return the viscosity of one pure gas from its fit.

    Parameters
    ----------
    species : str
        One of `aero.air.state.SPECIES`.
    temperature : (...,) array [K]

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    mu = mu_300 (T/300)^a exp(b (1/T - 1/300)): good to 0.7 % from 150 to 2000 K for N2, O2, Ar and He; as
    good as its cross-section (20-50 %) for O, N and H. Above 2000 K an extrapolation that rises as T^a
    (a = 0.61 to 0.80): smooth and monotone down to 13 K.

    Examples
    --------
    >>> f"{species_viscosity('N2', 300.0):.4e}"
    '1.7874e-05'
    """
    at_300, power, decay = VISCOSITY_FITS[SPECIES.index(species)]
    return _power_law(floats(temperature), at_300, power, decay)


def wilke(number_densities: Floats, temperature: Floats) -> Floats:
    """Return the viscosity of a mixture by Wilke's rule.

    Parameters
    ----------
    number_densities : (7, points) array [1/m3]
        Species first; only their ratios count.
    temperature : (points,) array [K]

    Returns
    -------
    (points,) array [Pa s]

    Notes
    -----
    mu = sum_i n_i mu_i / sum_j n_j phi_ij, phi_ij = (1 + (mu_i/mu_j)^(1/2) (M_j/M_i)^(1/4))^2
    / sqrt(8 (1 + M_i/M_j)). Species the block holds none of are left out. The rule itself is good to about
    1 % for like molecules and to some 5 % where light and heavy ones mix (common practice, no source).

    References
    ----------
    [Wilke1950]

    Examples
    --------
    >>> nitrogen = np.zeros((7, 1)); nitrogen[0] = 1.0
    >>> f"{wilke(nitrogen, np.array([300.0]))[0]:.4e}"
    '1.7874e-05'
    """
    return _wilke_at(number_densities, [temperature])[0]


def _wilke_at(number_densities: Floats, temperatures: Sequence[Floats]) -> list[Floats]:
    """Return Wilke's viscosity of one mixture at several temperatures; the first of the sums is shared."""
    held = present(number_densities)
    if not held:
        return [np.full(T.shape, np.nan) for T in temperatures]
    n = number_densities if len(held) == len(number_densities) else number_densities[held]
    matrix = _WEIGHTS[np.ix_(held, held)]
    # einsum's own loops, not BLAS: a multiply-add over all points for each of the 49 pairs
    constant = np.einsum("ij,jn->in", matrix, n)
    return [_wilke_sums(held, n, matrix, constant, T) for T in temperatures]


def _wilke_sums(held: list[int], n: Floats, matrix: Floats, constant: Floats, T: Floats) -> Floats:
    """Return sum_i n_i mu_i / (constant_i + v_i (2 sum_j A_ij n_j/v_j + v_i sum_j A_ij n_j/v_j^2))."""
    log_T, inverse_T = np.log(T), 1.0 / T
    v = np.empty_like(n, order="C")
    for row, index in enumerate(held):
        np.multiply(log_T, _POWER[index], out=v[row])
        if _DECAY[index]:
            v[row] += inverse_T * _DECAY[index]
        v[row] += _LOG[index]
    np.exp(v, out=v)
    share = n / v
    linear = np.einsum("ij,jn->in", 2.0 * matrix, share)
    share /= v
    phi = np.einsum("ij,jn->in", matrix, share)
    for term in (linear, constant):
        phi *= v
        phi += term
    v *= v
    v *= n
    v /= phi
    return floats(np.einsum("i,in->n", _ROOT_MASS[held], v))


def viscosities_at(air: Air, temperatures: Sequence[ArrayLike]) -> list[Floats]:
    """Return the viscosity of the same mixture at several temperatures; see `viscosity_at`."""
    shape = air.temperature.shape
    rows = [np.broadcast_to(floats(T), shape).reshape(-1) for T in temperatures]
    weight = mixture_weight(air.altitude).reshape(-1)
    mixed = weight != 0.0  # NaN counts as mixed, and stays NaN
    n = species_major(air)
    if mixed.all() and (weight == 1.0).all():
        return [mu.reshape(shape) for mu in _wilke_at(n, rows)]
    answers = [air_viscosity(T) for T in rows]
    if mixed.any():
        at = np.flatnonzero(mixed)
        high = _wilke_at(np.take(n, at, axis=1), [T[at] for T in rows])
        for answer, mu in zip(answers, high, strict=True):
            low = answer[at]
            answer[at] = low + weight[at] * (mu - low)
    return [answer.reshape(shape) for answer in answers]


def viscosity_at(air: Air, temperature: ArrayLike) -> Floats:
    """Return the viscosity of the same mixture at another temperature, such as the total temperature.

    Parameters
    ----------
    air : Air
        Gives the mixture and the altitude; its temperature is not used.
    temperature : (...,) array [K]

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    Below 80 km `air_viscosity` (Sutherland's law up to 350 K), above 90 km Wilke's mixture, a cubic step
    between. At the total temperatures of an entry (tens of thousands of kelvin, a frozen gas that exists
    nowhere) both are extrapolations, as T^0.6 to T^0.7. They rise monotonically with temperature, which is
    what a similarity parameter needs; they are not the viscosity of a dissociated shock layer.

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(viscosity_at(sea_level_air(), 20000.0)):.2e}"
    '2.86e-04'
    """
    return viscosities_at(air, [temperature])[0]


def viscosity(air: Air) -> Floats:
    """Return the viscosity of the air at its own temperature.

    Parameters
    ----------
    air : Air

    Returns
    -------
    (...,) array [Pa s]

    Notes
    -----
    See `viscosity_at`. Above 90 km the mixture is good to about 2 % where molecules make up the air, and to
    the 20 % of the atoms' cross-sections above 200 km.

    References
    ----------
    [StandardAtmosphere1976], [Wilke1950], [Lemmon2004]

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> f"{float(viscosity(sea_level_air())):.4e}"
    '1.7894e-05'
    """
    return viscosity_at(air, air.temperature)
