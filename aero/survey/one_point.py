"""One condition, everything known about it: the chain of the survey on a single row."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import numpy as np

from aero.air.state import SPECIES, Atmosphere
from aero.errors import InputError
from aero.regime import REGIMES
from aero.survey.chain import conditions
from aero.survey.inputs import Inputs
from aero.survey.notes import point_notes
from aero.survey.place import check_altitudes, check_angle
from aero.survey.settings import Settings

if TYPE_CHECKING:
    from aero.body import Vehicle


def point(
    altitude: float,
    speed: float,
    *,
    lengths: Mapping[str, float] | None = None,
    vehicle: Vehicle | None = None,
    atmosphere: Atmosphere | None = None,
    settings: Settings | None = None,
    latitude: float | None = None,
    longitude: float | None = None,
    date: np.datetime64 | None = None,
    angle_of_attack: float | None = None,
    sideslip: float | None = None,
) -> dict[str, Any]:
    """Return everything known about one flight condition.

    Parameters
    ----------
    altitude, speed : float [m], [m/s]
        Geodetic altitude; speed relative to the air.
    lengths : mapping of name to length [m], optional
        Lengths whose regime matters, beside the vehicle's own.
    vehicle : Vehicle, optional
        Without one there is neither drag nor heating.
    atmosphere : Atmosphere, optional
        Default: the 1976 standard.
    settings : Settings, optional
    latitude, longitude : float, optional [rad]
    date : datetime64, optional
        UTC.
    angle_of_attack, sideslip : float, optional [rad]

    Returns
    -------
    dict
        Keys as docs/formats.md lists; a number without an answer is NaN.

    Raises
    ------
    InputError
        If altitude or speed cannot be.

    Examples
    --------
    >>> answer = point(100e3, 7500.0, lengths={"length": 1.0})
    >>> round(answer["lengths"][0]["knudsen"], 2), answer["lengths"][0]["regime"]
    (0.14, 'transitional')
    """
    if not -5e3 <= altitude <= 1000e3:
        raise InputError(f"altitude is {altitude / 1e3:g} km, expected -5 km to 1000 km", source="--altitude")
    if not 0.0 <= speed < 1e5:
        raise InputError(
            f"speed is {speed:g} m/s, expected 0 to 100 km/s; speeds are relative to the air",
            source="--speed",
        )
    check_angle("latitude", latitude)
    check_angle("longitude", longitude)
    check_angle("angle of attack", angle_of_attack)
    check_angle("sideslip", sideslip)
    from aero.air import StandardAtmosphere1976
    from aero.survey.attitude_columns import ATTITUDE_COLUMNS

    air_model: Atmosphere = atmosphere or StandardAtmosphere1976()
    if vehicle is not None and vehicle.tumbling and (angle_of_attack is not None or sideslip is not None):
        raise InputError(
            "acts on a held attitude, and the vehicle tumbles",
            source="--angle-of-attack" if angle_of_attack is not None else "--sideslip",
            remedy="drop it, or take tumbling out of the vehicle file",
        )
    check_altitudes(air_model, np.array([altitude]), source="--altitude")
    chosen = settings or Settings()
    named = dict(lengths or {})
    if vehicle is not None:
        named = {"reference": vehicle.reference_length, **vehicle.lengths, **named}
    inputs = _one(altitude, speed, latitude, longitude, date, angle_of_attack, sideslip)
    columns = conditions(inputs, air_model, vehicle, named, chosen)
    row = {name: values[0].item() for name, values in columns.items()}
    answer: dict[str, Any] = {"air": _air(air_model, row), "gas": _gas(chosen, row)}
    answer["lengths"] = [_length(name, length, row) for name, length in named.items()]
    if vehicle is not None:
        answer["drag"] = _drag(row)
        answer["heating"] = _heating(row, speed)
        if "pitch_moment_coefficient" in row:
            answer["attitude"] = {name: row[name] for name in ATTITUDE_COLUMNS}
    answer["notes"] = list(point_notes(vehicle, air_model, chosen, row, altitude, speed, date))
    return answer


def _one(
    altitude: float,
    speed: float,
    latitude: float | None,
    longitude: float | None,
    date: np.datetime64 | None,
    angle_of_attack: float | None,
    sideslip: float | None,
) -> Inputs:
    def row(value: float | None) -> np.ndarray | None:
        return None if value is None else np.array([value])

    return Inputs(
        altitude=np.array([altitude]),
        speed=np.array([speed]),
        latitude=row(latitude),
        longitude=row(longitude),
        utc=None if date is None else np.array([date]),
        angle_of_attack=row(angle_of_attack),
        sideslip=row(sideslip),
    )


def _air(atmosphere: Atmosphere, row: Mapping[str, float]) -> dict[str, Any]:
    names = ("temperature_K", "pressure_Pa", "density_kg_m3", "number_density_m3", "molar_mass_kg_mol")
    return {
        "model": atmosphere.name,
        **{n: row[n] for n in names},
        "species_m3": {s: row[f"n_{s}_m3"] for s in SPECIES},
    }


def _gas(settings: Settings, row: Mapping[str, float]) -> dict[str, Any]:
    names = (
        "mean_free_path_m",
        "viscosity_Pa_s",
        "heat_capacity_ratio",
        "sound_speed_m_s",
        "mach",
        "speed_ratio",
        "dynamic_pressure_Pa",
        "reynolds_per_m",
    )
    return {"free_path_model": settings.free_path, **{n: row[n] for n in names}}


def _length(name: str, length: float, row: Mapping[str, float]) -> dict[str, Any]:
    return {
        "name": name,
        "length_m": length,
        "knudsen": row[f"knudsen.{name}"],
        "regime": REGIMES[int(row[f"regime.{name}"])],
        "knudsen_shock": row[f"knudsen_shock.{name}"],
        "knudsen_emitted": row[f"knudsen_emitted.{name}"],
        "reynolds": row["reynolds_per_m"] * length,
        "reynolds_stagnation": row["reynolds_stagnation_per_m"] * length,
        "cheng": row["cheng_per_m"] / length,
    }


def _drag(row: Mapping[str, float]) -> dict[str, Any]:
    return {
        "coefficient": row["drag_coefficient"],
        "free_molecular": row["drag_coefficient_free_molecular"],
        "continuum": row["drag_coefficient_continuum"],
        "bridge": row["drag_bridge"],
        "low": row["drag_coefficient_low"],
        "high": row["drag_coefficient_high"],
        "lift_coefficient": row["lift_coefficient"],
        "ballistic_coefficient_kg_m2": row["ballistic_coefficient_kg_m2"],
        "deceleration_m_s2": row["drag_deceleration_m_s2"],
    }


def _heating(row: Mapping[str, float], speed: float) -> dict[str, Any]:
    incident = 0.5 * row["density_kg_m3"] * speed**3
    return {
        "stagnation_W_m2": row["heat_flux_W_m2"],
        "free_molecular_W_m2": row["heat_flux_free_molecular_W_m2"],
        "continuum_W_m2": row["heat_flux_continuum_W_m2"],
        "radiative_W_m2": row["heat_flux_radiative_W_m2"],
        "coefficient": row["heat_flux_W_m2"] / incident if incident > 0.0 else float("nan"),
        "low": row["heat_flux_low_W_m2"],
        "high": row["heat_flux_high_W_m2"],
        "wall_temperature_K": row["wall_temperature_K"],
    }
