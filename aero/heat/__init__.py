"""Heating of the stagnation point: one limit a file, the wall's own balance, and the bundle of all."""

from __future__ import annotations

from aero.heat.convective import (
    CONVECTIVE,
    Correlation,
    convective_flux,
    convective_sigma,
    hot_wall_factor,
    wall_enthalpy,
)
from aero.heat.free_molecular import energy_fluxes, free_molecular_flux
from aero.heat.radiative import RADIATIVE_VALIDITY, radiative_flux, radiative_sigma, radiative_validity
from aero.heat.stagnation import Stagnation, bridged_flux, continuum_weight, stagnation
from aero.heat.wall import radiative_wall

__all__ = [
    "CONVECTIVE",
    "RADIATIVE_VALIDITY",
    "Correlation",
    "Stagnation",
    "bridged_flux",
    "continuum_weight",
    "convective_flux",
    "convective_sigma",
    "energy_fluxes",
    "free_molecular_flux",
    "hot_wall_factor",
    "radiative_flux",
    "radiative_sigma",
    "radiative_validity",
    "radiative_wall",
    "stagnation",
    "wall_enthalpy",
]
