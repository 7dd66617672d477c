"""Figure (b): one strip a length along time, coloured by regime, with its share of the heat load."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.bands import fill
from aero.report.names import (
    Table,
    column,
    has_numbers,
    length_names,
    length_sizes,
    row_count,
    shorten,
    texts,
)
from aero.report.numbers import format_number, format_quantity
from aero.report.scales import linear_axis, round_ticks, time_unit
from aero.report.style import NORMAL, SMALL, text_width

_ROW, _GAP = 0.27, 0.09  # a strip and the space under it [in]
_TOP, _BOTTOM, _RIGHT = 0.82, 0.92, 0.22  # margins [in]
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


@style.styled
def figure_strips(
    points: Table,
    segments: Table | None = None,
    *,
    bounds: Sequence[float],
    lengths: Mapping[str, float] | None = None,
    footer: str = "",
    title: str | None = None,
    size: str = "column",
    ax: Axes | None = None,
) -> Figure:
    """Draw one strip a length, smallest at the top.

    Parameters
    ----------
    points : table
        `time_s`, `altitude_m`, `mean_free_path_m`, and for each length `knudsen.NAME`, `regime.NAME`.
        Without a time the strips run along the number of the point.
    segments : table, optional
        The pieces, with `heat_load_share` to print in them. Without it pieces are runs of equal tags.
    bounds : three floats
        Regime bounds in Knudsen number, for the key.
    lengths : mapping, optional
        Name to length [m], for order and labels; by default free path over Knudsen number.
    footer, title : str
    size : str
        "column" or "slide".
    ax : Axes, optional
        Draw into these instead, without title, key and footer.

    Returns
    -------
    Figure
    """
    sizes = dict(lengths) if lengths is not None else length_sizes(points)
    names = sorted((n for n in length_names(points) if n in sizes), key=lambda n: _rank(sizes[n]))
    along = run_along(points)
    rows = {name: pieces_of(points, segments, name, along) for name in names}
    captions = {name: _caption(name, sizes[name]) for name in names}
    figure, axes = _canvas(size, ax, list(captions.values()))
    _axis(axes, along, len(names))
    for row, name in enumerate(names):
        draw_pieces(axes, rows[name], row, 0.5 * _ROW / (_ROW + _GAP))
    axes.set_yticks(range(len(names)), list(captions.values()))
    altitude_scale(axes, along.places, column(points, "altitude_m"))
    if ax is None:
        shares = any(np.isfinite(piece.share) for pieces in rows.values() for piece in pieces)
        style.headline(figure, title if title is not None else _title(shares, along))
        regime_key(figure, bounds, 0.25)
        style.foot(figure, footer)
    return figure


def _title(shares: bool, along: Along) -> str:
    if not along.timed:
        return f"Regime of each length ({NO_TIME})"
    return "Regime of each length along the flight" + (", with its share of the heat load" if shares else "")


def _rank(size: float) -> float:
    return size if np.isfinite(size) else np.inf


def _caption(name: str, size: float) -> str:
    length = f"  {format_quantity(size, 'm')}" if np.isfinite(size) else ""
    return shorten(name, 24) + length


def _canvas(size: str, ax: Axes | None, captions: Sequence[str]) -> tuple[Figure, Axes]:
    if ax is not None:
        figure = ax.get_figure(root=True)
        if not isinstance(figure, Figure):
            raise ValueError("ax must stand in a figure")
        return figure, ax
    rows = max(len(captions), 1)
    figure = style.new_figure(size, _TOP + _BOTTOM + rows * (_ROW + _GAP))
    width, height = (float(edge) for edge in figure.get_size_inches())
    left = max([0.6, *(text_width(caption, NORMAL) + 0.2 for caption in captions)])
    bottom = _BOTTOM
    if size == "slide":  # strips of a few lengths do not fill a slide: keep them together, under the title
        bottom = max(_BOTTOM, height - _TOP - rows * 2.0 * (_ROW + _GAP))
    return figure, style.place_axes(figure, left, bottom, width - _RIGHT, height - _TOP)


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


def _axis(axes: Axes, along: Along, rows: int) -> None:
    good = along.places[np.isfinite(along.places)]
    low, high = (float(good.min()), float(good.max())) if good.size else (0.0, 1.0)
    half = 0.0 if along.timed else 0.5
    if not high > low:
        half = 0.5
    linear_axis(axes, "x", (low - half, high + half), along.label, most=9)
    axes.set_ylim(max(rows, 1) - 0.5, -0.5)
    style.quiet_axes(axes, keep=("bottom",))
    axes.tick_params(axis="y", length=0)


def draw_pieces(axes: Axes, pieces: Sequence[Piece], row: float, half: float) -> None:
    """Draw one strip centred on `row`, and in each piece wide enough its regime and share."""
    left, right = axes.get_xlim()
    figure = axes.get_figure(root=True)
    per_unit = float(axes.bbox.width / figure.dpi / (right - left))  # type: ignore[union-attr]
    for piece in pieces:
        patch = Rectangle(
            (piece.start, row - half), piece.end - piece.start, 2 * half, gid=f"piece-{piece.regime}", **fill(piece.regime)
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


def altitude_scale(axes: Axes, places: Floats, altitude: Floats) -> None:
    """Write altitudes along the top, where the flight passes round values; crowded ones are left out.

    A flight that passes them more often than can be read, such as an orbit, gets its range in words.
    """
    good = np.isfinite(places) & np.isfinite(altitude)
    x, height = places[good], altitude[good] / 1e3
    if x.size == 0:
        return
    low, high = float(height.min()), float(height.max())
    marks = {float(x[0]): float(height[0]), float(x[-1]): float(height[-1])}
    passes = {}
    for level in reversed(round_ticks(low, high, 8)):
        above = height >= level
        for k in np.flatnonzero(above[1:] != above[:-1]):
            share = (level - height[k]) / (height[k + 1] - height[k])
            passes.setdefault(float(x[k] + (x[k + 1] - x[k]) * share), float(level))
            if len(passes) > 60:
                label = f"altitude [km], {format_number(low, trim=True)} to {format_number(high, trim=True)}"
                _write_altitudes(axes, marks, label)
                return
    _write_altitudes(axes, marks | {at: level for at, level in passes.items() if at not in marks})


def _write_altitudes(axes: Axes, marks: Mapping[float, float], label: str = "altitude [km]") -> None:
    """Write the marks, earlier ones first; one that would touch another is left out."""
    left, right = axes.get_xlim()
    figure = axes.get_figure(root=True)
    wide = float(axes.bbox.width / figure.dpi)  # type: ignore[union-attr]
    taken: list[tuple[float, float]] = []
    kept = []
    for at in marks:
        text = format_number(marks[at], 3, trim=True)
        middle = (at - left) / (right - left) * wide
        half = 0.5 * text_width(text, SMALL) + 0.04
        if all(middle + half < a or middle - half > b for a, b in taken):
            taken.append((middle - half, middle + half))
            kept.append(at)
    kept.sort()
    top = axes.secondary_xaxis("top")
    top.set_xticks(kept, [format_number(marks[at], 3, trim=True) for at in kept], size=SMALL, color=palette.GREY)
    top.set_xlabel(label, size=SMALL, color=palette.GREY, labelpad=2.5)
    top.spines["top"].set_visible(False)
    top.tick_params(length=2.0, pad=1.5)


def regime_key(figure: Figure, bounds: Sequence[float], bottom: float) -> None:
    """Write the key: a swatch, the name and the Knudsen numbers of each regime, in one line."""
    width, height = (float(edge) for edge in figure.get_size_inches())
    phrases = palette.bound_phrases(bounds)
    entries = [(regime, regime, phrases[regime]) for regime in palette.REGIMES]
    widths = [text_width(name, SMALL, "bold") + text_width("  " + phrase, SMALL) + 0.38 for _, name, phrase in entries]
    step = min(1.0, (width - 0.2) / sum(widths))
    left = 0.1
    for (regime, name, phrase), wide in zip(entries, widths, strict=True):
        figure.add_artist(
            Rectangle(
                (left / width, bottom / height),
                0.16 / width,
                0.1 / height,
                transform=figure.transFigure,
                gid=f"key-{regime}",
                **fill(regime),
            )
        )
        figure.text((left + 0.2) / width, (bottom + 0.045) / height, name, size=SMALL, weight="bold", va="center")
        after = left + 0.2 + text_width(name + "  ", SMALL, "bold")
        figure.text(after / width, (bottom + 0.045) / height, phrase, size=SMALL, color=palette.GREY, va="center")
        left += wide * step


