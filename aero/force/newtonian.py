"""Modified Newtonian pressure: the pitot value at the stagnation point, falling with the cosine squared."""

from __future__ import annotations

from functools import lru_cache
from typing import NamedTuple

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.body.shapes import Shape
from aero.force.speed_table import angle_count, angle_weights, missing_angles, place_in_turn, table_angle

# Equilibrium air over a calorically perfect gas of 1.4 in pitot pressure coefficient: fit to normal shocks
# computed from partition functions at 60 and 70 km, 1-12 km/s (tests/force/equilibrium_air.py); largest
# misfit 0.0074 there, 0.010 from 50 to 80 km.
REAL_GAS = (0.0664, 2196.0, 0.0388, 4581.0)  # rise, speed [m/s] of oxygen's and of nitrogen's dissociation

BASE_SIGMA = 0.30  # relative 1-sigma of base pressure, judgement
ABOVE = 0.05  # relative, drag of a 60-70 degree cone over its Newtonian value, judgement
LEE_FULL = 0.5  # base pressure holds on faces turned 30 deg or more away from the flow, judgement


class Integrals(NamedTuple):
    """Surface integrals of a body at an angle of attack [m2].

    Attributes
    ----------
    drag, lift : (...,) array
        Of the cosine squared over the faces in the flow: times the stagnation pressure coefficient.
    lee_drag, lee_lift : (...,) array
        Over the faces in the shadow: times the base pressure coefficient.
    """

    drag: Floats
    lift: Floats
    lee_drag: Floats
    lee_lift: Floats


def stagnation_pressure_coefficient(mach: ArrayLike, heat_capacity_ratio: ArrayLike) -> Floats:
    """Return the pressure coefficient at the stagnation point of a perfect gas.

    Parameters
    ----------
    mach, heat_capacity_ratio : (...,) array

    Returns
    -------
    (...,) array
        NaN at Mach 0 and below.

    Notes
    -----
    Rayleigh's pitot formula above Mach 1, p0/p = a [a (g+1)/(2 g M^2 - (g-1))]^(1/(g-1)), a = (g+1) M^2/2;
    isentropic below. At infinite Mach and g = 1.4: 1.839.

    References
    ----------
    [NACA1135]

    Examples
    --------
    >>> np.round(stagnation_pressure_coefficient([0.0, 0.5, 1e6], 1.4), 3)
    array([  nan, 1.064, 1.839])
    """
    M, gamma = np.broadcast_arrays(floats(mach), floats(heat_capacity_ratio))
    moves = M > 0.0
    square = np.where(moves, M * M, np.nan)
    half = 0.5 * (gamma + 1.0) * square
    fast = M >= 1.0
    behind = np.where(fast, 2.0 * gamma * square - (gamma - 1.0), gamma + 1.0)
    ratio = half * np.exp(np.log(half * (gamma + 1.0) / behind) / (gamma - 1.0))
    rise = ratio - 1.0
    if not fast.all():
        slow = np.expm1(gamma / (gamma - 1.0) * np.log1p(0.5 * (gamma - 1.0) * square))
        rise = np.where(fast, rise, slow)
    return floats(rise / (0.5 * gamma * square))


def real_gas_rise(speed: ArrayLike) -> Floats:
    """Return how far equilibrium air lifts the stagnation pressure coefficient of a perfect gas.

    Parameters
    ----------
    speed : (...,) array [m/s]

    Notes
    -----
    a x/(1 + x) + b y/(1 + y), x = (V/V_1)^6, y = (V/V_2)^4: dissociation makes the shock layer denser and the
    coefficient, about 2 - rho_1/rho_2, larger: 1.93 at 6 km/s, 1.94 at 8 km/s. Fit to own computation, see
    `REAL_GAS`; extrapolated (flat) above 12 km/s.

    References
    ----------
    [Vincenti1965]

    Examples
    --------
    >>> np.round(1.838 + real_gas_rise([6000.0, 8000.0]), 2)
    array([1.93, 1.94])
    """
    oxygen, oxygen_speed, nitrogen, nitrogen_speed = REAL_GAS
    square = floats(speed) * floats(speed)
    x, y = square / oxygen_speed**2, square / nitrogen_speed**2
    x, y = x * x * x, y * y
    return floats(oxygen * x / (1.0 + x) + nitrogen * y / (1.0 + y))


def base_pressure_coefficient(mach: ArrayLike) -> Floats:
    """Return the pressure coefficient of faces in the shadow.

    Notes
    -----
    -(0.12 + 0.13 M^2) below Mach 1 and -0.25/M above [Fleeman2001] (value from memory), never below -1/M^2,
    seven tenths of vacuum at g = 1.4 (common practice, no source), which rules above Mach 4. 1-sigma 30 %
    (judgement).

    Examples
    --------
    >>> base_pressure_coefficient([0.5, 2.0, 10.0])
    array([-0.1525, -0.125 , -0.01  ])
    """
    M = floats(mach)
    safe = np.maximum(M, 1.0)
    return -np.where(M < 1.0, 0.12 + 0.13 * M * M, np.minimum(0.25 / safe, 1.0 / (safe * safe)))


def above_newtonian(shape: Shape) -> float:
    """Return the known one-sided relative error of a body's Newtonian drag: how far the truth lies above.

    Notes
    -----
    A cone of 60-70 degrees half angle has a detached shock, a nearly sonic face and 5 % more drag than the
    Newtonian value; ramp from 55 degrees (judgement). The whole 5 % for a mesh whose class is blunt-cone.

    Examples
    --------
    >>> from aero.body.shapes import Cone
    >>> above_newtonian(Cone(half_angle=np.radians(65.0), base_radius=1.0))
    0.05
    """
    if not hasattr(shape, "half_angle"):  # a mesh said to be a blunt cone may be any of them
        return ABOVE if shape.body_class == "blunt-cone" else 0.0
    half_angle = float(np.degrees(shape.half_angle))
    return float(np.interp(half_angle, [55.0, 60.0], [0.0, ABOVE]))


def _lee(cosine: Floats) -> Floats:
    return np.minimum(1.0, (cosine / LEE_FULL) ** 2)


@lru_cache(maxsize=512)
def integrals_at(shape: Shape, angle_of_attack: float) -> Integrals:
    """Return the integrals of a body at one angle of attack [rad] from its facets.

    Examples
    --------
    >>> from aero.body.shapes import Sphere
    >>> ball = Sphere(diameter=2.0)
    >>> round(float(integrals_at(ball, 0.0).drag) / ball.frontal_area, 6)
    0.5
    """
    seen = shape.facets(angle_of_attack)
    windward, lee = seen.cosines > 0.0, seen.cosines < 0.0
    c, areas, lifts = seen.cosines, seen.areas, seen.lift_areas
    square, part = np.where(windward, c * c, 0.0), np.where(lee, _lee(c), 0.0)
    return Integrals(
        floats(np.sum(square * c * areas)),
        floats(-np.sum(square * lifts)),
        floats(np.sum(part * c * areas)),
        floats(-np.sum(part * lifts)),
    )


def integrals(shape: Shape, angle_of_attack: ArrayLike) -> Integrals:
    """Return the integrals of a body at angles of attack (...,) [rad].

    Notes
    -----
    One angle: from the facets. Several: flat faces in closed form, other bodies from a table at every half
    degree, cubic between (2e-6 of the frontal area for bodies of revolution, 1e-3 of a face for a mesh with
    large flat faces near the angles where base pressure sets in).
    """
    angles = floats(angle_of_attack)
    if not shape.lifts:
        return integrals_at(shape, 0.0)
    if angles.size and bool((angles == angles.flat[0]).all()):
        return integrals_at(shape, float(angles.flat[0]))
    return _of_slabs(shape, angles) if shape.flat_faced else _of_table(shape, angles)


def _of_slabs(shape: Shape, angles: Floats) -> Integrals:
    normals, areas = shape.slabs()
    cosine, sine = np.cos(angles), np.sin(angles)
    total = [np.zeros_like(angles) for _ in range(4)]
    for normal, area in zip(normals, areas, strict=True):
        towards, along = normal[0] * cosine + normal[2] * sine, normal[0] * sine - normal[2] * cosine
        facing = np.where(towards < 0.0, -1.0, 1.0)  # the face of the pair that meets the flow
        c, lift = towards * facing, along * facing * area
        for i, value in enumerate((c * c * c * area, -c * c * lift, -_lee(c) * c * area, _lee(c) * lift)):
            total[i] = total[i] + value
    return Integrals(*total)


class _AngleRows:
    """The integrals of a body at every half degree of angle of attack, each made when first asked for."""

    def __init__(self, shape: Shape) -> None:
        self.shape = shape
        self.rows = np.full((len(Integrals._fields), angle_count(shape)), np.nan)
        self.made = np.zeros(angle_count(shape), dtype=bool)

    def fill(self, cell: np.ndarray) -> None:
        for index in missing_angles(cell, self.made):
            self.rows[:, index] = integrals_at(self.shape, table_angle(self.shape, index))
            self.made[index] = True


@lru_cache(maxsize=8)
def _table(shape: Shape) -> _AngleRows:
    return _AngleRows(shape)


def _of_table(shape: Shape, angles: Floats) -> Integrals:
    table = _table(shape)
    place, side = place_in_turn(shape, angles)
    unknown = ~np.isfinite(place)
    cell = np.where(unknown, 0.0, place).astype(np.intp)
    table.fill(cell)
    weights = angle_weights(np.where(unknown, np.nan, place - cell))
    rows = [sum(weights[k] * row[cell + k] for k in range(4)) for row in table.rows]
    return Integrals(floats(rows[0]), floats(rows[1] * side), floats(rows[2]), floats(rows[3] * side))
