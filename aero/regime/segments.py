"""Cut the flight at its crossings: one list of pieces for every length."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from aero.arrays import Floats
from aero.regime.crossings import Crossings
from aero.regime.tags import regime_index


@dataclass(frozen=True, eq=False)
class Cuts:
    """Segments of all lengths, in order of length, then time.

    Attributes
    ----------
    length : (n,) array of int
        Position in the list of lengths.
    regime : (n,) array of int
        Position in `REGIMES`.
    start, end : (n,) arrays [s]
    first, last : (n,) arrays of int
        Samples inside, `first` to `last - 1`; empty where a segment falls between two samples.
    knudsen_min, knudsen_max : (n,) arrays
        Over the samples inside and the bounds at the cuts.
    """

    length: np.ndarray
    regime: np.ndarray
    start: Floats
    end: Floats
    first: np.ndarray
    last: np.ndarray
    knudsen_min: Floats
    knudsen_max: Floats


def cut_segments(
    time: Floats,
    sampled_path: Floats,
    lengths: Sequence[float],
    bounds: Sequence[float],
    crossings: Crossings,
) -> Cuts:
    """Cut a flight at its crossings.

    Parameters
    ----------
    time, sampled_path : (n,) arrays [s], [m]
        Samples and the mean free path there.
    lengths, bounds : sequences of float
    crossings : Crossings
        As found by `find_crossings` with the same lengths and bounds.

    Returns
    -------
    Cuts
        At least one segment for every length; consecutive ones share their cut, so that integrals over
        them add up to the integral over the flight.
    """
    parts = []
    for i, length in enumerate(lengths):
        mine = crossings.length == i
        cut_time = crossings.time[mine]
        start = np.concatenate([time[:1], cut_time])
        end = np.concatenate([cut_time, time[-1:]])
        first_regime = regime_index(sampled_path[:1] / length, bounds)
        after = crossings.bound[mine] + crossings.rarefying[mine]
        regime = np.concatenate([first_regime, after]).astype(np.int8)
        edge = np.asarray(bounds, dtype=np.float64)[crossings.bound[mine]]
        first = np.searchsorted(time, start, side="left")
        last = np.concatenate([np.searchsorted(time, cut_time, side="left"), [time.size]])
        nan = np.array([np.nan])
        before, after = np.concatenate([nan, edge]), np.concatenate([edge, nan])
        low, high = _within(sampled_path / length, first, last, before, after)
        parts.append((np.full(start.size, i), regime, start, end, first, last, low, high))
    return Cuts(*(np.concatenate(column) for column in zip(*parts, strict=True)))


def extremes(values: Floats, cuts: Cuts, at_start: Floats, at_end: Floats) -> tuple[Floats, Floats]:
    """Return the smallest and the largest value in each segment, over its samples and its two ends.

    Parameters
    ----------
    values : (n,) array
        At the samples.
    cuts : Cuts
    at_start, at_end : (m,) arrays
        At the ends of each segment.
    """
    low, high = np.empty(cuts.start.size), np.empty(cuts.start.size)
    for length in np.unique(cuts.length):
        mine = cuts.length == length
        low[mine], high[mine] = _within(
            values, cuts.first[mine], cuts.last[mine], at_start[mine], at_end[mine]
        )
    return low, high


def _within(
    values: Floats, first: np.ndarray, last: np.ndarray, before: Floats, after: Floats
) -> tuple[Floats, Floats]:
    """Return the smallest and largest of each run of samples and of what stands before and after it."""
    low = np.full(first.size, np.nan)
    high = np.full(first.size, np.nan)
    filled = first < last
    # The runs of the filled segments cover all samples in order, so that reduceat needs their starts only.
    low[filled] = np.fmin.reduceat(values, first[filled])
    high[filled] = np.fmax.reduceat(values, first[filled])
    return np.fmin(np.fmin(before, after), low), np.fmax(np.fmax(before, after), high)
