"""What a force model answers."""

from __future__ import annotations

from dataclasses import dataclass

from aero.arrays import Floats


@dataclass(frozen=True, eq=False)
class Coefficients:
    """Drag and lift coefficients on the vehicle's reference area at each point.

    Attributes
    ----------
    drag, lift : (...,) array
        Lift acts along the direction the nose is raised to by a positive angle of attack.
    drag_by_accommodation : (...,) array or None
        Derivative of drag with respect to energy accommodation.
    drag_by_wall_temperature : (...,) array or None [1/K]
    drag_base : (...,) array or None
        Part of drag that comes from base pressure.
    drag_friction : (...,) array or None
        Part of drag that comes from friction.

    Notes
    -----
    NaN marks points without an answer: no motion, no air, no shape.
    """

    drag: Floats
    lift: Floats
    drag_by_accommodation: Floats | None = None
    drag_by_wall_temperature: Floats | None = None
    drag_base: Floats | None = None
    drag_friction: Floats | None = None
