"""The starting state of a flight: checked, and turned into a position and a velocity."""

from __future__ import annotations

import math

from aero.arrays import Floats
from aero.errors import InputError, choose
from aero.flight.motion import MODEL_TOP
from aero.flight.path import frame_velocity, velocity_over_planet
from aero.flight.planet import Planet

VELOCITY_FRAMES = ("air", "inertial")
FASTEST = 80e3  # m/s: just above the fastest meteoroids bound to the Sun, about 72 km/s (common knowledge)
DEGREE = math.pi / 180.0


def start(
    planet: Planet,
    altitude: float,
    speed: float,
    flight_path_angle: float,
    latitude: float,
    longitude: float,
    heading: float,
    velocity_frame: str,
) -> tuple[Floats, Floats]:
    """Check the starting state and return it as position and velocity over the planet."""
    choose(velocity_frame, VELOCITY_FRAMES, "velocity frame", source="--velocity-frame")
    check("--altitude", altitude, 0.0, MODEL_TOP, "m", above=True)
    check("--speed", speed, 0.0, FASTEST, "m/s", above=True)
    check("--flight-path-angle", flight_path_angle, -90.0, 90.0, "deg", scale=DEGREE)
    check("--latitude", latitude, -90.0, 90.0, "deg", scale=DEGREE)
    check("--longitude", longitude, -180.0, 360.0, "deg", scale=DEGREE)
    check("--heading", heading, -180.0, 360.0, "deg", scale=DEGREE)
    position = planet.position(latitude, longitude, altitude)
    velocity = velocity_over_planet(planet, position, speed, flight_path_angle, heading)
    if velocity_frame == "inertial":
        velocity = velocity - frame_velocity(planet, position)
    return position, velocity


def check(
    option: str,
    value: float | None,
    low: float,
    high: float,
    unit: str,
    *,
    above: bool = False,
    scale: float = 1.0,
) -> None:
    """Raise unless a value lies in [low, high], or in (low, high] with `above`; None is no value."""
    if value is None:
        return
    shown = value / scale
    # a pole or a right angle in radians may round past its degrees
    slack = 0.0 if above else 1e-12 * max(abs(low), abs(high))
    inside = (low < shown) if above else (low - slack <= shown)
    if inside and shown <= high + slack and math.isfinite(shown):
        return
    if math.isinf(high):
        expected = f"above {low:g} {unit}"
    else:
        expected = f"{'above ' if above else ''}{low:g} {'and up ' if above else ''}to {high:g} {unit}"
    raise InputError(f"{shown:.6g} {unit} cannot be flown, expected {expected}", source=option)
