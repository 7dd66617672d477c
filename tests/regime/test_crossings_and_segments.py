"""Crossings as roots, and segments cut there."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

import aero
from aero.air import Msis, StandardAtmosphere1976
from aero.arrays import Floats
from aero.gas import mean_free_path
from aero.regime import DEFAULT_BOUNDS, Crossings, Track, cut_segments, find_crossings, regime_index
from aero.trajectory import Trajectory

STANDARD = StandardAtmosphere1976()
LIMITS = (0.0, 1000e3)


def crossings_of(
    trajectory: Trajectory, lengths: list[float], *, sigma: float = 0.2, definition: str = "hard-sphere"
) -> tuple[Crossings, Floats]:
    air = STANDARD.at(trajectory.altitude)
    path = mean_free_path(air, definition)
    found = find_crossings(
        Track.along(trajectory),
        STANDARD,
        definition,
        path,
        lengths,
        DEFAULT_BOUNDS,
        lambda around, _utc: np.full(around.altitude.shape, sigma),
        LIMITS,
    )
    return found, path


def descent(step: float = 10.0) -> Trajectory:
    time = np.arange(0.0, 1000.0 + step, step)
    return Trajectory(name="descent", time=time, altitude=150e3 - 130.0 * time, speed=np.full(time.size, 7e3))


def altitude_of(knudsen: float, length: float) -> float:
    """Altitude of a Knudsen number in the 1976 standard, by a reference root finder."""

    def excess(h: float) -> float:
        return float(np.log(aero.knudsen(STANDARD.at(h), length) / knudsen))

    return float(brentq(excess, 0.0, 900e3, xtol=1e-3))


def test_crossings_on_a_straight_descent_are_the_roots_of_the_atmosphere() -> None:
    found, _ = crossings_of(descent(), [0.9])
    expected = [altitude_of(kn, 0.9) for kn in (10.0, 0.1, 0.01)]
    np.testing.assert_allclose(found.altitude, expected, atol=1.0)  # promised to 1 m
    np.testing.assert_allclose(found.time, (150e3 - np.array(expected)) / 130.0, atol=0.01)
    assert not found.rarefying.any()
    assert found.bound.tolist() == [2, 1, 0]


def test_crossings_do_not_depend_on_the_sampling() -> None:
    fine, _ = crossings_of(descent(1.0), [0.9, 0.01])
    coarse, _ = crossings_of(descent(50.0), [0.9, 0.01])
    np.testing.assert_allclose(fine.altitude, coarse.altitude, atol=1.0)


def test_band_of_a_crossing_is_where_a_shifted_path_meets_the_bound() -> None:
    sigma = 0.15
    found, _ = crossings_of(descent(), [0.9], sigma=sigma)
    low = [altitude_of(kn * np.exp(-1.96 * sigma), 0.9) for kn in (10.0, 0.1, 0.01)]
    high = [altitude_of(kn * np.exp(1.96 * sigma), 0.9) for kn in (10.0, 0.1, 0.01)]
    np.testing.assert_allclose(found.altitude_low, low, atol=1.0)
    np.testing.assert_allclose(found.altitude_high, high, atol=1.0)


def test_a_skip_crosses_both_ways() -> None:
    time = np.linspace(0.0, 600.0, 61)
    altitude = 70e3 + (time - 300.0) ** 2
    trip = Trajectory(name="skip", time=time, altitude=altitude, speed=np.full(61, 7e3))
    found, _ = crossings_of(trip, [0.9])
    assert found.bound.tolist() == [2, 1, 0, 0, 1, 2]
    assert found.rarefying.tolist() == [False] * 3 + [True] * 3
    np.testing.assert_allclose(found.altitude[:3], found.altitude[:2:-1], atol=1.0)


def test_a_graze_between_samples_leaves_no_crossing_and_a_start_inside_an_open_segment() -> None:
    level = Trajectory(name="level", time=np.arange(5.0), altitude=np.full(5, 100e3), speed=np.full(5, 7e3))
    found, path = crossings_of(level, [0.9])
    assert found.time.size == 0
    cuts = cut_segments(level.time, path, [0.9], DEFAULT_BOUNDS, found)
    assert cuts.regime.tolist() == [2]
    assert (cuts.start[0], cuts.end[0]) == (0.0, 4.0)


def test_several_bounds_between_two_samples_come_in_order() -> None:
    fall = Trajectory(
        name="fall", time=np.array([0.0, 1.0]), altitude=np.array([200e3, 10e3]), speed=np.full(2, 7e3)
    )
    found, path = crossings_of(fall, [0.9])
    assert found.bound.tolist() == [2, 1, 0]
    assert np.all(np.diff(found.time) > 0)
    cuts = cut_segments(fall.time, path, [0.9], DEFAULT_BOUNDS, found)
    assert cuts.regime.tolist() == [3, 2, 1, 0]
    np.testing.assert_allclose(cuts.knudsen_max[1:], [10.0, 0.1, 0.01])
    np.testing.assert_allclose(cuts.knudsen_min[1:3], [0.1, 0.01])


def test_a_root_stops_at_a_jump_of_the_model() -> None:
    # NRLMSISE-00 leaves a step of 0.1-0.2 % at 123.435 km; a length whose bound falls inside it has no root there.
    model = Msis("nrlmsise-00", activity="moderate")
    place = {"latitude_deg": 10.0, "longitude_deg": 20.0, "utc": np.datetime64("2026-03-01T12:00:00")}
    heights = np.array([123_434.0, 123_436.0])
    path = mean_free_path(model.at(heights, **{k: np.full(2, v) for k, v in place.items()}))
    time = np.arange(0.0, 11.0)
    trajectory = Trajectory(
        name="jump",
        time=time,
        altitude=123_440.0 - time,
        speed=np.full(11, 7e3),
        latitude=np.full(11, np.radians(10.0)),
        longitude=np.full(11, np.radians(20.0)),
        epoch=np.datetime64("2026-03-01T12:00:00"),
    )
    sampled = mean_free_path(
        model.at(
            trajectory.altitude,
            latitude_deg=np.full(11, 10.0),
            longitude_deg=np.full(11, 20.0),
            utc=trajectory.utc,
        )
    )
    length = float(np.sqrt(path[0] * path[1])) / 10.0
    found = find_crossings(
        Track.along(trajectory),
        model,
        "hard-sphere",
        sampled,
        [length],
        DEFAULT_BOUNDS,
        lambda around, _utc: np.full(around.altitude.shape, 0.2),
        LIMITS,
    )
    assert found.altitude == pytest.approx([123_435.0], abs=2.0)


@settings(max_examples=50, deadline=None)
@given(
    st.lists(st.floats(20e3, 300e3), min_size=2, max_size=30),
    st.floats(1e-3, 50.0),
)
def test_tags_agree_with_crossings(altitudes: list[float], length: float) -> None:
    time = np.arange(float(len(altitudes)))
    trip = Trajectory(name="any", time=time, altitude=np.array(altitudes), speed=np.full(time.size, 5e3))
    found, path = crossings_of(trip, [length])
    cuts = cut_segments(time, path, [length], DEFAULT_BOUNDS, found)
    tags = regime_index(path / length)
    assert cuts.start[0] == time[0]
    assert cuts.end[-1] == time[-1]
    assert np.array_equal(cuts.start[1:], cuts.end[:-1])
    for k in range(cuts.start.size):
        inside = slice(cuts.first[k], cuts.last[k])
        assert np.all(tags[inside] == cuts.regime[k])
    assert np.all(np.abs(np.diff(cuts.regime.astype(int))) == 1)
    # between its cuts a segment keeps its regime
    middle = STANDARD.at(Track.along(trip).altitude(0.5 * (cuts.start + cuts.end)))
    wide = cuts.end - cuts.start > 1e-3
    assert np.array_equal(regime_index(mean_free_path(middle) / length)[wide], cuts.regime[wide])
