"""Averages over all directions of the flow."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from aero.body import Box, Cone, FlatPlate, Sphere, Surface, Vehicle
from aero.body.part import Part
from aero.force import continuum_loads, free_molecular, free_molecular_loads, projected_area, tumbling_drag
from aero.force.tumbling import sphere_rule, tumbling_coefficients
from aero.gas import flow, mixed_air

ORBIT = [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01]
AIR = mixed_air(900.0, 1e15, ORBIT, altitude=250e3)
MOVING = flow(AIR, 7500.0)


def surface_area(shape):
    return float(Vehicle.from_shape(shape).elements(20).areas.sum())


@pytest.mark.parametrize(
    "shape", [Box(length=1.0, width=0.5, height=0.2), FlatPlate(length=1.0, width=0.3)], ids=["box", "plate"]
)
def test_convex_body_shows_a_quarter_of_its_surface_and_drags_like_a_sphere(shape):
    # Cauchy 1832: mean projected area = surface/4. Every element then meets all incidences alike, so its mean
    # drag is that of a sphere with its surface, whatever the body.
    skin = Surface(diffuse_fraction=0.7)
    vehicle = Vehicle.from_shape(shape, surface=skin)
    found = tumbling_drag(vehicle, AIR, MOVING, 300.0, 0.9)
    quarter = surface_area(shape) / 4.0
    assert found.projected_area == pytest.approx(quarter, rel=1e-12)
    ball = free_molecular(Vehicle.from_shape(Sphere(diameter=1.0), surface=skin), AIR, MOVING, 300.0, 0.9)
    per_area = float(found.free_molecular) * vehicle.reference_area / quarter
    assert per_area == pytest.approx(float(ball.drag), rel=1e-7)  # tables in ln S on both sides


@pytest.mark.parametrize(
    "shape", [Box(length=1.0, width=0.5, height=0.2), Cone(half_angle=0.5, base_radius=0.4)]
)
def test_average_is_the_mean_of_loads_over_the_sphere(shape):
    vehicle = Vehicle.from_shape(shape)
    a, b, weights = sphere_rule(24)
    assert weights.sum() == pytest.approx(1.0, abs=1e-14)
    air = mixed_air(np.full(a.size, 900.0), 1e15, ORBIT, altitude=250e3)
    moving = flow(air, 7500.0)
    free = free_molecular_loads(vehicle, air, moving, 300.0, 0.9, a, b, count=300)
    dense = continuum_loads(
        replace(vehicle, surface=Surface(diffuse_fraction=0.0)), air, moving, 1.0, a, b, count=300
    )
    found = tumbling_drag(vehicle, AIR, MOVING, 300.0, 0.9, count=300)
    # 1152 directions over the kinks where faces turn away: 2e-3 at most; drag itself is smooth there
    assert float(found.free_molecular) == pytest.approx(float(weights @ free.drag), rel=2e-3)
    assert float(found.continuum) == pytest.approx(float(weights @ dense.drag), rel=2e-3)
    assert found.projected_area == pytest.approx(
        float(weights @ projected_area(vehicle, a, b, count=300)), rel=2e-3
    )


def test_directions_with_shadows_converge_to_the_convex_answer():
    box = Vehicle.from_shape(Box(length=0.3, width=0.2, height=0.1))
    elements = box.elements(24)
    exact = tumbling_drag(box, AIR, MOVING, 300.0, 0.9)
    errors = []
    for rings in (4, 10, 20):
        found = tumbling_drag(box, AIR, MOVING, 300.0, 0.9, rings=rings, elements=elements)
        errors.append(abs(found.projected_area / exact.projected_area - 1.0))
        assert abs(found.free_molecular / exact.free_molecular - 1.0) < errors[-1]
    assert errors[0] > errors[1] > errors[2]
    assert errors[1] < 6e-3  # the default number of directions


def test_panel_behind_a_body_hides_part_of_the_mean_area():
    box, wing = Box(length=0.3, width=0.2, height=0.1), FlatPlate(length=0.4, width=0.6)
    skin = Surface()
    vehicle = Vehicle.from_shape(box).with_parts(
        (Part("body", box, skin), Part("wing", wing, skin, position=(-0.16, 0.0, 0.0), angle=np.pi / 2))
    )
    hidden = tumbling_drag(vehicle, AIR, MOVING, 300.0, 0.9)
    free = tumbling_drag(vehicle, AIR, MOVING, 300.0, 0.9, shadow=False)
    assert free.projected_area == pytest.approx((2 * (0.06 + 0.03 + 0.02) + 0.48) / 4.0, rel=1e-12)
    assert 0.8 * free.projected_area < hidden.projected_area < 0.95 * free.projected_area
    assert hidden.free_molecular < free.free_molecular


def test_coefficients_with_their_derivatives():
    vehicle = Vehicle.from_shape(Box(length=1.0, width=0.5, height=0.2))
    free, dense = tumbling_coefficients(vehicle, AIR, MOVING, 300.0, 1.0)
    whole = free_molecular(Vehicle.from_shape(Sphere(diameter=1.0)), AIR, MOVING, 300.0, 1.0)
    scale = surface_area(vehicle.shape) / 4.0 / vehicle.reference_area
    assert float(free.drag) == pytest.approx(scale * float(whole.drag), rel=1e-7)
    # one-sided over 1e-6 in accommodation (rounding 1e-9), central over 2 % of the wall temperature
    assert float(free.drag_by_accommodation) == pytest.approx(
        scale * float(whole.drag_by_accommodation), rel=2e-4
    )
    assert float(free.drag_by_wall_temperature) == pytest.approx(
        scale * float(whole.drag_by_wall_temperature), rel=1e-4
    )
    assert float(free.lift) == float(dense.lift) == 0.0
    assert 0.0 < float(dense.drag) < float(free.drag)


def test_no_shape_no_motion():
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    assert np.isnan(tumbling_drag(replace(ball, shape=None), AIR, MOVING, 300.0, 1.0).free_molecular)
    assert np.isnan(tumbling_drag(ball, AIR, flow(AIR, 0.0), 300.0, 1.0).free_molecular)
