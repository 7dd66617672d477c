"""Heating and drag of a vehicle at a block of points: both limits, what lies between, and its band."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from aero.air.state import Air
from aero.arrays import Floats, floats
from aero.body import Vehicle
from aero.body.surface import accommodation_uncertainty
from aero.bridge import Bridge, blend, bridge_for, similarity_number
from aero.bridge.functions import Fraction
from aero.bridge.uncertainty import drag_band, heat_band
from aero.errors import InputError
from aero.force import Coefficients, continuum, free_molecular
from aero.force.load_continuum import continuum_loads
from aero.force.load_limits import free_molecular_loads
from aero.force.tumbling import tumbling_coefficients
from aero.gas import Flow, emitted_free_path, free_path_uncertainty
from aero.heat import heating_radius, stagnation
from aero.survey.inputs import Inputs
from aero.survey.settings import Settings

ROUNDING = 1e-12  # of the drag: what summing some thousand elements leaves of a sum that is zero
HEAT = (
    "heat_flux_W_m2",
    "heat_flux_free_molecular_W_m2",
    "heat_flux_continuum_W_m2",
    "heat_flux_radiative_W_m2",
    "heat_flux_low_W_m2",
    "heat_flux_high_W_m2",
)


def wall_choice(inputs: Inputs, vehicle: Vehicle, settings: Settings) -> Floats | float | str:
    """Return the wall temperature that rules: the option, else the trajectory's column, else the vehicle's."""
    if settings.wall is not None:
        return settings.wall
    if inputs.wall_temperature is not None:
        return inputs.wall_temperature
    return "radiative" if vehicle.surface.temperature is None else vehicle.surface.temperature


@dataclass(frozen=True, eq=False)
class Passing:
    """A vehicle in the stream at n points: what heating and drag are computed from.

    Attributes
    ----------
    vehicle : Vehicle
    settings : Settings
    air, moving : Air, Flow
    path : (n,) array [m]
        Hard-sphere mean free path, the definition that bridges are fitted in.
    accommodated : (n,) array
        Energy accommodation.
    wall : (n,) array or float [K], or "radiative"
        Wall temperature as chosen.
    angle : (n,) array or float [rad]
        Angle of attack.
    density_uncertainty : (bias, scatter)
        Relative 1-sigma of the density.
    sideslip : (n,) array or float [rad]
    """

    vehicle: Vehicle
    settings: Settings
    air: Air
    moving: Flow
    path: Floats
    accommodated: Floats
    wall: Floats | float | str
    angle: Floats | float
    density_uncertainty: tuple[Floats, Floats]
    sideslip: Floats | float = 0.0

    @property
    def by_elements(self) -> bool:
        """Whether drag and lift need the sum over surface elements.

        The tables of a body see its angle of attack and one surface; sideslip, parts with surfaces of their own
        and other gas-surface models than Maxwell's are the elements' business.
        """
        vehicle = self.vehicle
        if vehicle.shape is None:
            return False
        surfaces = {vehicle.surface, *(part.surface for part in vehicle.parts)}
        return len(surfaces) > 1 or vehicle.surface.model != "maxwell" or bool(np.any(self.sideslip))

    @property
    def accommodation_spread(self) -> Floats:
        """1-sigma of the energy accommodation."""
        return accommodation_uncertainty(self.air.altitude)


def vehicle_columns(passing: Passing) -> dict[str, np.ndarray]:
    """Return the columns of heating, then of drag, which needs the wall temperature that heating leaves."""
    wall, columns = _heat_columns(passing)
    columns["wall_temperature_K"] = wall
    return columns | _drag_columns(passing, wall)


def _heat_columns(passing: Passing) -> tuple[Floats, dict[str, np.ndarray]]:
    """Return the wall temperature and the columns of heating, NaN where the vehicle has no nose radius."""
    vehicle, wall = passing.vehicle, passing.wall
    bridge = bridge_for(vehicle, "heating")
    less_catalytic = vehicle.surface.catalysis != "full"
    heat = stagnation(
        vehicle,
        passing.air,
        passing.moving,
        passing.accommodated,
        wall,
        correlation=passing.settings.convective,
        exponent=bridge.exponent,
        catalysis=less_catalytic,
    )
    if heat is None:
        if isinstance(wall, str):
            raise InputError(
                "a radiative wall temperature needs a nose radius, and the vehicle has none",
                source=vehicle.source or "vehicle",
                remedy="give [heating] nose_radius or a wall temperature",
            )
        nothing = np.full_like(passing.path, np.nan)
        return np.broadcast_to(floats(wall), nothing.shape), dict.fromkeys(HEAT, nothing)
    radius = heating_radius(vehicle)
    band = heat_band(
        heat,
        bridge,
        passing.moving.speed,
        density_sigma=passing.density_uncertainty,
        accommodation=passing.accommodated,
        accommodation_sigma=passing.accommodation_spread,
        radius_sigma=0.0 if radius is None else radius.sigma,
        catalytic=not less_catalytic,
    )
    values = (heat.total, heat.free_molecular, heat.continuum, heat.radiative, band.low, band.high)
    return heat.wall_temperature, dict(zip(HEAT, values, strict=True))


def _drag_columns(passing: Passing, wall: Floats) -> dict[str, np.ndarray]:
    vehicle, moving = passing.vehicle, passing.moving
    free, dense = limits(passing, wall)
    bridge = bridge_for(vehicle, "drag")
    number = similarity(passing, wall, bridge)
    fraction = bridge(number)
    drag = blend(dense.drag, free.drag, fraction.value)
    band = drag_band(
        drag,
        dense.drag,
        free,
        bridge,
        number,
        density_sigma=passing.density_uncertainty,
        cross_section=free_path_uncertainty(passing.air),
        accommodation=passing.accommodation_spread,
        wall_temperature=wall,
        energy_accommodation=passing.accommodated,
        base=dense.drag_base,
        mach=moving.mach,
        fraction=fraction,
    )
    moves = moving.speed > 0.0
    loading = vehicle.mass / vehicle.reference_area
    return {
        "drag_coefficient": drag,
        "drag_coefficient_free_molecular": free.drag,
        "drag_coefficient_continuum": dense.drag,
        "drag_bridge": np.where(moves, fraction.value, np.nan),
        "drag_coefficient_low": band.low,
        "drag_coefficient_high": band.high,
        "lift_coefficient": _lift(passing, wall, free, dense, bridge, fraction),
        "ballistic_coefficient_kg_m2": loading / drag,
        "drag_deceleration_m_s2": np.where(moves, moving.dynamic_pressure * drag / loading, 0.0),
    }


def limits(passing: Passing, wall: Floats) -> tuple[Coefficients, Coefficients]:
    """Return the free-molecular and the continuum coefficients.

    By elements, drag and lift are the elements' and the derivatives of drag, which only the band uses, those of
    the body's own table without sideslip.
    """
    vehicle, air, moving = passing.vehicle, passing.air, passing.moving
    if vehicle.tumbling and vehicle.shape is not None:
        return tumbling_coefficients(
            vehicle, air, moving, wall, passing.accommodated, real_gas=passing.settings.real_gas
        )
    free = free_molecular(vehicle, air, moving, wall, passing.accommodated, passing.angle)
    dense = continuum(
        vehicle,
        air,
        moving,
        passing.path / vehicle.reference_length,
        passing.angle,
        real_gas=passing.settings.real_gas,
        wall_temperature=wall,
    )
    if not passing.by_elements:
        return free, dense
    thin = free_molecular_loads(
        vehicle, air, moving, wall, passing.accommodated, passing.angle, passing.sideslip
    )
    thick = continuum_loads(
        vehicle,
        air,
        moving,
        passing.path / vehicle.reference_length,
        passing.angle,
        passing.sideslip,
        real_gas=passing.settings.real_gas,
        wall_temperature=wall,
    )
    return replace(free, drag=thin.drag, lift=thin.lift), replace(dense, drag=thick.drag, lift=thick.lift)


def similarity(passing: Passing, wall: Floats, bridge: Bridge) -> Floats:
    """Return the number a bridge is a function of, on the length across the flow."""
    across, moving = passing.vehicle.length_across, passing.moving
    emitted = None
    if bridge.similarity == "knudsen_emitted":
        emitted = emitted_free_path(passing.air, moving, wall, passing.accommodated) / across
    return similarity_number(
        bridge.similarity,
        knudsen=passing.path / across,
        knudsen_emitted=emitted,
        cheng=moving.cheng_per_m / across,
        reynolds_stagnation=moving.reynolds_stagnation_per_m * across,
    )


def _lift(
    passing: Passing,
    wall: Floats,
    free: Coefficients,
    dense: Coefficients,
    drag_bridge: Bridge,
    drag_fraction: Fraction,
) -> Floats:
    bridge = bridge_for(passing.vehicle, "lift")
    same = (bridge.function, bridge.similarity, bridge.centre, bridge.width) == (
        drag_bridge.function,
        drag_bridge.similarity,
        drag_bridge.centre,
        drag_bridge.width,
    )
    fraction = drag_fraction if same else bridge(similarity(passing, wall, bridge))
    lift = blend(dense.lift, free.lift, fraction.value)
    # where symmetry leaves none, a sum over elements leaves rounding
    return np.where(np.abs(lift) < ROUNDING * np.abs(free.drag), 0.0, lift)
