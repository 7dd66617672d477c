"""Drag of meshes: towards the closed forms, whatever the order of the elements, however the body lies."""

from __future__ import annotations

import time
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.body import Box, Mesh, Part, Sphere, SphereCone, Vehicle, read_vehicle
from aero.body.facets import of_triangles
from aero.body.part import rotation
from aero.force import continuum, free_molecular, speed_table
from aero.force.newtonian import integrals, integrals_at
from aero.gas import flow, mixed_air

EXAMPLES = Path(__file__).parents[2] / "trajectories"
ORBIT = [0.20, 0.01, 0.70, 0.02, 0.001, 0.06, 0.009]
AIR = mixed_air(900.0, 1e15, ORBIT, altitude=300e3)
STREAM = flow(AIR, 7500.0)
BALL, CAPSULE = Sphere(diameter=1.0), SphereCone(nose_radius=0.27, half_angle=0.96, base_radius=0.45)


def vehicle_of(shape, area=0.5):
    return Vehicle("body", 1.0, area, 1.0, shape=shape)


def drags(shape, angle=0.0):
    """Free-molecular and continuum drag and lift on 0.5 m2."""
    free = free_molecular(vehicle_of(shape), AIR, STREAM, 300.0, 0.9, angle)
    dense = continuum(vehicle_of(shape), AIR, STREAM, 1e-6, angle)
    return np.array([free.drag, dense.drag, free.lift, dense.lift])


@pytest.mark.parametrize(("body", "angle"), [(BALL, 0.0), (BALL, 0.7), (CAPSULE, 0.0), (CAPSULE, 0.35)])
def test_a_mesh_comes_to_the_closed_form_at_second_order_in_element_size(body, angle):
    exact = drags(body, angle)
    sizes, errors = [], []
    for count in (400, 1600, 6400):
        mesh = Mesh.of(body.panels(count))
        sizes.append(1.0 / np.sqrt(len(mesh)))
        errors.append(np.abs(drags(mesh, angle) - exact)[:2])
    order = np.diff(np.log(errors), axis=0) / np.diff(np.log(sizes))[:, None]
    # second order; some hundredths of it are the next term, at 400 panels still a tenth of the first
    assert np.all(np.abs(order[-1] - 2.0) < 0.15)
    # an inscribed polyhedron: the cap of a facet of size h on radius r is h^2/(8 r) high
    assert np.all(errors[-1] / exact[:2] < 2.5e-3)


def test_element_order_does_not_matter():
    mesh = Mesh.of(CAPSULE.panels(1500))
    shuffled = Mesh(np.random.default_rng(5).permutation(mesh.vertices), "shuffled")
    assert drags(shuffled, 0.3) == pytest.approx(drags(mesh, 0.3), rel=1e-12)
    turned = Mesh(np.roll(mesh.vertices, 1, axis=1), "turned")
    assert drags(turned, 0.3) == pytest.approx(drags(mesh, 0.3), rel=1e-12)


@given(angle=st.floats(-3.1, 3.1), attack=st.floats(-1.0, 1.0))
@settings(max_examples=30, deadline=None)
def test_turning_the_body_is_turning_the_flow(angle, attack):
    mesh = Mesh.of(Box(length=0.3, width=0.2, height=0.1).panels(24))
    # right-handed about y lowers the tail and raises the nose: as a positive angle of attack
    part = Part("body", mesh, angle=angle)
    turned = Mesh(part.panels().triangles().vertices, f"turned by {angle}")
    whole = (attack + angle + np.pi) % (2 * np.pi) - np.pi
    assert drags(turned, attack) == pytest.approx(drags(mesh, whole), rel=1e-9, abs=1e-9)


@given(scale=st.floats(0.01, 100.0))
@settings(max_examples=20, deadline=None)
def test_size_does_not_matter(scale):
    mesh = Mesh.of(CAPSULE.panels(300))
    large = Mesh(mesh.vertices * scale, f"times {scale}")
    one = free_molecular(vehicle_of(mesh, 1.0), AIR, STREAM, 300.0, 0.9, 0.3).drag
    other = free_molecular(vehicle_of(large, scale**2), AIR, STREAM, 300.0, 0.9, 0.3).drag
    assert other == pytest.approx(float(one), rel=1e-10)


def test_a_turned_about_flow_gives_the_turned_about_force():
    # reciprocity for a body with a centre of symmetry: its mirror image through it feels the same drag
    mesh = Mesh.of(Box(length=0.3, width=0.2, height=0.1).panels(24))
    mirrored = Mesh(-mesh.vertices[:, ::-1], "mirrored")
    assert drags(mirrored, 0.4) == pytest.approx(drags(mesh, 0.4), rel=1e-12)


def test_a_specular_cube_takes_twice_the_momentum_of_the_stream():
    # face-on, cold: q C A = 2 rho V^2 A, so C = 4; S = 100 leaves 1/S^2 of it from the thermal motion
    cube = Mesh.of(Box(length=1.0, width=1.0, height=1.0).panels(6))
    parts, _ = speed_table.parts(cube, 0.0, np.array([100.0]))
    assert 2.0 * parts.normal[0] == pytest.approx(4.0, rel=2e-4)


def test_lopsided_bodies_are_not_taken_for_symmetric_ones():
    wedge = Mesh(ramp(), "ramp")
    up, down = drags(wedge, 0.4), drags(wedge, -0.4)
    assert abs(up[0] - down[0]) > 0.1 * up[0]
    angles = np.array([-2.2, -0.4, 0.0, 0.4, 3.0])
    air = mixed_air(np.full(5, 900.0), 1e15, ORBIT, altitude=300e3)
    together = free_molecular(vehicle_of(wedge), air, flow(air, 7500.0 + 0.0 * angles), 300.0, 0.9, angles)
    for i, angle in enumerate(angles):
        alone = free_molecular(vehicle_of(wedge), AIR, STREAM, 300.0, 0.9, float(angle))
        # cubic over half degrees through the bend of large flat faces, 1/S = 0.1 wide
        assert together.drag[i] == pytest.approx(float(alone.drag), rel=1e-5)
        assert together.lift[i] == pytest.approx(float(alone.lift), abs=1e-5 * float(alone.drag))
        for several, one in zip(integrals(wedge, angles), integrals_at(wedge, float(angle)), strict=True):
            # base pressure sets in with a bend at 30 degrees: half a degree times its slope, over 8
            assert several[i] == pytest.approx(float(one), abs=2e-3 * 0.5)


def ramp():
    """Return a wedge: flat below, rising to its back."""
    a, b = np.array([0.5, -0.5, 0.0]), np.array([0.5, 0.5, 0.0])
    c, d = np.array([-0.5, -0.5, 0.0]), np.array([-0.5, 0.5, 0.0])
    e, f = np.array([-0.5, -0.5, -0.6]), np.array([-0.5, 0.5, -0.6])
    faces = [(a, b, d), (a, d, c), (a, e, f), (a, f, b), (c, d, f), (c, f, e), (a, c, e), (b, f, d)]
    vertices = np.array(faces)
    panels = of_triangles(vertices)
    assert np.allclose((panels.normals * panels.areas[:, None]).sum(axis=0), 0.0)
    outward = (panels.normals * (panels.centroids - vertices.reshape(-1, 3).mean(axis=0))).sum(axis=1)
    return np.where((outward > 0.0)[:, None, None], vertices, vertices[:, ::-1])


def test_gathered_facets_add_up_to_what_each_gives(monkeypatch):
    mesh = Mesh.of(CAPSULE.panels(6000))
    ratios = np.array([0.05, 1.0, 10.0, 100.0])
    assert len(mesh) > 2 * speed_table.COSINES
    quick = speed_table.parts(mesh, 0.3, ratios)
    monkeypatch.setattr(speed_table, "COSINES", 10**6)
    each = speed_table.parts(mesh, 0.3, ratios)
    size = each[0].normal + each[0].tangential
    for one, other in zip(quick, each, strict=True):
        for gathered, summed in zip(one[:3], other[:3], strict=True):
            assert np.max(np.abs(gathered - summed) / size) < 1e-7  # as the docstring says


def test_a_hundred_thousand_elements_at_one_condition_take_well_under_a_second():
    mesh = Mesh.of(CAPSULE.panels(50_000))
    assert len(mesh) > 100_000
    began = time.perf_counter()
    drags(mesh, 0.2)
    assert time.perf_counter() - began < 1.0  # 0.05 s measured on one core, 0.15 s with shadows


def test_the_example_mesh_is_the_example_capsule():
    meshed, plain = (read_vehicle(EXAMPLES / f"{name}.toml") for name in ("marram-mesh", "marram"))
    assert meshed.body_class == plain.body_class == "blunt-cone"
    for angle in (0.0, 0.2):
        one, other = (free_molecular(v, AIR, STREAM, 300.0, 0.95, angle) for v in (meshed, plain))
        # 72 sides around: a polygon's area is sin(5 deg)/(5 deg) = 0.9987 of the circle's
        assert one.drag == pytest.approx(float(other.drag), rel=2e-3)
        assert one.lift == pytest.approx(float(other.lift), abs=2e-3 * float(other.drag))


def test_rotations_are_rotations():
    turn = rotation((1.0, -2.0, 0.5), 0.7)
    assert turn @ turn.T == pytest.approx(np.eye(3), abs=1e-14)
    assert np.trace(turn) == pytest.approx(1.0 + 2.0 * np.cos(0.7))
