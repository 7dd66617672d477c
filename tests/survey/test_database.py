"""The aerodynamic database: its nodes are single points, its stated errors true, its files whole."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

import aero
from aero.body import Sphere, Vehicle
from aero.errors import InputError
from aero.survey.database import Database, build_database
from aero.survey.grid import AXES, COLUMNS, MOST_ROWS
from aero.survey.interpolate import centres

ALTITUDE = np.arange(80e3, 141e3, 10e3)
SPEED = np.array([5e3, 6.5e3, 8e3])
ANGLE = np.radians([-10.0, 0.0, 10.0])
BALL = Vehicle.from_shape(Sphere(diameter=1.0))


@pytest.fixture(scope="module")
def made(body: Vehicle) -> Database:
    return build_database(body, ALTITUDE, SPEED, ANGLE)


def test_every_node_is_a_single_point(made: Database, body: Vehicle) -> None:
    """The same condition asked of `aero.point`, the other way into the chain."""
    for i, j, k in ((0, 0, 0), (3, 1, 2), (6, 2, 1)):
        answer = aero.point(ALTITUDE[i], SPEED[j], vehicle=body, angle_of_attack=ANGLE[k])
        node = {name: float(values[i, j, k, 0]) for name, values in made.columns.items()}
        drag, heat = answer["drag"], answer["heating"]
        assert node["mach"] == pytest.approx(answer["gas"]["mach"], rel=1e-12)
        assert node["knudsen.reference"] == pytest.approx(answer["lengths"][0]["knudsen"], rel=1e-12)
        # over several angles bodies of revolution come from a table good to 2e-5 (docs/method.md)
        for ours, key in (
            ("drag_coefficient", "coefficient"),
            ("drag_coefficient_low", "low"),
            ("drag_coefficient_high", "high"),
            ("drag_bridge", "bridge"),
        ):
            assert node[ours] == pytest.approx(drag[key], rel=2e-5)
        assert node["lift_coefficient"] == pytest.approx(drag["lift_coefficient"], rel=2e-5, abs=1e-9)
        assert node["heat_flux_W_m2"] == pytest.approx(heat["stagnation_W_m2"], rel=1e-12)


def test_long_form_has_a_row_for_each_combination_and_altitude_changes_slowest(made: Database) -> None:
    table = made.table()
    assert list(table)[:4] == [axis.column for axis in AXES]
    assert set(table) - {axis.column for axis in AXES} <= set(COLUMNS)
    assert len(made) == 7 * 3 * 3 == table["mach"].size
    np.testing.assert_array_equal(table["altitude_m"][:9], 80e3)
    np.testing.assert_allclose(table["angle_of_attack_deg"][:3], [-10.0, 0.0, 10.0], rtol=1e-12)


def test_stated_errors_are_what_a_fresh_computation_finds(made: Database, body: Vehicle) -> None:
    for name in ("drag_coefficient", "lift_coefficient", "heat_flux_W_m2"):
        entry = made.record["interpolation"][name]
        at = entry["at"]
        angle = np.radians(at["angle_of_attack_deg"])
        answer = aero.point(at["altitude_m"], at["air_speed_m_s"], vehicle=body, angle_of_attack=angle)
        exact = {
            "drag_coefficient": answer["drag"]["coefficient"],
            "lift_coefficient": answer["drag"]["lift_coefficient"],
            "heat_flux_W_m2": answer["heating"]["stagnation_W_m2"],
        }[name]
        guess = made.at(at["altitude_m"], at["air_speed_m_s"], angle)[name]
        size = exact if entry["relative_to"] == "value" else np.abs(made.columns[name]).max()
        assert entry["largest_error"] == pytest.approx(abs(guess - exact) / size, rel=0.01)
        assert 0.0 < entry["error_of_95_percent"] <= entry["largest_error"]
    assert made.record["interpolation"]["lift_coefficient"]["relative_to"] == "largest"


def test_no_cell_errs_by_much_more_anywhere_than_stated_at_the_middles(made: Database, body: Vehicle) -> None:
    """The middles are where smooth curvature errs most; a quarter more is left for what is not smooth."""
    random = np.random.default_rng(7)
    where = [random.uniform(nodes[0], nodes[-1], 400) for nodes in made.axes[:3]]
    exact = build_rows(body, where)
    guess = made.at(*where)
    error = np.abs(guess["drag_coefficient"] / exact["drag_coefficient"] - 1.0)
    assert error.max() < 1.25 * made.record["interpolation"]["drag_coefficient"]["largest_error"]


def build_rows(body: Vehicle, where: list[np.ndarray]) -> dict[str, np.ndarray]:
    from aero.air import StandardAtmosphere1976
    from aero.survey.chain import conditions
    from aero.survey.inputs import Inputs
    from aero.survey.settings import Settings

    inputs = Inputs(altitude=where[0], speed=where[1], angle_of_attack=where[2])
    return conditions(inputs, StandardAtmosphere1976(), body, {}, Settings())


def test_error_falls_with_the_square_of_the_step() -> None:
    """Linear interpolation of a smooth quantity: half the step, a quarter of the error.

    Between 92 and 108 km, clear of the standard's kinks of temperature at 91 and 110 km.
    """
    errors = []
    for step in (4e3, 2e3, 1e3):
        made = build_database(BALL, np.arange(92e3, 108.1e3, step), 7.5e3)
        errors.append(made.record["interpolation"]["drag_coefficient"]["largest_error"])
    ratios = np.array(errors[:-1]) / np.array(errors[1:])
    assert ratios == pytest.approx(4.0, rel=0.2)  # the next order still counts at 4 km
    assert made.record["drag_error_by_axis"].keys() == {"altitude_m"}


def test_a_grid_of_one_point_has_nothing_to_interpolate() -> None:
    made = build_database(BALL, 100e3, 7.5e3)
    assert made.record["interpolation"]["drag_coefficient"]["largest_error"] is None
    assert made.record["drag_error_by_axis"] == {}
    assert made.at(100e3, 7.5e3)["drag_coefficient"] == made.columns["drag_coefficient"].item()
    assert np.isnan(made.at(101e3, 7.5e3)["drag_coefficient"])


def test_outside_the_grid_there_is_no_answer(made: Database) -> None:
    found = made.at([79e3, 100e3, 100e3, 100e3], [6e3, 6e3, 9e3, 6e3], [0.0, 0.0, 0.0, 1.0])
    assert np.isnan(found["drag_coefficient"]).tolist() == [True, False, True, True]
    assert np.isnan(made.at(100e3, 6e3, 0.0, sideslip=0.1)["drag_coefficient"])


def test_wrong_calls_are_named(made: Database) -> None:
    with pytest.raises(ValueError, match="angle_of_attack is not given"):
        made.at(100e3, 6e3)
    with pytest.raises(ValueError, match="no column 'drag'; it has: density_kg_m3"):
        made.at(100e3, 6e3, 0.0, columns=["drag"])
    assert list(made.at(100e3, 6e3, 0.0, columns=["mach"])) == ["mach"]


@pytest.mark.parametrize("name", ["made.parquet", "made.csv", "made"])
def test_what_is_written_reads_the_same(made: Database, tmp_path: Path, name: str) -> None:
    made.write(tmp_path / name)
    again = Database.read(tmp_path / name)
    for one, other in zip(again.axes, made.axes, strict=True):
        np.testing.assert_allclose(one, other, rtol=1e-12)
    assert again.columns.keys() == made.columns.keys()
    for column, values in made.columns.items():
        np.testing.assert_array_equal(again.columns[column], values)
    assert again.record == ({} if name.endswith("csv") else made.record)
    exact = made.at(101e3, 7.1e3, 0.05)
    for column, value in again.at(101e3, 7.1e3, 0.05).items():
        np.testing.assert_allclose(value, exact[column], rtol=1e-12)


def test_same_input_same_bytes_and_no_paths(body: Vehicle, tmp_path: Path) -> None:
    for name in ("one", "two"):
        build_database(body, ALTITUDE[:2], SPEED).write(tmp_path / name)
    for kind in ("csv", "json", "parquet"):
        one, two = ((tmp_path / n / f"database.{kind}").read_bytes() for n in ("one", "two"))
        assert one == two
        assert str(tmp_path).encode() not in one
    record = json.loads((tmp_path / "one" / "database.json").read_text())
    assert record["vehicle"]["sha256"] == body.digest
    assert record["axes"]["air_speed_m_s"] == SPEED.tolist()
    assert record["options"]["convective"] == "sutton-graves"
    assert record["atmosphere"] == aero.StandardAtmosphere1976().provenance()


def test_rows_in_any_order_are_one_grid(made: Database) -> None:
    table = made.table()
    order = np.random.default_rng(3).permutation(len(made))
    again = Database.from_table({name: values[order] for name, values in table.items()}, {}, "mixed.csv")
    np.testing.assert_array_equal(again.columns["mach"], made.columns["mach"])


def test_msis_is_that_of_the_one_place(body: Vehicle) -> None:
    place = {"latitude": np.radians(10.0), "longitude": np.radians(20.0)}
    date = np.datetime64("2026-03-01T12:00:00", "us")
    air = aero.Msis("nrlmsise-00", activity="moderate")
    made = build_database(body, ALTITUDE[:3], SPEED[:2], atmosphere=air, date=date, **place)
    answer = aero.point(90e3, 6500.0, vehicle=body, atmosphere=air, date=date, **place)
    assert made.at(90e3, 6500.0)["density_kg_m3"] == pytest.approx(answer["air"]["density_kg_m3"], rel=1e-12)
    assert made.at(90e3, 6500.0)["drag_coefficient"] == pytest.approx(
        answer["drag"]["coefficient"], rel=1e-12
    )
    assert made.record["place"] == {
        "date": "2026-03-01T12:00:00.000000Z",
        "latitude_deg": pytest.approx(10.0),
        "longitude_deg": pytest.approx(20.0),
    }


def test_without_a_nose_radius_there_is_no_heat_flux() -> None:
    from aero.body import FlatPlate

    made = build_database(Vehicle.from_shape(FlatPlate(length=1.0, width=1.0)), ALTITUDE, SPEED, 0.5)
    assert np.isnan(made.columns["heat_flux_W_m2"]).all()
    assert np.isnan(made.at(100e3, 6e3, 0.5)["heat_flux_W_m2"])
    assert made.record["interpolation"]["heat_flux_W_m2"]["largest_error"] is None


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"altitude": [100e3, 90e3]}, "--altitude: values do not rise"),
        ({"altitude": [100e3, 100e3]}, "--altitude: values do not rise"),
        ({"altitude": []}, "the grid is empty"),
        ({"altitude": [np.nan, 1.0]}, "--altitude: holds a value that is no number"),
        ({"altitude": [900e3, 1200e3]}, "altitude 1200 km lies outside"),
        ({"speed": [0.0, 1e3]}, "speed is 0 m/s, expected above 0"),
        ({"speed": [1e3, 2e5]}, "speed is 200000 m/s"),
        ({"angle_of_attack": [0.0, 4.0]}, "--angle-of-attack: 229.183 deg is out of reach"),
        ({"sideslip": [0.0, 1.6]}, "--sideslip: 91.6732 deg is out of reach"),
        ({"altitude": np.linspace(0.0, 1e5, 1001), "speed": np.linspace(1.0, 8e3, 1000)}, "1001 x 1000 x 1 x 1"),
    ],
)  # fmt: skip
def test_grids_that_cannot_be_are_refused(changes: dict[str, object], message: str) -> None:
    with pytest.raises(InputError, match=message):
        build_database(BALL, **{"altitude": 100e3, "speed": 7e3, **changes})
    assert MOST_ROWS == 1_000_000  # as the guide says


def test_progress_counts_rows_and_checks(body: Vehicle) -> None:
    seen: list[int] = []
    build_database(body, ALTITUDE, SPEED, progress=seen.append)
    assert sum(seen) == 21 + 12
    assert [c.size for c in centres((ALTITUDE, SPEED))] == [6, 2]
