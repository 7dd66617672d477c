"""Dynamic pressure and stagnation heat flux over the plane of altitude and speed, for the map's contours."""

from __future__ import annotations

import dataclasses
from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import Floats
from aero.survey.chain import conditions
from aero.survey.inputs import Inputs

if TYPE_CHECKING:
    from aero.survey.one_pass import Survey

ALTITUDES = 60
SPEEDS = 40


def map_field(survey: Survey) -> dict[str, Floats]:
    """Return what a vehicle would meet at other speeds at the altitudes of its flight.

    Parameters
    ----------
    survey : Survey

    Returns
    -------
    dict
        `altitude_m` (n,), `air_speed_m_s` (m,), and `dynamic_pressure_Pa` and, with a nose radius,
        `heat_flux_W_m2`, both (n, m). Where the atmosphere depends on place and date, each altitude takes those
        of the flight's nearest sample in altitude.
    """
    flight = survey.trajectory
    low, high = float(flight.altitude.min()), float(flight.altitude.max())
    margin = 0.06 * (high - low) + 2.5e3
    reach = survey.atmosphere.altitude_range
    altitude = np.linspace(max(low - margin, reach[0]), min(high + margin, reach[1]), ALTITUDES)
    speed = np.linspace(0.02, 1.08, SPEEDS) * max(float(flight.speed.max()), 1.0)
    order = np.argsort(flight.altitude, kind="stable")
    place = np.searchsorted(flight.altitude[order], altitude).clip(0, order.size - 1)
    nearest = np.repeat(order[place], SPEEDS)
    utc = flight.utc if survey.atmosphere.needs_place else None

    def of(values: Floats | None) -> Floats | None:
        return None if values is None else values[nearest]

    inputs = Inputs(
        altitude=np.repeat(altitude, SPEEDS),
        speed=np.tile(speed, ALTITUDES),
        latitude=of(flight.latitude),
        longitude=of(flight.longitude),
        utc=None if utc is None else utc[nearest],
    )
    shape = (ALTITUDES, SPEEDS)
    body = dataclasses.replace(survey.vehicle, angle_of_attack=0.0)
    columns = conditions(inputs, survey.atmosphere, body, {}, survey.settings)
    field = {
        "altitude_m": altitude,
        "air_speed_m_s": speed,
        "dynamic_pressure_Pa": columns["dynamic_pressure_Pa"].reshape(shape),
    }
    if survey.vehicle.heats:
        field["heat_flux_W_m2"] = columns["heat_flux_W_m2"].reshape(shape)
    return field
