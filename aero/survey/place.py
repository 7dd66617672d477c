"""Date and place given beside a trajectory that has none of its own."""

from __future__ import annotations

import dataclasses
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Atmosphere
from aero.arrays import Floats
from aero.errors import InputError

if TYPE_CHECKING:
    from aero.trajectory import Trajectory

LIMITS = {"latitude": 90.0, "longitude": 360.0, "angle of attack": 180.0, "sideslip": 90.0}  # deg


def check_altitudes(atmosphere: Atmosphere, altitude: Floats, *, source: str) -> None:
    """Raise an InputError where an altitude [m] lies outside what an atmosphere answers for."""
    low, high = atmosphere.altitude_range
    outside = altitude[(altitude < low) | (altitude > high)]
    if outside.size:
        raise InputError(
            f"altitude {outside[0] / 1e3:g} km lies outside the {low / 1e3:g} to {high / 1e3:g} km of "
            f"{atmosphere.name}",
            source=source,
            remedy="choose another altitude or another --atmosphere",
        )


def check_angle(name: str, value: float | None) -> None:
    """Raise an InputError for a latitude or longitude [rad] that cannot be; None passes."""
    if value is not None and not abs(np.degrees(value)) <= LIMITS[name] + 1e-9:
        limit = f"{LIMITS[name]:g}"
        raise InputError(
            f"{name} is {np.degrees(value):g} deg, expected -{limit} to {limit} deg",
            source=f"--{name.replace(' ', '-')}",
        )


def placed(
    trajectory: Trajectory,
    *,
    date: np.datetime64 | None = None,
    latitude: float | None = None,
    longitude: float | None = None,
) -> Trajectory:
    """Return the trajectory with a date of time 0 and one place for all its points.

    Parameters
    ----------
    trajectory : Trajectory
    date : datetime64, optional
        UTC of time 0.
    latitude, longitude : float, optional [rad]

    Raises
    ------
    InputError
        If the file states them itself, or has no time that a date could belong to.
    """
    changes: dict[str, object] = {}
    if date is not None:
        if trajectory.epoch is not None:
            raise InputError(
                f"the file states its own epoch, {trajectory.epoch}",
                source="--date",
                remedy="drop the option",
            )
        changes["epoch"] = date
    count = trajectory.altitude.size
    for name, value in (("latitude", latitude), ("longitude", longitude)):
        if value is None:
            continue
        if getattr(trajectory, name) is not None:
            raise InputError(f"the file states its own {name}", source=f"--{name}", remedy="drop the option")
        check_angle(name, value)
        changes[name] = np.full(count, value)
    return dataclasses.replace(trajectory, **changes) if changes else trajectory  # type: ignore[arg-type]
