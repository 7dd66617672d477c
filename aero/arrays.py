"""Array types and the one convention on shapes: points first, species last."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats: TypeAlias = NDArray[np.float64]
Times: TypeAlias = NDArray[np.datetime64]
__all__ = ["ArrayLike", "Floats", "Times", "floats", "readonly"]


def floats(values: ArrayLike) -> Floats:
    """Return `values` as a float64 array, without a copy where it already is one."""
    return np.asarray(values, dtype=np.float64)


def readonly(values: ArrayLike) -> Floats:
    """Return a read-only view of `values` as float64."""
    view = np.asarray(values, dtype=np.float64).view()
    view.flags.writeable = False
    return view
