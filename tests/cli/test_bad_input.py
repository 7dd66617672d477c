"""Kinds of bad input: each gives one clear message, exit code 2, and leaves nothing behind."""

from __future__ import annotations

from pathlib import Path

import pytest

from aero.errors import InputError

VEHICLE = """name = "body"
mass = "38 kg"
[reference]
area = "0.636 m2"
length = "0.9 m"
[shape]
kind = "sphere"
diameter = "0.9 m"
"""
FLIGHT = "time [s],altitude [km],speed [m/s]\n0,120,7500\n1,119,7500\n2,118,7490\n"

PLACE = ["--date", "2026-03-01", "--latitude", "0deg", "--longitude", "0deg"]
FLY = ["fly", "--ballistic-coefficient", "50kg/m2", "--altitude", "120km", "--speed", "7.6km/s"]

# name -> (trajectory text, vehicle text, further options, what the message must hold)
SURVEYS: dict[str, tuple[str | None, str | None, list[str], list[str]]] = {
    "no such trajectory": (None, VEHICLE, [], ["flight.csv", "no such file"]),
    "no such vehicle": (FLIGHT, None, [], ["body.toml", "No such file"]),
    "empty file": ("", VEHICLE, [], ["flight.csv", "empty"]),
    "header alone": ("time [s],altitude [km],speed [m/s]\n", VEHICLE, [], ["flight.csv", "two rows"]),
    "one point": (
        "time [s],altitude [km],speed [m/s]\n0,120,7500\n",
        VEHICLE,
        [],
        ["flight.csv", "at least 2"],
    ),
    "altitude without unit": (
        FLIGHT.replace("altitude [km]", "altitude"),
        VEHICLE,
        [],
        ["altitude", "m, km"],
    ),
    "unknown unit": (FLIGHT.replace("[km]", "[furlong]"), VEHICLE, [], ["furlong", "m, km"]),
    "no speed": ("time [s],altitude [km]\n0,120\n1,119\n", VEHICLE, [], ["speed"]),
    "two columns of one meaning": (
        "time [s],altitude [km],altitude [m],speed [m/s]\n0,120,120000,7500\n1,119,119000,7500\n",
        VEHICLE,
        [],
        ["altitude [km]", "altitude [m]"],
    ),
    "text in a number": (
        FLIGHT.replace("119,7500", "n/a,7500"),
        VEHICLE,
        [],
        ["line 3", "n/a", "--skip-bad-rows"],
    ),
    "ragged row": (FLIGHT.replace("1,119,7500", "1,119"), VEHICLE, [], ["line 3"]),
    "time goes back": (FLIGHT.replace("2,118", "0.5,118"), VEHICLE, [], ["line 4", "time"]),
    "time repeats": (FLIGHT.replace("2,118", "1,118"), VEHICLE, [], ["line 4", "time"]),
    "altitude in the wrong unit": (FLIGHT.replace("0,120,", "0,120000,"), VEHICLE, [], ["line 2", "1000 km"]),
    "negative speed": (FLIGHT.replace("7490", "-7490"), VEHICLE, [], ["line 4", "-7490"]),
    "vehicle is not TOML": (FLIGHT, "mass = 38 kg", [], ["body.toml", "TOML"]),
    "vehicle without mass": (FLIGHT, VEHICLE.replace('mass = "38 kg"\n', ""), [], ["body.toml", "mass"]),
    "mass without unit": (FLIGHT, VEHICLE.replace('"38 kg"', '"38"'), [], ["mass", "kg"]),
    "misspelt key": (FLIGHT, VEHICLE.replace("diameter", "diametre"), [], ["diametre", "diameter"]),
    "unknown shape": (FLIGHT, VEHICLE.replace('"sphere"', '"spere"'), [], ["spere", "sphere"]),
    "bounds out of order": (FLIGHT, VEHICLE, ["--bounds", "1,0.1,10"], ["--bounds", "ascending"]),
    "unknown atmosphere": (
        FLIGHT,
        VEHICLE,
        ["--atmosphere", "standard-1967"],
        ["standard-1967", "standard-1976"],
    ),
    "empirical air without a place": (
        FLIGHT,
        VEHICLE,
        ["--atmosphere", "nrlmsise-00"],
        ["neither date nor place", "--latitude"],
    ),
    "activity for the standard": (
        FLIGHT,
        VEHICLE,
        ["--atmosphere", "standard-1976", "--activity", "high"],
        ["--activity", "standard-1976"],
    ),
    "two statements of activity": (
        FLIGHT,
        VEHICLE,
        [
            "--date",
            "2026-03-01",
            "--latitude",
            "0deg",
            "--longitude",
            "0deg",
            "--activity",
            "low",
            "--f107",
            "100",
            "--f107a",
            "100",
            "--ap",
            "4",
        ],
        ["both", "--activity"],
    ),
    "date that is none": (FLIGHT, VEHICLE, ["--date", "2026-13-01"], ["2026-13-01", "ISO 8601"]),
    "latitude of nowhere": (
        FLIGHT,
        VEHICLE,
        ["--date", "2026-03-01", "--latitude", "95deg", "--longitude", "0deg"],
        ["95", "latitude"],
    ),
    "unknown tables": (FLIGHT, VEHICLE, ["--tables", "xlsx"], ["--tables", "xlsx", "parquet"]),
    "cold wall": (FLIGHT, VEHICLE, ["--wall-temperature", "-5K"], ["wall temperature", "-5"]),
    "unknown heating": (FLIGHT, VEHICLE, ["--convective", "suton-graves"], ["suton-graves", "sutton-graves"]),
}


@pytest.mark.parametrize("name", SURVEYS)
def test_bad_survey(name: str, run, work: Path) -> None:  # type: ignore[no-untyped-def]
    flight, vehicle, options, pieces = SURVEYS[name]
    if flight is not None:
        (work / "flight.csv").write_text(flight)
    if vehicle is not None:
        (work / "body.toml").write_text(vehicle)
    before = sorted(p.name for p in work.iterdir())
    done = run("survey", "flight.csv", "--vehicle", "body.toml", "--out", "out", *options, code=2)
    for piece in pieces:
        assert piece in done.stderr, done.stderr
    assert done.stdout == ""
    assert sorted(p.name for p in work.iterdir()) == before


POINTS: dict[str, tuple[list[str], list[str]]] = {
    "bare altitude": (["--altitude", "100", "--speed", "7km/s", "--length", "1m"], ["no unit", "m, km"]),
    "speed in the wrong unit": (
        ["--altitude", "100km", "--speed", "7km", "--length", "1m"],
        ["speed", "m/s"],
    ),
    "above the air": (["--altitude", "1200km", "--speed", "7km/s", "--length", "1m"], ["1200 km", "1000 km"]),
    "under the empirical air": (
        ["--altitude=-2km", "--speed", "0km/s", "--length", "1m", *PLACE],
        ["-2 km", "-0.5 to 1000 km", "nrlmsise-00"],
    ),
    "no length": (["--altitude", "100km", "--speed", "7km/s"], ["--length"]),
    "length of nothing": (["--altitude", "100km", "--speed", "7km/s", "--length", "0m"], ["positive"]),
    "twice the same length": (
        ["--altitude", "100km", "--speed", "7km/s", "--length", "a=1m", "--length", "a=2m"],
        ["'a'"],
    ),
    "negative speed": (["--altitude", "100km", "--speed=-7km/s", "--length", "1m"], ["-7000 m/s"]),
    "shape without size": (["--altitude", "100km", "--speed", "7km/s", "--shape", "sphere"], ["diameter"]),
    "size without shape": (["--altitude", "100km", "--speed", "7km/s", "--diameter", "1m"], ["--shape"]),
    "incomplete indices": (
        [
            "--altitude",
            "400km",
            "--speed",
            "7km/s",
            "--length",
            "1m",
            "--f107",
            "100",
            "--date",
            "2026-03-01",
            "--latitude",
            "0deg",
            "--longitude",
            "0deg",
        ],
        ["--f107a", "--ap"],
    ),
    "unknown option": (["--altitud", "100km"], ["--altitude"]),
}


@pytest.mark.parametrize("name", POINTS)
def test_bad_point(name: str, run) -> None:  # type: ignore[no-untyped-def]
    options, pieces = POINTS[name]
    done = run("point", *options, code=2)
    for piece in pieces:
        assert piece in done.stderr, done.stderr
    assert done.stdout == ""


OTHERS: dict[str, tuple[list[str], list[str]]] = {
    "unknown command": (["survay"], ["survay", "survey"]),
    "air upside down": (["air", "--from", "200km", "--to", "100km", "--step", "1km"], ["--to", "below"]),
    "air beyond an own table": (
        ["air", "--from", "0km", "--to", "50km", "--step", "10km", "--atmosphere", "missing.csv"],
        ["missing.csv"],
    ),
    "air without step": (["air", "--from", "0km", "--to", "100km", "--step", "0m"], ["--step"]),
    "too many rows": (["air", "--from", "0km", "--to", "1000km", "--step", "1um"], ["--step", "rows"]),
    "figure of unknown kind": (
        ["air", "--from", "0km", "--to", "100km", "--step", "1km", "--figure", "air.bmp"],
        [".bmp", ".svg"],
    ),
    "flight without drag": (
        ["fly", "--altitude", "120km", "--speed", "7.6km/s", "--flight-path-angle=-3deg"],
        ["--vehicle", "--ballistic-coefficient"],
    ),
    "surface of no vehicle": (
        [*FLY, "--flight-path-angle=-3deg", "--surface-model", "cll"],
        ["--surface-model", "none is given"],
    ),
    "flight into nowhere": (
        [
            "fly",
            "--ballistic-coefficient",
            "50kg/m2",
            "--altitude",
            "120km",
            "--speed",
            "7.6km/s",
            "--flight-path-angle=-93deg",
        ],
        ["--flight-path-angle", "-93"],
    ),
    "flight to a text file": (
        [
            "fly",
            "--ballistic-coefficient",
            "50kg/m2",
            "--altitude",
            "120km",
            "--speed",
            "7.6km/s",
            "--flight-path-angle=-3deg",
            "--out",
            "a.doc",
        ],
        [".doc", ".csv"],
    ),
}


@pytest.mark.parametrize("name", OTHERS)
def test_bad_calls(name: str, run, work: Path) -> None:  # type: ignore[no-untyped-def]
    arguments, pieces = OTHERS[name]
    done = run(*arguments, code=2)
    for piece in pieces:
        assert piece in done.stderr, done.stderr
    assert list(work.iterdir()) == []


def test_one_wrong_time_is_not_skipped_together_with_all_that_follows(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    rows = "".join(f"{t},{120 - t},7500\n" for t in range(40))
    (work / "flight.csv").write_text(
        "time [s],altitude [km],speed [m/s]\n" + rows.replace("\n3,117", "\n9e9,117")
    )
    (work / "body.toml").write_text(VEHICLE)
    done = run("survey", "flight.csv", "--vehicle", "body.toml", "--out", "out", "--skip-bad-rows", code=2)
    assert "36 of 40 rows would be left out" in done.stderr
    assert not (work / "out").exists()


def test_a_pipe_is_refused_as_what_it_is(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    (work / "body.toml").write_text(VEHICLE)
    done = run("survey", "/dev/null", "--vehicle", "body.toml", "--out", "out", code=2)
    assert "is a pipe or a device" in done.stderr


def test_files_in_each_others_place(run, work: Path, steep: str, marram: str) -> None:  # type: ignore[no-untyped-def]
    done = run("survey", marram, "--vehicle", steep, "--out", "out", code=2)
    assert "looks like a trajectory" in done.stderr


def test_skipped_rows_are_listed(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    (work / "flight.csv").write_text(FLIGHT.replace("119,7500", "n/a,7500") + "3,117,7480\n")
    (work / "body.toml").write_text(VEHICLE)
    run(
        "survey",
        "flight.csv",
        "--vehicle",
        "body.toml",
        "--out",
        "out",
        "--skip-bad-rows",
        "--figures",
        "none",
    )
    listed = (work / "out" / "skipped.csv").read_text()
    assert listed.startswith("line,reason\n3,")
    assert "n/a" in listed
    assert len((work / "out" / "points.csv").read_text().splitlines()) == 4


def test_errors_survive_pickling() -> None:
    import pickle

    error = InputError("holds 'x'", source="a.csv", line=3, column="speed", remedy="mend it")
    copy = pickle.loads(pickle.dumps(error))
    assert str(copy) == str(error) == "a.csv, line 3: column 'speed' holds 'x'; mend it."
    assert (copy.source, copy.line, copy.column, copy.remedy) == ("a.csv", 3, "speed", "mend it")
