"""Figure (e): the atmosphere used, in four panels over one altitude axis."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from aero.arrays import Floats
from aero.report import palette, style
from aero.report.labels import Labels
from aero.report.names import Table, column, has_numbers
from aero.report.scales import decade_axis, linear_axis, log_limits, span
from aero.report.style import SMALL
from aero.report.thin import thin

_LEFT, _BOTTOM, _RIGHT, _TOP, _BETWEEN = 0.55, 0.76, 0.22, 0.4, 0.3  # margins [in]
_COLUMN_HEIGHT = 4.0  # in
SPECIES = ("N2", "O2", "O", "N", "Ar", "He", "H")
_SHOWN = {"N2": "N₂", "O2": "O₂"}
_DASHES = {
    "N2": "-", "O2": (0, (5, 1.5)), "O": "-", "N": (0, (1, 1)), "Ar": (0, (3, 1, 1, 1)), "He": (0, (5, 1.5)),
    "H": (0, (1, 1)),
}  # fmt: skip
_LEAST_SHARE = 0.02  # a species that never reaches it lies on the axis and is left out
_PANELS = {  # column -> (label, decades)
    "temperature_K": ("temperature\n[K]", False),
    "density_kg_m3": ("density\n[kg/m³]", True),
    "mean_free_path_m": ("mean free path\n[m]", True),
}


@style.styled
def figure_air(
    air: Table, *, footer: str = "", title: str = "The atmosphere used", size: str = "column"
) -> Figure:
    """Draw temperature, density, mean free path and composition against altitude.

    Parameters
    ----------
    air : table
        `altitude_m`, `temperature_K`, `density_kg_m3`, `mean_free_path_m`, and `n_N2_m3` and so on for
        the composition; a profile or the points of a flight. Panels without numbers are left out.
    footer, title : str
    size : str
        "column" or "slide".

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        If no panel has anything to show.
    """
    known = [name for name in _PANELS if has_numbers(air, name)]
    species = [name for name in SPECIES if has_numbers(air, f"n_{name}_m3")]
    count = len(known) + bool(species)
    if count == 0:
        raise ValueError(
            "nothing to draw: the table has no temperature_K, density_kg_m3 or other column of air"
        )
    figure = style.new_figure(size, _COLUMN_HEIGHT)
    panels = _panels(figure, count)
    altitude = column(air, "altitude_m") / 1e3
    for axes in panels:
        linear_axis(axes, "y", span(altitude, least=5.0, pad=0.02), "altitude [km]")
        style.quiet_axes(axes, grid="both")
    for axes in panels[1:]:
        axes.set_ylabel("")
        axes.tick_params(axis="y", labelleft=False)
    for axes, name in zip(panels, known, strict=False):
        _quantity(axes, name, column(air, name), altitude)
    if species:
        _composition(panels[-1], air, species, altitude)
    style.headline(figure, title)
    style.foot(figure, footer)
    return figure


def _panels(figure: Figure, count: int) -> list[Axes]:
    width, height = (float(edge) for edge in figure.get_size_inches())
    each = (width - _LEFT - _RIGHT - (count - 1) * _BETWEEN) / count
    lefts = [_LEFT + k * (each + _BETWEEN) for k in range(count)]
    return [style.place_axes(figure, left, _BOTTOM, left + each, height - _TOP) for left in lefts]


def _quantity(axes: Axes, name: str, values: Floats, altitude: Floats) -> None:
    label, decades = _PANELS[name]
    if decades:
        decade_axis(axes, "x", log_limits(values), label, most=3)
    else:
        linear_axis(axes, "x", span(values, least=20.0), label, most=4)
    rows = thin(altitude, values)
    axes.plot(
        values[rows], altitude[rows], color=palette.INK, linewidth=1.4, zorder=3, gid=name,
        **style.dot(values, altitude),
    )  # fmt: skip


def _composition(axes: Axes, air: Table, species: list[str], altitude: Floats) -> None:
    """Draw mole fractions, each species named where it is most of the air."""
    linear_axis(axes, "x", (0.0, 100.0), "mole fraction\n[%]", most=4)
    numbers = np.stack([column(air, f"n_{name}_m3") for name in species])
    total = np.nansum(numbers, axis=0)
    with np.errstate(divide="ignore", invalid="ignore"):
        shares = 100.0 * numbers / total
    labels = Labels(axes)
    shown = [k for k in range(len(species)) if np.nanmax(shares[k], initial=0.0) >= 100.0 * _LEAST_SHARE]
    for k in shown:
        rows = thin(altitude, shares[k])
        axes.plot(
            shares[k][rows], altitude[rows], color=_colour(species[k]), linewidth=1.2,
            linestyle=_DASHES[species[k]], zorder=3, gid=f"n_{species[k]}",
            **style.dot(shares[k], altitude),
        )  # fmt: skip
        labels.avoid(shares[k][rows], altitude[rows])
    for k in shown:
        _name_species(labels, species[k], shares[k], altitude)


def _colour(name: str) -> str:
    """Return the accent for atomic oxygen, the gas that most low orbits meet, and ink for the others."""
    return palette.ACCENT if name == "O" else palette.INK


def _name_species(labels: Labels, name: str, share: Floats, altitude: Floats) -> None:
    order = np.argsort(np.where(np.isfinite(share), -share, np.inf), kind="stable")
    for k in order[:: max(1, order.size // 12)][:10]:
        text = _SHOWN.get(name, name)
        sides = ("right", "left", "above", "below")
        if np.isfinite(share[k]) and labels.put(
            float(share[k]), float(altitude[k]), text, colour=_colour(name), size=SMALL, sides=sides
        ):
            return
