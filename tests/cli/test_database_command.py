"""`aero database` and `aero fly --database` as processes: what they print, write and refuse."""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path
from typing import Any

import pytest

GRID = ["--altitude", "90km:110km:10km", "--speed", "6km/s,7km/s"]


def strict(text: str) -> Any:
    def refuse(name: str) -> float:
        raise AssertionError(f"{name} in JSON")

    return json.loads(text, parse_constant=refuse)


def test_it_says_what_it_wrote_and_how_well_that_interpolates(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    done = run(
        "database", "--vehicle", marram, *GRID, "--angle-of-attack", "-5deg:5deg:5deg", "--out", "m.parquet"
    )
    assert [p.name for p in work.iterdir()] == ["m.parquet"]
    text = " ".join(done.stdout.split())
    assert "18 rows over altitude 90 to 110 km, speed 6 to 7 km/s, angle of attack -5 to 5 deg" in text
    assert "Interpolating drag_coefficient errs by" in text
    assert "along each axis alone: altitude_m" in text
    assert "Wrote m.parquet." in text
    assert "not a basis for sizing thermal protection" in text
    assert max(map(len, done.stdout.splitlines())) <= 100
    assert done.stderr == ""


def test_csv_is_the_long_form_and_json_the_record(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    ask = ["database", "--vehicle", marram, *GRID]
    rows = list(csv.DictReader(io.StringIO(run(*ask, "--format", "csv").stdout)))
    assert len(rows) == 6
    assert list(rows[0])[:4] == ["altitude_m", "air_speed_m_s", "angle_of_attack_deg", "sideslip_deg"]
    assert [r["altitude_m"] for r in rows[:3]] == ["90000.0", "90000.0", "100000.0"]
    answer = strict(run(*ask, "--format", "json").stdout)
    assert answer["rows"] == 6
    assert len(answer["points"]) == 6
    assert answer["points"][4]["drag_coefficient"] == pytest.approx(float(rows[4]["drag_coefficient"]))
    assert answer["vehicle"]["file"] == "marram.toml"
    assert answer["interpolation"]["drag_coefficient"]["largest_error"] > 0.0
    short = strict(run(*ask, "--format", "json", "--out", "folder").stdout)
    assert "points" not in short
    assert sorted(p.name for p in (work / "folder").iterdir()) == [
        "database.csv",
        "database.json",
        "database.parquet",
    ]
    assert strict((work / "folder" / "database.json").read_text()) == {
        key: value for key, value in short.items() if key != "rows"
    }


BAD = {
    "empty grid": (["--altitude", ",", "--speed", "7km/s"], ["--altitude", "no value is given", "60km:200km:5km"]),
    "reversed range": (
        ["--altitude", "200km:60km:5km", "--speed", "7km/s"],
        ["--altitude", "runs down", "write 60km:200km:5km"],
    ),
    "list runs down": (["--altitude", "100km,90km", "--speed", "7km/s"], ["--altitude", "do not rise"]),
    "step of zero": (["--altitude", "60km:90km:0km", "--speed", "7km/s"], ["--altitude", "more than zero"]),
    "no step": (["--altitude", "60km:90km", "--speed", "7km/s"], ["--altitude", "2 parts", "FROM:TO:STEP"]),
    "unknown unit": (["--altitude", "60furlong:90km:5km", "--speed", "7km/s"], ["furlong", "m, km"]),
    "no unit": (["--altitude", "100km", "--speed", "7000"], ["--speed", "no unit", "m/s, km/s"]),
    "angle without unit": ([*GRID, "--angle-of-attack", "0,5deg"], ["--angle-of-attack", "no unit", "deg, rad"]),
    "too many rows": (
        ["--altitude", "60km:200km:100m", "--speed", "1km/s:8km/s:5m/s"],
        ["1401 x 1401 x 1 x 1 combinations make 1962801 rows", "at most 1000000", "larger steps"],
    ),
    "too many values": (["--altitude", "60km:200km:1mm", "--speed", "7km/s"], ["at most 1000000"]),
    "at rest": (["--altitude", "100km", "--speed", "0m/s,1km/s"], ["--speed", "at rest"]),
    "too high": (["--altitude", "2000km", "--speed", "7km/s"], ["2000 km", "1000 km"]),
    "angle out of reach": ([*GRID, "--sideslip", "100deg"], ["--sideslip", "-90 to 90 deg"]),
}  # fmt: skip


@pytest.mark.parametrize("kind", BAD)
def test_bad_grids_leave_nothing(run, work: Path, marram: str, kind: str) -> None:  # type: ignore[no-untyped-def]
    options, expected = BAD[kind]
    done = run("database", "--vehicle", marram, *options, "--out", "m.parquet", code=2)
    said = " ".join(done.stderr.split())
    for part in expected:
        assert part in said
    assert done.stdout == ""
    assert list(work.iterdir()) == []


def test_other_bad_inputs(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    ask = ["database", *GRID]
    assert "no.toml" in run(*ask, "--vehicle", "no.toml", "--out", "m.csv", code=2).stderr
    assert "--vehicle" in run(*ask, "--out", "m.csv", code=2).stderr
    assert "give --out FILE" in run(*ask, "--vehicle", marram, code=2).stderr
    said = run(*ask, "--vehicle", marram, "--out", "m.xlsx", code=2).stderr
    assert "'.xlsx' is not a format of a database" in said
    said = run(*ask, "--vehicle", marram, "--out", "m.csv", "--atmosphere", "msis-2.1", code=2).stderr
    assert "give --date, --latitude and --longitude" in said
    assert list(work.iterdir()) == []
    (work / "m.csv").write_text("mine")
    assert "exists" in run(*ask, "--vehicle", marram, "--out", "m.csv", code=2).stderr
    assert (work / "m.csv").read_text() == "mine"
    run(*ask, "--vehicle", marram, "--out", "m.csv", "--replace")
    assert (work / "m.csv").read_text().startswith("altitude_m,")


FLY = ["fly", "--altitude", "120km", "--speed", "7.6km/s", "--flight-path-angle", "-30deg", "--until", "15s"]


def test_fly_takes_its_coefficients_from_a_database(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    run(
        "database", "--vehicle", marram, "--altitude", "50km:125km:2.5km", "--speed", "7km/s:7.8km/s:200m/s",
        "--out", "m.parquet",
    )  # fmt: skip
    own = strict(run(*FLY, "--vehicle", marram, "--format", "json").stdout)
    done = run(*FLY, "--vehicle", marram, "--database", "m.parquet", "--format", "json", "--out", "f.csv")
    answer = strict(done.stdout)
    # the grid's own stated errors: 0.3 % of drag and 0.5 % of heat flux, over a flight far less
    assert answer["heat_load_J_m2"] == pytest.approx(own["heat_load_J_m2"], rel=5e-3)
    assert answer["final"]["air_speed_m_s"] == pytest.approx(own["final"]["air_speed_m_s"], rel=1e-5)
    assert any("are interpolated in m.parquet; its drag interpolates to" in note for note in answer["notes"])
    assert "marram.toml and m.parquet" in (work / "f.csv").read_text()


@pytest.mark.parametrize(
    ("options", "expected"),
    [
        (["--database", "no.parquet"], ["no.parquet", "no such file"]),
        (["--database", "m.csv", "--perfect-gas"], ["--perfect-gas", "make the database with it"]),
        (["--database", "m.csv", "--wall-temperature", "300K"], ["--wall-temperature"]),
        (["--database", "m.csv", "--ballistic-coefficient", "50kg/m2"], ["--database", "--ballistic-coefficient"]),
        (["--database", "m.csv"], ["m.csv", "has no answer at 120 km, 7.6 km/s", "altitude 90 to 110 km"]),
        (["--database", "m.csv", "--angle-of-attack", "3deg"], ["angle of attack 3 deg", "angle of attack 0 deg"]),
    ],
)  # fmt: skip
def test_fly_says_what_a_database_lacks(  # type: ignore[no-untyped-def]
    run, work: Path, marram: str, options: list[str], expected: list[str]
) -> None:
    run("database", "--vehicle", marram, *GRID, "--out", "m.csv")
    done = run(*FLY, "--vehicle", marram, *options, "--out", "f.csv", code=2)
    said = " ".join(done.stderr.split())
    for part in expected:
        assert part in said
    assert not (work / "f.csv").exists()


def test_fly_needs_the_vehicle_beside_the_database(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    run("database", "--vehicle", marram, *GRID, "--out", "m.csv")
    assert "needs a vehicle" in run(*FLY, "--database", "m.csv", code=2).stderr
    other = work / "other.toml"
    other.write_text(Path(marram).read_text().replace('area = "0.636 m2"', 'area = "0.7 m2"'))
    run("database", "--vehicle", marram, *GRID, "--out", "m.parquet")
    said = run(*FLY, "--vehicle", str(other), "--database", "m.parquet", code=2).stderr
    assert "made on a reference area of 0.636 m2, and the vehicle has 0.7 m2" in said
