"""A vehicle's coefficients at every combination of altitude, speed and attitude, and how well they interpolate."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from aero.air.state import Air, Atmosphere
from aero.arrays import Floats
from aero.body import Vehicle
from aero.errors import InputError
from aero.survey.attitude_columns import ATTITUDE_COLUMNS
from aero.survey.chain import conditions
from aero.survey.inputs import Inputs, air_at
from aero.survey.interpolate import SCALES, centres, face_pairs, mesh, multilinear, scale_of
from aero.survey.place import check_altitudes, check_angle
from aero.survey.settings import Settings

MOST_ROWS = 1_000_000
BLOCK = 16_384  # rows computed at a time
FASTEST = 1e5  # m/s
ROUNDING = 1e-9  # coefficient below which there is none
Progress = Callable[[int], None]


@dataclass(frozen=True)
class Axis:
    """One axis of a grid: its name inside, its column, its option, and what turns SI into the column's unit."""

    name: str
    column: str
    option: str
    per_si: float


AXES = (
    Axis("altitude", "altitude_m", "--altitude", 1.0),
    Axis("speed", "air_speed_m_s", "--speed", 1.0),
    Axis("angle_of_attack", "angle_of_attack_deg", "--angle-of-attack", 180.0 / math.pi),
    Axis("sideslip", "sideslip_deg", "--sideslip", 180.0 / math.pi),
)
"""The axes of a database, the slowest first."""

COLUMNS = (
    "density_kg_m3",
    "mach",
    "knudsen.reference",
    "wall_temperature_K",
    "drag_coefficient",
    "drag_coefficient_free_molecular",
    "drag_coefficient_continuum",
    "drag_bridge",
    "drag_coefficient_low",
    "drag_coefficient_high",
    "lift_coefficient",
    *ATTITUDE_COLUMNS,
    "heat_flux_W_m2",
    "heat_flux_free_molecular_W_m2",
    "heat_flux_continuum_W_m2",
    "heat_flux_radiative_W_m2",
    "heat_flux_low_W_m2",
    "heat_flux_high_W_m2",
)
"""What a database holds of each combination, as far as the vehicle has an answer."""


@dataclass(frozen=True, eq=False)
class Grid:
    """What is computed, and in which air.

    Attributes
    ----------
    vehicle : Vehicle
    axes : sequence of (n_i,) arrays
        In the order of `AXES`, SI.
    atmosphere : Atmosphere
    settings : Settings
    latitude, longitude : float or None [rad]
    date : datetime64 or None
        UTC.
    """

    vehicle: Vehicle
    axes: Sequence[Floats]
    atmosphere: Atmosphere
    settings: Settings
    latitude: float | None = None
    longitude: float | None = None
    date: np.datetime64 | None = None

    @property
    def shape(self) -> tuple[int, ...]:
        """Nodes of each axis."""
        return tuple(nodes.size for nodes in self.axes)

    def check(self) -> None:
        """Raise an InputError where an axis or the place cannot be."""
        check_rows(self.shape)
        for axis, nodes in zip(AXES, self.axes, strict=True):
            if not bool(np.isfinite(nodes).all()):
                raise InputError("holds a value that is no number", source=axis.option)
            if bool((np.diff(nodes) <= 0.0).any()):
                raise InputError(
                    "values do not rise from one to the next",
                    source=axis.option,
                    remedy="list each value once, the smallest first",
                )
        altitude, speed, *angles = self.axes
        check_altitudes(self.atmosphere, altitude, source="--altitude")
        if not (speed[0] > 0.0 and speed[-1] < FASTEST):
            wrong = speed[0] if speed[0] <= 0.0 else speed[-1]
            raise InputError(
                f"speed is {wrong:g} m/s, expected above 0 and below 100 km/s; at rest there are no coefficients",
                source="--speed",
            )
        for axis, limit, nodes in zip(AXES[2:], (180.0, 90.0), angles, strict=True):
            largest = float(np.degrees(nodes[np.argmax(np.abs(nodes))]))
            if abs(largest) > limit + 1e-9:
                raise InputError(
                    f"{largest:g} deg is out of reach, expected -{limit:g} to {limit:g} deg",
                    source=axis.option,
                )
        if self.vehicle.tumbling and max(nodes.size for nodes in angles) > 1:
            raise InputError(
                "the vehicle tumbles, so that its coefficients are averages over all directions",
                source="--angle-of-attack, --sideslip",
                remedy="give one value, or take tumbling out of the vehicle file",
            )
        check_angle("latitude", self.latitude)
        check_angle("longitude", self.longitude)

    def columns(
        self, axes: Sequence[Floats] | None = None, progress: Progress | None = None
    ) -> dict[str, Floats]:
        """Return the columns of `COLUMNS` that have an answer, each of the grid's shape.

        Parameters
        ----------
        axes : sequence of (n_i,) arrays, optional
            Other nodes in place of the grid's own.
        """
        chosen = self.axes if axes is None else axes
        shape = tuple(nodes.size for nodes in chosen)
        count = math.prod(shape)
        profile = self._air(chosen[0])
        below = count // shape[0]  # rows of one altitude
        found: dict[str, Floats] = {}
        for start in range(0, count, BLOCK):
            rows = slice(start, min(start + BLOCK, count))
            air = _rows_of(profile, np.arange(rows.start, rows.stop) // below)
            part = self.at(mesh(chosen, rows), air)
            if not found:
                found = {name: np.empty(count) for name in COLUMNS if name in part}
            for name, column in found.items():
                column[rows] = part[name]
            if progress:
                progress(rows.stop - rows.start)
        return {name: column.reshape(shape) for name, column in found.items()}

    def at(self, where: Sequence[Floats], air: Air | None = None) -> dict[str, np.ndarray]:
        """Return all computed columns at points (n,) given axis by axis."""
        altitude, speed, angle, sideslip = where
        inputs = dataclasses.replace(
            self._inputs(altitude), speed=speed, angle_of_attack=angle, sideslip=sideslip
        )
        lengths = {"reference": self.vehicle.reference_length}
        return conditions(inputs, self.atmosphere, self.vehicle, lengths, self.settings, air=air)

    def _inputs(self, altitude: Floats) -> Inputs:
        def same(value: float | None) -> Floats | None:
            return None if value is None else np.full(altitude.shape, value)

        utc = None if self.date is None else np.full(altitude.shape, self.date)
        return Inputs(
            altitude=altitude,
            speed=np.zeros_like(altitude),
            latitude=same(self.latitude),
            longitude=same(self.longitude),
            utc=utc,
        )

    def _air(self, altitude: Floats) -> Air:
        """Return the air at each altitude, asked for once and not for every attitude anew."""
        return air_at(self._inputs(altitude), self.atmosphere)


def check_rows(shape: Sequence[int]) -> None:
    """Raise an InputError where a grid would be empty or too large."""
    count = math.prod(shape)
    sizes = " x ".join(str(size) for size in shape)
    if count == 0:
        raise InputError(
            "the grid is empty", source="aero database", remedy="give at least one value an axis"
        )
    if count > MOST_ROWS:
        raise InputError(
            f"{sizes} combinations make {count} rows, expected at most {MOST_ROWS}",
            source="aero database",
            remedy="take larger steps or shorter ranges, or make several databases",
        )


def _rows_of(air: Air, index: np.ndarray) -> Air:
    names = ("altitude", "temperature", "pressure", "density", "number_density")
    parts = {name: getattr(air, name)[index] for name in names}
    return Air(air.model, **parts, species=np.ascontiguousarray(air.species.T)[:, index].T)


def interpolation_errors(
    grid: Grid, columns: Mapping[str, Floats], progress: Progress | None = None
) -> dict[str, dict[str, Any]]:
    """Return how far interpolation lies off at the middle of every cell, column by column.

    Returns
    -------
    dict of str to dict
        Keyed by column: `scale`, the key of `SCALES` it is interpolated in; `relative_to`, "value" or, where the
        column changes its sign, "largest"; `largest_error`, relative, None where the grid has no cell or no
        answer; `at`, the place of it in the units of the axes' columns; `error_of_95_percent`, which 95 % of the
        cells keep below.

    Notes
    -----
    At the middle of a cell the error of multilinear interpolation in a smooth quantity is at its largest.
    """
    scales = {name: scale_of(name, values) for name, values in columns.items()}
    found: dict[str, dict[str, Any]] = {
        name: {"scale": scale, "relative_to": _relation(columns[name]), "largest_error": None}
        for name, scale in scales.items()
    }
    middles = centres(grid.axes)
    if max(grid.shape) == 1:
        return found
    exact = grid.columns(middles, progress)
    guess = interpolated(grid.axes, columns, scales, np.meshgrid(*middles, indexing="ij", sparse=True))
    for name, entry in found.items():
        size = np.abs(exact[name]) if entry["relative_to"] == "value" else np.nanmax(np.abs(columns[name]))
        with np.errstate(divide="ignore", invalid="ignore"):
            error = np.abs(guess[name] - exact[name]) / size
        if name.endswith("_coefficient") and not np.nanmax(np.abs(columns[name]), initial=0.0) > ROUNDING:
            continue  # a force or moment that symmetry forbids
        if bool(np.isfinite(error).any()):
            cell = np.unravel_index(int(np.nanargmax(np.where(np.isfinite(error), error, -1.0))), error.shape)
            entry["largest_error"] = float(error[cell])
            entry["error_of_95_percent"] = float(np.percentile(error[np.isfinite(error)], 95.0))
            entry["at"] = _place(middles, cell)
    return found


def _relation(values: Floats) -> str:
    known = values[np.isfinite(values)]
    if known.size == 0 or bool((known > 0.0).all()) or bool((known < 0.0).all()):
        return "value"
    return "largest" if bool((known != 0.0).any()) else "value"


def _place(middles: Sequence[Floats], cell: Sequence[Any]) -> dict[str, float]:
    return {
        axis.column: round(float(nodes[i]) * axis.per_si, 9)
        for axis, nodes, i in zip(AXES, middles, cell, strict=True)
    }


def shares(grid: Grid, at: Mapping[str, float], name: str = "drag_coefficient") -> dict[str, float]:
    """Return the error that each axis alone makes in the cell whose middle is given, relative to the value.

    Returns
    -------
    dict of str to float
        Keyed by the axis' column; the axis to refine is the one with the largest.
    """
    middles = centres(grid.axes)
    wanted = [at[axis.column] / axis.per_si for axis in AXES]
    cell = [int(np.abs(nodes - value).argmin()) for nodes, value in zip(middles, wanted, strict=True)]
    pairs = face_pairs(grid.axes, cell)
    places = np.vstack([[nodes[i] for nodes, i in zip(middles, cell, strict=True)], *(p for _, p in pairs)])
    values = grid.at(list(places.T))[name]
    middle, faces = values[0], values[1:].reshape(-1, 2)
    errors = np.abs(faces.mean(axis=1) - middle) / abs(middle)
    return {AXES[number].column: float(error) for (number, _), error in zip(pairs, errors, strict=True)}


def interpolated(
    axes: Sequence[Floats],
    columns: Mapping[str, Floats],
    scales: Mapping[str, str],
    where: Sequence[np.ndarray],
) -> dict[str, Floats]:
    """Return columns between the nodes, each interpolated in its own scale."""
    speeds = axes[1].reshape(1, -1, 1, 1)
    stacked = np.stack([SCALES[scales[name]].to(values, speeds) for name, values in columns.items()])
    found = multilinear(axes, stacked, where)
    speed = np.broadcast_to(where[1], found.shape[1:])
    return {name: SCALES[scales[name]].back(found[i], speed) for i, name in enumerate(columns)}
