"""The oncoming stream's numbers from their definitions."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.air.state import MOLECULE_MASS
from aero.constants import BOLTZMANN
from aero.gas import Flow, flow, mixed_air, sea_level_air, sound_speed, viscosity, viscosity_at

FIELDS = [field.name for field in dataclasses.fields(Flow)]


def test_definitions_one_by_one() -> None:
    air = mixed_air([220.0, 195.0, 900.0], [1e24, 1.2e19, 2e14], [0.6, 0.1, 0.3, 0, 0, 0, 0], [2e4, 1e5, 4e5])
    V = np.array([300.0, 7500.0, 7700.0])
    stream = flow(air, V, wall_temperature=400.0)
    T, rho, R, gamma = air.temperature, air.density, air.gas_constant, stream.heat_capacity_ratio
    np.testing.assert_allclose(stream.mach, V / sound_speed(air), rtol=1e-14)
    np.testing.assert_allclose(stream.speed_ratio, V / np.sqrt(2.0 * R * T), rtol=1e-14)
    np.testing.assert_allclose(stream.speed_ratio, stream.mach * np.sqrt(gamma / 2.0), rtol=1e-14)
    np.testing.assert_allclose(
        stream.dynamic_pressure, 0.5 * gamma * air.pressure * stream.mach**2, rtol=1e-9
    )
    np.testing.assert_allclose(
        stream.total_temperature, T * (1 + (gamma - 1) / 2 * stream.mach**2), rtol=1e-13
    )
    c_p = gamma * R / (gamma - 1.0)
    np.testing.assert_allclose(stream.total_enthalpy, c_p * stream.total_temperature, rtol=1e-13)
    np.testing.assert_allclose(stream.viscosity, viscosity(air), rtol=1e-14)
    np.testing.assert_allclose(stream.reynolds(2.0), rho * V * 2.0 / viscosity(air), rtol=1e-13)
    mu_total = viscosity_at(air, stream.total_temperature)
    np.testing.assert_allclose(stream.reynolds_stagnation(2.0), rho * V * 2.0 / mu_total, rtol=1e-13)
    T_star = (stream.total_temperature + 3.0 * 400.0) / 6.0
    chapman = viscosity_at(air, T_star) / viscosity(air) * T / T_star
    np.testing.assert_allclose(stream.cheng(2.0), stream.mach**2 * chapman / stream.reynolds(2.0), rtol=1e-13)


def test_speed_ratio_of_each_species() -> None:
    air = mixed_air([[200.0], [1000.0]], 1e15, altitude=3e5)
    stream = flow(air, 7500.0)
    assert stream.speed_ratio_species.shape == (2, 1, 7)
    for i, m in enumerate(MOLECULE_MASS):
        expected = 7500.0 / np.sqrt(2.0 * BOLTZMANN * air.temperature / m)
        np.testing.assert_allclose(stream.speed_ratio_species[..., i], expected, rtol=1e-14)


def test_species_ratios_are_species_major_memory() -> None:
    stream = flow(mixed_air(np.full(100, 200.0), 1e15, altitude=3e5), 7500.0)
    assert stream.speed_ratio_species[:, 2].flags.c_contiguous


def test_at_rest() -> None:
    air = sea_level_air()
    still = flow(air, 0.0)
    for name in ("mach", "speed_ratio", "dynamic_pressure", "reynolds_per_m", "reynolds_stagnation_per_m"):
        assert getattr(still, name) == 0.0, name
    assert still.cheng_per_m == 0.0
    assert still.total_temperature == pytest.approx(288.15)
    assert np.all(still.speed_ratio_species == 0.0)


@pytest.mark.parametrize("shape", [(), (0,), (1,), (4,), (2, 3)])
@pytest.mark.parametrize("altitude", [0.0, 85e3, 300e3])
def test_every_field_takes_the_shape_of_the_air(shape: tuple[int, ...], altitude: float) -> None:
    stream = flow(mixed_air(np.full(shape, 250.0), 1e18, altitude=altitude), 5000.0)
    for name in FIELDS:
        value = getattr(stream, name)
        assert value.shape == (shape if name != "speed_ratio_species" else (*shape, 7)), name
        assert not value.flags.writeable, name


def test_wrong_speeds() -> None:
    air = mixed_air([250.0, 250.0], 1e18)
    with pytest.raises(ValueError, match=r"negative; it is -3 m/s at index 1"):
        flow(air, [10.0, -3.0])
    with pytest.raises(ValueError, match=r"speed has shape \(3,\)"):
        flow(air, [1.0, 2.0, 3.0])


def test_unknown_speed_gives_no_answer() -> None:
    stream = flow(mixed_air([250.0, 250.0], 1e18), [np.nan, 100.0])
    assert np.isnan(stream.mach).tolist() == [True, False]
    assert np.isfinite(stream.viscosity).all()


@given(
    altitude=st.floats(-5e3, 1e6),
    temperature=st.floats(120.0, 2500.0),
    log_density=st.floats(9.0, 25.5),
    speed=st.floats(0.0, 2e4),
)
def test_finite_wherever_there_is_air(
    altitude: float, temperature: float, log_density: float, speed: float
) -> None:
    air = mixed_air(temperature, 10.0**log_density, [0.6, 0.1, 0.2, 0.02, 0.01, 0.05, 0.02], altitude)
    stream = flow(air, speed)
    for name in FIELDS:
        value = getattr(stream, name)
        assert np.all(np.isfinite(value)), name
        assert np.all(value >= 0.0), name
    # a hot gas is the more viscous: Re_0 never exceeds Re
    assert stream.reynolds_stagnation_per_m <= stream.reynolds_per_m * (1 + 1e-12)


def test_says_what_it_is() -> None:
    assert str(flow(sea_level_air(), 10.0)) == "Flow(1 point; m/s, Pa, K, J/kg, Pa s, 1/m)"
