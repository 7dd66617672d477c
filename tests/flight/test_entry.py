"""An entry from start to end: what it returns, and what it refuses."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from aero.air import Msis, StandardAtmosphere1976
from aero.constants import EARTH_ROTATION
from aero.errors import InputError
from aero.flight import Flight, fly
from aero.flight.entry import ROWS
from aero.trajectory import air_relative, inertial

START: dict[str, Any] = {
    "altitude": 120e3,
    "speed": 7600.0,
    "flight_path_angle": math.radians(-3.0),
    "latitude": math.radians(35.0),
    "longitude": math.radians(20.0),
    "heading": math.radians(60.0),
    "ballistic_coefficient": 60.0,
}


@pytest.fixture(scope="module")
def flight() -> Flight:
    return fly(**START)


def test_json_keys_are_all_there(flight: Flight) -> None:
    told = flight.summary()
    assert {
        "peak_deceleration_m_s2",
        "peak_deceleration_altitude_m",
        "peak_deceleration_time_s",
        "peak_heat_flux_W_m2",
        "peak_heat_flux_altitude_m",
        "heat_load_J_m2",
        "final",
    } <= set(told)
    final = told["final"]
    assert isinstance(final, dict)
    assert {
        "time_s",
        "altitude_m",
        "air_speed_m_s",
        "flight_path_angle_deg",
        "latitude_deg",
        "longitude_deg",
    } <= set(final)
    assert told["peak_heat_flux_W_m2"] is None  # no vehicle, no nose radius
    assert told["heat_load_J_m2"] is None
    assert told["ended_by"] == "ground"


def test_it_starts_as_told_and_lands(flight: Flight) -> None:
    first = flight.samples
    assert first.altitude[0] == pytest.approx(120e3, abs=1e-6)
    assert first.speed[0] == pytest.approx(7600.0, abs=1e-9)
    for name in ("flight_path_angle", "latitude", "longitude", "heading"):
        assert getattr(first, name)[0] == pytest.approx(START[name], abs=1e-12)
    assert flight.final.altitude[0] == pytest.approx(0.0, abs=1e-6)
    # terminal speed sqrt(2 beta g/rho) at sea level: 31 m/s; still slowing by V/(2 H) of itself a second
    terminal = math.sqrt(2.0 * 60.0 * 9.797 / 1.225)
    assert flight.final.speed[0] == pytest.approx(terminal, rel=5e-3)


def test_the_peak_is_above_every_sample(flight: Flight) -> None:
    air = StandardAtmosphere1976().at(np.maximum(flight.samples.altitude, 0.0))
    sampled = 0.5 * air.density * flight.samples.speed**2 / 60.0
    peak = flight.peak_deceleration
    assert sampled.max() <= peak.value
    # samples are at most half a second apart, over which so broad a peak falls by a thousandth at most
    assert sampled.max() == pytest.approx(peak.value, rel=1e-3)
    assert peak.altitude == pytest.approx(flight.path.at(peak.time).altitude[0])


def test_a_step_moves_samples_only(flight: Flight) -> None:
    coarse = fly(**START, step=20.0)
    assert coarse.summary() == flight.summary()
    np.testing.assert_array_equal(coarse.samples.time[:-1], np.arange(coarse.samples.time.size - 1) * 20.0)
    assert coarse.samples.time[-1] == flight.path.duration
    assert flight.samples.time.size <= ROWS


def test_tolerance_is_tight_enough(flight: Flight) -> None:
    fine = fly(**START, tolerance=1e-12)
    # 1e-8 a step over some hundred steps, and as much again for kinks in the air
    assert fine.path.duration == pytest.approx(flight.path.duration, rel=1e-5)
    assert fine.peak_deceleration.value == pytest.approx(flight.peak_deceleration.value, rel=1e-5)


def test_inertial_and_air_relative_starts_are_one_flight(flight: Flight) -> None:
    speed, angle, heading = (
        float(value)
        for value in inertial(
            START["speed"], START["flight_path_angle"], START["heading"], START["altitude"], START["latitude"]
        )
    )
    assert speed > START["speed"]  # eastward: the turning air adds to it
    changed = START | {"speed": speed, "flight_path_angle": angle, "heading": heading}
    other = fly(**changed, velocity_frame="inertial")
    # one start but for rounding, 1e-9 m and 1e-12 m/s
    assert other.path.duration == pytest.approx(flight.path.duration, rel=1e-8)
    assert other.peak_deceleration.value == pytest.approx(flight.peak_deceleration.value, rel=1e-8)
    assert other.samples.speed[0] == pytest.approx(
        float(air_relative(speed, angle, heading, START["altitude"], START["latitude"])[0]), rel=1e-12
    )


def test_heading_matters_because_the_earth_turns() -> None:
    """One inertial speed: flown west the air comes at 2 omega r cos(lat) more than flown east."""
    equator = START | {"latitude": 0.0, "velocity_frame": "inertial", "until": 1.0}
    east, west = (fly(**(equator | {"heading": math.radians(h)})) for h in (90.0, 270.0))
    turning = EARTH_ROTATION * (6378137.0 + 120e3)
    # the path is inclined by 3 degrees, so the difference of speeds is that of its level part
    level = 7600.0 * math.cos(math.radians(3.0))
    climb = 7600.0 * math.sin(math.radians(3.0))
    assert east.samples.speed[0] == pytest.approx(math.hypot(level - turning, climb), rel=1e-12)
    assert west.samples.speed[0] == pytest.approx(math.hypot(level + turning, climb), rel=1e-12)


def test_coriolis_turns_a_flight_to_the_right_in_the_north(flight: Flight) -> None:
    still = START | {"latitude": math.radians(60.0), "heading": 0.0}
    assert fly(**still, until=60.0).samples.heading[-1] < math.pi  # eastward of north
    still = START | {"latitude": math.radians(-60.0), "heading": 0.0}
    assert fly(**still, until=60.0).samples.heading[-1] > math.pi  # westward: a hair under 360 degrees


def test_as_a_trajectory(flight: Flight) -> None:
    flown = fly(**START, epoch=np.datetime64("2026-03-01T12:00")).trajectory("demo")
    assert flown.name == "demo"
    assert flown.utc is not None
    assert str(flown.utc[0]) == "2026-03-01T12:00:00.000000"
    np.testing.assert_array_equal(flown.speed, flight.samples.speed)
    assert flown.altitude.min() >= 0.0


def test_an_atmosphere_of_place_and_date_is_flown_through() -> None:
    air = Msis("nrlmsise-00", activity="moderate")
    here = fly(**START, atmosphere=air, epoch=np.datetime64("2026-03-01T12:00"))
    later = fly(**START, atmosphere=air, epoch=np.datetime64("2026-07-01T00:00"))
    assert here.ended_by == later.ended_by == "ground"
    assert here.peak_deceleration.altitude != later.peak_deceleration.altitude
    with pytest.raises(InputError, match="needs the date of the flight"):
        fly(**START, atmosphere=air)


def test_a_flight_that_does_not_end_is_stopped() -> None:
    circular = START | {"altitude": 900e3, "speed": 7000.0, "flight_path_angle": 0.0, "until": 600.0}
    stopped = fly(**circular)
    assert stopped.ended_by == "until"
    assert stopped.final.time[0] == 600.0


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        ({"altitude": 0.0}, r"--altitude: 0 m cannot be flown, expected above 0 and up to 1e\+06 m"),
        ({"altitude": -10.0}, "--altitude: -10 m"),
        ({"altitude": 1.2e6}, r"--altitude: 1.2e\+06 m"),
        ({"altitude": math.nan}, "--altitude: nan m"),
        ({"speed": 0.0}, "--speed: 0 m/s"),
        ({"speed": -1.0}, "--speed: -1 m/s"),
        ({"speed": 7.6e6}, r"--speed: 7.6e\+06 m/s"),
        ({"speed": math.inf}, "--speed: inf m/s"),
        (
            {"flight_path_angle": -2.0},
            "--flight-path-angle: -114.592 deg cannot be flown, expected -90 to 90 deg",
        ),
        ({"flight_path_angle": math.nan}, "--flight-path-angle: nan deg"),
        ({"latitude": 2.0}, "--latitude: 114.592 deg"),
        ({"longitude": 7.0}, "--longitude: 401.07 deg"),
        ({"heading": -4.0}, "--heading: -229.183 deg"),
        ({"velocity_frame": "inertia"}, "velocity frame is 'inertia'.* did you mean 'inertial'"),
        ({"ballistic_coefficient": 0.0}, "--ballistic-coefficient: 0 kg/m2"),
        ({"ballistic_coefficient": None}, "nothing says how the flight is slowed down"),
        ({"angle_of_attack": 4.0}, "--angle-of-attack: 229.183 deg"),
        ({"until": 0.0}, "--until: 0 s cannot be flown, expected above 0 and up to 3.15576e"),
        ({"until": math.nan}, "--until: nan s"),
        ({"step": 0.0}, "--step: 0 s cannot be flown, expected above 0 s"),
        ({"step": -1.0}, "--step: -1 s"),
        ({"step": 1e-6}, "--step: 1e-06 s would give .* rows"),
    ],
)
def test_bad_input_is_named(changed: dict[str, Any], message: str) -> None:
    with pytest.raises(InputError, match=message):
        fly(**(START | {"until": 100.0} | changed))


@pytest.mark.parametrize("latitude_deg", [-90.0, 90.0])
def test_a_pole_is_an_ordinary_place(latitude_deg: float) -> None:
    over = fly(**(START | {"latitude": math.radians(latitude_deg), "heading": 0.3}))
    assert over.ended_by == "ground"
    assert np.all(np.isfinite(over.samples.heading))
