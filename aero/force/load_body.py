"""A vehicle's surface made ready for loads: elements by part, shadows, and the sums already made."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import Floats, floats
from aero.body.shadow import flow_share
from aero.force.load_sums import NewtonianSums, Patch, newtonian_sums
from aero.force.loads import flow_direction

if TYPE_CHECKING:
    from aero.body.elements import Elements
    from aero.body.surface import Surface
    from aero.body.vehicle import Vehicle

KEPT_SHADOWS = 8
KEPT_SUMS = 20_000


class LoadBody:
    """The elements of a vehicle about its moment point, with what was computed of them.

    Parameters
    ----------
    elements : Elements
    point : (3,) array [m]
        Moment point.
    length : float [m]
        Moment length.
    shadow : bool
        Whether elements stand in each other's way.

    Raises
    ------
    ValueError
        If shadows are asked for and the elements have no vertices.
    """

    def __init__(self, elements: Elements, point: Floats, length: float, *, shadow: bool) -> None:
        if shadow and elements.vertices is None:
            raise ValueError("shadows need the elements' vertices; pass shadow=False")
        self.elements = elements
        self.length = length
        self.shadow = shadow
        self.surfaces: tuple[Surface, ...] = elements.surfaces
        self.members = [np.flatnonzero(elements.part == part) for part in range(len(elements.surfaces))]
        self.patches = [
            Patch(elements.normals[who], elements.areas[who], (elements.centroids[who] - point) / length)
            for who in self.members
        ]
        self._shadows: dict[tuple[float, float], Floats] = {}
        self._newtonian: dict[tuple[float, float, int], NewtonianSums] = {}
        self.tables: dict[tuple[object, ...], Floats] = {}

    def share(self, angle_of_attack: float, sideslip: float) -> Floats:
        """Return the part of each element that molecules reach."""
        if not self.shadow:
            return np.ones(len(self.elements.areas))
        key = (angle_of_attack, sideslip)
        if key not in self._shadows:
            if len(self._shadows) >= KEPT_SHADOWS:
                self._shadows.pop(next(iter(self._shadows)))
            direction = flow_direction(angle_of_attack, sideslip)
            self._shadows[key] = flow_share(self.elements.normals, self.elements.vertices, direction)
        return self._shadows[key]

    def newtonian(self, angle_of_attack: float, sideslip: float, modes: int) -> NewtonianSums:
        """Return the Newtonian sums of all parts at an attitude."""
        key = (angle_of_attack, sideslip, modes)
        if key not in self._newtonian:
            if len(self._newtonian) >= KEPT_SUMS:
                self._newtonian.clear()
            direction = flow_direction(angle_of_attack, sideslip)
            share = self.share(angle_of_attack, sideslip)
            found = [
                newtonian_sums(patch, direction, share[who], modes)
                for patch, who in zip(self.patches, self.members, strict=True)
            ]
            self._newtonian[key] = NewtonianSums(
                floats(sum(one.windward for one in found)),
                floats(sum(one.lee for one in found)),
                sum(one.projected for one in found),
            )
        return self._newtonian[key]


def load_body(
    vehicle: Vehicle, *, shadow: bool = True, count: int | None = None, elements: Elements | None = None
) -> LoadBody:
    """Return a vehicle's surface ready for loads, the same one on every call with the same vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    shadow : bool, optional
        False lets the flow through, as does the vehicle's own `shadows`; a single convex shape has no
        shadows either way.
    count : int, optional
        Panels of each part; `Vehicle.elements` chooses without it.
    elements : Elements, optional
        In place of the vehicle's.

    Notes
    -----
    Without `[moment]` in the vehicle file the moment point is the origin of the body axes and the moment
    length the reference length.
    """
    return _body(vehicle, shadow, count, elements)


@lru_cache(maxsize=4)
def _body(vehicle: Vehicle, shadow: bool, count: int | None, elements: Elements | None) -> LoadBody:
    point, length = vehicle.moment_point, vehicle.moment_length
    convex = elements is None and is_convex(vehicle)
    return LoadBody(
        vehicle.elements(count=count) if elements is None else elements,
        np.zeros(3) if point is None else floats(point),
        vehicle.reference_length if length is None else float(length),
        shadow=shadow and vehicle.shadows and not convex,
    )


def is_convex(vehicle: Vehicle) -> bool:
    """Return whether the vehicle is one body on which no element hides another."""
    if len(vehicle.parts) > 1:
        return False
    shape = vehicle.parts[0].shape if vehicle.parts else vehicle.shape
    return bool(getattr(shape, "convex", True))
