"""Solar and geomagnetic activity: levels, and the indices that MSIS wants at a date."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from aero.air.space_weather import History
from aero.arrays import Floats, Times, floats
from aero.errors import InputError

OBSERVED = "observed"
FORECAST_AP = 15.0  # the forecast gives no Ap: the moderate level's
BRIDGE_DAYS = 27  # one solar rotation: mean of the last observed days, where the forecast's curve begins


@dataclass(frozen=True)
class Level:
    """Constant indices: F10.7 of the day before, its 81-day mean [sfu], and daily Ap."""

    f107: float
    f107a: float
    ap: float

    def __str__(self) -> str:
        return f"F10.7 {self.f107:g}, 81-day mean {self.f107a:g}, Ap {self.ap:g}"


LEVELS: dict[str, Level] = {  # long-term levels of [ISO14222] and [ECSS-E-ST-10-04C], annex, as quoted
    "low": Level(65.0, 65.0, 0.0),
    "moderate": Level(140.0, 140.0, 15.0),
    "high": Level(250.0, 250.0, 45.0),
}
ACTIVITIES = (*LEVELS, OBSERVED)


@dataclass(frozen=True, eq=False)
class Indices:
    """What MSIS is driven with, one row a point.

    Attributes
    ----------
    f107 : (n,) array [sfu]
        F10.7 of the day before.
    f107a : (n,) array [sfu]
        81-day mean centred on the day.
    ap : (n, 7) array
        Daily Ap; 3-hourly ap now, 3, 6 and 9 hours before; mean of the eight from 12 to 33 hours before and
        of the eight from 36 to 57 hours before.
    storm : (n,) array of bool
        Whether the 3-hourly values count (storm-time mode), else the daily Ap alone.
    forecast : (n,) array of bool
        Whether the date lies after the end of the observed indices.
    """

    f107: Floats
    f107a: Floats
    ap: Floats
    storm: NDArray[np.bool_]
    forecast: NDArray[np.bool_]


def constant(count: int, f107: float, f107a: float, ap: float | tuple[float, ...]) -> Indices:
    """Return the same indices at every point; seven values of `ap` switch on the storm-time mode.

    Examples
    --------
    >>> indices = constant(2, 140.0, 140.0, 15.0)
    >>> indices.ap.shape, indices.storm.any()
    ((2, 7), np.False_)
    """
    row = floats(ap) if isinstance(ap, tuple) else np.full(7, float(ap))
    return Indices(
        np.broadcast_to(floats(f107), count),
        np.broadcast_to(floats(f107a), count),
        np.broadcast_to(row, (count, 7)),
        np.broadcast_to(np.bool_(isinstance(ap, tuple)), count),
        np.broadcast_to(np.bool_(False), count),
    )


def lookup(history: History, utc: Times) -> Indices:
    """Return the indices at each date, from observed days and, after their end, from the forecast.

    Parameters
    ----------
    history : History
        Observed days, with or without a forecast.
    utc : (n,) array of datetime64
        Dates.

    Returns
    -------
    Indices
        Observed dates in storm-time mode; forecast dates with Ap 15 in daily mode.

    Raises
    ------
    InputError
        If a date lies outside; the first date needs 57 hours of ap before it.

    Notes
    -----
    Values are steps, as the models were fitted: F10.7 changes at midnight, ap every 3 hours. The monthly
    forecast stands at mid-month with straight lines between; the line begins at the last observed day with
    the mean F10.7 of the last 27 days and the last 81-day mean (judgement).

    Examples
    --------
    >>> from aero.air.space_weather import shipped
    >>> indices = lookup(shipped(), np.array(["2003-10-30T12:00"], dtype="datetime64[us]"))
    >>> indices.f107, indices.f107a, indices.ap.round(1)
    (array([291.7]), array([146.5]), array([[191. ,  48. ,  39. ,  56. , 154. , 236.5,  27.9]]))
    """
    hours = utc.astype("datetime64[h]").astype(np.int64)
    day = np.floor_divide(hours, 24)
    _check(history, utc, hours, day)
    forecast = day > history.last_day
    if not forecast.any():
        return _observed(history, hours, day, forecast)
    known = np.flatnonzero(~forecast)
    later = np.flatnonzero(forecast)
    f107, f107a = np.empty(day.size), np.empty(day.size)
    ap = np.full((day.size, 7), FORECAST_AP)
    if known.size:
        part = _observed(history, hours[known], day[known], forecast[known])
        f107[known], f107a[known], ap[known] = part.f107, part.f107a, part.ap
    f107[later], f107a[later] = _expected(history, utc[later])
    return Indices(f107, f107a, ap, ~forecast, forecast)


def _observed(
    history: History, hours: NDArray[np.int64], day: NDArray[np.int64], none: NDArray[np.bool_]
) -> Indices:
    i = day - history.first_day
    k = np.floor_divide(hours, 3) - 8 * history.first_day
    total = history.ap3_sum
    ap = np.empty((day.size, 7), order="F")
    ap[:, 0] = history.ap[i]
    for back in range(4):
        ap[:, 1 + back] = history.ap3[k - back]
    ap[:, 5] = (total[k - 3] - total[k - 11]) / 8.0  # k - 11 ... k - 4
    ap[:, 6] = (total[k - 11] - total[k - 19]) / 8.0  # k - 19 ... k - 12
    return Indices(history.f107[i - 1], history.f107a[i], ap, ~none, none)


def _expected(history: History, utc: Times) -> tuple[Floats, Floats]:
    forecast = history.forecast
    assert forecast is not None  # `_check` has let no such date through
    at = utc.astype("datetime64[s]").astype(np.float64) / 86400.0
    later = forecast.day > history.last_day
    knots = np.concatenate([[history.last_day], forecast.day[later]])
    start = (float(history.f107[-BRIDGE_DAYS:].mean()), float(history.f107a[-1]))
    f107, f107a = (
        np.interp(at, knots, np.concatenate([[first], values[later]]))
        for first, values in zip(start, (forecast.f107, forecast.f107a), strict=True)
    )
    return f107, f107a


def dates_covered(history: History) -> tuple[np.datetime64, np.datetime64]:
    """Return the first moment with 57 hours of ap before it, and the last day's end (exclusive)."""
    last = history.forecast.last_day if history.forecast else history.last_day
    first = np.datetime64(history.first_day * 24 + 57, "h")
    return first, np.datetime64(last + 1, "D").astype("datetime64[h]")


def _check(history: History, utc: Times, hours: NDArray[np.int64], day: NDArray[np.int64]) -> None:
    first, end = dates_covered(history)
    bad = np.flatnonzero((hours < first.astype(np.int64)) | (hours >= end.astype(np.int64)))
    if bad.size:
        raise InputError(
            f"indices are known from {first}h to {end.astype('datetime64[D]') - 1} UTC; {bad.size} of "
            f"{day.size} dates lie outside (first: index {bad[0]}, {utc[bad[0]].astype('datetime64[s]')})",
            source=history.source,
            remedy="choose other dates, or constant indices (low, moderate, high; or F10.7, F10.7a and Ap)",
        )
