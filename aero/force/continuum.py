"""Drag and lift of a continuum: Newtonian pressure, base pressure, friction, or the user's own table."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.force import newtonian
from aero.force.coefficients import Coefficients
from aero.force.friction import axial_friction

if TYPE_CHECKING:
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

WALL = 300.0  # K, wall for friction where none is given


def continuum(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    knudsen_reference: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    *,
    real_gas: bool = True,
    wall_temperature: ArrayLike = WALL,
) -> Coefficients:
    """Return the continuum coefficients of a vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    air : Air
    flow : Flow
    knudsen_reference : (...,) array
        Knudsen number of the reference length; friction is held beyond 0.01.
    angle_of_attack : (...,) array or float [rad], optional
        Default the vehicle's.
    real_gas : bool, optional
        Equilibrium air at the stagnation point; otherwise a perfect gas.
    wall_temperature : (...,) array [K], optional
        For friction.

    Returns
    -------
    Coefficients
        With the parts of drag from base pressure and friction. NaN at rest, outside the air, and for a
        vehicle with neither shape nor table.

    Notes
    -----
    C = C_p,max I + C_p,base I_lee + friction, I the integral of cosine squared over the faces in the flow
    [Lees1955]. Friction for slender bodies and plates only (`aero.force.friction` says why), times the
    diffuse fraction (right at 0, where no wall holds the gas, and at 1; judgement between). Meant for
    Mach 2 and above; below it is an extrapolation that stays finite and positive. A `[continuum]` table
    replaces drag, and lift where it has lift, whole.

    References
    ----------
    [Lees1955], [NACA1135], [Eckert1955], [Fleeman2001]

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, sea_level_air
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> air = sea_level_air()
    >>> round(float(continuum(ball, air, flow(air, 3403.0), 1e-7, real_gas=False).drag), 2)
    0.92
    """
    shape = np.broadcast_shapes(air.temperature.shape, flow.speed.shape)
    angle = floats(vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack)
    unknown = np.full(shape, np.nan)
    result = Coefficients(unknown, unknown)
    if vehicle.shape is not None:
        result = _of_shape(vehicle, air, flow, floats(knudsen_reference), angle, real_gas, wall_temperature)
    if vehicle.continuum is not None:
        answer = flow.mach > 0.0
        drag = np.where(answer, vehicle.continuum.drag_at(flow.mach, air.altitude), np.nan)
        lift = vehicle.continuum.lift_at(flow.mach, air.altitude)
        given = result.lift if lift is None else np.where(answer, lift, np.nan)
        result = Coefficients(np.broadcast_to(drag, shape), np.broadcast_to(given, shape))
    return result


def _of_shape(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    knudsen: Floats,
    angle: Floats,
    real_gas: bool,
    wall_temperature: ArrayLike,
) -> Coefficients:
    body, mach, gamma = vehicle.shape, flow.mach, flow.heat_capacity_ratio
    assert body is not None
    cosine, sine = np.cos(angle), np.sin(angle)
    peak = newtonian.stagnation_pressure_coefficient(mach, gamma)
    if real_gas:
        peak = peak + newtonian.real_gas_rise(flow.speed)
    areas = newtonian.integrals(body, angle)
    base = newtonian.base_pressure_coefficient(mach)
    axial = axial_friction(
        body, flow.reynolds_per_m, knudsen, mach, gamma, air.temperature, wall_temperature, peak, angle
    )
    axial = axial * vehicle.surface.diffuse_fraction
    per_area = 1.0 / vehicle.reference_area
    base_drag, friction_drag = base * areas.lee_drag * per_area, axial * cosine * per_area
    drag = peak * areas.drag * per_area + base_drag + friction_drag
    lift = (peak * areas.lift + base * areas.lee_lift - axial * sine) * per_area
    return Coefficients(drag, lift, drag_base=base_drag, drag_friction=friction_drag)
