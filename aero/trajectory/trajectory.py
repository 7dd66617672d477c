"""The state of a flight at every point: what every reader returns and every survey takes."""

from __future__ import annotations

import dataclasses
import html
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, Times, readonly
from aero.trajectory.meanings import MEANINGS, REQUIRED

NO_TIME = "no time column: points are taken one by one, without segments or loads"


@dataclass(frozen=True)
class Skipped:
    """A row that was left out, and why."""

    line: int
    """Line of a text file, or row of a Parquet file; from 1."""
    reason: str


@dataclass(frozen=True, eq=False, kw_only=True)
class Trajectory:
    """A flight: altitude and speed at each point, and what else is known of it.

    Attributes
    ----------
    name : str
    altitude : (n,) array [m]
        Geodetic.
    speed : (n,) array [m/s]
        Relative to the air, which turns with the Earth.
    time : (n,) array [s] or None
        Since `epoch`, strictly increasing. None: single conditions, no flight.
    epoch : numpy.datetime64 or None
        UTC of time 0; without times, UTC of every point.
    latitude, longitude : (n,) array [rad] or None
        Geodetic; longitude as given, -180 to 180 or 0 to 360 deg.
    flight_path_angle, heading : (n,) array [rad] or None
        Of the air-relative velocity: above the horizontal; clockwise from north.
    angle_of_attack, sideslip : (n,) array [rad] or None
    wall_temperature : (n,) array [K] or None
    velocity_frame : str
        The frame the speed was given in, "air" or "inertial".
    extra : mapping of str to (n,) array
        Columns without a meaning here, under their own headers.
    notes : tuple of str
        What a reader should know about how the file was taken.
    skipped : tuple of Skipped
        Rows left out.
    source, digest : str
        File name and SHA-256 of its bytes.

    Raises
    ------
    ValueError
        If a value is not finite or out of bounds, lengths differ, or times do not increase.

    Notes
    -----
    Arrays are read-only.

    Examples
    --------
    >>> flight = Trajectory(name="two points", time=[0, 10], altitude=[120e3, 118e3], speed=[7.5e3, 7.5e3])
    >>> len(flight), flight.utc is None
    (2, True)
    >>> print(flight)
    two points: 2 points, 0 to 10 s, altitude 118 to 120 km, speed 7.5 to 7.5 km/s
    """

    name: str
    altitude: Floats
    speed: Floats
    time: Floats | None = None
    epoch: np.datetime64 | None = None
    latitude: Floats | None = None
    longitude: Floats | None = None
    flight_path_angle: Floats | None = None
    heading: Floats | None = None
    angle_of_attack: Floats | None = None
    sideslip: Floats | None = None
    wall_temperature: Floats | None = None
    velocity_frame: str = "air"
    extra: Mapping[str, NDArray[Any]] = field(default_factory=dict)
    notes: tuple[str, ...] = ()
    skipped: tuple[Skipped, ...] = ()
    source: str = ""
    digest: str = ""

    def __post_init__(self) -> None:
        count = np.size(self.altitude)
        for meaning in MEANINGS.values():
            given = getattr(self, meaning.field)
            if given is None:
                if meaning.name in REQUIRED:
                    raise ValueError(f"{meaning.name} is required")
                continue
            values = readonly(given)
            if values.shape != (count,):
                raise ValueError(f"{meaning.name} has shape {values.shape}, expected ({count},)")
            bad = meaning.outside(values)
            if bad is not None:
                first = int(np.argmax(bad))
                raise ValueError(
                    f"expected {meaning.bounds}; {int(bad.sum())} of {count} values of {meaning.name} "
                    f"are not (first: index {first}, {values[first]:g} in SI units)"
                )
            object.__setattr__(self, meaning.field, values)
        if self.time is not None and not np.all(self.time[1:] > self.time[:-1]):
            raise ValueError("times must increase strictly")
        if self.epoch is not None:
            object.__setattr__(self, "epoch", self.epoch.astype("datetime64[us]"))
        object.__setattr__(self, "extra", {name: _frozen(values) for name, values in self.extra.items()})
        for name, values in self.extra.items():
            if values.shape != (count,):
                raise ValueError(f"column '{name}' has shape {values.shape}, expected ({count},)")

    def __len__(self) -> int:
        """Return the number of points."""
        return int(self.altitude.size)

    @property
    def utc(self) -> Times | None:
        """UTC of every point, to the microsecond, or None without an epoch."""
        if self.epoch is None:
            return None
        if self.time is None:
            return np.full(len(self), self.epoch)
        return self.epoch + np.rint(self.time * 1e6).astype("timedelta64[us]")

    def part(self, rows: slice) -> Trajectory:
        """Return some of the points as a trajectory of its own, sharing memory with this one."""
        cut: dict[str, Any] = {
            meaning.field: None if (values := getattr(self, meaning.field)) is None else values[rows]
            for meaning in MEANINGS.values()
        }
        return dataclasses.replace(
            self, **cut, extra={name: values[rows] for name, values in self.extra.items()}
        )

    def _facts(self) -> list[tuple[str, str]]:
        facts = [("points", f"{len(self)}")]
        if len(self):
            if self.time is not None:
                facts.append(("time", f"{self.time[0]:g} to {self.time[-1]:g} s"))
            low, high = self.altitude.min() / 1e3, self.altitude.max() / 1e3
            facts.append(("altitude", f"{low:.4g} to {high:.4g} km"))
            low, high = self.speed.min() / 1e3, self.speed.max() / 1e3
            facts.append(("speed", f"{low:.4g} to {high:.4g} km/s"))
        if self.epoch is not None:
            facts.append(("epoch", f"{str(self.epoch).removesuffix('.000000')}Z"))
        return facts

    def __str__(self) -> str:
        facts = dict(self._facts())
        parts = [f"{facts.pop('points')} points"]
        if "time" in facts:
            parts.append(facts.pop("time"))
        return f"{self.name}: " + ", ".join(parts + [f"{key} {value}" for key, value in facts.items()])

    def _repr_html_(self) -> str:
        rows = "".join(
            f"<tr><th>{key}</th><td>{html.escape(value)}</td></tr>" for key, value in self._facts()
        )
        return f"<table><caption>{html.escape(self.name)}</caption>{rows}</table>"


def _frozen(values: NDArray[Any]) -> NDArray[Any]:
    view = np.asarray(values).view()
    view.flags.writeable = False
    return view
