"""The path of an oncoming molecule among those that leave the wall: what shields a body in thin air."""

from __future__ import annotations

import math

import numpy as np
from scipy.special import erf, gamma

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.constants import BOLTZMANN
from aero.gas.flow import Flow
from aero.gas.species import REFERENCE_TEMPERATURE, VHS_DIAMETER, VHS_OMEGA, present, species_major

FAST = 6.0
"""Speed ratio beyond which exp(-S^2) and 1 - erf(S) are below 3e-16: the thermal motion across the stream
no longer counts, and the incident flux is n V."""

_ROOT_PI = math.sqrt(math.pi)


def _pair_constants() -> Floats:
    """Return sigma_pq(g) g over g^(2 - w_p - w_q): pi d^2 (2 k T_ref/m_r)^(w - 1/2)/Gamma(5/2 - w)."""
    diameter = 0.5 * (VHS_DIAMETER[:, None] + VHS_DIAMETER[None, :])
    omega = 0.5 * (VHS_OMEGA[:, None] + VHS_OMEGA[None, :])
    m = MOLECULE_MASS
    reduced = m[:, None] * m[None, :] / (m[:, None] + m[None, :])
    thermal = 2.0 * BOLTZMANN * REFERENCE_TEMPERATURE / reduced
    return floats(math.pi * diameter**2 * thermal ** (omega - 0.5) / gamma(2.5 - omega))


_PAIRS = _pair_constants()


def incident_flux_factor(speed_ratio: ArrayLike) -> Floats:
    """Return the flux onto an element that faces the stream, over n sqrt(2 k T/m)/(2 sqrt(pi)).

    Parameters
    ----------
    speed_ratio : (...,) array

    Returns
    -------
    (...,) array
        exp(-s^2) + sqrt(pi) s (1 + erf s): 1 at rest, 2 sqrt(pi) s far above.

    Examples
    --------
    >>> float(incident_flux_factor(0.0))
    1.0
    """
    still, drift = _incident_parts(floats(speed_ratio))
    return floats(still + drift)


def incident_energy(speed_ratio: ArrayLike) -> Floats:
    """Return the mean translational energy of a molecule that strikes an element facing the stream, over k T.

    Parameters
    ----------
    speed_ratio : (...,) array

    Returns
    -------
    (...,) array
        s^2 + 2 + p/(2 (exp(-s^2) + p)), p = sqrt(pi) s (1 + erf s): 2 at rest, s^2 + 5/2 far above.

    Notes
    -----
    The ratio of the energy flux to the number flux of a drifting Maxwellian [Bird1994].

    Examples
    --------
    >>> float(incident_energy(0.0)), float(incident_energy(10.0))
    (2.0, 102.5)
    """
    s = floats(speed_ratio)
    still, drift = _incident_parts(s)
    return floats(s * s + 2.0 + 0.5 * drift / (still + drift))


def _incident_parts(s: Floats) -> tuple[Floats, Floats]:
    """Return exp(-s^2) and sqrt(pi) s (1 + erf s), with erf only where it is not 1 to rounding."""
    drift = floats(2.0 * _ROOT_PI * s)
    slow = ~(s >= FAST)
    if not np.any(slow):
        return floats(0.0), drift
    if np.all(slow):
        return floats(np.exp(-s * s)), floats(0.5 * drift * (1.0 + erf(s)))
    still = np.zeros_like(s)
    some = s[slow]
    still[slow] = np.exp(-some * some)
    drift[slow] *= 0.5 * (1.0 + erf(some))
    return still, drift


def emitted_number_density(
    number_density: Floats, speed_ratio: Floats, thermal_speed: Floats, outgoing_speed: Floats
) -> Floats:
    """Return the density of the molecules that leave a facing element, by the balance of number fluxes.

    Parameters
    ----------
    number_density : (...,) array [1/m3]
        Of the species in the free stream.
    speed_ratio : (...,) array
        Of the species.
    thermal_speed : (...,) array [m/s]
        sqrt(2 k T/m) of the stream.
    outgoing_speed : (...,) array [m/s]
        Mean speed away from the wall, sqrt(2 k T_e/(pi m)).

    Returns
    -------
    (...,) array [1/m3]

    Notes
    -----
    n_e sqrt(2 k T_e/(pi m)) = n sqrt(k T/(2 pi m)) [exp(-s^2) + sqrt(pi) s (1 + erf s)]. At rest with T_e = T
    it is n/2: only the outgoing half of the molecules exists.

    Examples
    --------
    >>> float(emitted_number_density(np.float64(1.0), np.float64(0.0), np.float64(1.0), 1.0 / np.sqrt(np.pi)))
    0.5
    """
    arriving = number_density * thermal_speed * (0.5 / _ROOT_PI) * incident_flux_factor(speed_ratio)
    return floats(arriving / outgoing_speed)


def emitted_free_path(
    air: Air, flow: Flow, wall_temperature: ArrayLike, energy_accommodation: ArrayLike
) -> Floats:
    """Return the path of an oncoming molecule among those re-emitted from a stagnation point.

    Parameters
    ----------
    air : Air
    flow : Flow
        Of the same points.
    wall_temperature : (...,) array [K]
    energy_accommodation : (...,) array
        Between 0 and 1.

    Returns
    -------
    (...,) array [m]
        NaN where the speed is 0: nothing is oncoming.

    Raises
    ------
    ValueError
        If an accommodation lies outside [0, 1] or a wall temperature is not positive.

    Notes
    -----
    Re-emission temperature of each species: 2 k T_e = (1 - alpha) E_i + alpha 2 k T_w, E_i the mean
    translational energy of the molecules of that species that strike the point. Density n_e of the
    emitted: see `emitted_number_density`. Path of species p: V / sum_q n_e,q sigma_pq(g) g,
    g = V + sqrt(2 k T_e,q/(pi m_q)), sigma_pq the total cross-section of variable hard spheres at the
    relative speed g [Bird1994]; the answer is the mean over mole fractions. The emitted are counted at their
    density on the wall, before they spread, and met at their mean normal speed: a measure for a convex
    body, meant for speed ratios above about 3. For a cold wall it is several times shorter than the
    free-stream path.

    References
    ----------
    [Bird1994]

    Examples
    --------
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(195.0, 1.19e19, altitude=100e3)
    >>> f"{float(emitted_free_path(air, flow(air, 7500.0), 300.0, 1.0)):.4f} m"
    '0.0159 m'
    """
    shape = air.temperature.shape
    alpha, wall = _flat(energy_accommodation, shape), _flat(wall_temperature, shape)
    if np.any((alpha < 0.0) | (alpha > 1.0)):
        raise ValueError("energy_accommodation must lie in [0, 1]")
    if np.any(wall <= 0.0):
        raise ValueError("wall_temperature must be positive, in kelvin")
    n = species_major(air)
    held = present(n)
    if not held:
        return np.full(shape, np.nan)
    V = flow.speed.reshape(-1)
    rates = _collision_rates(air, flow, n, held, 2.0 * wall, alpha)
    total = floats(0.0)
    for row, index in enumerate(held):
        total = total + n[index] / rates[row]
    moving = np.where(V > 0.0, V, np.nan)
    return floats((moving * total).reshape(shape) / air.number_density)


def _collision_rates(
    air: Air, flow: Flow, n: Floats, held: list[int], two_wall: Floats, alpha: Floats
) -> Floats:
    """Return, a row per species held, sum_q n_e,q sigma_pq(g) g [1/s]."""
    T = air.temperature.reshape(-1)
    V = flow.speed.reshape(-1)
    ratios = np.moveaxis(flow.speed_ratio_species, -1, 0).reshape(len(n), -1)
    reflected, accommodated = (1.0 - alpha) * T, alpha * two_wall
    two_k_T = (2.0 * BOLTZMANN) * T
    rates = np.zeros((len(held), T.size))
    term = np.empty(T.size)
    for q in held:
        s, m = ratios[q], MOLECULE_MASS[q]
        still, drift = _incident_parts(s)
        factor = still + drift
        two_T_emitted = reflected * (s * s + 2.0 + 0.5 * drift / factor) + accommodated
        outgoing = np.sqrt(two_T_emitted * (BOLTZMANN / (math.pi * m)))
        arriving = np.sqrt(two_k_T * (0.25 / (math.pi * m))) * factor
        log_g = np.log(V + outgoing)
        emitted = n[q] * arriving / outgoing
        emitted *= np.exp((2.0 - VHS_OMEGA[q]) * log_g)
        # g^(2 - w_p - w_q): one factor of q above, one power of g for each different w_p here
        powers: dict[float, Floats] = {}
        for row, p in enumerate(held):
            w = float(VHS_OMEGA[p])
            if w not in powers:
                powers[w] = emitted * np.exp(-w * log_g)
            np.multiply(powers[w], _PAIRS[p, q], out=term)
            rates[row] += term
    return rates


def _flat(values: ArrayLike, shape: tuple[int, ...]) -> Floats:
    return floats(np.broadcast_to(floats(values), shape).reshape(-1))
