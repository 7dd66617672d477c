"""Files that are no database: each gives one clear message."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from aero.body import Sphere, Vehicle
from aero.errors import InputError
from aero.survey.database import Database, build_database

KEYS = "altitude_m,air_speed_m_s,angle_of_attack_deg,sideslip_deg"


@pytest.fixture(scope="module")
def made() -> Database:
    return build_database(Vehicle.from_shape(Sphere(diameter=1.0)), [90e3, 100e3], [6e3, 7e3])


@pytest.mark.parametrize(
    ("name", "text", "message"),
    [
        ("no.csv", None, "no.csv: no such file; make it with aero database"),
        ("a.txt", "x", "'.txt' is not a format of a database, expected .parquet or .csv"),
        ("a.csv", "", "can be read as csv"),
        ("a.parquet", "not parquet", "can be read as parquet"),
        ("a.csv", "altitude_m,air_speed_m_s\n1,2\n", "has no column 'angle_of_attack_deg'"),
        ("a.csv", f"{KEYS}\n", "holds 0 rows"),
        ("a.csv", f"{KEYS}\n1,1,0,0\n1,2,0,0\n2,1,0,0\n", "holds 3 rows, expected one for each of 2 x 2 x 1 x 1"),
        ("a.csv", f"{KEYS}\n1,1,0,0\n1,1,0,0\n", "holds 2 rows, expected one for each of 1 x 1 x 1 x 1"),
    ],
)  # fmt: skip
def test_files_that_are_no_database(tmp_path: Path, name: str, text: str | None, message: str) -> None:
    if text is not None:
        (tmp_path / name).write_text(text)
    with pytest.raises(InputError, match=message):
        Database.read(tmp_path / name)


def test_a_folder_without_one(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"is a folder without database\.parquet"):
        Database.read(tmp_path)


def test_outputs_that_exist_stay(made: Database, tmp_path: Path) -> None:
    made.write(tmp_path / "a.csv")
    before = (tmp_path / "a.csv").read_bytes()
    with pytest.raises(InputError, match="exists; choose another name or pass --replace"):
        made.write(tmp_path / "a.csv")
    assert made.write(tmp_path / "a.csv", replace=True) == ["a.csv"]
    assert (tmp_path / "a.csv").read_bytes() == before
    somebodys = tmp_path / "notes"
    somebodys.mkdir()
    (somebodys / "thesis.txt").write_text("years of work")
    with pytest.raises(InputError, match=r"holds 'thesis\.txt', which is no part of such an output"):
        made.write(somebodys, replace=True)
    made.write(tmp_path / "folder")
    assert made.write(tmp_path / "folder", replace=True) == [
        "database.csv",
        "database.json",
        "database.parquet",
    ]
    with pytest.raises(InputError, match=r"'\.xlsx' is not a format of a database"):
        made.write(tmp_path / "a.xlsx")
    assert sorted(p.name for p in tmp_path.iterdir()) == ["a.csv", "folder", "notes"]


def test_parquet_opens_in_other_tools(made: Database, tmp_path: Path) -> None:
    """pandas reads the table as it is; the record is text in the schema."""
    import pandas as pd

    made.write(tmp_path / "a.parquet")
    frame = pd.read_parquet(tmp_path / "a.parquet")
    assert list(frame.columns) == list(made.table())
    np.testing.assert_array_equal(frame["drag_coefficient"], made.table()["drag_coefficient"])
