"""Shapes: closed surfaces, areas and projected areas, for every shape in the registry."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.body import SHAPES, Box, Cone, Cylinder, FlatPlate, Mesh, Sphere, SphereCone

POLYHEDRON = Cone(half_angle=np.radians(40.0), base_radius=0.4).panels(60)
EXAMPLES = {
    "sphere": Sphere(diameter=1.3),
    "cylinder": Cylinder(diameter=0.4, length=1.1),
    "flat-plate": FlatPlate(length=0.8, width=0.3),
    "cone": Cone(half_angle=np.radians(20.0), base_radius=0.4),
    "sphere-cone": SphereCone(nose_radius=0.27, half_angle=np.radians(55.0), base_radius=0.45),
    "box": Box(length=0.3, width=0.2, height=0.1),
    "mesh": Mesh.of(POLYHEDRON),
}
SIDE = {  # whole wetted area, from the textbook formula of each body
    "sphere": np.pi * 1.3**2,
    "cylinder": np.pi * 0.4 * 1.1,
    "flat-plate": 2 * 0.8 * 0.3,
    "cone": np.pi * 0.4**2 * (1 + 1 / np.sin(np.radians(20.0))),
    "sphere-cone": 2 * np.pi * 0.27**2 * (1 - np.sin(np.radians(55.0)))
    + np.pi * (0.45**2 - (0.27 * np.cos(np.radians(55.0))) ** 2) / np.sin(np.radians(55.0))
    + np.pi * 0.45**2,
    "box": 2 * (0.3 * 0.2 + 0.2 * 0.1 + 0.3 * 0.1),
    # a pyramid of 30 sides: base 15 r^2 sin(12 deg); sides 15 edges times their height
    "mesh": 15 * 0.4**2 * np.sin(np.radians(12.0))
    + 30
    * (0.4 * np.sin(np.radians(6.0)))
    * np.hypot(0.4 / np.tan(np.radians(40.0)), 0.4 * np.cos(np.radians(6.0))),
}
ANGLES = (0.0, 0.1, 0.7, np.pi / 2, 2.0, 3.0, np.pi, -0.4)


def test_every_shape_has_an_example():
    assert set(EXAMPLES) == set(SHAPES)


@pytest.mark.parametrize("kind", SHAPES)
@pytest.mark.parametrize("angle", ANGLES)
def test_facets_make_a_closed_surface_of_the_right_area(kind, angle):
    seen = EXAMPLES[kind].facets(angle)
    assert seen.areas.sum() == pytest.approx(SIDE[kind], rel=1e-9)
    # the surface integral of the normal vanishes; rounding over some hundred facets
    assert abs(np.sum(seen.cosines * seen.areas)) < 1e-9 * SIDE[kind]
    assert abs(np.sum(seen.lift_areas)) < 1e-9 * SIDE[kind]
    # |normal component along lift| can not exceed the sine of the incidence
    assert np.all(seen.lift_areas**2 <= seen.areas**2 * (1 - seen.cosines**2) + 1e-12)


@pytest.mark.parametrize("kind", SHAPES)
def test_panels_are_closed_and_converge_at_second_order(kind):
    shape = EXAMPLES[kind]
    errors = []
    for count in (400, 1600):
        panels = shape.panels(count)
        assert np.allclose((panels.normals**2).sum(axis=1), 1.0)
        assert np.allclose((panels.normals * panels.areas[:, None]).sum(axis=0), 0.0, atol=1e-12)
        outward = (panels.normals * (panels.centroids - panels.centroids.mean(axis=0))).sum(axis=1)
        assert np.all(outward > -1e-9)
        errors.append(abs(panels.areas.sum() / SIDE[kind] - 1.0))
    # panels of half the size have a quarter of the error, 10 % left for higher orders
    assert errors[1] <= errors[0] * 0.275 or errors[0] < 1e-12


@pytest.mark.parametrize("kind", SHAPES)
@pytest.mark.parametrize("angle", ANGLES)
def test_panels_and_facets_see_the_same_body(kind, angle):
    shape = EXAMPLES[kind]
    fine, seen = shape.panels(20000).facets(angle), shape.facets(angle)
    for power in (1, 2, 3):
        left = np.sum(np.maximum(fine.cosines, 0.0) ** power * fine.areas)
        right = np.sum(np.maximum(seen.cosines, 0.0) ** power * seen.areas)
        assert left == pytest.approx(right, abs=1e-3 * SIDE[kind])  # second order: (2 pi/200)^2
    left = np.sum(np.maximum(fine.cosines, 0.0) * fine.lift_areas)
    right = np.sum(np.maximum(seen.cosines, 0.0) * seen.lift_areas)
    assert left == pytest.approx(right, abs=1e-3 * SIDE[kind])


@pytest.mark.parametrize("kind", SHAPES)
def test_mean_projected_area_is_a_quarter_of_the_surface(kind):
    # Cauchy's theorem for convex bodies, averaged over all directions by panels
    panels = EXAMPLES[kind].panels(2000)
    nodes, weights = np.polynomial.legendre.leggauss(48)
    turn = (np.arange(96) + 0.5) * 2 * np.pi / 96
    sine = np.sqrt(1 - nodes**2)[:, None]
    directions = np.stack([sine * np.cos(turn), sine * np.sin(turn), nodes[:, None] + 0 * turn], axis=-1)
    seen = np.maximum(directions.reshape(-1, 3) @ panels.normals.T, 0.0) @ panels.areas
    mean = np.sum(seen.reshape(48, 96).mean(axis=1) * weights) / 2
    assert mean == pytest.approx(panels.areas.sum() / 4, rel=2e-3)  # kinks under a 48 by 96 rule


@given(
    nose=st.floats(0.01, 1.0),
    half_angle=st.floats(1.0, 89.0),
    base=st.floats(0.01, 3.0),
    angle=st.floats(-3.2, 3.2),
)
@settings(max_examples=60, deadline=None)
def test_any_sphere_cone_that_fits_is_closed(nose, half_angle, base, angle):
    half = np.radians(half_angle)
    if nose * np.cos(half) > base:
        with pytest.raises(ValueError, match="does not fit"):
            SphereCone(nose_radius=nose, half_angle=half, base_radius=base)
        return
    body = SphereCone(nose_radius=nose, half_angle=half, base_radius=base)
    seen = body.facets(angle)
    whole = seen.areas.sum()
    assert abs(np.sum(seen.cosines * seen.areas)) < 1e-7 * whole
    assert abs(np.sum(seen.lift_areas)) < 1e-7 * whole


def test_dimensions_must_be_positive_numbers():
    for value in (0.0, -1.0, np.nan, np.inf):
        with pytest.raises(ValueError, match="diameter is"):
            Sphere(diameter=value)
    with pytest.raises(ValueError, match="no flat faces"):
        Sphere(diameter=1.0).slabs()


def test_slender_and_blunt():
    def cone(degrees: float) -> Cone:
        return Cone(half_angle=np.radians(degrees), base_radius=1.0)

    assert (cone(10.0).body_class, cone(60.0).body_class) == ("slender", "blunt-cone")
    blunt_nose = SphereCone(nose_radius=0.3, half_angle=np.radians(10.0), base_radius=0.5)
    sharp_nose = SphereCone(nose_radius=0.05, half_angle=np.radians(10.0), base_radius=0.5)
    assert (blunt_nose.body_class, sharp_nose.body_class) == ("blunt-cone", "slender")
