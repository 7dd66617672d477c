"""Parquet files: types, metadata, pieces, messages."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pyarrow as pa
import pytest
from pyarrow import parquet

from aero.errors import InputError
from aero.trajectory import parquet_pieces, read_trajectory

COUNT = 10
TIME = np.arange(COUNT, dtype=float)
COLUMNS: dict[str, Any] = {
    "time_s": TIME,
    "altitude_km": np.linspace(120, 30, COUNT),
    "air_speed_m_s": np.linspace(7500, 900, COUNT),
}


def _write(
    path: Path, columns: dict[str, Any], metadata: dict[str, str] | None = None, **options: Any
) -> Path:
    parquet.write_table(pa.table(columns).replace_schema_metadata(metadata), path, **options)
    return path


def test_columns_metadata_and_other_number_types(tmp_path: Path) -> None:
    columns = COLUMNS | {
        "altitude_km": np.arange(COUNT, dtype=np.int32),
        "latitude_deg": np.full(COUNT, 45, dtype=np.float32),
        "mode": pa.array(["a", "b"] * 5).dictionary_encode(),
        "ids": pa.array([[1], [2]] * 5),
        "__index_level_0__": np.arange(COUNT),
    }
    told = {"epoch": "2026-03-01", "heading": "90 deg", "pandas": "{}", "maker": "us", "name": "One"}
    flight = read_trajectory(_write(tmp_path / "a.parquet", columns, told))
    assert flight.name == "One"
    assert flight.altitude.tolist() == [1e3 * value for value in range(COUNT)]
    assert flight.latitude is not None
    assert flight.latitude[0] == np.pi / 4
    assert flight.heading is not None
    assert flight.heading[0] == np.pi / 2
    assert flight.epoch == np.datetime64("2026-03-01", "us")
    assert list(flight.extra) == ["mode", "ids"]
    assert flight.extra["mode"].tolist() == ["a", "b"] * 5
    assert flight.extra["ids"][1] == [2]
    assert flight.notes == ("metadata key 'maker' is not known and was not used",)


@pytest.mark.parametrize("unit", ["s", "ms", "us", "ns"])
@pytest.mark.parametrize("zone", [None, "UTC", "Europe/Paris"])
def test_timestamps(tmp_path: Path, unit: str, zone: str | None) -> None:
    count = 1000 if unit == "ns" else 1  # dates are kept to the microsecond
    moments = np.datetime64("2026-03-01T12:00:00", unit) + count * np.arange(COUNT).astype(
        f"timedelta64[{unit}]"
    )
    columns = {"time": pa.array(moments).cast(pa.timestamp(unit, zone))} | COLUMNS
    del columns["time_s"]
    flight = read_trajectory(_write(tmp_path / "a.parquet", columns))
    assert flight.epoch == np.datetime64("2026-03-01T12:00:00", "us")
    step = np.timedelta64(count, unit) / np.timedelta64(1, "s")
    assert flight.time is not None
    np.testing.assert_allclose(flight.time, step * np.arange(COUNT), atol=1e-12)


@pytest.mark.parametrize("kind", [pa.string(), pa.large_string()])
def test_dates_as_text(tmp_path: Path, kind: pa.DataType) -> None:
    columns = {"utc": pa.array([f"2026-03-{day:02}T00:00:00Z" for day in range(1, 11)], kind)} | COLUMNS
    del columns["time_s"]
    flight = read_trajectory(_write(tmp_path / "a.parquet", columns))
    assert flight.time is not None
    assert flight.time.tolist() == [86400.0 * day for day in range(10)]


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"altitude_km": pa.array([1.0, None] * 5)}, ", row 2: column 'altitude_km' is empty, expected an altitude "
         "from -5 to 1000 km (4 more bad rows after it); mend the row or pass --skip-bad-rows."),
        ({"altitude_km": [1.0] * 9 + [np.nan]}, ", row 10: column 'altitude_km' holds 'nan', expected a number; "
         "mend the row or pass --skip-bad-rows."),
        ({"air_speed_m_s": [1.0] * 9 + [-1.0]}, ", row 10: column 'air_speed_m_s' holds '-1.0', expected a speed "
         "from 0 to 100 km/s; mend the row or pass --skip-bad-rows."),
        ({"time_s": [0.0] * 10}, ", row 2: column 'time_s' holds '0.0', which repeats '0.0' of row 1, expected "
         "increasing times (8 more bad rows after it); remove one of the rows or pass --skip-bad-rows."),
        ({"altitude_km": ["1"] * 10}, ": column 'altitude_km' is of type string, expected numbers; "
         "write the column as numbers."),
        ({"time": [True] * 10, "time_s": None}, ": column 'time' is of type bool, expected dates; "
         "write the column as dates."),
        ({"time": TIME, "time_s": None}, ": column 'time' states no unit, expected one of time in brackets or as a "
         "suffix, such as 'time [s]', or dates in ISO 8601 such as '2026-03-01T12:00:00Z'; "
         "use one of: s, ms, min, h, d, days, yr."),
        ({"time": ["soon"] * 10, "time_s": None}, ", row 1: column 'time' holds 'soon', expected a UTC date in "
         "ISO 8601 such as '2026-03-01T12:00:00Z' (9 more bad rows after it); "
         "mend the row or pass --skip-bad-rows."),
    ],
)  # fmt: skip
def test_bad_columns(tmp_path: Path, change: dict[str, Any], message: str) -> None:
    columns = {name: values for name, values in (COLUMNS | change).items() if values is not None}
    path = _write(tmp_path / "a.parquet", columns)
    with pytest.raises(InputError) as caught:
        read_trajectory(path)
    assert str(caught.value) == f"{path}{message}"


def test_no_rows_and_bad_metadata(tmp_path: Path) -> None:
    empty = {name: values[:0] for name, values in COLUMNS.items()}
    with pytest.raises(InputError, match=r"has no rows, expected at least two; give the rows\.$"):
        read_trajectory(_write(tmp_path / "a.parquet", empty))
    with pytest.raises(
        InputError, match=r"b\.parquet: metadata key 'velocity fram' is not known; did you mean"
    ):
        read_trajectory(_write(tmp_path / "b.parquet", COLUMNS, {"velocity_fram": "air"}))


def test_the_content_decides_not_the_name(tmp_path: Path) -> None:
    assert len(read_trajectory(_write(tmp_path / "a.dat", COLUMNS))) == COUNT


@pytest.mark.parametrize(("rows", "group"), [(3, 4), (100, 4), (4, 100), (1, 100)])
def test_pieces_are_the_whole(tmp_path: Path, rows: int, group: int) -> None:
    path = _write(
        tmp_path / "a.parquet", COLUMNS | {"mode": np.arange(COUNT)}, {"maker": "us"}, row_group_size=group
    )
    whole = read_trajectory(path)
    pieces = list(parquet_pieces(path, rows=rows, time_zero="2026-03-01"))
    assert max(len(piece) for piece in pieces) <= rows
    for name in ("time", "altitude", "speed"):
        np.testing.assert_array_equal(
            np.concatenate([getattr(p, name) for p in pieces]), getattr(whole, name)
        )
    np.testing.assert_array_equal(np.concatenate([p.extra["mode"] for p in pieces]), whole.extra["mode"])
    assert {piece.digest for piece in pieces} == {whole.digest}
    assert {piece.epoch for piece in pieces} == {np.datetime64("2026-03-01", "us")}
    assert pieces[0].notes == whole.notes
    assert all(piece.notes == () for piece in pieces[1:])


def test_times_go_on_from_piece_to_piece(tmp_path: Path) -> None:
    start = np.datetime64("2026-03-01T00:00:00", "us")
    moments = start + TIME.astype("timedelta64[s]")
    columns = {"utc": moments, "altitude_km": TIME, "air_speed_m_s": TIME}
    pieces = list(parquet_pieces(_write(tmp_path / "a.parquet", columns), rows=4))
    np.testing.assert_array_equal(np.concatenate([piece.time for piece in pieces]), TIME)  # type: ignore[misc]
    bad = COLUMNS | {"time_s": np.r_[TIME[:5], 4.0, TIME[6:]]}
    path = _write(tmp_path / "b.parquet", bad)
    with pytest.raises(
        InputError, match=r"row 6: column 'time_s' holds '4.0', which repeats the last time before"
    ):
        list(parquet_pieces(path, rows=5))
    pieces = list(parquet_pieces(path, rows=5, skip_bad_rows=True))
    assert [skip.line for piece in pieces for skip in piece.skipped] == [6]
    assert sum(len(piece) for piece in pieces) == COUNT - 1


def test_pieces_of_too_little(tmp_path: Path) -> None:
    one = {name: values[:1] for name, values in COLUMNS.items()}
    with pytest.raises(
        InputError, match=r"holds 1 good point, expected at least 2; give the whole trajectory"
    ):
        list(parquet_pieces(_write(tmp_path / "a.parquet", one)))


def test_the_dates_of_a_data_frames_index_are_its_times(tmp_path):
    frame = pd.DataFrame(
        {"altitude_m": [1e5, 9e4, 8e4], "speed_m_s": [7e3] * 3},
        index=pd.date_range("2026-03-01", periods=3, freq="s"),
    )
    frame.to_parquet(tmp_path / "flight.parquet")
    flight = read_trajectory(tmp_path / "flight.parquet")
    assert flight.time.tolist() == [0.0, 1.0, 2.0]
    assert flight.epoch == np.datetime64("2026-03-01")
