"""The call of pymsis: a track of points with their indices in, its output as `Air` out."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from aero.air.activity import Indices
from aero.air.state import SPECIES, Air
from aero.arrays import Floats, Times, floats
from aero.constants import BOLTZMANN

# Columns of pymsis's output
_MASS, _TEMPERATURE, _ANOMALOUS_O = 0, 10, 8
_COLUMN = {"N2": 1, "O2": 2, "O": 3, "N": 7, "Ar": 6, "He": 4, "H": 5}


@dataclass(frozen=True, eq=False)
class Question:
    """What the model is asked: a track of points with their indices.

    Attributes
    ----------
    altitude : (...,) array [m]
    latitude, longitude : (n,) arrays [deg]
    dates : (n,) array of UTC datetimes
    indices : Indices
    """

    altitude: Floats
    latitude: Floats
    longitude: Floats
    dates: Times
    indices: Indices


def run(number: float, question: Question) -> Floats:
    """Call pymsis once for each geomagnetic mode present; return its (n, 11) output in double precision."""
    count = question.altitude.size
    if count == 0:
        return np.empty((0, 11))
    storm = question.indices.storm
    if storm.all() or not storm.any():
        return _call(number, question, slice(None), bool(storm[0]))
    out = np.empty((count, 11))
    for mode in (False, True):
        part = np.flatnonzero(storm == mode)
        out[part] = _call(number, question, part, mode)
    return out


def _call(number: float, question: Question, part: Any, storm: bool) -> Floats:
    import pymsis

    indices = question.indices
    height = question.altitude.reshape(-1)[part] * 1e-3
    # Equal lengths of everything make a track; with all indices given nothing is looked up or fetched.
    out = pymsis.calculate(
        question.dates[part],
        question.longitude[part],
        question.latitude[part],
        height,
        indices.f107[part],
        indices.f107a[part],
        indices.ap[part],
        version=number,
        geomagnetic_activity=-1 if storm else 1,
    )
    if out.shape != (height.size, 11):
        raise RuntimeError(f"pymsis answered with shape {out.shape} for {height.size} points of a track")
    return floats(out)


def to_air(name: str, altitude: Floats, out: Floats) -> Air:
    """Turn pymsis's output (n, 11) into `Air` of the altitudes' shape; anomalous oxygen goes into O."""
    species = np.empty((len(SPECIES), altitude.size))
    for row, label in enumerate(SPECIES):
        species[row] = out[:, _COLUMN[label]]
    # Where the model answers at all, NaN means that it has none of a species at this height.
    species[np.isnan(species) & np.isfinite(species[SPECIES.index("N2")])] = 0.0
    species[SPECIES.index("O")] += np.nan_to_num(out[:, _ANOMALOUS_O], nan=0.0)
    number_density = species.sum(axis=0)
    temperature = np.ascontiguousarray(out[:, _TEMPERATURE])
    shape = altitude.shape
    return Air(
        model=name,
        altitude=altitude,
        temperature=temperature.reshape(shape),
        pressure=(number_density * BOLTZMANN * temperature).reshape(shape),
        density=np.ascontiguousarray(out[:, _MASS]).reshape(shape),
        number_density=number_density.reshape(shape),
        species=np.moveaxis(species.reshape(len(SPECIES), *shape), 0, -1),
    )
