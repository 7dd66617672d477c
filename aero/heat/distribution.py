"""Heating over the whole body: both limits on every element, bridged, and the wall's own balance there."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.shadow import flow_share
from aero.body.surface import accommodation
from aero.heat.catalysis import catalysis_of
from aero.heat.convective import correlation_named, reference_enthalpy
from aero.heat.effective_radius import HeatingRadius, heating_radius
from aero.heat.free_molecular import element_energy_fluxes
from aero.heat.local import local_ratio, pressure_coefficients
from aero.heat.recombination import recombination_flux
from aero.heat.refine import refine
from aero.heat.stagnation import LINE_OVER_POINT, Limits
from aero.heat.wall import radiative_wall
from aero.regime.tags import DEFAULT_BOUNDS, regime_index

if TYPE_CHECKING:
    from aero.body import Elements, Vehicle
    from aero.gas import Flow


@dataclass(frozen=True, eq=False)
class SurfaceHeating:
    """Convective heating of every element of a body at each point; points first, elements last.

    Attributes
    ----------
    flux : (..., n) array [W/m2]
        Bridged, positive into the wall.
    continuum, free_molecular : (..., n) array [W/m2]
        Its limits.
    wall_temperature : (..., n) array [K]
    pressure_coefficient : (..., n) array
        Of the continuum limit.
    continuum_weight : (..., n) array
        Share of the continuum limit in d ln(flux).
    knudsen : (..., n) array
        Local: free-stream path over the reference length, times stagnation over local pressure.
    method : (n,) int8 array
        How the continuum limit was found: keys of `aero.heat.SURFACE_METHODS`.
    ratio : (..., n) array
        Continuum flux over that of the stagnation point at equal wall temperature, without catalysis.
    elements : Elements
    direction : (3,) array
        Where the flow comes from, in body axes.
    radius : HeatingRadius
    correlation : str
    catalysis : bool
        Whether each surface's own catalysis was counted.
    """

    flux: Floats
    continuum: Floats
    free_molecular: Floats
    wall_temperature: Floats
    pressure_coefficient: Floats
    continuum_weight: Floats
    knudsen: Floats
    method: NDArray[np.int8]
    ratio: Floats
    elements: Elements
    direction: Floats
    radius: HeatingRadius
    correlation: str
    catalysis: bool

    @property
    def hottest(self) -> NDArray[np.intp]:
        """Index of the element of greatest flux at each point."""
        return np.asarray(np.argmax(np.where(np.isnan(self.flux), -np.inf, self.flux), axis=-1))

    @property
    def maximum(self) -> Floats:
        """Greatest flux at each point [W/m2]."""
        return floats(np.take_along_axis(self.flux, self.hottest[..., None], axis=-1)[..., 0])

    @property
    def maximum_at(self) -> Floats:
        """Centroid of the element of greatest flux, in body axes, shape (..., 3) [m]."""
        return floats(self.elements.centroids[self.hottest])

    @property
    def power(self) -> Floats:
        """Heat taken by the whole surface at each point [W]."""
        return floats((self.flux * self.elements.areas).sum(axis=-1))

    def regime_index(self, bounds: tuple[float, float, float] = DEFAULT_BOUNDS) -> NDArray[np.int8]:
        """Return the position in `aero.regime.REGIMES` of each element's local Knudsen number."""
        return regime_index(self.knudsen, bounds)

    def at(self, point: int) -> SurfaceHeating:
        """Return one point of several."""
        rows = (
            "flux", "continuum", "free_molecular", "wall_temperature", "pressure_coefficient",
            "continuum_weight", "knudsen", "ratio",
        )  # fmt: skip
        return replace(self, **{name: getattr(self, name)[point] for name in rows})

    def __str__(self) -> str:
        return f"SurfaceHeating({self.correlation}, {len(self.elements)} elements; W/m2, K)"


def surface_heating(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    knudsen_reference: ArrayLike,
    *,
    wall: ArrayLike | str | None = None,
    angle_of_attack: float | None = None,
    sideslip: float | None = None,
    elements: Elements | None = None,
    shadow: bool | None = None,
    correlation: str = "sutton-graves",
    exponent: float = 2.0,
    catalysis: bool = False,
) -> SurfaceHeating | None:
    """Return the convective heating of every element of a vehicle, or None when it has no radius to heat as.

    Parameters
    ----------
    vehicle : Vehicle
        With a shape and a radius for heating.
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body; one attitude for all points.
    knudsen_reference : (...,) array_like
        Free-stream Knudsen number on the reference length.
    wall : (...,) array_like [K], "radiative" or None
        One temperature everywhere, or each element in balance with what it radiates; None takes each part's
        own `[surface]`.
    angle_of_attack, sideslip : float [rad], optional
        Default the vehicle's.
    elements : Elements, optional
        Default `vehicle.elements()`, long triangles cut (`aero.heat.refine`).
    shadow : bool, optional
        Whether elements behind others get none of the stream; default the vehicle's.
    correlation : str
        Key of `aero.heat.CONVECTIVE`, for the stagnation point.
    exponent : float
        p of the blend between the limits.
    catalysis : bool
        Count each surface's catalysis: less than full in the continuum, and the heat of oxygen recombining in
        free-molecular flow. Off, the wall is fully catalytic in the continuum and takes no such heat beyond,
        as with `aero.heat.stagnation`.

    Returns
    -------
    SurfaceHeating or None

    Raises
    ------
    ValueError
        For an unknown correlation or wall, or a vehicle without a shape.

    Notes
    -----
    Continuum: the stagnation point's flux times `aero.heat.local.local_ratio`. Free-molecular:
    `element_energy_fluxes`, for the share of an element the stream reaches. The blend of the two is that of
    the stagnation point, on each element. Radiation of the shock layer, conduction within the wall, gaps,
    edges and fences, shocks that meet the body and turbulence are not in it. A Cercignani-Lampis-Lord surface
    accommodates a_n c^2 + t (2 - t)(1 - c^2) of the energy, its limit at high speed.

    References
    ----------
    [Lees1956], [Bird1994]
    """
    radius = heating_radius(vehicle)
    if radius is None:
        return None
    if isinstance(wall, str) and wall != "radiative":
        raise ValueError(f"wall is '{wall}', expected a temperature in kelvin or 'radiative'")
    found = elements if elements is not None else refine(vehicle.elements())
    towards = direction(
        vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack,
        vehicle.sideslip if sideslip is None else sideslip,
    )
    cosines = found.normals @ towards
    shaded = vehicle.shadows if shadow is None else shadow
    share = flow_share(found.normals, found.vertices, towards) if shaded else np.ones(len(found))
    pressure = pressure_coefficients(air, flow, cosines, share)
    ratio, method = local_ratio(vehicle, found, towards, cosines, share, pressure.ratio, radius.radius)
    chosen = correlation_named(correlation)
    line = LINE_OVER_POINT if vehicle.body_class == "cylinder" else 1.0
    cold = (chosen(air.density, flow.speed, radius.radius) * line)[..., None]
    total = flow.total_enthalpy[..., None]
    conductance = cold / (total - np.minimum(reference_enthalpy(chosen), 0.25 * total))
    incident, emitted = element_energy_fluxes(air, flow, cosines)
    taken = _taken(found, air, cosines) * share * (flow.speed > 0.0)[..., None]
    limits = Limits(
        conductance=floats(conductance * ratio),
        total_enthalpy=total,
        incident=floats(incident * taken),
        emitted=floats(emitted * taken),
        radiative=np.zeros_like(incident),
        exponent=exponent,
    )
    temperature = _wall(limits, found, wall)
    if catalysis:
        limits = _with_catalysis(limits, found, air, flow, temperature, pressure.local, cosines, share)
        temperature = _wall(limits, found, wall)
    continuum, free, weight, bridged, _ = limits.at(temperature)
    return SurfaceHeating(
        flux=bridged,
        continuum=continuum,
        free_molecular=free,
        wall_temperature=temperature,
        pressure_coefficient=pressure.coefficient,
        continuum_weight=weight,
        knudsen=floats(floats(knudsen_reference)[..., None] / pressure.relative),
        method=method,
        ratio=floats(np.broadcast_to(ratio, bridged.shape)),
        elements=found,
        direction=towards,
        radius=radius,
        correlation=correlation,
        catalysis=catalysis,
    )


def direction(angle_of_attack: float, sideslip: float = 0.0) -> Floats:
    """Return where the flow comes from in body axes: (cos a cos b, sin b, sin a cos b).

    Examples
    --------
    >>> direction(0.0).tolist()
    [1.0, 0.0, 0.0]
    """
    a, b = float(angle_of_attack), float(sideslip)
    return floats([np.cos(a) * np.cos(b), np.sin(b), np.sin(a) * np.cos(b)])


def _taken(elements: Elements, air: Air, cosines: Floats) -> Floats:
    """Return the share of the incident energy that each element accommodates, shape (..., n)."""
    shape = (*np.shape(air.temperature), len(elements))
    result = np.empty(shape)
    for index, surface in enumerate(elements.surfaces):
        mine = elements.part == index
        if surface.model == "cll":
            t, square = surface.tangential_momentum_accommodation, cosines[mine] ** 2
            along = t * (2.0 - t) * (1.0 - square)
            result[..., mine] = surface.normal_energy_accommodation * square + along
        else:
            result[..., mine] = (accommodation(surface, air) * surface.diffuse_fraction)[..., None]
    return result


def _wall(limits: Limits, elements: Elements, wall: ArrayLike | str | None) -> Floats:
    """Return the wall temperature of each element."""
    shape = limits.incident.shape
    if wall is not None and not isinstance(wall, str):
        return floats(np.broadcast_to(floats(wall)[..., None], shape))
    emissivity = floats([surface.emissivity for surface in elements.surfaces])[elements.part]
    own = [surface.temperature for surface in elements.surfaces]
    if wall is None and None not in own:
        return floats(np.broadcast_to(floats(own)[elements.part], shape))  # type: ignore[arg-type]
    balanced = radiative_wall(limits.total_and_slope, emissivity)
    if wall == "radiative":
        return balanced
    fixed = floats([np.nan if t is None else t for t in own])[elements.part]
    return floats(np.where(np.isnan(fixed), balanced, fixed))


def _with_catalysis(
    limits: Limits,
    elements: Elements,
    air: Air,
    flow: Flow,
    temperature: Floats,
    pressure: Floats,
    cosines: Floats,
    share: Floats,
) -> Limits:
    """Return the limits with each surface's catalysis in them."""
    from aero.heat.fay_riddell import dissociation_share  # its table is made at first use

    dissociated = dissociation_share(air.density, flow.speed)[..., None]
    conductance, incident = limits.conductance.copy(), limits.incident.copy()
    for index, surface in enumerate(elements.surfaces):
        mine = elements.part == index
        here = conductance[..., mine]
        loss = catalysis_of(
            surface,
            np.broadcast_to(dissociated, here.shape),
            temperature[..., mine],
            pressure[..., mine],
            here,
        )
        conductance[..., mine] = here * loss
        towards = cosines[mine].reshape(-1, *(1,) * flow.speed.ndim)
        heat = np.where(flow.speed > 0.0, recombination_flux(air, flow, surface.recombination, towards), 0.0)
        incident[..., mine] += np.moveaxis(heat, 0, -1) * share[mine]
    return replace(limits, conductance=conductance, incident=incident)
