"""The flight between its samples: shape-preserving cubics in time.

A shape-preserving cubic puts no hump where the samples have none, so a recorded altitude that climbs
in steps stays monotone between them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from aero.air.cubic import monotone_slopes, stencil_slopes
from aero.air.state import Air, Atmosphere
from aero.arrays import Floats, Times

if TYPE_CHECKING:
    from aero.trajectory import Trajectory


@dataclass(frozen=True, eq=False)
class Cubic:
    """A shape-preserving cubic through samples.

    Attributes
    ----------
    time, values : (n,) arrays, n >= 2

    Notes
    -----
    The slope at a sample depends on its two neighbours alone, so a value costs a stencil of four samples and
    nothing is prepared for the whole flight.
    """

    time: Floats
    values: Floats

    def __call__(self, when: Floats) -> Floats:
        """Return the value at each time between the first and the last sample."""
        i, step, s = self._locate(when)
        rise, a, b = self._shape(i, step)
        return self.values[i] + s * rise + s * (1.0 - s) * ((1.0 - s) * a + s * b)

    def _locate(self, when: Floats) -> tuple[NDArray[np.intp], Floats, Floats]:
        index = np.clip(np.searchsorted(self.time, when, side="right") - 1, 0, self.time.size - 2)
        step = self.time[index + 1] - self.time[index]
        return index, step, (when - self.time[index]) / step

    def _shape(self, i: NDArray[np.intp], step: Floats) -> tuple[Floats, Floats, Floats]:
        """Return the rise over each interval and how far its end slopes lie from the chord."""
        rise = self.values[i + 1] - self.values[i]
        return rise, self._slope(i) * step - rise, rise - self._slope(i + 1) * step

    def _slope(self, i: NDArray[np.intp]) -> Floats:
        """Return the slope at samples, from the stencil around each."""
        last = self.time.size - 1
        if last == 1:
            return np.full(i.shape, (self.values[1] - self.values[0]) / (self.time[1] - self.time[0]))
        middle = np.clip(i, 1, last - 1)
        stencil = middle[..., None] + np.array([-1, 0, 1])
        slopes = stencil_slopes(self.time[stencil], self.values[stencil])
        return np.take_along_axis(slopes, (i - middle + 1)[..., None], axis=-1)[..., 0]

    def running_integral(self) -> Floats:
        """Return the integral from the first sample to each sample."""
        step = np.diff(self.time)
        slopes = monotone_slopes(self.time, self.values)
        pieces = step * (self.values[:-1] + self.values[1:]) / 2.0
        pieces += step * step * (slopes[:-1] - slopes[1:]) / 12.0
        total = np.empty_like(self.values)
        total[0] = 0.0
        np.cumsum(pieces, out=total[1:])
        return total

    def integral(self, when: Floats, running: Floats) -> Floats:
        """Return the integral from the first sample to each time, given `running_integral()`."""
        i, step, s = self._locate(when)
        rise, a, b = self._shape(i, step)
        # Integrals over 0..s of s, s(1-s)^2 and s^2(1-s).
        part = self.values[i] * s + rise * s * s / 2.0
        part += a * s * s * (0.5 - 2.0 * s / 3.0 + s * s / 4.0) + b * s * s * s * (1.0 / 3.0 - s / 4.0)
        return running[i] + step * part


class Place(NamedTuple):
    """Latitude and longitude [deg] and UTC of points, None where unknown."""

    latitude_deg: Floats | None
    longitude_deg: Floats | None
    utc: Times | None

    def air(self, atmosphere: Atmosphere, altitude: Floats) -> Air:
        """Return the air at altitudes [m] above the place."""
        return atmosphere.at(
            altitude, latitude_deg=self.latitude_deg, longitude_deg=self.longitude_deg, utc=self.utc
        )


@dataclass(frozen=True, eq=False)
class Track:
    """Where the vehicle is at any time between the first and last sample.

    Attributes
    ----------
    altitude, speed : Cubic
        [m], [m/s]
    latitude, longitude : Cubic or None
        [rad]; longitude is continuous, not wrapped.
    epoch : np.datetime64 or None
        UTC of time 0.
    """

    altitude: Cubic
    speed: Cubic
    latitude: Cubic | None
    longitude: Cubic | None
    epoch: np.datetime64 | None

    @classmethod
    def along(cls, trajectory: Trajectory) -> Track:
        """Return the track of a trajectory that has times."""
        time = trajectory.time
        if time is None:
            raise ValueError("a track needs a trajectory with times")
        latitude, longitude = trajectory.latitude, trajectory.longitude
        return cls(
            Cubic(time, trajectory.altitude),
            Cubic(time, trajectory.speed),
            None if latitude is None else Cubic(time, latitude),
            None if longitude is None else Cubic(time, np.unwrap(longitude)),
            trajectory.epoch,
        )

    def place(self, when: Floats) -> Place:
        """Return the place and date at each time."""
        return Place(
            None if self.latitude is None else np.degrees(self.latitude(when)),
            None if self.longitude is None else np.degrees(self.longitude(when)),
            None if self.epoch is None else clock(self.epoch, when),
        )


def clock(epoch: np.datetime64, seconds: Floats) -> Times:
    """Return the UTC of each time in microseconds.

    Examples
    --------
    >>> clock(np.datetime64("2026-03-01"), np.array([1.5]))
    array(['2026-03-01T00:00:01.500000'], dtype='datetime64[us]')
    """
    when: Times = epoch.astype("datetime64[us]") + np.rint(seconds * 1e6).astype("timedelta64[us]")
    return when
