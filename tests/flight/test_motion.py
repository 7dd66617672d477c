"""The integrator against closed forms, conservation laws and first-order theory."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from aero.air.state import Air
from aero.constants import EARTH_GM, EARTH_J2, EARTH_RADIUS, EARTH_ROTATION
from aero.errors import InputError
from aero.flight.forces import constant
from aero.flight.motion import MODEL_TOP, integrate
from aero.flight.path import Path, States, frame_velocity, mechanical_energy, velocity_over_planet
from aero.flight.planet import Planet, earth

SEA_LEVEL, SCALE_HEIGHT = 1.225, 7000.0


def exponential(density: float = SEA_LEVEL, scale: float = SCALE_HEIGHT) -> Callable[..., Air]:
    """Air that only has a density, as the closed forms take it."""

    def air(time: np.ndarray, altitude: np.ndarray, latitude: np.ndarray, longitude: np.ndarray) -> Air:
        value = density * np.exp(-altitude / scale)
        none = np.full_like(value, np.nan)
        return Air("exponential", altitude, none, none, value, none, np.full((*value.shape, 7), np.nan))

    return air


def lifting(ballistic: float, lift_to_drag: float) -> Callable[..., tuple[np.ndarray, np.ndarray]]:
    def area_per_mass(air: Air, speed: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        return np.full(speed.shape, 1.0 / ballistic), np.full(speed.shape, lift_to_drag / ballistic)

    return area_per_mass


def flat() -> Planet:
    """A flat world without rotation or gravity, as Allen & Eggers take it."""

    def zeros(position: np.ndarray) -> np.ndarray:
        return np.zeros(position.shape[:-1])

    def axes(latitude: np.ndarray, longitude: np.ndarray) -> tuple[np.ndarray, ...]:
        return tuple(np.broadcast_to(axis, (*np.shape(latitude), 3)) for axis in np.eye(3))

    def above(latitude: float, longitude: float, altitude: float) -> np.ndarray:
        return np.array([0.0, 0.0, altitude])

    return Planet(
        gravity=np.zeros_like,
        potential=zeros,
        rotation=0.0,
        gm=0.0,
        radius=0.0,
        place=lambda position: (zeros(position), zeros(position), position[..., 2]),
        position=above,
        axes=axes,
    )


def start(
    planet: Planet, altitude: float, speed: float, angle_deg: float, latitude: float = 0.4
) -> tuple[np.ndarray, np.ndarray]:
    position = planet.position(latitude, 0.2, altitude)
    return position, velocity_over_planet(planet, position, speed, math.radians(angle_deg), 1.0)


@pytest.mark.parametrize(("ballistic", "angle_deg"), [(50.0, 30.0), (500.0, 8.0), (5000.0, 90.0)])
def test_allen_and_eggers(ballistic: float, angle_deg: float) -> None:
    """Allen & Eggers, NACA TR 1381 (1958): peak deceleration and the speed there, and V(h)."""
    speed, sine = 7000.0, math.sin(math.radians(angle_deg))
    planet = flat()
    path = integrate(
        *start(planet, 200e3, speed, -angle_deg),
        planet=planet,
        air=exponential(),
        area_per_mass=constant(ballistic),
        until=600.0,
    )

    def deceleration(states: States) -> np.ndarray:
        return 0.5 * SEA_LEVEL * np.exp(-states.altitude / SCALE_HEIGHT) * states.speed**2 / ballistic

    time, value = path.peak(deceleration)
    # the form starts from no air at all: at 200 km exp(-200/7) = 4e-13 of it is left above
    assert value == pytest.approx(speed**2 * sine / (2.0 * math.e * SCALE_HEIGHT), rel=1e-8)
    # a peak's place is known to the root of the precision of its value
    assert path.at(time).speed[0] == pytest.approx(speed * math.exp(-0.5), rel=1e-6)
    along = path.at(np.linspace(0.0, path.duration, 200))
    exponent = SCALE_HEIGHT * SEA_LEVEL / (2.0 * ballistic * sine) * np.exp(-along.altitude / SCALE_HEIGHT)
    np.testing.assert_allclose(along.speed, speed * np.exp(-exponent), rtol=1e-7, atol=1e-5)


@pytest.mark.parametrize("lift_to_drag", [0.0, 0.3, -0.2])
@pytest.mark.parametrize(("speed", "angle_deg"), [(7500.0, -1.5), (7500.0, -30.0), (11000.0, -6.0)])
def test_drag_work_is_the_energy_lost(speed: float, angle_deg: float, lift_to_drag: float) -> None:
    """V^2/2 + Phi - omega^2 r^2 cos^2(lat)/2 falls by the work of drag through the turning air."""
    planet = earth()
    path = integrate(
        *start(planet, 120e3, speed, angle_deg),
        planet=planet,
        air=exponential(),
        area_per_mass=lifting(60.0, lift_to_drag),
        tolerance=1e-9,
    )
    work = path.integral(
        lambda states: 0.5 * SEA_LEVEL * np.exp(-states.altitude / SCALE_HEIGHT) * states.speed**3 / 60.0
    )
    ends = path.at([0.0, path.duration])
    energy = mechanical_energy(planet, ends.position, ends.velocity)
    assert energy[0] - energy[1] == pytest.approx(work, rel=1e-6)


def inertial(path: Path, time: float) -> tuple[np.ndarray, np.ndarray]:
    """Position and velocity in axes that do not turn."""
    there = path.at(time)
    angle = path.planet.rotation * time
    turn = np.array(
        [[math.cos(angle), -math.sin(angle), 0.0], [math.sin(angle), math.cos(angle), 0.0], [0.0, 0.0, 1.0]]
    )
    velocity = there.velocity[0] + frame_velocity(path.planet, there.position[0])
    return turn @ there.position[0], turn @ velocity


@pytest.mark.parametrize("rotation", [0.0, EARTH_ROTATION])
def test_kepler_orbit(rotation: float) -> None:
    """Without drag and J2: period 2 pi sqrt(a^3/GM), and energy, in a still and in a turning frame alike."""
    planet = earth(j2=0.0, flattening=0.0, rotation=rotation)
    perigee, apogee = EARTH_RADIUS + 400e3, EARTH_RADIUS + 950e3
    major = 0.5 * (perigee + apogee)
    period = 2.0 * math.pi * math.sqrt(major**3 / EARTH_GM)
    position = np.array([perigee, 0.0, 0.0])
    speed = math.sqrt(EARTH_GM * (2.0 / perigee - 1.0 / major))
    velocity = np.array([0.0, 0.6 * speed, 0.8 * speed]) - frame_velocity(planet, position)
    path = integrate(position, velocity, planet=planet, until=2.0 * period, tolerance=1e-12)
    assert path.ended_by == "until"
    energies = []
    for time in np.linspace(0.0, path.duration, 41):
        where, moving = inertial(path, time)
        energies.append(0.5 * moving @ moving - EARTH_GM / np.linalg.norm(where))
    np.testing.assert_allclose(energies, -EARTH_GM / (2.0 * major), rtol=1e-9)
    # back at the start after a whole period: 1e-9 of the radius
    np.testing.assert_allclose(inertial(path, period)[0], position, rtol=0, atol=1e-9 * perigee)
    assert path.peak(lambda states: states.altitude)[1] == pytest.approx(950e3, abs=1e-2)
    assert path.peak(lambda states: states.altitude)[0] == pytest.approx(0.5 * period, rel=1e-6) or (
        path.peak(lambda states: states.altitude)[0] == pytest.approx(1.5 * period, rel=1e-6)
    )


def test_node_drifts_as_first_order_theory_says() -> None:
    """Mean drift of the node, -3/2 n J2 (R/p)^2 cos i (Kaula 1966), over 15 orbits."""
    planet, inclination = earth(), math.radians(51.6)
    major = EARTH_RADIUS + 600e3
    motion = math.sqrt(EARTH_GM / major**3)
    position = np.array([major, 0.0, 0.0])
    speed = motion * major
    velocity = np.array([0.0, speed * math.cos(inclination), speed * math.sin(inclination)])
    path = integrate(
        position, velocity - frame_velocity(planet, position), planet=planet, until=DAY_OF_ORBITS
    )

    def elements(time: float) -> tuple[float, float, float]:
        """Osculating axis, node and inclination."""
        where, moving = inertial(path, time)
        momentum = np.cross(where, moving)
        axis = 1.0 / (2.0 / np.linalg.norm(where) - moving @ moving / EARTH_GM)
        tilt = math.acos(momentum[2] / np.linalg.norm(momentum))
        return axis, math.atan2(momentum[0], -momentum[1]), tilt

    orbit = 2.0 * math.pi / motion
    shares = np.linspace(0.0, 1.0, 50, endpoint=False)
    first = np.mean([elements(share * orbit) for share in shares], axis=0)
    last = np.mean([elements(path.duration - share * orbit) for share in shares], axis=0)
    drift = (last[1] - first[1]) / (path.duration - 2.0 * shares.mean() * orbit)
    axis, _, tilt = first  # averaged over an orbit the short-period swing is gone
    theory = -1.5 * math.sqrt(EARTH_GM / axis**3) * EARTH_J2 * (EARTH_RADIUS / axis) ** 2 * math.cos(tilt)
    # what first-order theory leaves out is of order J2, 0.1 %
    assert drift == pytest.approx(theory, rel=1e-3)


DAY_OF_ORBITS = 15.0 * 2.0 * math.pi * math.sqrt((EARTH_RADIUS + 600e3) ** 3 / EARTH_GM)


def test_lift_turns_the_path_and_does_no_work() -> None:
    planet = flat()
    air = exponential(density=1e-3, scale=1e12)  # the same everywhere: the path is a circle
    path = integrate(
        *start(planet, 100e3, 5000.0, -10.0), planet=planet, air=air, area_per_mass=lifting(1e9, 1e9 / 50.0),
        until=15.0,
    )  # fmt: skip
    along = path.at(np.linspace(0.0, 15.0, 11))
    np.testing.assert_allclose(along.speed, 5000.0, rtol=1e-6)
    # d gamma/dt = rho V C_L A/(2 m)
    rate = 0.5 * 1e-3 * 5000.0 / 50.0
    np.testing.assert_allclose(along.flight_path_angle, math.radians(-10.0) + rate * along.time, rtol=1e-5)


def test_a_skip_below_the_top_comes_back_and_lands() -> None:
    planet = earth()
    path = integrate(
        *start(planet, 120e3, 8000.0, -4.0),
        planet=planet,
        air=exponential(),
        area_per_mass=lifting(60.0, 0.8),
    )
    altitudes = path.at(np.linspace(0.0, path.duration, 3000)).altitude
    lowest = int(np.argmax(np.diff(altitudes) > 0.0))
    assert altitudes[lowest:].max() > altitudes[lowest] + 10e3
    assert path.ended_by == "ground"
    assert path.at(path.duration).altitude[0] == pytest.approx(0.0, abs=1e-3)


def test_a_pass_leaves_for_good() -> None:
    planet = earth()
    path = integrate(
        *start(planet, 150e3, 10000.0, -3.0), planet=planet, air=exponential(), area_per_mass=constant(600.0)
    )
    assert path.ended_by == "left the atmosphere"
    final = path.at(path.duration)
    assert final.altitude[0] == pytest.approx(200e3, abs=1.0)
    assert final.flight_path_angle[0] > 0.0


def test_a_climbing_start_is_followed_to_the_top() -> None:
    planet = earth()
    path = integrate(*start(planet, 300e3, 9500.0, 10.0), planet=planet)
    assert path.ended_by == "left the atmosphere"
    assert path.at(path.duration).altitude[0] == pytest.approx(MODEL_TOP, abs=1.0)


def test_vertical_fall_is_not_singular() -> None:
    """Lift downwards holds a vehicle at the vertical, where its plane is undefined and it fades to 0."""
    planet = earth(rotation=0.0)
    path = integrate(
        *start(planet, 80e3, 1000.0, -90.0, latitude=math.pi / 2), planet=planet, air=exponential(),
        area_per_mass=lifting(100.0, -0.5),
    )  # fmt: skip
    assert path.ended_by == "ground"
    assert np.degrees(path.at(path.duration).latitude[0]) == pytest.approx(90.0, abs=1e-6)


def test_air_without_an_answer_is_named() -> None:
    def gap(time: np.ndarray, altitude: np.ndarray, latitude: np.ndarray, longitude: np.ndarray) -> Air:
        air = exponential()(time, altitude, latitude, longitude)
        return replace(air, model="mine", density=np.where(altitude < 90e3, np.nan, air.density))

    planet = earth()
    with pytest.raises(InputError, match=r"atmosphere 'mine' has no air at 8\d.* km"):
        integrate(*start(planet, 120e3, 7500.0, -5.0), planet=planet, air=gap, area_per_mass=constant(50.0))


def test_drag_without_an_answer_is_named() -> None:
    def nothing(air: Air, speed: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        return np.full_like(speed, np.nan), np.zeros_like(speed)

    planet = earth()
    with pytest.raises(InputError, match="drag has no answer at 120 km and 7500 m/s"):
        integrate(
            *start(planet, 120e3, 7500.0, -5.0), planet=planet, air=exponential(), area_per_mass=nothing
        )


def test_peak_of_nothing_is_nan() -> None:
    planet = earth()
    path = integrate(*start(planet, 120e3, 7500.0, -5.0), planet=planet, until=10.0)
    time, value = path.peak(lambda states: np.full_like(states.time, np.nan))
    assert math.isnan(time)
    assert math.isnan(value)
