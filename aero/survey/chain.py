"""The physics of a block of points, in the order the data flows. A single point is a block of one row."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import SPECIES, Air, Atmosphere
from aero.arrays import Floats
from aero.gas import (
    Flow,
    emitted_free_path,
    flow,
    free_path_behind_shock,
    mean_free_path,
    mixture_omega,
    normal_shock,
    stand_off,
)
from aero.regime import regime_index
from aero.survey.inputs import Inputs, air_at
from aero.survey.settings import Settings

if TYPE_CHECKING:
    from aero.body import Vehicle

BARE_WALL = 300.0  # K, wall of the emitted Knudsen number where no vehicle states one
BARE_ACCOMMODATION = 1.0


def conditions(
    inputs: Inputs,
    atmosphere: Atmosphere,
    vehicle: Vehicle | None,
    lengths: Mapping[str, float],
    settings: Settings,
    *,
    air: Air | None = None,
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
    air : Air, optional
        The air at the points, where it is already known.

    Returns
    -------
    dict of (n,) arrays
        Keyed by column name; `regime.NAME` holds positions in `REGIMES`.
    """
    air = air_at(inputs, atmosphere) if air is None else air
    moving = flow(air, inputs.speed)
    columns = _air_columns(air)
    path = mean_free_path(air, "hard-sphere")
    shown = path if settings.free_path == "hard-sphere" else mean_free_path(air, settings.free_path)
    columns["mean_free_path_m"] = shown
    _flow_columns(columns, moving)
    if vehicle is None:
        wall = np.full_like(air.altitude, settings.wall if isinstance(settings.wall, float) else BARE_WALL)
        accommodated = np.full_like(wall, BARE_ACCOMMODATION)
        nose = None
    else:
        # imported here: a condition without a vehicle needs none of it and starts faster
        from aero.body.surface import accommodation
        from aero.survey.vehicle_columns import Passing, vehicle_columns, wall_choice

        accommodated = accommodation(vehicle.surface, air)
        passing = Passing(
            vehicle,
            settings,
            air,
            moving,
            path,
            accommodated,
            wall_choice(inputs, vehicle, settings),
            vehicle.angle_of_attack if inputs.angle_of_attack is None else inputs.angle_of_attack,
            atmosphere.uncertainty(air.altitude, utc=inputs.utc),
            vehicle.sideslip if inputs.sideslip is None else inputs.sideslip,
        )
        columns |= vehicle_columns(passing)
        if vehicle.moment_point is not None:
            from aero.survey.attitude_columns import attitude_columns

            columns |= attitude_columns(passing, columns["wall_temperature_K"], columns)
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
    accommodated: Floats,
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
