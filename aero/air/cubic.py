"""Piecewise cubics: made cell by cell from values and slopes, and looked up by cell."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats


def hermite(
    left: Floats, right: Floats, slope_left: Floats, slope_right: Floats, width: Floats | float
) -> Floats:
    """Return the coefficients of the cubic that has these end values and end slopes in each cell.

    Parameters
    ----------
    left, right : (...,) array
        Values at the two ends of each cell.
    slope_left, slope_right : (...,) array
        One-sided slopes at the two ends, so that a kink between two cells stays a kink.
    width : (...,) array or float
        Width of each cell.

    Returns
    -------
    (4, ...) array
        Coefficients of 1, t, t^2, t^3, with t in [0, 1] across the cell.

    Notes
    -----
    For a smooth function the error is at most width^4/384 times its fourth derivative.

    Examples
    --------
    >>> import numpy as np
    >>> c = hermite(np.array([0.0]), np.array([8.0]), np.array([0.0]), np.array([12.0]), 2.0)  # x^3
    >>> evaluate(c, np.array([0]), np.array([0.5]))
    array([1.])
    """
    rise = right - left
    a, b = slope_left * width, slope_right * width
    return np.stack([left, a, 3.0 * rise - 2.0 * a - b, a + b - 2.0 * rise])


def evaluate(coefficients: Floats, cell: NDArray[np.intp], t: Floats) -> Floats:
    """Return the cubics at fraction `t` of the cells `cell`; coefficients as (4, cells)."""
    c0, c1, c2, c3 = coefficients
    out: Floats = c3.take(cell)
    out *= t
    out += c2.take(cell)
    out *= t
    out += c1.take(cell)
    out *= t
    out += c0.take(cell)
    return out


def monotone_slopes(x: Floats, y: Floats) -> Floats:
    """Return slopes at the points that keep the cubic between them monotone where the data are.

    Parameters
    ----------
    x : (n,) array
        Increasing, n >= 2.
    y : (n,) array
        Values.

    Returns
    -------
    (n,) array
        Inside, the weighted harmonic mean of the neighbouring chords, 0 where they differ in sign; at the
        ends, the three-point slope limited to keep the shape.

    References
    ----------
    [FritschCarlson1980], [FritschButland1984].

    Examples
    --------
    >>> import numpy as np
    >>> monotone_slopes(np.array([0.0, 1.0, 2.0]), np.array([0.0, 1.0, 1.0]))
    array([1.5, 0. , 0. ])
    """
    step = np.diff(x)
    chord = np.diff(y) / step
    if chord.size == 1:
        return np.array([chord[0], chord[0]])
    slopes = np.zeros_like(y)
    before, after = chord[:-1], chord[1:]
    w1 = 2.0 * step[1:] + step[:-1]
    w2 = step[1:] + 2.0 * step[:-1]
    same = before * after > 0.0
    slopes[1:-1][same] = (w1 + w2)[same] / (w1[same] / before[same] + w2[same] / after[same])
    slopes[0] = _end_slope(step[0], step[1], chord[0], chord[1])
    slopes[-1] = _end_slope(step[-1], step[-2], chord[-1], chord[-2])
    return slopes


def _end_slope(near: float, far: float, chord_near: float, chord_far: float) -> float:
    slope = ((2.0 * near + far) * chord_near - near * chord_far) / (near + far)
    if slope * chord_near <= 0.0:
        return 0.0
    if chord_near * chord_far <= 0.0 and abs(slope) > 3.0 * abs(chord_near):
        return 3.0 * chord_near
    return slope
