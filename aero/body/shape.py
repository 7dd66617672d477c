"""What every shape answers; each kind adds its dimensions as fields."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass, field, fields
from typing import TYPE_CHECKING, ClassVar

from aero.arrays import Floats
from aero.body.facets import Facets, Panels

BODY_CLASSES = ("sphere", "cylinder", "blunt-cone", "slender", "flat-plate", "box")
"""Keys of the default bridging and of the continuum uncertainty."""


def length() -> float:
    """Return a dataclass field for a dimension in m."""
    return field(metadata={"dimension": "length"})  # type: ignore[no-any-return]


def angle() -> float:
    """Return a dataclass field for a dimension in rad."""
    return field(metadata={"dimension": "angle"})  # type: ignore[no-any-return]


@dataclass(frozen=True)
class Shape(ABC):
    """A body; the fields of each kind are its dimensions in m and rad (a mesh has others).

    Raises
    ------
    ValueError
        If a dimension is not positive or the dimensions do not fit together.
    """

    kind: ClassVar[str]
    flat_faced: ClassVar[bool] = False
    lifts: ClassVar[bool] = True
    mirrored: ClassVar[bool] = True  # whether z -> -z leaves the body as it is, so that half a turn tells all

    def __post_init__(self) -> None:
        for item in fields(self):
            value = getattr(self, item.name)
            if not (math.isfinite(value) and value > 0.0):
                raise ValueError(f"{item.name} is {value:g}, expected a positive number")
        self._check()

    def _check(self) -> None:
        """Raise ValueError when dimensions that are each allowed do not fit together."""
        return

    @property
    @abstractmethod
    def body_class(self) -> str:
        """One of `BODY_CLASSES`."""

    if TYPE_CHECKING:  # at run time each kind brings its own: a dimension or a property

        @property
        def nose_radius(self) -> float | None:
            """Radius at the stagnation point [m], None where the shape has no rounded nose."""

    @property
    @abstractmethod
    def length_across(self) -> float:
        """Length across the flow that bridging is scaled with [m]."""

    @property
    @abstractmethod
    def frontal_area(self) -> float:
        """Area across the flow at zero angle of attack [m2]."""

    @abstractmethod
    def panels(self, count: int) -> Panels:
        """Return about `count` flat panels that enclose the body; the error falls as 1/count."""

    @abstractmethod
    def facets(self, angle_of_attack: float) -> Facets:
        """Return a quadrature over the surface as the flow at an angle of attack [rad] sees it."""

    def slabs(self) -> tuple[Floats, Floats]:
        """Return a flat-faced body as pairs of opposite equal faces: normals (n, 3) and areas (n,) of one."""
        raise ValueError(f"a {self.kind} has no flat faces")
