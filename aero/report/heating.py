"""Figure (d): stagnation heat flux along time with its parts, the load under it, regimes as a strip."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.heating_names import FREE_MOLECULAR, LIMITS, name_band, name_flux, name_limits
from aero.report.labels import Labels
from aero.report.names import REFERENCE, Table, column, has_numbers, length_names, shorten, thin_air_limit
from aero.report.numbers import Scale, format_quantity, scale_for
from aero.report.pieces import NO_TIME, Along, draw_pieces, limits_along, pieces_of, run_along
from aero.report.scales import linear_axis
from aero.report.shares import LANE, draw_notes, lay_out
from aero.report.strips import altitude_scale, regime_key
from aero.report.style import NORMAL, SMALL
from aero.report.thin import thin

_LEFT, _BOTTOM, _RIGHT, _TOP = 0.74, 0.92, 0.95, 0.74  # margins [in]
_STRIP, _BETWEEN = 0.27, 0.1  # in
_FLUX = "heat_flux_W_m2"
_LOAD = "heat_load_J_m2"
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
    pieces = pieces_of(points, segments, length_name, along) if length_name in length_names(points) else []
    wide = float(figure.get_size_inches()[0]) - _LEFT - _RIGHT
    notes = lay_out(pieces, limits_along(along), wide, _STRIP, lanes=("above",))
    flux, load, strip = _panels(figure, loaded, LANE if notes.lanes["above"] else 0.0)
    _flux_panel(flux, points, along, bounds[0], length_name)
    if load is not None:
        _load_panel(load, points, along)
        style.align_labels(flux, load, reach=0.43)
    _strip_panel(strip, along, length_name)
    draw_pieces(strip, pieces, 0.0, 0.5)
    draw_notes(strip, notes, 0.0, 0.5)
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


def _panels(figure: Figure, loaded: bool, lane: float) -> tuple[Axes, Axes | None, Axes]:
    width, height = (float(edge) for edge in figure.get_size_inches())
    right, top = width - _RIGHT, height - _TOP
    strip = style.place_axes(figure, _LEFT, _BOTTOM, right, _BOTTOM + _STRIP)
    floor = _BOTTOM + _STRIP + _BETWEEN + lane
    if not loaded:
        return style.place_axes(figure, _LEFT, floor, right, top), None, strip
    cut = floor + 0.34 * (top - floor)
    load = style.place_axes(figure, _LEFT, floor, right, cut - 0.12)
    return style.place_axes(figure, _LEFT, cut + 0.06, right, top), load, strip


def _time_axis(axes: Axes, along: Along) -> None:
    linear_axis(axes, "x", limits_along(along), along.label, most=9)


def _bare_time_axis(axes: Axes, along: Along) -> None:
    """Set the time axis of an upper panel: its numbers stand under the strip."""
    _time_axis(axes, along)
    axes.set_xlabel("")
    axes.tick_params(axis="x", labelbottom=False, length=0.0)


def _height_axis(
    axes: Axes, values: Sequence[Floats], scale: Scale, label: str, head: float, most: int
) -> None:
    """Set a vertical axis that holds zero and all values, with `head` of its span left free above.

    Where something is negative (a wall that loses heat) a line marks zero.
    """
    shown = scale(np.concatenate(values))
    largest, least = max(float(np.nanmax(shown)), 0.0), min(float(np.nanmin(shown)), 0.0)
    reach = largest - least if largest > least else 1.0
    linear_axis(axes, "y", (least - min(0.1 * reach, -least), largest + head * reach), label, most=most)
    if least < 0.0:
        axes.axhline(0.0, color=palette.INK, linewidth=0.6, zorder=1.5, gid="zero")


def _flux_panel(axes: Axes, points: Table, along: Along, continuum_bound: float, length_name: str) -> None:
    flux = column(points, _FLUX)
    low, high = column(points, "heat_flux_low_W_m2"), column(points, "heat_flux_high_W_m2")
    shown = [flux, low, high]
    scale = scale_for(np.concatenate(shown), "W/m²")
    _bare_time_axis(axes, along)
    _height_axis(axes, shown, scale, f"stagnation heat flux [{scale.unit}]", 0.22, most=6)
    style.quiet_axes(axes, grid="y", keep=("left", "bottom"))
    top = axes.get_ylim()[1]
    series = {name: column(points, name) for name in (*LIMITS, _RADIATIVE)}
    thin_air = np.isfinite(thin_air_limit(points, FREE_MOLECULAR, continuum_bound, length_name))
    series[FREE_MOLECULAR] = _until_it_leaves(series[FREE_MOLECULAR], thin_air, top / scale.factor)
    rows = thin(flux, low, high, *series.values())
    x = along.places[rows]
    axes.fill_between(
        x, scale(low[rows]), scale(high[rows]), color=palette.WASH, linewidth=0.0, zorder=1, gid="wash"
    )
    labels = Labels(axes)
    for name, (_, _, line) in LIMITS.items():
        axes.plot(x, scale(series[name][rows]), color=palette.GREY, linewidth=0.9, zorder=2, gid=name, **line)  # type: ignore[arg-type]
    axes.plot(x, scale(flux[rows]), color=palette.INK, linewidth=1.9, zorder=3, gid=_FLUX)
    for values in (flux, low, high, *series.values()):
        labels.avoid(x, np.minimum(scale(values[rows]), 2.0 * top))
    aside = _radiative(axes, labels, x, series[_RADIATIVE][rows], flux, scale)
    name_flux(axes, labels, x, flux[rows], scale)
    aside += name_limits(labels, x, scale(flux[rows]), {k: scale(series[k][rows]) for k in LIMITS})
    aside += name_band(labels, x, scale(flux[rows]), scale(low[rows]), scale(high[rows]))
    axes.annotate(
        "\n\n".join(aside), (1.0, 1.0), xytext=(4, 0), xycoords="axes fraction",
        textcoords="offset points", size=SMALL, color=palette.GREY, va="top", annotation_clip=False,
    )  # fmt: skip


def _until_it_leaves(values: Floats, thin_air: np.ndarray, top: float) -> Floats:
    """Return a limit where air is thin, and on from there until it leaves the panel at its top.

    In dense air the free-molecular flux is far above all else; at low speed it would come back into the panel.
    """
    seen = thin_air | (values <= top)
    number = np.cumsum(np.concatenate([[True], seen[1:] != seen[:-1]]))  # of the stretch a point lies in
    kept = seen & np.isin(number, number[thin_air])
    kept[1:] |= kept[:-1].copy() & ~seen[1:]  # one point on either side: the line reaches the edge
    kept[:-1] |= kept[1:].copy() & seen[1:] & ~seen[:-1]
    return np.where(kept, values, np.nan)


def _radiative(
    axes: Axes, labels: Labels, x: Floats, radiative: Floats, flux: Floats, scale: Scale
) -> list[str]:
    """Draw the radiative part, or return that there is next to none, for the margin."""
    if not np.isfinite(radiative).any():
        return []
    peak = float(np.nanmax(radiative))
    if peak <= _SMALL_PART * float(np.nanmax(np.abs(flux))):
        return [
            f"radiative\npart: {'none' if peak == 0.0 else 'at most' + chr(10) + format_quantity(peak, 'W/m²', 2)}"
        ]
    axes.plot(x, scale(radiative), color=palette.ACCENT, linewidth=1.1, zorder=2.5, gid=_RADIATIVE)
    k = int(np.nanargmax(radiative))
    labels.put(x[k], scale(radiative)[k], "radiative", colour=palette.ACCENT, size=SMALL)
    return []


def _load_panel(axes: Axes, points: Table, along: Along) -> None:
    load = column(points, _LOAD)
    scale = scale_for(load, "J/m²")
    _bare_time_axis(axes, along)
    _height_axis(axes, [load], scale, f"heat load\n[{scale.unit}]", 0.12, most=4)
    style.quiet_axes(axes, grid="y")
    rows = thin(load)
    axes.plot(along.places[rows], scale(load[rows]), color=palette.INK, linewidth=1.5, gid=_LOAD)
    last = np.flatnonzero(np.isfinite(load))[-1]
    axes.annotate(
        format_quantity(float(load[last]), "J/m²").replace("-", "\N{MINUS SIGN}"),
        (along.places[last], float(scale(load[last]))),
        xytext=(4, 0),
        textcoords="offset points",
        size=NORMAL,
        weight="bold",
        va="center",
        annotation_clip=False,
    )


def _strip_panel(axes: Axes, along: Along, length_name: str) -> None:
    _time_axis(axes, along)
    axes.set_ylim(0.5, -0.5)
    axes.set_yticks([])
    style.quiet_axes(axes, keep=("bottom",))
    whose = "reference" if length_name == REFERENCE else shorten(length_name, 14)
    axes.annotate(
        f"regimes,\n{whose}", (1.0, 0.5), xytext=(4, 0), xycoords="axes fraction",
        textcoords="offset points", size=SMALL, color=palette.GREY, va="center", annotation_clip=False,
    )  # fmt: skip
