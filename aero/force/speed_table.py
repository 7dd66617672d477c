"""Free-molecular coefficients of a body, tabulated once against the logarithm of the speed ratio.

The parts P, T, W of `aero.force.elements` depend on the body, the speed ratio and the angle of attack only;
gas, wall and accommodation enter afterwards. So one table a body serves every species of every point:
uniform in ln S (a factor between species is a shift), piecewise cubic through values and slopes. Powers of S
are smooth in ln S, so both asymptotes are held as well as the middle.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from aero.arrays import Floats, floats
from aero.body.shapes import Shape
from aero.force.elements import SQRT_PI, Momentum, cylinder, incident, sphere

LOW, HIGH = -7.0, 7.0  # ln S: speed ratios 0.0009 to 1097
STEPS_A_UNIT = 32  # 5e-9 of a drag coefficient
CELLS = int(HIGH - LOW) * STEPS_A_UNIT
ANGLE_STEP = np.pi / 360.0  # half a degree
ANGLES = 364  # from one step below 0 to two beyond pi: a body that z -> -z leaves as it is
WHOLE_TURN = 724  # from one step below -pi to two beyond pi: any other
COSINES = 2000  # cells of cosine that the facets of a large mesh are gathered in
EXCESS = 4
ROWS = 5
"""Rows of a table: drag incident, drag emitted, lift incident, lift emitted, energy excess."""

_MARGIN = 3
_NODES = np.exp(LOW + (np.arange(CELLS + 1 + 2 * _MARGIN) - _MARGIN) / STEPS_A_UNIT)
_CLOSED = {"sphere": sphere, "cylinder": cylinder}


def parts(shape: Shape, angle_of_attack: float, speed_ratio: Floats) -> tuple[Momentum, Momentum]:
    """Return drag and lift parts times area [m2] of a body at one angle of attack [rad].

    Parameters
    ----------
    shape : Shape
    angle_of_attack : float [rad]
    speed_ratio : (k,) array

    Notes
    -----
    Closed forms of sphere and cylinder, otherwise the sum over the shape's facets. What a facet receives
    depends on its cosine alone, so the facets of a large mesh are first gathered on a grid of cosines
    (`gathered`).

    Examples
    --------
    >>> from aero.body.shapes import Sphere
    >>> drag, lift = parts(Sphere(diameter=2.0), 0.0, np.array([1000.0]))
    >>> round(float(drag.normal[0] + drag.tangential[0]) / np.pi, 4)
    2.0
    """
    closed = _CLOSED.get(shape.kind)
    if closed is not None:
        area = shape.frontal_area
        drag = closed(speed_ratio)
        none = np.zeros_like(speed_ratio)
        scaled = Momentum(area * drag.normal, area * drag.tangential, area * drag.emitted, drag.energy_excess)
        return scaled, Momentum(none, none, none, drag.energy_excess)
    seen = shape.facets(angle_of_attack)
    c, areas, lifts = seen.cosines, seen.areas, seen.lift_areas
    weights = np.stack([areas, areas * c, areas * (1.0 - c * c), lifts, lifts * c])
    if c.size > 2 * COSINES:
        c, weights = gathered(c, weights)
    whole, towards, along, up, shear_up = weights
    momentum, number, drift = incident(np.multiply.outer(speed_ratio, c))

    def total(values: Floats, weights: Floats) -> Floats:  # einsum: no threads, the same sum everywhere
        return floats(np.einsum("sk,k->s", values, weights))

    square, shear = speed_ratio * speed_ratio, SQRT_PI * speed_ratio
    excess = 2.0 + 0.5 * total(drift, whole) / total(number, whole)
    drag = Momentum(
        total(momentum, towards) / square,
        total(number, along) / shear,
        total(number, towards) / (2.0 * square),
        excess,
    )
    lift = Momentum(
        -total(momentum, up) / square,
        total(number, shear_up) / shear,
        -total(number, up) / (2.0 * square),
        excess,
    )
    return drag, lift


def gathered(cosines: Floats, weights: Floats) -> tuple[Floats, Floats]:
    """Return facets gathered on a uniform grid of cosines: its nodes (k,) and their weights (..., k).

    Parameters
    ----------
    cosines : (n,) array
    weights : (..., n) array
        Of a sum over facets of weight times a function of the cosine.

    Notes
    -----
    Each facet's weight goes to its four nearest nodes by Lagrange's weights, so that the sum over the nodes
    is that of the function's cubic interpolant: exact for cubics, and 1e-7 of a drag coefficient for speed
    ratios up to 100, where the flux bends within ten cells of grazing incidence.

    Examples
    --------
    >>> nodes, weights = gathered(np.array([0.1234, -1.0]), np.array([2.0, 1.0]))
    >>> round(float((weights * nodes**3).sum()), 12) == round(2.0 * 0.1234**3 - 1.0, 12)
    True
    """
    place = (np.clip(cosines, -1.0, 1.0) + 1.0) * (COSINES / 2.0)
    cell = np.clip(place.astype(np.intp), 1, COSINES - 2)
    shares = angle_weights(place - cell)
    rows = weights.reshape(-1, weights.shape[-1])
    found = np.zeros((len(rows), COSINES + 1))
    for offset, share in enumerate(shares):
        for row, weight in zip(found, rows, strict=True):
            row += np.bincount(cell + (offset - 1), weights=share * weight, minlength=COSINES + 1)
    nodes = np.linspace(-1.0, 1.0, COSINES + 1)
    used = found.any(axis=0)
    return nodes[used], found[:, used].reshape(*weights.shape[:-1], -1)


def combine(drag: Momentum, lift: Momentum, diffuse_fraction: float) -> list[Floats]:
    """Return the rows of a table: the parts joined for a diffuse fraction."""
    rows = []
    for part in (drag, lift):
        rows.append((2.0 - diffuse_fraction) * part.normal + diffuse_fraction * part.tangential)
        rows.append(diffuse_fraction * part.emitted)
    return [*rows, drag.energy_excess]


def cubics(values: Floats) -> Floats:
    """Return piecewise cubics through values on the table's nodes: (..., nodes) -> (..., 4, CELLS).

    Notes
    -----
    Slopes by sixth-order central differences. Coefficients rise in the fraction of a cell.
    """
    size = values.shape[-1]
    weights = (3.0 / 4.0, -3.0 / 20.0, 1.0 / 60.0)
    slope: Floats = sum(  # type: ignore[assignment]
        weight * (values[..., 3 + k : size - 3 + k] - values[..., 3 - k : size - 3 - k])
        for k, weight in enumerate(weights, start=1)
    )
    value = values[..., _MARGIN : size - _MARGIN]
    step = value[..., 1:] - value[..., :-1]
    left, right = slope[..., :-1], slope[..., 1:]
    return np.stack(
        [value[..., :-1], left, 3.0 * step - 2.0 * left - right, left + right - 2.0 * step], axis=-2
    )


@lru_cache(maxsize=128)
def table(shape: Shape, diffuse_fraction: float, angle_of_attack: float) -> Floats:
    """Return the cubics of a body at one angle of attack, shape (ROWS, 4, CELLS), coefficients times area."""
    drag, lift = parts(shape, angle_of_attack, _NODES)
    coefficients = cubics(np.stack(combine(drag, lift, diffuse_fraction)))
    coefficients.flags.writeable = False
    return coefficients


def angle_count(shape: Shape) -> int:
    """Return how many angles of attack a body's table has."""
    return ANGLES if shape.mirrored else WHOLE_TURN


def table_angle(shape: Shape, index: int) -> float:
    """Return the angle of attack [rad] of an entry of a body's table."""
    return (index - 1) * ANGLE_STEP - (0.0 if shape.mirrored else np.pi)


def place_in_turn(shape: Shape, angles: Floats) -> tuple[Floats, Floats | float]:
    """Return where angles of attack [rad] lie in a body's table, in steps, and the sign of lift there.

    Examples
    --------
    >>> from aero.body.shapes import Cone
    >>> place, side = place_in_turn(Cone(half_angle=0.5, base_radius=1.0), np.array([-np.pi / 2]))
    >>> float(place[0]), float(side[0])
    (180.0, -1.0)
    """
    here = np.remainder(angles + np.pi, 2.0 * np.pi) - np.pi
    if shape.mirrored:
        return np.abs(here) / ANGLE_STEP, np.where(here < 0.0, -1.0, 1.0)
    return (here + np.pi) / ANGLE_STEP, 1.0


def missing_angles(cell: np.ndarray, made: np.ndarray) -> list[int]:
    """Return the entries that cells of angle of attack need, one before to two after, and that are not made."""
    wanted = np.zeros_like(made)
    for offset in range(4):
        wanted[np.unique(cell) + offset] = True
    return [int(index) for index in np.flatnonzero(wanted & ~made)]


class AngleTable:
    """The cubics of a body at every half degree of angle of attack, each made when first asked for."""

    def __init__(self, shape: Shape, diffuse_fraction: float) -> None:
        self.shape = shape
        self.diffuse_fraction = diffuse_fraction
        self.rows = np.full((ROWS, angle_count(shape), 4, CELLS), np.nan)
        self.made = np.zeros(angle_count(shape), dtype=bool)

    def fill(self, cell: np.ndarray) -> None:
        """Make the columns that cells of angle of attack need: one before to two after."""
        for index in missing_angles(cell, self.made):
            drag, lift = parts(self.shape, table_angle(self.shape, index), _NODES)
            self.rows[:, index] = cubics(np.stack(combine(drag, lift, self.diffuse_fraction)))
            self.made[index] = True


@lru_cache(maxsize=2)
def angle_table(shape: Shape, diffuse_fraction: float) -> AngleTable:
    """Return the table over angle of attack of a body, the same one on every call."""
    return AngleTable(shape, diffuse_fraction)


def evaluate(coefficients: Floats, cell: np.ndarray, fraction: Floats) -> Floats:
    """Return cubics (4, CELLS) at a cell and the fraction of it."""
    result: Floats = coefficients[3].take(cell, mode="clip")
    for order in (2, 1, 0):
        result *= fraction
        result += coefficients[order].take(cell, mode="clip")
    return result


def evaluate_angles(
    rows: Floats, cell: np.ndarray, fraction: Floats, angle_cell: np.ndarray, weights: Floats
) -> Floats:
    """Return cubics (ANGLES, 4, CELLS) at cells of ln S and of angle, by four-point weights in angle."""
    flat = rows.reshape(-1)
    result = np.zeros(np.broadcast_shapes(cell.shape, angle_cell.shape))
    for offset in range(4):
        start = (angle_cell + offset) * (4 * CELLS) + cell
        value = flat.take(start + 3 * CELLS, mode="clip")
        for order in (2, 1, 0):
            value *= fraction
            value += flat.take(start + order * CELLS, mode="clip")
        result += weights[offset] * value
    return result


def angle_weights(fraction: Floats) -> Floats:
    """Return the four-point Lagrange weights (4, ...) of a fraction of a cell."""
    t = fraction
    before, after, beyond = t + 1.0, t - 1.0, t - 2.0
    weights = [
        -t * after * beyond / 6.0,
        before * after * beyond / 2.0,
        -before * t * beyond / 2.0,
        before * t * after / 6.0,
    ]
    return floats(np.stack(weights))
