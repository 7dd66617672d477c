"""Altitude, place and date in, the state of the air out.

`ATMOSPHERES` lists the models by name; `TableAtmosphere` reads the user's own table. All answer `.at(...)`
with an `Air`. Names are imported when first used: a model that is not asked costs nothing.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from aero.air.state import MOLAR_MASS, MOLECULE_MASS, SPECIES, Air, Atmosphere

if TYPE_CHECKING:
    from aero.air.activity import ACTIVITIES, LEVELS
    from aero.air.msis import Msis
    from aero.air.registry import ATMOSPHERES, Model
    from aero.air.space_weather import read_space_weather
    from aero.air.standard_1976 import StandardAtmosphere1976
    from aero.air.table import INTERPOLATIONS, TableAtmosphere

_HOME = {
    "ACTIVITIES": "activity",
    "ATMOSPHERES": "registry",
    "INTERPOLATIONS": "table",
    "LEVELS": "activity",
    "Model": "registry",
    "Msis": "msis",
    "StandardAtmosphere1976": "standard_1976",
    "TableAtmosphere": "table",
    "read_space_weather": "space_weather",
}
__all__ = [
    "ACTIVITIES",
    "ATMOSPHERES",
    "INTERPOLATIONS",
    "LEVELS",
    "MOLAR_MASS",
    "MOLECULE_MASS",
    "SPECIES",
    "Air",
    "Atmosphere",
    "Model",
    "Msis",
    "StandardAtmosphere1976",
    "TableAtmosphere",
    "read_space_weather",
]


def __getattr__(name: str) -> object:
    if name not in _HOME:
        raise AttributeError(f"module 'aero.air' has no attribute '{name}'")
    return getattr(importlib.import_module(f"aero.air.{_HOME[name]}"), name)
