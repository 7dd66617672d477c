"""Drag and lift where molecules meet the body and not each other, species by species."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import Shape
from aero.constants import BOLTZMANN
from aero.force import speed_table
from aero.force.coefficients import Coefficients
from aero.force.elements import SQRT_PI, Momentum, slab

if TYPE_CHECKING:
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

BLOCK = 2048  # points of seven species that stay in a core's cache
_LOG_ROOT_MASS = 0.5 * np.log(MOLECULE_MASS)


class _Rows(NamedTuple):
    """Coefficient parts times area at (species, points): incident and emitted, and the energy excess."""

    drag: Floats
    drag_emitted: Floats
    lift: Floats | None
    lift_emitted: Floats | None
    excess: Floats


_Lookup = Callable[[Floats, slice], _Rows]


def free_molecular(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
) -> Coefficients:
    """Return the free-molecular coefficients of a vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    air : Air
    flow : Flow
    wall_temperature : (...,) array [K]
    accommodation : (...,) array
        Energy accommodation of the diffusely re-emitted molecules.
    angle_of_attack : (...,) array or float [rad], optional
        Default the vehicle's.

    Returns
    -------
    Coefficients
        With the derivatives of drag. NaN at rest, outside the air, where a species' speed ratio exceeds
        1096, and for a vehicle without a shape.

    Notes
    -----
    C = sum_i w_i [(2 - sigma) P(S_i) + sigma T(S_i) + sigma W(S_i) sqrt(T_e,i/T)], w_i the mass fraction and
    S_i the speed ratio of each species; 2 k T_e,i = (1 - alpha) E_i + alpha 2 k T_w with E_i the mean
    translational energy of the molecules of that species that strike the body. Elements behind others of a
    mesh or of parts get no flow; no second reflection, Maxwell's diffuse fraction. The tables are good to
    1e-6 for speed ratios of 0.01 to 100; below 0.0009 the limit C proportional to 1/S is used. Over a
    changing angle of attack the tables of bodies of revolution are good to 1e-6 up to a speed ratio of 15,
    2e-5 above (flow along the cone's side); those of a mesh with large flat faces to 3e-6 up to 15, 2e-5 at
    30, 4e-4 at 100. Shadows in a mesh or between parts are drawn on pixels, about half a pixel of 1/512 of
    the silhouette off at their outlines.

    References
    ----------
    [Schaaf1958], [Sentman1961], [Bird1994]

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> found = free_molecular(ball, air, flow(air, 7500.0), 300.0, 1.0)
    >>> bool(np.all((found.drag > 2.0) & (found.drag < 2.3)))
    True
    """
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)
    angle = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    if vehicle.shape is None:
        return Coefficients(*(np.full(shape, np.nan) for _ in range(4)))

    def flat(values: ArrayLike) -> Floats:
        return np.broadcast_to(floats(values), shape).reshape(-1)

    temperature, speed = flat(air.temperature), flat(flow.speed)
    density = np.moveaxis(np.broadcast_to(air.species, (*shape, air.species.shape[-1])), -1, 0)
    density = density.reshape(density.shape[0], -1)
    present = np.flatnonzero([bool((row > 0.0).any()) for row in density])
    look_up = _look_up(vehicle.shape, vehicle.surface.diffuse_fraction, angle, shape)
    wall, alpha = flat(wall_temperature), flat(accommodation)
    result = np.empty((4, speed.size))
    for part in _blocks(speed.size):
        _block(
            result[:, part], look_up, part, speed[part], temperature[part], wall[part], alpha[part],
            [density[i, part] for i in present], present,
        )  # fmt: skip
    result /= vehicle.reference_area
    drag, lift, by_accommodation, by_wall = (row.reshape(shape) for row in result)
    return Coefficients(drag, lift, by_accommodation, by_wall)


def _blocks(count: int) -> Iterator[slice]:
    for start in range(0, count, BLOCK):
        yield slice(start, min(start + BLOCK, count))


def _block(
    result: Floats,
    look_up: _Lookup,
    part: slice,
    speed: Floats,
    temperature: Floats,
    wall: Floats,
    alpha: Floats,
    density: list[Floats],
    present: np.ndarray,
) -> None:
    """Fill drag, lift, and the two derivatives of drag, all times area, for one block."""
    answer = (speed > 0.0) & (temperature > 0.0)
    everywhere = bool(answer.all())
    if not everywhere:
        speed, temperature = np.where(answer, speed, 1.0), np.where(answer, temperature, 1.0)
    if not density:
        result[:] = np.nan
        return
    energy = 2.0 * BOLTZMANN * temperature
    square = speed * speed / energy
    log_ratio = 0.5 * np.log(square) + _LOG_ROOT_MASS[present, None]
    rows = look_up(log_ratio, part)
    masses = MOLECULE_MASS[present, None]
    weight = masses * np.stack(density)
    weight /= weight.sum(axis=0)
    half_energy = 0.5 * (rows.excess + masses * square)  # of those that strike, over 2kT
    cold = wall / temperature
    emission = half_energy * (1.0 - alpha) + alpha * cold
    root = np.sqrt(emission)
    leaving = weight * rows.drag_emitted
    result[0] = (weight * rows.drag + leaving * root).sum(axis=0)
    if rows.lift is None or rows.lift_emitted is None:
        result[1] = 0.0
    else:
        result[1] = (weight * (rows.lift + rows.lift_emitted * root)).sum(axis=0)
    leaving /= 2.0 * root
    result[2] = (leaving * (cold - half_energy)).sum(axis=0)
    result[3] = leaving.sum(axis=0) * alpha / temperature
    if not everywhere:
        result[:, ~answer] = np.nan


def _look_up(shape: Shape, diffuse: float, angle: ArrayLike, points: tuple[int, ...]) -> _Lookup:
    """Return what gives the rows of a block: one table, tables over angle, or closed forms of flat faces."""
    angles = floats(angle)
    first = float(angles.flat[0]) if angles.size else 0.0
    if not shape.lifts or bool((angles == first).all()):
        return _at_one_angle(shape, diffuse, first if shape.lifts else 0.0)
    spread = np.broadcast_to(angles, points).reshape(-1)
    return (_flat_faced if shape.flat_faced else _over_angles)(shape, diffuse, spread)


def _cells(log_ratio: Floats) -> tuple[np.ndarray, Floats, Floats | None]:
    """Return cell and fraction in ln S, and the factor 1/S beyond the lower end where there is any."""
    place = (log_ratio - speed_table.LOW) * speed_table.STEPS_A_UNIT
    low = place < 0.0
    beyond = None
    if low.any():
        beyond = np.where(low, np.exp(speed_table.LOW - log_ratio), 1.0)
        place = np.where(low, 0.0, place)
    cell = place.astype(np.intp)
    fraction = place - cell
    high = cell >= speed_table.CELLS
    if high.any():
        fraction[high] = np.nan
    return cell, fraction, beyond


def _limited(rows: list[Floats | None], excess: Floats, beyond: Floats | None) -> _Rows:
    if beyond is not None:
        rows = [None if row is None else row * beyond for row in rows]
    drag, emitted = rows[0], rows[1]
    assert drag is not None
    assert emitted is not None
    return _Rows(drag, emitted, rows[2], rows[3], excess)


def _at_one_angle(shape: Shape, diffuse: float, angle: float) -> _Lookup:
    cubics = speed_table.table(shape, diffuse, angle)
    level = shape.lifts and bool(np.abs(cubics[2:4]).max() > 1e-12 * cubics[0].max())

    def look_up(log_ratio: Floats, part: slice) -> _Rows:  # noqa: ARG001
        cell, fraction, beyond = _cells(log_ratio)
        count = 4 if level else 2
        rows: list[Floats | None] = [speed_table.evaluate(cubics[i], cell, fraction) for i in range(count)]
        rows += [None] * (4 - count)
        return _limited(rows, speed_table.evaluate(cubics[speed_table.EXCESS], cell, fraction), beyond)

    return look_up


def _over_angles(shape: Shape, diffuse: float, angles: Floats) -> _Lookup:
    """Tables over angle of attack, half a turn where z -> -z leaves the body as it is."""
    tables = speed_table.angle_table(shape, diffuse)

    def look_up(log_ratio: Floats, part: slice) -> _Rows:
        place, side = speed_table.place_in_turn(shape, angles[part])
        unknown = ~np.isfinite(place)
        angle_cell = np.where(unknown, 0.0, place).astype(np.intp)
        tables.fill(angle_cell)
        weights = speed_table.angle_weights(np.where(unknown, np.nan, place - angle_cell))
        cell, fraction, beyond = _cells(log_ratio)
        found = [
            speed_table.evaluate_angles(tables.rows[i], cell, fraction, angle_cell, weights)
            for i in range(speed_table.ROWS)
        ]
        rows: list[Floats | None] = [found[0], found[1], found[2] * side, found[3] * side]
        return _limited(rows, found[speed_table.EXCESS], beyond)

    return look_up


def _flat_faced(shape: Shape, diffuse: float, angles: Floats) -> _Lookup:
    """Flat faces need no table over angle: each pair of faces is a closed form."""
    normals, areas = shape.slabs()
    sides = normals[:, 1] != 0.0  # always along the flow

    def look_up(log_ratio: Floats, part: slice) -> _Rows:
        ratio = np.exp(log_ratio)
        cosine, sine = np.cos(angles[part]), np.sin(angles[part])
        edge = 2.0 * areas[sides].sum()
        number, drift = np.full_like(ratio, edge), np.zeros_like(ratio)
        shear = edge / (SQRT_PI * ratio)
        none = np.zeros_like(ratio)
        drag, lift = Momentum(none, shear, none, none), Momentum(none, none, none, none)
        for normal, area in zip(normals[~sides], areas[~sides], strict=True):
            towards, along = normal[0] * cosine + normal[2] * sine, normal[0] * sine - normal[2] * cosine
            pair = slab(ratio, towards, along)
            drag, lift = _add(drag, pair.drag, area), _add(lift, pair.lift, area)
            number = number + area * pair.number
            drift = drift + area * pair.number * (2.0 * (pair.drag.energy_excess - 2.0))
        excess = 2.0 + 0.5 * drift / number
        rows = speed_table.combine(drag._replace(energy_excess=excess), lift, diffuse)
        return _Rows(rows[0], rows[1], rows[2], rows[3], excess)

    return look_up


def _add(total: Momentum, part: Momentum, area: float) -> Momentum:
    return Momentum(*(one + area * other for one, other in zip(total, part, strict=True)))
