"""The whole surface of a vehicle as triangles in body axes, each of one part with one surface."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, readonly
from aero.body.part import Part
from aero.body.surface import Surface


@dataclass(frozen=True, eq=False)
class Elements:
    """Triangles of a vehicle's surface.

    Attributes
    ----------
    normals : (n, 3) array
        Outward unit normals in body axes.
    areas : (n,) array [m2]
    centroids : (n, 3) array [m]
    vertices : (n, 3, 3) array [m]
    part : (n,) int array
        Index of each element's part.
    surfaces : tuple of Surface
        Of each part.
    names : tuple of str
        Of each part.
    """

    normals: Floats
    areas: Floats
    centroids: Floats
    vertices: Floats
    part: NDArray[np.intp]
    surfaces: tuple[Surface, ...]
    names: tuple[str, ...]

    def __len__(self) -> int:
        return int(self.areas.size)


def gather(parts: Sequence[Part], count: int | None = None) -> Elements:
    """Return the elements of parts, each about `count` panels (each of two triangles, or a mesh's own).

    Examples
    --------
    >>> from aero.body.shapes import Box, FlatPlate
    >>> panel = Part("panel", FlatPlate(length=0.4, width=0.2), position=(-0.5, 0.0, 0.0))
    >>> found = gather([Part("body", Box(length=0.3, width=0.2, height=0.1)), panel], 6)
    >>> len(found), round(float(found.areas.sum()), 6), found.part[-1], found.names
    (28, 0.38, np.int64(1), ('body', 'panel'))
    """
    if not parts:
        raise ValueError("no parts, so no elements")
    return _gathered(tuple(parts), count)


@lru_cache(maxsize=8)
def _gathered(parts: tuple[Part, ...], count: int | None) -> Elements:
    panels = [part.panels(count).triangles() for part in parts]
    normals, areas, centroids, vertices = (
        readonly(np.concatenate([getattr(one, name) for one in panels]))
        for name in ("normals", "areas", "centroids", "vertices")
    )
    return Elements(
        normals,
        areas,
        centroids,
        vertices,
        np.repeat(np.arange(len(parts)), [one.areas.size for one in panels]),
        tuple(part.surface for part in parts),
        tuple(part.name for part in parts),
    )
