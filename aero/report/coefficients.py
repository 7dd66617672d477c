"""Figure (c): a coefficient with both limits, bridge and band, against altitude and Knudsen number.

Both panels share the coefficient's axis and rise towards thinner air, so that they read across.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.bands import Band, altitude_bounds, bands, fill
from aero.report.labels import Labels, dense
from aero.report.names import REFERENCE, Table, column, has_numbers, row_count, shorten, thin_air_limit
from aero.report.scales import decade_axis, linear_axis, log_limits, span
from aero.report.strips import regime_key
from aero.report.style import SMALL
from aero.report.thin import monotone_runs, thin

_LEFT, _BOTTOM, _RIGHT, _TOP, _BETWEEN = 0.62, 0.92, 0.2, 0.38, 0.72  # margins [in]
_COLUMN_HEIGHT, _STRIP = 4.1, 0.09  # in
_LEAST_BAND = 0.08  # in: a narrower band is not seen
_MANY_RUNS = 40  # turns of altitude from which the band is drawn as one envelope
# suffix of the column -> (label, line style); the bridged value comes last, on top
_THIN = "_free_molecular"
_PARTS = {
    "_continuum": ("continuum\nlimit", {"color": palette.GREY, "linewidth": 0.9, "linestyle": (0, (4, 2))}),
    _THIN: ("free-molecular\nlimit", {"color": palette.GREY, "linewidth": 0.9}),
    "": ("bridged", {"color": palette.INK, "linewidth": 1.9}),
}


@style.styled
def figure_coefficients(
    points: Table,
    crossings: Table | None = None,
    *,
    bounds: Sequence[float],
    coefficient: str = "drag",
    length_name: str = REFERENCE,
    results: Table | None = None,
    footer: str = "",
    title: str | None = None,
    size: str = "column",
) -> Figure:
    """Draw one coefficient against altitude and against Knudsen number, side by side.

    Parameters
    ----------
    points : table
        `altitude_m`, `knudsen.LENGTH`, `NAME_coefficient` and any of it with `_free_molecular`,
        `_continuum`, `_low`, `_high`.
    crossings : table, optional
        Fixes the regimes' altitudes.
    bounds : three floats
        Regime bounds in Knudsen number.
    coefficient : str
        "drag", or another NAME of the columns.
    length_name : str
        Length of the Knudsen number.
    results : table, optional
        The user's own runs: `NAME_coefficient`, `altitude_m` or `knudsen.LENGTH` or both, and for error
        bars `NAME_coefficient_low`, `NAME_coefficient_high`.
    footer, title : str
    size : str
        "column" or "slide".

    Returns
    -------
    Figure
    """
    name = f"{coefficient}_coefficient"
    figure = style.new_figure(size, _COLUMN_HEIGHT)
    width, height = (float(edge) for edge in figure.get_size_inches())
    half = 0.5 * (width - _LEFT - _RIGHT - _BETWEEN)
    left = style.place_axes(figure, _LEFT, _BOTTOM, _LEFT + half, height - _TOP)
    right = style.place_axes(figure, width - _RIGHT - half, _BOTTOM, width - _RIGHT, height - _TOP)
    altitude, knudsen = column(points, "altitude_m") / 1e3, column(points, f"knudsen.{length_name}")
    label = f"{coefficient} coefficient [-]"
    values = {suffix: column(points, name + suffix) for suffix in _PARTS}
    values[_THIN] = thin_air_limit(points, name + _THIN, bounds[0], length_name)
    for axes in (left, right):
        linear_axis(axes, "x", _limits(values, points, results, name), label, most=6)
        style.quiet_axes(axes, grid="x")
    linear_axis(left, "y", span(altitude, least=5.0), "altitude [km]")
    whose = "reference length" if length_name == REFERENCE else shorten(length_name, 24)
    decade_axis(right, "y", log_limits(knudsen), f"Knudsen number, {whose} [-]")
    edges = altitude_bounds(points, crossings, bounds, length_name)
    low, high = left.get_ylim()
    _scale(left, [Band(b.regime, b.bottom / 1e3, b.top / 1e3) for b in bands(edges, low * 1e3, high * 1e3)])
    _scale(right, _knudsen_bands(bounds, right.get_ylim()))
    _curves(left, values, points, name, altitude, results, "altitude_m", 1e-3, named=True)
    _curves(right, values, points, name, knudsen, results, f"knudsen.{length_name}", 1.0, named=False)
    style.headline(
        figure, title if title is not None else f"Bridged {coefficient} coefficient between its limits"
    )
    regime_key(figure, bounds, 0.25)
    style.foot(figure, footer)
    return figure


def _limits(
    values: Mapping[str, Floats], points: Table, results: Table | None, name: str
) -> tuple[float, float]:
    shown = [*values.values(), *(column(points, name + suffix) for suffix in ("_low", "_high"))]
    if results is not None:
        shown += [column(results, name + suffix) for suffix in ("", "_low", "_high")]
    return span(np.concatenate(shown), least=0.1, pad=0.07)


def _knudsen_bands(bounds: Sequence[float], limits: tuple[float, float]) -> list[Band]:
    cuts = np.clip([0.0, *palette.check_bounds(bounds), np.inf], *limits)
    return [
        Band(regime, float(a), float(b))
        for regime, a, b in zip(palette.REGIMES, cuts[:-1], cuts[1:], strict=True)
        if b > a
    ]


def _scale(axes: Axes, regimes: Sequence[Band]) -> None:
    """Draw the regimes as a narrow scale along the axis, and faint lines where they change."""
    figure = axes.get_figure(root=True)
    share = _STRIP / float(axes.bbox.width / figure.dpi)  # type: ignore[union-attr]
    for band in regimes:
        axes.add_patch(
            Rectangle(
                (0.0, band.bottom),
                share,
                band.top - band.bottom,
                transform=axes.get_yaxis_transform(),
                zorder=1.5,
                gid=f"scale-{band.regime}",
                **fill(band.regime),
            )
        )
    for band in regimes[1:]:
        axes.axhline(band.bottom, color=palette.FAINT, linewidth=0.8, zorder=0.6)


def _curves(
    axes: Axes,
    values: Mapping[str, Floats],
    points: Table,
    name: str,
    upward: Floats,
    results: Table | None,
    results_column: str,
    factor: float,
    *,
    named: bool,
) -> None:
    low, high = column(points, f"{name}_low"), column(points, f"{name}_high")
    rows = thin(upward, *values.values(), low, high)
    _wash(axes, upward[rows], low[rows], high[rows])
    labels = Labels(axes)
    for suffix, (_, line) in _PARTS.items():
        look = line | style.dot(values[suffix], upward)
        axes.plot(values[suffix][rows], upward[rows], zorder=3, gid=f"curve{suffix or '_bridged'}", **look)  # type: ignore[arg-type]
        labels.avoid(values[suffix][rows], upward[rows])
    _results(axes, labels, results, name, results_column, factor)
    if named:
        _name_curves(axes, labels, values, upward)
        for edge in (low, high):
            labels.avoid(edge[rows], upward[rows])
        _name_wash(labels, low, high, upward, list(values.values()))


def _wash(axes: Axes, upward: Floats, low: Floats, high: Floats) -> None:
    """Fill the band; a flight that comes back to an altitude gets one piece for each way."""
    good = np.isfinite(upward) & np.isfinite(low) & np.isfinite(high)
    upward, low, high = upward[good], low[good], high[good]
    runs = monotone_runs(upward)
    if len(runs) > _MANY_RUNS:
        upward, low, high = _envelope(upward, low, high)
        runs = [slice(0, upward.size)]
    for run in runs:
        axes.fill_betweenx(
            upward[run], low[run], high[run], color=palette.WASH, linewidth=0.0, zorder=1, gid="wash"
        )


def _envelope(upward: Floats, low: Floats, high: Floats) -> tuple[Floats, Floats, Floats]:
    """Return the least and the greatest of a band in 300 steps of the axis."""
    order = np.argsort(upward, kind="stable")
    groups = np.array_split(order, min(300, order.size))
    middle = np.array([upward[g].mean() for g in groups])
    return middle, np.array([low[g].min() for g in groups]), np.array([high[g].max() for g in groups])


def _results(
    axes: Axes, labels: Labels, results: Table | None, name: str, results_column: str, factor: float
) -> None:
    if results is None or row_count(results) == 0 or not has_numbers(results, results_column):
        return
    value, place = column(results, name), column(results, results_column) * factor
    error = None
    if has_numbers(results, f"{name}_low") and has_numbers(results, f"{name}_high"):
        error = np.abs(
            np.stack([value - column(results, f"{name}_low"), column(results, f"{name}_high") - value])
        )
    axes.errorbar(
        value,
        place,
        xerr=error,
        fmt="D",
        markersize=3.4,
        color=palette.ACCENT,
        markerfacecolor=palette.PAPER,
        elinewidth=0.9,
        capsize=2.0,
        zorder=5,
    )
    for x, y in zip(value, place, strict=True):
        if np.isfinite(x) and np.isfinite(y):
            reach = 0.03 * float(np.diff(axes.get_xlim())[0])
            labels.avoid([x - reach, x + reach], [y, y])
    best = int(np.nanargmax(place)) if np.isfinite(place).any() else -1
    if best >= 0:
        labels.put(value[best], place[best], "own runs", colour=palette.ACCENT, size=SMALL)


def _name_curves(axes: Axes, labels: Labels, values: Mapping[str, Floats], upward: Floats) -> None:
    """Name each line where it stands alone: the bridged value midway, each limit where it is not met."""
    bottom, top = axes.get_ylim()
    height = top - bottom
    spots = {
        "_free_molecular": bottom + height * np.array([0.08, 0.15, 0.25, 0.4, 0.8]),
        "_continuum": top - height * np.array([0.08, 0.15, 0.25, 0.4, 0.8]),
        "": bottom + height * np.array([0.5, 0.62, 0.4, 0.3, 0.2, 0.1]),
    }
    for suffix, heights in spots.items():
        text, line = _PARTS[suffix]
        good = np.flatnonzero(np.isfinite(values[suffix]) & np.isfinite(upward))
        weight = "bold" if suffix == "" else "normal"
        for wanted in heights if good.size else ():
            k = good[np.abs(upward[good] - wanted).argmin()]
            spot = (float(values[suffix][k]), float(upward[k]))
            colour = str(line["color"])
            sides = ("left", "right", "above-right", "below-right", "above-left", "below-left")
            if labels.put(*spot, text, colour=colour, size=SMALL, weight=weight, sides=sides):
                break


def _name_wash(labels: Labels, low: Floats, high: Floats, upward: Floats, curves: Sequence[Floats]) -> None:
    """Name the band beside it or, where lines leave room, in it; where it is wide, and clear of the curves."""
    lines = [labels.inches(curve, upward) for curve in curves]
    strangers = np.concatenate([np.empty((0, 2)), *(dense(line) for line in lines if len(line))])
    left, right = labels.axes.get_xlim()
    wide = (high - low) / (right - left) * (labels.frame[2] - labels.frame[0]) > _LEAST_BAND
    good = np.flatnonzero(wide & np.isfinite(upward))
    some = good[:: max(1, good.size // 60)]
    order = some[np.argsort((low - high)[some], kind="stable")].tolist()
    for edges in ((low, high), (high, low)):  # outside first; then inside, from its edges on
        for k in order:
            for edge, side in zip(edges, ("left", "right"), strict=True):
                if labels.put(
                    float(edge[k]), float(upward[k]), "95 % band", colour=palette.GREY, size=SMALL,
                    sides=(side,), strangers=strangers,
                ):  # fmt: skip
                    return
