"""Flights with a vehicle's own coefficients: those of a survey, and nothing else."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from aero.air import StandardAtmosphere1976, TableAtmosphere
from aero.body import SHAPES, Vehicle, read_vehicle
from aero.errors import InputError
from aero.flight import Flight, fly, mechanical_energy
from aero.flight.forces import air_along, in_air, vehicle_loads
from aero.survey import Settings, survey

EXAMPLES = Path(__file__).parents[2] / "trajectories"
START: dict[str, Any] = {"altitude": 120e3, "speed": 7600.0, "flight_path_angle": math.radians(-3.0)}
AIR = StandardAtmosphere1976()


@pytest.fixture(scope="module")
def marram() -> Vehicle:
    return read_vehicle(EXAMPLES / "marram.toml")


@pytest.fixture(scope="module")
def flight(marram: Vehicle) -> Flight:
    return fly(marram, **START)


def test_a_survey_of_the_flight_finds_the_same_loads(marram: Vehicle, flight: Flight) -> None:
    points = survey(flight.trajectory(), marram, atmosphere=AIR).points
    told = flight.summary()
    # at the samples, so below the peaks, which are some 30 s broad against a step of 1 s: under 0.1 %
    assert points["drag_deceleration_m_s2"].max() == pytest.approx(told["peak_deceleration_m_s2"], rel=1e-3)
    assert points["heat_flux_W_m2"].max() == pytest.approx(told["peak_heat_flux_W_m2"], rel=1e-3)
    assert points["drag_deceleration_m_s2"].max() <= flight.peak_deceleration.value
    # a cubic through samples 1 s apart against Gauss's rule on the continuous solution
    assert points["heat_load_J_m2"].iloc[-1] == pytest.approx(told["heat_load_J_m2"], rel=1e-4)


def test_speed_lost_is_the_drag_a_survey_reports(marram: Vehicle, flight: Flight) -> None:
    """From the samples alone: the energy lost between them is the work of the surveyed deceleration."""
    points = survey(flight.trajectory(), marram, atmosphere=AIR).points
    power = (points["drag_deceleration_m_s2"] * points["air_speed_m_s"]).to_numpy()
    energy = mechanical_energy(flight.path.planet, flight.samples.position, flight.samples.velocity)
    work = np.trapezoid(power, flight.samples.time)
    # trapezium over steps of 1 s on a pulse 30 s broad: (1/30)^2/12 = 1e-4
    assert energy[0] - energy[-1] == pytest.approx(work, rel=2e-4)


@pytest.mark.parametrize(("speed", "angle_deg"), [(7600.0, -3.0), (7500.0, -1.5), (7500.0, -7.0)])
def test_drag_work_is_the_energy_lost(marram: Vehicle, speed: float, angle_deg: float) -> None:
    """At the tolerance a user gets: V^2/2 + Phi - omega^2 r^2 cos^2(lat)/2 against drag times air speed."""
    flown = fly(marram, altitude=120e3, speed=speed, flight_path_angle=math.radians(angle_deg))
    area_per_mass, _ = vehicle_loads(marram, None, None)
    power = in_air(
        air_along(AIR, None),
        lambda air, speed: 0.5 * air.density * speed**3 * area_per_mass(air, speed)[0],
    )
    ends = flown.path.at([0.0, flown.path.duration])
    energy = mechanical_energy(flown.path.planet, ends.position, ends.velocity)
    assert energy[0] - energy[1] == pytest.approx(flown.path.integral(power), rel=1e-6)


def test_an_angle_of_attack_lifts(marram: Vehicle, flight: Flight) -> None:
    tilted = fly(marram, **START, angle_of_attack=math.radians(15.0), until=250.0)
    area_per_mass, _ = vehicle_loads(marram, math.radians(15.0), None)
    drag, lift = area_per_mass(AIR.at([60e3]), np.array([6000.0]))
    assert abs(lift[0]) > 0.1 * drag[0]
    # lift upwards stretches the flight, lift downwards (as on a blunt body at positive angle) steepens it
    bent = tilted.path.at(200.0).flight_path_angle[0] - flight.path.at(200.0).flight_path_angle[0]
    assert np.sign(bent) == np.sign(lift[0])
    flown = tilted.trajectory()
    assert flown.angle_of_attack is not None
    assert flown.angle_of_attack[0] == pytest.approx(math.radians(15.0))
    # the peak counts both forces
    there = tilted.path.at(tilted.peak_deceleration.time)
    around = AIR.at(there.altitude)
    drag, lift = area_per_mass(around, there.speed)
    force = 0.5 * around.density[0] * there.speed[0] ** 2
    assert tilted.peak_deceleration.value == pytest.approx(force * math.hypot(drag[0], lift[0]), rel=1e-12)


def test_settings_move_the_wall(marram: Vehicle, flight: Flight) -> None:
    cold = fly(marram, **START, settings=Settings(wall=300.0))
    assert cold.heat_load is not None
    assert flight.heat_load is not None
    assert cold.heat_load > flight.heat_load  # a radiating wall is hot and takes less


def test_a_constant_ballistic_coefficient_replaces_the_drag_only(marram: Vehicle) -> None:
    flown = fly(marram, **START, ballistic_coefficient=60.0)
    bare = fly(**START, ballistic_coefficient=60.0)
    assert flown.peak_deceleration == bare.peak_deceleration
    assert flown.peak_heat_flux is not None
    assert bare.peak_heat_flux is None


def test_heat_keys_are_null_without_a_nose_radius() -> None:
    sedge = replace(read_vehicle(EXAMPLES / "sedge.toml"), heating_nose_radius=None)
    told = fly(sedge, **START, until=100.0).summary()
    assert told["peak_heat_flux_W_m2"] is None
    assert told["peak_heat_flux_altitude_m"] is None
    assert told["heat_load_J_m2"] is None
    assert told["peak_deceleration_m_s2"] is not None


def test_slow_flight_is_noted(flight: Flight, marram: Vehicle) -> None:
    assert any("slower than Mach 2" in note for note in flight.notes)
    assert not fly(marram, **START, until=100.0).notes


def test_a_vehicle_without_a_mass_is_named() -> None:
    with pytest.raises(InputError, match=r"sphere: has no mass.*give mass"):
        fly(Vehicle.from_shape(SHAPES["sphere"](diameter=1.0)), **START)


def test_a_table_that_ends_is_named(tmp_path: Path) -> None:
    file = tmp_path / "thin.csv"
    air = AIR.at(np.arange(90e3, 130e3, 1e3))
    rows = [f"{z},{t},{rho}" for z, t, rho in zip(air.altitude, air.temperature, air.density, strict=True)]
    file.write_text("\n".join(["altitude_m,temperature_K,density_kg_m3", *rows]) + "\n")
    with pytest.raises(InputError, match=r"does not cover the flight: altitude in thin\.csv must lie in"):
        fly(**START, ballistic_coefficient=60.0, atmosphere=TableAtmosphere(file))
