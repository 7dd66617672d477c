"""The results as tables: points, crossings and segments."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd

from aero.air.state import Atmosphere
from aero.arrays import Floats
from aero.body import Vehicle
from aero.regime import REGIMES, Crossings, Track, cut_segments, extremes
from aero.regime.track import Cubic, clock
from aero.survey.chain import conditions
from aero.survey.columns import CROSSING_COLUMNS, SEGMENT_COLUMNS, SIDESLIP, free_name, point_columns
from aero.survey.inputs import Inputs
from aero.survey.loads import Load, share
from aero.survey.methods import segment_methods
from aero.survey.settings import Settings
from aero.trajectory import Trajectory


def points_table(
    columns: dict[str, np.ndarray], trajectory: Trajectory, lengths: dict[str, float]
) -> pd.DataFrame:
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
    wanted = point_columns(list(lengths), attitude=attitude)
    if trajectory.sideslip is not None and not attitude:
        wanted.append(SIDESLIP)
    for column in wanted:
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


def crossing_table(found: Crossings, names: list[str], bounds: Sequence[float]) -> pd.DataFrame:
    """Return the crossings table."""
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


def segment_table(
    trajectory: Trajectory,
    vehicle: Vehicle,
    atmosphere: Atmosphere,
    settings: Settings,
    lengths: dict[str, float],
    columns: dict[str, np.ndarray],
    track: Track,
    found: Crossings,
) -> pd.DataFrame:
    """Return the segments table: cuts, what falls between them, and the method each calls for."""
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


def no_crossings() -> pd.DataFrame:
    """Return an empty crossings table, for conditions without times."""
    text = ("length", "direction")
    return pd.DataFrame({n: pd.Series(dtype="str" if n in text else "float64") for n in CROSSING_COLUMNS})


def no_segments() -> pd.DataFrame:
    """Return an empty segments table."""
    text = ("length", "regime", "method", "method_reason")
    return pd.DataFrame({n: pd.Series(dtype="str" if n in text else "float64") for n in SEGMENT_COLUMNS})
