"""Figure (d): stagnation heat flux along time with its parts, the load under it, regimes as a strip."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.labels import SIDES, Labels
from aero.report.names import REFERENCE, Table, column, has_numbers, length_names, shorten, thin_air_limit
from aero.report.numbers import Scale, format_quantity, scale_for
from aero.report.pieces import NO_TIME, Along, draw_pieces, pieces_of, run_along
from aero.report.scales import linear_axis
from aero.report.strips import altitude_scale, regime_key
from aero.report.style import NORMAL, SMALL
from aero.report.thin import thin

_LEFT, _BOTTOM, _RIGHT, _TOP = 0.74, 0.92, 0.95, 0.74  # margins [in]
_STRIP, _BETWEEN = 0.2, 0.1  # in
_FLUX = "heat_flux_W_m2"
_LOAD = "heat_load_J_m2"
_THIN = "heat_flux_free_molecular_W_m2"
_LIMITS = {
    _THIN: ("free-molecular\nlimit", {"linestyle": "-"}),
    "heat_flux_continuum_W_m2": ("continuum\nlimit", {"linestyle": (0, (4, 2))}),
}
_RADIATIVE = "heat_flux_radiative_W_m2"
_SMALL_PART = 0.01  # of the peak: below it the radiative part would lie on the axis


def why_no_heating(points: Table) -> str | None:
    """Return why there is no heating to draw, as a sentence; None when there is.

    Examples
    --------
    >>> why_no_heating({"time_s": [0.0, 1.0]})
    'No stagnation heating: the vehicle gives no nose radius.'
    """
    if has_numbers(points, _FLUX):
        return None
    return "No stagnation heating: the vehicle gives no nose radius."


@style.styled
def figure_heating(
    points: Table,
    segments: Table | None = None,
    *,
    bounds: Sequence[float],
    length_name: str = REFERENCE,
    footer: str = "",
    title: str | None = None,
    size: str = "column",
) -> Figure:
    """Draw stagnation heat flux with limits and band, heat load, and the regimes of one length.

    Parameters
    ----------
    points : table
        `time_s`, `altitude_m`, `heat_flux_W_m2` and any of its parts, limits and band; `heat_load_J_m2`.
        Without a time the points are drawn by number, and there is no load.
    segments : table, optional
        Pieces of the strip with `heat_load_share`.
    bounds : three floats
        Regime bounds in Knudsen number, for the key.
    length_name : str
        Length of the strip.
    footer, title : str
    size : str
        "column" or "slide".

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        If there is no heat flux at all; `why_no_heating` says so beforehand.
    """
    reason = why_no_heating(points)
    if reason is not None:
        raise ValueError(reason)
    along = run_along(points)
    loaded = along.timed and has_numbers(points, _LOAD)
    figure = style.new_figure(size, 5.0 if loaded else 3.9)
    flux, load, strip = _panels(figure, loaded)
    _flux_panel(flux, points, along, bounds[0], length_name)
    if load is not None:
        _load_panel(load, points, along)
        style.align_labels(flux, load, reach=0.38)
    _strip_panel(strip, points, segments, along, length_name, flux.get_xlim())
    altitude_scale(flux, along.places, column(points, "altitude_m"))
    default = (
        "Stagnation-point heating along the flight"
        if along.timed
        else f"Stagnation-point heating ({NO_TIME})"
    )
    style.headline(figure, title if title is not None else default)
    regime_key(figure, bounds, 0.25)
    style.foot(figure, footer)
    return figure


def _panels(figure: Figure, loaded: bool) -> tuple[Axes, Axes | None, Axes]:
    width, height = (float(edge) for edge in figure.get_size_inches())
    right, top = width - _RIGHT, height - _TOP
    strip = style.place_axes(figure, _LEFT, _BOTTOM, right, _BOTTOM + _STRIP)
    floor = _BOTTOM + _STRIP + _BETWEEN
    if not loaded:
        return style.place_axes(figure, _LEFT, floor, right, top), None, strip
    cut = floor + 0.34 * (top - floor)
    load = style.place_axes(figure, _LEFT, floor, right, cut - 0.12)
    return style.place_axes(figure, _LEFT, cut + 0.06, right, top), load, strip


def _time_axis(axes: Axes, along: Along) -> None:
    good = along.places[np.isfinite(along.places)]
    low, high = float(good.min()), float(good.max())
    half = 0.0 if along.timed and high > low else 0.5
    linear_axis(axes, "x", (low - half, high + half), along.label, most=9)


def _bare_time_axis(axes: Axes, along: Along) -> None:
    """Set the time axis of an upper panel: its numbers stand under the strip."""
    _time_axis(axes, along)
    axes.set_xlabel("")
    axes.tick_params(axis="x", labelbottom=False, length=0.0)


def _flux_panel(axes: Axes, points: Table, along: Along, continuum_bound: float, length_name: str) -> None:
    flux = column(points, _FLUX)
    low, high = column(points, "heat_flux_low_W_m2"), column(points, "heat_flux_high_W_m2")
    tallest = float(np.nanmax(np.concatenate([flux, high])))
    scale = scale_for(tallest, "W/m²")
    _bare_time_axis(axes, along)
    top = 1.22 * tallest * scale.factor if tallest > 0.0 else 1.0
    linear_axis(axes, "y", (0.0, top), f"stagnation heat flux [{scale.unit}]", most=6)
    style.quiet_axes(axes, grid="y", keep=("left", "bottom"))
    names = [*_LIMITS, _RADIATIVE]
    series = {name: column(points, name) for name in names}
    series[_THIN] = thin_air_limit(points, _THIN, continuum_bound, length_name)
    rows = thin(flux, low, high, *series.values())
    x = along.places[rows]
    axes.fill_between(
        x, scale(low[rows]), scale(high[rows]), color=palette.WASH, linewidth=0.0, zorder=1, gid="wash"
    )
    labels = Labels(axes)
    for name, (_, line) in _LIMITS.items():
        axes.plot(x, scale(series[name][rows]), color=palette.GREY, linewidth=0.9, zorder=2, gid=name, **line)  # type: ignore[arg-type]
    axes.plot(x, scale(flux[rows]), color=palette.INK, linewidth=1.9, zorder=3, gid=_FLUX)
    for values in (flux, low, high, *series.values()):
        labels.avoid(x, np.minimum(scale(values[rows]), 2.0 * top))
    _radiative(axes, labels, x, series[_RADIATIVE][rows], flux, scale)
    _name_flux(axes, labels, x, {k: v[rows] for k, v in {_FLUX: flux, "high": high, **series}.items()}, scale)


def _radiative(axes: Axes, labels: Labels, x: Floats, radiative: Floats, flux: Floats, scale: Scale) -> None:
    """Draw the radiative part, or say that there is next to none."""
    if not np.isfinite(radiative).any():
        return
    peak = float(np.nanmax(radiative))
    if peak < _SMALL_PART * float(np.nanmax(flux)):
        share = "none" if peak == 0.0 else f"at most\n{format_quantity(peak, 'W/m²', 2)}"
        axes.annotate(
            f"radiative\npart: {share}", (1.0, 1.0), xytext=(4, 0), xycoords="axes fraction",
            textcoords="offset points", size=SMALL, color=palette.GREY, va="top", annotation_clip=False,
        )  # fmt: skip
        return
    axes.plot(x, scale(radiative), color=palette.ACCENT, linewidth=1.1, zorder=2.5, gid=_RADIATIVE)
    k = int(np.nanargmax(radiative))
    labels.put(x[k], scale(radiative)[k], "radiative", colour=palette.ACCENT, size=SMALL)


def _name_flux(axes: Axes, labels: Labels, x: Floats, series: dict[str, Floats], scale: Scale) -> None:
    """Name the peak with its value, each limit where it stands apart, and the band on its flank."""
    flux = scale(series[_FLUX])
    k = int(np.nanargmax(flux))
    _name_peak(axes, labels, float(x[k]), float(flux[k]), format_quantity(float(series[_FLUX][k]), "W/m²", 3))
    top = axes.get_ylim()[1]
    for name, (text, _) in _LIMITS.items():
        values = scale(series[name])
        apart = np.where(values < 0.97 * top, np.abs(values - flux), np.nan)
        if not np.isfinite(apart).any():
            continue
        for share in (1.0, 0.8, 0.6, 0.4, 0.2):
            spot = int(np.nanargmin(np.abs(apart - share * np.nanmax(apart))))
            outward = ("right", "left") if spot > k else ("left", "right")
            sides = (*outward, "above", "above-right", "above-left")
            if labels.put(
                float(x[spot]), float(values[spot]), text, colour=palette.GREY, size=SMALL, sides=sides
            ):
                break
    high = scale(series["high"])
    for share in (0.75, 0.5, 0.3):
        late = np.flatnonzero((np.arange(x.size) > k) & (high < share * np.nanmax(high, initial=0.0)))
        spot = int(late[0]) if late.size else -1
        flank = ("right", "above-right")
        if spot >= 0 and labels.put(
            x[spot], high[spot], "95 % band", colour=palette.GREY, size=SMALL, sides=flank
        ):
            return


def _name_peak(axes: Axes, labels: Labels, x: float, y: float, value: str) -> None:
    """Mark the greatest flux and lead from it to its value, where there is room."""
    axes.plot([x], [y], "o", ms=3.6, color=palette.INK, zorder=4, gid="peak")
    for gap in (0.12, 0.3, 0.45, 0.6, 0.8, 1.0):
        for side in SIDES:
            text = f"bridged,\npeak {value}"
            put = labels.put(
                x, y, text, colour=palette.INK, size=SMALL, weight="bold", gap=gap, sides=(side,)
            )
            if put is None:
                continue
            across, up = SIDES[side]
            reach = 72.0 * (gap - 0.03) * (0.75 if across and up else 1.0)
            axes.annotate(
                "", (x, y), xytext=(across * reach, up * reach),
                textcoords="offset points",
                arrowprops={"arrowstyle": "-", "color": palette.INK, "lw": 0.6, "shrinkA": 0, "shrinkB": 0},
            )  # fmt: skip
            return


def _load_panel(axes: Axes, points: Table, along: Along) -> None:
    load = column(points, _LOAD)
    most = float(np.nanmax(load))
    scale = scale_for(most, "J/m²")
    _bare_time_axis(axes, along)
    top = 1.12 * most * scale.factor if most > 0.0 else 1.0
    linear_axis(axes, "y", (0.0, top), f"heat load\n[{scale.unit}]", most=4)
    style.quiet_axes(axes, grid="y")
    rows = thin(load)
    axes.plot(along.places[rows], scale(load[rows]), color=palette.INK, linewidth=1.5, gid=_LOAD)
    last = np.flatnonzero(np.isfinite(load))[-1]
    axes.annotate(
        format_quantity(float(load[last]), "J/m²"),
        (along.places[last], float(scale(load[last]))),
        xytext=(4, 0),
        textcoords="offset points",
        size=NORMAL,
        weight="bold",
        va="center",
        annotation_clip=False,
    )


def _strip_panel(
    axes: Axes,
    points: Table,
    segments: Table | None,
    along: Along,
    length_name: str,
    limits: tuple[float, float],
) -> None:
    _time_axis(axes, along)
    axes.set_xlim(*limits)
    axes.set_ylim(0.5, -0.5)
    axes.set_yticks([])
    style.quiet_axes(axes, keep=("bottom",))
    known = length_name in length_names(points)
    draw_pieces(axes, pieces_of(points, segments, length_name, along) if known else [], 0.0, 0.5)
    whose = "reference" if length_name == REFERENCE else shorten(length_name, 14)
    axes.annotate(
        f"regimes,\n{whose}",
        (1.0, 0.5),
        xytext=(4, 0),
        xycoords="axes fraction",
        textcoords="offset points",
        size=SMALL,
        color=palette.GREY,
        va="center",
        annotation_clip=False,
    )
