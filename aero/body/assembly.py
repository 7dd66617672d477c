"""Several parts as one shape, for what knows one surface only."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from aero.body.elements import Elements, gather
from aero.body.facets import Facets, Panels
from aero.body.mesh import MESH_CLASS, seen_by_flow
from aero.body.part import Part
from aero.body.shape import Shape

RULING_SHARE = 0.9  # of the whole surface; a part with more gives the assembly its body class (judgement)


@dataclass(frozen=True)
class Assembly(Shape):
    """Parts as one shape: their panels side by side, those behind others without flow.

    Attributes
    ----------
    parts : tuple of Part
    shadows : bool
        Whether elements behind others get no flow.

    Notes
    -----
    Not in `SHAPES`: a vehicle file states parts as `[[part]]` tables. The parts' surfaces play no role here.

    Examples
    --------
    >>> from aero.body.flat_bodies import Box, FlatPlate
    >>> body = Part("body", Box(length=0.3, width=0.2, height=0.1))
    >>> wing = Part("wing", FlatPlate(length=0.4, width=0.2), position=(0.0, 0.0, 0.3), angle=np.pi / 2)
    >>> round(Assembly((body, wing)).frontal_area, 6)
    0.1
    """

    kind: ClassVar[str] = "assembly"
    mirrored: ClassVar[bool] = False
    parts: tuple[Part, ...]
    shadows: bool = True

    def __post_init__(self) -> None:
        if not self.parts:
            raise ValueError("an assembly needs at least one part")

    @property
    def nose_radius(self) -> float | None:
        """Nose radius of the first part [m]."""
        return self.parts[0].shape.nose_radius

    @property
    def body_class(self) -> str:
        """That of a part with nine tenths of the surface, else the one with the widest band (judgement)."""
        found = self.elements
        shares = np.bincount(found.part, weights=found.areas, minlength=len(self.parts)) / found.areas.sum()
        ruling = int(np.argmax(shares))
        return self.parts[ruling].shape.body_class if shares[ruling] >= RULING_SHARE else MESH_CLASS

    @cached_property
    def elements(self) -> Elements:
        """The triangles of all parts."""
        return gather(self.parts)

    @property
    def extent(self) -> tuple[float, float, float]:
        """Length along x, y and z [m]."""
        corners = self.elements.vertices.reshape(-1, 3)
        x, y, z = corners.max(axis=0) - corners.min(axis=0)
        return float(x), float(y), float(z)

    @property
    def length_across(self) -> float:
        """Longer side across x [m]."""
        return max(self.extent[1:])

    @cached_property
    def frontal_area(self) -> float:
        """Area of the silhouette along x [m2], hidden elements left out."""
        seen = seen_by_flow(self._panels, 0.0, shadows=True)
        return float((np.maximum(seen.cosines, 0.0) * seen.areas).sum())

    @property
    def _panels(self) -> Panels:
        found = self.elements
        return Panels(found.normals, found.areas, found.centroids, found.vertices)

    def panels(self, count: int) -> Panels:
        """Return about `count` panels of each part, in triangles."""
        found = gather(self.parts, count)
        return Panels(found.normals, found.areas, found.centroids, found.vertices)

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`; elements behind others get no flow unless shadows are off."""
        return seen_by_flow(self._panels, angle_of_attack, shadows=self.shadows)
