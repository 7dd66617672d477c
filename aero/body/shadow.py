"""Which surface elements the oncoming flow reaches: a depth buffer across the flow.

All triangles that face the flow are drawn on a grid of pixels across it, each pixel keeps the foremost, and
every triangle then counts at how many of its own pixels it is the foremost. Depths are compared at the same
points, so a surface does not shadow itself whatever its slope.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

RESOLUTION = 512  # pixels along the longer side of the silhouette, where none is given
FINEST = 1024
ROWS = 4_000_000  # rows of pixels drawn at once; long slivers of fine meshes are drawn coarser beyond it
GRAZING = 0.01  # cosine below which an element lies along the flow
EDGE_ON = 1e-12  # cosine up to which a triangle counts as turned away: it has no area across the flow
MARGIN = 2.5  # pixels a grazing element is lifted off its surface before it is looked for
SAME_DEPTH = 1e-6  # of the body's extent: faces this near are one, as with coordinates in single precision


class _View(NamedTuple):
    """Triangles as seen along the flow, in pixels: across, up and depth (towards the flow)."""

    points: Floats  # (n, 3, 3)
    slopes: Floats  # (n, 2) of depth per pixel
    columns: int
    rows: int
    axes: Floats  # (3, 3)
    origin: Floats  # (2,)
    pixel: float


def visible_fraction(
    normals: ArrayLike, vertices: ArrayLike, direction: ArrayLike, *, resolution: int | None = None
) -> Floats:
    """Return the share of each triangle that a parallel flow reaches.

    Parameters
    ----------
    normals : (n, 3) array
        Outward unit normals.
    vertices : (n, 3, 3) array [m]
        Corners of each triangle.
    direction : (3,) array
        Where the flow comes from; any length.
    resolution : int, optional
        Pixels along the longer side of the silhouette. Default 512, or what gives four pixels a triangle up
        to 1024; fine meshes of long slivers are drawn coarser.

    Returns
    -------
    (n,) array
        0 to 1; 0 for triangles that face away.

    Raises
    ------
    ValueError
        If the shapes do not fit together or the direction has no length.

    Notes
    -----
    Only triangles that face the flow cast a shadow, which is all there is on closed bodies and on plates with
    two sides. The outline of a shadow is placed to about half a pixel. A triangle that covers no pixel centre
    is looked for at its centroid.

    Examples
    --------
    >>> plate = np.array([[0.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]])
    >>> pair = np.stack([plate, plate - [1.0, 0.0, 0.0]])
    >>> ahead = np.array([[1.0, 0.0, 0.0]] * 2)
    >>> visible_fraction(ahead, pair, [1.0, 0.0, 0.0])
    array([1., 0.])
    """
    normals, vertices, towards = _checked(normals, vertices, direction)
    found = np.zeros(len(normals))
    facing = np.flatnonzero(normals @ towards > EDGE_ON)
    if facing.size:
        found[facing] = _draw(vertices[facing], normals[facing], towards, resolution)[0]
    return found


def flow_share(
    normals: ArrayLike, vertices: ArrayLike, direction: ArrayLike, *, resolution: int | None = None
) -> Floats:
    """Return the share of each triangle that molecules reach when others stand in the way of none.

    As `visible_fraction`, but 1 on faces turned away, where only the molecules' thermal motion brings any and
    no parallel shadow applies; faces along the flow (cosine within 0.01) are looked for a little off their
    surface, so that the side of a box behind a wider plate lies in its shadow and the side of a plain box
    does not.

    Examples
    --------
    >>> plate = np.array([[0.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]])
    >>> flow_share([[-1.0, 0.0, 0.0]], plate[None], [1.0, 0.0, 0.0])
    array([1.])
    """
    normals, vertices, towards = _checked(normals, vertices, direction)
    cosines = normals @ towards
    found = np.ones(len(normals))
    facing = np.flatnonzero(cosines > EDGE_ON)
    if not facing.size:
        return found
    found[facing], view, buffer = _draw(vertices[facing], normals[facing], towards, resolution)
    along = np.flatnonzero(np.abs(cosines) <= GRAZING)
    if along.size:
        middle = vertices[along].mean(axis=1) + normals[along] * (MARGIN * view.pixel)
        place = (middle @ view.axes.T) / view.pixel
        place[:, :2] -= view.origin
        found[along] = _in_front(place, buffer, view, np.full(along.size, 1.0))
    return found


def _checked(normals: ArrayLike, vertices: ArrayLike, direction: ArrayLike) -> tuple[Floats, Floats, Floats]:
    n, v, u = floats(normals), floats(vertices), floats(direction)
    if n.ndim != 2 or n.shape[1:] != (3,) or v.shape != (len(n), 3, 3):
        raise ValueError(f"normals {n.shape} and vertices {v.shape} must be (n, 3) and (n, 3, 3)")
    size = float(np.sqrt((u * u).sum())) if u.shape == (3,) else 0.0
    if not (size > 0.0 and np.isfinite(size)):
        raise ValueError(f"direction must be three numbers that are not all 0, not {u.tolist()}")
    return n, v, u / size


def _draw(
    vertices: Floats, normals: Floats, towards: Floats, resolution: int | None
) -> tuple[Floats, _View, Floats]:
    """Return the visible share of triangles that face the flow, how they are seen, and the buffer."""
    view = _view(vertices, normals, towards, resolution)
    owner, pixel, depth = _fill(view)
    buffer = np.full(view.columns * view.rows, -np.inf)
    np.maximum.at(buffer, pixel, depth)
    seen = depth >= buffer[pixel] - SAME_DEPTH * max(view.columns, view.rows)
    count = np.bincount(owner, minlength=len(vertices))
    share = np.bincount(owner, weights=seen, minlength=len(vertices)) / np.maximum(count, 1)
    small = np.flatnonzero(count == 0)
    if small.size:
        slack = 1.0 + np.abs(view.slopes[small]).sum(axis=1)
        share[small] = _in_front(view.points[small].mean(axis=1), buffer, view, slack)
    return share, view, buffer


def _view(vertices: Floats, normals: Floats, towards: Floats, resolution: int | None) -> _View:
    helper = np.eye(3)[np.argmin(np.abs(towards))]
    across = np.cross(helper, towards)
    across /= np.sqrt((across * across).sum())
    axes = np.stack([across, np.cross(towards, across), towards])
    turned = vertices @ axes.T
    low, high = turned.min(axis=(0, 1)), turned.max(axis=(0, 1))
    extent = float((high - low)[:2].max())
    if resolution is None:
        resolution = int(np.clip(2.0 * np.sqrt(len(vertices)), RESOLUTION, FINEST))
    tall = float((turned[..., 1].max(axis=1) - turned[..., 1].min(axis=1)).sum()) / extent
    resolution = max(16, min(resolution, int(ROWS / max(tall, 1e-9))))
    pixel = extent / resolution
    points = turned / pixel
    origin = low[:2] / pixel
    points[..., :2] -= origin
    size = np.floor(points[..., :2].max(axis=(0, 1))).astype(int) + 1
    facing = normals @ axes.T
    slopes = -facing[:, :2] / facing[:, 2:]
    return _View(points, slopes, int(size[0]), int(size[1]), axes, origin, pixel)


def _ragged(first: np.ndarray, last: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return (position of the range, integer) for every integer of the ranges first..last."""
    count = np.maximum(last - first + 1, 0)
    owner = np.repeat(np.arange(len(count)), count)
    start = np.cumsum(count) - count
    return owner, np.arange(len(owner)) - np.repeat(start - first, count)


def _fill(view: _View) -> tuple[np.ndarray, np.ndarray, Floats]:
    """Return triangle, pixel and depth at every pixel centre that lies in a triangle."""
    order = np.argsort(view.points[..., 1], axis=1)
    a, b, c = np.moveaxis(np.take_along_axis(view.points, order[..., None], axis=1), 1, 0)
    first = np.ceil(a[:, 1] - 0.5).astype(np.intp)
    last = np.minimum(np.floor(c[:, 1] - 0.5).astype(np.intp), view.rows - 1)
    owner, row = _ragged(first, last)
    y = row + 0.5
    with np.errstate(divide="ignore", invalid="ignore"):  # level edges are met by no row, or at their end
        long, low, high = (_inverse_slope(p, q) for p, q in ((a, c), (a, b), (b, c)))
    on_long = a[owner, 0] + (y - a[owner, 1]) * long[owner]
    below = y < b[owner, 1]
    slope = np.where(below, low[owner], high[owner])
    on_short = b[owner, 0] + (y - b[owner, 1]) * slope
    left, right = np.minimum(on_long, on_short), np.maximum(on_long, on_short)
    edge = 1e-9 * view.columns  # a centre on a shared edge belongs to both sides
    start = np.maximum(np.ceil(left - 0.5 - edge), 0.0).astype(np.intp)
    stop = np.minimum(np.floor(right - 0.5 + edge), view.columns - 1.0).astype(np.intp)
    span, column = _ragged(start, stop)
    triangle, line = owner[span], row[span]
    # the depth at the first pixel of a span, then the slope along it
    corner = view.points[:, 0]
    base = corner[owner, 2] + (y - corner[owner, 1]) * view.slopes[owner, 1]
    base = base + (0.5 - corner[owner, 0]) * view.slopes[owner, 0]
    depth = base[span] + column * view.slopes[triangle, 0]
    nearest, farthest = view.points[..., 2].max(axis=1), view.points[..., 2].min(axis=1)
    depth = np.clip(depth, farthest[triangle], nearest[triangle])  # rounding on the steepest
    return triangle, line * view.columns + column, depth


def _inverse_slope(p: Floats, q: Floats) -> Floats:
    rise = q[:, 1] - p[:, 1]
    return np.where(rise > 0.0, (q[:, 0] - p[:, 0]) / rise, 0.0)


def _in_front(place: Floats, buffer: Floats, view: _View, slack: Floats) -> Floats:
    """Return 1 where nothing in the buffer lies ahead of a place by more than a slack [pixels]."""
    column, row = np.floor(place[:, 0]).astype(np.intp), np.floor(place[:, 1]).astype(np.intp)
    inside = (column >= 0) & (column < view.columns) & (row >= 0) & (row < view.rows)
    index = np.where(inside, row * view.columns + column, 0)
    ahead = buffer[index] > place[:, 2] + slack
    return np.where(inside & ahead, 0.0, 1.0)
