"""Sideslip and a moment point in the database: against turned bodies and against the loads themselves."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from aero.body import Box, Sphere, SphereCone, Vehicle
from aero.errors import InputError
from aero.survey.attitude_columns import ATTITUDE_COLUMNS
from aero.survey.database import build_database

ALTITUDE, SPEED = [90e3, 110e3, 300e3], 7.5e3
CONE = Vehicle.from_shape(SphereCone(nose_radius=0.27, half_angle=np.radians(55.0), base_radius=0.45))
BOX = Vehicle.from_shape(Box(length=0.34, width=0.226, height=0.1))
TURNED = Vehicle.from_shape(Box(length=0.34, width=0.1, height=0.226))
SUMS = 2e-3  # relative: panel sums against closed forms, 8000 panels a curved body (second order)


def drag(made: object) -> np.ndarray:
    return made.columns["drag_coefficient"][..., 0, 0].ravel()  # type: ignore[attr-defined]


def test_a_body_of_revolution_feels_sideslip_as_angle_of_attack() -> None:
    """cos of the whole angle is cos a cos b, and drag knows no other."""
    aside = build_database(CONE, ALTITUDE, SPEED, 0.0, 0.2)
    pitched = build_database(CONE, ALTITUDE, SPEED, 0.2, 0.0)
    both = build_database(CONE, ALTITUDE, SPEED, 0.15, 0.1)
    whole = build_database(CONE, ALTITUDE, SPEED, np.arccos(np.cos(0.15) * np.cos(0.1)))
    np.testing.assert_allclose(drag(aside), drag(pitched), rtol=SUMS)
    np.testing.assert_allclose(drag(both), drag(whole), rtol=SUMS)
    for end in ("low", "high"):
        width = aside.columns[f"drag_coefficient_{end}"] / aside.columns["drag_coefficient"]
        assert np.isfinite(width).all()


def test_sideslip_of_a_box_is_angle_of_attack_of_the_box_on_its_side() -> None:
    """The flow along y of one is the flow along z of the other; both have the same bridge and area."""
    aside = build_database(BOX, ALTITUDE, SPEED, 0.0, [-0.3, 0.0, 0.3])
    pitched = build_database(TURNED, ALTITUDE, SPEED, [-0.3, 0.0, 0.3])
    ours = aside.columns["drag_coefficient_free_molecular"][:, 0, 0, :]
    theirs = pitched.columns["drag_coefficient_free_molecular"][:, 0, :, 0]
    np.testing.assert_allclose(ours, theirs, rtol=1e-4)  # flat faces: sums are exact up to their tables
    np.testing.assert_allclose(ours[:, 0], ours[:, 2], rtol=1e-6)  # both sides alike
    assert (ours[:, 0] > 1.05 * ours[:, 1]).all()  # the long side meets the flow


def test_a_sphere_feels_neither_angle() -> None:
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    made = build_database(ball, ALTITUDE, SPEED, [-0.4, 0.0], [0.0, 0.3])
    np.testing.assert_allclose(
        made.columns["drag_coefficient"],
        np.broadcast_to(
            made.columns["drag_coefficient"][:, :, :1, :1], made.columns["drag_coefficient"].shape
        ),
        rtol=SUMS,
    )


def test_a_moment_point_brings_forces_and_moments() -> None:
    vehicle = dataclasses.replace(CONE, moment_point=(-0.25, 0.0, 0.0))
    made = build_database(vehicle, ALTITUDE, SPEED, [-0.1, 0.0, 0.1], [0.0, 0.1])
    assert set(ATTITUDE_COLUMNS) <= made.columns.keys()
    assert not set(ATTITUDE_COLUMNS) & build_database(CONE, ALTITUDE, SPEED).columns.keys()
    columns = made.columns
    a, b = made.axes[2][:, None], made.axes[3]
    # drag is the force along the flow: C_D = C_A cos a cos b - C_Y sin b + C_N sin a cos b
    along = (
        columns["axial_force_coefficient"] * np.cos(a) * np.cos(b)
        - columns["side_force_coefficient"] * np.sin(b)
        + columns["normal_force_coefficient"] * np.sin(a) * np.cos(b)
    )
    np.testing.assert_allclose(along, columns["drag_coefficient"], rtol=SUMS)
    # symmetry: no side force and no yaw without sideslip, pitch odd in the angle of attack
    assert np.abs(columns["side_force_coefficient"][..., 0]).max() < 1e-9
    assert np.abs(columns["yaw_moment_coefficient"][..., 0]).max() < 1e-9
    pitch = columns["pitch_moment_coefficient"]
    np.testing.assert_allclose(pitch[:, :, 0], -pitch[:, :, 2], atol=1e-9)
    # what symmetry forbids has no error of interpolation
    plane = build_database(vehicle, ALTITUDE, SPEED, [-0.1, 0.0, 0.1])
    assert plane.record["interpolation"]["yaw_moment_coefficient"]["largest_error"] is None
    assert plane.record["interpolation"]["pitch_moment_coefficient"]["largest_error"] > 0.0


def test_own_sideslip_is_taken_where_none_is_given() -> None:
    vehicle = dataclasses.replace(BOX, sideslip=0.3)
    made = build_database(vehicle, ALTITUDE, SPEED)
    np.testing.assert_allclose(drag(made), drag(build_database(BOX, ALTITUDE, SPEED, 0.0, 0.3)), rtol=1e-12)
    assert np.isnan(made.at(ALTITUDE[0], SPEED, 0.0, 0.0)["drag_coefficient"])


def test_a_tumbling_vehicle_has_no_angles() -> None:
    vehicle = dataclasses.replace(BOX, tumbling=True)
    with pytest.raises(InputError, match="the vehicle tumbles"):
        build_database(vehicle, ALTITUDE, SPEED, [0.0, 0.1])
