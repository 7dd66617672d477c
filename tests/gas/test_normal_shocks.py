"""Normal shock: conservation laws, a published table, limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.gas import (
    flow,
    free_path_behind_shock,
    mean_free_path,
    mixed_air,
    mixture_omega,
    normal_shock,
    sea_level_air,
    stand_off,
)


@given(mach=st.floats(1.0, 60.0), gamma=st.floats(1.05, 5.0 / 3.0))
def test_mass_momentum_and_energy_are_conserved(mach: float, gamma: float) -> None:
    """Units of rho_1 = 1, p_1 = 1: u_1 = M sqrt(gamma)."""
    shock = normal_shock(mach, gamma)
    u_1 = mach * np.sqrt(gamma)
    rho_2, p_2 = shock.density_ratio, shock.pressure_ratio
    u_2 = u_1 / rho_2  # mass
    assert rho_2 * u_2**2 + p_2 == pytest.approx(u_1**2 + 1.0, rel=1e-12)
    enthalpy = gamma / (gamma - 1.0)
    assert enthalpy * p_2 / rho_2 + u_2**2 / 2 == pytest.approx(enthalpy + u_1**2 / 2, rel=1e-11)
    assert shock.temperature_ratio == pytest.approx(float(p_2 / rho_2), rel=1e-14)
    entropy = np.log(p_2) - gamma * np.log(rho_2)
    assert entropy >= -1e-12


@pytest.mark.parametrize(
    ("mach", "density", "pressure", "temperature"),
    # NACA Report 1135, table II, gamma 1.4, printed to 4 digits (values from memory)
    [
        (1.0, 1.0, 1.0, 1.0),
        (2.0, 2.667, 4.500, 1.687),
        (3.0, 3.857, 10.33, 2.679),
        (5.0, 5.000, 29.00, 5.800),
        (10.0, 5.714, 116.5, 20.39),
    ],
)
def test_published_table(mach: float, density: float, pressure: float, temperature: float) -> None:
    shock = normal_shock(mach, 1.4)
    # one unit of the fourth digit
    assert shock.density_ratio == pytest.approx(density, rel=4e-4)
    assert shock.pressure_ratio == pytest.approx(pressure, rel=4e-4)
    assert shock.temperature_ratio == pytest.approx(temperature, rel=4e-4)


def test_no_shock_in_a_subsonic_stream() -> None:
    shock = normal_shock(np.array([0.0, 0.5, 1.0, 2.0, np.nan]), 1.4)
    for ratio in shock:
        assert np.isnan(ratio).tolist() == [True, True, False, False, True]


def test_path_behind_the_shock_of_hard_spheres_says_nothing_new() -> None:
    """omega 1/2 leaves the density ratio alone: (gamma - 1)/(gamma + 1) at high Mach number."""
    air = sea_level_air()
    stream = flow(air, 40e3)
    ratio = free_path_behind_shock(1.0, stream, 0.5)
    assert ratio == pytest.approx(0.4 / 2.4, rel=0.001)  # 5/M^2 = 4e-4 short of the limit


def test_path_behind_the_shock_is_the_path_of_the_gas_there() -> None:
    """Make the gas behind the shock by hand and ask for its variable-hard-sphere path."""
    nitrogen = [1, 0, 0, 0, 0, 0, 0]
    before = mixed_air(195.0, 1.2e19, nitrogen, altitude=100e3)
    stream = flow(before, 7500.0)
    shock = normal_shock(stream.mach, stream.heat_capacity_ratio)
    behind = mixed_air(195.0 * shock.temperature_ratio, 1.2e19 * shock.density_ratio, nitrogen, 100e3)
    ours = free_path_behind_shock(mean_free_path(before, "vhs"), stream, mixture_omega(before))
    assert ours == pytest.approx(float(mean_free_path(behind, "vhs")), rel=1e-12)


def test_path_behind_the_shock_of_air_within_the_mean_exponent() -> None:
    before = mixed_air(195.0, 1.2e19, altitude=100e3)
    stream = flow(before, 7500.0)
    shock = normal_shock(stream.mach, stream.heat_capacity_ratio)
    behind = mixed_air(195.0 * shock.temperature_ratio, 1.2e19 * shock.density_ratio, altitude=100e3)
    ours = free_path_behind_shock(mean_free_path(before, "vhs"), stream, mixture_omega(before))
    # one exponent for N2, O2 and Ar (0.74 to 0.81), over a temperature ratio of 130
    assert ours == pytest.approx(float(mean_free_path(behind, "vhs")), rel=0.01)


def test_path_behind_a_subsonic_stream_has_no_answer() -> None:
    assert np.isnan(free_path_behind_shock(1e-7, flow(sea_level_air(), 100.0), 0.74))


def test_stand_off_near_another_correlation() -> None:
    """Billig 1967, sphere: 0.143 R exp(3.24/M^2) (value from memory), both for gamma 1.4."""
    for mach in (6.0, 10.0, 20.0):
        ours = float(stand_off(0.5, normal_shock(mach, 1.4).density_ratio))
        # two fits to scattered shadowgraphs: 10 % apart is what correlations of this kind agree to
        assert ours == pytest.approx(0.143 * 0.5 * np.exp(3.24 / mach**2), rel=0.10)
