"""Free-molecular force and moment of a vehicle, from sums over its surface elements."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.surface import accommodation as resolved
from aero.constants import BOLTZMANN
from aero.force.attitudes import Attitudes, attitudes
from aero.force.load_body import LoadBody, load_body
from aero.force.load_tables import PartGas, free_part
from aero.force.loads import Loads

if TYPE_CHECKING:
    from aero.body.elements import Elements
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

_LOG_ROOT_MASS = 0.5 * np.log(MOLECULE_MASS)


class ModalLoads(NamedTuple):
    """Force and moment over dynamic pressure [m2], split into the modes of the elements' incidence.

    Attributes
    ----------
    components : (6, m, n) array
        Force and moment (over the moment length) in body axes.
    projected : (n,) array [m2]
    interpolation_error : float
    """

    components: Floats
    projected: Floats
    interpolation_error: float


def free_molecular_loads(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    shadow: bool = True,
    count: int | None = None,
    elements: Elements | None = None,
) -> Loads:
    """Return the free-molecular force and moment coefficients of a vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    air : Air
    flow : Flow
    wall_temperature : (...,) array [K]
        Of the vehicle's own surface, and of parts in radiative balance; other parts have their own.
    accommodation : (...,) array
        Energy accommodation of the vehicle's own surface; other parts have their own.
    angle_of_attack : (...,) array or float [rad], optional
        Default the vehicle's.
    sideslip : (...,) array or float [rad], optional
        Default the vehicle's.
    shadow : bool, optional
        Elements behind others get no molecules.
    count : int, optional
        Panels of each part.
    elements : Elements, optional
        In place of the vehicle's.

    Returns
    -------
    Loads
        NaN at rest, outside the air, and for a vehicle without a surface.

    Notes
    -----
    C = sum_i w_i sum_e A_e [-n ((2 - sigma) P + sigma W sqrt(T_e,i/T)) - t sigma T]: elements e and species
    i, w_i the mass fraction, P, T, W of `aero.force.elements`, t along the flow in the surface. T_e as in
    `aero.force.free_molecular` with the mean energy of what strikes each part; against the energy of each
    element that shifts drag by less than 3e-4 (1 - alpha) above a speed ratio of 5. One reflection. Several
    points at one attitude share a table in ln S (2e-8 of a coefficient); many attitudes are interpolated on a
    grid of one degree and checked, see `Loads.interpolation_error`.

    References
    ----------
    [Schaaf1958], [Sentman1961], [Bird1994]

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> found = free_molecular_loads(ball, air, flow(air, 7500.0), 300.0, 1.0)
    >>> bool(2.0 < found.drag < 2.3), bool(abs(found.pitch) < 1e-12)
    (True, True)
    """
    shape, a, b = points_of(vehicle, air, flow, angle_of_attack, sideslip)
    if elements is None and vehicle.shape is None:
        return no_answer(vehicle, shape, a, b)
    body = load_body(vehicle, shadow=shadow, count=count, elements=elements)
    found = free_modes(body, vehicle, air, flow, wall_temperature, accommodation, a, b, modes=1)
    return as_loads(found, found.components[:, 0], body, vehicle, shape, a, b)


def free_modes(
    body: LoadBody,
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    angle_of_attack: Floats,
    sideslip: Floats,
    *,
    modes: int,
) -> ModalLoads:
    """Return the free-molecular loads over dynamic pressure, by mode of incidence, points flattened."""
    who, gases = part_gases(body, vehicle, air, flow, wall_temperature, accommodation)
    size = angle_of_attack.size
    components, projected = np.full((6, modes, size), np.nan), np.full(size, np.nan)
    if not who.size:
        return ModalLoads(components, projected, 0.0)
    near = attitudes(angle_of_attack.reshape(-1)[who], sideslip.reshape(-1)[who])
    found = [free_part(body, part, gas, near, modes) for part, gas in enumerate(gases)]
    components[..., who] = sum(total for total, _ in found)
    projected[who] = projected_areas(body, near)
    return ModalLoads(components, projected, max(error for _, error in found))


def part_gases(
    body: LoadBody,
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
) -> tuple[np.ndarray, list[PartGas]]:
    """Return which points (flattened) have an answer, and the gas there as each part meets it."""
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)

    def flat(values: ArrayLike) -> Floats:
        return np.broadcast_to(floats(values), shape).reshape(-1)

    speed, temperature = flat(flow.speed), flat(air.temperature)
    density = np.moveaxis(np.broadcast_to(air.species, (*shape, air.species.shape[-1])), -1, 0)
    density = density.reshape(density.shape[0], -1)
    who = np.flatnonzero((speed > 0.0) & (temperature > 0.0) & (density.sum(axis=0) > 0.0))
    present = np.flatnonzero((density[:, who] > 0.0).any(axis=1))
    square = speed[who] * speed[who] / (2.0 * BOLTZMANN * temperature[who])
    masses = MOLECULE_MASS[present, None]
    weight = masses * density[np.ix_(present, who)]
    weight /= weight.sum(axis=0)
    log_ratio = 0.5 * np.log(square) + _LOG_ROOT_MASS[present, None]
    gases = []
    for surface in body.surfaces:
        own = len(body.surfaces) == 1 or surface == vehicle.surface
        wall = wall_temperature if own or surface.temperature is None else surface.temperature
        alpha = accommodation if own else resolved(surface, air)
        ratio = flat(wall)[who] / temperature[who]
        gases.append(PartGas(surface, log_ratio, masses * square, weight, ratio, flat(alpha)[who]))
    return who, gases


def as_loads(
    found: ModalLoads,
    components: Floats,
    body: LoadBody,
    vehicle: Vehicle,
    shape: tuple[int, ...],
    angle_of_attack: Floats,
    sideslip: Floats,
) -> Loads:
    """Return components (6, n) over dynamic pressure as coefficients in the shape of the points."""
    turned = np.moveaxis(components / vehicle.reference_area, 0, -1)
    return Loads(
        turned[:, :3].reshape(*shape, 3),
        turned[:, 3:].reshape(*shape, 3),
        angle_of_attack,
        sideslip,
        body.length,
        found.projected.reshape(shape),
        found.interpolation_error,
    )


def points_of(
    vehicle: Vehicle, air: Air, flow: Flow, angle_of_attack: ArrayLike | None, sideslip: ArrayLike | None
) -> tuple[tuple[int, ...], Floats, Floats]:
    """Return the shape of the points and their attitude, the vehicle's where none is given."""
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)
    a = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    b = vehicle.sideslip if sideslip is None else sideslip
    return shape, np.broadcast_to(floats(a), shape), np.broadcast_to(floats(b), shape)


def no_answer(vehicle: Vehicle, shape: tuple[int, ...], a: Floats, b: Floats) -> Loads:
    """Return the loads of a vehicle without a surface."""
    unknown = np.full((*shape, 3), np.nan)
    length = vehicle.reference_length if vehicle.moment_length is None else vehicle.moment_length
    return Loads(unknown, unknown, a, b, length, np.full(shape, np.nan))


def projected_areas(body: LoadBody, near: Attitudes) -> Floats:
    """Return the projected area at each point [m2]."""
    areas = np.array([body.newtonian(float(x), float(y), 1).projected for x, y in near.nodes])
    return floats((near.weights * areas[near.point]).sum(axis=0))


def projected_area(
    vehicle: Vehicle,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    shadow: bool = True,
    count: int | None = None,
    elements: Elements | None = None,
) -> Floats:
    """Return the area that the flow reaches, projected along it [m2].

    Parameters
    ----------
    vehicle : Vehicle
    angle_of_attack, sideslip : (...,) array or float [rad], optional
        Default the vehicle's.
    shadow, count, elements
        As in `free_molecular_loads`; without shadows elements behind others count too.

    Examples
    --------
    >>> from aero.body import Box, Vehicle
    >>> cube = Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0))
    >>> np.round(projected_area(cube, np.radians([0.0, 45.0])), 4)
    array([1.    , 1.4142])
    """
    a = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    b = vehicle.sideslip if sideslip is None else sideslip
    angles = np.broadcast_arrays(floats(a), floats(b))
    body = load_body(vehicle, shadow=shadow, count=count, elements=elements)
    near = attitudes(angles[0].reshape(-1), angles[1].reshape(-1))
    return projected_areas(body, near).reshape(angles[0].shape)
