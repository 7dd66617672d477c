"""Continuum force and moment of a vehicle, from sums over its surface elements."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import Cone, FlatPlate, SphereCone
from aero.force import newtonian
from aero.force.attitudes import attitudes
from aero.force.friction import axial_friction
from aero.force.load_body import LoadBody, load_body
from aero.force.load_limits import ModalLoads, as_loads, no_answer, points_of, projected_areas
from aero.force.loads import Loads

if TYPE_CHECKING:
    from aero.body.elements import Elements
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

WALL = 300.0  # K, wall for friction where none is given


def continuum_loads(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    knudsen_reference: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    real_gas: bool = True,
    wall_temperature: ArrayLike = WALL,
    shadow: bool = True,
    count: int | None = None,
    elements: Elements | None = None,
) -> Loads:
    """Return the continuum force and moment coefficients of a vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    air : Air
    flow : Flow
    knudsen_reference : (...,) array
        Knudsen number of the reference length; friction is held beyond 0.01.
    angle_of_attack : (...,) array or float [rad], optional
        Default the vehicle's.
    sideslip : (...,) array or float [rad], optional
        Default the vehicle's.
    real_gas : bool, optional
        Equilibrium air at the stagnation point; otherwise a perfect gas.
    wall_temperature : (...,) array [K], optional
        For friction.
    shadow : bool, optional
        Elements behind others take base pressure.
    count, elements
        As in `free_molecular_loads`.

    Notes
    -----
    Pressure C_p,max c^2 on elements in the flow, base pressure on those turned away or behind others, and the
    axial friction of `aero.force.friction` on plates, cones and sphere-cones that are slender, acting along
    the x axis. A `[continuum]` table replaces drag and lift in the force; the moment is the elements' own.

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, sea_level_air
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> air = sea_level_air()
    >>> round(float(continuum_loads(ball, air, flow(air, 3403.0), 1e-7, real_gas=False).drag), 2)
    0.92
    """
    shape, a, b = points_of(vehicle, air, flow, angle_of_attack, sideslip)
    if elements is None and vehicle.shape is None:
        loads = no_answer(vehicle, shape, a, b)
    else:
        body = load_body(vehicle, shadow=shadow, count=count, elements=elements)
        found = newtonian_modes(body, air, flow, a, b, real_gas=real_gas, modes=1)
        total = found.components[:, 0] + friction_components(
            body, vehicle, air, flow, knudsen_reference, a, b, wall_temperature, real_gas
        )
        loads = as_loads(found, total, body, vehicle, shape, a, b)
    return by_table(loads, vehicle, air, flow)


def newtonian_modes(
    body: LoadBody,
    air: Air,
    flow: Flow,
    angle_of_attack: Floats,
    sideslip: Floats,
    *,
    real_gas: bool,
    modes: int,
) -> ModalLoads:
    """Return the Newtonian loads over dynamic pressure, by mode of incidence, points flattened."""
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)

    def flat(values: ArrayLike) -> Floats:
        return np.broadcast_to(floats(values), shape).reshape(-1)

    peak, base = flat(_peak(flow, real_gas)), flat(newtonian.base_pressure_coefficient(flow.mach))
    near = attitudes(flat(angle_of_attack), flat(sideslip))
    if not near.nodes.size:
        return ModalLoads(np.zeros((6, modes, 0)), np.zeros(0), 0.0)
    sums = [body.newtonian(float(x), float(y), modes) for x, y in near.nodes]
    table = np.stack([np.stack([one.windward, one.lee]) for one in sums])  # (d, 2, 6, m)
    mixed = np.einsum("wn,wn...->...n", near.weights, table[near.point], optimize=False)
    total = mixed[0] * peak + mixed[1] * base
    error = 0.0
    for point, (x, y) in near.checks() if near.interpolated else ():
        one = body.newtonian(x, y, modes)
        exact = (one.windward * peak[point] + one.lee * base[point])[:3].sum(axis=1)
        size, off = np.sqrt((exact * exact).sum()), np.abs(total[:3, :, point].sum(axis=1) - exact).max()
        error = max(error, float(off / size))
    return ModalLoads(total, projected_areas(body, near), error)


def friction_components(
    body: LoadBody,
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    knudsen: ArrayLike,
    angle_of_attack: Floats,
    sideslip: Floats,
    wall_temperature: ArrayLike,
    real_gas: bool,
) -> Floats:
    """Return force and moment of friction over dynamic pressure (6, n) [m2]; 0 where there is no model."""
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)
    result = np.zeros((6, int(np.prod(shape))))
    if not isinstance(vehicle.shape, (FlatPlate, Cone, SphereCone)):
        return result
    # the angle between the flow and the axis; on a plate the one between the flow and its length
    tilt = np.arccos(np.clip(np.cos(angle_of_attack) * np.cos(sideslip), -1.0, 1.0))
    axial = axial_friction(
        vehicle.shape, flow.reynolds_per_m, knudsen, flow.mach, flow.heat_capacity_ratio, air.temperature,
        wall_temperature, _peak(flow, real_gas), tilt,
    )  # fmt: skip
    axial = np.broadcast_to(axial * vehicle.surface.diffuse_fraction, shape).reshape(-1)
    result[0] = -axial
    point = np.zeros(3) if vehicle.moment_point is None else floats(vehicle.moment_point)
    # at the x axis: M = -point x (-axial, 0, 0)
    result[4], result[5] = point[2] * axial / body.length, -point[1] * axial / body.length
    return result


def _peak(flow: Flow, real_gas: bool) -> Floats:
    peak = newtonian.stagnation_pressure_coefficient(flow.mach, flow.heat_capacity_ratio)
    return peak + newtonian.real_gas_rise(flow.speed) if real_gas else peak


def by_table(loads: Loads, vehicle: Vehicle, air: Air, flow: Flow) -> Loads:
    """Return the loads with drag and lift of the vehicle's own continuum table, where it has one."""
    if vehicle.continuum is None:
        return loads
    answer = flow.mach > 0.0
    drag = np.where(answer, vehicle.continuum.drag_at(flow.mach, air.altitude), np.nan)
    lift = vehicle.continuum.lift_at(flow.mach, air.altitude)
    return loads.replaced(drag, None if lift is None else np.where(answer, lift, np.nan))
