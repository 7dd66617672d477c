"""Figure: the body itself, seen from the flow and from the side, coloured by heat flux and by regime."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import PolyCollection
from matplotlib.colors import LinearSegmentedColormap, to_rgba_array
from matplotlib.figure import Figure
from matplotlib.transforms import Affine2D, ScaledTranslation
from numpy.typing import NDArray

from aero.arrays import ArrayLike, Floats, floats
from aero.report import palette, style
from aero.report.numbers import Scale, format_quantity, scale_for
from aero.report.scales import linear_axis
from aero.report.strips import regime_key
from aero.report.style import NORMAL, SMALL

_LEFT, _BOTTOM, _TOP = 0.62, 0.92, 0.62  # margins [in]
_BETWEEN, _ROWS_APART, _BAR, _RIGHT = 0.78, 0.78, 0.11, 0.95  # in
_TALLEST = 2.6  # in, of one view
_PIXELS = 200  # per inch of the drawn triangles, which are kept as an image inside the SVG
_EDGE_ON = 1e-9  # cosine below which a triangle is seen on edge
_LIGHT = 0.16  # of lightness that faces seen edge-on lose, so that the form shows
_ARROW = 20.0  # pt
_UNKNOWN = "#b9b2a7"  # no answer
HEAT_COLOURS = ("#f3eedf", "#f0cd84", "#e2903a", "#b8432f", "#5c1a33")
"""From cold to hot: lightness falls all the way, so that the order survives a grey printer."""


class _View(NamedTuple):
    """A direction of sight: rows are the axes across, up and towards the viewer, in body axes."""

    axes: Floats
    title: str
    across: str
    up: str
    flip: bool  # whether the numbers along `across` fall to the right


def _views(direction: Floats) -> tuple[_View, _View]:
    towards = direction / np.sqrt((direction * direction).sum())
    down = floats([0.0, 0.0, 1.0]) if abs(towards[2]) < 0.95 else floats([1.0, 0.0, 0.0])
    up = -(down - (down @ towards) * towards)
    up /= np.sqrt((up * up).sum())
    across = np.cross(up, towards)  # of a viewer in front of the body, who has its right hand on the left
    plain = across[1] < -1.0 + 1e-9
    names = ("y" if plain else "across", "−z" if up[2] < -1.0 + 1e-9 else "up")
    first = _View(np.stack([across, up, towards]), "seen from the flow", *names, bool(plain))
    side = floats([[-1.0, 0.0, 0.0], [0.0, 0.0, -1.0], [0.0, -1.0, 0.0]])
    return first, _View(side, "seen from its left", "x", "−z", True)


@style.styled
def figure_body(
    vertices: ArrayLike,
    values: ArrayLike,
    regimes: Sequence[str],
    *,
    bounds: Sequence[float],
    direction: ArrayLike = (1.0, 0.0, 0.0),
    mark: ArrayLike | None = None,
    footer: str = "",
    title: str | None = None,
    size: str = "column",
) -> Figure:
    """Draw a body in two views, coloured by heat flux above and by local regime below.

    Parameters
    ----------
    vertices : (n, 3, 3) array [m]
        Corners of its triangles in body axes (x forward, y right, z down), counter-clockwise from outside.
    values : (n,) array [W/m2]
        Heat flux of each triangle; NaN is drawn grey.
    regimes : n str
        Regime of each triangle.
    bounds : three floats
        Regime bounds in Knudsen number, for the key.
    direction : (3,) array
        Where the flow comes from, in body axes.
    mark : (3,) array [m], optional
        Place of the greatest flux.
    footer, title : str
    size : str
        "column" or "slide".

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        If the arrays do not fit together, or there is no triangle.
    """
    corners, flux, towards = floats(vertices), floats(values), floats(direction)
    count = len(flux)
    if corners.shape != (count, 3, 3) or len(regimes) != count or count == 0:
        raise ValueError(
            f"vertices {corners.shape}, values {flux.shape} and {len(regimes)} regimes must be n triangles, "
            "n values and n names, n at least 1"
        )
    views = _views(towards)
    figure, panels = _panels(size, corners, views)
    figure.set_dpi(_PIXELS)
    largest = float(np.nanmax(flux, initial=0.0))
    scale = scale_for(largest, "W/m²")
    colours = (heat_colours(flux, largest), _regime_colours(regimes))
    for row, fills in zip(panels, colours, strict=True):
        for axes, view in zip(row, views, strict=True):
            _draw(axes, corners, fills, view)
    for what, row in zip(("heat flux", "local regime"), panels, strict=True):
        for lead, axes, view in zip((f"{what}, ", ""), row, views, strict=True):
            axes.set_title(f"{lead}{view.title}", size=NORMAL, loc="left", pad=4, color=palette.GREY)
    _arrow(panels[0][1], views[1], towards)
    if mark is not None:
        for axes, view in zip(panels[0], views, strict=True):
            _mark(axes, view, floats(mark), towards)
    _colour_bar(figure, panels[0][1], largest, scale)
    peak = format_quantity(largest, "W/m²", 3)
    style.headline(figure, title if title is not None else f"Heat flux over the body, at most {peak}")
    regime_key(figure, bounds, 0.25)
    style.foot(figure, footer)
    return figure


def heat_colours(values: ArrayLike, largest: float) -> Floats:
    """Return the colour of each heat flux from 0 to the largest, shape (n, 4).

    Examples
    --------
    >>> heat_colours([0.0, float("nan")], 1.0).round(2)[:, 0].tolist()
    [0.95, 0.73]
    """
    flux = floats(values)
    share = np.clip(flux / largest, 0.0, 1.0) if largest > 0.0 else np.where(np.isnan(flux), np.nan, 0.0)
    colours = floats(_heat_map()(np.where(np.isnan(share), 0.0, share)))
    colours[np.isnan(share)] = to_rgba_array(_UNKNOWN)[0]
    return colours


def _heat_map() -> LinearSegmentedColormap:
    return LinearSegmentedColormap.from_list("heat", HEAT_COLOURS, 256)


def _regime_colours(regimes: Sequence[str]) -> Floats:
    known = {name: to_rgba_array(colour)[0] for name, colour in palette.REGIME_COLOURS.items()}
    other = to_rgba_array(_UNKNOWN)[0]
    return floats([known.get(str(name), other) for name in regimes])


def _panels(size: str, corners: Floats, views: Sequence[_View]) -> tuple[Figure, list[list[Axes]]]:
    """Return a figure with two rows of two panels of one scale, in the proportions of the body."""
    spans = []
    for view in views:
        seen = corners.reshape(-1, 3) @ view.axes[:2].T
        low, high = seen.min(axis=0), seen.max(axis=0)
        least = 0.02 * float((high - low).max() or 1.0)
        pad = 0.06 * float((high - low).max() or 1.0) + 0.5 * np.maximum(least - (high - low), 0.0)
        spans.append((low - pad, high + pad))
    widths = [float(high[0] - low[0]) for low, high in spans]
    tall = max(float(high[1] - low[1]) for low, high in spans)
    wide = style.WIDTHS[size] if size in style.WIDTHS else style.WIDTHS["column"]
    room = wide - _LEFT - _BETWEEN - _RIGHT
    most = _TALLEST if size != "slide" else 0.5 * (style.SLIDE_HEIGHT - _BOTTOM - _TOP - _ROWS_APART)
    per_metre = min(room / sum(widths), most / tall)
    height = _BOTTOM + _ROWS_APART + _TOP + 2.0 * per_metre * tall
    figure = style.new_figure(size, height)
    rows = []
    top = float(figure.get_size_inches()[1]) - _TOP
    for floor in (top - per_metre * tall, top - 2.0 * per_metre * tall - _ROWS_APART):
        left, row = _LEFT, []
        for view, (low, high), width in zip(views, spans, widths, strict=True):
            axes = style.place_axes(figure, left, floor, left + per_metre * width, floor + per_metre * tall)
            middle = 0.5 * (low[1] + high[1])
            _scales(axes, view, (float(low[0]), float(high[0])), (middle - 0.5 * tall, middle + 0.5 * tall))
            left += per_metre * width + _BETWEEN
            row.append(axes)
        rows.append(row)
    return figure, rows


def _scales(axes: Axes, view: _View, across: tuple[float, float], up: tuple[float, float]) -> None:
    """Set axes in metres; where an axis is drawn reversed its numbers are the body's own."""
    width = float(axes.bbox.width / axes.get_figure(root=True).dpi)  # type: ignore[union-attr]
    most = max(2, min(5, int(width / 0.45)))
    linear_axis(axes, "y", up, f"{view.up} [m]", most=5)
    if not view.flip:
        linear_axis(axes, "x", across, f"{view.across} [m]", most=most)
    else:
        linear_axis(axes, "x", (-across[1], -across[0]), f"{view.across} [m]", most=most)
        axes.invert_xaxis()
    style.quiet_axes(axes)


def _draw(axes: Axes, corners: Floats, fills: Floats, view: _View) -> None:
    """Draw the triangles that face the viewer from far to near, a little darker where they turn away."""
    seen = corners @ view.axes.T
    first, second = seen[:, 1] - seen[:, 0], seen[:, 2] - seen[:, 0]
    normal = np.cross(first, second)
    length = np.sqrt((normal * normal).sum(axis=1))
    towards = normal[:, 2] / length
    facing = np.flatnonzero(towards > _EDGE_ON)
    order = facing[np.argsort(seen[facing, :, 2].mean(axis=1), kind="stable")]
    # a sheet seen on edge is a line; behind all that faces the viewer, so that only what sticks out shows
    for who, width in ((np.flatnonzero(np.abs(towards) <= _EDGE_ON), 1.6), (order, 0.6)):
        if not who.size:
            continue
        shaded = fills[who].copy()
        shaded[:, :3] *= (1.0 - _LIGHT * (1.0 - np.abs(towards[who])))[:, None]
        flat = seen[who, :, :2].copy()
        if view.flip:
            flat[..., 0] *= -1.0
        axes.add_collection(
            PolyCollection(
                list(flat),
                facecolors=shaded,
                edgecolors=shaded,
                linewidths=width,
                rasterized=True,
                gid="body" if who is order else "edges",
            ),
            autolim=False,
        )


def _flat(view: _View, points: Floats) -> NDArray[np.float64]:
    seen = points @ view.axes[:2].T
    if view.flip:
        seen = seen * floats([-1.0, 1.0])
    return seen


def _mark(axes: Axes, view: _View, place: Floats, towards: Floats) -> None:
    """Ring the place of the greatest flux: broken where it lies on the far side."""
    x, y = _flat(view, place)
    hidden = float(view.axes[2] @ towards) < -0.5
    axes.plot(
        [x], [y], "o", ms=6.5, mfc="none", mec=palette.INK, mew=0.9 if not hidden else 0.4, gid="hottest",
        clip_on=False, zorder=5,
    )  # fmt: skip
    axes.annotate(
        "max", (x, y), xytext=(5, 4), textcoords="offset points", size=SMALL, color=palette.INK, zorder=5,
        annotation_clip=False, bbox={"facecolor": palette.PAPER, "edgecolor": "none", "alpha": 0.75, "pad": 0.6},
    )  # fmt: skip


def _arrow(axes: Axes, view: _View, towards: Floats) -> None:
    """Show where the flow goes in the side view, above its title; nothing where it comes from the viewer."""
    along = -(view.axes[:2] @ towards) / np.sqrt((towards * towards).sum())
    size = float(np.hypot(*along))
    if size < 0.2:
        return
    step = _ARROW * along / size
    tail = floats([26.0 + 0.5 * _ARROW, 22.0]) - 0.5 * step
    figure = axes.get_figure(root=True)
    points = Affine2D().scale(1.0 / 72.0) + figure.dpi_scale_trans  # type: ignore[union-attr]
    place = points + ScaledTranslation(0.0, 1.0, axes.transAxes)  # type: ignore[arg-type,operator]
    axes.annotate(
        "", xy=tuple(tail + step), xytext=tuple(tail), xycoords=place, textcoords=place,
        annotation_clip=False, gid="flow",
        arrowprops={"arrowstyle": "-|>", "color": palette.INK, "lw": 0.9, "shrinkA": 0, "shrinkB": 0},
    )  # fmt: skip
    axes.annotate(
        "flow", (0.0, 1.0), xytext=(0, 22), xycoords="axes fraction", textcoords="offset points", size=SMALL,
        va="center", color=palette.INK, annotation_clip=False,
    )  # fmt: skip


def _colour_bar(figure: Figure, beside: Axes, largest: float, scale: Scale) -> None:
    """Draw the scale of heat flux right of the upper row."""
    width, height = (float(edge) for edge in figure.get_size_inches())
    box = beside.get_position()
    left = box.x1 * width + 0.3
    bar = style.place_axes(figure, left, box.y0 * height, left + _BAR, box.y1 * height)
    top = largest * scale.factor if largest > 0.0 else 1.0
    bar.imshow(
        _heat_map()(np.linspace(0.0, 1.0, 256))[:, None, :], origin="lower", extent=(0.0, 1.0, 0.0, top),
        aspect="auto", interpolation="nearest",
    )  # fmt: skip
    linear_axis(bar, "y", (0.0, top), f"heat flux [{scale.unit}]", most=5)
    bar.yaxis.tick_right()
    bar.yaxis.set_label_position("right")
    bar.set_xticks([])
    for spine in bar.spines.values():
        spine.set_visible(False)
    bar.set_gid("scale")
