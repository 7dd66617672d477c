"""What is written: whole or absent, the same bytes, nothing beside, every number the same."""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

import aero
from aero.errors import InputError
from aero.survey.output import held, whole

TABLES = {
    "points.csv",
    "points.parquet",
    "segments.csv",
    "crossings.csv",
    "comparisons.csv",
    "survey.json",
}


def strict(text: str) -> dict[str, object]:
    def refuse(name: str) -> float:
        raise AssertionError(f"{name} in JSON")

    answer: dict[str, object] = json.loads(text, parse_constant=refuse)
    return answer


def test_the_files_promised(surveyed: aero.Survey, tmp_path: Path) -> None:
    files = set(surveyed.write(tmp_path / "out"))
    assert TABLES | {"report.html"} <= files
    for name in ("strips", "map", "coefficients", "heating", "air"):
        assert {f"figures/{name}.svg", f"figures/{name}.png"} <= files
    assert sorted(p.name for p in tmp_path.iterdir()) == ["out"]


def test_tables_alone_and_parquet_alone(surveyed: aero.Survey, tmp_path: Path) -> None:
    assert set(surveyed.write(tmp_path / "a", figures="none")) == TABLES
    assert set(surveyed.write(tmp_path / "b", figures="none", tables=("parquet",))) == TABLES - {"points.csv"}


def test_csv_and_parquet_hold_the_numbers_of_the_survey(surveyed: aero.Survey, tmp_path: Path) -> None:
    surveyed.write(tmp_path / "out", figures="none")
    csv = pd.read_csv(tmp_path / "out" / "points.csv")
    parquet = pd.read_parquet(tmp_path / "out" / "points.parquet")
    for name, values in surveyed.points.items():
        if values.dtype == np.float64:
            np.testing.assert_array_equal(csv[name].to_numpy(float), values, err_msg=str(name))
            np.testing.assert_array_equal(parquet[name].to_numpy(float), values, err_msg=str(name))
        elif str(name).startswith("regime."):
            assert list(csv[name]) == list(values.astype(str))
            assert list(parquet[name].astype(str)) == list(values.astype(str))
    assert b"nan" not in (tmp_path / "out" / "points.csv").read_bytes().lower()
    segments = pd.read_csv(tmp_path / "out" / "segments.csv")
    pd.testing.assert_frame_equal(segments, surveyed.segments, check_dtype=False)


def test_dates_are_written_as_utc(placed_entry: aero.Trajectory, body: aero.Vehicle, tmp_path: Path) -> None:
    aero.survey(placed_entry, body).write(tmp_path / "out", figures="none")
    first = pd.read_csv(tmp_path / "out" / "points.csv")["utc"].iloc[1]
    assert first == "2026-03-01T06:00:01.000000Z"
    assert pd.read_parquet(tmp_path / "out" / "points.parquet")["utc"].iloc[1] == pd.Timestamp(first)


def test_the_record_is_strict_json_and_repeats_the_tables(surveyed: aero.Survey, tmp_path: Path) -> None:
    surveyed.write(tmp_path / "out", figures="none")
    record = strict((tmp_path / "out" / "survey.json").read_text())
    assert record["inputs"]["trajectory"]["file"] == "entry.csv"  # type: ignore[index]
    assert len(record["segments"]) == len(surveyed.segments)  # type: ignore[arg-type]
    assert record["results"]["heat_load_J_m2"] == surveyed.points["heat_load_J_m2"].iloc[-1]  # type: ignore[index]
    assert str(tmp_path) not in json.dumps(record)


def test_the_same_input_gives_the_same_bytes(
    entry: aero.Trajectory, body: aero.Vehicle, tmp_path: Path
) -> None:
    for name in ("a", "b"):
        aero.survey(entry, body).write(tmp_path / name)
    for first in sorted((tmp_path / "a").rglob("*")):
        if first.is_file():
            second = tmp_path / "b" / first.relative_to(tmp_path / "a")
            assert first.read_bytes() == second.read_bytes(), first.name


def test_the_report_stands_alone_and_shows_the_numbers_of_the_tables(
    surveyed: aero.Survey, tmp_path: Path
) -> None:
    surveyed.write(tmp_path / "out")
    page = (tmp_path / "out" / "report.html").read_text()
    assert surveyed.summary in page.replace("&#39;", "'")
    assert "not a basis for sizing thermal protection" in page
    for marker in ("<script src", "<link", "@import", 'src="http', "url(http"):
        assert marker not in page
    # each cell of a number carries its full value, so that the page can be held against the table
    for value in surveyed.crossings["altitude_m"]:
        assert repr(float(value)) in page
    for value in surveyed.segments["heat_load_share"]:
        assert repr(float(value)) in page


def test_names_are_escaped(entry: aero.Trajectory, body: aero.Vehicle, tmp_path: Path) -> None:
    import dataclasses

    odd = "<b>&\"'$x_1$%</b>"
    result = aero.survey(dataclasses.replace(entry, name=odd), dataclasses.replace(body, name=odd))
    result.write(tmp_path / "out")
    page = (tmp_path / "out" / "report.html").read_text()
    assert odd not in page
    assert "&lt;b&gt;&amp;" in page


def test_an_existing_output_needs_replace(surveyed: aero.Survey, tmp_path: Path) -> None:
    out = tmp_path / "out"
    surveyed.write(out, figures="none")
    with pytest.raises(InputError, match="exists; choose another name or pass --replace"):
        surveyed.write(out, figures="none")
    (out / "points.csv").unlink()
    surveyed.write(out, figures="none", replace=True)
    assert (out / "points.csv").exists()
    assert [p.name for p in tmp_path.iterdir()] == ["out"]


def test_a_folder_of_somebody_elses_is_not_replaced(surveyed: aero.Survey, tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "thesis.txt").write_text("years of work")
    with pytest.raises(InputError, match=r"holds 'thesis\.txt', which is no part of such an output"):
        surveyed.write(tmp_path / "out", replace=True)
    assert (tmp_path / "out" / "thesis.txt").read_text() == "years of work"


def test_files_added_to_a_survey_are_not_wiped(surveyed: aero.Survey, tmp_path: Path) -> None:
    surveyed.write(tmp_path / "out", figures="none")
    (tmp_path / "out" / "figures").mkdir()
    (tmp_path / "out" / "figures" / "mine.tex").write_text("mine")
    with pytest.raises(InputError, match=r"holds 'figures/mine\.tex'"):
        surveyed.write(tmp_path / "out", replace=True)


def test_what_a_killed_run_left_is_swept_and_what_a_living_one_holds_is_not(
    surveyed: aero.Survey, tmp_path: Path
) -> None:
    dead, living = tmp_path / ".aero-dead", tmp_path / ".aero-living"
    for work in (dead, living):
        work.mkdir()
        (work / "lock").touch()
    with held(living):
        surveyed.write(tmp_path / "out", figures="none")
    assert sorted(p.name for p in tmp_path.iterdir()) == [".aero-living", "out"]


def test_what_appears_meanwhile_is_not_overwritten(tmp_path: Path) -> None:
    def race() -> None:
        with whole(tmp_path / "out", replace=False, folder=True) as new:
            (new / "ours").touch()
            (tmp_path / "out").mkdir()
            (tmp_path / "out" / "theirs").touch()

    with pytest.raises(InputError, match="exists"):
        race()
    assert [p.name for p in (tmp_path / "out").iterdir()] == ["theirs"]


def test_a_fault_on_the_way_leaves_nothing_and_keeps_the_old(tmp_path: Path) -> None:
    target = tmp_path / "deep" / "out"

    def fail(replace: bool) -> None:
        with whole(target, replace=replace, folder=True) as new:
            (new / "half").write_text("half")
            raise RuntimeError("stopped")

    with pytest.raises(RuntimeError, match="stopped"):
        fail(False)
    assert list(tmp_path.iterdir()) == []
    target.mkdir(parents=True)
    (target / "old").write_text("old")
    with pytest.raises(RuntimeError, match="stopped"):
        fail(True)
    assert [p.name for p in target.iterdir()] == ["old"]
    assert [p.name for p in target.parent.iterdir()] == ["out"]


def test_a_million_points_are_thinned_without_losing_extremes(body: aero.Vehicle) -> None:
    from aero.report.thin import thin

    count = 200_000
    time = np.linspace(0.0, 400.0, count)
    values = np.sin(time)
    values[123_457] = 7.0
    rows = thin(time, values)
    assert rows.size < 10_000
    assert values[rows].max() == 7.0
    assert math.isclose(values[rows].min(), values.min())
