"""The method of each segment, with its reason and where another takes over."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from aero.arrays import Floats
from aero.regime import METHODS, Cuts, advise
from aero.regime.method import majority, sentence


def segment_methods(
    cuts: Cuts,
    names: Sequence[str],
    columns: dict[str, np.ndarray],
    time: Floats,
    bounds: Sequence[float],
    between_samples: Callable[[Floats], dict[str, np.ndarray]],
) -> tuple[list[str], list[str]]:
    """Return the method and the reason of each segment.

    Parameters
    ----------
    cuts : Cuts
    names : sequence of str
        Names of the lengths, in the order of `cuts.length`.
    columns : dict of (n,) arrays
        Computed columns at the samples.
    time : (n,) array [s]
    bounds : sequence of three floats
    between_samples : callable
        Times -> the same columns there, for segments that fall between two samples.

    Notes
    -----
    The method is the one that carries most of the segment's heat load, or most of its time where there is
    none; others that part of the segment calls for are named in the reason.
    """
    weight = _weights(time, columns["heat_flux_W_m2"])
    empty = np.flatnonzero(cuts.first >= cuts.last)
    middle = between_samples(0.5 * (cuts.start[empty] + cuts.end[empty])) if empty.size else {}
    position = {int(segment): k for k, segment in enumerate(empty)}
    advice = {name: _advise(name, columns, bounds) for name in names}
    methods, reasons = [], []
    for segment in range(cuts.length.size):
        name = names[cuts.length[segment]]
        if segment in position:
            rows = slice(position[segment], position[segment] + 1)
            method, why = (a[rows] for a in _advise(name, middle, bounds))
            best, reason, others = majority(method, why, np.ones(1))
        else:
            rows = slice(int(cuts.first[segment]), int(cuts.last[segment]))
            method, why = (a[rows] for a in advice[name])
            best, reason, others = majority(method, why, weight[rows])
        text = sentence(reason, bounds)
        if others:
            text += f"; part of it calls for {' and '.join(METHODS[m] for m in others)}"
        methods.append(METHODS[best])
        reasons.append(text)
    return methods, reasons


def _advise(
    name: str, columns: dict[str, np.ndarray], bounds: Sequence[float]
) -> tuple[np.ndarray, np.ndarray]:
    return advise(
        columns[f"knudsen.{name}"], columns["knudsen_stand_off"], columns[f"knudsen_emitted.{name}"], bounds
    )


def _weights(time: Floats, flux: Floats) -> Floats:
    """Return what each sample counts: its time, times its heat flux where there is one."""
    step = np.gradient(time)
    heat = np.where(np.isfinite(flux) & (flux > 0.0), flux, 0.0)
    return step * heat if heat.any() else step
