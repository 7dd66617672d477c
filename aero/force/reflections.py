"""Free-molecular force where molecules meet a body more than once, by test particles.

For concave bodies, and parts behind others, the elements of `aero.force.elements` err twice: what lies in
shadow is counted, and what reflected molecules strike on their way is not. Here molecules are drawn on the
elements, traced back to see whether they come from the free stream, and followed until they fly off.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.force.elements import SQRT_PI, incident
from aero.force.gas_surface import energy_excess
from aero.force.ray_tree import Indices, RayTree, build_tree, first_hit
from aero.force.scatter import Walls, follow, leave, striking_speed, tangents

BATCHES = 20  # independent parts of the sample, for its error
RAYS = 100_000


@dataclass(frozen=True, eq=False)
class Reflected:
    """Force of a free-molecular stream, every reflection counted.

    Attributes
    ----------
    force : (3,) array [m2]
        Over the dynamic pressure, body axes.
    force_error : (3,) array [m2]
        Standard error of `force`; 0 where no molecule met the body twice and none was in shadow.
    moment : (3,) array [m3]
        Over the dynamic pressure, about the point asked for.
    moment_error : (3,) array [m3]
    sampled : (3,) array [m2]
        The same force by the sample alone, without the exact sum over elements as a base.
    sampled_error : (3,) array [m2]
    one_reflection : (3,) array [m2]
        Exact sum over elements, neither shadow nor second hit.
    first_hits : (3,) array [m2]
        Force of the molecules that come straight from the stream, shadow counted, second hits not.
    mean_hits : float
        Surfaces met by a molecule that meets the body.
    blocked : float
        Share of the elements' one-reflection flux that is in shadow.
    trapped : float
        Share of molecules still between surfaces when following was given up.
    rays : int
    """

    force: Floats
    force_error: Floats
    moment: Floats
    moment_error: Floats
    sampled: Floats
    sampled_error: Floats
    one_reflection: Floats
    first_hits: Floats
    mean_hits: float
    blocked: float
    trapped: float
    rays: int

    def along(self, direction: ArrayLike) -> tuple[float, float]:
        """Return drag [m2] and its standard error for a flow that comes from a direction.

        Notes
        -----
        The error takes the three components as independent.
        """
        u = floats(direction) / np.linalg.norm(floats(direction))
        error = np.sqrt(((u * self.force_error) ** 2).sum())
        return -float(self.force @ u), float(error)


def reflected_force(
    vertices: ArrayLike,
    direction: ArrayLike,
    speed_ratio: float,
    wall_ratio: ArrayLike,
    *,
    energy_accommodation: ArrayLike = 1.0,
    diffuse_fraction: ArrayLike = 1.0,
    about: ArrayLike = (0.0, 0.0, 0.0),
    rays: int = RAYS,
    seed: int = 0,
    tree: RayTree | None = None,
) -> Reflected:
    """Return the force of one species on triangles, with shadows and every reflection.

    Parameters
    ----------
    vertices : (n, 3, 3) array [m]
        Corners, anticlockwise seen from the gas. Surfaces are seen from that side only: a thin sheet needs
        both faces.
    direction : (3,) array
        Where the flow comes from.
    speed_ratio : float
        More than 0.
    wall_ratio : (n,) array or float
        T_w/T of each triangle.
    energy_accommodation, diffuse_fraction : (n,) array or float, optional
        Of Maxwell's model, for each triangle.
    about : (3,) array, optional [m]
        Point moments are taken about.
    rays : int, optional
        Molecules followed, at least `BATCHES`.
    seed : int, optional
        The same seed gives the same numbers.
    tree : RayTree, optional
        Of the same vertices, to build it once for many calls.

    Returns
    -------
    Reflected

    Raises
    ------
    ValueError
        If the arrays do not fit, a coefficient lies outside 0 to 1, or the flow is no flow.

    Notes
    -----
    Molecules are shared out among the triangles by their one-reflection flux (systematic sampling), drawn
    from the flux of the drifting Maxwellian there, and traced back: whoever would have had to come through
    the body does not count. The rest leave by Maxwell's model, at the first hit with the mean energy of all
    that strike that element, later with each molecule's own (nothing else is known there), and are followed.
    The result is the exact one-reflection sum plus the sampled difference to it, so a convex body has no
    statistical error; where most of a body is in shadow (a cavity) the sample alone scatters less and is
    taken instead. Errors from `BATCHES` interleaved parts of the sample.

    References
    ----------
    [Bird1994], [Maxwell1879], [MollerTrumbore1997]

    Examples
    --------
    >>> plate = [[[0, 0, 0], [0, 1, 0], [0, 0, 1]]]
    >>> found = reflected_force(plate, [1, 0, 0], 20.0, 0.3, rays=1000)
    >>> found.mean_hits, round(float(found.force[0]), 3), found.force_error.tolist()
    (1.0, -1.026, [0.0, 0.0, 0.0])
    """
    corners, u = _checked(vertices, direction, speed_ratio, rays)
    vectors = 0.5 * np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    areas = np.sqrt((vectors * vectors).sum(axis=1))
    normals = vectors / np.where(areas > 0.0, areas, 1.0)[:, None]
    walls = _walls(normals, wall_ratio, energy_accommodation, diffuse_fraction)
    stream = _Stream(corners, areas, walls, u, float(speed_ratio), floats(about))
    random = np.random.default_rng(seed)
    return _combine(stream, _sample(stream, tree or build_tree(corners), rays, random), rays)


@dataclass(frozen=True, eq=False)
class _Stream:
    corners: Floats
    areas: Floats
    walls: Walls
    direction: Floats
    speed_ratio: float
    about: Floats


@dataclass(frozen=True, eq=False)
class _Sample:
    """What each ray gave: momentum and moment, stacked (rays, 6); scale turns a mean into [m2], [m3]."""

    scale: float
    first: Floats
    later: Floats
    open: np.ndarray
    hits: Indices
    trapped: np.ndarray


def _checked(
    vertices: ArrayLike, direction: ArrayLike, speed_ratio: float, rays: int
) -> tuple[Floats, Floats]:
    corners, u = floats(vertices), floats(direction)
    if corners.ndim != 3 or corners.shape[1:] != (3, 3) or not len(corners):
        raise ValueError(f"vertices has shape {corners.shape}, expected (n, 3, 3) with n at least 1")
    if u.shape != (3,) or not np.linalg.norm(u) > 0.0:
        raise ValueError(f"direction is {u}, expected three numbers not all zero")
    if not speed_ratio > 0.0:
        raise ValueError(f"speed_ratio is {speed_ratio}, expected more than 0")
    if rays < BATCHES:
        raise ValueError(f"rays is {rays}, expected at least {BATCHES}")
    return corners, u / np.linalg.norm(u)


def _walls(normals: Floats, wall_ratio: ArrayLike, energy: ArrayLike, diffuse: ArrayLike) -> Walls:
    columns = []
    for name, given in (
        ("wall_ratio", wall_ratio), ("energy_accommodation", energy), ("diffuse_fraction", diffuse),
    ):  # fmt: skip
        values = floats(given)
        if values.shape not in ((), (len(normals),)):
            raise ValueError(f"{name} has shape {values.shape}, expected one value or {len(normals)}")
        if np.any(~(values >= 0.0)) or (name != "wall_ratio" and np.any(values > 1.0)):
            raise ValueError(f"{name} ranges {values.min():g} to {values.max():g}: not possible")
        columns.append(np.broadcast_to(values, (len(normals),)))
    return Walls(normals, *columns)


def _sample(stream: _Stream, tree: RayTree, rays: int, random: np.random.Generator) -> _Sample:
    """Draw molecules on the triangles, trace them back, let them leave and follow them."""
    ratio, u, walls = stream.speed_ratio, stream.direction, stream.walls
    cosine = walls.normals @ u
    _, number, drift = incident(ratio * cosine)
    flux = stream.areas * number
    total = float(flux.sum())
    ends = np.cumsum(flux) / total
    places = (np.arange(rays) + random.random(rays)) / rays  # one in each equal slice of the flux
    triangle = np.minimum(np.searchsorted(ends, places, side="right"), len(flux) - 1)
    position = _points(stream.corners[triangle], random)
    normal = walls.normals[triangle]
    speed = striking_speed(ratio * cosine[triangle], 1.0 - random.random(rays))
    first, second = tangents(normal)
    thermal = random.normal(scale=np.sqrt(0.5), size=(2, rays, 1))
    slide = -ratio * (u - cosine[triangle, None] * normal)
    velocity = slide - speed[:, None] * normal + thermal[0] * first + thermal[1] * second
    blocker, _ = first_hit(tree, position, -velocity)
    energy = (ratio * ratio + energy_excess(number, drift))[triangle]
    after = leave(velocity, triangle, walls, random, energy)
    given = velocity - after
    arm = position - stream.about
    is_open = blocker < 0
    later, hits = np.zeros((rays, 6)), np.zeros(rays, dtype=np.intp)
    trapped = np.zeros(rays, dtype=bool)
    paths = follow(tree, walls, position[is_open], after[is_open], random, stream.about)
    later[is_open] = np.concatenate([paths.momentum, paths.torque], axis=1)
    hits[is_open], trapped[is_open] = 1 + paths.hits, paths.trapped
    scale = total / (SQRT_PI * ratio * ratio)
    return _Sample(
        scale, np.concatenate([given, np.cross(arm, given)], axis=1), later, is_open, hits, trapped
    )


def _points(corners: Floats, random: np.random.Generator) -> Floats:
    """Return a random point in each triangle."""
    a, b = random.random((2, len(corners), 1))
    root = np.sqrt(a)
    return floats((1.0 - root) * corners[:, 0] + root * (1.0 - b) * corners[:, 1] + root * b * corners[:, 2])


def _exact(stream: _Stream) -> Floats:
    """Return force and moment of one reflection without shadow, summed over elements: (6,)."""
    ratio, walls, u = stream.speed_ratio, stream.walls, stream.direction
    cosine = walls.normals @ u
    momentum, number, drift = incident(ratio * cosine)
    square = ratio * ratio
    alpha, sigma = walls.energy_accommodation, walls.diffuse_fraction
    emission = (1.0 - alpha) * 0.5 * (square + energy_excess(number, drift)) + alpha * walls.wall_ratio
    pressure = ((2.0 - sigma) * momentum + sigma * 0.5 * number * np.sqrt(emission)) / square
    shear = sigma * number / (SQRT_PI * ratio)  # times the sine, which the slide below carries
    slide = cosine[:, None] * walls.normals - u
    each = stream.areas[:, None] * (shear[:, None] * slide - pressure[:, None] * walls.normals)
    arm = stream.corners.mean(axis=1) - stream.about
    return np.concatenate([each.sum(axis=0), np.cross(arm, each).sum(axis=0)])


def _combine(stream: _Stream, sample: _Sample, rays: int) -> Reflected:
    exact = _exact(stream)
    is_open = sample.open[:, None]
    blocked = np.where(is_open, 0.0, -sample.first)
    change, error = _mean(sample.scale * (blocked + sample.later))
    sampled, sampled_error = _mean(sample.scale * np.where(is_open, sample.first + sample.later, 0.0))
    shadow, _ = _mean(sample.scale * blocked)
    total = exact + change
    if (sampled_error[:3] ** 2).sum() < (error[:3] ** 2).sum():
        total, error = sampled, sampled_error
    met = max(1, int(sample.open.sum()))
    return Reflected(
        force=total[:3],
        force_error=error[:3],
        moment=total[3:],
        moment_error=error[3:],
        sampled=sampled[:3],
        sampled_error=sampled_error[:3],
        one_reflection=exact[:3],
        first_hits=exact[:3] + shadow[:3],
        mean_hits=float(sample.hits.sum() / met),
        blocked=float(1.0 - sample.open.mean()),
        trapped=float(sample.trapped.sum() / met),
        rays=rays,
    )


def _mean(values: Floats) -> tuple[Floats, Floats]:
    """Return the mean over rays and its standard error from interleaved batches."""
    batch = np.stack([values[start::BATCHES].mean(axis=0) for start in range(BATCHES)])
    return values.mean(axis=0), batch.std(axis=0, ddof=1) / np.sqrt(BATCHES)
