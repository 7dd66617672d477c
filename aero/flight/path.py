"""A flown path: its states at any time, its peaks and its integrals."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.flight.planet import Planet

_GAUSS_NODES, _GAUSS_WEIGHTS = np.polynomial.legendre.leggauss(6)


@dataclass(frozen=True, eq=False)
class States:
    """Where a flight is at given times, and how it moves over the planet and through the air.

    Attributes
    ----------
    time : (n,) array [s]
    altitude : (n,) array [m]
        Over the ellipsoid.
    latitude, longitude : (n,) array [rad]
        Geodetic.
    speed : (n,) array [m/s]
        Relative to the air, which turns with the planet.
    flight_path_angle : (n,) array [rad]
        Of that velocity over the geodetic horizontal; negative down.
    heading : (n,) array [rad]
        Of that velocity, from north through east, 0 to 2 pi.
    position, velocity : (n, 3) array [m], [m/s]
        Fixed to the turning planet.
    """

    time: Floats
    altitude: Floats
    latitude: Floats
    longitude: Floats
    speed: Floats
    flight_path_angle: Floats
    heading: Floats
    position: Floats
    velocity: Floats


@dataclass(frozen=True, eq=False)
class Path:
    """A flown path: known at every time between its ends.

    Attributes
    ----------
    planet : Planet
    nodes : (m,) array [s]
        Ends of the integrator's steps, from 0 to the end of the flight.
    dense : callable
        Times (n,) [s] -> state (6, n).
    ended_by : str
        "ground", "left the atmosphere", "until" or "time limit".
    """

    planet: Planet
    nodes: Floats
    dense: Callable[[Floats], Floats]
    ended_by: str

    @property
    def duration(self) -> float:
        """Time of the end of the flight [s]."""
        return float(self.nodes[-1])

    def at(self, time: ArrayLike) -> States:
        """Return the states at the given times (n,) [s]."""
        when = np.atleast_1d(floats(time))
        state = self.dense(when)
        return states(self.planet, when, state[:3].T, state[3:].T)

    def peak(self, function: Callable[[States], Floats]) -> tuple[float, float]:
        """Return time and value of the largest value along the whole path, not only at samples.

        Parameters
        ----------
        function : callable
            States -> values (n,). NaN counts as no value.

        Returns
        -------
        time : float [s]
            To 1e-6 s or to rounding; NaN if there is no value anywhere.
        value : float

        Notes
        -----
        Eight points in each integration step bracket the peak; the bracket is then narrowed sixteenfold a
        round.
        """
        shares = np.linspace(0.0, 1.0, 8, endpoint=False)
        inner = self.nodes[:-1, None] + np.diff(self.nodes)[:, None] * shares
        times = np.append(inner.ravel(), self.nodes[-1])
        values = function(self.at(times))
        if np.all(np.isnan(values)):
            return float("nan"), float("nan")
        while True:
            best = int(np.nanargmax(values))
            low, high = times[max(best - 1, 0)], times[min(best + 1, times.size - 1)]
            if high - low <= max(1e-6, 1e-14 * high):
                return float(times[best]), float(values[best])
            times = np.union1d(np.linspace(low, high, 33), times[best])
            values = function(self.at(times))

    def integral(self, function: Callable[[States], Floats]) -> float:
        """Return the integral over time of a function of the states.

        Parameters
        ----------
        function : callable
            States -> values (n,).

        Returns
        -------
        float
            In the function's unit times seconds.

        Notes
        -----
        Gauss's six points in each quarter of an integration step: the path is smooth there, but models of the
        air and of coefficients have kinks.
        """
        quarters = self.nodes[:-1, None] + np.diff(self.nodes)[:, None] * np.linspace(
            0.0, 1.0, 4, endpoint=False
        )
        ends = np.append(quarters.ravel(), self.nodes[-1])
        half = 0.5 * np.diff(ends)
        middle = 0.5 * (ends[:-1] + ends[1:])
        times = (middle[:, None] + half[:, None] * _GAUSS_NODES).ravel()
        values = function(self.at(times)).reshape(half.size, -1)
        return float(np.sum(half * np.sum(values * _GAUSS_WEIGHTS, axis=-1)))


def states(planet: Planet, time: Floats, position: Floats, velocity: Floats) -> States:
    """Return positions and velocities as altitude, speed and angles.

    Parameters
    ----------
    planet : Planet
    time : (n,) array [s]
    position, velocity : (n, 3) array [m], [m/s]
        Fixed to the turning planet.

    Returns
    -------
    States
        Flight-path angle and heading of a vehicle at rest are 0.
    """
    latitude, longitude, altitude = planet.place(position)
    east, north, up = (np.sum(velocity * axis, axis=-1) for axis in planet.axes(latitude, longitude))
    level = np.hypot(east, north)
    return States(
        time=time,
        altitude=altitude,
        latitude=latitude,
        longitude=longitude,
        speed=np.hypot(level, up),
        flight_path_angle=np.arctan2(up, level),
        heading=np.arctan2(east, north) % (2.0 * np.pi),
        position=position,
        velocity=velocity,
    )


def velocity_over_planet(
    planet: Planet, position: Floats, speed: float, flight_path_angle: float, heading: float
) -> Floats:
    """Return the velocity (3,) [m/s] with the given speed and angles at a position (3,)."""
    latitude, longitude, _ = planet.place(position)
    east, north, up = planet.axes(latitude, longitude)
    level = speed * np.cos(flight_path_angle) * (np.sin(heading) * east + np.cos(heading) * north)
    return floats(level + speed * np.sin(flight_path_angle) * up)


def frame_velocity(planet: Planet, position: Floats) -> Floats:
    """Return the velocity omega x r (..., 3) [m/s] of the turning frame, and of the air, at a position."""
    result = np.zeros_like(position)
    result[..., 0] = -planet.rotation * position[..., 1]
    result[..., 1] = planet.rotation * position[..., 0]
    return result


def mechanical_energy(planet: Planet, position: Floats, velocity: Floats) -> Floats:
    """Return the energy per mass that only drag changes, in the turning frame.

    Parameters
    ----------
    planet : Planet
    position, velocity : (..., 3) array [m], [m/s]

    Returns
    -------
    (...,) array [J/kg]

    Notes
    -----
    E = V^2/2 + Phi - omega^2 (x^2 + y^2)/2, Jacobi's integral: the Coriolis force and lift do no work, so
    dE/dt = -D V/m with V relative to the air.
    """
    square = np.sum(velocity * velocity, axis=-1)
    across = position[..., 0] ** 2 + position[..., 1] ** 2
    return floats(0.5 * square + planet.potential(position) - 0.5 * planet.rotation**2 * across)
