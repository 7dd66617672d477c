"""Continuum pressure and heating of an element: by Lees where the body is his, else by inclination."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import Cylinder, SphereCone
from aero.force.newtonian import (
    base_pressure_coefficient,
    real_gas_rise,
    stagnation_pressure_coefficient,
)
from aero.heat.lees import hemisphere_ratio, sphere_cone_ratio

if TYPE_CHECKING:
    from aero.body import Elements, Vehicle
    from aero.gas import Flow

SURFACE_METHODS: dict[int, str] = {
    0: "turned away from the flow: a stated share of the stagnation point's flux",
    1: "Lees along the sphere-cone",
    2: "Lees on a sphere, by the local inclination and the distance from the stagnation point",
    3: "behind another element: a stated share of the stagnation point's flux",
}
"""What the codes of `SurfaceHeating.method` mean."""
LEE_SHARE = 0.03  # of the stagnation point's flux, on faces the flow does not reach (judgement: 1 to 6 %)
AXIAL = 1e-6  # sine of the incidence below which a body of revolution counts as without
_FACE = np.radians(20.0)  # inclination within which a face heats as one stagnation region (judgement)
_BLUNT = 0.9  # cosine of the foremost face below which a body is sharp: no face is a stagnation region
_FOREMOST = 0.01  # of a part's extent along the flow: what counts as its foremost edge
_PEAK = 0.005  # of the cosine: faces this near the best facing one make up the stagnation region


class Pressures(NamedTuple):
    """Continuum pressure on elements.

    Attributes
    ----------
    coefficient : (..., n) array
        On the dynamic pressure; NaN at rest.
    local : (..., n) array [Pa]
    relative : (..., n) array
        Local over stagnation pressure.
    ratio : (..., 1) array
        Free-stream over stagnation pressure.
    """

    coefficient: Floats
    local: Floats
    relative: Floats
    ratio: Floats


def pressure_coefficients(air: Air, flow: Flow, cosine: ArrayLike, share: ArrayLike = 1.0) -> Pressures:
    """Return the modified Newtonian pressure on elements, base pressure on those the flow does not reach.

    Parameters
    ----------
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    cosine : (n,) array_like
        Between each element's outward normal and the direction the flow comes from.
    share : (n,) array_like
        Of each element that the stream reaches.

    Notes
    -----
    C_p,max cos^2 in the stream, C_p,max that of equilibrium air; the base pressure of `aero.force` elsewhere,
    from nothing at grazing to its full value at 30 degrees.

    References
    ----------
    [Lees1955]

    Examples
    --------
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(220.0, 1e21, altitude=70e3)
    >>> pressure_coefficients(air, flow(air, 7000.0), [1.0, 0.5, -1.0]).coefficient.round(2).tolist()
    [1.94, 0.48, -0.0]
    """
    c, reached = floats(cosine), floats(share)
    highest = stagnation_pressure_coefficient(flow.mach, flow.heat_capacity_ratio) + real_gas_rise(flow.speed)
    base = base_pressure_coefficient(flow.mach)
    windward = np.where(c > 0.0, c * c * reached, 0.0)
    lee = np.where(c > 0.0, 1.0 - reached, np.minimum(1.0, 4.0 * c * c))
    coefficient = floats(highest[..., None] * windward + base[..., None] * lee)
    dynamic, pressure = flow.dynamic_pressure[..., None], air.pressure[..., None]
    rise = np.where(flow.speed[..., None] > 0.0, dynamic * coefficient, 0.0)
    local = floats(pressure + rise)
    top = np.where(flow.speed > 0.0, flow.dynamic_pressure * highest, 0.0)[..., None]
    total = pressure + top
    return Pressures(coefficient, local, local / total, floats(pressure / total))


def local_ratio(
    vehicle: Vehicle,
    elements: Elements,
    direction: Floats,
    cosine: Floats,
    share: Floats,
    pressure_ratio: Floats,
    radius: float,
) -> tuple[Floats, NDArray[np.int8]]:
    """Return the continuum heat flux of elements over that of the stagnation point, and how it was found.

    Parameters
    ----------
    vehicle : Vehicle
    elements : Elements
    direction : (3,) array
        Where the flow comes from.
    cosine, share : (n,) array
        Of the normal with it, and share that the stream reaches.
    pressure_ratio : (..., 1) array
        Free-stream over stagnation pressure.
    radius : float [m]
        That the stagnation point heats as.

    Returns
    -------
    ratio : (..., n) array
        At least 0.03, what faces turned away or shadowed are given (judgement).
    method : (n,) int8 array
        Keys of `SURFACE_METHODS`.

    Notes
    -----
    A sphere-cone without incidence: `sphere_cone_ratio`. Any other body: `hemisphere_ratio` of the angle t
    between normal and flow, times sqrt((l_s + c R)/(l + c R)) but at most 1, for the boundary layer that
    has grown from the stagnation point of its part at distance l; l_s = 2 R sin(t/2) is the distance on the
    sphere itself, c = exp(-(t/20 deg)^2) keeps a flat face across the flow from cooling at its middle. Exact
    on a sphere at any incidence. On sphere-cones without incidence, beside Lees along them (tested): within
    18 % at half angles of 30 to 60 degrees and noses from 0.3 of the base radius; up to a third low at 20
    degrees, a half at 10, where a floor of cold flanks is all it gives; a half above at 70 degrees, where Lees
    himself is too low. The form is own (judgement).

    References
    ----------
    [Lees1956]
    """
    angle = np.arccos(np.clip(cosine, -1.0, 1.0))
    facing = cosine > 0.0
    shape = vehicle.shape
    if isinstance(shape, SphereCone) and not vehicle.parts and np.hypot(*direction[1:]) < AXIAL:
        ratio = sphere_cone_ratio(
            _distance_from_axis(elements, angle, shape), shape.nose_radius, shape.half_angle, pressure_ratio
        )
        code = 1
    else:
        ratio = hemisphere_ratio(np.minimum(angle, 0.5 * np.pi), pressure_ratio)
        ratio = ratio * _growth(vehicle, elements, direction, cosine, share, angle, radius)
        code = 2
    reached = np.where(facing, share, 0.0)
    ratio = np.maximum(ratio, LEE_SHARE) * reached + LEE_SHARE * (1.0 - reached)
    method = np.where(~facing, 0, np.where(share < 0.5, 3, code))
    return floats(ratio), method.astype(np.int8)


def _distance_from_axis(elements: Elements, angle: Floats, shape: SphereCone) -> Floats:
    """Return the distance from the axis; on the cap from the normal: flat panels lie inside the sphere."""
    radial = np.hypot(elements.centroids[:, 1], elements.centroids[:, 2])
    on_cap = angle < 0.5 * np.pi - shape.half_angle - 1e-9
    return floats(
        np.where(on_cap, shape.nose_radius * np.sin(angle), np.maximum(radial, shape.tangent_radius))
    )


def _growth(
    vehicle: Vehicle,
    elements: Elements,
    direction: Floats,
    cosine: Floats,
    share: Floats,
    angle: Floats,
    radius: float,
) -> Floats:
    """Return the factor for the boundary layer's growth from each part's stagnation point."""
    plane = isinstance(vehicle.shape, Cylinder)  # its stagnation line lies along y
    distance = np.zeros(len(elements))
    for index in range(len(elements.surfaces)):
        mine = np.flatnonzero(elements.part == index)
        seen = mine[(cosine[mine] > 0.0) & (share[mine] > 0.5)]
        if seen.size:
            start = _stagnation_point(elements, seen, direction, cosine)
            away = elements.centroids[mine] - start
            if plane:
                away[:, 1] = 0.0
            distance[mine] = np.sqrt((away * away).sum(axis=1))
    own = 2.0 * radius * np.sin(0.5 * angle)
    kept = radius * np.exp(-((angle / _FACE) ** 2))
    return floats(np.minimum(1.0, np.sqrt((own + kept) / (distance + kept + 1e-300))))


def _stagnation_point(
    elements: Elements, seen: NDArray[np.intp], direction: Floats, cosine: Floats
) -> Floats:
    best = float(cosine[seen].max())
    if best < _BLUNT:
        along = elements.centroids[seen] @ direction
        # the foremost edge as a whole, not whichever of its elements comes first
        near = seen[along >= along.max() - _FOREMOST * (along.max() - along.min())]
        return floats(np.average(elements.centroids[near], axis=0, weights=elements.areas[near]))
    near = seen[cosine[seen] > best - _PEAK]
    return floats(np.average(elements.centroids[near], axis=0, weights=elements.areas[near]))
