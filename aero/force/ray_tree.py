"""Which triangle a ray meets first: a balanced tree of boxes over triangles, walked by all rays at once.

Triangles are sorted along a space-filling curve and gathered in leaves of equal size, so the tree is an array
and a level of it one reshape. A ray meets a triangle from its front only: a closed body is seen from outside,
and of a thin sheet with two faces the one turned to the ray.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, floats

LEAF = 4  # triangles in a leaf
RAYS = 20_000  # rays walked at once: some 30 MB
EDGE = 1e-9  # relative widening of triangles and boxes, so that no ray slips between two neighbours
NEAR = 1e-9  # of the body's size: nearer is the surface a ray starts on, or the other face of that sheet
Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class RayTree:
    """Boxes over triangles.

    Attributes
    ----------
    corner, first, second : (m, 3) array [m]
        A corner and two edges of each triangle in the order of the leaves; padded with empty ones.
    index : (m,) array of int
        Place of each in the order given.
    low, high : tuple of (2**k, 3) arrays [m]
        Boxes of each level, the root first.
    """

    corner: Floats
    first: Floats
    second: Floats
    index: Indices
    low: tuple[Floats, ...]
    high: tuple[Floats, ...]

    @property
    def size(self) -> float:
        """Longest side of the box around everything [m]."""
        return float((self.high[0] - self.low[0]).max())


def build_tree(vertices: Floats) -> RayTree:
    """Return the tree over triangles.

    Parameters
    ----------
    vertices : (n, 3, 3) array [m]
        Corners, anticlockwise seen from outside.

    Examples
    --------
    >>> tree = build_tree(np.array([[[0.0, 0.0, 0.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0]]]))
    >>> first_hit(tree, np.array([[0.2, 0.2, 3.0]]), np.array([[0.0, 0.0, -1.0]]))
    (array([0]), array([3.]))
    """
    corners = floats(vertices)
    count = len(corners)
    leaves = 1 << max(0, int(np.ceil(np.log2(max(1, count) / LEAF))))
    order = _along_curve(corners.mean(axis=1)) if count else np.empty(0, dtype=np.intp)
    index = np.full(leaves * LEAF, -1, dtype=np.intp)
    place = np.arange(count) * (leaves * LEAF) // max(1, count)  # spread the padding evenly
    index[place] = order
    sorted_corners = np.full((leaves * LEAF, 3, 3), np.nan)
    sorted_corners[place] = corners[order]
    wider = EDGE * float(np.ptp(corners.reshape(-1, 3), axis=0).max()) if count else 0.0
    low = np.fmin.reduce(sorted_corners.reshape(leaves, -1, 3), axis=1) - wider
    high = np.fmax.reduce(sorted_corners.reshape(leaves, -1, 3), axis=1) + wider
    lows, highs = [low], [high]
    while len(lows[0]) > 1:
        lows.insert(0, np.fmin.reduce(lows[0].reshape(-1, 2, 3), axis=1))
        highs.insert(0, np.fmax.reduce(highs[0].reshape(-1, 2, 3), axis=1))
    edges = sorted_corners[:, 1:] - sorted_corners[:, :1]
    return RayTree(sorted_corners[:, 0], edges[:, 0], edges[:, 1], index, tuple(lows), tuple(highs))


def _along_curve(points: Floats) -> Indices:
    """Return the order of points along Morton's curve, 16 bits an axis."""
    span = float(np.ptp(points, axis=0).max()) or 1.0
    cells = ((points - points.min(axis=0)) / span * 65535.0).astype(np.uint64)
    code = np.zeros(len(points), dtype=np.uint64)
    for bit in range(16):
        for axis in range(3):
            taken = (cells[:, axis] >> np.uint64(bit)) & np.uint64(1)
            code |= taken << np.uint64(3 * bit + axis)
    return np.argsort(code, kind="stable").astype(np.intp)


def first_hit(tree: RayTree, origin: Floats, direction: Floats) -> tuple[Indices, Floats]:
    """Return the triangle each ray meets first, and how far on.

    Parameters
    ----------
    tree : RayTree
    origin, direction : (n, 3) array
        Directions of any length but zero.

    Returns
    -------
    triangle : (n,) array of int
        -1 where a ray meets none.
    distance : (n,) array
        In lengths of the direction; infinite where a ray meets none.

    Notes
    -----
    Boxes by the slab method, triangles by the method of Moeller and Trumbore [MollerTrumbore1997].
    """
    triangle = np.full(len(origin), -1, dtype=np.intp)
    distance = np.full(len(origin), np.inf)
    for start in range(0, len(origin), RAYS):
        part = slice(start, start + RAYS)
        triangle[part], distance[part] = _walk(tree, origin[part], direction[part])
    return triangle, distance


def _walk(tree: RayTree, origin: Floats, direction: Floats) -> tuple[Indices, Floats]:
    ray = np.arange(len(origin))
    node = np.zeros(len(origin), dtype=np.intp)
    with np.errstate(divide="ignore"):
        inverse = 1.0 / direction  # infinite along an axis: the slab test holds
    for level, (low, high) in enumerate(zip(tree.low, tree.high, strict=True)):
        if level:
            ray = np.repeat(ray, 2)
            node = np.stack([2 * node, 2 * node + 1], axis=1).reshape(-1)
        meets = _meets_box(origin[ray], inverse[ray], low[node], high[node])
        ray, node = ray[meets], node[meets]
    ray = np.repeat(ray, LEAF)
    item = (node[:, None] * LEAF + np.arange(LEAF)).reshape(-1)
    real = tree.index[item] >= 0
    ray, item = ray[real], item[real]
    reach = _reach(tree, origin[ray], direction[ray], item)
    met = np.isfinite(reach)
    ray, item, reach = ray[met], item[met], reach[met]
    order = np.lexsort((tree.index[item], -reach, ray))  # the nearest of each ray comes last and is kept
    triangle = np.full(len(origin), -1, dtype=np.intp)
    distance = np.full(len(origin), np.inf)
    triangle[ray[order]] = tree.index[item[order]]
    distance[ray[order]] = reach[order]
    return triangle, distance


def _meets_box(origin: Floats, inverse: Floats, low: Floats, high: Floats) -> NDArray[np.bool_]:
    with np.errstate(invalid="ignore"):  # 0 times infinity: on a face of the box, met
        one, two = (low - origin) * inverse, (high - origin) * inverse
    enter = np.fmax.reduce(np.fmin(one, two), axis=1)
    leave = np.fmin.reduce(np.fmax(one, two), axis=1)
    meets: NDArray[np.bool_] = (enter <= leave) & (leave >= 0.0)  # false in an empty box: NaN
    return meets


def _reach(tree: RayTree, origin: Floats, direction: Floats, item: Indices) -> Floats:
    """Return the distance to a triangle met from its front, infinite where it is missed."""
    first, second = tree.first[item], tree.second[item]
    across = np.cross(direction, second)
    facing = (first * across).sum(axis=1)  # minus direction times normal: positive from the front
    offset = origin - tree.corner[item]
    u = (offset * across).sum(axis=1)
    along = np.cross(offset, first)
    v = (direction * along).sum(axis=1)
    reach = (second * along).sum(axis=1)
    slack = EDGE * np.abs(facing)
    near = NEAR * tree.size * facing / np.sqrt((direction * direction).sum(axis=1))
    met = (facing > 0.0) & (u >= -slack) & (v >= -slack) & (u + v <= facing + slack) & (reach > near)
    return np.where(met, reach / np.where(met, facing, 1.0), np.inf)
