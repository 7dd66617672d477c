"""Contours behind the flight: dynamic pressure and stagnation heat flux in decades."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import contourpy
import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.patches import Patch

from aero.arrays import ArrayLike, Floats, floats
from aero.report import palette, style
from aero.report.bands import Band
from aero.report.labels import Labels
from aero.report.names import Table, column, has_numbers
from aero.report.numbers import format_quantity
from aero.report.style import SMALL

Field = Mapping[str, ArrayLike]
"""`altitude_m` (n,), `air_speed_m_s` (m,) and quantities of shape (n, m)."""

_LINE_KINDS = {  # column -> (dash pattern, symbol in the label, unit)
    "dynamic_pressure_Pa": ((0, (5, 3)), "q", "Pa"),
    "heat_flux_W_m2": ((0, (1.2, 2)), "", "W/m²"),
}


def draw_contours(
    axes: Axes,
    labels: Labels,
    regimes: Sequence[Band],
    patches: Sequence[Patch],
    points: Table,
    field: Field | None,
) -> None:
    """Draw contours, quiet on each band, and label each on the spot farthest from everything else."""
    for name, (dashes, symbol, unit) in _LINE_KINDS.items():
        for level, lines in _levels(axes, name, points, field).items():
            bare = [(None, palette.GREY)]
            colours = [(p, palette.REGIME_HAIR[b.regime]) for p, b in zip(patches, regimes, strict=True)]
            for patch, colour in colours or bare:
                drawn = LineCollection(lines, colors=colour, linewidths=0.7, linestyles=[dashes], zorder=2)
                drawn.set_gid(f"{name}-{level:g}")
                axes.add_collection(drawn, autolim=False)
                if patch is not None:
                    drawn.set_clip_path(patch)
            text = f"{symbol} {format_quantity(level, unit)}".strip()
            _label_contour(axes, labels, regimes, lines, text)


def _levels(axes: Axes, name: str, points: Table, field: Field | None) -> dict[float, list[Floats]]:
    """Return decade levels of a quantity and their lines in km/s and km."""
    if field is not None and name in field:
        height, speed = floats(field["altitude_m"]) / 1e3, floats(field["air_speed_m_s"]) / 1e3
        values = floats(field[name])
    elif name == "dynamic_pressure_Pa" and has_numbers(points, "density_kg_m3"):
        height, speed, values = _dynamic_pressure(axes, points)
    else:
        return {}
    if values.shape != (height.size, speed.size):
        raise ValueError(f"field {name!r} has shape {values.shape}, expected {(height.size, speed.size)}")
    if min(values.shape) < 2:
        return {}
    return _trace(height, speed, values, float(np.nanmax(column(points, name), initial=0.0)))


def _dynamic_pressure(axes: Axes, points: Table) -> tuple[Floats, Floats, Floats]:
    """Return rho V^2/2 over the altitudes flown, the density interpolated in its logarithm."""
    altitude, density = column(points, "altitude_m"), column(points, "density_kg_m3")
    good = np.isfinite(altitude) & (density > 0.0)
    heights, rows = np.unique(altitude[good], return_index=True)
    if heights.size < 2:
        return np.empty(0), np.empty(0), np.empty((0, 0))
    grid = np.linspace(heights[0], heights[-1], 160)
    air = np.exp(np.interp(grid, heights, np.log(density[good][rows])))
    speed = np.linspace(max(axes.get_xlim()[0], 0.0), axes.get_xlim()[1], 160)
    return grid / 1e3, speed, 0.5 * air[:, None] * (1e3 * speed) ** 2


def _trace(height: Floats, speed: Floats, values: Floats, largest: float) -> dict[float, list[Floats]]:
    with np.errstate(divide="ignore", invalid="ignore"):
        powers = np.log10(values)
    powers[~np.isfinite(powers)] = np.nan
    if not np.isfinite(powers).any():
        return {}
    if not largest > 0.0:
        largest = float(np.nanmax(values))
    last = int(np.floor(np.log10(largest))) + 1
    tracer = contourpy.contour_generator(speed, height, np.ma.masked_invalid(powers))
    found = {}
    for power in range(last, last - 4, -1):  # from the first decade above what the flight meets, downwards
        lines = [np.asarray(line, dtype=np.float64) for line in tracer.lines(power)]
        if lines:
            found[10.0**power] = lines
    return found


def _label_contour(
    axes: Axes, labels: Labels, regimes: Sequence[Band], lines: Sequence[Floats], text: str
) -> None:
    """Write the level on its line, along it, where the label fits its band and stands clear of the rest."""
    line = max(lines, key=len)
    places = labels.inches(line[:, 0], line[:, 1])
    edges = [axes.get_ylim()[0], *(band.top / 1e3 for band in regimes), axes.get_ylim()[1]]
    walls = labels.inches([line[0, 0]] * len(edges), edges)[:, 1]
    half = 0.5 * style.text_width(text, SMALL - 0.5) + 0.03
    best, best_gap, best_angle = -1, 0.17, 0.0
    for k in range(2, len(line) - 2):
        rise = places[k + 2] - places[k - 2]
        angle = float(np.arctan2(rise[1], rise[0]))
        across, up = abs(half * np.cos(angle)) + 0.04, abs(half * np.sin(angle)) + 0.06
        if np.abs(walls - places[k, 1]).min() < up or not labels.inside(places[k], across):
            continue
        gap = min(labels.distance(places[k]), 0.8)
        if gap > best_gap:
            best, best_gap, best_angle = k, gap, angle
    if best < 0:
        return
    _write_on_line(axes, regimes, line[best], text, float(np.degrees(best_angle)))
    across, up = abs(half * np.cos(best_angle)) + 0.05, abs(half * np.sin(best_angle)) + 0.05
    x, y = places[best]
    labels.avoid_box((x - across, y - up, x + across, y + up))


def _write_on_line(axes: Axes, regimes: Sequence[Band], place: Floats, text: str, angle: float) -> None:
    band = next((b for b in regimes if b.bottom <= place[1] * 1e3 <= b.top), None)
    axes.text(
        place[0],
        place[1],
        text,
        size=SMALL - 0.5,
        color=palette.REGIME_TEXT[band.regime] if band else palette.GREY,
        rotation=(angle + 90.0) % 180.0 - 90.0,
        rotation_mode="anchor",
        ha="center",
        va="center",
        zorder=3,
        bbox={
            "facecolor": palette.REGIME_COLOURS[band.regime] if band else palette.PAPER,
            "edgecolor": "none",
            "pad": 0.8,
        },
    )
