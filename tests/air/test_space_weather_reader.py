"""The reader of daily indices: what it takes and what it says about what it cannot take."""

from __future__ import annotations

import pickle

import numpy as np
import pytest

from aero.air import Msis, read_space_weather
from aero.air.space_weather import pack, shipped
from aero.errors import InputError

HEADER = "date,ap1,ap2,ap3,ap4,ap5,ap6,ap7,ap8,Ap,f107,f107a,f107_flag"
ROWS = [f"2024-05-{d:02d},{d},2,3,4,5,6,7,8,5,{150 + d}.5,170.2,0" for d in range(8, 16)]


def _file(tmp_path, rows=ROWS, header=HEADER, name="mine.csv"):
    path = tmp_path / name
    path.write_text("\n".join(["# my indices", header, *rows]) + "\n", encoding="utf-8")
    return path


def test_reads_what_is_there(tmp_path):
    history = read_space_weather(_file(tmp_path))
    assert history.source == "mine.csv"
    assert history.ap3[:8].tolist() == [8, 2, 3, 4, 5, 6, 7, 8]
    assert history.f107[:2].tolist() == [158.5, 159.5]
    assert history.forecast is None
    assert len(history.digest) == 64


def test_drives_msis_in_storm_mode_and_ends_with_the_file(tmp_path):
    model = Msis(space_weather=_file(tmp_path))
    utc = np.datetime64("2024-05-12T10:00")
    i = model.indices(np.array([utc], "datetime64[us]"))
    assert i.ap[0].tolist() == [
        5,
        4,
        3,
        2,
        12,
        pytest.approx((11 * 1 + 2 + 3 + 4 + 5 + 6 + 7 + 8) / 8),
        5.625,
    ]
    place = {"latitude_deg": 0, "longitude_deg": 0}
    same = Msis(f107=i.f107[0], f107a=i.f107a[0], ap=tuple(i.ap[0])).at(3e5, utc=utc, **place)
    assert model.at(3e5, utc=utc, **place).density == same.density
    assert "mine.csv" in model.description
    assert model.provenance()["indices"] == "mine.csv"
    with pytest.raises(
        InputError, match=r"mine.csv: indices are known from 2024-05-10T09h to 2024-05-15 UTC"
    ):
        model.at(3e5, utc=np.datetime64("2024-05-16"), **place)
    again = pickle.loads(pickle.dumps(model))
    assert again.at(3e5, utc=utc, **place).density == same.density


def _swap(line, column, text):
    rows = [row.split(",") for row in ROWS]
    rows[line][column] = text
    return [",".join(row) for row in rows]


@pytest.mark.parametrize(
    ("rows", "message"),
    [
        (_swap(2, 3, "x"), "mine.csv, line 5: column 'ap3' holds 'x', expected a number from 0 to 400."),
        (_swap(2, 3, "401"), "line 5: column 'ap3' holds '401'"),
        (_swap(2, 10, "-1"), "line 5: column 'f107' holds '-1', expected a number above 0"),
        (_swap(2, 11, "nan"), "line 5: column 'f107a' holds 'nan'"),
        (_swap(2, 9, ""), "line 5: column 'Ap' holds ''"),
        (_swap(2, 0, "10/05/2024"), "line 5: column 'date' holds '10/05/2024', expected a date"),
        (
            _swap(2, 0, "2024-05-11"),
            "line 5: column 'date' holds 2024-05-11 after 2024-05-09, expected the next day",
        ),
        (_swap(2, 12, "0,9"), "line 5: 14 fields, expected 13"),
        ([], "holds a header but no days"),
    ],
)
def test_malformed_rows(tmp_path, rows, message):
    with pytest.raises(InputError) as caught:
        read_space_weather(_file(tmp_path, rows))
    assert message in str(caught.value)


def test_missing_and_repeated_columns(tmp_path):
    with pytest.raises(InputError, match="column 'f107a' stands 0 times in the header, expected once"):
        read_space_weather(_file(tmp_path, header=HEADER.replace("f107a", "F107A")))
    with pytest.raises(InputError, match="column 'ap1' stands 2 times"):
        read_space_weather(_file(tmp_path, header=HEADER.replace("ap2", "ap1")))


def test_unreadable_files(tmp_path):
    with pytest.raises(InputError, match=r"gone\.csv: cannot be read"):
        read_space_weather(tmp_path / "gone.csv")
    (tmp_path / "empty.csv").write_text("# nothing\n")
    with pytest.raises(InputError, match=r"empty\.csv: holds no rows"):
        read_space_weather(tmp_path / "empty.csv")
    (tmp_path / "binary.csv").write_bytes(b"\xff\xfe\x00\x81")
    with pytest.raises(InputError, match="is not UTF-8 text"):
        read_space_weather(tmp_path / "binary.csv")


def test_packing_loses_nothing(tmp_path):
    monthly = tmp_path / "monthly.csv"
    monthly.write_text("# forecast\nmonth,f107,f107a\n2024-06-01,163.4,146.2\n2024-07-01,162.5,161.0\n")
    target = tmp_path / "packed.npz"
    pack(_file(tmp_path), monthly, target)
    history = read_space_weather(_file(tmp_path))
    with np.load(target) as data:
        np.testing.assert_array_equal(data["ap3"].reshape(-1), history.ap3)
        np.testing.assert_array_equal(data["f107"] / 10.0, history.f107)
        np.testing.assert_array_equal(data["month_f107a"] / 10.0, [146.2, 161.0])
        assert data["month"].astype("datetime64[M]").astype(str).tolist() == ["2024-06", "2024-07"]


def test_shipped_history_is_whole():
    history = shipped()
    assert np.datetime64(history.first_day, "D") == np.datetime64("1957-10-01")
    assert np.datetime64(history.last_day, "D") == np.datetime64("2025-07-20")
    assert history.ap3.size == 8 * history.ap.size == 8 * 24765
    assert history.forecast is not None
    assert history.forecast.f107.size == 194
