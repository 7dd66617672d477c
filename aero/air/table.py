"""The user's own atmosphere: a CSV table against altitude."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from aero.air.checks import altitudes
from aero.air.cubic import evaluate, hermite, monotone_slopes
from aero.air.read_table import MOLAR_RANGE, Columns, read_columns
from aero.air.standard_1976 import StandardAtmosphere1976
from aero.air.state import MOLECULE_MASS, SPECIES, Air
from aero.air.uncertainty import msis as _uncertainty
from aero.air.uncertainty import split
from aero.arrays import ArrayLike, Floats, Times, floats
from aero.constants import AVOGADRO, BOLTZMANN
from aero.errors import InputError, choose


def _chords(x: Floats, y: Floats) -> tuple[Floats, Floats]:
    chord = np.diff(y) / np.diff(x)
    return chord, chord


def _monotone(x: Floats, y: Floats) -> tuple[Floats, Floats]:
    slopes = monotone_slopes(x, y)
    return slopes[:-1], slopes[1:]


# Name -> slopes at the left and the right end of each cell; applied to T, ln n_i and ln rho.
INTERPOLATIONS: dict[str, Callable[[Floats, Floats], tuple[Floats, Floats]]] = {
    "monotone-cubic": _monotone,
    "log-linear": _chords,
}


@dataclass(frozen=True)
class TableAtmosphere:
    """An atmosphere read from a CSV of altitude, temperature, density or pressure, and species if given.

    Parameters
    ----------
    path : str or Path
        The table; see `aero.air.read_table.read_columns` for its columns.
    interpolation : str
        Key of `INTERPOLATIONS`: "monotone-cubic" (default) or "log-linear", of temperature and of the
        logarithms of the densities, in altitude. Nothing is extrapolated.
    total_uncertainty : float, optional
        1-sigma of ln(density), the same at all altitudes. Without it the table is taken to be as good as
        NRLMSISE-00 at moderate activity (judgement).

    Notes
    -----
    With species columns their sum is the number density. Without, the number density is p/(kT), or density
    over the mean molecular mass of the 1976 standard at that altitude, and the composition is the 1976
    standard's, scaled to it. What is not given follows: p = n k T, rho = sum(m_i n_i). A species that is 0 at
    one end of an interval falls to it in a straight line, having no logarithm.

    References
    ----------
    [FritschButland1984] for the monotone cubic; [StandardAtmosphere1976] for the composition.
    """

    path: str | Path
    interpolation: str = "monotone-cubic"
    total_uncertainty: float | None = None
    _state: _State = field(init=False, repr=False, compare=False)

    needs_place = False

    def __post_init__(self) -> None:
        choose(self.interpolation, INTERPOLATIONS, "interpolation")
        total = self.total_uncertainty
        if total is not None and not (np.isfinite(total) and total >= 0.0):
            raise InputError(f"total_uncertainty is {total}, expected a number from 0 (0.15 for 15 %)")
        object.__setattr__(self, "_state", _State.build(Path(self.path), self.interpolation))

    @property
    def name(self) -> str:
        """The file's name, as the model of the air."""
        return f"table {self._state.source}"

    @property
    def altitude_range(self) -> tuple[float, float]:
        """First and last altitude of the table [m]."""
        return float(self._state.altitude[0]), float(self._state.altitude[-1])

    @property
    def jumps(self) -> Floats:
        """None: a table is continuous [m]."""
        return np.empty(0)

    @property
    def description(self) -> str:
        """One sentence for people."""
        state = self._state
        composition = "its own species" if state.own_species else "the composition of the 1976 standard"
        return (
            f"table {state.source}, {state.altitude.size} altitudes, {state.altitude[0]:g} to "
            f"{state.altitude[-1]:g} m, {self.interpolation}, with {composition}"
        )

    def at(
        self,
        altitude_m: ArrayLike,
        *,
        latitude_deg: ArrayLike | None = None,  # noqa: ARG002  a table has no place
        longitude_deg: ArrayLike | None = None,  # noqa: ARG002
        utc: Times | np.datetime64 | None = None,  # noqa: ARG002
    ) -> Air:
        """Return the air at altitudes inside the table; place and date are ignored.

        Raises
        ------
        ValueError
            If an altitude lies outside the table.
        """
        altitude = altitudes(altitude_m, self.altitude_range, f"altitude in {self._state.source}")
        return self._state.at(self.name, altitude)

    def uncertainty(self, altitude_m: ArrayLike, *, utc: Times | None = None) -> tuple[Floats, Floats]:  # noqa: ARG002
        """Return the relative 1-sigma density uncertainty as (bias, scatter)."""
        altitude = floats(altitude_m)
        if self.total_uncertainty is None:
            return _uncertainty(altitude)
        return split(np.full(altitude.shape, self.total_uncertainty))

    def notes(self, altitude_m: ArrayLike | None = None, utc: Times | None = None) -> tuple[str, ...]:  # noqa: ARG002
        """Return what a reader of the results should know."""
        out = []
        if not self._state.own_species:
            out.append(
                f"{self._state.source} gives no species: composition of the 1976 standard at each altitude."
            )
        if self.total_uncertainty is None:
            out.append(
                f"{self._state.source} states no uncertainty: taken as that of NRLMSISE-00 at moderate "
                "activity (judgement)."
            )
        if self._state.ignored:
            out.append(f"{self._state.source}: columns not used: {', '.join(self._state.ignored)}.")
        return tuple(out)

    def provenance(self) -> dict[str, object]:
        """Return what is needed to make this atmosphere again."""
        return {
            "model": "table",
            "file": self._state.source,
            "sha256": self._state.digest,
            "interpolation": self.interpolation,
            "total_uncertainty": self.total_uncertainty,
        }


@dataclass(frozen=True, eq=False)
class _State:
    """The table as cubic pieces: temperature, ln rho and ln p (None: from species), species.

    `species` holds ln n where present at both ends, `fading` n itself where at one end only.
    """

    source: str
    digest: str
    altitude: Floats
    temperature: Floats
    log_density: Floats | None
    log_pressure: Floats | None
    species: Floats
    fading: Floats | None
    own_species: bool
    ignored: tuple[str, ...]

    @classmethod
    def build(cls, path: Path, interpolation: str) -> _State:
        columns = read_columns(path)
        species, own = _species(columns)
        _consistent(columns, species)
        x, slopes = columns.altitude, INTERPOLATIONS[interpolation]

        def pieces(y: Floats) -> Floats:
            left, right = slopes(x, y)
            return hermite(y[:-1], y[1:], left, right, np.diff(x))

        return cls(
            source=path.name,
            digest=hashlib.sha256(path.read_bytes()).hexdigest(),
            altitude=x,
            temperature=pieces(columns.temperature),
            log_density=None if columns.density is None else pieces(np.log(columns.density)),
            log_pressure=None if columns.pressure is None else pieces(np.log(columns.pressure)),
            species=np.stack([_log_pieces(n, x, pieces, slopes) for n in species]),
            fading=_fading(species),
            own_species=own,
            ignored=columns.ignored,
        )

    def at(self, model: str, altitude: Floats) -> Air:
        flat = altitude.reshape(-1)
        cell = np.clip(np.searchsorted(self.altitude, flat, side="right") - 1, 0, self.altitude.size - 2)
        t = (flat - self.altitude[cell]) / np.diff(self.altitude)[cell]
        species = np.empty((len(SPECIES), flat.size))
        for row, pieces in zip(species, self.species, strict=True):
            np.exp(evaluate(pieces, cell, t), out=row)
        if self.fading is not None:
            for row, pieces in zip(species, self.fading, strict=True):
                row += evaluate(pieces, cell, t)
        number_density = species.sum(axis=0)
        temperature = evaluate(self.temperature, cell, t)
        if self.log_density is not None:
            density = np.exp(evaluate(self.log_density, cell, t))
        else:
            density = np.sum(species * MOLECULE_MASS[:, None], axis=0)
        if self.log_pressure is not None:
            pressure = np.exp(evaluate(self.log_pressure, cell, t))
        else:
            pressure = number_density * BOLTZMANN * temperature
        shape = altitude.shape
        return Air(
            model=model,
            altitude=altitude,
            temperature=temperature.reshape(shape),
            pressure=pressure.reshape(shape),
            density=density.reshape(shape),
            number_density=number_density.reshape(shape),
            species=np.moveaxis(species.reshape(len(SPECIES), *shape), 0, -1),
        )


def _species(columns: Columns) -> tuple[Floats, bool]:
    """Number densities at the table's altitudes, species first, and whether they are the table's own."""
    if columns.species is not None:
        return columns.species, True
    try:
        standard = StandardAtmosphere1976().at(columns.altitude)
    except ValueError as error:
        raise InputError(
            f"without species the composition is the 1976 standard's: {error}",
            source=columns.source,
            remedy="add species columns such as 'n_N2 [1/m3]'",
        ) from None
    if columns.number_density is not None:
        number = columns.number_density
    elif columns.pressure is not None:
        number = columns.pressure / (BOLTZMANN * columns.temperature)
    else:
        assert columns.density is not None  # the reader demands one of the three
        number = columns.density / standard.molecule_mass
    return np.ascontiguousarray(standard.species.T) * (number / standard.number_density), False


def _consistent(columns: Columns, species: Floats) -> None:
    """Check that what was given twice agrees: pressure with n k T, density with a possible molar mass."""
    number = species.sum(axis=0)
    if columns.pressure is not None:
        ratio = columns.pressure / (number * BOLTZMANN * columns.temperature)
        bad = np.flatnonzero(np.abs(ratio - 1.0) > 0.05)  # 5 %: rounding of any printed table is far below
        if bad.size:
            raise InputError(
                f"pressure is {ratio[bad[0]]:.3g} times n k T from the other columns, expected 0.95 to 1.05",
                source=columns.source,
                line=columns.lines[bad[0]],
                remedy="check the units of pressure, temperature and number densities",
            )
    if columns.density is not None:
        molar = columns.density / number * AVOGADRO * 1e3
        low, high = MOLAR_RANGE
        bad = np.flatnonzero(~((molar >= low) & (molar <= high)))
        if bad.size:
            raise InputError(
                f"density over number density gives a molar mass of {molar[bad[0]]:.3g} g/mol, expected "
                f"{low:g} to {high:g}",
                source=columns.source,
                line=columns.lines[bad[0]],
                remedy="check the units of density, pressure and number densities",
            )


def _log_pieces(
    n: Floats,
    x: Floats,
    pieces: Callable[[Floats], Floats],
    slopes: Callable[[Floats, Floats], tuple[Floats, Floats]],
) -> Floats:
    """Cubic pieces of ln n over each run of altitudes where the species is present; -inf elsewhere."""
    present = n > 0.0
    if present.all():
        return pieces(np.log(n))
    out = np.zeros((4, n.size - 1))
    out[0] = -np.inf
    edges = np.flatnonzero(np.diff(np.concatenate([[False], present, [False]]).astype(np.int8)))
    for start, stop in edges.reshape(-1, 2):  # runs of presence, a handful at most
        if stop - start >= 2:
            run, log_n = x[start:stop], np.log(n[start:stop])
            left, right = slopes(run, log_n)
            out[:, start : stop - 1] = hermite(log_n[:-1], log_n[1:], left, right, np.diff(run))
    return out


def _fading(species: Floats) -> Floats | None:
    """Straight lines in n over the intervals where a species is present at one end only; 0 elsewhere."""
    left, right = species[:, :-1], species[:, 1:]
    one = (left > 0.0) != (right > 0.0)
    if not one.any():
        return None
    out = np.zeros((species.shape[0], 4, species.shape[1] - 1))
    out[:, 0][one] = left[one]
    out[:, 1][one] = (right - left)[one]
    return out
