"""What the gas meets: temperature, emissivity, accommodation of energy and the share re-emitted diffusely."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from aero.air.state import SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats

OXYGEN_COVERAGE = "oxygen-coverage"
MAXWELL = "maxwell"
SURFACE_MODELS = (MAXWELL, "cll")
"""Gas-surface models a surface may name."""
CATALYSIS: dict[str, float | None] = {"full": 1.0, "partial": None, "none": 0.0}
"""Catalysis of a wall -> share of atoms that recombine on it, None where the file states it."""
LANGMUIR = 7.5e-17  # m3/K, [Pilinski2010]
BARE_FACTOR = (
    2.4  # bare-surface accommodation 2.4 mu/(1 + mu)^2, [Goodman1976] (up to 3.6); value from memory
)
SURFACE_MOLAR_MASS = 60.08e-3  # kg/mol, silica: glass of solar cells; judgement
_OXYGEN = SPECIES.index("O")

# 1-sigma of accommodation against altitude, judgement around the 0.89 at 407 km of [Pilinski2010]:
# entry 0.05, 150-300 km 0.03, 300-450 km 0.05, 450-600 km 0.10, above 0.20; ramps of 50 km at the edges.
_ALTITUDE = np.array([125.0, 175.0, 275.0, 325.0, 425.0, 475.0, 575.0, 625.0]) * 1e3
_SIGMA = np.array([0.05, 0.03, 0.03, 0.05, 0.05, 0.10, 0.10, 0.20])


@dataclass(frozen=True)
class Surface:
    """State of the whole surface.

    Attributes
    ----------
    temperature : float or None [K]
        None means in radiative balance.
    emissivity : float
    energy_accommodation : float or "oxygen-coverage"
        1 means that molecules leave with the wall's temperature.
    diffuse_fraction : float
        Share of molecules re-emitted diffusely (Maxwell), the rest reflect like light.
    model : {"maxwell", "cll"}
        Gas-surface model: Maxwell's, or Cercignani, Lampis and Lord's, which takes the two coefficients below
        instead of the two above.
    normal_energy_accommodation, tangential_momentum_accommodation : float
        Of Cercignani, Lampis and Lord.
    catalysis : {"full", "partial", "none"}
        Whether atoms recombine at the wall.
    recombination : float
        Share of the atoms striking the wall that recombine; 1 when full, 0 when none.

    Notes
    -----
    Accommodation acts on the diffuse share only, so the net heat is diffuse_fraction times
    energy_accommodation times (incident energy less energy at wall temperature).

    Raises
    ------
    ValueError
        If a value lies outside its range.
    """

    temperature: float | None = 300.0
    emissivity: float = 0.85
    energy_accommodation: float | str = 1.0
    diffuse_fraction: float = 1.0
    model: str = MAXWELL
    normal_energy_accommodation: float = 1.0
    tangential_momentum_accommodation: float = 1.0
    catalysis: str = "full"
    recombination: float = 1.0

    def __post_init__(self) -> None:
        if self.temperature is not None and not 0.0 < self.temperature < np.inf:
            raise ValueError(f"temperature is {self.temperature:g} K, expected more than 0 K")
        if not 0.0 < self.emissivity <= 1.0:
            raise ValueError(f"emissivity is {self.emissivity:g}, expected more than 0 and at most 1")
        if not 0.0 <= self.diffuse_fraction <= 1.0:
            raise ValueError(f"diffuse_fraction is {self.diffuse_fraction:g}, expected 0 to 1")
        alpha = self.energy_accommodation
        if isinstance(alpha, str):
            if alpha != OXYGEN_COVERAGE:
                raise ValueError(f"energy_accommodation is '{alpha}', expected 0 to 1 or '{OXYGEN_COVERAGE}'")
        elif not 0.0 <= alpha <= 1.0:
            raise ValueError(f"energy_accommodation is {alpha:g}, expected 0 to 1 or '{OXYGEN_COVERAGE}'")
        self._check_model()

    def _check_model(self) -> None:
        for name, allowed in (("model", SURFACE_MODELS), ("catalysis", tuple(CATALYSIS))):
            if getattr(self, name) not in allowed:
                raise ValueError(f"{name} is '{getattr(self, name)}', expected one of: {', '.join(allowed)}")
        for name in ("normal_energy_accommodation", "tangential_momentum_accommodation", "recombination"):
            value = getattr(self, name)
            high = 2.0 if name == "tangential_momentum_accommodation" else 1.0
            if not 0.0 <= value <= high:
                raise ValueError(f"{name} is {value:g}, expected 0 to {high:g}")
        fixed = CATALYSIS[self.catalysis]
        if fixed is not None and self.recombination != fixed:
            raise ValueError(
                f"recombination is {self.recombination:g} with catalysis '{self.catalysis}', expected {fixed:g}; "
                "it belongs to catalysis 'partial'"
            )


def accommodation(surface: Surface, air: Air) -> Floats:
    """Return the energy accommodation at each point.

    Parameters
    ----------
    surface : Surface
    air : Air

    Returns
    -------
    (...,) array
        Constant, or the oxygen-coverage model.

    Examples
    --------
    >>> from types import SimpleNamespace
    >>> accommodation(Surface(energy_accommodation=0.9), SimpleNamespace(temperature=np.ones(2)))
    array([0.9, 0.9])
    """
    alpha = surface.energy_accommodation
    if isinstance(alpha, str):
        return oxygen_coverage(air.species[..., _OXYGEN], air.temperature, air.molar_mass)
    return np.full(np.shape(air.temperature), alpha)


def oxygen_coverage(oxygen: ArrayLike, temperature: ArrayLike, molar_mass: ArrayLike) -> Floats:
    """Return accommodation from the share of the surface covered by atomic oxygen.

    Parameters
    ----------
    oxygen : (...,) array [1/m3]
        Number density of atomic oxygen.
    temperature : (...,) array [K]
    molar_mass : (...,) array [kg/mol]
        Mean molar mass of the gas, for the bare part of the surface.

    Notes
    -----
    theta = K n_O T/(1 + K n_O T), K = 7.5e-17 m3/K [Pilinski2010]; alpha = theta + (1 - theta) alpha_s with
    alpha_s = 2.4 mu/(1 + mu)^2, mu the mass of a gas molecule over that of a surface molecule (silica,
    judgement) [Goodman1976]. The Langmuir form was fitted to satellites below about 500 km and fails
    above; below about 150 km there is little atomic oxygen and the bare surface it returns is not what
    entry vehicles show: use a number there.

    Examples
    --------
    >>> float(oxygen_coverage(1e20, 1000.0, 0.016)) > 0.93
    True
    """
    pressure = LANGMUIR * floats(oxygen) * floats(temperature)
    covered = pressure / (1.0 + pressure)
    ratio = floats(molar_mass) / SURFACE_MOLAR_MASS
    bare = BARE_FACTOR * ratio / ((1.0 + ratio) * (1.0 + ratio))
    return covered + (1.0 - covered) * bare


def accommodation_uncertainty(altitude: ArrayLike) -> Floats:
    """Return the 1-sigma of energy accommodation at an altitude [m]: judgement, see the table above.

    Examples
    --------
    >>> accommodation_uncertainty([80e3, 220e3, 400e3, 520e3, 800e3])
    array([0.05, 0.03, 0.05, 0.1 , 0.2 ])
    """
    return floats(np.interp(floats(altitude), _ALTITUDE, _SIGMA))
