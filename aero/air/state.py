"""The state of the air at every point, the same for all atmospheres."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from aero.arrays import ArrayLike, Floats, Times
from aero.constants import AVOGADRO, BOLTZMANN

SPECIES = ("N2", "O2", "O", "N", "Ar", "He", "H")  # the order of the last axis everywhere
MOLAR_MASS = np.array([28.0134, 31.9988, 15.9994, 14.0067, 39.948, 4.0026, 1.00797]) * 1e-3
"""kg/mol, in the order of `SPECIES`: U.S. Standard Atmosphere 1976, table 3."""
MOLECULE_MASS = MOLAR_MASS / AVOGADRO
"""kg, in the order of `SPECIES`."""


@dataclass(frozen=True, eq=False)
class Air:
    """Air at rest at each point: what an atmosphere answers.

    Attributes
    ----------
    model : str
        Name of the atmosphere, as in `aero.air.ATMOSPHERES`.
    altitude : (...,) array [m]
        Geodetic (geometric) altitude.
    temperature : (...,) array [K]
        Kinetic temperature.
    pressure : (...,) array [Pa]
    density : (...,) array [kg/m3]
    number_density : (...,) array [1/m3]
        Sum of the species.
    species : (..., 7) array [1/m3]
        Number densities in the order of `SPECIES`; anomalous oxygen counts in O. It may be a transposed
        view of species-major memory, so that one species of all points is contiguous.

    Notes
    -----
    Arrays are read-only. NaN marks points outside the model's range.
    """

    model: str
    altitude: Floats
    temperature: Floats
    pressure: Floats
    density: Floats
    number_density: Floats
    species: Floats

    def __post_init__(self) -> None:
        for name in ("altitude", "temperature", "pressure", "density", "number_density", "species"):
            view = getattr(self, name).view()
            view.flags.writeable = False
            object.__setattr__(self, name, view)

    @property
    def molecule_mass(self) -> Floats:
        """Mean molecular mass, density over number density [kg]."""
        return self.density / self.number_density

    @property
    def molar_mass(self) -> Floats:
        """Mean molar mass [kg/mol]."""
        return self.molecule_mass * AVOGADRO

    @property
    def gas_constant(self) -> Floats:
        """Specific gas constant, k over the mean molecular mass [J/(kg K)]."""
        return BOLTZMANN / self.molecule_mass

    def __str__(self) -> str:
        count = self.altitude.size
        return f"Air({self.model}, {count} point{'' if count == 1 else 's'}; K, Pa, kg/m3, 1/m3)"


class Atmosphere(Protocol):
    """Anything that answers with the air at an altitude, and where asked at a place and date."""

    @property
    def name(self) -> str:
        """Key in `ATMOSPHERES`, such as "standard-1976"."""

    @property
    def needs_place(self) -> bool:
        """Whether latitude, longitude and date are needed."""

    @property
    def jumps(self) -> Floats:
        """Altitudes at which the model's own formulas leave a step [m]."""

    @property
    def altitude_range(self) -> tuple[float, float]:
        """Lowest and highest altitude it answers for [m]."""

    @property
    def description(self) -> str:
        """One sentence for people: model, activity or indices, and the published source."""

    def at(
        self,
        altitude_m: ArrayLike,
        *,
        latitude_deg: ArrayLike | None = None,
        longitude_deg: ArrayLike | None = None,
        utc: Times | np.datetime64 | None = None,
    ) -> Air:
        """Return the air at each point."""

    def uncertainty(self, altitude_m: ArrayLike, *, utc: Times | None = None) -> tuple[Floats, Floats]:
        """Return the relative 1-sigma density uncertainty as (bias, scatter)."""

    def notes(self, altitude_m: ArrayLike | None = None, utc: Times | None = None) -> tuple[str, ...]:
        """Return what a reader should know about this model at these points."""

    def provenance(self) -> dict[str, object]:
        """Return what is needed to make this atmosphere again, as plain JSON values."""
