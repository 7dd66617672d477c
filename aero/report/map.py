"""Figure (a): altitude against air-relative speed, the regimes of one length behind the flight."""

from __future__ import annotations

from collections.abc import Sequence

import matplotlib.patheffects as effects
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Patch, Rectangle

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.bands import Band, Bound, altitude_bounds, bands, fill
from aero.report.contours import Field, draw_contours
from aero.report.labels import SIDES, Labels, spread
from aero.report.names import (
    REFERENCE,
    Table,
    column,
    has_numbers,
    length_sizes,
    row_count,
    shorten,
    texts,
)
from aero.report.numbers import format_number, format_quantity
from aero.report.scales import linear_axis, round_step, span, time_unit
from aero.report.style import NORMAL, SMALL
from aero.report.thin import thin

_LEFT, _BOTTOM, _RIGHT, _TOP = 0.55, 0.62, 1.0, 0.36  # margins [in]
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
    figure, axes = _canvas(size, ax)
    altitude, speed = column(points, "altitude_m"), column(points, "air_speed_m_s")
    _frame(axes, altitude, speed)
    edges = altitude_bounds(points, crossings, bounds, length_name)
    low, high = axes.get_ylim()
    regimes = bands(edges, low * 1e3, high * 1e3)
    patches = [_band(axes, band) for band in regimes]
    labels = Labels(axes)
    rows = thin(altitude, speed)
    labels.avoid(speed[rows] / 1e3, altitude[rows] / 1e3)
    _flight(axes, speed[rows] / 1e3, altitude[rows] / 1e3)
    _name_bounds(figure, axes, edges)
    marks = _Marks(axes, labels, regimes)
    marks.crossings(crossings, length_name)
    marks.ends(altitude, speed)
    _name_bands(axes, labels, regimes)
    marks.time(points, altitude, speed)
    draw_contours(axes, labels, regimes, patches, points, field)
    if ax is None:
        style.headline(figure, title if title is not None else _title(points, length_name))
        style.foot(figure, footer)
    return figure


def _title(points: Table, length_name: str) -> str:
    size = length_sizes(points).get(length_name, float("nan"))
    length = f", {format_quantity(size, 'm')}" if np.isfinite(size) else ""
    name = "the reference length" if length_name == REFERENCE else shorten(length_name, 40)
    return f"The flight through the regimes of {name}{length}"


def _canvas(size: str, ax: Axes | None) -> tuple[Figure, Axes]:
    if ax is not None:
        figure = ax.get_figure(root=True)
        if not isinstance(figure, Figure):
            raise ValueError("ax must stand in a figure")
        return figure, ax
    figure = style.new_figure(size, _COLUMN_HEIGHT)
    width, height = figure.get_size_inches()
    return figure, style.place_axes(figure, _LEFT, _BOTTOM, width - _RIGHT, height - _TOP)


def _frame(axes: Axes, altitude: Floats, speed: Floats) -> None:
    """Set limits; the ground and standstill are shown where the flight comes near them."""
    low, high = span(altitude / 1e3, least=5.0, pad=0.05)
    slow, fast = span(speed / 1e3, least=0.2, pad=0.06)
    low = 0.0 if 0.0 <= np.nanmin(altitude, initial=np.inf) / 1e3 < 0.2 * high else low
    slow = 0.0 if slow < 0.25 * fast else slow
    linear_axis(axes, "x", (slow, fast), "air-relative speed [km/s]")
    linear_axis(axes, "y", (low, high), "altitude [km]")
    style.quiet_axes(axes)


def _band(axes: Axes, band: Band) -> Patch:
    left, right = axes.get_xlim()
    box = (left, band.bottom / 1e3), right - left, (band.top - band.bottom) / 1e3
    patch = Rectangle(*box, zorder=0.5, gid=f"band-{band.regime}", **fill(band.regime))
    return axes.add_patch(patch)


def _flight(axes: Axes, x: Floats, y: Floats) -> None:
    casing = [effects.Stroke(linewidth=3.4, foreground="#fdfdfb"), effects.Normal()]
    axes.plot(x, y, color="#14100c", linewidth=1.7, path_effects=casing, zorder=4, gid="flight")


def _name_bounds(figure: Figure, axes: Axes, edges: Sequence[Bound]) -> None:
    """Write each bound and its altitude at the right edge, moved apart where they are close."""
    low, high = axes.get_ylim()
    shown = [edge for edge in edges if low < edge.altitude / 1e3 < high]
    tall = axes.bbox.height / figure.dpi
    wanted = [(edge.altitude / 1e3 - low) / (high - low) * tall for edge in shown]
    for edge, place, want in zip(shown, spread(wanted, 0.27, 0.1, tall - 0.1), wanted, strict=True):
        where = f"{format_number(edge.low / 1e3)} km"
        if edge.high - edge.low > 100.0:  # m, the last digit shown
            where = f"{format_number(edge.low / 1e3)} to {format_number(edge.high / 1e3)} km"
        axes.annotate(
            f"Kn {edge.knudsen:g}\n{where}",
            (1.0, want / tall),
            xytext=(1.035, place / tall),
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
                _mask(labels, regimes)
                break


def _mask(labels: Labels, regimes: Sequence[Band]) -> None:
    """Lay the band's colour under the label written last, so that contours pass behind it."""
    bottom, top = labels.heights()
    for band in regimes:
        if band.bottom / 1e3 <= bottom and top <= band.top / 1e3:
            labels.back(palette.REGIME_COLOURS[band.regime])


def _inches_per_km(axes: Axes) -> float:
    low, high = axes.get_ylim()
    figure = axes.get_figure(root=True)
    return float(axes.bbox.height / figure.dpi / (high - low))  # type: ignore[union-attr]


class _Marks:
    """Marks along the flight, each with its label in the colour that its band asks for."""

    def __init__(self, axes: Axes, labels: Labels, regimes: Sequence[Band]) -> None:
        self.axes, self.labels, self.regimes = axes, labels, regimes

    def colour(self, height_km: float) -> str:
        """Return the text colour at an altitude."""
        for band in self.regimes:
            if band.bottom <= height_km * 1e3 <= band.top:
                return palette.REGIME_TEXT[band.regime]
        return palette.INK

    def put(
        self, x: float, y: float, text: str, size: float, sides: Sequence[str], gap: float = 0.06
    ) -> bool:
        """Write a label on the first free side, in the colour of the band it comes to lie on."""
        for side in sides:
            lean = SIDES[side][1] * 0.11 / _inches_per_km(self.axes)
            if self.labels.put(x, y, text, colour=self.colour(y + lean), size=size, sides=(side,), gap=gap):
                _mask(self.labels, self.regimes)
                return True
        return False

    def crossings(self, crossings: Table | None, length_name: str) -> None:
        """Mark where the flight meets a bound, with the altitude beside it."""
        if crossings is None or row_count(crossings) == 0:
            return
        mine = np.array(texts(crossings, "length")) == length_name
        heights = column(crossings, "altitude_m")[mine] / 1e3
        speeds = column(crossings, "air_speed_m_s")[mine] / 1e3
        self.axes.plot(
            speeds,
            heights,
            "o",
            ms=4.6,
            mfc="none",
            mec="#14100c",
            mew=1.0,
            ls="none",
            zorder=6,
            gid="crossings",
        )
        self.axes.plot(
            speeds, heights, "o", ms=6.4, mfc="none", mec="#fdfdfb", mew=0.9, ls="none", zorder=5.9
        )
        for x, y in zip(speeds, heights, strict=True):
            self.put(
                x,
                y,
                f"{format_number(y)} km",
                SMALL,
                ("above-right", "above-left", "below-right", "below-left"),
            )

    def ends(self, altitude: Floats, speed: Floats) -> None:
        """Mark the first point, so that the direction of flight can be told."""
        good = np.flatnonzero(np.isfinite(altitude) & np.isfinite(speed))
        if good.size:
            x, y = speed[good[0]] / 1e3, altitude[good[0]] / 1e3
            self.axes.plot(
                [x], [y], "s", ms=4.2, color="#14100c", mec="#fdfdfb", mew=0.8, zorder=6, gid="start"
            )
            self.put(x, y, "start", SMALL, tuple(SIDES), gap=0.08)

    def time(self, points: Table, altitude: Floats, speed: Floats) -> None:
        """Mark round times along the flight, those that stand clear of the one before."""
        if not has_numbers(points, "time_s"):
            return
        time = column(points, "time_s")
        good = np.isfinite(time) & np.isfinite(altitude) & np.isfinite(speed)
        time, altitude, speed = time[good], altitude[good], speed[good]
        if time.size < 2 or not time[-1] > time[0]:
            return
        unit, seconds = time_unit(float(time[-1] - time[0]))
        step = round_step(float(time[-1] - time[0]) / seconds, 10)
        ticks = np.arange(np.ceil(time[0] / seconds / step), np.floor(time[-1] / seconds / step) + 1) * step
        x = np.interp(ticks * seconds, time, speed) / 1e3
        y = np.interp(ticks * seconds, time, altitude) / 1e3
        keep = _apart(self.labels.inches(x, y), 0.12)
        self.axes.plot(
            x[keep],
            y[keep],
            "o",
            ms=2.6,
            color="#fdfdfb",
            mec="#14100c",
            mew=0.6,
            ls="none",
            zorder=5,
            gid="time-ticks",
        )
        for k in np.flatnonzero(keep):
            text = f"{format_number(ticks[k], trim=True)} {unit}"
            sides = ("right", "left", "above-left", "below-right", "below-left", "above-right")
            self.put(x[k], y[k], text, SMALL - 0.5, sides)


def _apart(places: Floats, gap: float) -> np.ndarray:
    """Return which of the places stand at least `gap` inches from the last one kept."""
    keep = np.zeros(len(places), dtype=bool)
    last = np.full(2, np.inf)
    for k, place in enumerate(places):
        if not np.hypot(*(place - last)) < gap:
            keep[k], last = True, place
    return keep
