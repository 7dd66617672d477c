"""Frames against vectors, published values and their own inverses."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.constants import EARTH_FLATTENING, EARTH_RADIUS, EARTH_ROTATION
from aero.trajectory import ALTITUDE_KINDS, air_relative, inertial
from aero.trajectory.frames import axis_distance, from_geocentric, from_geopotential

LATITUDE = st.floats(-np.pi / 2, np.pi / 2)
ALTITUDE = st.floats(-5e3, 1e6)
SPEED = st.floats(0.0, 12e3)
PATH = st.floats(-np.pi / 2, np.pi / 2)
HEADING = st.floats(0.0, 2 * np.pi)


def _axes(latitude: float, longitude: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """East, north and up of the ellipsoid as vectors in Earth-centred axes."""
    up = np.array(
        [np.cos(latitude) * np.cos(longitude), np.cos(latitude) * np.sin(longitude), np.sin(latitude)]
    )
    east = np.array([-np.sin(longitude), np.cos(longitude), 0.0])
    return east, np.cross(up, east), up


def _place(latitude: float, longitude: float, altitude: float) -> np.ndarray:
    """Earth-centred position, by the semi-axes: independent of the form used in the package."""
    a, b = EARTH_RADIUS, EARTH_RADIUS * (1 - EARTH_FLATTENING)
    root = np.hypot(a * np.cos(latitude), b * np.sin(latitude))
    ground = np.array(
        [
            a * a / root * np.cos(latitude) * np.cos(longitude),
            a * a / root * np.cos(latitude) * np.sin(longitude),
            b * b / root * np.sin(latitude),
        ]
    )
    return ground + altitude * _axes(latitude, longitude)[2]


@given(SPEED, PATH, HEADING, ALTITUDE, LATITUDE, st.floats(-np.pi, np.pi))
def test_air_relative_motion_is_v_less_omega_cross_r(
    speed: float, path: float, heading: float, altitude: float, latitude: float, longitude: float
) -> None:
    east, north, up = _axes(latitude, longitude)
    level = np.cos(heading) * north + np.sin(heading) * east
    velocity = speed * (np.cos(path) * level + np.sin(path) * up)
    spin = np.array([0.0, 0.0, EARTH_ROTATION])
    expected = velocity - np.cross(spin, _place(latitude, longitude, altitude))
    found, angle, course = air_relative(speed, path, heading, altitude, latitude)
    level = np.cos(course) * north + np.sin(course) * east
    # 1e-8 m/s: rounding of 12 km/s and of a 6,400 km radius times 7e-5 rad/s
    np.testing.assert_allclose(found * (np.cos(angle) * level + np.sin(angle) * up), expected, atol=1e-8)
    assert found == pytest.approx(np.linalg.norm(expected), abs=1e-8)


@given(SPEED, PATH, HEADING, ALTITUDE, LATITUDE)
def test_inertial_undoes_air_relative(
    speed: float, path: float, heading: float, altitude: float, latitude: float
) -> None:
    back = air_relative(*inertial(speed, path, heading, altitude, latitude), altitude, latitude)

    def parts(v: float, g: float, c: float) -> list[float]:
        return [v * np.sin(g), v * np.cos(g) * np.cos(c), v * np.cos(g) * np.sin(c)]

    np.testing.assert_allclose(parts(*back), parts(speed, path, heading), atol=1e-8)
    assert 0.0 <= back[2] <= 2 * np.pi


def test_the_equator_turns_at_465_metres_a_second() -> None:
    # 40,075.017 km (equator of WGS84) in one sidereal day of 86,164.0989 s, both as usually printed:
    # 465.101 m/s. 1e-3 m/s covers the printed digits.
    assert float(air_relative(0.0, 0.0, 0.0, 0.0, 0.0)[0]) == pytest.approx(
        40075.017e3 / 86164.0989, abs=1e-3
    )
    _, _, heading = air_relative(0.0, 0.0, 0.0, 0.0, 0.0)
    assert np.degrees(heading) == pytest.approx(270.0, abs=1e-12)  # the air comes from the west
    assert float(air_relative(7000.0, 0.0, np.pi / 2, 0.0, 0.0)[0]) == pytest.approx(7000 - 465.101, abs=1e-3)
    assert float(air_relative(7000.0, 0.0, -np.pi / 2, 0.0, 0.0)[0]) == pytest.approx(
        7000 + 465.101, abs=1e-3
    )


def test_the_pole_stands_still() -> None:
    speed, path, heading = air_relative(7000.0, -0.1, 1.0, 100e3, np.pi / 2)
    assert float(speed) == pytest.approx(7000.0, abs=1e-9)
    assert (float(path), float(heading)) == pytest.approx((-0.1, 1.0), abs=1e-12)


@given(ALTITUDE, LATITUDE)
def test_geocentric_heights_come_back_geodetic(altitude: float, latitude: float) -> None:
    radius = float(np.linalg.norm(_place(latitude, 0.3, altitude)))
    # 1e-8 m: a few roundings of a 7,000 km radius (1e-9 m each)
    assert float(from_geocentric(radius - EARTH_RADIUS, latitude)) == pytest.approx(altitude, abs=2e-8)


def test_the_pole_lies_21385_metres_lower() -> None:
    # Polar semi-axis of WGS84, NIMA TR8350.2: 6,356,752.3142 m
    assert float(from_geocentric(6356752.3142 - 6378137.0, -np.pi / 2)) == pytest.approx(0.0, abs=1e-4)


@pytest.mark.parametrize(
    ("geopotential", "geometric", "tolerance"),
    [
        (
            11000.0,
            11019.0,
            0.6,
        ),  # layer bounds of the U.S. Standard Atmosphere, 1976, table 4 (geopotential),
        (47000.0, 47350.0, 0.6),  # and their geometric altitudes as printed, to the metre; from memory
        (71000.0, 71802.0, 0.6),
        (84852.0, 86000.0, 0.6),
    ],
)
def test_geopotential_altitudes_of_the_standard(
    geopotential: float, geometric: float, tolerance: float
) -> None:
    assert float(from_geopotential(geopotential, 0.0)) == pytest.approx(geometric, abs=tolerance)


@pytest.mark.parametrize("kind", ALTITUDE_KINDS)
def test_every_kind_takes_scalars_arrays_and_nothing(kind: str) -> None:
    turn = ALTITUDE_KINDS[kind]
    assert np.shape(turn(1e5, 0.5)) == ()
    assert turn(np.full((2, 3), 1e5), 0.5).shape == (2, 3)
    assert turn([], []).shape == (0,)
    assert np.isnan(turn(np.nan, 0.5))
    assert float(turn(0.0, 0.0)) == pytest.approx(0.0, abs=1e-9)


def test_shapes_broadcast() -> None:
    speed, path, heading = air_relative(np.full(3, 7e3), 0.0, 1.0, 1e5, np.zeros((2, 1)))
    assert speed.shape == path.shape == heading.shape == (2, 3)
    assert air_relative([], [], [], [], [])[0].shape == (0,)
    assert axis_distance(0.0, [0.0, np.pi / 2])[1] == pytest.approx(0.0, abs=1e-9)


def test_layers_agree_with_the_printed_table() -> None:
    """At 86 km the printed table has the temperature of the top of the last geopotential layer."""
    table = Path(__file__).parents[1] / "published" / "us_standard_atmosphere_1976.csv"
    with table.open(encoding="utf-8") as stream:
        rows = list(csv.DictReader(line for line in stream if not line.startswith("#")))
    printed = {float(row["altitude_km"]): float(row["temperature_K"]) for row in rows if row["temperature_K"]}
    # Troposphere: 288.15 K less 6.5 K per geopotential kilometre; invert the printed temperatures.
    for altitude in (1.0, 2.0):
        level = (288.15 - printed[altitude]) / 6.5e-3
        # printed to 0.001 K: 0.0005 K / 6.5 K/km = 0.08 m
        assert float(from_geopotential(level, 0.0)) == pytest.approx(altitude * 1e3, abs=0.08)
