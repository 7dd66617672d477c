"""A part of a vehicle: a shape with its own surface, put somewhere and turned about a hinge."""

from __future__ import annotations

import math
from dataclasses import dataclass, field, replace

import numpy as np

from aero.arrays import Floats, floats
from aero.body.facets import Panels
from aero.body.shapes import Shape
from aero.body.surface import Surface

Vector = tuple[float, float, float]
ROUND_PANELS, FLAT_PANELS = 8000, 600
"""Panels of a part with curved and with flat faces, where no count is asked for: 5e-4 of a sphere's area, and
fine enough for the outline of a shadow."""


def rotation(axis: Vector, angle: float) -> Floats:
    """Return the matrix (3, 3) that turns by an angle [rad] about an axis, right-handed.

    Notes
    -----
    Rodrigues' formula, R = I + sin a K + (1 - cos a) K^2, K the cross-product matrix of the unit axis.

    Raises
    ------
    ValueError
        If the axis has no length.

    Examples
    --------
    >>> np.round(rotation((0.0, 0.0, 2.0), np.pi / 2) @ [1.0, 0.0, 0.0], 12)
    array([0., 1., 0.])
    """
    unit = floats(axis)
    size = float(np.sqrt((unit * unit).sum()))
    if not (size > 0.0 and math.isfinite(size)):
        raise ValueError(f"axis is {list(axis)}, expected three numbers that are not all 0")
    x, y, z = unit / size
    cross = np.array([[0.0, -z, y], [z, 0.0, -x], [-y, x, 0.0]])
    return floats(np.eye(3) + math.sin(angle) * cross + (1.0 - math.cos(angle)) * (cross @ cross))


@dataclass(frozen=True)
class Part:
    """A part of a vehicle.

    Attributes
    ----------
    name : str
    shape : Shape
        In axes of its own, parallel to the body's before the part is turned.
    surface : Surface
    position : (x, y, z) [m]
        Where the origin of the shape's own axes lies in body axes before the part is turned.
    axis : (x, y, z)
        Of the hinge, in body axes; any length.
    hinge : (x, y, z) or None [m]
        A point of the hinge, in body axes; None is the position.
    angle : float [rad]
        By how much the part is turned about the hinge, right-handed.

    Raises
    ------
    ValueError
        If the axis has no length or a number is not finite.

    Notes
    -----
    A point p of the shape lies at h + R (p + position - h), R the rotation about the axis, h the hinge.

    Examples
    --------
    >>> from aero.body.shapes import FlatPlate
    >>> wing = Part("wing", FlatPlate(length=1.0, width=2.0), axis=(0.0, 1.0, 0.0), angle=np.pi / 2)
    >>> np.round(wing.panels(2).normals, 12) + 0.0
    array([[ 1.,  0.,  0.],
           [-1.,  0.,  0.]])
    """

    name: str
    shape: Shape
    surface: Surface = field(default_factory=Surface)
    position: Vector = (0.0, 0.0, 0.0)
    axis: Vector = (0.0, 1.0, 0.0)
    hinge: Vector | None = None
    angle: float = 0.0

    def __post_init__(self) -> None:
        rotation(self.axis, self.angle)
        numbers = [*self.position, *(self.hinge or ()), *self.axis, self.angle]
        if not all(math.isfinite(number) for number in numbers):
            raise ValueError(f"part '{self.name}' holds a number that is not finite")

    def turned(self, angle: float) -> Part:
        """Return the part at another angle [rad] of its hinge."""
        return replace(self, angle=angle)

    def placed(self, points: Floats) -> Floats:
        """Return points (..., 3) [m] of the shape's own axes in body axes."""
        position = floats(self.position)
        if self.angle == 0.0:
            return points + position
        hinge = position if self.hinge is None else floats(self.hinge)
        return (points + (position - hinge)) @ rotation(self.axis, self.angle).T + hinge

    def panels(self, count: int | None = None) -> Panels:
        """Return about `count` panels of the part in body axes (a mesh has the triangles it has)."""
        own = self.shape.panels(count or (FLAT_PANELS if self.shape.flat_faced else ROUND_PANELS))
        turn = np.eye(3) if self.angle == 0.0 else rotation(self.axis, self.angle)
        return Panels(
            own.normals @ turn.T,
            own.areas,
            self.placed(own.centroids),
            None if own.vertices is None else self.placed(own.vertices),
            None if own.quads is None else self.placed(own.quads),
        )
