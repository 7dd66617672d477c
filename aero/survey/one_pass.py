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
from aero.regime import REGIMES, Crossings, Cuts, Track, cut_segments, extremes, find_crossings
from aero.regime.track import Cubic, clock
from aero.survey.chain import conditions
from aero.survey.columns import CROSSING_COLUMNS, SEGMENT_COLUMNS, free_name, point_columns
from aero.survey.inputs import Inputs, air_at, msis_question
from aero.survey.loads import Load, share
from aero.survey.methods import segment_methods
from aero.survey.notes import survey_notes
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
        crossings, segments = _no_crossings(), _no_segments()
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
        crossings = _crossing_table(found, list(lengths), chosen.bounds)
        segments = _segment_table(trajectory, vehicle, air_model, chosen, lengths, columns, track, found)
    points = _frame(columns, trajectory, lengths)
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


def _frame(columns: dict[str, np.ndarray], trajectory: Trajectory, lengths: dict[str, float]) -> pd.DataFrame:
    """Return the points table; columns nobody knows are one NaN seen many times, not memory."""
    count = trajectory.altitude.size
    known: dict[str, np.ndarray] = {
        "altitude_m": trajectory.altitude,
        "air_speed_m_s": trajectory.speed,
        **columns,
    }
    if trajectory.time is not None:
        known["time_s"] = trajectory.time
    for name in ("latitude", "longitude", "flight_path_angle", "angle_of_attack", "sideslip"):
        values = getattr(trajectory, name)
        if values is not None:
            known[f"{name}_deg"] = np.degrees(values)
    data: dict[str, object] = {}
    kind = pd.CategoricalDtype(list(REGIMES), ordered=False)
    attitude = "pitch_moment_coefficient" in columns
    for column in point_columns(list(lengths), attitude=attitude):
        if column.name == "utc":
            utc = trajectory.utc
            nat = np.broadcast_to(np.datetime64("NaT", "us"), count)
            data["utc"] = nat if utc is None else utc.astype("datetime64[us]")
        elif column.name.startswith("regime."):
            codes: np.ndarray[tuple[int], np.dtype[np.int8]] = known[column.name]
            data[column.name] = pd.Categorical.from_codes(codes, dtype=kind)
        else:
            data[column.name] = known.get(column.name, np.broadcast_to(np.nan, count))
    for name, values in trajectory.extra.items():
        data[free_name(name, data)] = values
    return pd.DataFrame(data, copy=False)


def _crossing_table(found: Crossings, names: list[str], bounds: Sequence[float]) -> pd.DataFrame:
    return pd.DataFrame(
        {
            "length": [names[i] for i in found.length],
            "bound": np.asarray(bounds, dtype=np.float64)[found.bound.astype(np.int64)],
            "direction": np.where(found.rarefying, "rarefying", "densifying"),
            "time_s": found.time,
            "altitude_m": found.altitude,
            "air_speed_m_s": found.speed,
            "altitude_low_m": found.altitude_low,
            "altitude_high_m": found.altitude_high,
        },
        columns=list(CROSSING_COLUMNS),
    )


def _segment_table(
    trajectory: Trajectory,
    vehicle: Vehicle,
    atmosphere: Atmosphere,
    settings: Settings,
    lengths: dict[str, float],
    columns: dict[str, np.ndarray],
    track: Track,
    found: Crossings,
) -> pd.DataFrame:
    time = trajectory.time
    assert time is not None  # a track has times
    values = list(lengths.values())
    cuts = cut_segments(time, columns["mean_free_path_m"], values, settings.bounds, found)
    heat = Load(Cubic(time, columns["heat_flux_W_m2"]), columns["heat_load_J_m2"])
    slowing = Load.of(time, columns["drag_deceleration_m_s2"])
    heat_parts = heat.between(cuts.start, cuts.end)
    slow_parts = slowing.between(cuts.start, cuts.end)

    def between_samples(when: Floats) -> dict[str, np.ndarray]:
        return conditions(track_inputs(track, trajectory, when), atmosphere, vehicle, lengths, settings)

    method, reason = segment_methods(cuts, list(lengths), columns, time, settings.bounds, between_samples)
    names = list(lengths)
    first, last = track.altitude(cuts.start), track.altitude(cuts.end)
    lowest, highest = extremes(trajectory.altitude, cuts, first, last)
    return pd.DataFrame(
        {
            "length": [names[i] for i in cuts.length],
            "regime": [REGIMES[i] for i in cuts.regime],
            "start_s": cuts.start,
            "end_s": cuts.end,
            "start_altitude_m": first,
            "end_altitude_m": last,
            "altitude_min_m": lowest,
            "altitude_max_m": highest,
            "duration_s": cuts.end - cuts.start,
            "knudsen_min": cuts.knudsen_min,
            "knudsen_max": cuts.knudsen_max,
            "heat_load_J_m2": heat_parts,
            "heat_load_share": share(heat_parts, heat.total),
            "speed_loss_m_s": slow_parts,
            "speed_loss_share": share(slow_parts, slowing.total),
            "method": method,
            "method_reason": reason,
        },
        columns=list(SEGMENT_COLUMNS),
    )


def track_inputs(track: Track, trajectory: Trajectory, when: Floats) -> Inputs:
    """Return the inputs of the chain at times between the samples."""
    time = trajectory.time
    assert time is not None  # a track has times

    def between(values: Floats | None) -> Floats | None:
        return None if values is None else np.interp(when, time, values)

    placed = track.latitude is not None and track.longitude is not None
    return Inputs(
        altitude=track.altitude(when),
        speed=track.speed(when),
        latitude=track.latitude(when) if placed and track.latitude else None,
        longitude=track.longitude(when) if placed and track.longitude else None,
        utc=None if trajectory.epoch is None else clock(trajectory.epoch, when),
        angle_of_attack=between(trajectory.angle_of_attack),
        sideslip=between(trajectory.sideslip),
        wall_temperature=between(trajectory.wall_temperature),
    )


def _no_crossings() -> pd.DataFrame:
    text = ("length", "direction")
    return pd.DataFrame({n: pd.Series(dtype="str" if n in text else "float64") for n in CROSSING_COLUMNS})


def _no_segments() -> pd.DataFrame:
    text = ("length", "regime", "method", "method_reason")
    return pd.DataFrame({n: pd.Series(dtype="str" if n in text else "float64") for n in SEGMENT_COLUMNS})


__all__ = ["BLOCK", "Cuts", "Survey", "named_lengths", "survey"]
