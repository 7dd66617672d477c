"""Where a Knudsen number crosses a bound: roots along the track, not the nearest sample."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from aero.air.state import Air, Atmosphere
from aero.arrays import Floats, Times
from aero.gas import mean_free_path
from aero.regime.track import Track

TIME_TOLERANCE = 1e-7  # s: under a millimetre at orbital speed, far inside the promised metre
ALTITUDE_TOLERANCE = 0.1  # m, for the vertical search of the uncertainty
SEARCH_HEIGHT = 200e3  # m, how far above and below a crossing the uncertainty is searched


@dataclass(frozen=True, eq=False)
class Crossings:
    """Crossings of all lengths, in order of length, then time.

    Attributes
    ----------
    length : (n,) array of int
        Position in the list of lengths.
    bound : (n,) array of int
        Position in the bounds.
    rarefying : (n,) array of bool
        True where the flow becomes more rarefied.
    time, altitude, speed : (n,) arrays [s], [m], [m/s]
    altitude_low, altitude_high : (n,) arrays [m]
        95 % range over density and cross-sections; NaN where the atmosphere's range ends first.
    """

    length: np.ndarray
    bound: np.ndarray
    rarefying: np.ndarray
    time: Floats
    altitude: Floats
    speed: Floats
    altitude_low: Floats
    altitude_high: Floats


def find_crossings(
    track: Track,
    atmosphere: Atmosphere,
    free_path: str,
    sampled_path: Floats,
    lengths: Sequence[float],
    bounds: Sequence[float],
    log_uncertainty: Callable[[Air, Times | None], Floats],
    altitude_range: tuple[float, float],
) -> Crossings:
    """Find every crossing of every bound by every length's Knudsen number.

    Parameters
    ----------
    track : Track
    atmosphere : Atmosphere
    free_path : str
        Definition of the mean free path, a key of `aero.gas.FREE_PATHS`.
    sampled_path : (n,) array [m]
        Mean free path at the samples, the same definition.
    lengths : sequence of float [m]
    bounds : sequence of three floats
    log_uncertainty : callable
        (Air, UTC or None) -> 1-sigma of the logarithm of the mean free path at each point.
    altitude_range : (float, float) [m]
        Range the atmosphere answers in.

    Returns
    -------
    Crossings

    Notes
    -----
    Bisection on the side of the bound, all crossings at once. It needs no continuity: where the model
    leaves a step across the bound it stops at the step.
    """
    events = _brackets(sampled_path, lengths, bounds)
    if events.size == 0:
        none = np.empty(0)
        return Crossings(events[:, 0], events[:, 1], none.astype(bool), none, none, none, none, none)
    length, bound, start = events.T
    target = np.asarray(lengths)[length] * np.asarray(bounds)[bound]
    rarefying = sampled_path[start + 1] >= target

    def path(when: Floats) -> Floats:
        return mean_free_path(track.place(when).air(atmosphere, track.altitude(when)), free_path)

    time = _bisect(path, track.altitude.time[start], track.altitude.time[start + 1], target, ~rarefying)
    altitude = track.altitude(time)
    place = track.place(time)
    spread = 1.96 * log_uncertainty(place.air(atmosphere, altitude), place.utc)

    def vertical(height: Floats) -> Floats:
        return mean_free_path(place.air(atmosphere, height), free_path)

    low = _shift(vertical, altitude, target * np.exp(-spread), altitude_range)
    high = _shift(vertical, altitude, target * np.exp(spread), altitude_range)
    order = np.lexsort((np.where(rarefying, bound, -bound), time, length))
    return Crossings(
        *(a[order] for a in (length, bound, rarefying, time, altitude, track.speed(time), low, high))
    )


def _brackets(sampled_path: Floats, lengths: Sequence[float], bounds: Sequence[float]) -> np.ndarray:
    """Return rows of (length, bound, sample before the change of side)."""
    rows = []
    for i, length in enumerate(lengths):
        for j, bound in enumerate(bounds):
            rarefied = sampled_path >= length * bound
            where = np.flatnonzero(rarefied[1:] != rarefied[:-1])
            if where.size:
                rows.append(np.column_stack([np.full(where.size, i), np.full(where.size, j), where]))
    return np.concatenate(rows) if rows else np.empty((0, 3), dtype=np.int64)


def _bisect(
    path: Callable[[Floats], Floats], left: Floats, right: Floats, target: Floats, rarefied_left: np.ndarray
) -> Floats:
    """Return the times at which `path` passes `target`, given its side at the left end."""
    left, right = left.copy(), right.copy()
    widest = float(np.max(right - left))
    for _ in range(max(1, int(np.ceil(np.log2(widest / TIME_TOLERANCE))))):
        middle = 0.5 * (left + right)
        same = (path(middle) >= target) == rarefied_left
        left = np.where(same, middle, left)
        right = np.where(same, right, middle)
    return 0.5 * (left + right)


def _shift(
    vertical: Callable[[Floats], Floats], altitude: Floats, target: Floats, limits: tuple[float, float]
) -> Floats:
    """Return the altitude above the same place at which the path equals `target`, NaN beyond reach."""
    low = np.maximum(altitude - SEARCH_HEIGHT, limits[0])
    high = np.minimum(altitude + SEARCH_HEIGHT, limits[1])
    reachable = (vertical(low) <= target) & (vertical(high) >= target)
    for _ in range(int(np.ceil(np.log2(2.0 * SEARCH_HEIGHT / ALTITUDE_TOLERANCE)))):
        middle = 0.5 * (low + high)
        above = vertical(middle) >= target
        high = np.where(above, middle, high)
        low = np.where(above, low, middle)
    return np.where(reachable, 0.5 * (low + high), np.nan)
