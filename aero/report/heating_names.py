"""Names of the lines in the heating figure, each where it can be told from the others."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes

from aero.arrays import Floats
from aero.report import palette
from aero.report.labels import SIDES, Labels, dense
from aero.report.numbers import Scale, format_quantity
from aero.report.style import SMALL

FREE_MOLECULAR = "heat_flux_free_molecular_W_m2"
LIMITS = {  # column -> (label, what it is called where the label finds no place, line style)
    FREE_MOLECULAR: ("free-molecular\nlimit", "thin line:", {"linestyle": "-"}),
    "heat_flux_continuum_W_m2": ("continuum\nlimit", "dashed line:", {"linestyle": (0, (4, 2))}),
}
_LEAST_BAND = 0.08  # in: a narrower band is not seen
_TOLD_APART = 0.07  # in: a line that is never farther from the others is named in the margin


def name_flux(axes: Axes, labels: Labels, x: Floats, flux: Floats, scale: Scale) -> None:
    """Name the bridged flux with its peak; with its greatest loss where the wall gains nothing at all."""
    k = int(np.nanargmax(flux))
    text = f"bridged,\npeak {format_quantity(float(flux[k]), 'W/m²', 3)}"
    if flux[k] <= 0.0 and np.nanmin(flux) < 0.0:
        k = int(np.nanargmin(flux))
        text = f"bridged: the wall\nloses up to {format_quantity(-float(flux[k]), 'W/m²', 3)}"
    _name_peak(axes, labels, float(x[k]), float(scale(flux[k])), text)


def _name_peak(axes: Axes, labels: Labels, x: float, y: float, text: str) -> None:
    """Mark the greatest flux and lead from it to its name, where there is room."""
    axes.plot([x], [y], "o", ms=3.6, color=palette.INK, zorder=4, gid="peak")
    for gap in (0.12, 0.3, 0.45, 0.6, 0.8, 1.0):
        for side in SIDES:
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


def name_limits(labels: Labels, x: Floats, flux: Floats, limits: dict[str, Floats]) -> list[str]:
    """Name each limit where it can be told from the other lines; return the rest for the margin."""
    bottom, top = labels.axes.get_ylim()
    aside = []
    for name, (text, called, _) in LIMITS.items():
        values = limits[name]
        if not np.isfinite(values).any():
            continue
        others = [flux, *(v for other, v in limits.items() if other != name)]
        strangers = np.concatenate([_dense_inches(labels, x, np.minimum(v, 2.0 * top)) for v in others])
        inside = np.flatnonzero((values >= bottom) & (values < 0.97 * top) & np.isfinite(x))
        spots = inside[:: max(1, inside.size // 200)]
        places = labels.inches(x[spots], values[spots])
        away = np.array([np.hypot(*(strangers - place).T).min(initial=9.0) for place in places])
        far = np.flatnonzero(away > _TOLD_APART)
        far = far[np.argsort(-away[far], kind="stable")]
        peak = int(np.nanargmax(flux))
        for spot in spots[far[:: max(1, far.size // 25)]].tolist():
            outward = ("right", "left") if spot > peak else ("left", "right")
            sides = (*outward, "above", "above-right", "above-left", "below-right", "below-left")
            if labels.put(
                float(x[spot]), float(values[spot]), text, colour=palette.GREY, size=SMALL, sides=sides,
                strangers=strangers,
            ):  # fmt: skip
                break
        else:
            aside.append(f"{called}\n{text}")
    return aside


def _dense_inches(labels: Labels, x: Floats, values: Floats) -> Floats:
    places = labels.inches(x, values)
    return dense(places) if len(places) else places


def name_band(labels: Labels, x: Floats, flux: Floats, low: Floats, high: Floats) -> list[str]:
    """Name the band on the late flank of the peak, else where it is wide; return its name if it finds no place."""
    bottom, top = labels.axes.get_ylim()
    thick = (high - low) / (top - bottom) * (labels.frame[3] - labels.frame[1])
    seen = np.flatnonzero((thick > _LEAST_BAND) & np.isfinite(x))
    if seen.size == 0:
        return []
    late = seen[seen > int(np.nanargmax(flux))]
    flank = [late[high[late] < share * np.nanmax(high)][:1] for share in (0.75, 0.5, 0.3)]
    some = seen[:: max(1, seen.size // 40)]
    widest = some[np.argsort(-thick[some], kind="stable")]
    for spot in np.concatenate([*flank, widest]).tolist():
        for edge, sides in (
            (high, ("right", "left", "above-right", "above-left", "above")),
            (low, ("right", "left", "below-right", "below-left", "below")),
        ):
            if labels.put(
                float(x[spot]), float(edge[spot]), "95 % band", colour=palette.GREY, size=SMALL, sides=sides
            ):
                return []
    return ["shaded:\n95 % band"]
