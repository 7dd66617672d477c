"""From the columns of a file to a `Trajectory`: SI, checks, frames, notes. The same for every format."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import PurePath

import numpy as np

from aero.arrays import Floats, Times, floats
from aero.errors import InputError
from aero.trajectory.check import Faults
from aero.trajectory.frames import ALTITUDE_KINDS, air_relative
from aero.trajectory.meanings import IMPLIED, MEANINGS
from aero.trajectory.metadata import CHOICES
from aero.trajectory.table import Table
from aero.trajectory.trajectory import NO_TIME, Skipped, Trajectory
from aero.units import utc

GAP = 10.0  # a step this many times the median step is noted; the factor is a judgement
_MICROSECONDS = 1e6


def assemble(
    table: Table,
    *,
    skip_bad_rows: bool = False,
    time_zero: np.datetime64 | str | None = None,
    after: Trajectory | None = None,
    least: int = 2,
) -> Trajectory:
    """Check and convert the columns of a file.

    Parameters
    ----------
    table : Table
    skip_bad_rows : bool
        Leave bad rows out and list them, instead of stopping at the first.
    time_zero : numpy.datetime64 or str, optional
        UTC of time 0 where the file has no dates.
    after : Trajectory, optional
        The piece before this one of the same file: times go on from it.
    least : int
        Fewest points that will do.

    Returns
    -------
    Trajectory

    Raises
    ------
    InputError
        If a row cannot be used and is not to be skipped, or something needed is missing.
    """
    layout, told = table.layout, table.metadata
    notes = [*told.notes, *layout.notes]
    choices = _choices(table, notes)
    _needed(table, choices)
    faults, kind = Faults(table), choices["altitude kind"]
    si, given = _si(table, kind)
    time, epoch = _time(table, after, time_zero, notes)
    _find(table, faults, si, time, kind, after)
    if faults.bad is not None and not skip_bad_rows:
        raise faults.error()
    keep = slice(None) if faults.bad is None else ~faults.bad
    if faults.bad is not None:
        si = {name: values[keep] for name, values in si.items()}
        given, time = given[keep], None if time is None else time[keep]
    if after is not None:
        notes.clear()  # said with the first piece
    skipped = faults.skipped()
    _enough(table, len(si["altitude"]), skipped, least)
    if skipped:
        notes.append(
            f"{len(skipped)} of {table.count} rows were left out "
            f"(first: {table.lines_are} {skipped[0].line}: {skipped[0].reason})"
        )
    if kind != "geodetic":
        notes.append(_moved(given, si["altitude"], kind))
    if choices["velocity frame"] == "inertial":
        notes.append(_turned(si))
    _time_notes(time, after, notes)
    return Trajectory(
        name=told.name or PurePath(table.file_name).stem,
        time=time,
        epoch=epoch,
        velocity_frame=choices["velocity frame"],
        extra={name: table.values[index][keep] for index, name in layout.extras.items()},
        notes=tuple(notes),
        skipped=skipped,
        source=table.file_name,
        digest=table.digest,
        **{MEANINGS[name].field: values for name, values in si.items()},
    )


def _si(table: Table, kind: str) -> tuple[dict[str, Floats], Floats]:
    """Return every column but the time in SI by meaning, and the altitudes before they became geodetic."""
    si = {
        name: column.si(table.values[column.index])
        for name, column in table.layout.columns.items()
        if name != "time"
    }
    si |= {name: np.full(table.count, value) for name, value in table.metadata.fixed.items()}
    given = si["altitude"]
    with np.errstate(all="ignore"):  # bad cells are still among them
        if kind != "geodetic":
            si["altitude"] = ALTITUDE_KINDS[kind](given, si.get("latitude", 0.0))
    return si, given


def _choices(table: Table, notes: list[str]) -> dict[str, str]:
    """Settle velocity frame and altitude kind from metadata and headers."""
    told = dict(table.metadata.choices)
    for column in table.layout.columns.values():
        key, value = IMPLIED.get(column.words, ("", ""))
        if key and told.setdefault(key, value) != value:
            raise InputError(
                f"says {value}, but metadata key '{key}' is '{told[key]}'",
                source=table.source,
                column=column.header,
                remedy="make them agree",
            )
    if "velocity frame" not in told:
        notes.append(
            "the velocity frame is not stated: "
            "speeds are taken as relative to the air, which turns with the Earth"
        )
    return {key: told.get(key, allowed[0]) for key, allowed in CHOICES.items()}


def _needed(table: Table, choices: dict[str, str]) -> None:
    """Check that all that a frame or an altitude kind needs is there, and nothing twice."""
    columns, fixed = table.layout.columns, table.metadata.fixed
    for name in fixed:
        if name in columns:
            raise InputError(
                f"the {name} is given by the metadata and by column '{columns[name].header}'",
                source=table.source,
                remedy="keep one",
            )
    there = {*columns, *fixed}
    wants = {
        "inertial speeds": ("latitude", "flight-path angle", "heading")
        if choices["velocity frame"] == "inertial"
        else (),
        "geocentric altitudes": ("latitude",) if choices["altitude kind"] == "geocentric" else (),
    }
    for what, names in wants.items():
        missing = [name for name in names if name not in there]
        if missing:
            raise InputError(
                f"{what} need {', '.join(names)}; missing: {', '.join(missing)}",
                source=table.source,
                remedy=f"add a column such as '{MEANINGS[missing[0]].column}' "
                f"or a line '# {missing[0]}: 45 deg' above the header",
            )


def _time(
    table: Table, after: Trajectory | None, time_zero: np.datetime64 | str | None, notes: list[str]
) -> tuple[Floats | None, np.datetime64 | None]:
    """Return times in seconds (NaN where bad) and the UTC of time 0."""
    column, epoch = table.layout.columns.get("time"), table.metadata.epoch
    values = None if column is None else table.values[column.index]
    dates = values is not None and values.dtype.kind == "M"
    if epoch is None and after is not None:
        epoch = after.epoch
    elif epoch is None and dates and values is not None:
        good = values[~np.isnat(values)]
        epoch = good[0] if good.size else None
    elif epoch is None and time_zero is not None:
        epoch = utc(time_zero, source="--date")
    elif time_zero is not None and after is None:
        notes.append("the file has its own dates: the date given for time 0 was not used")
    if values is None:
        return None, epoch
    if not dates:
        assert column is not None
        return column.si(floats(values)), epoch
    return _seconds(values, epoch), epoch


def _seconds(dates: Times, epoch: np.datetime64 | None) -> Floats:
    if epoch is None:  # not one good date
        return np.full(dates.shape, np.nan)
    seconds = (dates - epoch).astype("int64") / _MICROSECONDS
    return floats(np.where(np.isnat(dates), np.nan, seconds))


def _find(
    table: Table,
    faults: Faults,
    si: dict[str, Floats],
    time: Floats | None,
    kind: str,
    after: Trajectory | None,
) -> None:
    columns = table.layout.columns
    # Latitude first: a bad one spoils the altitude that was turned with it.
    order = sorted(columns, key=lambda name: (name != "latitude" or kind == "geodetic", columns[name].index))
    for name in order:
        values = si[name] if name != "time" else time
        assert values is not None

        def shown(index: int, name: str = name) -> str:
            turned = name == "altitude" and kind != "geodetic"
            return f", which is {si[name][index] / 1e3:.6g} km geodetic" if turned else ""

        faults.add_values(columns[name], values, shown)
    if time is not None:
        last = -np.inf if after is None or after.time is None else float(after.time[-1])
        faults.add_time_order(columns["time"], time, last)


def _enough(table: Table, count: int, bad: Sequence[Skipped], least: int) -> None:
    skipped = len(bad)
    if skipped > max(count, 10):
        # one wrong time makes all rows behind it look bad: that is to be mended, not skipped
        raise InputError(
            f"{skipped} of {table.count} rows would be left out (first: {table.lines_are} {bad[0].line}: "
            f"{bad[0].reason}), expected no more than half",
            source=table.source,
            remedy="mend the file",
        )
    if count >= least:
        return
    left = f" after {skipped} bad row{'s were' if skipped != 1 else ' was'} left out" if skipped else ""
    raise InputError(
        f"holds {count} point{'' if count == 1 else 's'}{left}, expected at least {least}",
        source=table.source,
        remedy="mend the rows" if skipped else "give the whole trajectory",
    )


def _moved(given: Floats, geodetic: Floats, kind: str) -> str:
    shift = geodetic - given
    return (
        f"{kind} altitudes were turned into geodetic ones: "
        f"{shift.min() / 1e3:+.3f} to {shift.max() / 1e3:+.3f} km"
    )


def _turned(si: dict[str, Floats]) -> str:
    before = si["speed"]
    si["speed"], si["flight-path angle"], si["heading"] = air_relative(
        before, si["flight-path angle"], si["heading"], si["altitude"], si["latitude"]
    )
    shift = si["speed"] - before
    return f"inertial speeds were turned into air-relative ones: {shift.min():+.1f} to {shift.max():+.1f} m/s"


def _time_notes(time: Floats | None, after: Trajectory | None, notes: list[str]) -> None:
    if time is None:
        if after is None:
            notes.append(NO_TIME)
        return
    if after is not None and after.time is not None:
        time = np.concatenate([after.time[-1:], time])
    step = np.diff(time)
    if step.size < 2:
        return
    median = float(np.median(step))
    wide = np.flatnonzero(step > GAP * median)
    if wide.size:
        largest = int(wide[np.argmax(step[wide])])
        notes.append(
            f"{wide.size} time step{'s are' if wide.size > 1 else ' is'} over {GAP:g} times the median of "
            f"{median:.6g} s; the largest, {step[largest]:.6g} s, begins at {time[largest]:.10g} s"
        )
