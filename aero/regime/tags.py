"""Knudsen numbers and the regime each one falls in."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.errors import InputError
from aero.gas import mean_free_path

REGIMES = ("continuum", "slip", "transitional", "free-molecular")
DEFAULT_BOUNDS = (0.01, 0.1, 10.0)
"""Customary bounds in Knudsen number (common practice; Schaaf & Chambre 1958 discuss others)."""


def check_bounds(bounds: Sequence[float], *, source: str | None = None) -> tuple[float, float, float]:
    """Return three ascending positive bounds, or raise an error that says what is wrong.

    Examples
    --------
    >>> check_bounds([0.01, 0.1, 10])
    (0.01, 0.1, 10.0)
    """
    values = tuple(float(b) for b in bounds)
    shown = ",".join(f"{b:g}" for b in values)
    if len(values) != 3 or not all(np.isfinite(values)) or not 0.0 < values[0] < values[1] < values[2]:
        raise InputError(
            f"'{shown}' are not regime bounds, expected three ascending positive Knudsen numbers",
            source=source,
            remedy="write them as 0.01,0.1,10",
        )
    return values


def knudsen(air: Air, length_m: ArrayLike, free_path: str = "hard-sphere") -> Floats:
    """Return the free-stream Knudsen number, mean free path over length.

    Parameters
    ----------
    air : Air
        State of the air at (...,) points.
    length_m : array, broadcast against the points [m]
    free_path : str
        A key of `aero.gas.FREE_PATHS`.

    Returns
    -------
    (...,) array [1]

    Examples
    --------
    >>> import aero
    >>> air = aero.StandardAtmosphere1976().at(100e3)
    >>> round(float(knudsen(air, 1.0)), 2)
    0.14
    """
    return mean_free_path(air, free_path) / floats(length_m)


def regime_index(kn: ArrayLike, bounds: Sequence[float] = DEFAULT_BOUNDS) -> NDArray[np.int8]:
    """Return the position in `REGIMES` of each Knudsen number, -1 where it is NaN.

    A value on a bound belongs to the more rarefied side.

    Examples
    --------
    >>> regime_index([0.001, 0.01, 10.0]).tolist()
    [0, 1, 3]
    """
    values = floats(kn)
    # Three comparisons beat a binary search on long arrays; NaN compares false and is set apart below.
    index = (values >= bounds[0]).astype(np.int8)
    index += values >= bounds[1]
    index += values >= bounds[2]
    return np.where(np.isnan(values), np.int8(-1), index)


def regime(kn: ArrayLike, bounds: Sequence[float] = DEFAULT_BOUNDS) -> NDArray[np.str_]:
    """Return the name of the regime of each Knudsen number, "" where it is NaN.

    Examples
    --------
    >>> regime([0.001, 0.05, 1.0, 20.0]).tolist()
    ['continuum', 'slip', 'transitional', 'free-molecular']
    """
    return np.array([*REGIMES, ""])[regime_index(kn, check_bounds(bounds))]
