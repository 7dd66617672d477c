"""Bodies with flat faces only, in pairs: flat plate and box."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from aero.arrays import Floats
from aero.body import facets as see
from aero.body import shape as dimension
from aero.body.facets import Facets, Panels
from aero.body.shape import Shape


@dataclass(frozen=True)
class FlatPlate(Shape):
    """Thin rectangular plate: length along x, width along y; edge-on at zero angle of attack."""

    kind: ClassVar[str] = "flat-plate"
    flat_faced: ClassVar[bool] = True
    length: float = dimension.length()
    width: float = dimension.length()

    @property
    def body_class(self) -> str:
        """See `Shape`."""
        return "flat-plate"

    @property
    def nose_radius(self) -> None:
        """None: a plate has no rounded nose."""
        return

    @property
    def length_across(self) -> float:
        """Return the length [m], the one that meets the flow when the plate is turned across it."""
        return self.length

    @property
    def frontal_area(self) -> float:
        """Area of one face [m2] (edge-on there is no other)."""
        return self.length * self.width

    def slabs(self) -> tuple[Floats, Floats]:
        """Return the lower face, which stands for both."""
        return np.array([[0.0, 0.0, 1.0]]), np.array([self.frontal_area])

    def panels(self, count: int) -> Panels:
        """See `Shape`."""
        split = max(1, round(math.sqrt(count / 2.0)))
        corner = np.array([[-self.length, -self.width, 0.0]] * 2) / 2.0
        along, across = np.array([self.length, 0.0, 0.0]), np.array([0.0, self.width, 0.0])
        return see.rectangles(corner, np.stack([along, across]), np.stack([across, along]), split)

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`."""
        return _faces_seen(self, angle_of_attack)


@dataclass(frozen=True)
class Box(Shape):
    """Rectangular box: length along x, width along y, height along z."""

    kind: ClassVar[str] = "box"
    flat_faced: ClassVar[bool] = True
    length: float = dimension.length()
    width: float = dimension.length()
    height: float = dimension.length()

    @property
    def body_class(self) -> str:
        """See `Shape`."""
        return "box"

    @property
    def nose_radius(self) -> None:
        """None: a box has no rounded nose."""
        return

    @property
    def length_across(self) -> float:
        """Side of the square with the frontal area [m]."""
        return math.sqrt(self.frontal_area)

    @property
    def frontal_area(self) -> float:
        """Width times height [m2]."""
        return self.width * self.height

    def slabs(self) -> tuple[Floats, Floats]:
        """Return the front, right and lower faces, each of which stands for two."""
        return np.eye(3), np.array([self.frontal_area, self.length * self.height, self.length * self.width])

    def panels(self, count: int) -> Panels:
        """See `Shape`."""
        split = max(1, round(math.sqrt(count / 6.0)))
        edges = np.diag([self.length, self.width, self.height])
        corners, firsts, seconds = [], [], []
        for axis in range(3):
            one, two = edges[(axis + 1) % 3], edges[(axis + 2) % 3]
            for sign in (1.0, -1.0):
                corners.append(0.5 * (sign * edges[axis] - one - two))
                firsts.append(one if sign > 0 else two)
                seconds.append(two if sign > 0 else one)
        return see.rectangles(np.stack(corners), np.stack(firsts), np.stack(seconds), split)

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`."""
        return _faces_seen(self, angle_of_attack)


def _faces_seen(shape: Shape, angle_of_attack: float) -> Facets:
    normals, areas = shape.slabs()
    both, twice = np.concatenate([normals, -normals]), np.concatenate([areas, areas])
    cosines, lifts = see.project(both, np.float64(angle_of_attack))
    return Facets(cosines, twice, twice * lifts)
