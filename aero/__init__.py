"""Gas regimes, drag and heating along a flight through thin air."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from aero.air import Air, Msis, StandardAtmosphere1976, TableAtmosphere
    from aero.body import Vehicle, read_vehicle
    from aero.errors import InputError
    from aero.flight import fly
    from aero.regime import knudsen, regime
    from aero.survey import Settings, Survey, point, survey
    from aero.trajectory import Trajectory, read_trajectory

__version__ = "0.1.0"

_HOME = {
    "Air": "air",
    "InputError": "errors",
    "Msis": "air",
    "Settings": "survey",
    "StandardAtmosphere1976": "air",
    "Survey": "survey",
    "TableAtmosphere": "air",
    "Trajectory": "trajectory",
    "Vehicle": "body",
    "fly": "flight",
    "knudsen": "regime",
    "point": "survey",
    "read_trajectory": "trajectory",
    "read_vehicle": "body",
    "regime": "regime",
    "survey": "survey",
}
__all__ = [
    "Air",
    "InputError",
    "Msis",
    "Settings",
    "StandardAtmosphere1976",
    "Survey",
    "TableAtmosphere",
    "Trajectory",
    "Vehicle",
    "__version__",
    "fly",
    "knudsen",
    "point",
    "read_trajectory",
    "read_vehicle",
    "regime",
    "survey",
]


def __getattr__(name: str) -> object:
    # Names are fetched when first used, so that `import aero` and `aero --help` start at once.
    if name not in _HOME:
        raise AttributeError(f"module 'aero' has no attribute '{name}'")
    home = importlib.import_module(f"aero.{_HOME[name]}")
    # Where a room is called like its function, the room itself answers the call (aero.callable_module).
    value = home if name == _HOME[name] else getattr(home, name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted(__all__)
