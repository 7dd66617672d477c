"""The points table: its columns, in order, and what each of them means."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from aero.air.state import SPECIES


@dataclass(frozen=True)
class Column:
    """One column: its name, its unit for people, and what it means."""

    name: str
    unit: str
    meaning: str


_BEFORE = (
    Column("time_s", "s", "time in the trajectory's own count"),
    Column("utc", "", "date and time, UTC"),
    Column("altitude_m", "m", "geodetic altitude"),
    Column("air_speed_m_s", "m/s", "speed relative to the co-rotating air"),
    Column("latitude_deg", "deg", "geodetic latitude"),
    Column("longitude_deg", "deg", "longitude, east positive"),
    Column("flight_path_angle_deg", "deg", "angle of the velocity above the horizontal"),
    Column("angle_of_attack_deg", "deg", "angle of attack"),
    Column("temperature_K", "K", "air temperature"),
    Column("pressure_Pa", "Pa", "air pressure"),
    Column("density_kg_m3", "kg/m³", "air density"),
    Column("number_density_m3", "1/m³", "molecules and atoms in a cubic metre"),
    Column("molar_mass_kg_mol", "kg/mol", "mean molar mass"),
    Column("mean_free_path_m", "m", "free-stream mean free path, definition as chosen"),
    Column("viscosity_Pa_s", "Pa s", "viscosity of the free stream"),
    Column("sound_speed_m_s", "m/s", "speed of sound"),
    Column("mach", "1", "Mach number"),
    Column("speed_ratio", "1", "speed over the most probable molecular speed"),
    Column("dynamic_pressure_Pa", "Pa", "dynamic pressure"),
    Column("reynolds", "1", "free-stream Reynolds number on the reference length"),
    Column(
        "reynolds_stagnation",
        "1",
        "Re0: density and speed of the free stream, viscosity at total temperature",
    ),
    Column("cheng", "1", "Cheng's parameter M² C*/Re on the reference length"),
    Column("knudsen_stand_off", "1", "free path behind a normal shock over the shock stand-off"),
)
_PER_LENGTH = (
    Column("knudsen.{}", "1", "free-stream mean free path over the length"),
    Column("regime.{}", "", "regime by the bounds"),
    Column("knudsen_shock.{}", "1", "free path behind a normal shock over the length"),
    Column("knudsen_emitted.{}", "1", "path of an oncoming molecule among re-emitted ones over the length"),
)
_AFTER = (
    Column("wall_temperature_K", "K", "wall temperature"),
    Column("drag_coefficient", "1", "bridged drag coefficient on the reference area"),
    Column("drag_coefficient_free_molecular", "1", "free-molecular limit"),
    Column("drag_coefficient_continuum", "1", "continuum limit"),
    Column("drag_bridge", "1", "F in C = C_continuum + F (C_free_molecular - C_continuum)"),
    Column("drag_coefficient_low", "1", "lower end of the 95 % band"),
    Column("drag_coefficient_high", "1", "upper end of the 95 % band"),
    Column("lift_coefficient", "1", "bridged lift coefficient on the reference area"),
    Column("ballistic_coefficient_kg_m2", "kg/m²", "mass over drag coefficient times area"),
    Column("drag_deceleration_m_s2", "m/s²", "drag over mass"),
    Column("heat_flux_W_m2", "W/m²", "stagnation heat flux: bridged convective plus radiative"),
    Column("heat_flux_free_molecular_W_m2", "W/m²", "free-molecular limit"),
    Column("heat_flux_continuum_W_m2", "W/m²", "continuum limit, hot wall"),
    Column("heat_flux_radiative_W_m2", "W/m²", "shock-layer radiation"),
    Column("heat_flux_low_W_m2", "W/m²", "lower end of the 95 % band"),
    Column("heat_flux_high_W_m2", "W/m²", "upper end of the 95 % band"),
    Column("heat_load_J_m2", "J/m²", "heat flux summed over time from the first point"),
)
_SPECIES = tuple(Column(f"n_{s}_m3", "1/m³", f"number density of {s}") for s in SPECIES)


SIDESLIP = Column("sideslip_deg", "deg", "sideslip")
"""Stands in the table of a vehicle that states a moment point, and of a trajectory that states sideslip."""
_ATTITUDE = (
    SIDESLIP,
    Column("axial_force_coefficient", "1", "bridged axial force coefficient, positive towards the rear"),
    Column("normal_force_coefficient", "1", "bridged normal force coefficient, positive upwards"),
    Column("side_force_coefficient", "1", "bridged side force coefficient, positive to the right"),
    Column("roll_moment_coefficient", "1", "bridged roll moment coefficient about the moment point"),
    Column("pitch_moment_coefficient", "1", "bridged pitch moment coefficient, positive nose up"),
    Column("yaw_moment_coefficient", "1", "bridged yaw moment coefficient, positive nose to the right"),
    *(
        Column(f"{name}_{kind}", "1", text)
        for kind, text in (
            ("free_molecular", "its free-molecular limit"),
            ("continuum", "its continuum limit"),
            ("local", "the same by the local bridge, one fraction an element"),
        )
        for name in ("axial_force_coefficient", "normal_force_coefficient", "pitch_moment_coefficient")
    ),
    Column("centre_of_pressure_m", "m", "where the normal force acts, forward of the moment point"),
    Column("centre_of_pressure_local_m", "m", "the same by the local bridge"),
    Column(
        "pitch_stability_per_rad",
        "1/rad",
        "slope of the pitch moment over angle of attack; negative is stable",
    ),
    Column("pitch_stability_local_per_rad", "1/rad", "the same by the local bridge"),
    Column("projected_area_m2", "m²", "surface that the flow reaches, projected along it"),
)


def point_columns(lengths: Sequence[str], *, attitude: bool = False) -> list[Column]:
    """Return the columns of the points table for the named lengths, `reference` among them.

    With `attitude`, those of a vehicle that states a moment point are among them.
    """
    each = [Column(c.name.format(n), c.unit, f"{c.meaning} '{n}'") for n in lengths for c in _PER_LENGTH]
    return [*_BEFORE, *each, *_AFTER, *(_ATTITUDE if attitude else ()), *_SPECIES]


def free_name(name: str, taken: Iterable[str]) -> str:
    """Return `input.NAME`, with a number behind it where that is taken.

    Examples
    --------
    >>> free_name("bank", ["input.bank"])
    'input.bank.2'
    """
    taken = set(taken)
    candidate, count = f"input.{name}", 1
    while candidate in taken:
        count += 1
        candidate = f"input.{name}.{count}"
    return candidate


SEGMENT_COLUMNS = (
    "length",
    "regime",
    "start_s",
    "end_s",
    "start_altitude_m",
    "end_altitude_m",
    "altitude_min_m",
    "altitude_max_m",
    "duration_s",
    "knudsen_min",
    "knudsen_max",
    "heat_load_J_m2",
    "heat_load_share",
    "speed_loss_m_s",
    "speed_loss_share",
    "method",
    "method_reason",
)
CROSSING_COLUMNS = (
    "length",
    "bound",
    "direction",
    "time_s",
    "altitude_m",
    "air_speed_m_s",
    "altitude_low_m",
    "altitude_high_m",
)
