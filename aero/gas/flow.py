"""The oncoming stream: air that meets a body at a speed, and the numbers that order its drag and heating."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, Floats, floats, readonly
from aero.constants import BOLTZMANN
from aero.gas.heat_capacity import heat_capacity_ratio
from aero.gas.viscosity import viscosities_at

COLD_WALL = 300.0  # K, wall temperature in Cheng's parameter where none is given: judgement

_ROOT_MOLECULE_MASS = np.sqrt(MOLECULE_MASS)


@dataclass(frozen=True, eq=False)
class Flow:
    """A stream of air at each point; arrays are read-only.

    Attributes
    ----------
    speed : (...,) array [m/s]
        Air-relative.
    heat_capacity_ratio : (...,) array
    sound_speed : (...,) array [m/s]
    viscosity : (...,) array [Pa s]
    mach : (...,) array
    speed_ratio : (...,) array
        S = V/sqrt(2 R T), by the mean molecular mass.
    speed_ratio_species : (..., 7) array
        V/sqrt(2 k T/m_i); a view of species-major memory.
    dynamic_pressure : (...,) array [Pa]
    total_temperature : (...,) array [K]
        T (1 + (gamma - 1)/2 M^2), at frozen composition.
    total_enthalpy : (...,) array [J/kg]
        c_p T + V^2/2.
    reynolds_per_m : (...,) array [1/m]
        rho V/mu(T).
    reynolds_stagnation_per_m : (...,) array [1/m]
        rho V/mu(T_0): times a length, Re_0.
    cheng_per_m : (...,) array [m]
        M^2 C*/Re times the length: divide it by a length for Cheng's parameter.
    """

    speed: Floats
    heat_capacity_ratio: Floats
    sound_speed: Floats
    viscosity: Floats
    mach: Floats
    speed_ratio: Floats
    speed_ratio_species: Floats
    dynamic_pressure: Floats
    total_temperature: Floats
    total_enthalpy: Floats
    reynolds_per_m: Floats
    reynolds_stagnation_per_m: Floats
    cheng_per_m: Floats

    def __post_init__(self) -> None:
        for field in fields(self):
            object.__setattr__(self, field.name, readonly(getattr(self, field.name)))

    def reynolds(self, length: ArrayLike) -> Floats:
        """Return rho V L/mu(T) for a length [m]."""
        return floats(self.reynolds_per_m * floats(length))

    def reynolds_stagnation(self, length: ArrayLike) -> Floats:
        """Return Re_0 = rho V L/mu(T_0) for a length [m]."""
        return floats(self.reynolds_stagnation_per_m * floats(length))

    def cheng(self, length: ArrayLike) -> Floats:
        """Return Cheng's parameter M^2 C*/Re for a length [m]."""
        return floats(self.cheng_per_m / floats(length))

    def __str__(self) -> str:
        count = self.speed.size
        return f"Flow({count} point{'' if count == 1 else 's'}; m/s, Pa, K, J/kg, Pa s, 1/m)"


def flow(air: Air, speed: ArrayLike, wall_temperature: ArrayLike = COLD_WALL) -> Flow:
    """Return the stream that meets a body at an air-relative speed.

    Parameters
    ----------
    air : Air
    speed : (...,) array [m/s]
        Not negative; 0 is air at rest (Mach and Reynolds numbers 0).
    wall_temperature : (...,) array [K], optional
        Enters Cheng's parameter alone.

    Returns
    -------
    Flow

    Raises
    ------
    ValueError
        If a speed is negative, or the speeds do not fit the points of the air.

    Notes
    -----
    The gas is frozen and calorically perfect: at 7.5 km/s its total temperature is some 28000 K, a measure of
    energy and not a temperature any gas takes. Cheng's C* = (mu(T*)/mu(T)) (T/T*) at
    T* = (T_0 + 3 T_w)/6 (value from memory).

    References
    ----------
    [Cheng1961], [Macrossan2007]

    Examples
    --------
    >>> from aero.gas.samples import sea_level_air
    >>> at_mach_2 = flow(sea_level_air(), 680.6)
    >>> f"{float(at_mach_2.mach):.3f}, {float(at_mach_2.total_temperature):.1f} K"
    '2.000, 518.6 K'
    """
    V = _speeds(speed, air)
    T, rho, R, gamma = air.temperature, air.density, air.gas_constant, heat_capacity_ratio(air)
    a_squared = gamma * R * T
    V_squared = V * V
    half_V_squared = 0.5 * V_squared
    c_p = R * gamma / (gamma - 1.0)
    T_total = T + half_V_squared / c_p
    T_cheng = (T_total + 3.0 * floats(wall_temperature)) * (1.0 / 6.0)
    mu, mu_total, mu_cheng = viscosities_at(air, (T, T_total, T_cheng))
    a = np.sqrt(a_squared)
    rho_V = rho * V
    by_species = np.multiply.outer(_ROOT_MOLECULE_MASS, V / np.sqrt((2.0 * BOLTZMANN) * T))
    return Flow(
        speed=V,
        heat_capacity_ratio=gamma,
        sound_speed=a,
        viscosity=mu,
        mach=V / a,
        speed_ratio=V / np.sqrt(2.0 * R * T),
        speed_ratio_species=np.moveaxis(by_species, 0, -1),
        dynamic_pressure=rho * half_V_squared,
        total_temperature=T_total,
        total_enthalpy=c_p * T + half_V_squared,
        reynolds_per_m=rho_V / mu,
        reynolds_stagnation_per_m=rho_V / mu_total,
        # M^2 C*/Re with the stream's own viscosity cancelled: finite at rest
        cheng_per_m=V * mu_cheng * T / (a_squared * T_cheng * rho),
    )


def _speeds(speed: ArrayLike, air: Air) -> Floats:
    """Return the speeds in the shape of the air's points, or say what is wrong with them."""
    values = floats(speed)
    try:
        V = np.broadcast_to(values, air.temperature.shape)
    except ValueError:
        raise ValueError(
            f"speed has shape {values.shape}, expected a scalar or the air's shape {air.temperature.shape}"
        ) from None
    if np.any(values < 0.0):
        bad = int(np.flatnonzero(values.reshape(-1) < 0.0)[0])
        raise ValueError(f"speed must not be negative; it is {values.reshape(-1)[bad]:g} m/s at index {bad}")
    return V
