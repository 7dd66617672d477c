"""A small entry and bodies for the tests of the survey."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

import aero
from aero.body import Vehicle, read_vehicle
from aero.trajectory import Trajectory

VEHICLE = """
name = "test capsule"
mass = "38 kg"
[reference]
area = "0.636 m2"
length = "0.9 m"
[lengths]
nose = "0.27 m"
gap = "1.5 mm"
[shape]
kind = "sphere-cone"
nose_radius = "0.27 m"
half_angle = "55 deg"
base_radius = "0.45 m"
[surface]
temperature = "300 K"
energy_accommodation = 0.95
"""


@pytest.fixture(scope="session")
def body(tmp_path_factory: pytest.TempPathFactory) -> Vehicle:
    path = tmp_path_factory.mktemp("body") / "capsule.toml"
    path.write_text(VEHICLE)
    return read_vehicle(path)


@pytest.fixture(scope="session")
def entry() -> Trajectory:
    time = np.arange(0.0, 401.0)
    return Trajectory(
        name="entry",
        time=time,
        altitude=140e3 - 300.0 * time + 0.02 * time**2,
        speed=7600.0 * np.exp(-((time / 300.0) ** 6)) + 200.0,
        source="entry.csv",
        digest="0" * 64,
    )


@pytest.fixture(scope="session")
def placed_entry(entry: Trajectory) -> Trajectory:
    import dataclasses

    return dataclasses.replace(
        entry,
        latitude=np.radians(10.0 + 0.02 * entry.time),
        longitude=np.radians(20.0 + 0.05 * entry.time),
        epoch=np.datetime64("2026-03-01T06:00:00"),
    )


@pytest.fixture(scope="session")
def surveyed(entry: Trajectory, body: Vehicle) -> aero.Survey:
    return aero.survey(entry, body)


@pytest.fixture
def vehicle_file(tmp_path: Path) -> Path:
    path = tmp_path / "capsule.toml"
    path.write_text(VEHICLE)
    return path
