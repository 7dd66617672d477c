"""Shadows against geometry that can be drawn by hand."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.body.shadow import flow_share, visible_fraction


def plates(gap, size, split):
    """Two square plates across x, the hind one `size` wide, both cut into triangles and facing +x."""
    edge = np.linspace(-0.5, 0.5, split + 1)
    y, z = (grid.ravel() for grid in np.meshgrid(edge[:-1], edge[:-1], indexing="ij"))
    step, flat = 1.0 / split, np.zeros_like(y)
    a, b = np.stack([flat, y, z], -1), np.stack([flat, y + step, z], -1)
    c, d = np.stack([flat, y + step, z + step], -1), np.stack([flat, y, z + step], -1)
    front = np.concatenate([np.stack([a, b, c], 1), np.stack([a, c, d], 1)])
    hind = front * size - [gap, 0.0, 0.0]
    vertices = np.concatenate([front, hind])
    return np.tile([1.0, 0.0, 0.0], (len(vertices), 1)), vertices, len(front)


def areas(vertices):
    edges = np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    return 0.5 * np.sqrt((edges * edges).sum(axis=1))


def ball(rows, radius=1.0, middle=(0.0, 0.0, 0.0)):
    """A sphere of triangles with outward normals."""
    turn, around = np.linspace(0.0, np.pi, rows + 1)[:, None], np.linspace(0.0, 2.0 * np.pi, 2 * rows + 1)
    grid = np.stack(
        [np.cos(turn) + 0 * around, np.sin(turn) * np.sin(around), np.sin(turn) * np.cos(around)], -1
    )
    a, b, c, d = grid[:-1, :-1], grid[1:, :-1], grid[1:, 1:], grid[:-1, 1:]
    vertices = np.concatenate(
        [np.stack([a, d, c], -2).reshape(-1, 3, 3), np.stack([a, c, b], -2).reshape(-1, 3, 3)]
    )
    vertices = vertices[areas(vertices) > 1e-14]
    normals = np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    normals /= np.sqrt((normals * normals).sum(axis=1))[:, None]
    return normals, vertices * radius + np.array(middle)


@pytest.mark.parametrize("angle", [0.0, 10.0, 25.0, 40.0, -33.0])
@pytest.mark.parametrize("split", [1, 7])
def test_hind_plate_of_a_pair_loses_what_the_front_one_covers(angle, split):
    # the shadow of a unit square slides by gap tan(angle) on an equal square behind it
    normals, vertices, count = plates(0.8, 1.0, split)
    slope = np.tan(np.radians(angle))
    share = visible_fraction(normals, vertices, [1.0, 0.0, slope])
    lit = (share * areas(vertices))[count:].sum()
    assert (share[:count] == 1.0).all()
    # the shadow's and the plate's own edge are each placed to half a pixel; projected back onto the plate
    # the silhouette is at most 1.7 wide
    assert lit == pytest.approx(min(1.0, 0.8 * abs(slope)), abs=2 * 0.5 * 1.7 / 512)


def test_shadow_converges_with_resolution():
    normals, vertices, count = plates(0.3, 1.7, 1)
    exact = 1.7**2 - 1.0  # the hind plate carries the whole shadow of the front one
    weight = areas(vertices)[count:]
    error = []
    for resolution in (32, 128, 512):
        share = visible_fraction(normals, vertices, [1.0, 0.1, 0.23], resolution=resolution)
        error.append(abs((share[count:] * weight).sum() - exact))
        assert error[-1] < 4.0 * 0.5 * 1.75 / resolution  # half a pixel around its four unit edges
    assert error[2] < error[0]


@pytest.mark.parametrize("direction", [(1.0, 0.0, 0.0), (0.3, 0.5, 0.8), (-1.0, 2.0, 0.1)])
@pytest.mark.parametrize("rows", [6, 40, 150])
def test_sphere_shows_exactly_its_windward_half(direction, rows):
    normals, vertices = ball(rows)
    cosines = normals @ np.array(direction)
    assert np.array_equal(visible_fraction(normals, vertices, direction), (cosines > 1e-12).astype(float))
    assert (flow_share(normals, vertices, direction) == 1.0).all()


def test_small_sphere_in_front_of_a_large_one_hides_its_own_disc():
    one, two = ball(40, 0.4, (3.0, 0.0, 0.0)), ball(60)
    normals, vertices = (np.concatenate(pair) for pair in zip(one, two, strict=True))
    share = visible_fraction(normals, vertices, [1.0, 0.0, 0.0])
    shown = (share * np.maximum(normals[:, 0], 0.0) * areas(vertices)).sum()

    # each polyhedron's disc is a polygon inscribed in its circle; the outlines agree to half a pixel
    def disc(radius, rows):
        return 0.5 * 2 * rows * radius**2 * np.sin(np.pi / rows)

    assert shown == pytest.approx(disc(1.0, 60), abs=2.0 * np.pi * 0.4 * 0.5 * 2.0 / 512)
    assert disc(0.4, 40) > 0.1  # what the test could have missed


def test_sides_along_the_flow_lie_in_the_shadow_of_a_wider_plate_only():
    side = np.array([[0.0, 0.0, 0.5], [-1.0, 0.0, 0.5], [0.0, 0.2, 0.5]])
    face = np.array([[0.0, -0.5, -0.5], [0.0, 0.5, -0.5], [0.0, 0.0, 0.5]])
    normals = [[0.0, 0.0, 1.0], [1.0, 0.0, 0.0]]
    assert flow_share(normals, np.stack([side, face]), [1.0, 0.0, 0.0]).tolist() == [1.0, 1.0]
    wide = 3.0 * face + [0.1, 0.0, 0.2]
    assert flow_share(normals, np.stack([side, wide]), [1.0, 0.0, 0.0]).tolist() == [0.0, 1.0]


@settings(deadline=None, max_examples=15)
@given(st.integers(0, 2**32 - 1), st.floats(-3.0, 3.0))
def test_shadow_keeps_under_scale_and_order(seed, decades):
    random = np.random.default_rng(seed)
    normals, vertices, _ = plates(0.7, 1.3, 5)
    direction = np.array([1.0, *random.uniform(-0.8, 0.8, 2)])
    share = visible_fraction(normals, vertices, direction)
    order = random.permutation(len(normals))
    other = visible_fraction(normals[order], vertices[order] * 10.0**decades, direction * 7.0)
    # scaling moves pixel centres by rounding only; a centre that sat on an edge may change sides
    assert np.abs(other - share[order]).mean() < 2e-3


@settings(deadline=None, max_examples=10)
@given(st.integers(0, 2**32 - 1))
def test_lit_area_keeps_when_body_and_flow_turn_together(seed):
    random = np.random.default_rng(seed)
    turn = np.linalg.qr(random.normal(size=(3, 3)))[0]
    normals, vertices, _ = plates(0.5, 1.4, 3)
    direction = np.array([1.0, 0.3, -0.4])
    weight = areas(vertices)
    one = (visible_fraction(normals, vertices, direction) * weight).sum()
    two = (visible_fraction(normals @ turn.T, vertices @ turn.T, turn @ direction) * weight).sum()
    assert two == pytest.approx(one, abs=2 * 4.0 * 0.5 * 1.9 / 512)  # half a pixel around the shadow, twice


def test_nothing_and_nonsense():
    assert visible_fraction(np.zeros((0, 3)), np.zeros((0, 3, 3)), [1.0, 0.0, 0.0]).shape == (0,)
    with pytest.raises(ValueError, match="not all 0"):
        visible_fraction(np.zeros((0, 3)), np.zeros((0, 3, 3)), [0.0, 0.0, 0.0])
    with pytest.raises(ValueError, match="must be"):
        visible_fraction(np.zeros((2, 3)), np.zeros((1, 3, 3)), [1.0, 0.0, 0.0])
