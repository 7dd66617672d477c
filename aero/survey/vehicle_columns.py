"""Heating and drag of a vehicle at a block of points: both limits, what lies between, and its band."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from aero.air.state import Air
from aero.arrays import Floats
from aero.body import Vehicle
from aero.body.surface import accommodation_uncertainty
from aero.bridge import Bridge, blend, bridge_for, similarity_number
from aero.bridge.functions import Fraction
from aero.bridge.uncertainty import drag_band, heat_band
from aero.errors import InputError
from aero.force import continuum, free_molecular
from aero.gas import Flow, emitted_free_path, free_path_uncertainty
from aero.heat import stagnation
from aero.survey.inputs import Inputs
from aero.survey.settings import Settings

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


def vehicle_columns(
    inputs: Inputs,
    air: Air,
    moving: Flow,
    path: Floats,
    accommodated: Floats | float,
    vehicle: Vehicle,
    settings: Settings,
    density_uncertainty: tuple[Floats, Floats],
) -> dict[str, np.ndarray]:
    """Return the columns of heating, then of drag, which needs the wall temperature that heating leaves."""
    spread = accommodation_uncertainty(air.altitude)
    wall, columns = _heat_columns(
        air,
        moving,
        accommodated,
        wall_choice(inputs, vehicle, settings),
        vehicle,
        settings,
        density_uncertainty,
        spread,
    )
    columns["wall_temperature_K"] = wall
    angle = vehicle.angle_of_attack if inputs.angle_of_attack is None else inputs.angle_of_attack
    across = vehicle.length_across
    knudsen = path / across
    free = free_molecular(vehicle, air, moving, wall, accommodated, angle)
    dense = continuum(
        vehicle,
        air,
        moving,
        path / vehicle.reference_length,
        angle,
        real_gas=settings.real_gas,
        wall_temperature=wall,
    )
    bridge = bridge_for(vehicle, "drag")
    emitted = None
    if "knudsen_emitted" in (bridge.similarity, bridge_for(vehicle, "lift").similarity):
        emitted = emitted_free_path(air, moving, wall, accommodated) / across

    def number(similarity: str) -> Floats:
        return similarity_number(
            similarity,
            knudsen=knudsen,
            knudsen_emitted=emitted,
            cheng=moving.cheng_per_m / across,
            reynolds_stagnation=moving.reynolds_stagnation_per_m * across,
        )

    similar = number(bridge.similarity)
    fraction = bridge(similar)
    drag = blend(dense.drag, free.drag, fraction.value)
    band = drag_band(
        drag,
        dense.drag,
        free,
        bridge,
        similar,
        density_sigma=density_uncertainty,
        cross_section=free_path_uncertainty(air),
        accommodation=spread,
        wall_temperature=wall,
        energy_accommodation=accommodated,
        base=dense.drag_base,
        fraction=fraction,
    )
    moves = moving.speed > 0.0
    loading = vehicle.mass / vehicle.reference_area
    columns["drag_coefficient"] = drag
    columns["drag_coefficient_free_molecular"] = free.drag
    columns["drag_coefficient_continuum"] = dense.drag
    columns["drag_bridge"] = np.where(moves, fraction.value, np.nan)
    columns["drag_coefficient_low"] = band.low
    columns["drag_coefficient_high"] = band.high
    columns["lift_coefficient"] = _lift(vehicle, free.lift, dense.lift, bridge, fraction, number)
    columns["ballistic_coefficient_kg_m2"] = loading / drag
    columns["drag_deceleration_m_s2"] = np.where(moves, moving.dynamic_pressure * drag / loading, 0.0)
    return columns


def _lift(
    vehicle: Vehicle,
    free: Floats,
    dense: Floats,
    drag_bridge: Bridge,
    drag_fraction: Fraction,
    number: Callable[[str], Floats],
) -> Floats:
    bridge = bridge_for(vehicle, "lift")
    same = (bridge.function, bridge.similarity, bridge.centre, bridge.width) == (
        drag_bridge.function,
        drag_bridge.similarity,
        drag_bridge.centre,
        drag_bridge.width,
    )
    fraction = drag_fraction if same else bridge(number(bridge.similarity))
    return blend(dense, free, fraction.value)


def _heat_columns(
    air: Air,
    moving: Flow,
    accommodated: Floats | float,
    wall: Floats | float | str,
    vehicle: Vehicle,
    settings: Settings,
    density_uncertainty: tuple[Floats, Floats],
    spread: Floats,
) -> tuple[Floats, dict[str, np.ndarray]]:
    """Return the wall temperature and the columns of heating, NaN where the vehicle has no nose radius."""
    heat_bridge = bridge_for(vehicle, "heating")
    heat = stagnation(
        vehicle,
        air,
        moving,
        accommodated,
        wall,
        correlation=settings.convective,
        exponent=heat_bridge.exponent,
    )
    if heat is None:
        if isinstance(wall, str):
            raise InputError(
                "a radiative wall temperature needs a nose radius, and the vehicle has none",
                source=vehicle.source or "vehicle",
                remedy="give [heating] nose_radius or a wall temperature",
            )
        nothing = np.full_like(air.altitude, np.nan)
        return np.broadcast_to(np.asarray(wall, dtype=np.float64), air.altitude.shape), dict.fromkeys(
            HEAT, nothing
        )
    band = heat_band(
        heat,
        heat_bridge,
        moving.speed,
        density_sigma=density_uncertainty,
        accommodation=accommodated,
        accommodation_sigma=spread,
    )
    values = (heat.total, heat.free_molecular, heat.continuum, heat.radiative, band.low, band.high)
    return heat.wall_temperature, dict(zip(HEAT, values, strict=True))
