"""Meshes, parts, sideslip, tumbling and switches, through the survey and the point."""

from __future__ import annotations

import dataclasses
from pathlib import Path

import numpy as np
import pytest

import aero
from aero.body import Vehicle
from aero.force.gas_surface_bodies import OTHER_MODELS, other_models
from aero.force.tumbling import tumbling_drag
from aero.gas import flow
from aero.heat.compare import compare_convective
from aero.survey.attitude_columns import ATTITUDE_COLUMNS
from aero.survey.comparisons import CORRELATIONS, MODELS, SWITCHES, At, comparisons
from aero.trajectory import Trajectory

EXAMPLES = Path(__file__).resolve().parents[2] / "trajectories"


@pytest.fixture(scope="module")
def plain() -> Vehicle:
    return aero.read_vehicle(EXAMPLES / "marram.toml")


@pytest.fixture(scope="module")
def meshed() -> Vehicle:
    return aero.read_vehicle(EXAMPLES / "marram-mesh.toml")


@pytest.fixture(scope="module")
def panelled() -> Vehicle:
    return aero.read_vehicle(EXAMPLES / "sedge-panel.toml")


def test_the_meshed_capsule_is_the_plain_one(entry: Trajectory, plain: Vehicle, meshed: Vehicle) -> None:
    # 3,312 triangles inscribed in the shape: their cross-section is 0.12 % small, and drag is with it
    smooth, facets = aero.survey(entry, plain).points, aero.survey(entry, meshed).points
    np.testing.assert_allclose(facets["drag_coefficient"], smooth["drag_coefficient"], rtol=3e-3)
    np.testing.assert_allclose(facets["heat_flux_W_m2"], smooth["heat_flux_W_m2"], rtol=1e-6)


def test_a_moment_point_brings_the_columns_of_attitude(entry: Trajectory, meshed: Vehicle) -> None:
    tilted = dataclasses.replace(entry, angle_of_attack=np.full(len(entry), 0.1))
    points = aero.survey(tilted, meshed).points
    assert set(ATTITUDE_COLUMNS) <= set(points.columns)
    drag = points["axial_force_coefficient"] * np.cos(0.1) + points["normal_force_coefficient"] * np.sin(0.1)
    np.testing.assert_allclose(drag, points["drag_coefficient"], rtol=2e-3)
    assert (points["projected_area_m2"] > 0.5).all()
    assert not set(ATTITUDE_COLUMNS) & set(
        aero.survey(entry, dataclasses.replace(meshed, moment_point=None)).points.columns
    )


def test_point_and_survey_agree_on_attitude(entry: Trajectory, meshed: Vehicle) -> None:
    aside = dataclasses.replace(
        entry, angle_of_attack=np.full(len(entry), 0.1), sideslip=np.full(len(entry), 0.05)
    )
    points = aero.survey(aside, meshed).points
    row = points.iloc[120]
    answer = aero.point(
        float(row["altitude_m"]),
        float(row["air_speed_m_s"]),
        vehicle=meshed,
        angle_of_attack=0.1,
        sideslip=0.05,
    )
    assert answer["drag"]["coefficient"] == pytest.approx(row["drag_coefficient"], rel=1e-7)
    for name in ATTITUDE_COLUMNS:
        assert answer["attitude"][name] == pytest.approx(row[name], rel=1e-6, abs=1e-9), name


def test_sideslip_turns_drag_as_it_turns_the_body(entry: Trajectory, plain: Vehicle) -> None:
    # a body of revolution does not tell sideslip from angle of attack; with sideslip it is a sum over some 8,000
    # panels inscribed in it, whose cross-section is 3e-4 small
    up = aero.survey(dataclasses.replace(entry, angle_of_attack=np.full(len(entry), 0.2)), plain).points
    aside = aero.survey(dataclasses.replace(entry, sideslip=np.full(len(entry), 0.2)), plain).points
    np.testing.assert_allclose(aside["drag_coefficient"], up["drag_coefficient"], rtol=4e-4)


def test_parts_bring_their_own_surfaces(entry: Trajectory, panelled: Vehicle) -> None:
    own = aero.survey(entry, panelled).points["drag_coefficient_free_molecular"]
    same = aero.survey(entry, panelled.with_surface(energy_accommodation=0.5)).points
    assert (same["drag_coefficient_free_molecular"][:100] > own[:100]).all()


def test_tumbling_is_the_average_over_directions(entry: Trajectory, panelled: Vehicle) -> None:
    tumbling = dataclasses.replace(panelled, tumbling=True)
    points = aero.survey(entry, tumbling).points
    row = points.iloc[0]
    air = aero.StandardAtmosphere1976().at(np.array([row["altitude_m"]]))
    moving = flow(air, np.array([row["air_speed_m_s"]]))
    wall = np.array([row["wall_temperature_K"]])
    found = tumbling_drag(tumbling, air, moving, wall, tumbling.surface.energy_accommodation)
    assert row["drag_coefficient_free_molecular"] == pytest.approx(float(found.free_molecular[0]), rel=1e-9)
    assert (points["lift_coefficient"] == 0.0).all()


@pytest.mark.parametrize("catalysis", ["partial", "none"])
def test_a_less_catalytic_wall_takes_less_heat(entry: Trajectory, plain: Vehicle, catalysis: str) -> None:
    full = aero.survey(entry, plain).points["heat_flux_W_m2"]
    less = aero.survey(entry, plain.with_catalysis(catalysis)).points
    hot = int(full.argmax())
    assert 0.2 * full[hot] < less["heat_flux_W_m2"][hot] < full[hot]
    assert (less["heat_flux_low_W_m2"] <= less["heat_flux_W_m2"]).all()


def test_comparisons_hold_every_topic_and_agree_with_the_survey(entry: Trajectory, panelled: Vehicle) -> None:
    result = aero.survey(entry, panelled)
    table = comparisons(result)
    assert set(table["topic"]) == {MODELS, CORRELATIONS, SWITCHES}
    unchanged = table[(table["topic"] == CORRELATIONS) & (table["choice"] == "sutton-graves")].iloc[0]
    hot = int(result.points["heat_flux_W_m2"].argmax())
    assert unchanged["value"] == pytest.approx(result.points["heat_flux_continuum_W_m2"].iloc[hot], rel=1e-9)
    assert unchanged["change"] == pytest.approx(0.0, abs=1e-12)
    shadow = table[table["choice"] == "shadowing off"].iloc[0]
    assert shadow["change"] > 0.0  # the panel stands partly behind the body
    sampled = table[table["choice"].str.startswith("every reflection")].iloc[0]
    assert sampled["error"] > 0.0
    assert table["value"].notna().all()


def test_a_vehicle_without_a_shape_has_nothing_to_compare(entry: Trajectory, plain: Vehicle) -> None:
    bare = dataclasses.replace(plain, shape=None, heating_nose_radius=0.3)
    result = aero.survey(entry, bare)
    assert comparisons(result).empty
    assert result.points["drag_coefficient"].isna().all()
    assert result.points["heat_flux_W_m2"].notna().all()


def test_shadowing_off_reaches_a_single_mesh(tmp_path: Path) -> None:
    import trimesh

    # two cubes behind one another: the flow reaches the face of the first alone
    parts = [
        trimesh.creation.box(extents=(0.2,) * 3, transform=trimesh.transformations.translation_matrix(place))
        for place in ((0.5, 0.0, 0.0), (-0.5, 0.0, 0.0))
    ]
    trimesh.util.concatenate(parts).export(tmp_path / "cubes.stl")
    (tmp_path / "cubes.toml").write_text(
        'mass = "5 kg"\n[reference]\narea = "0.04 m2"\nlength = "0.2 m"\n[shape]\nkind = "mesh"\n'
        'file = "cubes.stl"\nunit = "m"\nbody_class = "box"\n'
    )
    shaded = aero.read_vehicle(tmp_path / "cubes.toml")
    free = shaded.with_shadows(False)
    drag = [aero.point(200e3, 7600.0, vehicle=v)["drag"]["coefficient"] for v in (shaded, free)]
    assert drag[1] > 1.5 * drag[0]
    assert not free.shape.shadows


def test_cll_of_a_surface_that_states_none_takes_its_energy_accommodation(plain: Vehicle) -> None:
    changed = plain.with_model("cll")
    assert changed.surface.normal_energy_accommodation == plain.surface.energy_accommodation
    assert changed.with_model("cll").surface == changed.surface


def test_the_digest_knows_the_switches(entry: Trajectory, plain: Vehicle) -> None:
    from aero.survey.record import survey_record

    digests = {
        survey_record(aero.survey(entry, vehicle))["digest"]
        for vehicle in (plain, plain.with_model("cll"), plain.with_catalysis("none"))
    }
    assert len(digests) == 3


def test_a_tumbling_vehicle_holds_no_attitude(plain: Vehicle) -> None:
    with pytest.raises(aero.InputError, match=r"--angle-of-attack: acts on a held attitude"):
        aero.point(120e3, 7600.0, vehicle=dataclasses.replace(plain, tumbling=True), angle_of_attack=0.1)


def test_every_model_of_the_table_is_what_choosing_it_gives(entry: Trajectory, plain: Vehicle) -> None:
    table = comparisons(aero.survey(entry, plain))
    rows = table[table["topic"] == MODELS].set_index("choice")["value"]
    thin = aero.survey(entry, plain).points["knudsen.reference"].argmax()
    for name, text in OTHER_MODELS.items():
        points = aero.survey(entry, plain.with_model(name)).points
        # the wall's temperature follows from the heat, which the model changes a little
        assert points["drag_coefficient_free_molecular"].iloc[thin] == pytest.approx(rows[text], rel=5e-3), (
            name
        )


def test_rows_of_the_table_are_those_of_the_functions_that_need_no_survey(
    entry: Trajectory, plain: Vehicle
) -> None:
    result = aero.survey(entry, plain)
    table = comparisons(result).set_index(["topic", "choice"])["value"]
    thin = At.row(result, int(result.points["knudsen.reference"].argmax()))
    for name, drag in other_models(plain, thin.air, thin.moving, thin.wall).items():
        # the survey sums cll over panels inscribed in the shape, whose cross-section is 2.0e-4 small
        within = 3e-4 if name == "cll" else 1e-6
        assert table[MODELS, OTHER_MODELS[name]] == pytest.approx(float(drag[0]), rel=within), name
    hot = At.row(result, int(result.points["heat_flux_W_m2"].argmax()))
    for name, flux in compare_convective(plain, hot.air, hot.moving, hot.wall).items():
        assert table[CORRELATIONS, name] == pytest.approx(float(flux[0]), rel=1e-6), name


def test_a_mesh_that_holds_its_triangles_twice_is_refused(tmp_path: Path) -> None:
    import trimesh

    cube = trimesh.creation.box(extents=(0.2,) * 3)
    trimesh.util.concatenate([cube, cube]).export(tmp_path / "twice.stl")
    (tmp_path / "twice.toml").write_text(
        'mass = "5 kg"\n[reference]\narea = "0.04 m2"\nlength = "0.2 m"\n[shape]\nkind = "mesh"\n'
        'file = "twice.stl"\nunit = "m"\n'
    )
    with pytest.raises(aero.InputError, match=r"twice\.stl.*has 12 of 24 triangles twice"):
        aero.read_vehicle(tmp_path / "twice.toml")


def test_comparisons_of_a_tumbling_vehicle_tumble(entry: Trajectory, panelled: Vehicle) -> None:
    result = aero.survey(entry, dataclasses.replace(panelled, tumbling=True))
    table = comparisons(result)
    own = table[table["choice"] == OTHER_MODELS["maxwell"]].iloc[0]
    assert own["change"] == pytest.approx(0.0, abs=1e-9)


def test_the_rows_of_the_survey_itself_change_nothing(entry: Trajectory, panelled: Vehicle) -> None:
    table = comparisons(aero.survey(entry, panelled.with_catalysis("none")))
    own = table[table["choice"].isin([OTHER_MODELS["maxwell"], "sutton-graves"])]
    np.testing.assert_allclose(own["change"], 0.0, atol=1e-9)


def test_a_symmetric_body_has_no_side_force(entry: Trajectory, meshed: Vehicle) -> None:
    points = aero.survey(entry, meshed).points
    for name in ("side_force_coefficient", "roll_moment_coefficient", "yaw_moment_coefficient"):
        np.testing.assert_allclose(points[name], 0.0, atol=1e-9)


def test_angles_out_of_reach(plain: Vehicle) -> None:
    with pytest.raises(aero.InputError, match=r"--sideslip: sideslip is 120 deg, expected -90 to 90 deg"):
        aero.point(120e3, 7600.0, vehicle=plain, sideslip=np.radians(120.0))
