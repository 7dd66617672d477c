"""Air in thermal and chemical equilibrium, from partition functions: composition, state, shock, viscosity.

A thermochemistry library would serve as well, but takes longer to load than a whole run of this program.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import AVOGADRO, BOLTZMANN
from aero.heat.air_particles import ATOMS, CHARGE, FORMATION, partition, viscosity_of

NITROGEN_SHARE = 0.79  # of atoms; argon counts as nitrogen
_MOLECULE = 0.79 * 28.0134e-3 + 0.21 * 31.9988e-3  # kg of 1 mol of air before it reacts
_ITERATIONS = 80
_HOTTEST, _COLDEST = 4.0e4, 50.0  # K, ends of the search; the model itself ends at single ionisation


@dataclass(frozen=True, eq=False)
class EquilibriumState:
    """Air in equilibrium at each point.

    Attributes
    ----------
    temperature : (...,) array [K]
    density : (...,) array [kg/m3]
    pressure : (...,) array [Pa]
    enthalpy : (...,) array [J/kg]
        Above N2 and O2 at 0 K.
    formation_enthalpy : (...,) array [J/kg]
        What is bound in dissociation and ionisation, above N2 and O2 at 0 K.
    entropy : (...,) array [J/(kg K)]
    number : (..., 9) array [1/m3]
        In the order of `aero.heat.air_particles.PARTICLES`.
    """

    temperature: Floats
    density: Floats
    pressure: Floats
    enthalpy: Floats
    formation_enthalpy: Floats
    entropy: Floats
    number: Floats

    @property
    def mole_fractions(self) -> Floats:
        """Shares of all particles, electrons included, shape (..., 9)."""
        return floats(self.number / self.number.sum(axis=-1, keepdims=True))

    @property
    def viscosity(self) -> Floats:
        """Viscosity [Pa s]; see `aero.heat.air_particles.viscosity_of`."""
        return viscosity_of(self.temperature, self.number)


def equilibrium_state(temperature: ArrayLike, density: ArrayLike) -> EquilibriumState:
    """Return the state of air in equilibrium at temperatures and densities.

    Parameters
    ----------
    temperature : (...,) array_like [K]
    density : (...,) array_like [kg/m3]

    Returns
    -------
    EquilibriumState
        NaN where an input is NaN or not positive.

    Notes
    -----
    n_i = Q_i exp(a_i mu_N + b_i mu_O - z_i mu_e), Q_i the partition function per volume, a, b, z the atoms of
    N and O and the charge. The potentials follow from the amounts of N and O and from neutrality by Newton's
    method on the logarithms. Nine species, singly ionised; rigid rotors, harmonic oscillators and low
    electronic levels: good to a few percent in composition up to about 15000 K (judgement).

    References
    ----------
    [Vincenti1965]

    Examples
    --------
    >>> state = equilibrium_state([300.0, 5000.0], 1.0)
    >>> (state.pressure / (287.0 * state.density * state.temperature)).round(2).tolist()
    [1.0, 1.16]
    """
    T, rho = (floats(a) for a in np.broadcast_arrays(floats(temperature), floats(density)))
    good = (T > 0.0) & (rho > 0.0)
    return _state(np.where(good, T, np.nan), np.where(good, rho, np.nan))


def _state(T: Floats, rho: Floats) -> EquilibriumState:
    log_partition, energy = partition(T)
    number = _composition(log_partition, rho)
    total = number.sum(axis=-1)
    per_mass = BOLTZMANN / rho
    enthalpy = (number * energy).sum(axis=-1) * per_mass
    with np.errstate(divide="ignore", invalid="ignore"):
        potential = np.where(number > 0.0, np.log(number) - log_partition, 0.0)
    entropy = (number * (energy / T[..., None] - potential)).sum(axis=-1) * per_mass
    formation = (number * FORMATION).sum(axis=-1) * per_mass
    return EquilibriumState(T, rho, total * BOLTZMANN * T, enthalpy, formation, entropy, number)


def _composition(log_partition: Floats, rho: Floats) -> Floats:
    """Return number densities (..., 9) [1/m3] from the partition functions."""
    molecules = rho * (AVOGADRO / _MOLECULE)
    wanted = np.stack([2.0 * NITROGEN_SHARE * molecules, 2.0 * (1.0 - NITROGEN_SHARE) * molecules])
    log_wanted = np.log(wanted)
    # potentials if all were atoms, or all molecules: each is too high, the lower is near
    atoms = log_wanted - np.moveaxis(log_partition[..., [3, 4]], -1, 0)
    pairs = 0.5 * (log_wanted - np.log(2.0) - np.moveaxis(log_partition[..., [0, 1]], -1, 0))
    potential = np.minimum(atoms, pairs)
    nitrogen, oxygen = ATOMS.T
    for _ in range(_ITERATIONS):
        number = _numbers(log_partition, potential)
        charged = number * CHARGE
        response = np.maximum((charged * CHARGE).sum(axis=-1), 1e-300)
        by_n = (charged * nitrogen).sum(axis=-1) / response
        by_o = (charged * oxygen).sum(axis=-1) / response
        rows = [number * nitrogen, number * oxygen]
        sums = [row.sum(axis=-1) for row in rows]
        off = [np.log(s / w) for s, w in zip(sums, wanted, strict=True)]
        (a, b), (c, d) = (
            [
                ((row * nitrogen).sum(axis=-1) - (row * CHARGE).sum(axis=-1) * by_n) / s,
                ((row * oxygen).sum(axis=-1) - (row * CHARGE).sum(axis=-1) * by_o) / s,
            ]
            for row, s in zip(rows, sums, strict=True)
        )
        determinant = a * d - b * c
        step = np.stack([d * off[0] - b * off[1], a * off[1] - c * off[0]]) / determinant
        potential = potential - np.clip(step, -5.0, 5.0)
        if not (np.abs(step) > 1e-12 * (1.0 + np.abs(potential))).any():
            break
    return _numbers(log_partition, potential)


def _numbers(log_partition: Floats, potential: Floats) -> Floats:
    """Return number densities, with the electrons' potential that leaves no net charge."""
    exponent = log_partition + potential[0][..., None] * ATOMS[:, 0] + potential[1][..., None] * ATOMS[:, 1]
    ions = exponent[..., 5:8]
    most = ions.max(axis=-1)
    log_ions = most + np.log(np.exp(ions - most[..., None]).sum(axis=-1))
    electron = 0.5 * (log_ions - exponent[..., 8])
    return floats(np.exp(exponent - electron[..., None] * CHARGE))


_Target = Callable[[EquilibriumState], tuple[Floats, Floats]]


def _solve(target: _Target, T: Floats, rho: Floats) -> EquilibriumState:
    """Return the state whose pressure and enthalpy equal what `target` asks for at that state.

    Newton in (ln T, ln rho) with differences for the slopes; NaN where it does not settle.
    """

    def miss(log_t: Floats, log_rho: Floats) -> tuple[Floats, Floats]:
        state = _state(np.exp(log_t), np.exp(log_rho))
        pressure, enthalpy = target(state)
        return np.log(state.pressure / pressure), (state.enthalpy - enthalpy) / (np.abs(enthalpy) + 1e5)

    x, y = np.log(T), np.log(rho)
    small = 1e-6
    moved = np.full_like(x, np.inf)
    for _ in range(_ITERATIONS):
        p, h = miss(x, y)
        p_x, h_x = ((b - a) / small for a, b in zip((p, h), miss(x + small, y), strict=True))
        p_y, h_y = ((b - a) / small for a, b in zip((p, h), miss(x, y + small), strict=True))
        determinant = p_x * h_y - p_y * h_x
        step_x = np.clip((h_y * p - p_y * h) / determinant, -0.2, 0.2)
        step_y = np.clip((p_x * h - h_x * p) / determinant, -0.5, 0.5)
        x = np.clip(x - step_x, np.log(_COLDEST), np.log(_HOTTEST))
        y = y - step_y
        moved = np.abs(step_x) + np.abs(step_y)
        if not (moved > 1e-9).any():
            break
    settled = moved < 1e-7
    return _state(np.where(settled, np.exp(x), np.nan), np.where(settled, np.exp(y), np.nan))


@dataclass(frozen=True, eq=False)
class StagnationLine:
    """Equilibrium air along the stagnation line of a blunt body.

    Attributes
    ----------
    shock : EquilibriumState
        Behind the normal shock.
    edge : EquilibriumState
        Brought to rest at the edge of the boundary layer.
    free_stream_pressure : (...,) array [Pa]
    pressure_coefficient : (...,) array
        Of the stagnation point.
    """

    shock: EquilibriumState
    edge: EquilibriumState
    free_stream_pressure: Floats
    pressure_coefficient: Floats


def stagnation_line(density: ArrayLike, temperature: ArrayLike, speed: ArrayLike) -> StagnationLine:
    """Return equilibrium air behind a normal shock, and brought to rest.

    Parameters
    ----------
    density : (...,) array_like [kg/m3]
    temperature : (...,) array_like [K]
        Of the free stream.
    speed : (...,) array_like [m/s]

    Returns
    -------
    StagnationLine
        NaN where the flow is slower than 1.2 times the speed of sound, or an input is NaN.

    Notes
    -----
    Mass, momentum and energy over the shock; then p_0 = p_2 + u_2^2 (rho_2 + rho_0)/4, the mean density of
    the small compression to rest (in entropy within 1e-5 of isentropic above Mach 5; tested).

    References
    ----------
    [Vincenti1965]

    Examples
    --------
    >>> line = stagnation_line(3.1e-4, 247.0, 7000.0)
    >>> round(float(line.pressure_coefficient), 2), float(line.edge.temperature.round(-2))
    (1.94, 6300.0)
    """
    arrays = np.broadcast_arrays(floats(density), floats(temperature), floats(speed))
    rho, T, V = (floats(a) for a in arrays)
    slowest = 1.2 * np.sqrt(1.4 * 288.2 * T)
    good = (rho > 0.0) & (T > 0.0) & (slowest < V)
    ahead = _state(np.where(good, T, np.nan), np.where(good, rho, np.nan))
    flux, total = ahead.density * V, ahead.enthalpy + 0.5 * V * V

    def over_shock(state: EquilibriumState) -> tuple[Floats, Floats]:
        inverse = np.minimum(ahead.density / state.density, 1.0)
        pressure = ahead.pressure + flux * V * (1.0 - inverse)
        return pressure, ahead.enthalpy + 0.5 * V * V * (1.0 - inverse * inverse)

    warm = np.maximum(1.5 * ahead.temperature, 1000.0 * (0.9 * total / 1e6) ** 0.55)
    shock = _solve(over_shock, warm, 8.0 * ahead.density)
    square = (flux / shock.density) ** 2

    def to_rest(state: EquilibriumState) -> tuple[Floats, Floats]:
        return shock.pressure + 0.25 * square * (shock.density + state.density), total

    edge = _solve(to_rest, shock.temperature, shock.density)
    coefficient = (edge.pressure - ahead.pressure) / (0.5 * flux * V)
    return StagnationLine(shock, edge, ahead.pressure, coefficient)
