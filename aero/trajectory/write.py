"""Writes a trajectory as CSV, TSV or Parquet, such that it reads back as it was."""

from __future__ import annotations

import os
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats
from aero.errors import InputError
from aero.trajectory.columns import recognise
from aero.trajectory.meanings import MEANINGS
from aero.trajectory.metadata import quoted
from aero.trajectory.trajectory import Trajectory
from aero.units import UNITS

WRITTEN = (".csv", ".tsv", ".parquet")


def write_trajectory(
    trajectory: Trajectory, path: str | Path, *, replace: bool = False, comments: Sequence[str] = ()
) -> None:
    """Write a trajectory to a file, whole or not at all.

    Parameters
    ----------
    trajectory : Trajectory
    path : str or Path
        The extension decides: .csv, .tsv or .parquet.
    replace : bool
        Whether an existing file may be replaced.
    comments : sequence of str
        Lines for people, above the header (CSV and TSV).

    Raises
    ------
    InputError
        If the file exists and is not to be replaced, or the extension is not known.
    ValueError
        If a carried column is named like one with a meaning.

    Notes
    -----
    Speeds are written as air-relative, whatever frame they were read in. Times, altitudes and speeds read
    back bit by bit; angles, in degrees, do so if they came from degrees, else to the last bit or one off.
    Notes and skipped rows belong to the reading and are not written.

    Examples
    --------
    >>> import tempfile
    >>> flight = Trajectory(name="two points", time=[0, 10], altitude=[120e3, 118e3], speed=[7.5e3, 7.5e3])
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     write_trajectory(flight, f"{folder}/two.csv")
    ...     print(Path(folder, "two.csv").read_text(), end="")
    # name: two points
    # velocity frame: air
    time_s,altitude_m,air_speed_m_s
    0.0,120000.0,7500.0
    10.0,118000.0,7500.0
    """
    path = Path(path)
    if path.suffix.lower() not in WRITTEN:
        raise InputError(
            f"ends in '{path.suffix}', expected one of: {', '.join(WRITTEN)}",
            source=str(path),
            remedy="rename it",
        )
    if path.is_dir():
        raise InputError("is a folder, expected a file", source=str(path), remedy="name a file in it")
    if path.exists() and not replace:
        raise InputError("exists already", source=str(path), remedy="name another file or pass --replace")
    columns = table_of(trajectory)
    if not path.parent.is_dir():
        raise InputError("its folder does not exist", source=str(path), remedy="make it first")
    beside = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        if path.suffix.lower() == ".parquet":
            _write_parquet(columns, metadata_of(trajectory), beside)
        else:
            _write_text(columns, metadata_of(trajectory), comments, beside, path.suffix.lower())
        beside.replace(path)
    finally:
        beside.unlink(missing_ok=True)


def metadata_of(trajectory: Trajectory) -> dict[str, str]:
    """Return the metadata that belong to a trajectory, ready to be written."""
    told = {"name": quoted(trajectory.name), "velocity frame": "air"}
    if trajectory.epoch is not None:
        told["epoch"] = f"{trajectory.epoch}Z"
    return told


def table_of(trajectory: Trajectory) -> dict[str, NDArray[Any]]:
    """Return a trajectory as columns under the names they are written with, angles in degrees.

    Examples
    --------
    >>> flight = Trajectory(name="a", altitude=[1e5], speed=[7e3], latitude=[np.pi / 4])
    >>> {name: values.tolist() for name, values in table_of(flight).items()}
    {'altitude_m': [100000.0], 'air_speed_m_s': [7000.0], 'latitude_deg': [45.0]}
    """
    columns: dict[str, NDArray[Any]] = {}
    for meaning in MEANINGS.values():
        values = getattr(trajectory, meaning.field)
        if values is not None:
            columns[meaning.column] = _degrees(values) if meaning.dimension == "angle" else values
    for name, values in trajectory.extra.items():
        if recognise(name) is not None or name in columns:
            raise ValueError(f"carried column '{name}' is named like one with a meaning; rename it")
        columns[name] = values
    return columns


def _degrees(angles: Floats) -> Floats:
    """Return degrees that give exactly these radians when read, where there are such degrees."""
    factor = UNITS["angle"]["deg"][0]
    degrees = angles / factor
    for near in (np.nextafter(degrees, -np.inf), np.nextafter(degrees, np.inf)):
        degrees = np.where((degrees * factor != angles) & (near * factor == angles), near, degrees)
    return degrees


def _write_text(
    columns: dict[str, NDArray[Any]], told: dict[str, str], comments: Sequence[str], path: Path, suffix: str
) -> None:
    import polars

    lines = [f"# comment: {line}" for text in comments for line in text.splitlines()]
    lines += [f"# {key}: {value}" for key, value in told.items()]
    frame = polars.DataFrame({name: _plain(values) for name, values in columns.items()})
    with path.open("wb") as stream:
        stream.write("".join(f"{line}\n" for line in lines).encode("utf-8"))
        frame.write_csv(
            stream, separator="\t" if suffix == ".tsv" else ",", datetime_format="%Y-%m-%dT%H:%M:%S%.6f"
        )


def _plain(values: NDArray[Any]) -> Any:
    import polars

    if values.dtype.kind == "f":
        return polars.Series(values).fill_nan(None)  # an empty cell where there is no value
    if values.dtype.kind == "O":
        return polars.Series([None if value is None else str(value) for value in values], dtype=polars.String)
    return values


def _write_parquet(columns: dict[str, NDArray[Any]], told: dict[str, str], path: Path) -> None:
    import pyarrow as pa
    from pyarrow import parquet

    table = pa.table(columns)
    parquet.write_table(table.replace_schema_metadata(told), path, use_dictionary=False)
