"""Figure (b): one strip a length along time, coloured by regime, with its share of the heat load."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from aero.arrays import Floats, floats
from aero.report import palette, style
from aero.report.bands import fill
from aero.report.names import (
    Table,
    column,
    length_names,
    length_sizes,
    shorten_all,
)
from aero.report.numbers import format_number, format_quantity
from aero.report.pieces import NO_TIME, Along, draw_pieces, limits_along, pieces_of, run_along
from aero.report.scales import linear_axis, round_ticks
from aero.report.shares import LANE, Layout, draw_notes, lay_out
from aero.report.style import NORMAL, SMALL, text_width

_ROW, _GAP = 0.29, 0.09  # a strip and the space around it [in]
_TOP, _BOTTOM, _RIGHT = 0.7, 0.92, 0.22  # margins [in]


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
    captions = [_caption(short, sizes[n]) for n, short in zip(names, shorten_all(names, 24), strict=True)]
    frame = _Frame(size, ax, captions)
    notes = [lay_out(rows[name], limits_along(along), frame.wide, frame.row) for name in names]
    figure, axes, middles, half = frame.axes(notes)
    linear_axis(axes, "x", limits_along(along), along.label, most=9)
    for name, middle, layout in zip(names, middles, notes, strict=True):
        draw_pieces(axes, rows[name], middle, half)
        draw_notes(axes, layout, middle, half)
    axes.set_yticks(middles, captions)
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
    return name + length


class _Frame:
    """The axes of the strips: their width is known first, their height when the shares have their places."""

    def __init__(self, size: str, ax: Axes | None, captions: Sequence[str]) -> None:
        self.rows = max(len(captions), 1)
        self._size, self._ax = size, ax
        self.row = _ROW
        if ax is not None:
            figure = ax.get_figure(root=True)
            if not isinstance(figure, Figure):
                raise ValueError("ax must stand in a figure")
            self.figure = figure
            self.wide = float(ax.bbox.width / figure.dpi)
            self._tall = float(ax.bbox.height / figure.dpi)
        else:
            self.figure = style.new_figure(size, _TOP + _BOTTOM + self.rows * (_ROW + _GAP))
            width, height = (float(edge) for edge in self.figure.get_size_inches())
            self._left = max([0.6, *(text_width(caption, NORMAL) + 0.2 for caption in captions)])
            self.wide = width - _RIGHT - self._left
            self._tall = height - _TOP - _BOTTOM
        if self._fixed:
            self.row = min(_ROW, self._parts(LANE)[0])

    @property
    def _fixed(self) -> bool:
        """Whether the height is given; then rows share it, up to twice as high as in a column."""
        return self._ax is not None or self._size == "slide"

    def _parts(self, lanes: float) -> tuple[float, float]:
        """Return the height of a strip and the pitch of the rows, with `lanes` between them [in]."""
        if not self._fixed:
            return _ROW, _ROW + _GAP + lanes
        pitch = min(2.0 * (_ROW + _GAP) + lanes, self._tall / self.rows)
        return max((pitch - lanes) * _ROW / (_ROW + _GAP), 0.05), pitch

    def axes(self, notes: Sequence[Layout]) -> tuple[Figure, Axes, list[float], float]:
        """Return figure, axes with a vertical axis in inches from the top, middles of strips, half a strip."""
        used = {lane for layout in notes for lane, placed in layout.lanes.items() if placed}
        row, pitch = self._parts(LANE * len(used))
        axes = self._ax
        if axes is None:
            tall = self.rows * pitch
            if not self._fixed:
                self.figure.set_size_inches(self.figure.get_size_inches()[0], _TOP + _BOTTOM + tall)
            width, height = (float(edge) for edge in self.figure.get_size_inches())
            top = height - _TOP  # strips of a few lengths do not fill a slide: they stand under the title
            axes = style.place_axes(self.figure, self._left, top - tall, width - _RIGHT, top)
        axes.set_ylim(self.rows * pitch, 0.0)
        style.quiet_axes(axes, keep=("bottom",))
        axes.tick_params(axis="y", length=0)
        before = LANE * ("above" in used) + 0.5 * max(pitch - LANE * len(used) - row, 0.0)
        middles = [k * pitch + before + 0.5 * row for k in range(len(notes))]
        return self.figure, axes, middles, 0.5 * row


def altitude_scale(axes: Axes, places: Floats, altitude: Floats) -> None:
    """Write altitudes along the top, where the flight passes round values; crowded ones are left out.

    A flight that passes them more often than can be read, such as an orbit, gets its range in words.
    """
    good = np.isfinite(places) & np.isfinite(altitude)
    x, height = places[good], altitude[good] / 1e3
    if x.size == 0:
        return
    low, high = float(height.min()), float(height.max())
    x, height = _smooth(x), _smooth(height)
    marks = {float(x[0]): float(height[0]), float(x[-1]): float(height[-1])}
    passes: dict[float, float] = {}
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


def _smooth(values: Floats, most: int = 1000) -> Floats:
    """Return means over stretches of a long series, its ends kept: noise is no passing of a level."""
    if values.size <= most:
        return values
    groups = np.linspace(0, values.size, most + 1).astype(np.intp)
    means = np.add.reduceat(values, groups[:-1]) / np.diff(groups)
    means[[0, -1]] = values[[0, -1]]
    return floats(means)


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
    top.set_xticks(
        kept, [format_number(marks[at], 3, trim=True) for at in kept], size=SMALL, color=palette.GREY
    )
    top.set_xlabel(label, size=SMALL, color=palette.GREY, labelpad=2.5)
    top.spines["top"].set_visible(False)
    top.tick_params(length=2.0, pad=1.5)


def regime_key(figure: Figure, bounds: Sequence[float], bottom: float) -> None:
    """Write the key: a swatch, the name and the Knudsen numbers of each regime, in one line."""
    width, height = (float(edge) for edge in figure.get_size_inches())
    phrases = palette.bound_phrases(bounds)
    entries = [(regime, regime, phrases[regime]) for regime in palette.REGIMES]
    widths = [
        text_width(name, SMALL, "bold") + text_width("  " + phrase, SMALL) + 0.38
        for _, name, phrase in entries
    ]
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
        figure.text(
            (left + 0.2) / width, (bottom + 0.045) / height, name, size=SMALL, weight="bold", va="center"
        )
        after = left + 0.2 + text_width(name + "  ", SMALL, "bold")
        figure.text(
            after / width, (bottom + 0.045) / height, phrase, size=SMALL, color=palette.GREY, va="center"
        )
        left += wide * step
