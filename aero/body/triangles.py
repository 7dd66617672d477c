"""What makes triangles a body: closed, the same way round everywhere, inside out nowhere."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, floats

SAME_POINT = 1e-6  # of the longest side: vertices this near are one (single precision keeps 1e-7)
Faces = NDArray[np.intp]


class Edges(NamedTuple):
    """Edges of a surface.

    Attributes
    ----------
    open_count : int
        Edges that border an odd number of triangles: the surface has a hole or a sheet there.
    torn : int
        Edges along which two triangles turn opposite ways.
    neighbours : (2, k) int array
        Pairs of vertices that an edge joins.
    """

    open_count: int
    torn: int
    neighbours: NDArray[np.intp]


def merged(vertices: Floats) -> tuple[Floats, Faces]:
    """Return distinct points (k, 3) and triangles (n, 3) of them from the corners (n, 3, 3) of triangles.

    Notes
    -----
    Points that agree within a millionth of the longest side count as one.

    Examples
    --------
    >>> corner = np.array([[0.0, 0.0, 0.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0]])
    >>> points, faces = merged(np.stack([corner, corner + [0.0, 0.0, 1e-9]]))
    >>> len(points), faces.tolist()
    (3, [[0, 2, 1], [0, 2, 1]])
    """
    flat = vertices.reshape(-1, 3)
    low = flat.min(axis=0)
    step = SAME_POINT * float((flat.max(axis=0) - low).max())
    cell = np.rint((flat - low) / step).astype(np.int64) if step > 0.0 else np.zeros(flat.shape, np.int64)
    # at most a million cells a side, 20 bits each: one integer a point sorts ten times faster than three
    key = (cell[:, 0] << 42) | (cell[:, 1] << 21) | cell[:, 2]
    _, first, index = np.unique(key, return_index=True, return_inverse=True)
    return flat[first], index.reshape(-1, 3)


def edges(faces: Faces) -> Edges:
    """Return what the edges of triangles (n, 3) say about the surface.

    Examples
    --------
    >>> closed = np.array([[0, 2, 1], [0, 1, 3], [1, 2, 3], [0, 3, 2]])
    >>> edges(closed).open_count, edges(closed[1:]).open_count, edges(np.vstack([closed[1:], [[0, 1, 2]]])).torn
    (0, 3, 3)
    """
    begin, end = faces.reshape(-1), np.roll(faces, -1, axis=1).reshape(-1)
    low, high = np.minimum(begin, end), np.maximum(begin, end)
    size = int(faces.max(initial=0)) + 1
    key, index, count = np.unique(low * size + high, return_inverse=True, return_counts=True)
    turn = np.bincount(index, weights=np.where(begin < end, 1.0, -1.0), minlength=key.size)
    is_open = count % 2 == 1
    torn = ~is_open & (turn != 0.0)
    return Edges(int(is_open.sum()), int(torn.sum()), np.stack([key // size, key % size]))


def volumes(points: Floats, faces: Faces, neighbours: NDArray[np.intp]) -> Floats:
    """Return the signed volume [m3] of each connected piece of a closed surface; negative is inside out."""
    from scipy.sparse import coo_matrix
    from scipy.sparse.csgraph import connected_components

    ones = np.ones(neighbours.shape[1], dtype=np.int8)
    joined = coo_matrix((ones, (neighbours[0], neighbours[1])), shape=(len(points), len(points)))
    count, piece = connected_components(joined, directed=False)
    corner = points[faces] - points.mean(axis=0)
    signed = (corner[:, 0] * np.cross(corner[:, 1], corner[:, 2])).sum(axis=1) / 6.0
    return floats(np.bincount(piece[faces[:, 0]], weights=signed, minlength=count))


def areas(vertices: Floats) -> Floats:
    """Return the areas (n,) [m2] of triangles with corners (n, 3, 3)."""
    vectors = np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    return floats(0.5 * np.sqrt((vectors * vectors).sum(axis=1)))


def convex(points: Floats, faces: Faces, normals: Floats) -> bool:
    """Whether no edge of a closed surface bends inwards by more than rounding.

    Notes
    -----
    For each edge, the far corner of the one triangle must not stand above the plane of the other by more than
    a millionth of the longest side. A single closed piece whose edges all bend outwards is convex.
    """
    begin, end = faces.reshape(-1), np.roll(faces, -1, axis=1).reshape(-1)
    far = np.roll(faces, -2, axis=1).reshape(-1)
    size = len(points)
    order = np.argsort(np.minimum(begin, end) * size + np.maximum(begin, end), kind="stable")
    if order.size % 2 or np.any(
        np.minimum(begin, end)[order[::2]] * size + np.maximum(begin, end)[order[::2]]
        != np.minimum(begin, end)[order[1::2]] * size + np.maximum(begin, end)[order[1::2]]
    ):
        return False
    one, other = order[::2], order[1::2]
    height = ((points[far[other]] - points[begin[one]]) * normals[one // 3]).sum(axis=1)
    longest = float((points.max(axis=0) - points.min(axis=0)).max())
    return bool(height.max(initial=0.0) <= SAME_POINT * longest)
