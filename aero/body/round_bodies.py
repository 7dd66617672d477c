"""Bodies with a curved surface: sphere, cylinder across the flow, cone, sphere-cone."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from aero.body import facets as see
from aero.body import shape as dimension
from aero.body.facets import Facets, Panels
from aero.body.shape import Shape

BLUNT_HALF_ANGLE = math.radians(30.0)  # judgement: from here a cone is blunt
BLUNT_NOSE = 0.5  # judgement: from this nose radius over base radius a body is blunt whatever its cone


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
    diameter: float = dimension.length()

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
    diameter: float = dimension.length()
    length: float = dimension.length()

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
class Cone(Shape):
    """Sharp cone, point first, with a flat base."""

    kind: ClassVar[str] = "cone"
    half_angle: float = dimension.angle()
    base_radius: float = dimension.length()

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
    nose_radius: float = dimension.length()
    half_angle: float = dimension.angle()
    base_radius: float = dimension.length()

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
