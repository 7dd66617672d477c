"""Air -> what its molecules do: viscosity, mean free path, the oncoming stream, the shock."""

from __future__ import annotations

from aero.gas.emitted import emitted_free_path, emitted_number_density
from aero.gas.flow import Flow, flow
from aero.gas.free_path import FREE_PATHS, mean_free_path
from aero.gas.heat_capacity import heat_capacity_ratio, sound_speed
from aero.gas.samples import mixed_air, sea_level_air
from aero.gas.shock import NormalShock, free_path_behind_shock, normal_shock, stand_off
from aero.gas.species import free_path_uncertainty, mixture_omega
from aero.gas.viscosity import viscosity, viscosity_at

__all__ = [
    "FREE_PATHS",
    "Flow",
    "NormalShock",
    "emitted_free_path",
    "emitted_number_density",
    "flow",
    "free_path_behind_shock",
    "free_path_uncertainty",
    "heat_capacity_ratio",
    "mean_free_path",
    "mixed_air",
    "mixture_omega",
    "normal_shock",
    "sea_level_air",
    "sound_speed",
    "stand_off",
    "viscosity",
    "viscosity_at",
]
