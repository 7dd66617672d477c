"""Bridging functions: the share F of the free-molecular limit, with every derivative the band needs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.special import erf

from aero.arrays import ArrayLike, Floats, floats

_SQRT_PI = float(np.sqrt(np.pi))
_LN10 = float(np.log(10.0))
PUBLISHED_WIDTH = 8.0 / np.pi
"""Width at which the sine-squared bridge spans its published four decades [Wilmoth1999]."""


@dataclass(frozen=True, eq=False)
class Fraction:
    """The bridge's value at each point, with its derivatives.

    Attributes
    ----------
    value : (...,) array
        F, from 0 (continuum) to 1 (free-molecular).
    by_centre : (...,) array [1/decade]
        dF/d log10(centre); never positive.
    by_width : (...,) array [1/decade]
        dF/d width.
    """

    value: Floats
    by_centre: Floats
    by_width: Floats

    @property
    def slope(self) -> Floats:
        """dF/d ln x, never negative: the centre moved one way is the number moved the other."""
        return self.by_centre * (-1.0 / _LN10)


@dataclass(frozen=True)
class BridgeFunction:
    """A bridging function; call it with the similarity number, centre and width.

    Attributes
    ----------
    function : callable
        (decades from the centre, width) -> Fraction.
    centre, width : float
        Parameters it was published with, for the free-stream Knudsen number.
    formula : str
        For people.
    source : str
        Where it is published.
    """

    function: Callable[[Floats, float], Fraction]
    centre: float
    width: float
    formula: str
    source: str

    def __call__(self, number: ArrayLike, centre: float, width: float) -> Fraction:
        """Return the fraction and its derivatives.

        Parameters
        ----------
        number : (...,) array_like
            Similarity number, growing towards free-molecular flow; 0 is the continuum itself, infinity no
            gas at all.
        centre : float
            Number at which F = 1/2.
        width : float [decades]
            1 over the slope dF/d log10 x at the centre, for every function.

        Raises
        ------
        ValueError
            If centre or width is not positive.
        """
        if not (centre > 0.0 and width > 0.0):
            raise ValueError(f"centre and width of a bridge must be positive, not {centre} and {width}")
        with np.errstate(divide="ignore"):
            decades = np.log10(floats(number)) - np.log10(centre)
        return self.function(decades, width)


def _erf_log(decades: Floats, width: float) -> Fraction:
    u = decades * (_SQRT_PI / width)
    value = 0.5 + 0.5 * erf(u)
    by_centre = np.exp(-u * u) * (-1.0 / width)
    finite = np.where(np.isinf(decades), 0.0, decades)
    return Fraction(value, by_centre, by_centre * finite * (1.0 / width))


def _sine_squared(decades: Floats, width: float) -> Fraction:
    # the angle runs from 0 to pi/2 over pi/2 widths, which is four decades for the published 8/pi
    angle = np.clip(0.25 * np.pi + decades / width, 0.0, 0.5 * np.pi)
    sine = np.sin(angle)
    by_centre = np.sin(2.0 * angle) * (-1.0 / width)  # 0 at and beyond both ends
    by_centre = np.where((angle > 0.0) & (angle < 0.5 * np.pi), by_centre, by_centre * 0.0)
    finite = np.where(np.isinf(decades), 0.0, decades)
    return Fraction(sine * sine, by_centre, by_centre * finite * (1.0 / width))


BRIDGES: dict[str, BridgeFunction] = {
    "erf-log": BridgeFunction(
        _erf_log,
        0.1,
        2.55,
        "F = (1 + erf(sqrt(pi)/w log10(x/x_m)))/2",
        "Wilmoth, Blanchard & Moss 1998",
    ),
    "sine-squared": BridgeFunction(
        _sine_squared,
        0.1,
        PUBLISHED_WIDTH,
        "F = sin^2(pi/4 + log10(x/x_m)/w), held at 0 and 1 outside",
        "Blanchard; Wilmoth, Mitcheltree & Moss 1999, J. Spacecraft and Rockets 36(3)",
    ),
}
"""Bridging functions by name; the first is the default."""


def blend(continuum: ArrayLike, free_molecular: ArrayLike, fraction: ArrayLike) -> Floats:
    """Return C = C_c + F (C_fm - C_c).

    At F = 0 and F = 1 the value is exactly the limit, even where the other limit has no answer there.

    Examples
    --------
    >>> blend(1.0, 2.0, [0.0, 0.25, 1.0]).tolist()
    [1.0, 1.25, 2.0]
    """
    c, f, share = floats(continuum), floats(free_molecular), floats(fraction)
    mixed = c + share * (f - c)
    return np.where(share == 1.0, f, np.where(share == 0.0, c, mixed))
