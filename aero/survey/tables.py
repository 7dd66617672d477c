"""Points to Parquet and CSV, in blocks of rows, without a second copy of the table."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from pathlib import Path

import numpy as np
import pandas as pd

BLOCK = 65_536  # rows written at a time: large enough for the writers, small against the table
Progress = Callable[[int], None]


def write_parquet(
    table: pd.DataFrame,
    path: Path,
    progress: Progress | None = None,
    metadata: Mapping[str, str] | None = None,
) -> None:
    """Write a table as Parquet in row groups; a missing number stays NaN, a missing name null.

    `metadata` goes into the schema. Dictionary encoding and statistics are off for numbers: flight data rarely
    repeats, and the two cost more time than the rest.
    """
    import pyarrow as pa
    import pyarrow.parquet as pq

    arrays = {name: _plain(table[name]) for name in table.columns}
    schema = pa.schema([pa.field(name, _arrow_type(values)) for name, values in arrays.items()])
    if metadata:
        schema = schema.with_metadata(dict(metadata))
    names = [f.name for f in schema if pa.types.is_dictionary(f.type)]
    with pq.ParquetWriter(
        path, schema, compression="none", use_dictionary=names, write_statistics=False
    ) as out:
        for start in range(0, max(len(table), 1), BLOCK):
            rows = slice(start, start + BLOCK)
            columns = [_arrow(values, rows, schema.field(i).type) for i, values in enumerate(arrays.values())]
            out.write_table(pa.Table.from_arrays(columns, schema=schema), row_group_size=BLOCK)
            if progress:
                progress(min(BLOCK, len(table) - start))


def write_csv(table: pd.DataFrame, path: Path, progress: Progress | None = None) -> None:
    """Write a table as CSV: header first, shortest digits that read back the same, empty where no answer."""
    import polars as pl

    arrays = {name: _plain(table[name]) for name in table.columns}
    with path.open("wb") as out:
        for start in range(0, max(len(table), 1), BLOCK):
            rows = slice(start, start + BLOCK)
            frame = pl.DataFrame([_polars(name, values, rows) for name, values in arrays.items()])
            frame.write_csv(out, include_header=start == 0, datetime_format="%Y-%m-%dT%H:%M:%S%.6fZ")
            if progress:
                progress(min(BLOCK, len(table) - start))


def _plain(column: pd.Series) -> np.ndarray | pd.Categorical:
    if isinstance(column.dtype, pd.CategoricalDtype):
        categorical: pd.Categorical = column.array
        return categorical
    values: np.ndarray = column.to_numpy()
    return values.astype("datetime64[us]") if values.dtype.kind == "M" else values


def _unknown(values: np.ndarray) -> bool:
    """Whether a column nobody knows: one missing value seen many times (`points_table` makes them)."""
    return values.strides == (0,) and values.size > 0 and bool(pd.isna(values[0]))


def _arrow_type(values: np.ndarray | pd.Categorical) -> object:
    import pyarrow as pa

    if isinstance(values, pd.Categorical):
        return pa.dictionary(pa.int8(), pa.string())
    if values.dtype.kind == "M":
        return pa.timestamp("us", tz="UTC")
    return pa.string() if values.dtype.kind in "OUT" else pa.from_numpy_dtype(values.dtype)


def _arrow(values: np.ndarray | pd.Categorical, rows: slice, kind: object) -> object:
    import pyarrow as pa

    if isinstance(values, pd.Categorical):
        codes = values.codes[rows]
        indices = pa.array(codes, mask=codes < 0)
        return pa.DictionaryArray.from_arrays(indices, pa.array(list(values.categories), pa.string()))
    part = values[rows]
    if _unknown(values):
        return pa.nulls(part.size, kind)
    if part.dtype.kind in "OUT":
        return pa.array([None if v is None or v != v else str(v) for v in part.tolist()], pa.string())
    return pa.array(np.ascontiguousarray(part), kind)


def _polars(name: str, values: np.ndarray | pd.Categorical, rows: slice) -> object:
    import polars as pl

    if isinstance(values, pd.Categorical):
        labels = pl.Series([*values.categories, None], dtype=pl.String)
        codes = values.codes[rows].astype(np.int64)
        return labels.gather(np.where(codes < 0, len(values.categories), codes)).alias(name)
    part = values[rows]
    if _unknown(values):
        return pl.repeat(None, part.size, dtype=pl.Float64, eager=True).alias(name)
    if part.dtype.kind in "OUT":
        return pl.Series(
            name, [None if v is None or v != v else str(v) for v in part.tolist()], dtype=pl.String
        )
    series = pl.Series(name, np.ascontiguousarray(part))
    return series.fill_nan(None) if part.dtype.kind == "f" else series
