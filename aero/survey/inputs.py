"""What is given at each point, before anything is computed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Air, Atmosphere
from aero.arrays import Floats, Times

if TYPE_CHECKING:
    from aero.air.msis import Msis
    from aero.air.msis_run import Question


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
    sideslip : (n,) array or None [rad]
    """

    altitude: Floats
    speed: Floats
    latitude: Floats | None = None
    longitude: Floats | None = None
    utc: Times | None = None
    angle_of_attack: Floats | None = None
    wall_temperature: Floats | None = None
    sideslip: Floats | None = None


def air_at(inputs: Inputs, atmosphere: Atmosphere) -> Air:
    """Return the air at the points."""
    if not atmosphere.needs_place:
        return atmosphere.at(inputs.altitude)
    latitude, longitude = _degrees(inputs)
    return atmosphere.at(inputs.altitude, latitude_deg=latitude, longitude_deg=longitude, utc=inputs.utc)


def msis_question(inputs: Inputs, atmosphere: Msis) -> Question:
    """Return what `air_at` would ask MSIS."""
    latitude, longitude = _degrees(inputs)
    return atmosphere.question(
        inputs.altitude, latitude_deg=latitude, longitude_deg=longitude, utc=inputs.utc
    )


def _degrees(inputs: Inputs) -> tuple[Floats | None, Floats | None]:
    latitude, longitude = (None if a is None else np.degrees(a) for a in (inputs.latitude, inputs.longitude))
    return latitude, longitude
