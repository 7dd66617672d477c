"""Lift turned about the velocity."""

from __future__ import annotations

import math

import numpy as np
import pytest

from aero.air import Air, StandardAtmosphere1976
from aero.arrays import Floats
from aero.errors import InputError
from aero.flight import earth, fly, integrate
from aero.flight.forces import air_along
from aero.flight.planet import Planet


def lifting(air: Air, speed: Floats) -> tuple[Floats, Floats]:
    return np.full(speed.shape, 0.01), np.full(speed.shape, 0.005)


def flown(bank: float, planet: Planet) -> tuple[float, float]:
    """Return latitude and final height of a flight due east from the equator."""
    position = planet.position(0.0, 0.0, 70e3)
    path = integrate(
        position,
        np.array([0.0, 6000.0, 0.0]),
        planet=planet,
        air=air_along(StandardAtmosphere1976(), None),
        area_per_mass=lifting,
        bank=bank,
        until=60.0,
    )
    end = path.at(60.0)
    return float(end.latitude[0]), float(end.altitude[0])


def test_bank_turns_the_flight_to_its_side_and_takes_lift_from_the_vertical() -> None:
    still = earth(rotation=0.0)
    straight, high = flown(0.0, still)
    right, level = flown(math.pi / 2, still)
    left, _ = flown(-math.pi / 2, still)
    upside_down, low = flown(math.pi, still)
    assert abs(straight) < 1e-9
    assert abs(upside_down) < 1e-9
    assert right < -1e-4  # due east, the right hand points south
    assert left == pytest.approx(-right, rel=1e-6)  # a mirror image over a planet that does not turn
    assert low < level < high


def test_a_vehicles_own_bank_is_flown_and_an_impossible_one_refused() -> None:
    with pytest.raises(InputError, match=r"--bank: 200 deg cannot be flown"):
        fly(
            ballistic_coefficient=60.0,
            altitude=120e3,
            speed=7600.0,
            flight_path_angle=-0.05,
            bank=math.radians(200.0),
        )
