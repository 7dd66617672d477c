"""Thinning of long series for drawing: few points, the same extremes."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from aero.arrays import ArrayLike, floats

LIMIT = 4000  # points: more than twice the pixels of a figure's width at 200 dpi


def thin(*series: ArrayLike, limit: int = LIMIT) -> NDArray[np.intp]:
    """Return the rows to draw: in each stretch the least and the greatest of every series.

    Parameters
    ----------
    *series : (n,) arrays
        What will be drawn. Each keeps its own extremes in every stretch.
    limit : int
        Most rows to return; no fewer than two for each series and two for the ends.

    Returns
    -------
    (m,) array of int
        Rising row numbers, m <= limit; all rows when n <= limit. First and last row are among them.

    Raises
    ------
    ValueError
        If there is no series, their lengths differ, or `limit` is too small.

    Notes
    -----
    A stretch without any finite number keeps its first row, so that a long gap stays a gap.

    Examples
    --------
    >>> import numpy as np
    >>> y = np.zeros(100_000); y[54_321] = 9.0
    >>> rows = thin(y)
    >>> len(rows) <= 4000, y[rows].max()
    (True, np.float64(9.0))
    """
    values = [floats(one) for one in series]
    if not values or any(one.shape != (values[0].size,) for one in values):
        raise ValueError("thin needs one or more series of one dimension and equal length")
    count = values[0].size
    if limit < 2 * len(values) + 2:
        raise ValueError(f"limit {limit} leaves no room for the extremes of {len(values)} series")
    if count <= limit:
        return np.arange(count)
    stretches = (limit - 2) // (2 * len(values))
    width = -(-count // stretches)
    rows = [np.array([0, count - 1])]
    for one in values:
        rows += [_least(one, width), _least(-one, width)]
    return np.unique(np.concatenate(rows))


def _least(values: NDArray[np.float64], width: int) -> NDArray[np.intp]:
    """Return the row of the least finite value in each stretch of `width` rows."""
    stretches = -(-values.size // width)
    filled = np.full(stretches * width, np.inf)
    filled[: values.size] = np.where(np.isnan(values), np.inf, values)
    place: NDArray[np.intp] = filled.reshape(stretches, width).argmin(axis=1)
    return place + np.arange(stretches, dtype=np.intp) * width


def monotone_runs(values: Sequence[float] | NDArray[np.float64]) -> list[slice]:
    """Return slices in which `values` only rises or only falls; neighbours share their turning row.

    Examples
    --------
    >>> monotone_runs([3.0, 2.0, 2.0, 1.0, 4.0])
    [slice(0, 4, None), slice(3, 5, None)]
    """
    step = np.sign(np.diff(floats(values)))
    moving = np.flatnonzero(step != 0.0)  # NaN counts as moving and so begins a run of its own
    if moving.size == 0:
        return [slice(0, len(step) + 1)] if len(values) else []
    turns = moving[1:][step[moving][1:] != step[moving][:-1]]
    edges = [0, *turns.tolist(), len(step)]
    return [slice(a, b + 1) for a, b in pairwise(edges)]
