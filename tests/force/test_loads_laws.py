"""Laws that force and moment obey whatever the body: conservation, symmetry, invariance."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.air.state import MOLECULE_MASS
from aero.body import Box, Cone, FlatPlate, Sphere, SphereCone, Surface, Vehicle
from aero.body.elements import Elements
from aero.constants import BOLTZMANN
from aero.force import continuum_loads, flow_direction, free_molecular_loads, lift_direction
from aero.gas import flow, mixed_air

NITROGEN = [1.0, 0, 0, 0, 0, 0, 0]
SHAPES = (
    Sphere(diameter=1.0),
    SphereCone(nose_radius=0.2, half_angle=0.9, base_radius=0.5),
    Cone(half_angle=0.4, base_radius=0.5),
    Box(length=1.0, width=0.6, height=0.3),
    FlatPlate(length=1.0, width=0.4),
)
angles = st.floats(-3.1, 3.1)
slips = st.floats(-1.5, 1.5)


def stream(speed_ratio, temperature=300.0):
    air = mixed_air(temperature, 1e15, NITROGEN, altitude=250e3)
    return air, flow(air, speed_ratio * np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[0]))


def elements_of(vertices, normals, surface):
    edges = np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    areas = 0.5 * np.sqrt((edges * edges).sum(axis=1))
    return Elements(
        normals, areas, vertices.mean(axis=1), vertices, np.zeros(len(areas), dtype=int), (surface,), ("",)
    )


def lumpy(seed):
    """A closed, lopsided body: an octahedron with its corners moved, normals outward."""
    random = np.random.default_rng(seed)
    corners = np.concatenate([np.eye(3), -np.eye(3)]) * random.uniform(0.5, 1.5, (6, 1))
    corners = corners + random.uniform(-0.15, 0.15, (6, 3))
    faces = [(i, j, k) for i in (0, 3) for j in (1, 4) for k in (2, 5)]
    vertices = corners[np.array(faces)]
    normals = np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    normals *= np.sign((normals * vertices.mean(axis=1)).sum(axis=1))[:, None]
    return vertices, normals / np.sqrt((normals * normals).sum(axis=1))[:, None]


def body(**surface):
    return replace(
        Vehicle.from_shape(Sphere(diameter=1.0), surface=Surface(**surface)), moment_point=(0.1, -0.2, 0.05)
    )


def both(vehicle, elements, angle, slip, ratio=6.0):
    air, moving = stream(ratio)
    free = free_molecular_loads(vehicle, air, moving, 400.0, 0.7, angle, slip, elements=elements)
    dense = continuum_loads(vehicle, air, moving, 1.0, angle, slip, elements=elements)
    return free, dense


def angles_of(direction):
    return np.arctan2(direction[2], direction[0]), np.arcsin(np.clip(direction[1], -1.0, 1.0))


@given(angles, slips)
@settings(deadline=None, max_examples=20)
def test_specular_cube_takes_the_momentum_that_molecules_lose(angle, slip):
    # fast molecules bounce off each face they meet: what the body takes is what they had less what they keep
    cube = Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0), surface=Surface(diffuse_fraction=0.0))
    ratio = 150.0
    air, moving = stream(ratio)
    found = free_molecular_loads(cube, air, moving, 300.0, 1.0, angle, slip)
    u = flow_direction(angle, slip)
    force = np.zeros(3)
    for normal in np.concatenate([np.eye(3), -np.eye(3)]):
        c = normal @ u
        if c > 0.0:
            out = -u + 2.0 * c * normal
            force += 2.0 * c * (-u - out)  # flux times change of velocity over rho V^2/2
    # thermal motion adds at most (1 + 2/sqrt(pi))/S^2 a face near grazing incidence, six faces
    assert found.force == pytest.approx(force, abs=6.0 * 2.2 / ratio**2)


def test_no_accommodation_gives_all_energy_back():
    # diffuse, alpha 0, hypersonic, face on: 2kT_e = mV^2/2 a molecule, so they leave with the mean normal
    # momentum sqrt(pi k T_e/(2m)) = V sqrt(pi/8) and C_D = 2 + 2 sqrt(pi/8); their energy flux is 2kT_e each
    plate = Vehicle.from_shape(FlatPlate(length=1.0, width=1.0))
    air, moving = stream(200.0)
    cold = free_molecular_loads(plate, air, moving, 10.0, 0.0, np.pi / 2)
    hot = free_molecular_loads(plate, air, moving, 5000.0, 0.0, np.pi / 2)
    assert float(cold.drag) == float(hot.drag)  # the wall plays no part
    # terms of order 1/S are those of the plate's lee, of order 1/S^2 elsewhere
    assert float(cold.drag) == pytest.approx(2.0 + 2.0 * np.sqrt(np.pi / 8.0), abs=1e-4)


@pytest.mark.parametrize("shape", SHAPES, ids=lambda shape: shape.kind)
@given(angles, slips, st.floats(0.05, 60.0), st.floats(0.0, 1.0), st.floats(0.0, 1.0))
@settings(deadline=None, max_examples=15)
def test_drag_is_never_negative(shape, angle, slip, ratio, sigma, alpha):
    vehicle = Vehicle.from_shape(shape, surface=Surface(diffuse_fraction=sigma))
    air, moving = stream(ratio)
    found = free_molecular_loads(vehicle, air, moving, 300.0, alpha, angle, slip, count=200)
    # a specular plate edge-on has none: rounding of the sums, which grow as 1/S^2
    assert float(found.drag) > -1e-13 * (1.0 + 1.0 / ratio**2)
    assert float(continuum_loads(vehicle, air, moving, 1.0, angle, slip, count=200).drag) > -1e-13


@given(st.integers(0, 10**6), angles, slips, st.sampled_from([0, 1, 2]))
@settings(deadline=None, max_examples=25)
def test_mirrored_body_in_the_mirrored_flow_feels_the_mirrored_force(seed, angle, slip, axis):
    vertices, normals = lumpy(seed)
    vehicle = body(diffuse_fraction=0.6)
    mirror = np.ones(3)
    mirror[axis] = -1.0
    other = replace(vehicle, moment_point=tuple(np.array(vehicle.moment_point) * mirror))
    a, b = angles_of(flow_direction(angle, slip) * mirror)
    one = both(vehicle, elements_of(vertices, normals, vehicle.surface), angle, slip)
    two = both(other, elements_of(vertices * mirror, normals * mirror, vehicle.surface), a, b)
    for here, there in zip(one, two, strict=True):
        # shadows are drawn on pixels, and this body has none but its own lee
        assert there.force == pytest.approx(here.force * mirror, abs=1e-9)
        assert there.moment == pytest.approx(-here.moment * mirror, abs=1e-9)


@given(st.integers(0, 10**6), angles, slips)
@settings(deadline=None, max_examples=25)
def test_body_and_flow_turned_together(seed, angle, slip):
    vertices, normals = lumpy(seed)
    vehicle = body(diffuse_fraction=0.8)
    turn = np.linalg.qr(np.random.default_rng(seed).normal(size=(3, 3)))[0]
    turn = turn * np.linalg.det(turn)
    other = replace(vehicle, moment_point=tuple(turn @ np.array(vehicle.moment_point)))
    a, b = angles_of(turn @ flow_direction(angle, slip))
    one = both(vehicle, elements_of(vertices, normals, vehicle.surface), angle, slip)
    two = both(other, elements_of(vertices @ turn.T, normals @ turn.T, vehicle.surface), a, b)
    for here, there in zip(one, two, strict=True):
        assert there.force == pytest.approx(turn @ here.force, abs=1e-8)  # arcsin near +-90 deg: 1e-8 rad
        assert there.moment == pytest.approx(turn @ here.moment, abs=1e-8)


@given(st.integers(0, 10**6), angles, slips, st.floats(-3.0, 3.0))
@settings(deadline=None, max_examples=25)
def test_scale_and_order_of_elements_do_nothing(seed, angle, slip, decades):
    vertices, normals = lumpy(seed)
    vehicle = body()
    size = 10.0**decades
    other = replace(
        vehicle,
        reference_area=vehicle.reference_area * size**2,
        reference_length=vehicle.reference_length * size,
        moment_point=tuple(np.array(vehicle.moment_point) * size),
    )
    order = np.random.default_rng(seed).permutation(len(normals))
    one = both(vehicle, elements_of(vertices, normals, vehicle.surface), angle, slip)
    two = both(other, elements_of(vertices[order] * size, normals[order], vehicle.surface), angle, slip)
    for here, there in zip(one, two, strict=True):
        assert there.force == pytest.approx(here.force, abs=1e-10)
        assert there.moment == pytest.approx(here.moment, abs=1e-10)


@given(st.integers(0, 10**6), angles, slips)
@settings(deadline=None, max_examples=15)
def test_moment_about_another_point(seed, angle, slip):
    vertices, normals = lumpy(seed)
    vehicle = body()
    elements = elements_of(vertices, normals, vehicle.surface)
    shift = np.array([0.3, -0.4, 0.7])
    moved = replace(vehicle, moment_point=tuple(np.array(vehicle.moment_point) + shift))
    for here, there in zip(
        both(vehicle, elements, angle, slip), both(moved, elements, angle, slip), strict=True
    ):
        assert here.about(shift).moment == pytest.approx(there.moment, abs=1e-12)
        assert here.about(shift).force == pytest.approx(there.force, abs=1e-12)


@given(angles, slips)
@settings(deadline=None, max_examples=10)
def test_sphere_has_no_moment_about_its_centre_and_no_force_across_the_flow(angle, slip):
    ball = Vehicle.from_shape(Sphere(diameter=2.0))
    for loads in both(ball, ball.elements(6000), angle, slip):
        size = np.sqrt((loads.force**2).sum())
        # what 55 rows of panels leave of symmetry: a few times their size squared, times the small share of
        # it that does not cancel
        assert np.abs(loads.moment).max() < 2e-3 * size
        across = loads.force + loads.drag * flow_direction(angle, slip)
        assert np.abs(across).max() < 2e-3 * size


@given(angles, slips)
@settings(deadline=None, max_examples=10)
def test_wind_axes_hold_the_whole_force(angle, slip):
    vertices, normals = lumpy(3)
    vehicle = body()
    loads, _ = both(vehicle, elements_of(vertices, normals, vehicle.surface), angle, slip)
    u, lift = flow_direction(angle, slip), lift_direction(angle)
    across = loads.force @ np.cross(u, lift)
    assert loads.drag**2 + loads.lift**2 + across**2 == pytest.approx((loads.force**2).sum(), rel=1e-12)
    assert [u @ lift, lift @ lift] == pytest.approx([0.0, 1.0], abs=1e-14)


def test_signs_of_moments():
    # a plate across the flow, off the moment point: above it (z < 0) it pitches nose up, to its right it
    # yaws the nose right; a plate on the right that the flow from below lifts rolls the right side up
    plate = Vehicle.from_shape(FlatPlate(length=0.2, width=0.2))
    air, moving = stream(20.0)

    def about(point, angle):
        return free_molecular_loads(replace(plate, moment_point=point), air, moving, 300.0, 1.0, angle)

    flat = about((0.0, -1.0, 0.0), np.pi / 2)  # lies 1 m to the right, lifted by flow from below
    assert float(flat.normal) > 0.0
    assert float(flat.roll) < 0.0
    assert float(about((-1.0, 0.0, 0.0), np.pi / 2).pitch) > 0.0  # ahead of the point, lifted: nose up
    edge = about((0.0, -1.0, 1.0), 0.0)  # edge-on, to the right of and above the point, dragged back
    assert float(edge.yaw) > 0.0
    assert float(edge.pitch) > 0.0


def test_no_motion_no_air_no_shape():
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    air = mixed_air([300.0, 300.0], [1e15, 1e15], NITROGEN, altitude=250e3)
    moving = flow(air, [0.0, 7000.0])
    found = free_molecular_loads(ball, air, moving, 300.0, 1.0, 0.0, count=200)
    assert np.isnan(found.force[0]).all()
    assert np.isfinite(found.force[1]).all()
    none = replace(ball, shape=None)
    assert np.isnan(free_molecular_loads(none, air, moving, 300.0, 1.0).moment).all()
    assert np.isnan(continuum_loads(none, air, moving, 1.0).force).all()
    nothing = mixed_air(np.zeros(0), np.zeros(0), NITROGEN)
    assert free_molecular_loads(ball, nothing, flow(nothing, 1.0), 300.0, 1.0, count=200).force.shape == (
        0,
        3,
    )
    assert continuum_loads(ball, nothing, flow(nothing, 1.0), 1.0, count=200).force.shape == (0, 3)


def test_shadows_need_vertices():
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    bare = replace(ball.elements(50), vertices=None)
    with pytest.raises(ValueError, match="shadow=False"):
        both(ball, bare, 0.0, 0.0)
