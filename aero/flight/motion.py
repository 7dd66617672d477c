"""Three degrees of freedom: a point mass with drag and lift over a turning planet.

Gravity, rotation, air and drag are arguments, so that closed-form cases run through the same integrator.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Protocol

import numpy as np

from aero.air.state import Air
from aero.arrays import Floats, floats
from aero.errors import InputError
from aero.flight.path import Path, states
from aero.flight.planet import Planet, apogee_height

MODEL_TOP = 1000e3  # m: the standard of 1976 ends here; above it the flight is taken to be in a vacuum
CEILING = 200e3  # m: below it a climbing flight is not yet "leaving" (judgement)
DAY = 86400.0  # s: a flight that neither lands nor leaves is stopped here unless `until` says otherwise
VERTICAL = 0.02  # cosine of the flight-path angle, 1.1 degrees, under which lift fades (judgement)
LONGEST_STEP = 30.0  # s: no pass through the air, about 200 s and more at orbital speed, is stepped over


class AirAlong(Protocol):
    """The air along a flight: what an atmosphere answers at a time and place."""

    def __call__(self, time: Floats, altitude: Floats, latitude: Floats, longitude: Floats) -> Air:
        """Return the air at each point; time [s], altitude [m], angles [rad]."""


class AreaPerMass(Protocol):
    """Drag and lift of a body in given air, per mass and dynamic pressure."""

    def __call__(self, air: Air, speed: Floats) -> tuple[Floats, Floats]:
        """Return C_D A/m and C_L A/m [m2/kg] at each point; lift positive upwards."""


def integrate(
    position: Floats,
    velocity: Floats,
    *,
    planet: Planet,
    air: AirAlong | None = None,
    area_per_mass: AreaPerMass | None = None,
    bank: float = 0.0,
    until: float | None = None,
    tolerance: float = 1e-10,
) -> Path:
    """Fly a point mass until it reaches the ground, leaves the atmosphere for good, or time is up.

    Parameters
    ----------
    position, velocity : (3,) array [m], [m/s]
        At time 0, fixed to the turning planet.
    planet : Planet
        Gravity and rotation.
    air : callable, optional
        The air along the flight. None: a vacuum, as it is above `MODEL_TOP`.
    area_per_mass : callable, optional
        Drag and lift. None: none.
    bank : float, optional [rad]
        Turns lift about the velocity, held all the way; positive to the right.
    until : float, optional [s]
        Time at which the flight ends at the latest; one day when None.
    tolerance : float
        Relative tolerance a step; velocities also to `tolerance` times 1 km/s.

    Returns
    -------
    Path

    Raises
    ------
    InputError
        If the air or the drag has no answer at a point of the flight.

    Notes
    -----
    r'' = g - 2 omega x v - omega x (omega x r) - (D/m) v/V + (L/m) l, with l normal to the velocity in the
    vertical plane through it, upwards, turned by the bank angle about the velocity. A vehicle in vertical
    flight has no such direction, so within 1.1 degrees of the vertical lift fades to 0 in proportion; without
    that, lift downwards would turn over and over at the vertical. DOP853 [HairerNorsettWanner1993].
    On a flat world without gravity and in exponential air this gives the closed form of [AllenEggers1958].

    The flight has left for good when it climbs through `MODEL_TOP`, or through the higher of `CEILING` and
    the starting altitude with the apogee of its drag-free path above `MODEL_TOP` (or none). A skip with
    a lower apogee is followed back in. A flight that begins above `CEILING` and climbing ends at `MODEL_TOP`.
    """
    from scipy.integrate import solve_ivp

    derivative = _equations(planet, air, area_per_mass, bank)
    limit = DAY if until is None else until
    solution = solve_ivp(
        derivative,
        (0.0, limit),
        np.concatenate([position, velocity]),
        method="DOP853",
        rtol=tolerance,
        atol=np.repeat([tolerance, 1e3 * tolerance], 3),
        max_step=LONGEST_STEP,
        dense_output=True,
        events=_events(planet, position, velocity),
    )
    if solution.status < 0:
        reached = f"{solution.t[-1]:.6g} s"
        raise InputError(f"the flight cannot be integrated beyond {reached} ({solution.message})")
    assert solution.sol is not None
    assert solution.t_events is not None
    if solution.status == 1:
        ended_by = "ground" if solution.t_events[0].size else "left the atmosphere"
    else:
        ended_by = "time limit" if until is None else "until"
    return Path(planet=planet, nodes=floats(solution.t), dense=solution.sol, ended_by=ended_by)


def _equations(
    planet: Planet, air: AirAlong | None, area_per_mass: AreaPerMass | None, bank: float
) -> Callable[[float, Floats], Floats]:
    rate = planet.rotation

    def derivative(time: float, state: Floats) -> Floats:
        position, velocity = state[:3], state[3:]
        result = np.empty(6)
        result[:3] = velocity
        force = planet.gravity(position)
        force[0] += rate * (2.0 * velocity[1] + rate * position[0])
        force[1] += rate * (rate * position[1] - 2.0 * velocity[0])
        if air is not None and area_per_mass is not None:
            force += _aerodynamic(time, position, velocity)
        result[3:] = force
        return result

    def _aerodynamic(time: float, position: Floats, velocity: Floats) -> Floats:
        assert air is not None
        assert area_per_mass is not None
        latitude, longitude, altitude = planet.place(position)
        speed = np.sqrt(np.sum(velocity * velocity))
        if altitude > MODEL_TOP or speed == 0.0:
            return np.zeros(3)
        # trial steps reach under the ground before the event is found; they only need some finite air
        around = air(
            floats([time]), floats([max(float(altitude), 0.0)]), floats([latitude]), floats([longitude])
        )
        drag, lift = (float(part[0]) for part in area_per_mass(around, floats([speed])))
        pressure = 0.5 * float(around.density[0]) * speed * speed
        if not np.isfinite(pressure * (drag + lift)):
            _no_answer(around, drag + lift, float(altitude), float(speed))
        force = -pressure * drag / speed * velocity
        if lift != 0.0:
            up = planet.axes(latitude, longitude)[2]
            normal = up - np.sum(up * velocity) / speed**2 * velocity
            length = np.sqrt(np.sum(normal * normal))  # cosine of the flight-path angle
            right = np.cross(velocity, normal) / speed
            turned = np.cos(bank) * normal + np.sin(bank) * right
            force += pressure * lift / max(length, VERTICAL) * turned
        return floats(force)

    return derivative


def _no_answer(air: Air, coefficient: float, altitude: float, speed: float) -> None:
    where = f"{altitude / 1e3:.4g} km and {speed:.5g} m/s"
    if not np.isfinite(air.density[0]):
        raise InputError(
            f"atmosphere '{air.model}' has no air at {where}, expected one that covers the whole flight",
            remedy="choose another atmosphere or extend the table",
        )
    raise InputError(
        f"the vehicle's drag has no answer at {where} ({coefficient})",
        remedy="give [continuum] coefficients that cover the flight, or a ballistic coefficient",
    )


def _events(planet: Planet, position: Floats, velocity: Floats) -> list[Any]:
    start = states(planet, np.zeros(1), position[None], velocity[None])
    ceiling = max(CEILING, float(start.altitude[0]))
    if start.altitude[0] > CEILING and start.flight_path_angle[0] > 0.0:
        ceiling = MODEL_TOP

    def ground(time: float, state: Floats) -> float:  # noqa: ARG001 - the solver's signature
        return float(planet.place(state[:3])[2])

    def left(time: float, state: Floats) -> float:  # noqa: ARG001
        altitude = float(planet.place(state[:3])[2])
        above = min(altitude - ceiling, apogee_height(state[:3], state[3:], planet) - MODEL_TOP)
        return max(above, altitude - MODEL_TOP)

    for event, direction in ((ground, -1.0), (left, 1.0)):
        event.terminal = True  # type: ignore[attr-defined]
        event.direction = direction  # type: ignore[attr-defined]
    return [ground, left]
