"""The physics of a block of points, in the order the data flows. A single point is a block of one row."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from aero.air.state import SPECIES, Air, Atmosphere
from aero.arrays import Floats, Times
from aero.body import Vehicle
from aero.body.surface import accommodation, accommodation_uncertainty
from aero.bridge import Bridge, blend, bridge_for, similarity_number
from aero.bridge.functions import Fraction
from aero.bridge.uncertainty import drag_band, heat_band
from aero.errors import InputError
from aero.force import continuum, free_molecular
from aero.gas import (
    Flow,
    emitted_free_path,
    flow,
    free_path_behind_shock,
    free_path_uncertainty,
    mean_free_path,
    mixture_omega,
    normal_shock,
    stand_off,
)
from aero.heat import stagnation
from aero.regime import regime_index
from aero.survey.settings import Settings

BARE_WALL = 300.0  # K, wall of the emitted Knudsen number where no vehicle states one
BARE_ACCOMMODATION = 1.0
HEAT = (
    "heat_flux_W_m2",
    "heat_flux_free_molecular_W_m2",
    "heat_flux_continuum_W_m2",
    "heat_flux_radiative_W_m2",
    "heat_flux_low_W_m2",
    "heat_flux_high_W_m2",
)


@dataclass(frozen=True, eq=False)
class Inputs:
    """What is given at each of n points.

    Attributes
    ----------
    altitude, speed : (n,) arrays [m], [m/s]
    latitude, longitude : (n,) arrays or None [rad]
    utc : (n,) array of datetimes or None
    angle_of_attack : (n,) array or None [rad]
    wall_temperature : (n,) array or None [K]
    """

    altitude: Floats
    speed: Floats
    latitude: Floats | None = None
    longitude: Floats | None = None
    utc: Times | None = None
    angle_of_attack: Floats | None = None
    wall_temperature: Floats | None = None


def air_at(inputs: Inputs, atmosphere: Atmosphere) -> Air:
    """Return the air at the points."""
    if not atmosphere.needs_place:
        return atmosphere.at(inputs.altitude)
    degrees = [None if a is None else np.degrees(a) for a in (inputs.latitude, inputs.longitude)]
    return atmosphere.at(inputs.altitude, latitude_deg=degrees[0], longitude_deg=degrees[1], utc=inputs.utc)


def conditions(
    inputs: Inputs,
    atmosphere: Atmosphere,
    vehicle: Vehicle | None,
    lengths: Mapping[str, float],
    settings: Settings,
) -> dict[str, np.ndarray]:
    """Return every computed column of a block of points.

    Parameters
    ----------
    inputs : Inputs
    atmosphere : Atmosphere
    vehicle : Vehicle or None
        Without one, the columns of drag and heating are left out.
    lengths : mapping of name to length [m]
    settings : Settings

    Returns
    -------
    dict of (n,) arrays
        Keyed by column name; `regime.NAME` holds positions in `REGIMES`.
    """
    air = air_at(inputs, atmosphere)
    moving = flow(air, inputs.speed)
    columns = _air_columns(air)
    path = mean_free_path(air, "hard-sphere")
    shown = path if settings.free_path == "hard-sphere" else mean_free_path(air, settings.free_path)
    columns["mean_free_path_m"] = shown
    _flow_columns(columns, moving)
    density_uncertainty = atmosphere.uncertainty(air.altitude, utc=inputs.utc)
    if vehicle is None:
        wall = np.full_like(air.altitude, settings.wall if isinstance(settings.wall, float) else BARE_WALL)
        accommodated: Floats | float = BARE_ACCOMMODATION
        nose = None
    else:
        accommodated = accommodation(vehicle.surface, air)
        columns |= _vehicle_columns(
            inputs, air, moving, path, accommodated, vehicle, settings, density_uncertainty
        )
        wall = columns["wall_temperature_K"]
        nose = vehicle.nose_radius
        _similarity_columns(columns, moving, vehicle.reference_length)
    _length_columns(columns, air, moving, shown, wall, accommodated, nose, lengths, settings)
    return columns


def _air_columns(air: Air) -> dict[str, np.ndarray]:
    columns: dict[str, np.ndarray] = {
        "temperature_K": air.temperature,
        "pressure_Pa": air.pressure,
        "density_kg_m3": air.density,
        "number_density_m3": air.number_density,
        "molar_mass_kg_mol": air.molar_mass,
    }
    for i, name in enumerate(SPECIES):
        columns[f"n_{name}_m3"] = air.species[..., i]
    return columns


def _flow_columns(columns: dict[str, np.ndarray], moving: Flow) -> None:
    columns["viscosity_Pa_s"] = moving.viscosity
    columns["sound_speed_m_s"] = moving.sound_speed
    columns["mach"] = moving.mach
    columns["speed_ratio"] = moving.speed_ratio
    columns["dynamic_pressure_Pa"] = moving.dynamic_pressure
    columns["heat_capacity_ratio"] = moving.heat_capacity_ratio
    columns["reynolds_per_m"] = moving.reynolds_per_m
    columns["reynolds_stagnation_per_m"] = moving.reynolds_stagnation_per_m
    columns["cheng_per_m"] = moving.cheng_per_m


def _similarity_columns(columns: dict[str, np.ndarray], moving: Flow, length: float) -> None:
    columns["reynolds"] = moving.reynolds_per_m * length
    columns["reynolds_stagnation"] = moving.reynolds_stagnation_per_m * length
    columns["cheng"] = moving.cheng_per_m / length


def _length_columns(
    columns: dict[str, np.ndarray],
    air: Air,
    moving: Flow,
    shown: Floats,
    wall: Floats,
    accommodated: Floats | float,
    nose: float | None,
    lengths: Mapping[str, float],
    settings: Settings,
) -> None:
    behind = free_path_behind_shock(shown, moving, mixture_omega(air))
    emitted = emitted_free_path(air, moving, wall, accommodated)
    if nose is not None:
        shock = normal_shock(moving.mach, moving.heat_capacity_ratio)
        columns["knudsen_stand_off"] = behind / stand_off(nose, shock.density_ratio)
    else:
        columns["knudsen_stand_off"] = np.full_like(shown, np.nan)
    for name, length in lengths.items():
        columns[f"knudsen.{name}"] = shown / length
        columns[f"regime.{name}"] = regime_index(columns[f"knudsen.{name}"], settings.bounds)
        columns[f"knudsen_shock.{name}"] = behind / length
        columns[f"knudsen_emitted.{name}"] = emitted / length


def wall_choice(inputs: Inputs, vehicle: Vehicle, settings: Settings) -> Floats | float | str:
    """Return the wall temperature that rules: the option, else the trajectory's column, else the vehicle's."""
    if settings.wall is not None:
        return settings.wall
    if inputs.wall_temperature is not None:
        return inputs.wall_temperature
    return "radiative" if vehicle.surface.temperature is None else vehicle.surface.temperature


def _vehicle_columns(
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
