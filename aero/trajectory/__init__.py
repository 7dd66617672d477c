"""A file -> Trajectory."""

from __future__ import annotations

from aero.trajectory.frames import ALTITUDE_KINDS, VELOCITY_FRAMES, air_relative, inertial
from aero.trajectory.read import READERS, read_trajectory
from aero.trajectory.read_csv import read_csv
from aero.trajectory.read_parquet import parquet_pieces, read_parquet
from aero.trajectory.trajectory import Skipped, Trajectory
from aero.trajectory.write import write_trajectory

__all__ = [
    "ALTITUDE_KINDS",
    "READERS",
    "VELOCITY_FRAMES",
    "Skipped",
    "Trajectory",
    "air_relative",
    "inertial",
    "parquet_pieces",
    "read_csv",
    "read_parquet",
    "read_trajectory",
    "write_trajectory",
]
