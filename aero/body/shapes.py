"""The shapes a vehicle file may name; adding one is a class and an entry in `SHAPES`."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass, field, fields
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from aero.arrays import Floats
from aero.body import facets as see
from aero.body.facets import Facets, Panels
from aero.errors import InputError, choose

BODY_CLASSES = ("sphere", "cylinder", "blunt-cone", "slender", "flat-plate", "box")
"""Keys of the default bridging and of the continuum uncertainty."""
BLUNT_HALF_ANGLE = math.radians(30.0)  # judgement: from here a cone is blunt
BLUNT_NOSE = 0.5  # judgement: from this nose radius over base radius a body is blunt whatever its cone


def _length() -> float:
    return field(metadata={"dimension": "length"})  # type: ignore[no-any-return]


def _angle() -> float:
    return field(metadata={"dimension": "angle"})  # type: ignore[no-any-return]


@dataclass(frozen=True)
class Shape(ABC):
    """A convex body; the fields of each kind are its dimensions in m and rad.

    Raises
    ------
    ValueError
        If a dimension is not positive or the dimensions do not fit together.
    """

    kind: ClassVar[str]
    flat_faced: ClassVar[bool] = False
    lifts: ClassVar[bool] = True

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


@dataclass(frozen=True)
class Sphere(Shape):
    """Sphere; the angle of attack does nothing.

    Examples
    --------
    >>> round(Sphere(diameter=2.0).frontal_area, 4)
    3.1416
    """

    kind: ClassVar[str] = "sphere"
    lifts: ClassVar[bool] = False
    diameter: float = _length()

    @property
    def body_class(self) -> str:
        """See `Shape`."""
        return "sphere"

    @property
    def nose_radius(self) -> float:
        """Half the diameter [m]."""
        return self.diameter / 2.0

    @property
    def length_across(self) -> float:
        """Return the diameter [m]."""
        return self.diameter

    @property
    def frontal_area(self) -> float:
        """Area of the great circle [m2]."""
        return math.pi * self.diameter**2 / 4.0

    def panels(self, count: int) -> Panels:
        """See `Shape`."""
        rows = max(2, round(math.sqrt(count / 2.0)))
        angle = np.linspace(0.0, np.pi, rows + 1)
        radius = self.diameter / 2.0
        return see.revolve(radius * np.cos(angle), radius * np.sin(angle), 2 * rows)

    def facets(self, angle_of_attack: float) -> Facets:  # noqa: ARG002
        """See `Shape`."""
        return see.sphere_whole(self.diameter / 2.0)


@dataclass(frozen=True)
class Cylinder(Shape):
    """Circular cylinder across the flow, axis along y: turning it in the x-z plane changes nothing.

    Notes
    -----
    The flow is plane: the two end faces carry no force. In free-molecular flow their shear would add
    (sqrt(pi)/2) (diameter/length)/S to the drag coefficient on diameter times length.
    """

    kind: ClassVar[str] = "cylinder"
    lifts: ClassVar[bool] = False
    diameter: float = _length()
    length: float = _length()

    @property
    def body_class(self) -> str:
        """See `Shape`."""
        return "cylinder"

    @property
    def nose_radius(self) -> float:
        """Half the diameter [m]; the stagnation point is a line."""
        return self.diameter / 2.0

    @property
    def length_across(self) -> float:
        """Return the diameter [m]."""
        return self.diameter

    @property
    def frontal_area(self) -> float:
        """Diameter times length [m2]."""
        return self.diameter * self.length

    def panels(self, count: int) -> Panels:
        """See `Shape`; the mantle only."""
        around = max(4, count)
        turn = np.arange(around + 1) * 2.0 * np.pi / around
        rim = self.diameter / 2.0 * np.stack([np.cos(turn), np.zeros_like(turn), np.sin(turn)], axis=-1)
        low = np.array([0.0, -self.length / 2.0, 0.0])
        axis = np.array([0.0, self.length, 0.0])
        return see.rectangles(rim[1:] + low, rim[:-1] - rim[1:], np.broadcast_to(axis, (around, 3)), 1)

    def facets(self, angle_of_attack: float) -> Facets:  # noqa: ARG002
        """See `Shape`."""
        return see.cylinder_mantle(self.diameter / 2.0, self.length)


@dataclass(frozen=True)
class FlatPlate(Shape):
    """Thin rectangular plate: length along x, width along y; edge-on at zero angle of attack."""

    kind: ClassVar[str] = "flat-plate"
    flat_faced: ClassVar[bool] = True
    length: float = _length()
    width: float = _length()

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
    length: float = _length()
    width: float = _length()
    height: float = _length()

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


@dataclass(frozen=True)
class Cone(Shape):
    """Sharp cone, point first, with a flat base."""

    kind: ClassVar[str] = "cone"
    half_angle: float = _angle()
    base_radius: float = _length()

    def _check(self) -> None:
        if self.half_angle >= math.pi / 2.0:
            raise ValueError(
                f"half_angle is {math.degrees(self.half_angle):g} deg, expected less than 90 deg"
            )

    @property
    def body_class(self) -> str:
        """Blunt from a half angle of 30 deg on (judgement)."""
        return "blunt-cone" if self.half_angle >= BLUNT_HALF_ANGLE else "slender"

    @property
    def nose_radius(self) -> None:
        """None: the point is sharp."""
        return

    @property
    def length_across(self) -> float:
        """Base diameter [m]."""
        return 2.0 * self.base_radius

    @property
    def frontal_area(self) -> float:
        """Area of the base [m2]."""
        return math.pi * self.base_radius**2

    @property
    def side_area(self) -> float:
        """Area of the conical surface [m2]."""
        return self.frontal_area / math.sin(self.half_angle)

    def panels(self, count: int) -> Panels:
        """See `Shape`."""
        around = max(6, count // 2)
        length = self.base_radius / math.tan(self.half_angle)
        radii = np.array([0.0, self.base_radius, 0.0])
        return see.revolve(np.array([length, 0.0, 0.0]), radii, around)

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`."""
        return see.join(
            see.cone_ring(self.half_angle, self.side_area, angle_of_attack),
            see.flat((-1.0, 0.0, 0.0), self.frontal_area, angle_of_attack),
        )


@dataclass(frozen=True)
class SphereCone(Shape):
    """Cone with a spherical nose tangent to it and a flat base."""

    kind: ClassVar[str] = "sphere-cone"
    nose_radius: float = _length()
    half_angle: float = _angle()
    base_radius: float = _length()

    def _check(self) -> None:
        if self.half_angle >= math.pi / 2.0:
            raise ValueError(
                f"half_angle is {math.degrees(self.half_angle):g} deg, expected less than 90 deg"
            )
        if self.tangent_radius > self.base_radius * (1.0 + 1e-9):
            largest = self.base_radius / math.cos(self.half_angle)
            raise ValueError(
                f"a nose radius of {self.nose_radius:g} m does not fit a base radius of "
                f"{self.base_radius:g} m at {math.degrees(self.half_angle):g} deg, "
                f"expected at most {largest:.6g} m"
            )

    @property
    def tangent_radius(self) -> float:
        """Radius of the circle where the nose meets the cone [m]."""
        return self.nose_radius * math.cos(self.half_angle)

    @property
    def body_class(self) -> str:
        """Blunt from a half angle of 30 deg or a nose of half the base radius on (judgement)."""
        blunt = self.half_angle >= BLUNT_HALF_ANGLE or self.nose_radius >= BLUNT_NOSE * self.base_radius
        return "blunt-cone" if blunt else "slender"

    @property
    def length_across(self) -> float:
        """Base diameter [m]."""
        return 2.0 * self.base_radius

    @property
    def frontal_area(self) -> float:
        """Area of the base [m2]."""
        return math.pi * self.base_radius**2

    @property
    def side_area(self) -> float:
        """Area of the conical part [m2]."""
        return max(0.0, math.pi * (self.base_radius**2 - self.tangent_radius**2) / math.sin(self.half_angle))

    def panels(self, count: int) -> Panels:
        """See `Shape`."""
        rows = max(2, round(math.sqrt(count / 4.0)))
        angle = np.linspace(0.0, np.pi / 2.0 - self.half_angle, rows + 1)
        along = self.nose_radius * (np.cos(angle) - 1.0)
        radii = self.nose_radius * np.sin(angle)
        base = along[-1] - (self.base_radius - self.tangent_radius) / math.tan(self.half_angle)
        return see.revolve(
            np.append(along, [base, base]), np.append(radii, [self.base_radius, 0.0]), 4 * rows
        )

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`."""
        return see.join(
            see.sphere_cap(self.nose_radius, math.pi / 2.0 - self.half_angle, angle_of_attack),
            see.cone_ring(self.half_angle, self.side_area, angle_of_attack),
            see.flat((-1.0, 0.0, 0.0), self.frontal_area, angle_of_attack),
        )


def _faces_seen(shape: Shape, angle_of_attack: float) -> Facets:
    normals, areas = shape.slabs()
    both, twice = np.concatenate([normals, -normals]), np.concatenate([areas, areas])
    cosines, lifts = see.project(both, np.float64(angle_of_attack))
    return Facets(cosines, twice, twice * lifts)


SHAPES: dict[str, type[Shape]] = {
    shape.kind: shape for shape in (Sphere, Cylinder, FlatPlate, Cone, SphereCone, Box)
}
"""Kind in a vehicle file -> class; the fields of the class are its keys."""


def dimensions(kind: type[Shape]) -> dict[str, str]:
    """Return the dimensions of a shape as name -> "length" or "angle".

    Examples
    --------
    >>> dimensions(SHAPES["cone"])
    {'half_angle': 'angle', 'base_radius': 'length'}
    """
    return {item.name: str(item.metadata["dimension"]) for item in fields(kind)}


def build_shape(
    kind: str,
    sizes: Mapping[str, float],
    *,
    source: str | None = None,
    flags: Mapping[str, str] | None = None,
) -> Shape:
    """Return a shape from its kind and dimensions as a user gave them.

    Parameters
    ----------
    kind : str
        A key of `SHAPES`.
    sizes : mapping of str to float [m], [rad]
    source : str, optional
        Where they stand, for the message.
    flags : mapping of str to str, optional
        What the user calls each dimension.

    Raises
    ------
    InputError
        If the kind is unknown, a dimension is missing or does not belong to it, or they do not fit.

    Examples
    --------
    >>> build_shape("sphere", {"diameter": 1.0})
    Sphere(diameter=1.0)
    >>> build_shape("cone", {"diameter": 1.0})
    Traceback (most recent call last):
    aero.errors.InputError: a cone has no diameter; its dimensions: half_angle, base_radius.
    """
    built = SHAPES[choose(kind, SHAPES, "shape kind", source=source)]
    wanted = dimensions(built)
    called = dict(zip(wanted, wanted, strict=True)) | dict(flags or {})
    listed = f"its dimensions: {', '.join(called[name] for name in wanted)}"
    for name in sizes:
        if name not in wanted:
            raise InputError(f"a {kind} has no {called.get(name, name)}", source=source, remedy=listed)
    missing = [called[name] for name in wanted if name not in sizes]
    if missing:
        raise InputError(f"a {kind} needs {' and '.join(missing)}", source=source, remedy=f"add {missing[0]}")
    try:
        return built(**sizes)
    except ValueError as error:
        raise InputError(f"the {kind} cannot be built: {error}", source=source, remedy=listed) from None
