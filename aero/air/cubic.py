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
    slopes = np.empty_like(y)
    slopes[1:-1] = _inner_slope(step[:-1], step[1:], chord[:-1], chord[1:])
    slopes[:1] = _end_slope(step[:1], step[1:2], chord[:1], chord[1:2])
    slopes[-1:] = _end_slope(step[-1:], step[-2:-1], chord[-1:], chord[-2:-1])
    return slopes


def stencil_slopes(x: Floats, y: Floats) -> Floats:
    """Return `monotone_slopes` of many runs of three points at once.

    Parameters
    ----------
    x, y : (..., 3) array

    Returns
    -------
    (..., 3) array
        The middle one is the slope inside a longer run; the outer ones hold where a run ends there.
    """
    step = np.diff(x, axis=-1)
    chord = np.diff(y, axis=-1) / step
    near, far, before, after = step[..., 0], step[..., 1], chord[..., 0], chord[..., 1]
    first, last = _end_slope(near, far, before, after), _end_slope(far, near, after, before)
    return np.stack([first, _inner_slope(near, far, before, after), last], axis=-1)


def _inner_slope(step_before: Floats, step_after: Floats, before: Floats, after: Floats) -> Floats:
    product = before * after
    w1 = 2.0 * step_after + step_before
    w2 = step_after + 2.0 * step_before
    # (w1 + w2)/(w1/before + w2/after), written without a division by a chord that may be 0
    weighted = w1 * after + w2 * before
    same = product > 0.0
    return np.divide((w1 + w2) * product, weighted, out=np.zeros_like(product), where=same)


def _end_slope(near: Floats, far: Floats, chord_near: Floats, chord_far: Floats) -> Floats:
    slope = ((2.0 * near + far) * chord_near - near * chord_far) / (near + far)
    slope = np.where(slope * chord_near <= 0.0, 0.0, slope)
    steep = (chord_near * chord_far <= 0.0) & (np.abs(slope) > 3.0 * np.abs(chord_near))
    return np.where(steep, 3.0 * chord_near, slope)
