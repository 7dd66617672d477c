"""Contours behind the flight: dynamic pressure and stagnation heat flux in decades.

Labels come first; then each contour is drawn where no label stands, so that nothing lies under a text.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import contourpy
import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection

from aero.arrays import ArrayLike, Floats, floats
from aero.report import palette, style
from aero.report.bands import Band
from aero.report.labels import Labels, Tilted, dense
from aero.report.names import Table, column, has_numbers
from aero.report.numbers import format_quantity
from aero.report.style import SMALL

Field = Mapping[str, ArrayLike]
"""`altitude_m` (n,), `air_speed_m_s` (m,) and quantities of shape (n, m)."""

_LINE_KINDS = {  # column -> (dash pattern, symbol in the label, unit)
    "dynamic_pressure_Pa": ((0, (5, 3)), "q", "Pa"),
    "heat_flux_W_m2": ((0, (1.2, 2)), "", "W/m²"),
}
_SHORTEST = 0.8  # in: what is shorter is a scrap, such as the rim of a hole in the field
_STEP = 0.02  # in, between the points of a drawn contour
_ROOM = (0.17, 0.1)  # in, between a contour's label and the flight or other labels: wanted, least


@dataclass
class _Level:
    """One level of one quantity: name, dashes, label, and lines as places in inches on the figure."""

    gid: str
    dashes: tuple[float, tuple[float, ...]]
    text: str
    lines: list[Floats]


def draw_contours(
    axes: Axes, labels: Labels, regimes: Sequence[Band], points: Table, field: Field | None
) -> None:
    """Draw contours, quiet on each band; a level that finds no place for its label is left out."""
    levels = [
        _Level(f"{name}-{level:g}", dashes, f"{symbol} {format_quantity(level, unit)}".strip(), lines)
        for name, (dashes, symbol, unit) in _LINE_KINDS.items()
        for level, found in _levels(axes, name, points, field).items()
        if (lines := _worth_drawing(labels, found))
    ]
    gaps: list[Tilted] = labels.written
    named = []
    for level in levels:
        others = [line for other in levels if other is not level for line in other.lines]
        gap = _label(axes, labels, regimes, level, np.concatenate([np.empty((0, 2)), *others]))
        if gap is not None:
            named.append(level)
            gaps.append(gap)
    for level in named:
        _draw(axes, regimes, level, gaps)


def _levels(axes: Axes, name: str, points: Table, field: Field | None) -> dict[float, list[Floats]]:
    """Return decade levels of a quantity and their lines in km/s and km."""
    largest = float(np.nanmax(column(points, name), initial=0.0))
    if field is not None and name in field:
        height, speed = floats(field["altitude_m"]), floats(field["air_speed_m_s"])
        values = floats(field[name])
        if values.shape != (height.size, speed.size):
            raise ValueError(f"field {name!r} has shape {values.shape}, expected {(height.size, speed.size)}")
        if min(values.shape) < 2:
            return {}
        if name != "dynamic_pressure_Pa":
            return _trace(height / 1e3, speed / 1e3, values, largest)
        return _dynamic_pressure(axes, height, 2.0 * values[:, -1] / speed[-1] ** 2, largest)
    if name == "dynamic_pressure_Pa" and has_numbers(points, "density_kg_m3"):
        return _dynamic_pressure(axes, column(points, "altitude_m"), column(points, "density_kg_m3"), largest)
    return {}


def _decades(largest: float) -> list[float]:
    """Return the first decade above what the flight meets, and the three below it."""
    last = int(np.floor(np.log10(largest))) + 1
    return [10.0**power for power in range(last, last - 4, -1)]


def _dynamic_pressure(
    axes: Axes, altitude: Floats, density: Floats, largest: float
) -> dict[float, list[Floats]]:
    """Return where rho V^2/2 has each level: V over altitude, the density interpolated in its logarithm."""
    good = np.isfinite(altitude) & (density > 0.0)
    heights, rows = np.unique(altitude[good], return_index=True)
    if heights.size < 2:
        return {}
    grid = np.linspace(heights[0], heights[-1], 300)
    air = np.exp(np.interp(grid, heights, np.log(density[good][rows])))
    fastest = max(axes.get_xlim()[1], 0.0) * 1e3
    if not largest > 0.0:
        largest = float(0.5 * air.max() * fastest**2)
    if not largest > 0.0:
        return {}
    return {level: [np.column_stack([np.sqrt(2.0 * level / air), grid]) / 1e3] for level in _decades(largest)}


def _trace(height: Floats, speed: Floats, values: Floats, largest: float) -> dict[float, list[Floats]]:
    with np.errstate(divide="ignore", invalid="ignore"):
        powers = np.log10(values)
    powers[~np.isfinite(powers)] = np.nan
    if not np.isfinite(powers).any():
        return {}
    if not largest > 0.0:
        largest = float(np.nanmax(values))
    tracer = contourpy.contour_generator(speed, height, np.ma.masked_invalid(powers))
    return {
        level: [np.asarray(line, dtype=np.float64) for line in tracer.lines(np.log10(level))]
        for level in _decades(largest)
    }


def _worth_drawing(labels: Labels, lines: Sequence[Floats]) -> list[Floats]:
    """Return lines as dense places in inches, cut to the axes, without those too short to be read."""
    left, bottom, right, top = labels.frame
    kept = []
    for line in lines:
        places = labels.inches(line[:, 0], line[:, 1])
        if len(places) < 2:
            continue
        # far outside the frame a line may be very long: only what is near needs to be dense
        near = np.clip(places, (left - 1.0, bottom - 1.0), (right + 1.0, top + 1.0))
        places = dense(near, _STEP)
        inside = (
            (places[:, 0] >= left)
            & (places[:, 0] <= right)
            & (places[:, 1] >= bottom)
            & (places[:, 1] <= top)
        )
        kept += [run for run in _runs(places, inside) if _STEP * len(run) >= _SHORTEST]
    return kept


def _runs(places: Floats, wanted: np.ndarray) -> list[Floats]:
    """Return the stretches of a line in which `wanted` holds."""
    edges = np.flatnonzero(np.diff(np.concatenate([[False], wanted, [False]]).astype(np.int8)))
    return [places[a:b] for a, b in zip(edges[::2], edges[1::2], strict=True) if b - a > 1]


def _label(
    axes: Axes, labels: Labels, regimes: Sequence[Band], level: _Level, others: Floats
) -> Tilted | None:
    """Write the level on its line, along it, where the label fits its band and stands clear of the rest."""
    half = 0.5 * style.text_width(level.text, SMALL - 0.5) + 0.03
    edges = [axes.get_ylim()[0], *(band.top / 1e3 for band in regimes), axes.get_ylim()[1]]
    walls = labels.inches([axes.get_xlim()[0]] * len(edges), edges)[:, 1]
    for room in _ROOM:
        best: tuple[float, Floats, float] | None = None
        for line in level.lines:
            for k in range(4, len(line) - 4, 3):
                rise = line[k + 4] - line[k - 4]
                angle = float(np.arctan2(rise[1], rise[0]))
                across, up = abs(half * np.cos(angle)) + 0.04, abs(half * np.sin(angle)) + 0.06
                if np.abs(walls - line[k, 1]).min() < up or not labels.inside(line[k], across):
                    continue
                gap = min(labels.distance(line[k]), 0.8)
                if gap < room:
                    continue
                if len(others):
                    gap = min(gap, 0.1 + 2.0 * float(np.hypot(*(others - line[k]).T).min()))
                if best is None or gap > best[0]:
                    best = gap, line[k], angle
        if best is not None:
            _, place, angle = best
            _write_on_line(axes, labels, regimes, place, level.text, angle)
            across, up = abs(half * np.cos(angle)) + 0.02, abs(half * np.sin(angle)) + 0.05
            labels.avoid_box((place[0] - across, place[1] - up, place[0] + across, place[1] + up))
            return Tilted(float(place[0]), float(place[1]), half, 0.06, angle)
    return None


def _write_on_line(
    axes: Axes, labels: Labels, regimes: Sequence[Band], place: Floats, text: str, angle: float
) -> None:
    x, y = labels.from_inches(place[None, :])[0]
    band = next((b for b in regimes if b.bottom <= y * 1e3 <= b.top), None)
    axes.text(
        x,
        y,
        text,
        size=SMALL - 0.5,
        color=palette.REGIME_TEXT[band.regime] if band else palette.GREY,
        rotation=(np.degrees(angle) + 90.0) % 180.0 - 90.0,
        rotation_mode="anchor",
        ha="center",
        va="center_baseline",
        zorder=3,
    )


def _draw(axes: Axes, regimes: Sequence[Band], level: _Level, gaps: Sequence[Tilted]) -> None:
    """Draw a level's lines where no label stands, in the quiet colour of the band they pass."""
    labels = Labels(axes)
    pieces, colours = [], []
    for line in level.lines:
        free = ~np.any([gap.holds(line) for gap in gaps], axis=0) if gaps else np.ones(len(line), dtype=bool)
        for run in _runs(line, free):
            data = labels.from_inches(run)
            bare = [(-np.inf, np.inf, palette.GREY)]
            spans = [(b.bottom / 1e3, b.top / 1e3, palette.REGIME_HAIR[b.regime]) for b in regimes]
            for low, high, colour in spans or bare:
                found = _runs(data, (data[:, 1] >= low) & (data[:, 1] <= high))
                pieces += found
                colours += [colour] * len(found)
    if not pieces:
        return
    drawn = LineCollection(pieces, colors=colours, linewidths=0.7, linestyles=[level.dashes], zorder=2)
    drawn.set_gid(level.gid)
    axes.add_collection(drawn, autolim=False)
