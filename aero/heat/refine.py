"""Long triangles cut in pieces, so that heating is resolved along them."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, floats

if TYPE_CHECKING:
    from aero.body import Elements

_ROUNDS = 40
MOST = 400_000  # triangles; beyond it a surface is left as it is


def refine(elements: Elements, longest: float | None = None) -> Elements:
    """Return the elements with every edge longer than a length cut at its middle, again and again.

    Parameters
    ----------
    elements : Elements
    longest : float [m], optional
        Default a twentieth of the body's largest extent.

    Returns
    -------
    Elements
        The same surface; normals are kept and areas halved.

    Raises
    ------
    ValueError
        If the length is not positive.

    Examples
    --------
    >>> from aero.body import Box, Vehicle
    >>> box = Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0)).elements(6)
    >>> fine = refine(box, 0.75)
    >>> len(box), len(fine), round(float(fine.areas.sum()), 12)
    (12, 48, 6.0)
    """
    corners = elements.vertices
    if longest is None:
        extent = corners.max(axis=(0, 1), initial=-np.inf) - corners.min(axis=(0, 1), initial=np.inf)
        longest = 0.05 * float(extent.max()) if len(elements) else 1.0
    if not longest > 0.0:
        raise ValueError(f"longest is {longest:g} m, expected a positive length")
    source, halvings = np.arange(len(elements)), np.zeros(len(elements), dtype=np.intp)
    for _ in range(_ROUNDS):
        edges = np.roll(corners, -1, axis=1) - corners
        length = np.sqrt((edges * edges).sum(axis=2))
        cut = length.max(axis=1) > longest
        if not cut.any() or len(corners) + int(cut.sum()) > MOST:
            break
        first, second = _halves(corners[cut], np.argmax(length[cut], axis=1))
        corners = np.concatenate([corners[~cut], first, second])
        source = np.concatenate([source[~cut], source[cut], source[cut]])
        halvings = np.concatenate([halvings[~cut], halvings[cut] + 1, halvings[cut] + 1])
    return type(elements)(
        normals=elements.normals[source],
        areas=floats(elements.areas[source] * 0.5**halvings),
        centroids=floats(corners.mean(axis=1)),
        vertices=floats(corners),
        part=elements.part[source],
        surfaces=elements.surfaces,
        names=elements.names,
    )


def _halves(corners: Floats, edge: NDArray[np.intp]) -> tuple[Floats, Floats]:
    """Return both halves of triangles cut at the middle of one edge, turning the same way."""
    row = np.arange(len(corners))
    a, b, c = (corners[row, (edge + k) % 3] for k in range(3))
    middle = 0.5 * (a + b)
    return np.stack([a, middle, c], axis=1), np.stack([middle, b, c], axis=1)
