"""The atmosphere itself as columns, for `aero air`."""

from __future__ import annotations

import numpy as np

from aero.air.state import SPECIES, Atmosphere
from aero.arrays import Floats
from aero.gas import flow, mean_free_path
from aero.survey.inputs import Inputs, air_at
from aero.survey.place import check_altitudes, check_angle


def profile(
    altitude: Floats,
    atmosphere: Atmosphere,
    *,
    free_path: str = "hard-sphere",
    latitude: float | None = None,
    longitude: float | None = None,
    date: np.datetime64 | None = None,
) -> dict[str, np.ndarray]:
    """Return the air at each altitude above one place, as named columns.

    Parameters
    ----------
    altitude : (n,) array [m]
    atmosphere : Atmosphere
    free_path : str
        A key of `aero.gas.FREE_PATHS`.
    latitude, longitude : float, optional [rad]
    date : datetime64, optional
        UTC.

    Raises
    ------
    InputError
        If an altitude lies outside the atmosphere, or the place cannot be.
    """
    check_altitudes(atmosphere, altitude, source="--from, --to")
    check_angle("latitude", latitude)
    check_angle("longitude", longitude)
    count = altitude.size

    def same(value: float | None) -> Floats | None:
        return None if value is None else np.full(count, value)

    inputs = Inputs(
        altitude=altitude,
        speed=np.zeros(count),
        latitude=same(latitude),
        longitude=same(longitude),
        utc=None if date is None else np.full(count, date),
    )
    air = air_at(inputs, atmosphere)
    moving = flow(air, inputs.speed)
    columns = {
        "altitude_m": altitude,
        "temperature_K": air.temperature,
        "pressure_Pa": air.pressure,
        "density_kg_m3": air.density,
        "number_density_m3": air.number_density,
        "molar_mass_kg_mol": air.molar_mass,
        "mean_free_path_m": mean_free_path(air, free_path),
        "viscosity_Pa_s": moving.viscosity,
        "heat_capacity_ratio": moving.heat_capacity_ratio,
        "sound_speed_m_s": moving.sound_speed,
    }
    for i, name in enumerate(SPECIES):
        columns[f"n_{name}_m3"] = air.species[..., i]
    return columns
