"""One pass over a trajectory: points in blocks, then crossings, segments and loads."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np
import pandas as pd

from aero.air import Msis, StandardAtmosphere1976
from aero.air.state import Air, Atmosphere
from aero.arrays import Floats, Times
from aero.body import Vehicle
from aero.errors import InputError
from aero.gas import free_path_uncertainty
from aero.regime import Cuts, Track, find_crossings
from aero.survey.chain import conditions
from aero.survey.columns import point_columns
from aero.survey.inputs import Inputs, air_at, msis_question
from aero.survey.loads import Load
from aero.survey.notes import survey_notes
from aero.survey.result_tables import (
    crossing_table,
    no_crossings,
    no_segments,
    points_table,
    segment_table,
)
from aero.survey.settings import Settings
from aero.trajectory import Trajectory

if TYPE_CHECKING:
    from pathlib import Path

BLOCK = 16_384  # rows a pass: the working arrays stay in the second-level cache
Progress = Callable[[int], None]


@dataclass(frozen=True, eq=False)
class Survey:
    """What a survey found.

    Attributes
    ----------
    trajectory, vehicle, atmosphere, settings
        What it was made from.
    points, segments, crossings : DataFrame
        Columns as docs/formats.md lists; units are the suffixes of the names.
    notes : tuple of str
        What a reader should know about the input and the models.
    """

    trajectory: Trajectory
    vehicle: Vehicle
    atmosphere: Atmosphere
    settings: Settings
    points: pd.DataFrame
    segments: pd.DataFrame
    crossings: pd.DataFrame
    notes: tuple[str, ...] = field(default=())

    @property
    def lengths(self) -> dict[str, float]:
        """Every surveyed length [m], `reference` first."""
        return named_lengths(self.vehicle)

    @property
    def summary(self) -> str:
        """A sentence anyone can repeat."""
        from aero.survey.summary import summary_sentence

        return summary_sentence(self.vehicle, self.lengths, self.points, self.segments, self.crossings)

    def write(
        self,
        out: str | Path,
        *,
        replace: bool = False,
        tables: Sequence[str] = ("csv", "parquet"),
        figures: str = "all",
        progress: Callable[[str, float], None] | None = None,
    ) -> list[str]:
        """Write tables, figures and the report into a folder, whole or not at all.

        Returns
        -------
        list of str
            The files written, relative to the folder.
        """
        from aero.survey.write import write_survey

        return write_survey(self, out, replace=replace, tables=tables, figures=figures, progress=progress)

    def __str__(self) -> str:
        return f"Survey of {self.trajectory.name} with {self.vehicle.name}: {len(self.points)} points\n{self.summary}"


def named_lengths(vehicle: Vehicle) -> dict[str, float]:
    """Return every length of a vehicle [m], `reference` first."""
    return {"reference": vehicle.reference_length, **vehicle.lengths}


def default_atmosphere(trajectory: Trajectory) -> Atmosphere:
    """Return NRLMSISE-00 at moderate activity where date and place are known, else the 1976 standard."""
    placed = trajectory.latitude is not None and trajectory.longitude is not None
    return (
        Msis("nrlmsise-00", activity="moderate")
        if placed and trajectory.utc is not None
        else (StandardAtmosphere1976())
    )


def survey(
    trajectory: Trajectory,
    vehicle: Vehicle,
    *,
    atmosphere: Atmosphere | None = None,
    settings: Settings | None = None,
    progress: Progress | None = None,
) -> Survey:
    """Survey a flight: air, Knudsen numbers, regimes, drag and heating at every point, and where they change.

    Parameters
    ----------
    trajectory : Trajectory
    vehicle : Vehicle
    atmosphere : Atmosphere, optional
        Default: NRLMSISE-00 at moderate activity where date and place are known, else the 1976 standard.
    settings : Settings, optional
    progress : callable, optional
        Called with the number of points done since the last call.

    Returns
    -------
    Survey

    Raises
    ------
    InputError
        If the atmosphere needs date and place and the trajectory has none, or the vehicle lacks what the
        settings ask for.
    """
    air_model = atmosphere or default_atmosphere(trajectory)
    chosen = settings or Settings()
    check_reach(trajectory, air_model)
    lengths = named_lengths(vehicle)
    columns = _points(trajectory, vehicle, air_model, chosen, lengths, progress)
    track = Track.along(trajectory) if trajectory.time is not None else None
    if track is None:
        crossings, segments = no_crossings(), no_segments()
    else:
        found = find_crossings(
            track,
            air_model,
            chosen.free_path,
            columns["mean_free_path_m"],
            list(lengths.values()),
            chosen.bounds,
            lambda air, utc: path_uncertainty(air_model, air, utc),
            air_model.altitude_range,
        )
        crossings = crossing_table(found, list(lengths), chosen.bounds)
        segments = segment_table(trajectory, vehicle, air_model, chosen, lengths, columns, track, found)
    points = points_table(columns, trajectory, lengths)
    notes = survey_notes(trajectory, vehicle, air_model, chosen, columns)
    return Survey(trajectory, vehicle, air_model, chosen, points, segments, crossings, notes)


def path_uncertainty(atmosphere: Atmosphere, air: Air, utc: Times | None) -> Floats:
    """Return the 1-sigma of the logarithm of the mean free path: density and cross-sections together."""
    bias, scatter = atmosphere.uncertainty(air.altitude, utc=utc)
    cross_section = free_path_uncertainty(air)
    return np.sqrt(bias * bias + scatter * scatter + cross_section * cross_section)


def check_reach(trajectory: Trajectory, atmosphere: Atmosphere) -> None:
    """Raise an InputError where the flight leaves the altitudes an atmosphere answers for, or lacks its place."""
    low, high = atmosphere.altitude_range
    outside = np.flatnonzero((trajectory.altitude < low) | (trajectory.altitude > high))
    source = trajectory.source or trajectory.name
    if outside.size:
        first = int(outside[0])
        raise InputError(
            f"{outside.size} of {len(trajectory)} points lie outside the {low / 1e3:g} to {high / 1e3:g} km of "
            f"{atmosphere.name} (first: point {first + 1} at {trajectory.altitude[first] / 1e3:g} km)",
            source=source,
            remedy="choose another --atmosphere or leave those points out",
        )
    if not atmosphere.needs_place:
        return
    missing = [n for n in ("latitude", "longitude") if getattr(trajectory, n) is None]
    missing += ["date"] if trajectory.utc is None else []
    if missing:
        raise InputError(
            f"has no {' and no '.join(missing)}, which {atmosphere.name} needs",
            source=source,
            remedy="state them in the file or by option, or choose standard-1976",
        )


def block_inputs(trajectory: Trajectory, rows: slice, utc: Times | None) -> Inputs:
    """Return the part of a trajectory that one pass of the chain works on."""

    def part(values: Floats | None) -> Floats | None:
        return None if values is None else values[rows]

    return Inputs(
        altitude=trajectory.altitude[rows],
        speed=trajectory.speed[rows],
        latitude=part(trajectory.latitude),
        longitude=part(trajectory.longitude),
        utc=None if utc is None else utc[rows],
        angle_of_attack=part(trajectory.angle_of_attack),
        sideslip=part(trajectory.sideslip),
        wall_temperature=part(trajectory.wall_temperature),
    )


def _points(
    trajectory: Trajectory,
    vehicle: Vehicle,
    atmosphere: Atmosphere,
    settings: Settings,
    lengths: dict[str, float],
    progress: Progress | None,
) -> dict[str, np.ndarray]:
    """Return all computed columns, filled block by block into arrays made once."""
    count = trajectory.altitude.size
    _warm_heap()
    kept = {column.name for column in point_columns(list(lengths), attitude=True)}
    utc = trajectory.utc if atmosphere.needs_place else None
    columns: dict[str, np.ndarray] = {}
    blocks = [slice(start, min(start + BLOCK, count)) for start in range(0, count, BLOCK)]
    inputs = [block_inputs(trajectory, rows, utc) for rows in blocks]
    airs = block_airs(inputs, atmosphere, count)
    for rows, given, air in zip(blocks, inputs, airs, strict=True):
        part = conditions(given, atmosphere, vehicle, lengths, settings, air=air)
        if not columns:
            columns = _room(part, kept, count)
        for name, column in columns.items():
            column[rows] = part[name]
        if progress:
            progress(rows.stop - rows.start)
    if trajectory.time is not None:
        columns["heat_load_J_m2"] = Load.of(trajectory.time, columns["heat_flux_W_m2"]).samples
    return columns


def block_airs(inputs: Sequence[Inputs], atmosphere: Atmosphere, count: int) -> Iterator[Air]:
    """Yield the air of each block; for MSIS and many points a second process works on every other block."""
    if not isinstance(atmosphere, Msis):
        yield from (air_at(given, atmosphere) for given in inputs)
        return
    from aero.air.ahead import ahead

    with ahead(atmosphere, count) as source:
        for k, given in enumerate(inputs):
            if k % 2 == 0 and k + 1 < len(inputs):
                source.ask(msis_question(inputs[k + 1], atmosphere))
            yield source.air(msis_question(given, atmosphere), asked=k % 2 == 1)


def _room(part: dict[str, np.ndarray], kept: set[str], count: int) -> dict[str, np.ndarray]:
    """Return empty columns for all points: the numbers as rows of one array, which the system hands out at once."""
    numbers = [name for name in part if name in kept and part[name].dtype == np.float64]
    room = dict(zip(numbers, np.empty((len(numbers), count)), strict=True))
    others = [name for name in part if name in kept and name not in room]
    return room | {name: np.empty(count, dtype=part[name].dtype) for name in others}


def _warm_heap() -> None:
    """Let the C library keep freed blocks of this size instead of returning them to the system at once.

    Freeing one large array raises glibc's own threshold for that; the chain's temporaries then reuse pages,
    which halves its time. Elsewhere it does nothing.
    """
    np.empty(31 << 20, dtype=np.uint8)


__all__ = ["BLOCK", "Cuts", "Survey", "named_lengths", "survey"]
