"""Where the regimes of one length lie in altitude, and how a band of the scale is drawn."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from aero.arrays import Floats, floats
from aero.report.names import Table, column, row_count, texts
from aero.report.palette import HATCH, HATCH_COLOUR, HATCHED, REGIME_COLOURS, REGIMES, check_bounds


@dataclass(frozen=True)
class Bound:
    """A bound in Knudsen number, and the altitudes at which the flight met it (low = high for one) [m]."""

    knudsen: float
    low: float
    high: float

    @property
    def altitude(self) -> float:
        """Middle of the altitudes at which the flight met it [m]."""
        return 0.5 * (self.low + self.high)


@dataclass(frozen=True)
class Band:
    """A regime between two altitudes [m]."""

    regime: str
    bottom: float
    top: float


def altitude_bounds(
    points: Table, crossings: Table | None, bounds: Sequence[float], length_name: str
) -> list[Bound]:
    """Return the altitude of each bound of one length.

    Parameters
    ----------
    points : table with `altitude_m` and `knudsen.LENGTH`
    crossings : table, or None
        Used where it has the bound; a bound it lacks is interpolated in the points.
    bounds : three floats
        Knudsen numbers.
    length_name : str
        The length.

    Returns
    -------
    list of Bound
        One a bound; minus or plus infinity where the whole flight lies above or below it, NaN without
        any Knudsen number.
    """
    altitude, knudsen = column(points, "altitude_m"), column(points, f"knudsen.{length_name}")
    good = np.isfinite(altitude) & np.isfinite(knudsen) & (knudsen > 0.0)
    order = np.argsort(altitude[good], kind="stable")
    # Where place and date change the air, several Knudsen numbers belong to one altitude; the running
    # maximum makes the curve single-valued.
    heights, numbers = altitude[good][order], np.maximum.accumulate(knudsen[good][order])
    found = []
    for bound in check_bounds(bounds):
        met = _met(crossings, bound, length_name)
        if met.size:
            found.append(Bound(bound, float(met.min()), float(met.max())))
        else:
            middle = _interpolated(heights, numbers, bound)
            found.append(Bound(bound, middle, middle))
    return found


def _met(crossings: Table | None, bound: float, length_name: str) -> Floats:
    if crossings is None or row_count(crossings) == 0:
        return np.empty(0)
    mine = np.array(texts(crossings, "length")) == length_name
    mine &= np.isclose(column(crossings, "bound"), bound, rtol=1e-9)
    met: Floats = column(crossings, "altitude_m")[mine]
    return floats(met[np.isfinite(met)])


def _interpolated(heights: Floats, numbers: Floats, bound: float) -> float:
    if heights.size == 0:
        return float("nan")
    if numbers[0] >= bound:
        return -np.inf
    if numbers[-1] < bound:
        return np.inf
    return float(np.interp(np.log(bound), np.log(numbers), heights))


def bands(edges: Sequence[Bound], bottom: float, top: float) -> list[Band]:
    """Return the regimes from `bottom` to `top` [m], densest first; none when the bounds are not known.

    Examples
    --------
    >>> edges = [Bound(0.01, -np.inf, -np.inf), Bound(0.1, 99e3, 99e3), Bound(10.0, np.inf, np.inf)]
    >>> [(band.regime, band.top) for band in bands(edges, 80e3, 120e3)]
    [('slip', 99000.0), ('transitional', 120000.0)]
    """
    heights = [edge.altitude for edge in edges]
    if any(np.isnan(height) for height in heights):
        return []
    cuts = np.clip([-np.inf, *heights, np.inf], bottom, top)
    return [
        Band(regime, float(low), float(high))
        for regime, low, high in zip(REGIMES, cuts[:-1], cuts[1:], strict=True)
        if high > low
    ]


def fill(regime: str) -> dict[str, Any]:
    """Return the keyword arguments that fill a patch as this regime: colour, and hatch where it has one."""
    style: dict[str, Any] = {"facecolor": REGIME_COLOURS[regime], "linewidth": 0.0}
    if regime == HATCHED:
        style |= {"hatch": HATCH, "edgecolor": HATCH_COLOUR}
    return style
