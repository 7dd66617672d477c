"""What is written reads back as it was; and the object itself."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import aero.trajectory
import aero.trajectory.write as module
from aero.trajectory import Trajectory, read_trajectory, write_trajectory
from aero.trajectory.meanings import MEANINGS

DATA = Path(__file__).parents[1] / "data"


def _flight(**change: Any) -> Trajectory:
    random = np.random.default_rng(7)
    count = 50
    degrees = {
        "latitude": random.uniform(-90, 90, count),
        "longitude": random.uniform(-180, 360, count),
        "flight_path_angle": random.uniform(-90, 90, count),
        "heading": random.uniform(0, 360, count),
        "angle_of_attack": random.uniform(-180, 180, count),
        "sideslip": random.uniform(-20, 20, count),
    }
    given: dict[str, Any] = {
        "name": "Steep, \"first\" <return>;",
        "time": np.cumsum(random.uniform(0.01, 3, count)),
        "epoch": np.datetime64("2026-03-01T12:00:00.123456", "us"),
        "altitude": random.uniform(-5e3, 1e6, count),
        "speed": random.uniform(0, 12e3, count),
        **{name: values * (np.pi / 180) for name, values in degrees.items()},
        "wall_temperature": random.uniform(200, 3000, count),
        "extra": {
            "phase": np.array(["entry, hot", 'a "quote"', "", "ü\nx", " b "] * 10, dtype=object),
            "mode": np.arange(count),
            "load [-]": np.where(np.arange(count) % 3 == 0, np.nan, random.uniform(0, 1, count)),
        },
    }  # fmt: skip
    return Trajectory(**(given | change))


def _same(one: Trajectory, two: Trajectory) -> None:
    assert (one.name, one.epoch, one.velocity_frame) == (two.name, two.epoch, two.velocity_frame)
    for meaning in MEANINGS.values():
        np.testing.assert_array_equal(getattr(one, meaning.field), getattr(two, meaning.field), meaning.name)
    assert list(one.extra) == list(two.extra)
    for name, values in one.extra.items():
        np.testing.assert_array_equal(values, two.extra[name], name)


@pytest.mark.parametrize("suffix", module.WRITTEN)
@pytest.mark.parametrize(
    "change",
    [
        {},
        {"time": None},
        {"epoch": None, "extra": {}},
        dict.fromkeys(("latitude", "heading")),
    ],
)
def test_written_and_read_is_the_same_bit_by_bit(tmp_path: Path, suffix: str, change: dict[str, Any]) -> None:
    flight = _flight(**change)
    path = tmp_path / f"a{suffix}"
    write_trajectory(flight, path)
    back = read_trajectory(path)
    _same(back, flight)
    assert [note for note in back.notes if "no time" not in note] == []
    assert [entry.name for entry in tmp_path.iterdir()] == [path.name]  # nothing left beside it


@pytest.mark.parametrize("suffix", module.WRITTEN)
@pytest.mark.parametrize("name", ["ascent_upper_stage", "booster_up_and_down"])
def test_real_flights_come_round(tmp_path: Path, name: str, suffix: str) -> None:
    flight = read_trajectory(DATA / f"{name}.csv")
    write_trajectory(flight, tmp_path / f"{name}{suffix}", comments=["copied", "two\nlines"])
    _same(read_trajectory(tmp_path / f"{name}{suffix}"), flight)


@settings(max_examples=200)
@given(st.floats(-90, 90))
def test_angles_from_degrees_come_back_exactly(degrees: float) -> None:
    radians = np.array([degrees * (np.pi / 180)])
    assert (module._degrees(radians) * (np.pi / 180) == radians).all()


@settings(max_examples=200)
@given(st.floats(-1.5, 1.5).filter(lambda value: abs(value) > 1e-300))
def test_angles_of_any_origin_come_back_to_the_last_bit_or_one_off(radians: float) -> None:
    back = module._degrees(np.array([radians]))[0] * (np.pi / 180)
    assert abs(back - radians) <= np.spacing(abs(radians))


def test_inertial_is_written_as_air_relative(tmp_path: Path) -> None:
    path = tmp_path / "a.csv"
    path.write_text(
        "# velocity frame: inertial\n# latitude: 10 deg\n# heading: 30 deg\n# flight-path angle: -5 deg\n"
        "altitude_km,speed_m_s\n100,7000\n90,7000\n"
    )
    flight = read_trajectory(path)
    write_trajectory(flight, path, replace=True)
    back = read_trajectory(path)
    assert back.velocity_frame == "air"
    np.testing.assert_array_equal(back.speed, flight.speed)
    # angles that were computed: last bit or one off
    np.testing.assert_allclose(back.flight_path_angle, flight.flight_path_angle, rtol=3e-16)  # type: ignore[arg-type]


def test_a_failure_leaves_nothing_and_keeps_the_old(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "a.csv"
    path.write_text("old")

    def fail(*_: object, **__: object) -> None:
        raise OSError("no space left")

    monkeypatch.setattr(module, "_write_text", fail)
    with pytest.raises(OSError, match="no space left"):
        write_trajectory(_flight(), path, replace=True)
    assert path.read_text() == "old"
    assert [entry.name for entry in tmp_path.iterdir()] == ["a.csv"]


def test_the_same_flight_gives_the_same_bytes(tmp_path: Path) -> None:
    for suffix in module.WRITTEN:
        write_trajectory(_flight(), tmp_path / f"a{suffix}")
        write_trajectory(_flight(), tmp_path / f"b{suffix}")
        assert (tmp_path / f"a{suffix}").read_bytes() == (tmp_path / f"b{suffix}").read_bytes()


def test_a_carried_column_may_not_pose_as_another(tmp_path: Path) -> None:
    flight = _flight(extra={"alt [ft]": np.zeros(50)})
    with pytest.raises(ValueError, match=r"carried column 'alt \[ft\]' is named like one with a meaning"):
        write_trajectory(flight, tmp_path / "a.csv")


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"time": None, "altitude": None}, "altitude is required"),
        ({"speed": np.zeros(3)}, r"speed has shape \(3,\), expected \(50,\)"),
        ({"speed": np.full(50, -1.0)}, r"expected a speed from 0 to 100 km/s; 50 of 50 values of speed are not "
         r"\(first: index 0, -1 in SI units\)"),
        ({"time": np.zeros(50)}, "times must increase strictly"),
        ({"latitude": np.full(50, np.nan)}, "expected a latitude"),
        ({"extra": {"x": np.zeros(2)}}, r"column 'x' has shape \(2,\), expected \(50,\)"),
    ],
)  # fmt: skip
def test_a_wrong_trajectory_cannot_be_made(change: dict[str, Any], message: str) -> None:
    with pytest.raises(ValueError, match=message):
        _flight(**change)


def test_the_object_is_read_only_and_describes_itself() -> None:
    flight = _flight()
    with pytest.raises(ValueError, match="read-only"):
        flight.altitude[0] = 0.0
    with pytest.raises(ValueError, match="read-only"):
        flight.extra["mode"][0] = 0
    assert str(flight).startswith('Steep, "first" <return>;: 50 points, ')
    assert "epoch 2026-03-01T12:00:00.123456Z" in str(flight)
    assert "&lt;return&gt;" in flight._repr_html_()
    assert str(Trajectory(name="none", altitude=[], speed=[])) == "none: 0 points"  # type: ignore[arg-type]


def test_a_part_shares_memory() -> None:
    flight = _flight()
    part = flight.part(slice(10, 20))
    assert len(part) == 10
    assert np.shares_memory(part.altitude, flight.altitude)
    assert part.extra["mode"].tolist() == list(range(10, 20))
    assert part.utc is not None
    assert flight.utc is not None
    assert part.utc[0] == flight.utc[10]


def test_public_names() -> None:
    assert aero.trajectory.__all__ == [
        "ALTITUDE_KINDS",
        "READERS",
        "VELOCITY_FRAMES",
        "Skipped",
        "Trajectory",
        "air_relative",
        "inertial",
        "parquet_pieces",
        "read_csv",
        "read_parquet",
        "read_trajectory",
        "write_trajectory",
    ]
    assert all(hasattr(aero.trajectory, name) for name in aero.trajectory.__all__)
