"""Test-particle reflections against exact sums, closed forms, published tube transmission and geometry."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate

from aero.body import Box, FlatPlate, Sphere, Vehicle
from aero.force import elements, free_molecular
from aero.force.gas_surface import element
from aero.force.ray_tree import build_tree, first_hit
from aero.force.reflected_air import reflected_in_air
from aero.force.reflections import reflected_force
from aero.force.scatter import Walls, follow, leave, striking_speed
from aero.gas import flow, mixed_air

RAYS = 20_000
FOUR = 4.0  # standard errors; the seeds are fixed, so a pass stays one


def quad(a, b, c, d):
    return [[a, b, c], [a, c, d]]


def revolved(along, radii, around, inward=False):
    """Return the triangles of a surface of revolution about x, generator from large to small x."""
    turn = np.arange(around + 1) * 2.0 * np.pi / around
    ring = np.stack([np.zeros_like(turn), np.sin(turn), np.cos(turn)], axis=-1)
    grid = np.asarray(radii)[:, None, None] * ring + np.asarray(along)[:, None, None] * np.array(
        [1.0, 0.0, 0.0]
    )
    a, b, c, d = grid[:-1, :-1], grid[1:, :-1], grid[1:, 1:], grid[:-1, 1:]
    faces = np.concatenate(
        [np.stack([a, d, c], -2).reshape(-1, 3, 3), np.stack([a, c, b], -2).reshape(-1, 3, 3)]
    )
    faces = faces[
        np.linalg.norm(np.cross(faces[:, 1] - faces[:, 0], faces[:, 2] - faces[:, 0]), axis=1) > 1e-12
    ]
    return faces[:, ::-1] if inward else faces


def ball(rows, opening=0.0, inward=False):
    angle = np.linspace(opening, np.pi, rows + 1)
    return revolved(np.cos(angle), np.sin(angle), 2 * rows, inward)


def box_triangles(length=2.0, width=1.0, height=0.5):
    x, y, z = length / 2.0, width / 2.0, height / 2.0
    return np.array(
        quad([x, -y, -z], [x, y, -z], [x, y, z], [x, -y, z])
        + quad([-x, -y, -z], [-x, -y, z], [-x, y, z], [-x, y, -z])
        + quad([-x, y, -z], [-x, y, z], [x, y, z], [x, y, -z])
        + quad([-x, -y, -z], [x, -y, -z], [x, -y, z], [-x, -y, z])
        + quad([-x, -y, z], [x, -y, z], [x, y, z], [-x, y, z])
        + quad([-x, -y, -z], [-x, y, -z], [x, y, -z], [x, -y, -z])
    )


def both_faces(sheet):
    sheet = np.asarray(sheet, dtype=float)
    return np.concatenate([sheet, sheet[:, ::-1]])


def groove(half_length):
    """Two square-cornered walls z = x and z = -x that open towards +x, long along y."""
    e = half_length
    upper = quad([0, -e, 0], [0, e, 0], [1, e, 1], [1, -e, 1])
    lower = quad([0, -e, 0], [1, -e, -1], [1, e, -1], [0, e, 0])
    sheet = np.array(upper + lower, dtype=float)
    normals = np.cross(sheet[:, 1] - sheet[:, 0], sheet[:, 2] - sheet[:, 0])
    return both_faces(np.where((normals[:, 0] > 0.0)[:, None, None], sheet, sheet[:, ::-1]))


def each_triangle(vertices, origin, direction):
    """Return the first front hit by solving three equations a pair: no tree, no shared code."""
    nearest, which = np.inf, -1
    for index, (a, b, c) in enumerate(vertices):
        normal = np.cross(b - a, c - a)
        if direction @ normal >= 0.0:
            continue
        t, u, v = np.linalg.solve(np.stack([-direction, b - a, c - a], axis=1), origin - a)
        if t > 1e-9 and u >= 0.0 and v >= 0.0 and u + v <= 1.0 and t < nearest:
            nearest, which = t, index
    return which, nearest


@pytest.mark.parametrize("count", [1, 3, 5, 300])
def test_tree_finds_what_a_search_through_all_finds(count):
    random = np.random.default_rng(count)
    vertices = random.normal(size=(count, 1, 3)) + 0.6 * random.normal(size=(count, 3, 3))
    origin = 2.0 * random.normal(size=(200, 3))
    direction = random.normal(size=(200, 3))
    direction[:20, 1:] = 0.0  # along an axis: the slabs divide by zero
    found, reach = first_hit(build_tree(vertices), origin, direction)
    expected = [each_triangle(vertices, o, d) for o, d in zip(origin, direction, strict=True)]
    assert found.tolist() == [which for which, _ in expected]
    assert reach == pytest.approx([nearest for _, nearest in expected], rel=1e-9)


def test_tree_takes_no_rays():
    found, reach = first_hit(build_tree(ball(3)), np.empty((0, 3)), np.empty((0, 3)))
    assert found.shape == reach.shape == (0,)


def test_no_ray_slips_between_neighbours():
    # from inside a closed surface seen from inside every ray must hit, those through edges and corners too
    inside = ball(12, inward=True)
    corners = inside.reshape(-1, 3)
    edges = 0.5 * (inside[:, 0] + inside[:, 1])
    direction = np.concatenate([corners, edges, np.random.default_rng(3).normal(size=(20_000, 3))])
    found, _ = first_hit(build_tree(inside), np.zeros_like(direction), direction)
    assert np.all(found >= 0)


@pytest.mark.parametrize("s", [-3.0, -0.5, 0.0, 1.0, 5.0, 20.0])
def test_striking_speeds_have_the_fluxs_distribution(s):
    def density(x):
        return x * np.exp(-((x - s) ** 2))

    top = max(s, 0.0) + 7.0
    whole = integrate.quad(density, 0.0, top, points=[max(s, 0.1)], epsabs=0.0)[0]
    for share in (0.99, 0.5, 0.1, 1e-3):
        speed = float(striking_speed(s, share))
        faster = integrate.quad(density, speed, top, epsabs=0.0)[0]
        assert faster / whole == pytest.approx(share, rel=1e-7)


def wall_of(count=1, normal=(0.0, 0.0, 1.0), wall_ratio=0.5, alpha=1.0, sigma=1.0):
    return Walls(
        np.broadcast_to(np.asarray(normal), (count, 3)),
        np.full(count, wall_ratio),
        np.full(count, alpha),
        np.full(count, sigma),
    )


def test_what_leaves_a_wall():
    random = np.random.default_rng(5)
    arriving = np.broadcast_to([1.0, 0.5, -2.0], (200_000, 3))
    first = np.zeros(len(arriving), dtype=np.intp)
    mirrored = leave(arriving, first, wall_of(sigma=0.0), random)
    assert np.allclose(mirrored, [1.0, 0.5, 2.0], rtol=1e-15)
    # cosine law at T_w/T = 0.5: mean normal speed sqrt(pi)/2 sqrt(0.5), mean square speed 2 x 0.5
    diffuse = leave(arriving, first, wall_of(), random)
    assert diffuse[:, 2].mean() == pytest.approx(
        0.5 * np.sqrt(0.5 * np.pi), rel=0.005
    )  # 4 errors of 1/sqrt(N)
    assert (diffuse**2).sum(axis=1).mean() == pytest.approx(1.0, rel=0.01)
    assert np.abs(diffuse[:, :2].mean(axis=0)) == pytest.approx([0.0, 0.0], abs=0.005)
    # no accommodation: all energy is returned
    kept = leave(arriving, first, wall_of(alpha=0.0), random)
    assert (kept**2).sum(axis=1).mean() == pytest.approx(5.25, rel=0.01)
    assert np.all(diffuse[:, 2] > 0.0)


@pytest.mark.parametrize("setting", [{}, {"energy_accommodation": 0.5, "diffuse_fraction": 0.7}])
@pytest.mark.parametrize("body", ["ball", "box"])
def test_convex_bodies_reflect_once(body, setting):
    vertices = ball(10) if body == "ball" else box_triangles()
    direction = np.array([1.0, 0.2, 0.4])
    for ratio in (0.7, 6.0):
        found = reflected_force(vertices, direction, ratio, 0.3, rays=RAYS, seed=2, **setting)
        assert found.mean_hits == 1.0
        assert found.blocked == found.trapped == 0.0
        assert np.all(found.force_error == 0.0)
        assert np.array_equal(found.force, found.one_reflection)
        assert np.array_equal(found.force, found.first_hits)
        # the sample by itself, which knows nothing of the exact sum
        off = np.abs(found.sampled - found.one_reflection)
        assert np.all(off < FOUR * found.sampled_error)
        assert np.all(found.sampled_error < 0.02 * np.linalg.norm(found.force))


def test_one_reflection_is_the_sum_over_elements():
    vertices = box_triangles()
    u = np.array([0.8, 0.0, 0.6])
    found = reflected_force(vertices, u, 4.0, 0.3, energy_accommodation=0.8, diffuse_fraction=0.9, rays=100)
    vectors = 0.5 * np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    areas = np.linalg.norm(vectors, axis=1)
    normals = vectors / areas[:, None]
    c = normals @ u
    pressure, shear = element("maxwell", 4.0, c, 0.3, energy_accommodation=0.8, diffuse_fraction=0.9)
    slide = c[:, None] * normals - u
    slide /= np.maximum(np.linalg.norm(slide, axis=1), 1e-300)[:, None]
    expected = (areas[:, None] * (shear[:, None] * slide - pressure[:, None] * normals)).sum(axis=0)
    assert found.one_reflection == pytest.approx(expected, rel=1e-12, abs=1e-14)
    drag, error = found.along(2.0 * u)
    assert drag == pytest.approx(-float(expected @ u), rel=1e-12)
    assert error == 0.0


def test_square_groove_of_mirrors_sends_everything_back():
    # Each molecule leaves as it came after two hits: drag 4 (momentum 2) where one reflection gives 2. A
    # molecule that arrives at a small angle d to the axis in the groove's plane misses the second wall from a
    # share |d| of the opening and then costs 2; the mean of |d| is 1/(S sqrt(pi)). The rest is of order 1/S^2.
    half_length, ratio = 100.0, 30.0
    opening = 2.0 * 2.0 * half_length
    found = reflected_force(groove(half_length), [1, 0, 0], ratio, 1.0, diffuse_fraction=0.0, rays=RAYS)
    missed = 1.0 / (ratio * np.sqrt(np.pi))
    small = 3.0 / ratio**2 + 2.0 / (ratio * 2.0 * half_length)  # second order, and the groove's two ends
    drag, error = found.along([1, 0, 0])
    assert drag / opening == pytest.approx(4.0 - 2.0 * missed, abs=FOUR * error / opening + small)
    assert found.mean_hits == pytest.approx(2.0 - missed, abs=FOUR * np.sqrt(missed / RAYS) + small)
    assert -found.one_reflection[0] / opening == pytest.approx(2.0, abs=small)
    assert np.all(np.abs(found.force[1:]) < FOUR * found.force_error[1:] + small * opening * 0.1)


def test_hollow_sphere_is_a_flat_opening():
    # A diffuse sphere lights itself evenly, so of what leaves any place a share f = (1 - cos b)/2 goes through
    # an opening of half angle b: 1/f hits a molecule. After the first, what comes out has the cosine law, as
    # from a flat wall across the opening. Out of the first hit, share f, it comes more along the axis: its
    # momentum is up to 3/2 of the cosine law's.
    half_angle, ratio, wall_ratio = np.radians(30.0), 3.0, 5.0
    rows = 16
    hollow = ball(rows, half_angle, inward=True)
    share = 0.5 * (1.0 - np.cos(half_angle))
    opening = 0.5 * 2 * rows * np.sin(np.pi / rows) * np.sin(half_angle) ** 2
    found = reflected_force(hollow, [1, 0, 0], ratio, wall_ratio, rays=30_000, seed=4)
    entered = 30_000 * (1.0 - found.blocked)
    # hits are geometrically distributed; the facets of 11 degrees change areas by 0.6 %
    assert found.mean_hits == pytest.approx(1.0 / share, abs=FOUR / share / np.sqrt(entered) + 0.01 / share)
    pressure, _, emitted = elements.element(ratio, 1.0)
    drag, error = found.along([1, 0, 0])
    out = emitted * np.sqrt(wall_ratio)
    low, high = pressure + out, pressure + out * (1.0 + 0.5 * share)
    assert low - FOUR * error / opening < drag / opening < high + FOUR * error / opening
    assert error / opening < 0.02 * low
    # the elements alone, each thought to stand free, are off by far more
    assert abs(-found.one_reflection[0] / opening / low - 1.0) > 0.3


@pytest.mark.parametrize(("length", "published"), [(1.0, 0.6720), (2.0, 0.5142), (10.0, 0.1910)])
def test_transmission_of_a_tube(length, published):
    # Free-molecular transmission probability of a circular tube, length over radius: Clausing 1932 as
    # recomputed by Berman 1965, J. Appl. Phys. 36 (values from memory, 4 digits)
    around, count = 64, 20_000
    tube = revolved([length, 0.0], [1.0, 1.0], around, inward=True)
    random = np.random.default_rng(9)
    radius, turn = np.sqrt(random.random(count)) * np.cos(np.pi / around), 2.0 * np.pi * random.random(count)
    start = np.stack([np.zeros(count), radius * np.cos(turn), radius * np.sin(turn)], axis=-1)
    velocity = leave(
        np.broadcast_to([-1.0, 0.0, 0.0], (count, 3)), np.zeros(count, dtype=np.intp),
        wall_of(normal=(1.0, 0.0, 0.0)), random,
    )  # fmt: skip
    walls = wall_of(len(tube))
    normals = np.cross(tube[:, 1] - tube[:, 0], tube[:, 2] - tube[:, 0])
    walls = Walls(
        normals / np.linalg.norm(normals, axis=1, keepdims=True),
        walls.wall_ratio, walls.energy_accommodation, walls.diffuse_fraction,
    )  # fmt: skip
    paths = follow(build_tree(tube), walls, start, velocity, random)
    through = (paths.velocity[:, 0] > 0.0).mean()
    error = np.sqrt(published * (1.0 - published) / count)
    # 64 sides for a circle: 0.16 % less area
    assert through == pytest.approx(published, abs=FOUR * error + 0.0016 * published)
    assert np.allclose(paths.momentum, velocity - paths.velocity, atol=1e-9)  # nothing is lost on the way
    assert not paths.trapped.any()


def test_a_plate_behind_another_feels_nothing_of_a_fast_flow():
    square = quad([0.0, -0.5, -0.5], [0.0, 0.5, -0.5], [0.0, 0.5, 0.5], [0.0, -0.5, 0.5])
    front = both_faces(square)
    rear = both_faces(np.asarray(square) * [1.0, 0.5, 0.5] - [0.5, 0.0, 0.0])
    together, ratio = np.concatenate([front, rear]), 50.0
    alone = reflected_force(front, [1, 0, 0], ratio, 0.3, rays=RAYS)
    pair = reflected_force(together, [1, 0, 0], ratio, 0.3, rays=RAYS)
    # what passes the rim at more than 0.25/0.5 rad: exp(-(S/2)^2), nothing
    assert pair.blocked == pytest.approx(0.2, abs=1e-3)  # a fifth of the area that faces the flow
    assert pair.mean_hits == 1.0
    assert pair.force == pytest.approx(alone.force, abs=FOUR * np.max(pair.force_error) + 1e-12)
    assert -pair.one_reflection[0] == pytest.approx(-1.25 * alone.force[0], rel=1e-9)
    # at rest almost, in balance, two plates attract each other by nothing: pressures cancel
    slow = reflected_force(together, [1, 0, 0], 0.05, 1.0, rays=RAYS)
    assert np.abs(slow.force[1:] * 0.05**2) == pytest.approx([0.0, 0.0], abs=0.02)


def test_turning_body_and_flow_turns_the_force():
    turn, _ = np.linalg.qr(np.random.default_rng(6).normal(size=(3, 3)))
    turn *= np.sign(np.linalg.det(turn))
    body = groove(1.0)
    one = reflected_force(body, [1, 0, 0], 5.0, 0.5, rays=RAYS)
    other = reflected_force(body @ turn.T, turn @ [1.0, 0.0, 0.0], 5.0, 0.5, rays=RAYS, seed=1)
    error = np.hypot(np.linalg.norm(one.force_error), np.linalg.norm(other.force_error))
    assert np.all(np.abs(turn @ one.force - other.force) < FOUR * error)
    assert turn @ one.one_reflection == pytest.approx(other.one_reflection, abs=1e-12)


def test_scale_seed_and_moments():
    body = groove(1.0)
    one = reflected_force(body, [1, 0, 0.2], 5.0, 0.5, rays=2000, seed=3)
    again = reflected_force(body, [1, 0, 0.2], 5.0, 0.5, rays=2000, seed=3)
    assert np.array_equal(one.force, again.force)
    large = reflected_force(
        8.0 * body, [1, 0, 0.2], 5.0, 0.5, rays=2000, seed=3
    )  # a power of 2: same rounding
    assert large.force == pytest.approx(64.0 * one.force, rel=1e-9)
    assert large.moment == pytest.approx(512.0 * one.moment, rel=1e-9)
    about = np.array([0.3, -0.2, 0.7])
    shifted = reflected_force(body, [1, 0, 0.2], 5.0, 0.5, rays=2000, seed=3, about=about)
    assert shifted.moment == pytest.approx(one.moment - np.cross(about, one.force), rel=1e-9, abs=1e-9)


def test_more_rays_smaller_error():
    body = groove(1.0)
    few = reflected_force(body, [1, 0, 0], 5.0, 0.5, rays=2000)
    many = reflected_force(body, [1, 0, 0], 5.0, 0.5, rays=32_000)
    # 16 times the rays, a quarter of the error; 20 batches know it to a sixth
    assert many.force_error[0] / few.force_error[0] == pytest.approx(0.25, rel=0.7)


def test_each_triangle_has_its_own_surface():
    body = groove(1.0)
    mirror = np.zeros(len(body))
    mirror[: len(body) // 2] = 1.0
    found = reflected_force(
        body, [1, 0, 0], 5.0, np.linspace(0.1, 2.0, len(body)), diffuse_fraction=mirror, rays=2000
    )
    assert np.all(np.isfinite(found.force))
    assert found.force[0] < 0.0


def test_wrong_calls():
    body = ball(3)
    with pytest.raises(ValueError, match=r"vertices has shape \(3, 3\), expected \(n, 3, 3\)"):
        reflected_force(body[0], [1, 0, 0], 5.0, 0.3)
    with pytest.raises(ValueError, match="direction is"):
        reflected_force(body, [0, 0, 0], 5.0, 0.3)
    with pytest.raises(ValueError, match="speed_ratio is 0, expected more than 0"):
        reflected_force(body, [1, 0, 0], 0, 0.3)
    with pytest.raises(ValueError, match="rays is 3, expected at least 20"):
        reflected_force(body, [1, 0, 0], 5.0, 0.3, rays=3)
    with pytest.raises(ValueError, match=r"wall_ratio has shape \(2,\), expected one value or"):
        reflected_force(body, [1, 0, 0], 5.0, [0.3, 0.3])
    with pytest.raises(ValueError, match=r"diffuse_fraction ranges 1\.5 to 1\.5: not possible"):
        reflected_force(body, [1, 0, 0], 5.0, 0.3, diffuse_fraction=1.5)


def orbit_air(points=()):
    return mixed_air(np.full(points, 900.0), 1e15, [0.2, 0.01, 0.7, 0.02, 0.001, 0.06, 0.009], altitude=300e3)


def test_in_air_a_plate_has_its_closed_form():
    air, angle = orbit_air(), 0.7
    stream = flow(air, 7500.0)
    plate = Vehicle.from_shape(FlatPlate(length=1.0, width=0.5))
    square = quad([-0.5, -0.25, 0.0], [0.5, -0.25, 0.0], [0.5, 0.25, 0.0], [-0.5, 0.25, 0.0])
    u = [np.cos(angle), 0.0, np.sin(angle)]
    found = reflected_in_air(both_faces(square), u, air, stream, 300.0, rays=4000)
    exact = free_molecular(plate, air, stream, 300.0, 1.0, angle)
    assert found.along(u)[0] == pytest.approx(float(exact.drag) * 0.5, rel=1e-5)
    assert found.mean_hits == pytest.approx(1.0)
    many = orbit_air((2,))
    with pytest.raises(ValueError, match="air has 2 points, expected one"):
        reflected_in_air(both_faces(square), u, many, flow(many, 7500.0), 300.0)


def test_in_air_shapes_of_the_repository_reflect_once():
    air = orbit_air()
    stream = flow(air, 7500.0)
    for shape in (Sphere(diameter=1.0), Box(length=0.3, width=0.2, height=0.1)):
        vehicle = Vehicle.from_shape(shape)
        found = reflected_in_air(
            vehicle.elements(3000).vertices,
            [1, 0, 0],
            air,
            stream,
            300.0,
            energy_accommodation=1.0,
            rays=2000,
        )
        exact = float(free_molecular(vehicle, air, stream, 300.0, 1.0).drag) * shape.frontal_area
        # 3000 flat panels on a sphere: 1/count of the area, some 0.1 %
        assert found.along([1, 0, 0])[0] == pytest.approx(exact, rel=3e-3 if shape.kind == "sphere" else 1e-5)
        assert found.mean_hits == pytest.approx(1.0)
