"""The survey as a whole: what adds up, what agrees, what a table must hold."""

from __future__ import annotations

import dataclasses

import numpy as np
import pandas as pd
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

import aero
from aero.air import Msis, StandardAtmosphere1976
from aero.body import Vehicle
from aero.body.shapes import SHAPES
from aero.errors import InputError
from aero.regime import REGIMES
from aero.survey.columns import point_columns
from aero.trajectory import Trajectory

LENGTHS = ("reference", "nose", "gap")


def test_shares_add_up_and_pieces_add_up_to_the_whole(surveyed: aero.Survey) -> None:
    total_heat = surveyed.points["heat_load_J_m2"].iloc[-1]
    for name in LENGTHS:
        mine = surveyed.segments[surveyed.segments["length"] == name]
        assert mine["heat_load_share"].sum() == pytest.approx(1.0, rel=1e-12)
        assert mine["speed_loss_share"].sum() == pytest.approx(1.0, rel=1e-12)
        assert mine["heat_load_J_m2"].sum() == pytest.approx(total_heat, rel=1e-12)
        assert mine["duration_s"].sum() == pytest.approx(400.0)
        assert np.array_equal(mine["start_s"].to_numpy()[1:], mine["end_s"].to_numpy()[:-1])


def test_heat_load_is_the_integral_of_the_flux(surveyed: aero.Survey) -> None:
    # the trapezium rule as an independent route; at 1 s steps it lies within 1e-4 of a cubic on this smooth flux
    points = surveyed.points
    load = np.trapezoid(points["heat_flux_W_m2"], points["time_s"])
    assert points["heat_load_J_m2"].iloc[-1] == pytest.approx(load, rel=1e-4)


def test_columns_are_those_promised(surveyed: aero.Survey) -> None:
    assert list(surveyed.points.columns) == [c.name for c in point_columns(LENGTHS)]


def test_every_number_has_an_answer_where_there_is_one(surveyed: aero.Survey) -> None:
    unknown = {"latitude_deg", "longitude_deg", "flight_path_angle_deg", "angle_of_attack_deg", "utc"}
    supersonic = surveyed.points["mach"] > 1.0
    for name, values in surveyed.points.items():
        if name in unknown:
            assert values.isna().all()
        elif str(name).startswith("knudsen_s"):  # behind a shock: none below Mach 1
            assert np.array_equal(values.notna(), supersonic)
        else:
            assert values.notna().all(), name


def test_coefficients_lie_between_their_limits(surveyed: aero.Survey) -> None:
    p = surveyed.points
    assert (p["drag_bridge"].between(0.0, 1.0)).all()
    assert (p["drag_coefficient_continuum"] <= p["drag_coefficient"]).all()
    assert (p["drag_coefficient"] <= p["drag_coefficient_free_molecular"]).all()
    assert (p["drag_coefficient_low"] <= p["drag_coefficient"]).all()
    assert (p["drag_coefficient"] <= p["drag_coefficient_high"]).all()
    fast = p["mach"] > 1.0
    convective = p["heat_flux_W_m2"] - p["heat_flux_radiative_W_m2"]
    assert (convective[fast] <= p["heat_flux_free_molecular_W_m2"][fast] * (1 + 1e-12)).all()
    assert (p["heat_flux_low_W_m2"] <= p["heat_flux_W_m2"]).all()
    assert (p["heat_flux_W_m2"] <= p["heat_flux_high_W_m2"]).all()


def test_tags_agree_with_the_knudsen_numbers_and_the_segments(surveyed: aero.Survey) -> None:
    p = surveyed.points
    for name in LENGTHS:
        assert (aero.regime(p[f"knudsen.{name}"].to_numpy()) == p[f"regime.{name}"].to_numpy(dtype=str)).all()
        for row in surveyed.segments[surveyed.segments["length"] == name].itertuples():
            inside = p["time_s"].between(row.start_s, row.end_s, inclusive="neither")
            assert set(p.loc[inside, f"regime.{name}"]) <= {row.regime}
            assert row.knudsen_min <= row.knudsen_max


def test_the_free_path_definition_moves_no_drag_and_no_heating(entry: Trajectory, body: Vehicle) -> None:
    base = aero.survey(entry, body)
    for definition in ("vhs", "viscosity"):
        other = aero.survey(entry, body, settings=aero.Settings(free_path=definition))
        for column in ("drag_coefficient", "drag_coefficient_low", "heat_flux_W_m2", "heat_flux_high_W_m2"):
            assert np.array_equal(base.points[column], other.points[column])
        assert not np.array_equal(base.points["knudsen.reference"], other.points["knudsen.reference"])
        assert any(definition in note for note in other.notes)


def test_blocks_do_not_show(entry: Trajectory, body: Vehicle, monkeypatch: pytest.MonkeyPatch) -> None:
    from aero.survey import one_pass

    whole = aero.survey(entry, body).points
    monkeypatch.setattr(one_pass, "BLOCK", 37)
    pieces = aero.survey(entry, body).points
    for name in whole.select_dtypes("number").columns:
        np.testing.assert_allclose(pieces[name], whole[name], rtol=1e-13, atol=0.0, err_msg=name)


def test_point_and_survey_agree_to_rounding(placed_entry: Trajectory, body: Vehicle) -> None:
    model = Msis("nrlmsise-00", activity="moderate")
    points = aero.survey(placed_entry, body, atmosphere=model).points
    for row in (0, 100, 250, 400):
        at = points.iloc[row]
        answer = aero.point(
            float(at["altitude_m"]),
            float(at["air_speed_m_s"]),
            vehicle=body,
            atmosphere=model,
            latitude=float(placed_entry.latitude[row]),
            longitude=float(placed_entry.longitude[row]),
            date=placed_entry.utc[row],
        )
        assert answer["air"]["density_kg_m3"] == pytest.approx(at["density_kg_m3"], rel=1e-12)
        assert answer["drag"]["coefficient"] == pytest.approx(at["drag_coefficient"], rel=1e-12)
        assert answer["drag"]["low"] == pytest.approx(at["drag_coefficient_low"], rel=1e-12)
        assert answer["heating"]["stagnation_W_m2"] == pytest.approx(at["heat_flux_W_m2"], rel=1e-12)
        for length in answer["lengths"]:
            assert length["knudsen"] == pytest.approx(at[f"knudsen.{length['name']}"], rel=1e-12)
            assert length["regime"] == at[f"regime.{length['name']}"]


def test_without_times_points_are_surveyed_one_by_one(body: Vehicle) -> None:
    table = Trajectory(name="table", altitude=np.array([120e3, 80e3, 100e3]), speed=np.full(3, 7e3))
    result = aero.survey(table, body)
    assert len(result.points) == 3
    assert result.segments.empty
    assert result.crossings.empty
    assert result.points["heat_load_J_m2"].isna().all()
    assert any("no time column" in note for note in result.notes)
    assert "of 3 conditions" in result.summary


def test_a_fixed_wall_and_one_in_balance(entry: Trajectory, body: Vehicle) -> None:
    fixed = aero.survey(entry, body, settings=aero.Settings(wall=800.0)).points
    assert (fixed["wall_temperature_K"] == 800.0).all()
    balance = aero.survey(entry, body, settings=aero.Settings(wall="radiative")).points
    wall, flux = balance["wall_temperature_K"].to_numpy(), balance["heat_flux_W_m2"].to_numpy()
    # eps sigma T^4 = q + eps sigma (250 K)^4: Stefan-Boltzmann, CODATA 2018
    np.testing.assert_allclose(0.85 * 5.670374419e-8 * (wall**4 - 250.0**4), flux, rtol=1e-5, atol=0.5)


def test_a_wall_column_of_the_trajectory_rules_over_the_vehicle(entry: Trajectory, body: Vehicle) -> None:
    warm = dataclasses.replace(entry, wall_temperature=np.linspace(300.0, 1200.0, len(entry)))
    points = aero.survey(warm, body).points
    np.testing.assert_allclose(points["wall_temperature_K"], warm.wall_temperature)


def test_a_vehicle_without_nose_radius_has_no_heating(entry: Trajectory, body: Vehicle) -> None:
    flat = dataclasses.replace(body, shape=SHAPES["box"](length=0.3, width=0.2, height=0.1))
    result = aero.survey(entry, flat)
    assert result.points["heat_flux_W_m2"].isna().all()
    assert result.segments["heat_load_share"].isna().all()
    assert result.points["drag_coefficient"].notna().all()
    assert "heat load" not in result.summary


def test_angle_of_attack_gives_lift(entry: Trajectory, body: Vehicle) -> None:
    tilted = dataclasses.replace(entry, angle_of_attack=np.full(len(entry), np.radians(15.0)))
    points = aero.survey(tilted, body).points
    assert (points["lift_coefficient"].abs() > 0.01).any()
    np.testing.assert_allclose(points["angle_of_attack_deg"], 15.0)


def test_own_columns_are_carried_through(entry: Trajectory, body: Vehicle) -> None:
    marked = dataclasses.replace(entry, extra={"bank": np.arange(401.0), "mode [-]": np.array(["a"] * 401)})
    points = aero.survey(marked, body).points
    assert np.array_equal(points["input.bank"], np.arange(401.0))
    assert list(points.columns)[-2:] == ["input.bank", "input.mode [-]"]


def test_msis_needs_place_and_date(entry: Trajectory, body: Vehicle) -> None:
    with pytest.raises(
        InputError, match=r"has no latitude and no longitude and no date, which nrlmsise-00 needs"
    ):
        aero.survey(entry, body, atmosphere=Msis("nrlmsise-00"))


def test_msis_ends_where_the_model_ends(placed_entry: Trajectory, body: Vehicle) -> None:
    deep = dataclasses.replace(placed_entry, altitude=placed_entry.altitude - 24e3)
    with pytest.raises(InputError, match=r"of 401 points lie outside the -0.5 to 1000 km of nrlmsise-00"):
        aero.survey(deep, body)


def test_a_mass_scales_what_it_should(entry: Trajectory, body: Vehicle) -> None:
    heavy = dataclasses.replace(body, mass=2.0 * body.mass)
    one, two = aero.survey(entry, body).points, aero.survey(entry, heavy).points
    np.testing.assert_allclose(two["drag_deceleration_m_s2"], 0.5 * one["drag_deceleration_m_s2"], rtol=1e-14)
    np.testing.assert_allclose(two["ballistic_coefficient_kg_m2"], 2.0 * one["ballistic_coefficient_kg_m2"])
    # 0.5 rho V^2 C A/m: Newton, written out
    row = one.iloc[200]
    force = 0.5 * row["density_kg_m3"] * row["air_speed_m_s"] ** 2 * row["drag_coefficient"] * 0.636
    assert row["drag_deceleration_m_s2"] == pytest.approx(force / 38.0, rel=1e-12)


PYRAMID = SHAPES["cone"](half_angle=0.6, base_radius=0.3).panels(24).triangles().vertices


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    altitude=st.floats(-5e3, 1000e3),
    speed=st.floats(1.0, 15e3),
    kind=st.sampled_from(sorted(SHAPES)),
    alpha=st.floats(0.0, 1.0),
    angle=st.floats(-0.5, 0.5),
    wall=st.one_of(st.floats(150.0, 2500.0), st.just("radiative")),
)
def test_no_gap_over_the_whole_input_space(
    altitude: float, speed: float, kind: str, alpha: float, angle: float, wall: float | str
) -> None:
    sizes = {
        "sphere": {"diameter": 0.5},
        "cylinder": {"diameter": 0.5, "length": 2.0},
        "flat-plate": {"length": 0.5, "width": 0.4},
        "cone": {"half_angle": 0.3, "base_radius": 0.3},
        "sphere-cone": {"nose_radius": 0.1, "half_angle": 0.8, "base_radius": 0.3},
        "box": {"length": 0.3, "width": 0.2, "height": 0.1},
        "mesh": {"vertices": PYRAMID, "digest": "pyramid"},
    }
    vehicle = Vehicle.from_shape(SHAPES[kind](**sizes[kind])).with_surface(energy_accommodation=alpha)
    vehicle = dataclasses.replace(vehicle, mass=10.0, heating_nose_radius=0.2)
    answer = aero.point(
        altitude,
        speed,
        vehicle=vehicle,
        settings=aero.Settings(wall=wall),
        angle_of_attack=angle,
        atmosphere=StandardAtmosphere1976(),
    )
    drag, heat = answer["drag"], answer["heating"]
    numbers = [drag[k] for k in ("coefficient", "free_molecular", "continuum", "bridge", "low", "high")]
    numbers += [heat[k] for k in ("stagnation_W_m2", "free_molecular_W_m2", "continuum_W_m2", "low", "high")]
    assert np.isfinite(numbers).all()
    assert 0.0 <= drag["bridge"] <= 1.0
    ends = sorted((drag["continuum"], drag["free_molecular"]))
    assert ends[0] * (1 - 1e-12) <= drag["coefficient"] <= ends[1] * (1 + 1e-12)
    assert drag["low"] <= drag["coefficient"] <= drag["high"]
    assert heat["low"] <= heat["stagnation_W_m2"] <= heat["high"]
    assert all(length["regime"] in REGIMES for length in answer["lengths"])


def test_regime_column_keeps_order_of_rarefaction(surveyed: aero.Survey) -> None:
    assert list(surveyed.points["regime.reference"].cat.categories) == list(REGIMES)
    assert isinstance(surveyed.points["utc"].dtype, np.dtype)
    assert pd.api.types.is_datetime64_dtype(surveyed.points["utc"])
