"""Reads Parquet files, whole or in pieces of a bounded number of rows."""

from __future__ import annotations

import dataclasses
import hashlib
import re
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from aero.errors import InputError
from aero.trajectory.assemble import assemble
from aero.trajectory.columns import Column, Layout, bare, lay_out
from aero.trajectory.metadata import KEYS, Metadata, Statement, plain_key, understand
from aero.trajectory.table import Table
from aero.trajectory.trajectory import Trajectory

PIECE_ROWS = 131_072
_INDEX = re.compile(r"__index_level_\d+__")  # row numbers a data frame leaves behind
# What libraries write of their own into the metadata of a file.
_FOREIGN = ("pandas", "arrow:schema", "geo", "org.", "parquet.", "spark", "polars", "writer")


def read_parquet(
    path: str | Path, *, skip_bad_rows: bool = False, time_zero: np.datetime64 | str | None = None
) -> Trajectory:
    """Read a Parquet file whole.

    Parameters
    ----------
    path : str or Path
    skip_bad_rows : bool
        Leave bad rows out and list them in `skipped`, instead of stopping at the first.
    time_zero : numpy.datetime64 or str, optional
        UTC of time 0 where the file has no dates.

    Returns
    -------
    Trajectory

    Raises
    ------
    InputError
        If the file cannot be used; the message says where, and how to mend it.

    Notes
    -----
    The keys of the metadata lines of a CSV file may stand in the file's key-value metadata. Timestamps
    without a time zone are taken as UTC.
    """
    with ThreadPoolExecutor(1) as pool:
        digest = pool.submit(_digest, path)
        file, layout, told = _open(path)
        table = file.read()
        whole = _table(path, table, layout, told, digest.result(), 0)
    return assemble(whole, skip_bad_rows=skip_bad_rows, time_zero=time_zero)


def parquet_pieces(
    path: str | Path,
    *,
    rows: int = PIECE_ROWS,
    skip_bad_rows: bool = False,
    time_zero: np.datetime64 | str | None = None,
) -> Iterator[Trajectory]:
    """Read a Parquet file piece by piece, so that memory does not grow with its length.

    Parameters
    ----------
    path : str or Path
    rows : int
        Most rows a piece may have; row groups smaller than this come as they are.
    skip_bad_rows, time_zero
        As for `read_parquet`.

    Yields
    ------
    Trajectory
        Pieces in file order; times go on from one to the next. Notes about the file as a whole come with
        the first; those on steps and skipped rows are each piece's own.

    Raises
    ------
    InputError
        As `read_parquet` does, once the piece with the fault is reached.
    """
    digest = _digest(path)
    file, layout, told = _open(path)
    start, points = 0, 0
    before: Trajectory | None = None
    for batch in file.iter_batches(batch_size=rows):
        if batch.num_rows == 0:
            continue
        piece = assemble(
            _table(path, batch, layout, told, digest, start),
            skip_bad_rows=skip_bad_rows,
            time_zero=time_zero,
            after=before,
            least=0,
        )
        start += batch.num_rows
        points += len(piece)
        if len(piece):
            before = piece
            yield piece
    if points < 2:
        raise InputError(
            f"holds {points} good point{'' if points == 1 else 's'}, expected at least 2",
            source=str(path),
            remedy="give the whole trajectory",
        )


def _digest(path: str | Path) -> str:
    with Path(path).open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()


def _open(path: str | Path) -> tuple[Any, Layout, Metadata]:
    import pyarrow as pa
    from pyarrow import parquet

    source = str(path)
    try:
        file = parquet.ParquetFile(path, memory_map=True)
    except (pa.ArrowException, OSError) as fault:
        raise InputError(
            f"is no readable Parquet file ({str(fault).splitlines()[0].rstrip('.')})",
            source=source,
            remedy="write it again",
        ) from None
    schema = file.schema_arrow
    # the index of a data frame is a column like others once it holds dates
    dated = [_INDEX.fullmatch(field.name) and pa.types.is_timestamp(field.type) for field in schema]
    names = ["utc" if is_dates else name for name, is_dates in zip(schema.names, dated, strict=True)]
    layout = lay_out(names, source=source)
    index = {place: name for place, name in layout.extras.items() if not _INDEX.fullmatch(name)}
    layout = dataclasses.replace(layout, extras=index)
    _check_types(schema, layout, source)
    return file, layout, understand(_statements(schema.metadata or {}), source=source)


def _statements(metadata: dict[bytes, bytes]) -> list[Statement]:
    found = []
    for key, value in metadata.items():
        try:
            name, text = key.decode("utf-8"), value.decode("utf-8")
        except UnicodeDecodeError:
            continue
        if name.lower().startswith(_FOREIGN) and plain_key(name) not in KEYS:
            continue
        found.append(Statement(plain_key(name), text.strip(), None))
    return found


def _check_types(schema: Any, layout: Layout, source: str) -> None:
    """Refuse columns of a type that their meaning cannot have."""
    import pyarrow as pa

    for column in layout.columns.values():
        kind = schema.field(column.index).type
        is_text = pa.types.is_string(kind) or pa.types.is_large_string(kind) or pa.types.is_dictionary(kind)
        number = pa.types.is_integer(kind) or pa.types.is_floating(kind) or pa.types.is_decimal(kind)
        date = pa.types.is_timestamp(kind) or pa.types.is_date(kind) or is_text
        if column.meaning.name == "time" and column.unit in (None, "UTC"):
            if number and column.unit is None:
                raise bare(column.header, column.meaning, source, None)
            if date:
                continue
            expected = "dates"
        elif number:
            continue
        else:
            expected = "numbers"
        raise InputError(
            f"is of type {kind}, expected {expected}",
            source=source,
            column=column.header,
            remedy=f"write the column as {expected}",
        )


def _table(path: str | Path, table: Any, layout: Layout, told: Metadata, digest: str, start: int) -> Table:
    known = {column.index: column for column in layout.columns.values()}
    values = {place: _known(table.column(place), column) for place, column in known.items()} | {
        place: _carried(table.column(place)) for place in layout.extras
    }

    def cell(index: int, place: int) -> str:
        found = table.column(place)[index].as_py()
        return "" if found is None else str(found)

    if not table.num_rows:
        raise InputError("has no rows, expected at least two", source=str(path), remedy="give the rows")
    return Table(
        source=str(path),
        file_name=Path(path).name,
        digest=digest,
        layout=layout,
        metadata=told,
        count=table.num_rows,
        values=values,
        line=lambda index: start + index + 1,
        cell=cell,
        lines_are="row",
    )


def _known(data: Any, column: Column) -> NDArray[Any]:
    import pyarrow as pa
    from pyarrow import compute

    if column.meaning.name != "time" or column.unit not in (None, "UTC"):
        numbers = data if data.type == pa.float64() else compute.cast(data, pa.float64(), safe=False)
        return np.asarray(numbers.to_numpy(**_copying(data)), dtype=np.float64)
    if not (pa.types.is_timestamp(data.type) or pa.types.is_date(data.type)):
        from aero.trajectory.csv_rows import dates_of

        return dates_of(data.to_pylist())
    # Arrow keeps UTC whatever zone it shows; a naive timestamp is taken as UTC.
    moments = compute.cast(data, pa.timestamp("us", getattr(data.type, "tz", None)), safe=False)
    return np.asarray(moments.to_numpy(**_copying(data)), dtype="datetime64[us]")


def _copying(data: Any) -> dict[str, bool]:
    import pyarrow as pa

    return {} if isinstance(data, pa.ChunkedArray) else {"zero_copy_only": False}


def _carried(data: Any) -> NDArray[Any]:
    import pyarrow as pa

    if pa.types.is_nested(data.type) or pa.types.is_dictionary(data.type):
        made = np.empty(len(data), dtype=object)
        made[:] = data.to_pylist()
        return made
    return np.asarray(data.to_numpy(**_copying(data)))
