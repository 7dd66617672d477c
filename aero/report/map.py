"""Figure (a): altitude against air-relative speed, the regimes of one length behind the flight."""

from __future__ import annotations

from collections.abc import Sequence

import matplotlib.patheffects as effects
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.bands import Band, Bound, altitude_bounds, bands, fill
from aero.report.contours import Field, draw_contours
from aero.report.labels import Labels, spread
from aero.report.marks import BLACK, WHITE, Marks
from aero.report.names import REFERENCE, Table, column, length_sizes, shorten
from aero.report.numbers import format_number, format_quantity
from aero.report.scales import linear_axis, span
from aero.report.style import NORMAL, SMALL
from aero.report.thin import thin

_LEFT, _BOTTOM, _TOP = 0.55, 0.62, 0.36  # margins [in]
_LEADER = 0.17  # in: from the right edge of the axes to the names of the bounds
_COLUMN_HEIGHT = 4.4  # in


@style.styled
def figure_map(
    points: Table,
    crossings: Table | None = None,
    *,
    bounds: Sequence[float],
    length_name: str = REFERENCE,
    field: Field | None = None,
    footer: str = "",
    title: str | None = None,
    size: str = "column",
    ax: Axes | None = None,
) -> Figure:
    """Draw the flight in the plane of altitude and air-relative speed, regimes as bands behind it.

    Parameters
    ----------
    points : table
        `altitude_m`, `air_speed_m_s`, `knudsen.LENGTH`; `time_s` for ticks along the flight;
        `density_kg_m3` for contours of dynamic pressure without a field.
    crossings : table, optional
        Drawn as open marks, for `length_name` only. They also fix the bands' edges.
    bounds : three floats
        Regime bounds in Knudsen number.
    length_name : str
        The length whose regimes are shown.
    field : mapping, optional
        `altitude_m` (n,), `air_speed_m_s` (m,) and, of shape (n, m), any of `dynamic_pressure_Pa` and
        `heat_flux_W_m2`: what to draw contours of.
    footer, title : str
    size : str
        "column" or "slide".
    ax : Axes, optional
        Draw into these instead; then the figure's title and footer are left to the caller.

    Returns
    -------
    Figure
    """
    edges = altitude_bounds(points, crossings, bounds, length_name)
    figure, axes = _canvas(size, ax, edges)
    altitude, speed = column(points, "altitude_m"), column(points, "air_speed_m_s")
    _frame(axes, altitude, speed)
    low, high = axes.get_ylim()
    regimes = bands(edges, low * 1e3, high * 1e3)
    for band in regimes:
        _band(axes, band)
    labels = Labels(axes)
    labels.avoid_crossing([band.top / 1e3 for band in regimes[:-1]])
    rows = thin(altitude, speed)
    labels.avoid(speed[rows] / 1e3, altitude[rows] / 1e3)
    _flight(axes, speed[rows] / 1e3, altitude[rows] / 1e3)
    _name_bounds(figure, axes, edges)
    marks = Marks(axes, labels, regimes)
    marks.crossings(crossings, length_name)
    marks.ends(speed / 1e3, altitude / 1e3)
    _name_bands(axes, labels, regimes)
    marks.time(points, altitude, speed)
    marks.direction(speed[rows] / 1e3, altitude[rows] / 1e3)
    draw_contours(axes, labels, regimes, points, field)
    if ax is None:
        style.headline(figure, title if title is not None else _title(points, length_name))
        style.foot(figure, footer)
    return figure


def _title(points: Table, length_name: str) -> str:
    size = length_sizes(points).get(length_name, float("nan"))
    length = f", {format_quantity(size, 'm')}" if np.isfinite(size) else ""
    name = "the reference length" if length_name == REFERENCE else shorten(length_name, 40)
    return f"The flight through the regimes of {name}{length}"


def _canvas(size: str, ax: Axes | None, edges: Sequence[Bound]) -> tuple[Figure, Axes]:
    if ax is not None:
        figure = ax.get_figure(root=True)
        if not isinstance(figure, Figure):
            raise ValueError("ax must stand in a figure")
        return figure, ax
    figure = style.new_figure(size, _COLUMN_HEIGHT)
    width, height = figure.get_size_inches()
    names = [line for edge in edges if np.isfinite(edge.altitude) for line in _bound_text(edge).split("\n")]
    margin = _LEADER + max([style.text_width(name, SMALL) for name in names], default=0.0) / 0.93 + 0.1
    return figure, style.place_axes(figure, _LEFT, _BOTTOM, width - margin, height - _TOP)


def _frame(axes: Axes, altitude: Floats, speed: Floats) -> None:
    """Set limits; the ground and standstill are shown where the flight comes near them."""
    low, high = span(altitude / 1e3, least=5.0, pad=0.05)
    slow, fast = span(speed / 1e3, least=0.2, pad=0.06)
    low = 0.0 if 0.0 <= np.nanmin(altitude, initial=np.inf) / 1e3 < 0.2 * high else low
    slow = 0.0 if slow < 0.25 * fast else slow
    linear_axis(axes, "x", (slow, fast), "air-relative speed [km/s]")
    linear_axis(axes, "y", (low, high), "altitude [km]")
    style.quiet_axes(axes)


def _band(axes: Axes, band: Band) -> None:
    left, right = axes.get_xlim()
    box = (left, band.bottom / 1e3), right - left, (band.top - band.bottom) / 1e3
    axes.add_patch(Rectangle(*box, zorder=0.5, gid=f"band-{band.regime}", **fill(band.regime)))


def _flight(axes: Axes, x: Floats, y: Floats) -> None:
    casing = [effects.Stroke(linewidth=3.4, foreground=WHITE), effects.Normal()]
    axes.plot(x, y, color=BLACK, linewidth=1.7, path_effects=casing, zorder=4, gid="flight")


def _bound_text(edge: Bound) -> str:
    where = format_number(edge.low / 1e3)
    if edge.high - edge.low > 100.0:  # m, the last digit shown
        where += f" to {format_number(edge.high / 1e3)}"
    return f"Kn {edge.knudsen:g}\n{where} km"


def _name_bounds(figure: Figure, axes: Axes, edges: Sequence[Bound]) -> None:
    """Write each bound and its altitude at the right edge, moved apart where they are close."""
    low, high = axes.get_ylim()
    shown = [edge for edge in edges if low < edge.altitude / 1e3 < high]
    wide, tall = axes.bbox.width / figure.dpi, axes.bbox.height / figure.dpi
    wanted = [(edge.altitude / 1e3 - low) / (high - low) * tall for edge in shown]
    for edge, place, want in zip(shown, spread(wanted, 0.27, 0.1, tall - 0.1), wanted, strict=True):
        axes.annotate(
            _bound_text(edge),
            (1.0, want / tall),
            xytext=(1.0 + _LEADER / wide, place / tall),
            xycoords="axes fraction",
            textcoords="axes fraction",
            size=SMALL,
            va="center",
            linespacing=1.15,
            annotation_clip=False,
            arrowprops={
                "arrowstyle": "-",
                "color": palette.GREY,
                "linewidth": 0.6,
                "shrinkA": 1,
                "shrinkB": 0,
            },
        )


def _name_bands(axes: Axes, labels: Labels, regimes: Sequence[Band]) -> None:
    """Write each band's name in the band, at the first free corner."""
    left, right = axes.get_xlim()
    inset = 0.015 * (right - left)
    for band in regimes:
        size = min(NORMAL + 0.5, 72.0 * 0.8 * (band.top - band.bottom) / 1e3 * _inches_per_km(axes))
        if size < SMALL - 0.5:
            continue  # the bound at the right edge still names it
        middle = 0.5 * (band.bottom + band.top) / 1e3
        colour = palette.REGIME_TEXT[band.regime]
        for x, side in ((left + inset, "right"), (right - inset, "left"), (0.5 * (left + right), "right")):
            if labels.put(x, middle, band.regime, colour=colour, size=size, sides=(side,), weight="bold"):
                break


def _inches_per_km(axes: Axes) -> float:
    low, high = axes.get_ylim()
    figure = axes.get_figure(root=True)
    return float(axes.bbox.height / figure.dpi / (high - low))  # type: ignore[union-attr]
