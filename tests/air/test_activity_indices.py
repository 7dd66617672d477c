"""Activity levels, and the look-up of observed and forecast indices by date."""

from __future__ import annotations

import numpy as np
import pytest

from aero.air import LEVELS
from aero.air.activity import FORECAST_AP, dates_covered, lookup
from aero.air.space_weather import shipped
from aero.errors import InputError

US = "datetime64[us]"


def test_levels_are_the_published_ones():
    # ISO 14222 and ECSS-E-ST-10-04C, long-term levels as quoted there
    assert [(v.f107, v.f107a, v.ap) for v in LEVELS.values()] == [(65, 65, 0), (140, 140, 15), (250, 250, 45)]


def test_a_storm_day_by_hand():
    # Rows of 28-30 October 2003 as GFZ and Penticton give them (ap1 ... ap8; Ap; F10.7; 81-day mean).
    ap = np.array(
        [
            [15, 39, 22, 39, 12, 27, 18, 27],
            [39, 27, 400, 207, 179, 179, 300, 300],
            [300, 154, 56, 39, 48, 132, 400, 400],
        ]
    ).ravel()
    found = lookup(shipped(), np.array(["2003-10-30T12:00"], US))
    k = 16 + 4
    expected = [
        191,
        ap[k],
        ap[k - 1],
        ap[k - 2],
        ap[k - 3],
        ap[k - 11 : k - 3].mean(),
        ap[k - 19 : k - 11].mean(),
    ]
    np.testing.assert_array_equal(found.ap[0], expected)
    assert found.f107[0] == 291.7  # of the 29th, the day before
    assert found.f107a[0] == 146.5  # of the 30th
    assert found.storm.all()
    assert not found.forecast.any()


def test_the_81_day_mean_is_that_of_the_daily_values():
    history = shipped()
    mean = np.convolve(history.f107, np.full(81, 1 / 81), "valid")
    np.testing.assert_allclose(history.f107a[40:-40], mean, atol=0.0501)  # printed to 0.1
    assert (
        np.abs(history.ap3.reshape(-1, 8).mean(axis=1) - history.ap).max() <= 0.5
    )  # Ap is their rounded mean


def test_values_are_steps_and_dates_before_1970_are_floored():
    history = shipped()
    at = np.array(
        ["1960-02-29T02:59:59.9", "1960-02-29T03:00:00", "1960-02-29T23:59:59.9", "1960-03-01T00:00"], US
    )
    found = lookup(history, at)
    day = int(np.datetime64("1960-02-29").astype(int)) - history.first_day
    row = history.ap3.reshape(-1, 8)
    np.testing.assert_array_equal(found.ap[:, 1], [row[day, 0], row[day, 1], row[day, 7], row[day + 1, 0]])
    np.testing.assert_array_equal(found.f107, history.f107[[day - 1, day - 1, day - 1, day]])


def test_forecast_after_the_end():
    history = shipped()
    dates = np.array(["2025-07-20T23:59", "2025-07-21T00:00", "2026-01-16T12:00", "2041-10-31T23:00"], US)
    found = lookup(history, dates)
    assert found.forecast.tolist() == [False, True, True, True]
    assert found.storm.tolist() == [True, False, False, False]
    np.testing.assert_allclose(found.f107[2:], [159.0, 69.8])  # mid-January 2026 and after mid-October 2041
    np.testing.assert_allclose(found.f107a[2:], [160.1, 68.8])
    np.testing.assert_array_equal(found.ap[1:], FORECAST_AP)
    # the line to the forecast begins at the level of the last solar rotation
    np.testing.assert_allclose(found.f107[1], history.f107[-27:].mean(), rtol=0.02)
    np.testing.assert_allclose(found.f107a[1], 128.9, rtol=0.02)


def test_order_does_not_matter():
    rng = np.random.default_rng(5)
    dates = np.datetime64("1958-01-01", "s") + rng.integers(0, 83 * 31_500_000, 500).astype("timedelta64[s]")
    together = lookup(shipped(), dates)
    order = rng.permutation(500)
    shuffled = lookup(shipped(), dates[order])
    np.testing.assert_array_equal(together.ap[order], shuffled.ap)
    np.testing.assert_array_equal(together.f107[order], shuffled.f107)


def test_both_ends():
    first, end = dates_covered(shipped())
    assert lookup(shipped(), np.array([first], US)).ap.shape == (1, 7)
    for bad in (first - np.timedelta64(1, "h"), end):
        with pytest.raises(InputError, match=r"1 of 1 dates lie outside \(first: index 0"):
            lookup(shipped(), np.array([bad], US))


def test_empty():
    assert lookup(shipped(), np.array([], US)).ap.shape == (0, 7)
