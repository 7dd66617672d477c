"""Columns of force, moment and stability of a vehicle that states its moment point."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from aero.air import StandardAtmosphere1976
from aero.body import Cylinder, FlatPlate, SphereCone, Surface, Vehicle
from aero.force import continuum_loads, free_molecular_loads
from aero.gas import flow, mean_free_path
from aero.survey.attitude_columns import ATTITUDE_COLUMNS, attitude_columns
from aero.survey.settings import Settings
from aero.survey.vehicle_columns import Passing, vehicle_columns

ALTITUDE = np.linspace(70e3, 200e3, 9)
CAPSULE = SphereCone(nose_radius=0.2202, half_angle=np.radians(60.0), base_radius=0.4055)


def passing(vehicle, angle=0.05, sideslip=0.0, speed=7500.0):
    air = StandardAtmosphere1976().at(ALTITUDE)
    made = Passing(
        vehicle,
        Settings(),
        air,
        flow(air, speed),
        mean_free_path(air),
        np.full(ALTITUDE.size, 0.95),
        300.0,
        angle,
        StandardAtmosphere1976().uncertainty(ALTITUDE),
        sideslip,
    )
    columns = vehicle_columns(made)
    return attitude_columns(made, columns["wall_temperature_K"], columns), columns, made


def with_point(shape, **changes):
    vehicle = Vehicle.from_shape(shape, surface=Surface(energy_accommodation=0.95))
    return replace(vehicle, moment_point=(-0.28, 0.0, 0.0), moment_length=0.811, mass=38.0, **changes)


def test_every_column_is_there_and_force_is_that_of_drag():
    found, columns, made = passing(with_point(CAPSULE))
    assert tuple(found) == ATTITUDE_COLUMNS
    assert all(values.shape == ALTITUDE.shape and np.isfinite(values).all() for values in found.values())
    drag = found["axial_force_coefficient"] * np.cos(0.05) + found["normal_force_coefficient"] * np.sin(0.05)
    assert drag == pytest.approx(columns["drag_coefficient"], rel=1e-3)  # panels lack 5e-4 of the area
    free = free_molecular_loads(made.vehicle, made.air, made.moving, 300.0, 0.95, 0.05)
    knudsen = made.path / made.vehicle.reference_length
    dense = continuum_loads(made.vehicle, made.air, made.moving, knudsen, 0.05)
    assert found["pitch_moment_coefficient_free_molecular"] == pytest.approx(free.pitch, abs=1e-12)
    assert found["normal_force_coefficient_continuum"] == pytest.approx(dense.normal, abs=1e-12)


def test_slope_and_centre_of_pressure_belong_together():
    # at a small angle C_m = slope times angle, and the centre of pressure is their ratio
    found, _, _ = passing(with_point(CAPSULE), angle=0.01)
    for tail in ("", "_local"):
        slope = found[f"pitch_stability{tail}_per_rad"]
        pitch = found[f"pitch_moment_coefficient{tail}"]
        normal = found[f"normal_force_coefficient{tail}"]
        # a body of revolution: the moment is odd in the angle, its third derivative some times its slope
        assert pitch == pytest.approx(0.01 * slope, rel=2e-3, abs=1e-6)
        assert found[f"centre_of_pressure{tail}_m"] == pytest.approx(pitch / normal * 0.811, rel=1e-9)
    level, _, _ = passing(with_point(CAPSULE), angle=0.0)
    assert level["normal_force_coefficient"] == pytest.approx(0.0, abs=1e-12)
    assert level["centre_of_pressure_m"] == pytest.approx(found["centre_of_pressure_m"], rel=2e-3)


def test_symmetry_of_side_and_normal():
    right, _, _ = passing(with_point(CAPSULE), angle=0.0, sideslip=0.08)
    up, _, _ = passing(with_point(CAPSULE), angle=0.08)
    # flow from the right pushes left; ahead of the point that turns the nose left where flow from below
    # turns it up
    assert right["side_force_coefficient"] == pytest.approx(-up["normal_force_coefficient"], rel=1e-6)
    assert right["yaw_moment_coefficient"] == pytest.approx(
        -up["pitch_moment_coefficient"], rel=1e-6, abs=1e-9
    )


def test_varying_attitude():
    angle = np.linspace(-0.1, 0.1, ALTITUDE.size)
    found, _, _ = passing(with_point(FlatPlate(length=1.0, width=0.5)), angle=angle)
    for point in (0, 5):
        one, _, _ = passing(with_point(FlatPlate(length=1.0, width=0.5)), angle=float(angle[point]))
        for name in ATTITUDE_COLUMNS:
            assert found[name][point] == pytest.approx(one[name][point], rel=1e-9, abs=1e-10)


def test_nothing_without_a_moment_point():
    for vehicle in (
        replace(with_point(CAPSULE), moment_point=None),
        with_point(CAPSULE, tumbling=True),
        replace(with_point(CAPSULE), shape=None, heating_nose_radius=0.3),
    ):
        assert passing(vehicle)[0] == {}


def test_at_rest_there_is_no_answer():
    found, _, _ = passing(with_point(Cylinder(diameter=0.4, length=1.0)), speed=0.0)
    assert all(np.isnan(values).all() for name, values in found.items() if name != "projected_area_m2")
