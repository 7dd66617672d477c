"""Heat-capacity ratio and speed of sound."""

from __future__ import annotations

import CoolProp.CoolProp as CoolProp
import numpy as np
import pytest

from aero.constants import BOLTZMANN
from aero.gas import heat_capacity_ratio, mixed_air, sea_level_air, sound_speed


def test_printed_speed_of_sound_at_sea_level() -> None:
    """340.29 m/s: U.S. Standard Atmosphere 1976, printed."""
    # this hand-made air leaves out carbon dioxide: 0.02 % lighter, 0.01 % faster
    assert sound_speed(sea_level_air()) == pytest.approx(340.29, rel=2e-4)


def test_printed_speed_of_sound_with_the_standards_molar_mass() -> None:
    """Printed by the standard: 295.07 m/s at 216.65 K, 329.80 m/s at 270.65 K (values from memory)."""
    air = mixed_air([288.15, 216.65, 270.65], 1e24)
    # printed to 5 digits (1.7e-5), and the standard's older gas constant (0.9e-5)
    own = sound_speed(air) * np.sqrt(float(air.molar_mass[0]) / 28.9644e-3)  # M_0 of the standard, kg/mol
    np.testing.assert_allclose(own, [340.29, 295.07, 329.80], rtol=2.6e-5)


def test_reference_library_from_300_kelvin_down() -> None:
    """Dilute air and its pure gases: frozen vibration is good to 0.2 % in gamma up to 300 K."""
    for name, fractions in {
        "Nitrogen": [1, 0, 0, 0, 0, 0, 0],
        "Argon": [0, 0, 0, 0, 1, 0, 0],
        "Helium": [0, 0, 0, 0, 0, 1, 0],
        "Air": [0.7812, 0.2096, 0, 0, 0.0092, 0, 0],
    }.items():
        theirs = CoolProp.PropsSI("A", "T", 250.0, "Dmolar", 1e-3, name)
        air = mixed_air(250.0, 1e19, fractions, altitude=100e3)
        assert sound_speed(air) == pytest.approx(theirs, rel=1e-3)


def test_limits_of_the_ratio() -> None:
    fractions = np.eye(7)
    air = mixed_air(np.full(7, 800.0), 1e14, fractions, altitude=400e3)
    expected = [1.4, 1.4, 5 / 3, 5 / 3, 5 / 3, 5 / 3, 5 / 3]
    np.testing.assert_allclose(heat_capacity_ratio(air), expected, rtol=1e-14)


def test_ratio_is_the_ratio_of_molar_heat_capacities() -> None:
    """Half oxygen atoms, half nitrogen: c_v = 2 k, c_p = 3 k."""
    air = mixed_air(800.0, 1e14, [0.5, 0, 0.5, 0, 0, 0, 0], altitude=400e3)
    assert heat_capacity_ratio(air) == pytest.approx(1.5, rel=1e-14)


def test_exactly_the_standards_ratio_low_down_and_no_step_above() -> None:
    altitude = np.linspace(70e3, 100e3, 3001)
    gamma = heat_capacity_ratio(mixed_air(np.full(3001, 190.0), 1e19, altitude=altitude))
    assert np.all(gamma[altitude <= 80e3] == 1.4)
    assert (
        np.max(np.abs(np.diff(gamma))) < 2.3e-6
    )  # 10 m of a cubic step of 0.0015 in 10 km: 1.5 times its mean slope
    assert gamma[-1] == pytest.approx(1.4015, abs=5e-5)


@pytest.mark.parametrize("shape", [(), (0,), (4,), (2, 3)])
@pytest.mark.parametrize("altitude", [0.0, 85e3, 300e3])
def test_shapes(shape: tuple[int, ...], altitude: float) -> None:
    air = mixed_air(np.full(shape, 250.0), 1e18, altitude=altitude)
    assert sound_speed(air).shape == shape
    assert heat_capacity_ratio(air).shape == shape


def test_hand_made_air_is_an_ideal_gas() -> None:
    air = mixed_air([200.0, 900.0], [1e19, 1e14], altitude=100e3)
    np.testing.assert_allclose(air.pressure, air.number_density * BOLTZMANN * air.temperature, rtol=1e-14)
    np.testing.assert_allclose(air.species.sum(axis=-1), air.number_density, rtol=1e-14)
