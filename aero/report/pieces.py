"""Stretches of one regime along a flight: found in the tables, and drawn as one strip."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import Rectangle

from aero.arrays import Floats
from aero.report import palette
from aero.report.bands import fill
from aero.report.names import Table, column, has_numbers, row_count, texts
from aero.report.scales import time_unit

_FINEST = 0.005  # in: one pixel of a PNG; no piece is drawn narrower where many crowd
NO_TIME = "no time in the trajectory: points drawn one by one"


@dataclass(frozen=True)
class Piece:
    """A stretch of one regime along the axis of a strip; the share is NaN where there is none."""

    regime: str
    start: float
    end: float
    share: float


@dataclass(frozen=True)
class Along:
    """What a strip runs along: the place of every point on it, its label and its unit."""

    places: Floats
    label: str
    timed: bool
    factor: float


def run_along(points: Table) -> Along:
    """Return what strips run along: time in the unit people would use, else the number of the point."""
    if has_numbers(points, "time_s"):
        time = column(points, "time_s")
        unit, seconds = time_unit(float(np.nanmax(time) - np.nanmin(time)))
        return Along(time / seconds, f"time [{unit}]", True, 1.0 / seconds)
    count = row_count(points)
    return Along(np.arange(1.0, count + 1.0), "number of the point [-]", False, 1.0)


def pieces_of(points: Table, segments: Table | None, name: str, along: Along) -> list[Piece]:
    """Return the pieces of one strip: segments where there are times, else runs of equal tags."""
    if along.timed and segments is not None and row_count(segments):
        mine = np.flatnonzero(np.array(texts(segments, "length")) == name)
        regimes, shares = texts(segments, "regime"), column(segments, "heat_load_share")
        start, end = column(segments, "start_s") * along.factor, column(segments, "end_s") * along.factor
        return [
            Piece(regimes[k], float(start[k]), float(end[k]), float(shares[k]))
            for k in mine
            if regimes[k] in palette.REGIME_COLOURS
        ]
    if f"regime.{name}" not in points:
        return []
    return _runs(np.asarray(points[f"regime.{name}"], dtype=object), along)


def _runs(tags: np.ndarray, along: Along) -> list[Piece]:
    """Cut half-way between points whose tags differ; a point without a tag leaves a hole."""
    if tags.size == 0:
        return []
    starts = np.concatenate([[0], np.flatnonzero(tags[1:] != tags[:-1]) + 1])
    ends = np.concatenate([starts[1:], [tags.size]])
    half = 0.0 if along.timed else 0.5
    edges = np.concatenate(
        [[along.places[0] - half], 0.5 * (along.places[1:] + along.places[:-1]), [along.places[-1] + half]]
    )
    return [
        Piece(str(tags[a]), float(edges[a]), float(edges[b]), float("nan"))
        for a, b in zip(starts, ends, strict=True)
        if tags[a] in palette.REGIME_COLOURS
    ]


def limits_along(along: Along) -> tuple[float, float]:
    """Return the ends of the axis that strips run along."""
    good = along.places[np.isfinite(along.places)]
    low, high = (float(good.min()), float(good.max())) if good.size else (0.0, 1.0)
    half = 0.0 if along.timed and high > low else 0.5
    return low - half, high + half


def draw_pieces(axes: Axes, pieces: Sequence[Piece], row: float, half: float) -> None:
    """Draw one strip centred on `row`."""
    left, right = axes.get_xlim()
    figure = axes.get_figure(root=True)
    per_unit = float(axes.bbox.width / figure.dpi / (right - left))  # type: ignore[union-attr]
    for piece in legible(pieces, _FINEST / per_unit):
        patch = Rectangle(
            (piece.start, row - half),
            piece.end - piece.start,
            2 * half,
            gid=f"piece-{piece.regime}",
            **fill(piece.regime),
        )
        axes.add_patch(patch)


def legible(pieces: Sequence[Piece], finest: float) -> list[Piece]:
    """Join neighbours narrower than `finest` into pieces as wide, of the regime that lasts longest in each.

    Examples
    --------
    >>> flown = [(0.0, 9.0, "slip"), (9.0, 9.2, "continuum"), (9.2, 9.5, "slip")]
    >>> many = [Piece(regime, start, end, 0.1) for start, end, regime in flown]
    >>> [(piece.regime, piece.end) for piece in legible(many, 0.5)]
    [('slip', 9.0), ('slip', 9.5)]
    """
    made: list[Piece] = []
    crowd: list[Piece] = []
    for piece in pieces:
        if piece.end - piece.start >= finest:
            made += [*_joined(crowd), piece]
            crowd = []
        else:
            crowd.append(piece)
            if piece.end - crowd[0].start >= finest:
                made += _joined(crowd)
                crowd = []
    return made + _joined(crowd)


def _joined(crowd: Sequence[Piece]) -> list[Piece]:
    if len(crowd) < 2:
        return list(crowd)
    lasts: dict[str, float] = {}
    for piece in crowd:
        lasts[piece.regime] = lasts.get(piece.regime, 0.0) + piece.end - piece.start
    longest = max(lasts, key=lambda regime: lasts[regime])
    return [Piece(longest, crowd[0].start, crowd[-1].end, float("nan"))]


def percent(share: float) -> str:
    """Return a share in per cent, whole from 10 up, with one decimal below, never 0 for a little.

    Less than nothing has a minus sign; so little less that it would read -0.0 is 0.

    Examples
    --------
    >>> percent(0.923), percent(0.0312), percent(0.0002), percent(0.0)
    ('92', '3.1', '<0.1', '0')
    >>> percent(-0.0002), percent(-0.0312), percent(-0.923)
    ('0', '−3.1', '−92')
    """
    value = 100.0 * share
    size = abs(value)
    if size < 0.05:
        return "<0.1" if value > 0.0 else "0"
    return ("\N{MINUS SIGN}" if value < 0.0 else "") + (f"{size:.0f}" if size >= 9.95 else f"{size:.1f}")
