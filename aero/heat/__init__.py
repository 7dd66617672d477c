"""Heating of the stagnation point and over the body: one limit a file, the wall's balance, bundles of all."""

from __future__ import annotations

from aero.heat.catalysis import catalysis_of, catalytic_factor, recombined_share
from aero.heat.compare import compare_convective
from aero.heat.convective import (
    CONVECTIVE,
    Correlation,
    convective_flux,
    convective_sigma,
    hot_wall_factor,
    wall_enthalpy,
)
from aero.heat.distribution import SurfaceHeating, surface_heating
from aero.heat.effective_radius import HeatingRadius, effective_nose_radius, heating_radius
from aero.heat.fay_riddell import FayRiddell, dissociation_share, fay_riddell
from aero.heat.free_molecular import element_energy_fluxes, energy_fluxes, free_molecular_flux
from aero.heat.lees import hemisphere_ratio, sphere_cone_ratio
from aero.heat.local import SURFACE_METHODS
from aero.heat.radiative import RADIATIVE_VALIDITY, radiative_flux, radiative_sigma, radiative_validity
from aero.heat.recombination import recombination_flux
from aero.heat.refine import refine
from aero.heat.stagnation import Stagnation, bridged_flux, continuum_weight, stagnation
from aero.heat.wall import radiative_wall

__all__ = [
    "CONVECTIVE",
    "RADIATIVE_VALIDITY",
    "SURFACE_METHODS",
    "Correlation",
    "FayRiddell",
    "HeatingRadius",
    "Stagnation",
    "SurfaceHeating",
    "bridged_flux",
    "catalysis_of",
    "catalytic_factor",
    "compare_convective",
    "continuum_weight",
    "convective_flux",
    "convective_sigma",
    "dissociation_share",
    "effective_nose_radius",
    "element_energy_fluxes",
    "energy_fluxes",
    "fay_riddell",
    "free_molecular_flux",
    "heating_radius",
    "hemisphere_ratio",
    "hot_wall_factor",
    "radiative_flux",
    "radiative_sigma",
    "radiative_validity",
    "radiative_wall",
    "recombination_flux",
    "recombined_share",
    "refine",
    "sphere_cone_ratio",
    "stagnation",
    "surface_heating",
    "wall_enthalpy",
]
