"""What a vehicle does to a flight: drag and lift per mass, and heat flux at its stagnation point."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, NoReturn, cast

import numpy as np

from aero.air.state import Air, Atmosphere
from aero.arrays import Floats, floats
from aero.errors import InputError
from aero.flight.motion import MODEL_TOP, AirAlong, AreaPerMass
from aero.flight.path import States

if TYPE_CHECKING:
    from aero.arrays import ArrayLike
    from aero.body import Vehicle
    from aero.survey.database import Database
    from aero.survey.settings import Settings

HeatFlux = Callable[[Air, Floats], Floats]
"""(air, speed [m/s]) -> stagnation heat flux [W/m2] at each point."""


def constant(ballistic_coefficient: float) -> AreaPerMass:
    """Return the drag of a constant ballistic coefficient m/(C_D A) [kg/m2], without lift.

    Examples
    --------
    >>> constant(50.0)(None, np.array([7000.0]))
    (array([0.02]), array([0.]))
    """

    def area_per_mass(air: Air, speed: Floats) -> tuple[Floats, Floats]:  # noqa: ARG001
        return np.full(speed.shape, 1.0 / ballistic_coefficient), np.zeros(speed.shape)

    return area_per_mass


def air_along(atmosphere: Atmosphere, epoch: np.datetime64 | None) -> AirAlong:
    """Return the air along a flight that begins at `epoch`.

    Parameters
    ----------
    atmosphere : Atmosphere
    epoch : datetime64, optional
        UTC of time 0; needed where the atmosphere depends on place and date.

    Returns
    -------
    callable
        (time [s], altitude [m], latitude [rad], longitude [rad]) -> Air.

    Raises
    ------
    InputError
        If the atmosphere needs a date and there is none.
    """
    if not atmosphere.needs_place:
        return lambda time, altitude, latitude, longitude: _ask(atmosphere, altitude)  # noqa: ARG005
    if epoch is None:
        raise InputError(
            f"atmosphere '{atmosphere.name}' needs the date of the flight, and none is given",
            source="--date",
            remedy="give --date, such as 2026-03-01T12:00:00Z, or take --atmosphere standard-1976",
        )
    start = epoch.astype("datetime64[us]")

    def air(time: Floats, altitude: Floats, latitude: Floats, longitude: Floats) -> Air:
        return _ask(
            atmosphere,
            altitude,
            latitude_deg=np.degrees(latitude),
            longitude_deg=np.degrees(longitude),
            utc=start + np.round(time * 1e6).astype("timedelta64[us]"),
        )

    return air


def _ask(atmosphere: Atmosphere, altitude: Floats, **place: Any) -> Air:
    try:
        return atmosphere.at(altitude, **place)
    except InputError:
        raise
    except ValueError as error:
        raise InputError(
            f"atmosphere '{atmosphere.name}' does not cover the flight: {str(error).rstrip('.')}",
            remedy="choose another atmosphere, extend the table, or end the flight earlier with --until",
        ) from error


@dataclass(frozen=True)
class _Answered:
    """An atmosphere that has already answered: all that the chain of a survey asks of one."""

    air: Air
    needs_place: bool = False

    def at(self, altitude_m: ArrayLike, **_: object) -> Air:  # noqa: ARG002 - the atmosphere's signature
        return self.air

    def uncertainty(self, altitude_m: Floats, **_: object) -> tuple[Floats, Floats]:
        """Bands are not asked for here."""
        return np.zeros_like(altitude_m), np.zeros_like(altitude_m)


def vehicle_loads(
    vehicle: Vehicle, angle_of_attack: float | None, settings: Settings | None
) -> tuple[AreaPerMass, HeatFlux | None]:
    """Return drag and lift, and heat flux, of a vehicle by the very chain a survey runs through.

    Parameters
    ----------
    vehicle : Vehicle
    angle_of_attack : float or None [rad]
        Held all the way; None takes the vehicle's own.
    settings : Settings or None
        Wall, convective correlation, gas model; the survey's defaults when None.

    Returns
    -------
    area_per_mass : callable
        (air, speed) -> C_D A/m and C_L A/m [m2/kg].
    heat_flux : callable or None
        (air, speed) -> stagnation heat flux [W/m2]; None without a nose radius.
    """
    from aero.survey.chain import conditions
    from aero.survey.inputs import Inputs
    from aero.survey.settings import Settings

    chosen = Settings() if settings is None else settings
    angle = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    # moments do not turn a point mass: without a point to take them about they are not computed
    vehicle = replace(vehicle, moment_point=None)
    lengths = {"reference": vehicle.reference_length}
    loading = vehicle.reference_area / vehicle.mass

    def columns(air: Air, speed: Floats) -> dict[str, np.ndarray]:
        inputs = Inputs(altitude=air.altitude, speed=speed, angle_of_attack=np.full(speed.shape, angle))
        return conditions(inputs, cast("Atmosphere", _Answered(air)), vehicle, lengths, chosen)

    def area_per_mass(air: Air, speed: Floats) -> tuple[Floats, Floats]:
        found = columns(air, speed)
        return loading * found["drag_coefficient"], loading * found["lift_coefficient"]

    def heat_flux(air: Air, speed: Floats) -> Floats:
        return floats(columns(air, speed)["heat_flux_W_m2"])

    return area_per_mass, heat_flux if vehicle.heats else None


def database_loads(
    vehicle: Vehicle, database: Database, angle_of_attack: float | None
) -> tuple[AreaPerMass, HeatFlux | None]:
    """Return drag and lift, and heat flux, of a vehicle between the nodes of a database.

    Parameters
    ----------
    vehicle : Vehicle
        For its mass and reference area.
    database : Database
        Its heat flux is that of its own air at the altitude, its coefficients too.
    angle_of_attack : float or None [rad]
        Held all the way, with the vehicle's own sideslip; None takes the vehicle's own.

    Returns
    -------
    area_per_mass, heat_flux
        As `vehicle_loads`; heat_flux None where the database has none.

    Raises
    ------
    InputError
        If the database lacks a column, was made on another reference area, or, in flight, has no answer.
    """
    angle = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    loading = vehicle.reference_area / vehicle.mass
    _check_database(vehicle, database)

    def ask(names: tuple[str, ...], air: Air, speed: Floats) -> list[Floats]:
        found = database.at(air.altitude, speed, angle, vehicle.sideslip, columns=names)
        for values in found.values():
            missing = np.flatnonzero(np.isnan(values))
            if missing.size:
                first = missing[0]
                _outside(database, float(air.altitude[first]), float(speed[first]), angle, vehicle.sideslip)
        return list(found.values())

    def area_per_mass(air: Air, speed: Floats) -> tuple[Floats, Floats]:
        drag, lift = ask(("drag_coefficient", "lift_coefficient"), air, speed)
        return loading * drag, loading * lift

    def heat_flux(air: Air, speed: Floats) -> Floats:
        return ask(("heat_flux_W_m2",), air, speed)[0]

    heated = "heat_flux_W_m2" in database.columns
    known = heated and bool(np.isfinite(database.columns["heat_flux_W_m2"]).any())
    return area_per_mass, heat_flux if known else None


def _check_database(vehicle: Vehicle, database: Database) -> None:
    for name in ("drag_coefficient", "lift_coefficient"):
        if name not in database.columns:
            raise InputError(
                f"has no column '{name}'", source=database.source, remedy="make it with aero database"
            )
    area = database.record.get("vehicle", {}).get("reference_area_m2")
    if area is not None and abs(area / vehicle.reference_area - 1.0) > 1e-9:
        raise InputError(
            f"was made on a reference area of {area:g} m2, and the vehicle has {vehicle.reference_area:g} m2",
            source=database.source,
            remedy="make it again from this vehicle file",
        )


def _outside(database: Database, altitude: float, speed: float, angle: float, sideslip: float) -> NoReturn:
    raise InputError(
        f"has no answer at {altitude / 1e3:.6g} km, {speed / 1e3:.6g} km/s, angle of attack "
        f"{np.degrees(angle):g} deg, sideslip {np.degrees(sideslip):g} deg; it covers {database.reach}",
        source=database.source or "database",
        remedy="make one that covers the whole flight, down to the speed of the landing",
    )


def deceleration(air: AirAlong, area_per_mass: AreaPerMass) -> Callable[[States], Floats]:
    """Return the aerodynamic deceleration sqrt(D^2 + L^2)/m [m/s2] as a function of the states."""

    def value(around: Air, speed: Floats) -> Floats:
        drag, lift = area_per_mass(around, speed)
        return floats(0.5 * around.density * speed * speed * np.hypot(drag, lift))

    return in_air(air, value)


def heating(air: AirAlong, heat_flux: HeatFlux) -> Callable[[States], Floats]:
    """Return the stagnation heat flux [W/m2] as a function of the states."""
    return in_air(air, heat_flux)


def in_air(air: AirAlong, function: HeatFlux) -> Callable[[States], Floats]:
    """Evaluate at the states within the atmosphere; above its top, and at rest, there is nothing: 0."""

    def evaluate(states: States) -> Floats:
        inside = (states.altitude <= MODEL_TOP) & (states.speed > 0.0)
        result = np.zeros(states.altitude.shape)
        if np.any(inside):
            # at the landing rounding may leave the altitude a hair under 0
            altitude = np.maximum(states.altitude[inside], 0.0)
            around = air(states.time[inside], altitude, states.latitude[inside], states.longitude[inside])
            result[inside] = function(around, states.speed[inside])
        return result

    return evaluate
