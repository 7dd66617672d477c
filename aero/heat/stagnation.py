"""Everything about the heating of the stagnation point, in one pass."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.heat.convective import correlation_named, enthalpy_and_slope, reference_enthalpy
from aero.heat.effective_radius import heating_radius
from aero.heat.free_molecular import energy_fluxes
from aero.heat.radiative import radiative_flux, radiative_validity
from aero.heat.wall import radiative_wall

if TYPE_CHECKING:
    from aero.body import Vehicle
    from aero.gas import Flow


LINE_OVER_POINT = (
    0.57 / 0.763
)  # heating of a cylinder's stagnation line over a sphere's point [FayRiddell1958]


@dataclass(frozen=True, eq=False)
class Stagnation:
    """Heat flux to the stagnation point at each point, positive into the wall.

    Attributes
    ----------
    total : (...,) array [W/m2]
        Bridged convective plus radiative.
    bridged : (...,) array [W/m2]
        Convective, between its two limits.
    free_molecular, continuum : (...,) array [W/m2]
        The limits of the convective flux.
    radiative : (...,) array [W/m2]
    wall_temperature : (...,) array [K]
    coefficient : (...,) array
        C_H = total/(rho V^3/2); NaN at speed 0.
    continuum_weight : (...,) array
        Share of the continuum limit in d ln(bridged): 1 in the continuum, 0 in free-molecular flow.
    by_wall_temperature : (...,) array [W/(m2 K)]
        d total/d T_w.
    radiative_validity : (...,) int8 array
        Keys of `aero.heat.RADIATIVE_VALIDITY`.
    correlation : str
        Key of `aero.heat.CONVECTIVE`.
    """

    total: Floats
    bridged: Floats
    free_molecular: Floats
    continuum: Floats
    radiative: Floats
    wall_temperature: Floats
    coefficient: Floats
    continuum_weight: Floats
    by_wall_temperature: Floats
    radiative_validity: np.ndarray[tuple[int, ...], np.dtype[np.int8]]
    correlation: str

    def __str__(self) -> str:
        count = self.total.size
        return f"Stagnation({self.correlation}, {count} point{'' if count == 1 else 's'}; W/m2, K)"


def continuum_weight(continuum: ArrayLike, free_molecular: ArrayLike, exponent: float = 2.0) -> Floats:
    """Return w = |q_fm|^p/(|q_c|^p + |q_fm|^p): 1 where the continuum limit governs, 0 where the other does.

    NaN where both limits are 0.

    Examples
    --------
    >>> continuum_weight([1.0, 3.0, 1e6], [1e6, 3.0, 1.0]).round(3).tolist()
    [1.0, 0.5, 0.0]
    """
    c, f = np.abs(floats(continuum)), np.abs(floats(free_molecular))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        ratio = c / f
        power = ratio * ratio if exponent == 2.0 else ratio**exponent
        return 1.0 / (1.0 + power)


def bridged_flux(continuum: ArrayLike, free_molecular: ArrayLike, exponent: float = 2.0) -> Floats:
    """Return the convective heat flux between its continuum and free-molecular limits.

    Parameters
    ----------
    continuum, free_molecular : (...,) array_like [W/m2]
    exponent : float, optional
        p of the blend, 2 by default (judgement).

    Returns
    -------
    (...,) array [W/m2]
        Never larger than either limit; 0 where one is 0.

    Raises
    ------
    ValueError
        If the exponent is not positive.

    Notes
    -----
    q = q_c/(1 + (q_c/q_fm)^p)^(1/p) where both have one sign. The limits pass through zero at slightly
    different speeds (a free-molecular wall recovers more than a continuum one), so that in a narrow range
    of low speeds they differ in sign. There the size is blended as before and the sign is shared out by
    weight, q = |q| (w sign q_c + (1 - w) sign q_fm): continuous, between the limits, and right at both
    ends. With one sign this is the formula above.

    Examples
    --------
    >>> bridged_flux([1e5, 3e4], [1e9, 4e4]).round(0).tolist()
    [100000.0, 24000.0]
    """
    if not exponent > 0.0:
        raise ValueError(f"exponent must be positive, not {exponent}")
    c, f = floats(continuum), floats(free_molecular)
    return _blend(c, f, continuum_weight(c, f, exponent), exponent)


def _blend(c: Floats, f: Floats, weight: Floats, exponent: float) -> Floats:
    first, second = np.abs(c), np.abs(f)
    small, large = np.minimum(first, second), np.maximum(first, second)
    with np.errstate(invalid="ignore"):  # 0/0 where both limits are 0
        ratio = small / large
    if exponent == 2.0:
        size = small / np.sqrt(1.0 + ratio * ratio)
    else:
        size = small * (1.0 + ratio**exponent) ** (-1.0 / exponent)
    size = np.where(large == 0.0, 0.0, size)
    if not (c * f < 0.0).any():
        return np.copysign(size, c)
    share = weight * np.sign(c) + (1.0 - weight) * np.sign(f)
    return np.where(c * f < 0.0, size * share, np.copysign(size, c))


def stagnation(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    accommodation: ArrayLike,
    wall: ArrayLike | str,
    *,
    correlation: str = "sutton-graves",
    exponent: float = 2.0,
    catalysis: bool = False,
) -> Stagnation | None:
    """Return the heating of a vehicle's stagnation point, or None when it has no nose radius.

    Parameters
    ----------
    vehicle : Vehicle
        Its nose radius and surface are used.
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    accommodation : (...,) array_like
        Energy accommodation, already resolved.
    wall : (...,) array_like [K] or "radiative"
        A given wall temperature, or the one that balances heating and radiation.
    correlation : str, optional
        Key of `aero.heat.CONVECTIVE`.
    exponent : float, optional
        p of the blend between the limits.
    catalysis : bool, optional
        Count the surface's own catalysis: less than full in the continuum, and the heat of oxygen recombining
        in free-molecular flow. Off, the wall is fully catalytic in the continuum and takes no such heat
        beyond.

    Returns
    -------
    Stagnation or None
        All fluxes are 0 at speed 0, where a wall in radiative balance has the temperature of its
        surroundings. NaN where the air or the correlation has no answer.

    Raises
    ------
    ValueError
        For an unknown correlation or wall.

    Notes
    -----
    A cylinder's stagnation line receives 0.57/0.763 of the continuum flux of a sphere's point of the same
    radius [FayRiddell1958].
    """
    effective = heating_radius(vehicle)
    if effective is None:
        return None
    radius = effective.radius
    limits = Limits.of(vehicle, radius, air, flow, accommodation, correlation, exponent)
    temperature = _wall(limits, vehicle, wall, flow.speed.shape)
    if catalysis:
        limits = _with_catalysis(limits, vehicle, air, flow, temperature)
        temperature = _wall(limits, vehicle, wall, flow.speed.shape)
    continuum, free, weight, bridged, slope = limits.at(temperature)
    total = bridged + limits.radiative
    with np.errstate(divide="ignore", invalid="ignore"):
        speed = np.where(flow.speed > 0.0, flow.speed, np.nan)
        coefficient = total / (0.5 * air.density * speed * speed * speed)
    return Stagnation(
        total=total,
        bridged=bridged,
        free_molecular=free,
        continuum=continuum,
        radiative=limits.radiative,
        wall_temperature=temperature,
        coefficient=coefficient,
        continuum_weight=weight,
        by_wall_temperature=slope,
        radiative_validity=radiative_validity(air.density, flow.speed, radius),
        correlation=correlation,
    )


def _wall(limits: Limits, vehicle: Vehicle, wall: ArrayLike | str, shape: tuple[int, ...]) -> Floats:
    if not isinstance(wall, str):
        return np.broadcast_to(floats(wall), shape)
    if wall != "radiative":
        raise ValueError(f"wall is '{wall}', expected a temperature in kelvin or 'radiative'")
    return radiative_wall(limits.total_and_slope, vehicle.surface.emissivity)


def _with_catalysis(limits: Limits, vehicle: Vehicle, air: Air, flow: Flow, wall: Floats) -> Limits:
    """Return the limits with the surface's catalysis in them, its rate taken at a wall temperature."""
    from aero.heat.catalysis import catalysis_of  # with a table that is made at first use
    from aero.heat.fay_riddell import dissociation_share
    from aero.heat.recombination import recombination_flux

    surface = vehicle.surface
    share = dissociation_share(air.density, flow.speed)
    pressure = (
        air.pressure + air.density * flow.speed * flow.speed
    )  # C_p,max of 2 less 4 %: enough for a rate
    factor = catalysis_of(surface, share, wall, pressure, limits.conductance)
    heat = np.where(flow.speed == 0.0, 0.0, recombination_flux(air, flow, surface.recombination))
    return replace(limits, conductance=limits.conductance * factor, incident=limits.incident + heat)


@dataclass(frozen=True, eq=False)
class Limits:
    """Both limits as functions of the wall temperature alone, so that its search repeats nothing else."""

    conductance: Floats  # continuum flux over (h_0 - h_w)
    total_enthalpy: Floats
    incident: Floats
    emitted: Floats
    radiative: Floats
    exponent: float

    @classmethod
    def of(
        cls,
        vehicle: Vehicle,
        radius: float,
        air: Air,
        flow: Flow,
        accommodation: ArrayLike,
        correlation: str,
        exponent: float,
    ) -> Limits:
        """Return the limits of a vehicle's stagnation point, as functions of the wall temperature."""
        chosen = correlation_named(correlation)
        cold = chosen(air.density, flow.speed, radius) * (
            LINE_OVER_POINT if vehicle.body_class == "cylinder" else 1.0
        )
        reference = np.minimum(reference_enthalpy(chosen), 0.25 * flow.total_enthalpy)
        share = floats(accommodation) * vehicle.surface.diffuse_fraction
        incident, emitted = energy_fluxes(air, flow)
        moving = np.where(flow.speed == 0.0, 0.0, share)
        return cls(
            conductance=cold / (flow.total_enthalpy - reference),
            total_enthalpy=flow.total_enthalpy,
            incident=incident * moving,
            emitted=emitted * moving,
            radiative=radiative_flux(air.density, flow.speed, radius),
            exponent=exponent,
        )

    def at(self, temperature: Floats) -> tuple[Floats, Floats, Floats, Floats, Floats]:
        """Return continuum, free-molecular, weight, bridged and d bridged/d T_w at a wall temperature."""
        enthalpy, capacity = enthalpy_and_slope(temperature)
        continuum = self.conductance * (self.total_enthalpy - enthalpy) + 0.0  # no negative zero at rest
        free = self.incident - self.emitted * temperature
        weight = continuum_weight(continuum, free, self.exponent)
        bridged = _blend(continuum, free, weight, self.exponent)
        # d ln q = w d ln q_c + (1 - w) d ln q_fm; q/q_c = w^(1/p), q/q_fm = (1 - w)^(1/p)
        if self.exponent == 2.0:
            root, other = np.sqrt(weight), np.sqrt(1.0 - weight)
        else:
            root, other = weight ** (1.0 / self.exponent), (1.0 - weight) ** (1.0 / self.exponent)
        slope = -(weight * root * self.conductance * capacity + (1.0 - weight) * other * self.emitted)
        return continuum, free, weight, bridged, slope

    def total_and_slope(self, temperature: Floats) -> tuple[Floats, Floats]:
        """Return the total flux and its slope, for the wall's balance."""
        bridged, slope = self.at(temperature)[3:]
        return bridged + self.radiative, slope
