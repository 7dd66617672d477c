"""The U.S. Standard Atmosphere 1976, -5 to 1000 km, as an atmosphere."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from aero.air import diffusion_1976 as upper
from aero.air import layers_1976 as lower
from aero.air.checks import altitudes
from aero.air.cubic import evaluate
from aero.air.state import MOLAR_MASS, SPECIES, Air
from aero.air.uncertainty import standard_1976 as _uncertainty
from aero.arrays import ArrayLike, Floats, Times, floats

BLOCK = 16384  # points worked on at once: all their arrays stay in the processor's cache
_INDEX = {name: SPECIES.index(name) for name in ("N2", "O2", "O", "Ar", "He", "H")}
_MASS = MOLAR_MASS * 1e3 / lower.AVOGADRO  # kg a molecule, with the standard's own Avogadro number


@dataclass(frozen=True)
class StandardAtmosphere1976:
    """The U.S. Standard Atmosphere 1976: one mean profile, no place and no date.

    Notes
    -----
    Below 86 km seven layers (`aero.air.layers_1976`), above it the standard's diffusion equations
    (`aero.air.diffusion_1976`), integrated at the first call into cubic pieces of 250 m in temperature and
    ln n. Constants are the standard's own. Below 86 km the species are its sea-level volume fractions of
    N2, O2, Ar and He, enlarged by 3.4e-4 for the gases not kept (CO2, Ne and rarer), so that they add up
    to the number density; density keeps the standard's molar mass. Atomic oxygen begins at 86 km,
    atomic hydrogen at 150 km, and there is no atomic nitrogen. The standard has no sound speed above 86 km.

    References
    ----------
    [StandardAtmosphere1976].

    Examples
    --------
    >>> air = StandardAtmosphere1976().at([0.0, 100e3])
    >>> air.temperature.round(2), air.pressure.round(4)
    (array([288.15, 195.08]), array([1.01325e+05, 3.20000e-02]))
    """

    name: ClassVar[str] = "standard-1976"
    needs_place: ClassVar[bool] = False
    altitude_range: ClassVar[tuple[float, float]] = (-5e3, 1000e3)
    description: ClassVar[str] = (
        "U.S. Standard Atmosphere 1976 (NOAA-S/T 76-1562), a mean mid-latitude profile"
    )

    @property
    def jumps(self) -> Floats:
        """Where the formulas leave a step: atomic oxygen begins at 86 km, hydrogen at 150 km [m]."""
        return np.array([upper.BOTTOM, upper.HYDROGEN_FROM])

    def at(
        self,
        altitude_m: ArrayLike,
        *,
        latitude_deg: ArrayLike | None = None,  # noqa: ARG002  the standard has no place
        longitude_deg: ArrayLike | None = None,  # noqa: ARG002
        utc: Times | np.datetime64 | None = None,  # noqa: ARG002
    ) -> Air:
        """Return the air at geometric altitudes from -5 to 1000 km; place and date are ignored.

        Raises
        ------
        ValueError
            If an altitude lies outside or is not a number.
        """
        altitude = altitudes(altitude_m, self.altitude_range)
        flat = altitude.reshape(-1)
        size = flat.size
        four = np.empty((4, size))
        species = np.empty((len(SPECIES), size))
        for start in range(0, size, BLOCK):
            part = slice(start, min(start + BLOCK, size))
            _fill(flat[part], four[:, part], species[:, part])
        shape = altitude.shape
        temperature, pressure, density, number_density = (row.reshape(shape) for row in four)
        return Air(
            model=self.name,
            altitude=altitude,
            temperature=temperature,
            pressure=pressure,
            density=density,
            number_density=number_density,
            species=np.moveaxis(species.reshape(len(SPECIES), *shape), 0, -1),
        )

    def uncertainty(self, altitude_m: ArrayLike, *, utc: Times | None = None) -> tuple[Floats, Floats]:  # noqa: ARG002
        """Return the 1-sigma of ln density (bias, scatter), taken as the air of a given day and place."""
        return _uncertainty(floats(altitude_m))

    def notes(self, altitude_m: ArrayLike | None = None, utc: Times | None = None) -> tuple[str, ...]:  # noqa: ARG002
        """Return what a reader of the results should know."""
        if altitude_m is None or np.max(floats(altitude_m), initial=-np.inf) < 200e3:
            return ()
        return (
            "Above 200 km the 1976 standard, made for moderate solar activity, is off by a factor of 2 or "
            "more over a solar cycle; nrlmsise-00 with a date and a place does better.",
        )

    def provenance(self) -> dict[str, object]:
        """Return what is needed to make this atmosphere again."""
        return {"model": self.name}


def _fill(altitude: Floats, four: Floats, species: Floats) -> None:
    """Compute one block into `four` (temperature, pressure, density, number density) and `species`."""
    high = altitude >= upper.BOTTOM
    count = np.count_nonzero(high)
    if count == altitude.size:
        _fill_upper(altitude, four, species)
    elif count == 0:
        _fill_lower(altitude, four, species)
    else:
        for where, fill in ((high, _fill_upper), (~high, _fill_lower)):
            chosen = np.flatnonzero(where)
            some_four, some_species = np.empty((4, chosen.size)), np.empty((len(SPECIES), chosen.size))
            fill(altitude.take(chosen), some_four, some_species)
            for row, values in zip(four, some_four, strict=True):
                row[chosen] = values
            for row, values in zip(species, some_species, strict=True):
                row[chosen] = values


def _fill_lower(altitude: Floats, four: Floats, species: Floats) -> None:
    four[0], four[1], four[2], four[3] = lower.layers(altitude)
    np.multiply(lower.FRACTION_7[:, None], four[3], out=species)


def _fill_upper(altitude: Floats, four: Floats, species: Floats) -> None:
    table = upper.table()
    t = (altitude - upper.BOTTOM) * (1.0 / upper.CELL)
    cell = t.astype(np.intp)
    np.minimum(cell, table["N2"].shape[1] - 1, out=cell)  # 1000 km itself closes the last cell
    t -= cell
    temperature, pressure, density, number = four
    temperature[:] = evaluate(table["temperature"], cell, t)
    species[SPECIES.index("N")] = 0.0
    density[:] = 0.0
    number[:] = 0.0
    for name, row in _INDEX.items():
        n = np.exp(evaluate(table[name], cell, t), out=species[row])
        number += n
        density += _MASS[row] * n
    np.multiply(number, lower.BOLTZMANN * temperature, out=pressure)  # eq. 33c: p = sum(n) k T
