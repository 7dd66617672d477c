"""Marks along the flight on the map: crossings, both ends, round times, the direction of flight."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes

from aero.arrays import Floats
from aero.report import palette
from aero.report.bands import Band
from aero.report.labels import SIDES, Labels, dense
from aero.report.names import Table, column, has_numbers, row_count, texts
from aero.report.numbers import format_number
from aero.report.scales import round_step, time_unit
from aero.report.style import SMALL

BLACK, WHITE = "#14100c", "#fdfdfb"  # of the flight: neither changes in the dark
_DIAGONAL = ("above-right", "above-left", "below-right", "below-left")
_HEADS = (0.3, 0.7)  # of the flight's length on the map: where its direction is shown
_LEAST_HEADS = 1.0  # in: a shorter flight shows its direction by its ends


class Marks:
    """Marks, each with its label in the colour that its band asks for.

    Parameters
    ----------
    axes : Axes
        Speed in km/s across, altitude in km upward; limits are set.
    labels : Labels
        Knows what is to be kept free; takes what is written here.
    regimes : sequence of Band
    """

    def __init__(self, axes: Axes, labels: Labels, regimes: Sequence[Band]) -> None:
        self.axes, self.labels, self.regimes = axes, labels, regimes
        self._taken = np.empty((0, 2))  # where marks stand [in]

    def colour(self, height_km: float) -> str:
        """Return the text colour at an altitude."""
        for band in self.regimes:
            if band.bottom <= height_km * 1e3 <= band.top:
                return palette.REGIME_TEXT[band.regime]
        return palette.INK

    def put(self, x: float, y: float, text: str, size: float, sides: Sequence[str], gap: float) -> bool:
        """Write a label on the first free side, near or a little farther off."""
        for reach in (gap, 2.0 * gap):
            written = self.labels.put(x, y, text, colour=palette.INK, size=size, sides=sides, gap=reach)
            if written is not None:
                written.set_color(self.colour(self.labels.last_height()))
                return True
        return False

    def _mark(self, x: Floats, y: Floats, marker: object, size: float, gid: str, **look: object) -> None:
        style = {"color": BLACK, "mec": WHITE, "mew": 0.8, "ls": "none", "zorder": 6} | look
        self.axes.plot(x, y, marker=marker, ms=size, gid=gid, **style)  # type: ignore[arg-type]
        self._taken = np.concatenate([self._taken, self.labels.inches(x, y)])

    def crossings(self, crossings: Table | None, length_name: str) -> None:
        """Mark where the flight meets a bound, with the altitude beside it."""
        if crossings is None or row_count(crossings) == 0:
            return
        mine = np.array(texts(crossings, "length")) == length_name
        heights = column(crossings, "altitude_m")[mine] / 1e3
        speeds = column(crossings, "air_speed_m_s")[mine] / 1e3
        self._mark(speeds, heights, "o", 4.6, "crossings", mfc="none", mec=BLACK, mew=1.0)
        self._mark(speeds, heights, "o", 6.4, "crossings-casing", mfc="none", mew=0.9, zorder=5.9)
        for x, y in zip(speeds, heights, strict=True):
            self.put(float(x), float(y), f"{format_number(y)} km", SMALL, _DIAGONAL, 0.06)

    def ends(self, speed: Floats, altitude: Floats) -> None:
        """Mark the first point with a square and the last with an arrow head along the flight."""
        good = np.flatnonzero(np.isfinite(altitude) & np.isfinite(speed))
        if good.size == 0:
            return
        x, y = speed[good], altitude[good]
        path = self.labels.inches(x, y)
        together = good.size > 1 and np.hypot(*(path[-1] - path[0])) < 0.15
        self._mark(x[:1], y[:1], "s", 4.2, "start")
        self.put(float(x[0]), float(y[0]), "start, end" if together else "start", SMALL, tuple(SIDES), 0.08)
        away = np.flatnonzero(np.hypot(*(path - path[-1]).T) > 0.05)  # a last wiggle has no direction
        if away.size:
            angle = _angle(path[-1] - path[away[-1]])
            self._mark(x[-1:], y[-1:], (3, 0, angle), 6.0, "end")
            if not together:
                self.put(float(x[-1]), float(y[-1]), "end", SMALL, tuple(SIDES), 0.09)

    def direction(self, speed: Floats, altitude: Floats) -> None:
        """Lay arrow heads on the flight, clear of other marks."""
        good = np.isfinite(altitude) & np.isfinite(speed)
        path = self.labels.inches(speed[good], altitude[good])
        if len(path) < 2:
            return
        path = dense(path, 0.02)
        if 0.02 * len(path) < _LEAST_HEADS:
            return
        for share in _HEADS:
            # from the wanted place outwards, the first that is 0.13 in from every mark
            order = np.argsort(np.abs(np.arange(len(path)) - share * len(path)), kind="stable")
            for k in order[: len(path) // 4].tolist():
                a, b = max(k - 4, 0), min(k + 4, len(path) - 1)
                clear = np.hypot(*(self._taken - path[k]).T).min(initial=np.inf)
                if clear > 0.13 and np.hypot(*(path[b] - path[a])) > 0.1:
                    (at,) = self.labels.from_inches(path[k : k + 1])
                    self._mark(at[:1], at[1:], (3, 0, _angle(path[b] - path[a])), 5.0, "direction", mew=0.7)
                    break

    def time(self, points: Table, altitude: Floats, speed: Floats) -> None:
        """Mark round times along the flight, those that stand clear of the one before."""
        if not has_numbers(points, "time_s"):
            return
        time = column(points, "time_s")
        good = np.isfinite(time) & np.isfinite(altitude) & np.isfinite(speed)
        time, altitude, speed = time[good], altitude[good], speed[good]
        if time.size < 2 or not time[-1] > time[0]:
            return
        unit, seconds = time_unit(float(time[-1] - time[0]))
        step = round_step(float(time[-1] - time[0]) / seconds, 10)
        ticks = np.arange(np.ceil(time[0] / seconds / step), np.floor(time[-1] / seconds / step) + 1) * step
        x = np.interp(ticks * seconds, time, speed) / 1e3
        y = np.interp(ticks * seconds, time, altitude) / 1e3
        places = self.labels.inches(x, y)
        keep = _apart(places, 0.12)
        first = self.labels.inches(speed[:1] / 1e3, altitude[:1] / 1e3)
        keep &= np.hypot(*(places - first).T) > 0.08  # the start has its own mark
        self._mark(x[keep], y[keep], "o", 2.6, "time-ticks", color=WHITE, mec=BLACK, mew=0.6, zorder=5)
        for k in np.flatnonzero(keep):
            text = f"{format_number(ticks[k], trim=True)} {unit}"
            sides = ("right", "left", "above-left", "below-right", "below-left", "above-right")
            self.put(float(x[k]), float(y[k]), text, SMALL - 0.5, sides, 0.06)


def _angle(way: Floats) -> float:
    """Return the turn of a triangle marker, which points up by itself, for a direction [deg]."""
    return float(np.degrees(np.arctan2(way[1], way[0]))) - 90.0


def _apart(places: Floats, gap: float) -> np.ndarray:
    """Return which of the places stand at least `gap` inches from the last one kept."""
    keep = np.zeros(len(places), dtype=bool)
    last = np.full(2, np.inf)
    for k, place in enumerate(places):
        if not np.hypot(*(place - last)) < gap:
            keep[k], last = True, place
    return keep
