"""What a reader should know about the input and the models, in plain sentences."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Atmosphere
from aero.survey.settings import Settings

if TYPE_CHECKING:
    from aero.body import Vehicle
    from aero.trajectory import Trajectory

FAST = 9e3  # m/s, where shock-layer radiation begins to matter
LOW, LOW_SPEED = 20e3, 3e3  # m, m/s: below this altitude and above this speed a unit has likely slipped
HIGH, HIGH_SPEED = 100e3, 100.0  # m, m/s: above and below which it has
FASTEST = 16e3  # m/s, end of the radiative correlation
SLOW_MACH = 2.0  # below it the Newtonian limit is an extrapolation
ACTIVE_FROM = 120e3  # m, winds and activity matter above it
BLUNT = np.radians(45.0)


def survey_notes(
    trajectory: Trajectory,
    vehicle: Vehicle,
    atmosphere: Atmosphere,
    settings: Settings,
    columns: Mapping[str, np.ndarray],
) -> tuple[str, ...]:
    """Return the notes of a survey.

    Parameters
    ----------
    trajectory, vehicle, atmosphere, settings
        What was surveyed and how.
    columns : mapping of name to (n,) array
        The computed columns of the points table.
    """
    from aero.trajectory.trajectory import NO_TIME

    notes = list(trajectory.notes)
    if trajectory.time is None and NO_TIME not in notes:
        notes.append(NO_TIME)
    notes += _common(
        vehicle, atmosphere, settings, trajectory.altitude, trajectory.speed, columns, trajectory.utc
    )
    return tuple(notes)


def point_notes(
    vehicle: Vehicle | None,
    atmosphere: Atmosphere,
    settings: Settings,
    row: Mapping[str, float],
    altitude: float,
    speed: float,
    date: np.datetime64 | None,
) -> tuple[str, ...]:
    """Return the notes of a single condition."""
    columns = {name: np.array([value]) for name, value in row.items()}
    utc = None if date is None else np.array([date])
    notes = _common(vehicle, atmosphere, settings, np.array([altitude]), np.array([speed]), columns, utc)
    if vehicle is None:
        notes.append(
            "Emitted Knudsen numbers are for a 300 K wall with full accommodation, unless one is given."
        )
    if speed == 0.0:
        notes.append("At rest there are no coefficients, no shock and no heat flux.")
    return tuple(notes)


def grid_notes(
    vehicle: Vehicle,
    atmosphere: Atmosphere,
    settings: Settings,
    altitude: np.ndarray,
    speed: np.ndarray,
    columns: Mapping[str, np.ndarray],
    date: np.datetime64 | None,
) -> tuple[str, ...]:
    """Return the notes of an aerodynamic database, whose rows are given as arrays (n,)."""
    utc = None if date is None else np.full(altitude.shape, date)
    return tuple(_common(vehicle, atmosphere, settings, altitude, speed, columns, utc))


def _common(
    vehicle: Vehicle | None,
    atmosphere: Atmosphere,
    settings: Settings,
    altitude: np.ndarray,
    speed: np.ndarray,
    columns: Mapping[str, np.ndarray],
    utc: np.ndarray | None,
) -> list[str]:
    notes = []
    if settings.free_path != "hard-sphere":
        notes.append(
            f"Mean free paths, Knudsen numbers and tags use the {settings.free_path} definition; bridges are "
            "evaluated in the hard-sphere definition they were fitted in, so drag and heating do not move."
        )
    notes += atmosphere.notes(altitude, utc)
    odd = ((altitude < LOW) & (speed > LOW_SPEED)) | (
        (altitude > HIGH) & (speed < HIGH_SPEED) & (speed > 0.0)
    )
    if np.any(odd):
        first = int(np.argmax(odd))
        notes.append(
            f"{speed[first]:.4g} m/s at {altitude[first] / 1e3:.4g} km is an unusual pair ({int(odd.sum())} of "
            f"{odd.size} points): check the units of altitude and speed."
        )
    if atmosphere.needs_place and altitude.size and float(np.max(altitude)) > ACTIVE_FROM:
        notes.append(
            "Winds of 100-200 m/s in the thermosphere are not modelled; they change drag by 2-5 % (judgement)."
        )
    if vehicle is not None:
        notes += _vehicle(vehicle, speed, columns)
    return notes


def _vehicle(vehicle: Vehicle, speed: np.ndarray, columns: Mapping[str, np.ndarray]) -> list[str]:
    notes = list(vehicle.notes)
    if vehicle.continuum is not None:
        notes.append("The vehicle's own continuum table is held at its first and last row beyond them.")
    mach = columns["mach"]
    moving = mach > 0.0
    if vehicle.continuum is None and np.any(moving & (mach < SLOW_MACH)):
        share = np.mean(moving & (mach < SLOW_MACH))
        where = "here" if mach.size == 1 else f"at {100 * share:.0f} % of the points"
        notes.append(
            f"Below Mach {SLOW_MACH:g} ({where}) the Newtonian continuum limit is an extrapolation; give a "
            "[continuum] table for that part."
        )
    if not vehicle.heats:
        notes.append("No nose radius: stagnation heating is not computed; give [heating] nose_radius.")
        return notes
    if vehicle.effective_nose_radius is True:
        from aero.heat import heating_radius

        taken = heating_radius(vehicle)
        if taken is None or taken.sigma == 0.0:
            notes.append(
                "effective_nose_radius = true acts on a sphere-cone without a stated nose radius alone; here it "
                "changes nothing. Give the radius itself."
            )
    half_angle = getattr(vehicle.shape, "half_angle", None)
    chosen = vehicle.states_nose_radius or vehicle.effective_nose_radius
    if half_angle is not None and half_angle >= BLUNT and not chosen:
        notes.append(
            "On a blunt capsule the sonic line may sit at the shoulder; its stagnation heating then follows an "
            "effective radius other than the nose's (Zoby & Sullivan 1966). Say effective_nose_radius = true in "
            "[heating], or give the radius there."
        )
    flux = columns["heat_flux_W_m2"]
    if np.any(flux < 0.0):
        notes.append(
            "Where the wall is hotter than the air brings it to, the flux is negative: the wall loses heat, and "
            "the heat load sinks."
        )
    if np.any(speed > FASTEST):
        notes.append(
            f"Above {FASTEST / 1e3:g} km/s the radiative correlation has no answer; heat flux is empty there, and so "
            "is the heat load from there on."
        )
    if np.any(speed >= FAST):
        notes.append(
            "Shock-layer radiation (Tauber & Sutton 1991) is an equilibrium correlation for 10-16 km/s and nose "
            "radii of 0.3-3 m; between 9 and 10 km/s and above 70 km it is uncertain by a factor of 2 or more "
            "(judgement)."
        )
    return notes
