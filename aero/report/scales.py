"""Axes people can read aloud: steps of 1, 2 and 5, units in brackets, plain numbers on decades."""

from __future__ import annotations

import math

import numpy as np
from matplotlib.axes import Axes

from aero.arrays import ArrayLike, Floats, floats
from aero.report.numbers import format_number, plain_powers


def span(values: ArrayLike, *, least: float, pad: float = 0.04) -> tuple[float, float]:
    """Return limits around the finite values, never narrower than `least`.

    Examples
    --------
    >>> span([400.0, 400.0], least=10.0)
    (395.0, 405.0)
    """
    good = floats(values)
    good = good[np.isfinite(good)]
    low, high = (float(good.min()), float(good.max())) if good.size else (0.0, 0.0)
    margin = max(pad * (high - low), 0.5 * (least - (high - low)))
    return low - margin, high + margin


def round_step(width: float, most: int) -> float:
    """Return the least of 1, 2, 5 times a power of ten that cuts `width` into at most `most` parts.

    Examples
    --------
    >>> round_step(110.0, 7), round_step(0.37, 5)
    (20.0, 0.1)
    """
    if not width > 0.0:
        return 1.0
    rough = width / most
    power = 10.0 ** math.floor(math.log10(rough))
    return next(m * power for m in (1.0, 2.0, 5.0, 10.0) if m * power >= rough * (1 - 1e-9))


def round_ticks(low: float, high: float, most: int = 7) -> Floats:
    """Return round values inside [low, high].

    Examples
    --------
    >>> round_ticks(17.0, 133.0).tolist()
    [20.0, 40.0, 60.0, 80.0, 100.0, 120.0]
    """
    step = round_step(high - low, most)
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    decimals = max(0, -math.floor(math.log10(step)))
    return np.round(np.arange(first, last + 1) * step, decimals)


def linear_axis(axes: Axes, which: str, limits: tuple[float, float], label: str, most: int = 7) -> None:
    """Set limits, round ticks and label of one axis ("x" or "y")."""
    ticks = round_ticks(*limits, most)
    text = [format_number(tick, trim=True).replace("-", "\N{MINUS SIGN}") for tick in ticks]
    _set(axes, which, limits, ticks, text, label)


def decade_axis(axes: Axes, which: str, limits: tuple[float, float], label: str, most: int = 7) -> None:
    """Set a logarithmic axis with a tick on whole decades, every decade or every few."""
    (axes.set_xscale if which == "x" else axes.set_yscale)("log")
    first, last = math.ceil(math.log10(limits[0]) - 1e-9), math.floor(math.log10(limits[1]) + 1e-9)
    every = max(1, -(-(last - first) // most))
    first += -first % every
    ticks = [10.0**power for power in range(first, last + 1, every)]
    if len(ticks) < 2:  # less than two decades: name the ends of what is shown
        ticks = [m * 10.0**p for p in range(first - 1, last + 2) for m in (1.0, 2.0, 5.0)]
        ticks = [tick for tick in ticks if limits[0] <= tick <= limits[1]]
    _set(axes, which, limits, np.array(ticks), plain_powers(ticks), label)


def _set(
    axes: Axes, which: str, limits: tuple[float, float], ticks: Floats, text: list[str], label: str
) -> None:
    if which == "x":
        axes.set_xlim(*limits)
        axes.set_xticks(ticks, text)
        axes.set_xticks([], minor=True)
        axes.set_xlabel(label)
    else:
        axes.set_ylim(*limits)
        axes.set_yticks(ticks, text)
        axes.set_yticks([], minor=True)
        axes.set_ylabel(label)


def log_limits(values: ArrayLike, *, least_decades: float = 1.0) -> tuple[float, float]:
    """Return limits around the positive values of a logarithmic axis.

    Examples
    --------
    >>> low, high = log_limits([1e-3, 1e2])
    >>> low < 1e-3 and high > 1e2
    True
    """
    good = floats(values)
    good = good[np.isfinite(good) & (good > 0.0)]
    powers = np.log10(good) if good.size else np.zeros(1)
    low, high = span(powers, least=least_decades, pad=0.03)
    return float(10.0**low), float(10.0**high)


def time_unit(span_s: float) -> tuple[str, float]:
    """Return the unit people would use for a flight of this length, and seconds in it.

    Examples
    --------
    >>> time_unit(900.0), time_unit(2 * 3600.0), time_unit(10 * 86400.0)
    (('s', 1.0), ('min', 60.0), ('d', 86400.0))
    """
    if span_s <= 1800.0:
        return "s", 1.0
    if span_s <= 3.0 * 3600.0:
        return "min", 60.0
    if span_s <= 3.0 * 86400.0:
        return "h", 3600.0
    return "d", 86400.0
