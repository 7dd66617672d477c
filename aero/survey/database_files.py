"""Aerodynamic databases on disk: Parquet with its record in the schema, CSV, or a folder of both."""

from __future__ import annotations

import hashlib
import importlib.metadata
import json
from collections.abc import Mapping
from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

import aero
from aero.arrays import Floats
from aero.errors import InputError
from aero.survey.grid import AXES, Grid
from aero.survey.notes import grid_notes
from aero.survey.output import check_target, only_ours, whole
from aero.survey.plain import plain_json

if TYPE_CHECKING:
    from aero.survey.database import Database

KEY = "aero"  # of the record in the schema of a Parquet file
NAME = "database"  # of the files in a folder
PACKAGES = ("numpy", "scipy", "pymsis")
SUFFIXES = (".parquet", ".csv")


def record_of(
    grid: Grid,
    columns: Mapping[str, Floats],
    errors: Mapping[str, Mapping[str, Any]],
    drag_error_by_axis: Mapping[str, float],
) -> dict[str, Any]:
    """Return what a database was made from and how well it interpolates, as plain JSON values; no clock."""
    vehicle = grid.vehicle
    spread = np.meshgrid(*grid.axes, indexing="ij")
    flat = {name: values.reshape(-1) for name, values in columns.items()}
    altitude, speed = spread[0].reshape(-1), spread[1].reshape(-1)
    record: dict[str, Any] = {
        "kind": "aerodynamic database",
        "vehicle": {
            "file": Path(vehicle.source).name,
            "sha256": vehicle.digest,
            "name": vehicle.name,
            "mass_kg": vehicle.mass,
            "reference_area_m2": vehicle.reference_area,
            "reference_length_m": vehicle.reference_length,
            "nose_radius_m": vehicle.nose_radius,
            "body_class": vehicle.body_class,
        },
        "atmosphere": grid.atmosphere.provenance(),
        "place": {
            "date": grid.date,
            "latitude_deg": None if grid.latitude is None else float(np.degrees(grid.latitude)),
            "longitude_deg": None if grid.longitude is None else float(np.degrees(grid.longitude)),
        },
        "options": asdict(grid.settings),
        "versions": {"aero": aero.__version__, **{p: importlib.metadata.version(p) for p in PACKAGES}},
        "axes": {
            axis.column: np.round(nodes * axis.per_si, 12)
            for axis, nodes in zip(AXES, grid.axes, strict=True)
        },
        "interpolation": dict(errors),
        "drag_error_by_axis": dict(drag_error_by_axis),
        "notes": grid_notes(vehicle, grid.atmosphere, grid.settings, altitude, speed, flat, grid.date),
    }
    plain: dict[str, Any] = plain_json(record)
    deciding = {k: plain[k] for k in ("vehicle", "atmosphere", "place", "options", "versions", "axes")}
    plain["digest"] = hashlib.sha256(json.dumps(deciding, sort_keys=True).encode()).hexdigest()[:10]
    return plain


def check_out(out: str | Path, *, replace: bool) -> bool:
    """Raise early what `write_database` would; return whether a folder is to be written."""
    suffix = Path(out).suffix.lower()
    folder = suffix not in SUFFIXES
    if folder and suffix and not Path(out).is_dir():
        raise InputError(
            f"'{suffix}' is not a format of a database",
            source=str(out),
            remedy="end the name in .parquet or .csv, or give a folder",
        )
    check_target(out, replace=replace, folder=folder)
    if folder and replace:
        only_ours(Path(out), tuple(f"{NAME}.{kind}" for kind in ("parquet", "csv", "json")))
    return folder


def write_database(database: Database, out: str | Path, *, replace: bool) -> list[str]:
    """Write a database to FILE.parquet, FILE.csv or a folder, whole or not at all; return what was written."""
    import pandas as pd

    from aero.survey.tables import write_csv, write_parquet

    folder = check_out(out, replace=replace)
    table = pd.DataFrame(database.table(), copy=False)
    schema = {KEY: json.dumps(database.record, ensure_ascii=False, allow_nan=False)}
    with whole(out, replace=replace, folder=folder) as new:
        if not folder:
            if Path(out).suffix.lower() == ".csv":
                write_csv(table, new)
            else:
                write_parquet(table, new, metadata=schema)
            return [Path(out).name]
        write_parquet(table, new / f"{NAME}.parquet", metadata=schema)
        write_csv(table, new / f"{NAME}.csv")
        text = json.dumps(database.record, indent=2, ensure_ascii=False, allow_nan=False) + "\n"
        (new / f"{NAME}.json").write_text(text, encoding="utf-8")
        return [f"{NAME}.{kind}" for kind in ("csv", "json", "parquet")]


def read_table(path: Path) -> tuple[dict[str, Floats], dict[str, Any], str]:
    """Return the columns of numbers of a database, its record and its file's name."""
    if path.is_dir():
        inside = path / f"{NAME}.parquet"
        if not inside.is_file():
            raise InputError(
                f"is a folder without {inside.name}",
                source=str(path),
                remedy="give the file or folder that aero database wrote",
            )
        path = inside
    if not path.exists():
        raise InputError("no such file", source=str(path), remedy="make it with aero database")
    kind = path.suffix.lower()
    if kind not in SUFFIXES:
        raise InputError(
            f"'{kind}' is not a format of a database, expected {' or '.join(SUFFIXES)}", source=str(path)
        )
    try:
        table, record = _parquet(path) if kind == ".parquet" else (_csv(path), {})
    except (OSError, ValueError) as error:
        reason = str(error).splitlines()[0].rstrip(". ")
        raise InputError(
            f"is no database that can be read as {kind[1:]} ({reason})",
            source=str(path),
            remedy="give the file that aero database wrote; is it a trajectory?",
        ) from None
    return table, record, path.name


def _parquet(path: Path) -> tuple[dict[str, Floats], dict[str, Any]]:
    import pyarrow.parquet as pq

    with pq.ParquetFile(path) as file:
        table = file.read()
    metadata = table.schema.metadata or {}
    record = json.loads(metadata.get(KEY.encode(), b"{}"))
    return {name: _numbers(table[name]) for name in table.column_names}, record


def _csv(path: Path) -> dict[str, Floats]:
    import pyarrow.csv

    with path.open("rb") as file:
        table = pyarrow.csv.read_csv(file)
    return {name: _numbers(table[name]) for name in table.column_names}


def _numbers(column: Any) -> Floats:
    """Return a column as numbers, NaN where empty; a column without any, or of text, is NaN throughout."""
    import pyarrow as pa

    if not (pa.types.is_floating(column.type) or pa.types.is_integer(column.type)):
        return np.full(len(column), np.nan)
    values: Floats = column.cast(pa.float64()).to_numpy().astype(np.float64)
    return values
