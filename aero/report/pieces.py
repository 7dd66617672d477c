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
from aero.report.style import SMALL, text_width

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


def draw_pieces(axes: Axes, pieces: Sequence[Piece], row: float, half: float) -> None:
    """Draw one strip centred on `row`, and in each piece wide enough its regime and share."""
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
        text = piece_text(piece, (min(piece.end, right) - max(piece.start, left)) * per_unit - 0.06)
        if text:
            axes.text(
                0.5 * (piece.start + piece.end),
                row,
                text,
                color=palette.REGIME_TEXT[piece.regime],
                size=SMALL,
                ha="center",
                va="center_baseline",
                gid="share",
            )


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


def piece_text(piece: Piece, width: float) -> str:
    """Return the longest of regime with share, share, regime that fits `width` inches; or nothing."""
    share = f"{percent(piece.share)} %" if np.isfinite(piece.share) else ""
    for text in (f"{piece.regime} {share}".strip(), share or piece.regime):
        if text and text_width(text, SMALL) <= width:
            return text
    return ""


def percent(share: float) -> str:
    """Return a share in per cent, whole from 10 up, with one decimal below, never 0 for a little.

    Examples
    --------
    >>> percent(0.923), percent(0.0312), percent(0.0002), percent(0.0)
    ('92', '3.1', '<0.1', '0')
    """
    value = 100.0 * share
    if 0.0 < value < 0.05:
        return "<0.1"
    return f"{value:.0f}" if value >= 9.95 or value == 0.0 else f"{value:.1f}"
