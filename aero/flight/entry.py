"""An entry from its starting state to the ground, or out of the atmosphere again."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import Floats
from aero.errors import InputError
from aero.flight.forces import (
    HeatFlux,
    air_along,
    constant,
    database_loads,
    deceleration,
    heating,
    in_air,
    vehicle_loads,
)
from aero.flight.motion import DAY, AirAlong, AreaPerMass, integrate
from aero.flight.path import Path, States
from aero.flight.planet import Planet, earth
from aero.flight.result import Flight, Peak
from aero.flight.start import DEGREE, check, start
from aero.survey.plain import plain_json

if TYPE_CHECKING:
    from aero.air.state import Atmosphere
    from aero.body import Vehicle
    from aero.survey import Settings
    from aero.survey.database import Database

ROWS = 1000  # a step chosen by us gives at most so many rows
MOST_ROWS = 10_000_000  # a step that asks for more is a slip of the unit
TOLERANCE = 1e-8  # closes the balance of energy to 1e-6 with a vehicle's own coefficients, kinks and all
TOLERANCE_SINGLE = 1e-7  # MSIS answers in single precision: below this, steps shorten to fight its noise
SLOW_MACH = 2.0  # below it the Newtonian limit is an extrapolation (judgement)


def fly(
    vehicle: Vehicle | None = None,
    *,
    altitude: float,
    speed: float,
    flight_path_angle: float,
    latitude: float = 0.0,
    longitude: float = 0.0,
    heading: float = 0.5 * math.pi,
    velocity_frame: str = "air",
    atmosphere: Atmosphere | None = None,
    epoch: np.datetime64 | None = None,
    ballistic_coefficient: float | None = None,
    angle_of_attack: float | None = None,
    bank: float | None = None,
    database: Database | None = None,
    settings: Settings | None = None,
    until: float | None = None,
    step: float | None = None,
    tolerance: float | None = None,
    planet: Planet | None = None,
) -> Flight:
    """Fly an entry in three degrees of freedom with the vehicle's own coefficients.

    Parameters
    ----------
    vehicle : Vehicle, optional
        Its bridged drag, lift and stagnation heating are those a survey uses. None needs a
        `ballistic_coefficient`, and gives no heating.
    altitude : float [m]
        Geodetic, above 0 and up to 1000 km.
    speed : float [m/s]
    flight_path_angle : float [rad]
        Over the geodetic horizontal, negative down.
    latitude, longitude : float [rad]
        Geodetic, of the start.
    heading : float [rad]
        From north through east; due east unless given.
    velocity_frame : {"air", "inertial"}
        Whether speed and angles are those of the velocity through the turning air, or of the inertial one.
    atmosphere : Atmosphere, optional
        The U.S. Standard Atmosphere 1976 when None.
    epoch : datetime64, optional
        UTC of time 0; needed by atmospheres of place and date.
    ballistic_coefficient : float, optional [kg/m2]
        A constant m/(C_D A) in place of the vehicle's drag and lift.
    angle_of_attack : float, optional [rad]
        Held all the way; the vehicle's own when None.
    bank : float, optional [rad]
        Turns lift about the velocity, positive to the right, held all the way; the vehicle's own when None.
    database : aero.survey.database.Database, optional
        Drag, lift and heat flux between its nodes in place of the vehicle's own, which are then not computed.
    settings : aero.survey.Settings, optional
        Wall, convective correlation and gas model, as for a survey; a database has its own.
    until : float, optional [s]
        Time at which the flight ends at the latest; one day when None.
    step : float, optional [s]
        Time between samples; when None, the smallest of 1, 2 and 5 by a power of ten that keeps within
        `ROWS` rows. The last sample is the end of the flight.
    tolerance : float, optional
        Relative tolerance of an integration step. When None, `TOLERANCE`, or `TOLERANCE_SINGLE` in an
        atmosphere of place and date.
    planet : Planet, optional
        The Earth when None.

    Returns
    -------
    Flight

    Raises
    ------
    InputError
        If a value lies outside what can be flown, or the atmosphere or vehicle has no answer on the way.

    Notes
    -----
    See `aero.flight.motion.integrate` for the equations and for what ends a flight. Peaks are found on the
    continuous solution, not on samples.

    Examples
    --------
    >>> flight = fly(altitude=120e3, speed=7600.0, flight_path_angle=-0.05, ballistic_coefficient=60.0)
    >>> flight.ended_by, 70 < flight.peak_deceleration.value < 100
    ('ground', True)
    """
    planet = earth() if planet is None else planet
    position, velocity = start(
        planet, altitude, speed, flight_path_angle, latitude, longitude, heading, velocity_frame
    )
    check("--until", until, 0.0, 100.0 * 365.25 * DAY, "s", above=True)
    check("--step", step, 0.0, math.inf, "s", above=True)
    atmosphere = _standard() if atmosphere is None else atmosphere
    air = air_along(atmosphere, epoch)
    if tolerance is None:
        tolerance = TOLERANCE_SINGLE if atmosphere.needs_place else TOLERANCE
    area_per_mass, heat_flux, notes = _loads(
        vehicle, ballistic_coefficient, angle_of_attack, settings, database
    )
    if database is not None and vehicle is not None:
        notes += _database_notes(database, vehicle, atmosphere)
    path = integrate(
        position,
        velocity,
        planet=planet,
        air=air,
        area_per_mass=area_per_mass,
        bank=_bank(vehicle, bank),
        until=until,
        tolerance=tolerance,
    )
    if path.duration <= 0.0:
        raise InputError(
            "the start already leaves the atmosphere for good, so there is nothing to fly",
            source="--altitude, --speed, --flight-path-angle",
            remedy="start lower, slower or steeper down",
        )
    if path.ended_by == "time limit":
        notes += (f"The flight neither landed nor left within {DAY:g} s, where it was stopped; see --until.",)
    notes += _slow(vehicle, ballistic_coefficient, path, air)
    heat = None if heat_flux is None else heating(air, heat_flux)
    return Flight(
        path=path,
        samples=path.at(_times(path.duration, step)),
        final=path.at(path.duration),
        peak_deceleration=_peak(path, deceleration(air, area_per_mass)),
        peak_heat_flux=None if heat is None else _peak(path, heat),
        heat_load=None if heat is None else path.integral(heat),
        epoch=epoch,
        angle_of_attack=_angle(vehicle, ballistic_coefficient, angle_of_attack),
        notes=notes,
    )


def _bank(vehicle: Vehicle | None, bank: float | None) -> float:
    check("--bank", bank, -180.0, 180.0, "deg", scale=DEGREE)
    if bank is not None:
        return bank
    return 0.0 if vehicle is None else vehicle.bank


def _loads(
    vehicle: Vehicle | None,
    ballistic_coefficient: float | None,
    angle_of_attack: float | None,
    settings: Settings | None,
    database: Database | None,
) -> tuple[AreaPerMass, HeatFlux | None, tuple[str, ...]]:
    """Return drag and lift, heat flux where there is a nose radius, and what was assumed."""
    check("--ballistic-coefficient", ballistic_coefficient, 0.0, 1e6, "kg/m2", above=True)
    check("--angle-of-attack", angle_of_attack, -180.0, 180.0, "deg", scale=DEGREE)
    if database is not None and (vehicle is None or ballistic_coefficient is not None):
        absent = vehicle is None
        raise InputError(
            "needs a vehicle, for its mass and area"
            if absent
            else "does not go with --ballistic-coefficient",
            source="--database",
            remedy="give --vehicle FILE" if absent else "drop one of them",
        )
    if vehicle is None and ballistic_coefficient is None:
        raise InputError(
            "nothing says how the flight is slowed down",
            source="--vehicle",
            remedy="give --vehicle FILE or --ballistic-coefficient, such as 100kg/m2",
        )
    area_per_mass, heat_flux = None, None
    if vehicle is not None:
        if not math.isfinite(vehicle.mass):
            raise InputError(
                "has no mass, without which it cannot be flown",
                source=vehicle.source or vehicle.name,
                remedy='give mass = "... kg" in a vehicle file',
            )
        if database is not None:
            area_per_mass, heat_flux = database_loads(vehicle, database, angle_of_attack)
        else:
            area_per_mass, heat_flux = vehicle_loads(vehicle, angle_of_attack, settings)
    if ballistic_coefficient is not None:
        note = (
            f"Drag is that of a constant ballistic coefficient of {ballistic_coefficient:g} kg/m2; no lift."
        )
        return constant(ballistic_coefficient), heat_flux, (note,)
    assert area_per_mass is not None
    return area_per_mass, heat_flux, ()


def _database_notes(database: Database, vehicle: Vehicle, atmosphere: Atmosphere) -> tuple[str, ...]:
    """Return how the coefficients were made and what of that differs from the flight."""
    record = database.record
    source = database.source or "a database"
    error = record.get("interpolation", {}).get("drag_coefficient", {})
    told = ""
    if error.get("largest_error") is not None:
        most, worst = (100.0 * error[key] for key in ("error_of_95_percent", "largest_error"))
        told = f"; its drag interpolates to {most:.2g} % in 95 % of its cells, to {worst:.2g} % in the worst"
    notes = [f"Drag, lift and heat flux are interpolated in {source}{told}."]
    if record.get("vehicle", {}).get("sha256", vehicle.digest) != vehicle.digest:
        notes.append(f"{source} was made from another version of the vehicle file.")
    if record.get("atmosphere", atmosphere.provenance()) != plain_json(atmosphere.provenance()):
        notes.append(
            f"{source} was made in another atmosphere than the flight's; its coefficients and heat flux are those "
            "of its own air at the altitude."
        )
    elif atmosphere.needs_place:
        notes.append(f"{source} was made at one place and date, which the flight leaves.")
    return tuple(notes)


def _angle(
    vehicle: Vehicle | None, ballistic_coefficient: float | None, angle_of_attack: float | None
) -> float | None:
    if angle_of_attack is not None:
        return angle_of_attack
    return None if vehicle is None or ballistic_coefficient is not None else vehicle.angle_of_attack


def _slow(
    vehicle: Vehicle | None, ballistic_coefficient: float | None, path: Path, air: AirAlong
) -> tuple[str, ...]:
    """Say so where the flight's own coefficients are an extrapolation."""
    if vehicle is None or ballistic_coefficient is not None or vehicle.continuum is not None:
        return ()
    from aero.gas import sound_speed

    mach = in_air(air, lambda around, speed: speed / sound_speed(around))(path.at(path.nodes))
    slow = (mach > 0.0) & (mach < SLOW_MACH)
    if not np.any(slow):
        return ()
    since = path.nodes[int(np.argmax(slow))]
    return (
        f"From {since:.3g} s on the flight is slower than Mach {SLOW_MACH:g}, where the Newtonian continuum "
        "limit is an extrapolation; give a [continuum] table for that part.",
    )


def _standard() -> Atmosphere:
    from aero.air import StandardAtmosphere1976

    return StandardAtmosphere1976()


def _times(duration: float, step: float | None) -> Floats:
    """Return the sampled times: every `step` from 0, and the end."""
    if step is None:
        step = next(
            size * 10.0**power
            for power in range(-6, 9)
            for size in (1.0, 2.0, 5.0)
            if duration / (size * 10.0**power) <= ROWS - 2
        )
    if duration / step > MOST_ROWS:
        raise InputError(
            f"{step:g} s would give {duration / step:.3g} rows over the {duration:.6g} s of the flight, "
            f"expected at most {MOST_ROWS:g}",
            source="--step",
            remedy="take a longer step",
        )
    whole = np.arange(math.floor(duration / step) + 1) * step
    # the end replaces a sample that lies within a thousandth of a step of it
    return np.append(whole[whole < duration - 1e-3 * step], duration)


def _peak(path: Path, function: Callable[[States], Floats]) -> Peak:
    time, value = path.peak(function)
    return Peak(value=value, time=time, altitude=float(path.at(time).altitude[0]))
