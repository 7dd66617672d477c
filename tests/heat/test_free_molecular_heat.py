"""Free-molecular stagnation heating against published closed forms, quadrature and limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.special import erf

from aero.air.state import MOLECULE_MASS, SPECIES
from aero.constants import BOLTZMANN
from aero.gas import flow, mixed_air
from aero.heat import energy_fluxes, free_molecular_flux

PURE = {name: np.eye(7)[i] for i, name in enumerate(SPECIES)}


def bird(speed_ratio, wall_over_gas, gamma, accommodation):
    """Bird 1994: C_H of a stagnation element in a gas of one kind."""
    s, g = speed_ratio, gamma
    inner = s**2 + g / (g - 1) - (g + 1) / (2 * (g - 1)) * wall_over_gas
    flux = np.exp(-(s**2)) + np.sqrt(np.pi) * s * (1 + erf(s))
    return accommodation / (2 * np.sqrt(np.pi) * s**3) * (inner * flux - np.exp(-(s**2)) / 2)


@pytest.mark.parametrize(
    ("name", "gamma"), [("N2", 1.4), ("O2", 1.4), ("Ar", 5 / 3), ("He", 5 / 3), ("H", 5 / 3)]
)
@pytest.mark.parametrize("wall", [200.0, 300.0, 1200.0])
def test_one_gas_is_birds_formula(name, gamma, wall):
    speed = np.array([50.0, 300.0, 1000.0, 2000.0, 7500.0, 12000.0])
    air = mixed_air(np.full(6, 300.0), 1e18, PURE[name], altitude=100e3)
    moving = flow(air, speed)
    ours = free_molecular_flux(air, moving, wall, 0.9) / (0.5 * air.density * speed**3)
    theirs = bird(moving.speed_ratio, wall / 300.0, gamma, 0.9)
    # two forms of one expression: rounding, amplified where the bracket nearly cancels at low speed
    np.testing.assert_allclose(ours, theirs, rtol=1e-9, atol=1e-9)


def test_lofthouse_cylinder_state_gives_the_known_coefficient():
    """Argon at Mach 10, 200 K, 2624 m/s, wall 500 K: C_H = 0.970 (Bird's formula, printed to 3 digits)."""
    air = mixed_air(200.0, 1.699e19, PURE["Ar"], altitude=100e3)
    flux = free_molecular_flux(air, flow(air, 2624.0), 500.0, 1.0)
    assert flux / (0.5 * air.density * 2624.0**3) == pytest.approx(0.970, abs=5e-4)


@pytest.mark.parametrize("name", ["N2", "He"])
@pytest.mark.parametrize("speed", [200.0, 900.0, 3000.0])
def test_incident_energy_is_the_integral_over_a_maxwellian(name, speed):
    """Independent route: flux-weighted kinetic energy integrated over the distribution of normal velocity."""
    mass, temperature, number = MOLECULE_MASS[SPECIES.index(name)], 400.0, 1e18
    thermal = np.sqrt(2 * BOLTZMANN * temperature / mass)
    rotation = BOLTZMANN * temperature if name == "N2" else 0.0

    def energy(u):  # u: normal velocity towards the element; the tangential motion carries kT
        density = np.exp(-(((u - speed) / thermal) ** 2)) / (np.sqrt(np.pi) * thermal)
        return u * density * (0.5 * mass * u**2 + BOLTZMANN * temperature + rotation) * 1e20

    expected = number * quad(energy, 0.0, speed + 12 * thermal, epsabs=0.0, epsrel=1e-11, limit=400)[0] / 1e20
    air = mixed_air(temperature, number, PURE[name], altitude=100e3)
    incident, _ = energy_fluxes(air, flow(air, speed))
    assert float(incident) == pytest.approx(expected, rel=1e-9)  # the quadrature's own tolerance, widened


def test_mixture_is_the_sum_of_its_species():
    shares = np.array([0.5, 0.1, 0.3, 0.02, 0.01, 0.05, 0.02])
    mixture = mixed_air(900.0, 1e15, shares, altitude=300e3)
    whole = np.array(energy_fluxes(mixture, flow(mixture, 7700.0)))
    parts = 0.0
    for index, name in enumerate(SPECIES):
        air = mixed_air(900.0, 1e15 * shares[index], PURE[name], altitude=300e3)
        parts = parts + np.array(energy_fluxes(air, flow(air, 7700.0)))
    np.testing.assert_allclose(whole, parts, rtol=1e-13)


def test_tends_to_the_whole_kinetic_energy():
    air = mixed_air(200.0, 1e18, PURE["N2"], altitude=100e3)
    speed = np.array([5e3, 1e4, 2e4])
    share = free_molecular_flux(
        air, flow(mixed_air(np.full(3, 200.0), 1e18, PURE["N2"], 100e3), speed), 200.0, 0.7
    )
    share = share / (0.5 * air.density * speed**3)
    # (7/2 - 3) kT over m V^2/2 is what is left at S = 14 to 58
    left = 0.5 / flow(air, 1e4).speed_ratio ** 2 * (1e4 / speed) ** 2
    np.testing.assert_allclose(share / 0.7 - 1.0, left, rtol=1e-6)


def test_no_step_where_the_high_speed_limit_takes_over():
    air = mixed_air(np.full(2, 300.0), 1e18, PURE["N2"], altitude=100e3)
    at_six = 6.0 * np.sqrt(2 * BOLTZMANN * 300.0 / MOLECULE_MASS[0])
    below, above = energy_fluxes(air, flow(air, at_six * np.array([1 - 1e-13, 1 + 1e-13])))[0]
    assert below == pytest.approx(above, rel=1e-12)


def test_at_rest_there_is_no_flux_by_convention_and_a_hot_wall_cools_when_moving_slowly():
    air = mixed_air([200.0, 200.0], 1e18, altitude=100e3)
    at_rest, slow = free_molecular_flux(air, flow(air, [0.0, 10.0]), 400.0, 1.0)
    assert at_rest == 0.0
    assert slow < 0.0


def test_specular_or_unaccommodated_walls_take_nothing():
    air = mixed_air(300.0, 1e18, altitude=100e3)
    assert free_molecular_flux(air, flow(air, 7000.0), 300.0, 0.0) == 0.0
    assert free_molecular_flux(air, flow(air, 7000.0), 300.0, 1.0, diffuse_fraction=0.0) == 0.0


def test_shapes_scalar_array_empty_and_nan():
    for shape in [(), (1,), (0,), (2, 3)]:
        air = mixed_air(np.full(shape, 300.0), 1e18, altitude=100e3)
        assert free_molecular_flux(air, flow(air, 7000.0), 300.0, 1.0).shape == shape
    air = mixed_air([300.0, np.nan], 1e18, altitude=100e3)
    first, second = free_molecular_flux(air, flow(air, 7000.0), 300.0, 1.0)
    assert np.isfinite(first)
    assert np.isnan(second)


@given(
    temperature=st.floats(100.0, 2000.0),
    speed=st.floats(1.0, 16000.0),
    wall=st.floats(100.0, 3000.0),
    accommodation=st.floats(0.0, 1.0),
    shares=st.lists(st.floats(0.0, 1.0), min_size=7, max_size=7).filter(lambda x: sum(x) > 0.1),
)
def test_finite_and_never_more_than_arrives(temperature, speed, wall, accommodation, shares):
    air = mixed_air(temperature, 1e17, shares, altitude=120e3)
    moving = flow(air, speed)
    incident, emitted = energy_fluxes(air, moving)
    flux = free_molecular_flux(air, moving, wall, accommodation)
    assert np.isfinite(flux)
    assert incident > 0.0
    assert emitted > 0.0
    assert flux <= accommodation * incident * (1 + 1e-12)
