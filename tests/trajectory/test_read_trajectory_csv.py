"""CSV and TSV files that must read, and what is said of them."""

from __future__ import annotations

import importlib
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.trajectory import read_trajectory
from aero.trajectory.columns import lay_out
from aero.trajectory.csv_head import read_head
from aero.trajectory.csv_rows import Rows, careful_columns, fast_columns

DATA = Path(__file__).parents[1] / "data"
PLAIN = "time_s,altitude_km,speed_m_s\n0,100,7000\n1,99,7001\n"


def _read(tmp_path: Path, content: str | bytes, name: str = "a.csv", **options: object):  # type: ignore[no-untyped-def]
    path = tmp_path / name
    path.write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
    return read_trajectory(path, **options)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    "content",
    [
        PLAIN,
        "\ufeff" + PLAIN,
        PLAIN.replace("\n", "\r\n"),
        PLAIN.replace("\n", "\r"),
        PLAIN + "\n \n\n",
        PLAIN + ",,\n,,\n",
        PLAIN.removesuffix("\n"),
        "\n# comment: any\n" + PLAIN,
        PLAIN.replace(",", ";"),
        PLAIN.replace(",", "\t"),
        PLAIN.replace(",", ", "),
        PLAIN.replace("\n", ",\n"),
        '"time_s","altitude\n[km]","speed_m_s"\n"0","100","7000"\n"1","99","7001"\n',
        "TIME_S,ALTITUDE_KM,VELOCITY (M/S)\n0,100,7000\n1,99,7001\n",
        "speed [km/s],elapsed time [min],alt (m)\n7.000,0,1e5\n7.001,0.016666666666666666,99000\n",
    ],
)
def test_the_same_flight_in_many_spellings(tmp_path: Path, content: str) -> None:
    flight = _read(tmp_path, content)
    assert flight.time is not None
    np.testing.assert_allclose(flight.time, [0.0, 1.0], rtol=1e-15)
    assert flight.altitude.tolist() == [100e3, 99e3]
    np.testing.assert_allclose(flight.speed, [7000.0, 7001.0], rtol=1e-15)
    assert flight.extra == {}
    assert flight.skipped == ()


def test_units_and_every_meaning(tmp_path: Path) -> None:
    flight = _read(
        tmp_path,
        "t [ms],h [kft],v [km/h],lat_deg,lon [rad],fpa_deg,azimuth_deg,alpha [mrad],beta_deg,Tw [degC]\n"
        "0,100,36,45,1,-5,90,100,2,20\n10,100,36,-45,2,-5,90,100,2,20\n",
    )
    assert flight.time is not None
    assert flight.time.tolist() == [0.0, 0.01]
    assert flight.altitude[0] == pytest.approx(30480.0, rel=1e-15)  # 0.3048 m exactly
    assert flight.speed[0] == pytest.approx(10.0, rel=1e-15)
    expected = {
        "latitude": np.pi / 4,
        "longitude": 1.0,
        "flight_path_angle": np.radians(-5),
        "heading": np.pi / 2,
        "angle_of_attack": 0.1,
        "sideslip": np.radians(2),
        "wall_temperature": 293.15,
    }
    for name, value in expected.items():
        assert getattr(flight, name)[0] == pytest.approx(value, rel=1e-15), name


def test_metadata_lines(tmp_path: Path) -> None:
    flight = _read(
        tmp_path,
        '# Epoch: 2026-03-01T12:00:00Z,,\n"# latitude: 45 deg"\n# Longitude: 350 deg\n# a remark\n'
        "# https://example.org/flight\n# source: simulation 7\n" + PLAIN,
    )
    assert flight.epoch == np.datetime64("2026-03-01T12:00:00", "us")
    assert flight.utc is not None
    assert flight.utc[1] == np.datetime64("2026-03-01T12:00:01", "us")
    assert flight.latitude is not None
    assert flight.latitude.tolist() == [np.pi / 4, np.pi / 4]
    assert flight.longitude is not None
    np.testing.assert_allclose(np.degrees(flight.longitude), 350.0, rtol=1e-15)
    assert flight.notes == (
        "metadata key 'source' is not known and was not used",
        "the velocity frame is not stated: "
        "speeds are taken as relative to the air, which turns with the Earth",
    )


def test_a_stated_frame_needs_no_note(tmp_path: Path) -> None:
    assert _read(tmp_path, "# velocity frame: air\n" + PLAIN).notes == ()
    assert _read(tmp_path, PLAIN.replace("speed", "air_speed")).notes == ()


@pytest.mark.parametrize(
    "dates",
    [
        ("2026-03-01T23:59:59.5Z", "2026-03-02T00:00:00Z"),
        ("2026-03-01 23:59:59.500000", "2026-03-02"),
        ("2026-060T23:59:59.5", "2026-061T00:00"),
    ],
)
@pytest.mark.parametrize("header", ["utc", "time", "Time [UTC]", "date"])
def test_dates_for_times(tmp_path: Path, dates: tuple[str, str], header: str) -> None:
    flight = _read(tmp_path, f"{header},altitude_km,speed_m_s\n{dates[0]},100,7\n{dates[1]},99,7\n")
    assert flight.epoch == np.datetime64("2026-03-01T23:59:59.5", "us")
    assert flight.time is not None
    assert flight.time.tolist() == [0.0, 0.5]
    assert flight.utc is not None
    assert flight.utc[1] == np.datetime64("2026-03-02", "us")


def test_an_epoch_moves_time_zero_of_dates(tmp_path: Path) -> None:
    flight = _read(
        tmp_path, "# epoch: 2026-03-01\nutc,altitude_km,speed_m_s\n2026-03-02,1,7\n2026-03-03,2,7\n"
    )
    assert flight.time is not None
    assert flight.time.tolist() == [86400.0, 172800.0]


def test_a_date_for_time_zero_is_used_only_where_the_file_has_none(tmp_path: Path) -> None:
    assert _read(tmp_path, PLAIN, time_zero="2026-03-01").epoch == np.datetime64("2026-03-01", "us")
    flight = _read(tmp_path, "# epoch: 2025-01-01\n" + PLAIN, time_zero="2026-03-01")
    assert flight.epoch == np.datetime64("2025-01-01", "us")
    assert "the file has its own dates: the date given for time 0 was not used" in flight.notes


def test_without_times_points_stand_alone(tmp_path: Path) -> None:
    flight = _read(tmp_path, "altitude_km,speed_m_s\n100,7000\n100,7000\n", time_zero="2026-03-01")
    assert flight.time is None
    assert "no time column: points are taken one by one, without segments or loads" in flight.notes
    assert flight.utc is not None
    assert flight.utc.tolist() == [np.datetime64("2026-03-01", "us").item()] * 2


def test_a_long_step_is_noted(tmp_path: Path) -> None:
    rows = "".join(f"{time},100,7000\n" for time in (0, 1, 2, 3, 13.5, 14.5, 24.5))
    flight = _read(tmp_path, "time_s,altitude_km,air_speed_m_s\n" + rows)
    assert flight.notes == (
        "1 time step is over 10 times the median of 1 s; the largest, 10.5 s, begins at 3 s",
    )


def test_unknown_columns_are_carried_unchanged(tmp_path: Path) -> None:
    flight = _read(
        tmp_path,
        "altitude_km,speed_m_s,phase,T [K],mode,code,day,gap,none,ok\n"
        '1,2,"entry, hot",200.5,3,007,2026-03-01,1,,true\n2,3,drogue,201,4,008,2026-03-02,,,false\n',
    )
    assert list(flight.extra) == ["phase", "T [K]", "mode", "code", "day", "gap", "none", "ok"]
    assert flight.extra["phase"].tolist() == ["entry, hot", "drogue"]
    assert flight.extra["T [K]"].tolist() == [200.5, 201.0]
    assert flight.extra["mode"].dtype == np.int64
    assert flight.extra["code"].tolist() == ["007", "008"]
    assert flight.extra["day"].tolist() == ["2026-03-01", "2026-03-02"]
    np.testing.assert_array_equal(flight.extra["gap"], [1.0, np.nan])
    assert np.isnan(flight.extra["none"]).all()
    assert flight.extra["ok"].tolist() == ["true", "false"]


def test_a_slip_in_an_optional_header_is_noted(tmp_path: Path) -> None:
    flight = _read(tmp_path, "altitude_km,air_speed_m_s,latitud_deg\n1,2,3\n2,3,4\n")
    assert flight.latitude is None
    assert (
        "column 'latitud_deg' has no known meaning and is carried through; did you mean 'latitude'?"
        in flight.notes
    )


def test_tabs_are_told_from_commas_by_the_header(tmp_path: Path) -> None:
    flight = _read(tmp_path, "altitude_km\tspeed_m_s\twhere, when\n1\t2\tx\n2\t3\ty\n", name="a.csv")
    assert list(flight.extra) == ["where, when"]


def test_line_numbers_hold_past_blank_lines_and_long_cells(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r", line 8: column 'altitude_km' holds 'x', expected a number"):
        _read(
            tmp_path,
            '# comment: a\n"altitude_km","speed_m_s","what"\r\n1,2,"two\r\nlines"\n\n\r1,2,z\rx,2,y\r2,2,y\n',
        )


def test_geopotential_and_inertial_are_turned_and_noted(tmp_path: Path) -> None:
    flight = _read(
        tmp_path,
        "# flight-path angle: 0 deg\n# heading: 90 deg\n# latitude: 0 deg\n"
        "geopotential altitude [m],inertial speed [m/s]\n84852,7000\n0,7000\n",
    )
    # 86 km is 84,852 geopotential metres: U.S. Standard Atmosphere, 1976, printed to the metre.
    assert flight.altitude[0] == pytest.approx(86000.0, abs=0.6)
    assert flight.speed[1] == pytest.approx(7000 - 465.101, abs=6e-4)
    assert flight.velocity_frame == "inertial"
    assert flight.notes[0] == "geopotential altitudes were turned into geodetic ones: +0.000 to +1.148 km"
    assert flight.notes[1] == "inertial speeds were turned into air-relative ones: -471.4 to -465.1 m/s"


@pytest.mark.parametrize(
    ("name", "points", "top", "last"),
    [("ascent_upper_stage", 412, 210e3, 548.234), ("booster_up_and_down", 338, 120e3, 464.03)],
)
def test_real_flights_read_as_they_are(name: str, points: int, top: float, last: float) -> None:
    flight = read_trajectory(DATA / f"{name}.csv")
    assert (len(flight), flight.altitude.max()) == (points, top)
    assert flight.time is not None
    assert flight.time[-1] == pytest.approx(last, abs=2.0)
    assert (np.diff(flight.altitude) == 0).sum() > 50  # the staircase is kept, not smoothed
    assert flight.skipped == ()


CELL = st.one_of(
    st.integers(-10, 2000).map(str),
    st.floats(-10, 2000).map(repr),
    st.sampled_from(["", "nan", "x", "1e400", "1_0", " 5 ", "+3", "-0", "0x1", "1,5", "Infinity"]),
)


@settings(max_examples=150, deadline=None)
@given(st.lists(st.tuples(CELL, CELL, CELL), min_size=1, max_size=6), st.booleans())
def test_the_fast_way_reads_what_the_careful_way_reads(rows: list[tuple[str, ...]], quoted: bool) -> None:
    mark = '"' if quoted else ""
    text = "altitude_km;speed_m_s;other\n" + "".join(
        ";".join(f"{mark}{cell}{mark}" for cell in row) + "\n" for row in rows
    )
    data = text.encode()
    head = read_head(data, "a")
    layout = lay_out(head.headers, source="a")
    taken = Rows(data, head, "a")
    fast, careful = fast_columns(data, head, layout, taken.first), careful_columns(taken, head, layout)
    if fast is None:
        return
    assert fast.count == careful.count
    assert not careful.broken
    for place in range(3):
        assert fast.values[place].dtype == careful.values[place].dtype
        np.testing.assert_array_equal(fast.values[place], careful.values[place])


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(-5, 1000), min_size=2, max_size=5))
def test_numbers_come_through_bit_by_bit(
    tmp_path_factory: pytest.TempPathFactory, values: list[float]
) -> None:
    path = tmp_path_factory.mktemp("bits") / "a.csv"
    path.write_text("altitude_m,speed_m_s\n" + "".join(f"{value!r},1\n" for value in values))
    assert read_trajectory(path).altitude.tolist() == values


def test_all_is_read_in_the_fast_way_where_nothing_is_wrong(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def refuse(*_: object) -> None:
        raise AssertionError("rows were read one by one")

    monkeypatch.setattr(importlib.import_module("aero.trajectory.read_csv"), "careful_columns", refuse)
    assert len(_read(tmp_path, PLAIN)) == 2
    assert len(_read(tmp_path, "utc,altitude_m,speed_m_s\n2026-01-01T00:00:00Z,1,2\n2026-01-02,1,2\n")) == 2
