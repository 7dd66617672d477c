"""A vehicle without a fixed attitude: drag times area, averaged over all directions of the flow.

The drag of an element depends on the cosine of its incidence alone. So all elements at all directions are
first gathered by cosine, and one sum over cosines then serves every speed ratio. On a convex body the cosine
of every element runs evenly from -1 to 1: it has the mean drag of a sphere with its surface.
"""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.shadow import flow_share
from aero.force import newtonian
from aero.force.coefficients import Coefficients
from aero.force.elements import SQRT_PI
from aero.force.load_body import LoadBody, load_body
from aero.force.load_limits import part_gases
from aero.force.load_sums import FreeSums, fast_incident
from aero.force.load_tables import (
    PartGas,
    combine,
    ends_of,
    leaving_momentum,
    pack,
    read,
    table_nodes,
    unpack,
    walls_of,
)
from aero.force.loads import flow_direction
from aero.force.newtonian import LEE_FULL
from aero.force.speed_table import cubics, gathered

if TYPE_CHECKING:
    from aero.body.elements import Elements
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

RINGS = 10  # Gauss points over the sphere from pole to pole; twice as many around
RESOLUTION = 256  # pixels of each direction's shadows
SMALL = 1e-6  # step in accommodation of its derivative
CONVEX = 400  # cosines of a convex body in each half


class Gathered(NamedTuple):
    """Elements of one part at all directions, gathered by cosine.

    Attributes
    ----------
    cosines : (k,) array
    areas : (k,) array [m2]
        Mean over the directions of the area that the flow reaches.
    hidden : (k,) array [m2]
        That faces the flow behind other elements.
    """

    cosines: Floats
    areas: Floats
    hidden: Floats


class Tumbling(NamedTuple):
    """Averages over all directions of the flow.

    Attributes
    ----------
    free_molecular, continuum : (...,) array
        Mean of the product of drag coefficient and area, over the reference area.
    projected_area : float [m2]
        Mean area that the flow reaches; a quarter of the surface of a convex body.
    """

    free_molecular: Floats
    continuum: Floats
    projected_area: float


def sphere_rule(rings: int = RINGS) -> tuple[Floats, Floats, Floats]:
    """Return angles of attack and sideslip [rad] spread over the sphere, and weights that add up to 1.

    Notes
    -----
    Gauss's rule in the sine of the sideslip times the midpoint rule around: exact for polynomials of the
    direction up to twice the rings less one.

    Examples
    --------
    >>> a, b, weights = sphere_rule()
    >>> len(a), round(float((weights * np.sin(b) ** 4).sum()), 12)  # mean of the fourth power: 1/5
    (200, 0.2)
    """
    sines, weights = np.polynomial.legendre.leggauss(rings)
    around = (np.arange(2 * rings) + 0.5) * np.pi / rings - np.pi
    b, a = np.meshgrid(np.arcsin(sines), around, indexing="ij")
    return a.ravel(), b.ravel(), np.repeat(weights / (4.0 * rings), 2 * rings)


def tumbling_drag(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    *,
    real_gas: bool = True,
    shadow: bool = True,
    rings: int = RINGS,
    count: int | None = None,
    elements: Elements | None = None,
) -> Tumbling:
    """Return a vehicle's drag averaged over all directions.

    Parameters
    ----------
    vehicle : Vehicle
    air, flow : Air, Flow
    wall_temperature : (...,) array [K]
    accommodation : (...,) array
    real_gas, shadow, count, elements
        As in `aero.force.load_limits`.
    rings : int, optional
        Of `sphere_rule`; plays no role on a convex body, whose average is taken in closed form.

    Notes
    -----
    What is averaged is drag coefficient times area, not either alone. Friction of the continuum is left out.
    The reference area plays no part but to make a coefficient.

    Examples
    --------
    >>> from aero.body import Box, Sphere, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> cube = Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0))
    >>> found = tumbling_drag(cube, air, flow(air, 7500.0), 300.0, 1.0)
    >>> round(found.projected_area, 6)  # a quarter of six square metres
    1.5
    """
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)
    if elements is None and vehicle.shape is None:
        return Tumbling(np.full(shape, np.nan), np.full(shape, np.nan), np.nan)
    body = load_body(vehicle, shadow=shadow, count=count, elements=elements)
    parts = _gathered(body, rings)
    who, gases = part_gases(body, vehicle, air, flow, wall_temperature, accommodation)
    free = np.full(int(np.prod(shape)), np.nan)
    if who.size:
        free[who] = sum(_free(part, gas) for part, gas in zip(parts, gases, strict=True))
    peak = newtonian.stagnation_pressure_coefficient(flow.mach, flow.heat_capacity_ratio)
    if real_gas:
        peak = peak + newtonian.real_gas_rise(flow.speed)
    base = newtonian.base_pressure_coefficient(flow.mach)
    windward, lee, seen = (sum(values) for values in zip(*(_newtonian(part) for part in parts), strict=True))
    dense = np.broadcast_to(peak * windward + base * lee, shape) / vehicle.reference_area
    return Tumbling(free.reshape(shape) / vehicle.reference_area, dense, float(seen))


def tumbling_coefficients(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    *,
    real_gas: bool = True,
) -> tuple[Coefficients, Coefficients]:
    """Return the tumbling averages as the free-molecular and continuum coefficients of a survey.

    Notes
    -----
    No lift. The derivatives of drag are central differences: over 2e-6 of accommodation (one-sided at its
    ends), for near full accommodation the leaving molecules' temperature changes within a hundredth, and over
    2 % of wall temperature.
    """

    def drag(wall: ArrayLike, alpha: ArrayLike) -> Tumbling:
        return tumbling_drag(vehicle, air, flow, wall, alpha, real_gas=real_gas)

    wall, alpha = floats(wall_temperature), floats(accommodation)
    here = drag(wall, alpha)
    more, less = np.minimum(alpha + SMALL, 1.0), np.maximum(alpha - SMALL, 0.0)
    by_alpha = (drag(wall, more).free_molecular - drag(wall, less).free_molecular) / (more - less)
    warm, cold = 1.01 * wall, 0.99 * wall
    by_wall = (drag(warm, alpha).free_molecular - drag(cold, alpha).free_molecular) / (warm - cold)
    none = 0.0 * here.free_molecular
    free = Coefficients(here.free_molecular, none, by_alpha, by_wall)
    return free, Coefficients(here.continuum, 0.0 * here.continuum)


@lru_cache(maxsize=8)
def _gathered(body: LoadBody, rings: int) -> tuple[Gathered, ...]:
    if not body.shadow:
        nodes, weights = np.polynomial.legendre.leggauss(CONVEX)
        even = np.concatenate([(nodes - 1.0) / 2.0, (nodes + 1.0) / 2.0])
        share = np.tile(weights, 2) / 4.0
        return tuple(Gathered(even, share * patch.areas.sum(), 0.0 * even) for patch in body.patches)
    elements = body.elements
    sums: list[list[Floats]] = [[] for _ in body.patches]
    cosines: list[list[Floats]] = [[] for _ in body.patches]
    for a, b, weight in zip(*sphere_rule(rings), strict=True):
        direction = flow_direction(a, b)
        share = flow_share(elements.normals, elements.vertices, direction, resolution=RESOLUTION)
        for part, (patch, who) in enumerate(zip(body.patches, body.members, strict=True)):
            c = patch.normals @ direction
            seen = share[who]
            cosines[part].append(c)
            hidden = np.where(c > 0.0, 1.0 - seen, 0.0)
            sums[part].append(weight * patch.areas * np.stack([seen, hidden]))
    found = []
    for pieces, rows in zip(cosines, sums, strict=True):
        c, weights = gathered(np.concatenate(pieces), np.concatenate(rows, axis=1))
        found.append(Gathered(c, weights[0], weights[1]))
    return tuple(found)


def _newtonian(part: Gathered) -> tuple[float, float, float]:
    """Return drag areas of stagnation and base pressure, and the projected area."""
    c = part.cosines
    facing = np.maximum(c, 0.0)
    lee = np.where(c < 0.0, np.minimum(1.0, (c / LEE_FULL) ** 2) * part.areas, 0.0) + part.hidden
    return (
        float((facing**3 * part.areas).sum()),
        float((c * lee).sum()),
        float((facing * part.areas).sum()),
    )


def _free(part: Gathered, gas: PartGas) -> Floats:
    """Return the mean free-molecular drag area of a part [m2]."""
    walls = walls_of(gas)
    low, high = ends_of(gas.log_ratio)
    nodes = table_nodes(low, high)
    S, c, area = np.exp(nodes), part.cosines, part.areas
    normal_speed = np.multiply.outer(S, c)
    momentum, number, drift = fast_incident(normal_speed)
    gone = leaving_momentum(gas.surface, walls, float(S.max()), number, normal_speed)

    def total(values: Floats, weights: Floats) -> Floats:
        return floats(np.einsum("kc,c->k", values, weights))

    square = S * S
    sums = FreeSums(
        (total(momentum, area * c) / square)[:, None, None],
        (total(number, area * (1.0 - c * c)) / (SQRT_PI * S))[:, None, None],
        np.stack([total(one, area * c) / square for one in gone])[..., None, None],
        2.0 + 0.5 * total(drift, area) / total(number, area),
    )
    table = cubics(pack(sums, gas.surface))
    rows = unpack(read(table, low, gas.log_ratio), 1, 1, len(walls))
    return floats(combine(gas, rows, walls)[0, 0])
