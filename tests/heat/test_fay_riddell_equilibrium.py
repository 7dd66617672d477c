"""Air in equilibrium and Fay-Riddell heating, against other routes and other correlations."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path

import numpy as np
import pytest

from aero.body import Sphere, Vehicle
from aero.gas import flow, mixed_air
from aero.heat import CONVECTIVE, compare_convective, convective_flux, dissociation_share, fay_riddell
from aero.heat.air_particles import ATOMS, CHARGE, MASS, viscosity_of
from aero.heat.equilibrium_air import equilibrium_state, stagnation_line
from aero.heat.fay_riddell import COLD_WALL, TRANSPORT, fay_riddell_cold

# The flight state at 71.04 km: 11.31 km/s, 210 K, wall 810 K; nose radius 0.935 m
FLIGHT = (8.57e-5, 210.0, 11310.0, 0.935, 810.0)


@pytest.fixture(scope="module")
def reference():
    """Load the independent model of tests/force: its own species table, scipy's root finders, one point at a time."""
    path = Path(__file__).parents[1] / "force" / "equilibrium_air.py"
    spec = importlib.util.spec_from_file_location("equilibrium_air_of_force", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


@pytest.mark.parametrize("speed", [2000.0, 5000.0, 8000.0, 11310.0])
def test_shock_and_stagnation_against_another_solver(reference, speed):
    line = stagnation_line(8.57e-5, 210.0, speed)
    pitot, ratio = reference.pitot(speed, 210.0, float(line.free_stream_pressure))
    # the two tables of energies differ in the fourth digit
    assert float(line.pressure_coefficient) == pytest.approx(pitot, rel=2e-5)
    assert float(line.shock.density / 8.57e-5) == pytest.approx(ratio, rel=3e-4)


def test_atoms_charge_mass_and_energy_are_kept():
    temperature = np.array([300.0, 2000.0, 4500.0, 8000.0, 13000.0])
    state = equilibrium_state(temperature, 1e-3)
    nitrogen, oxygen = (state.number @ ATOMS).T
    np.testing.assert_allclose(nitrogen / oxygen, 0.79 / 0.21, rtol=1e-10)
    np.testing.assert_allclose(state.number @ MASS, 1e-3, rtol=1e-10)
    assert (np.abs(state.number @ CHARGE) <= 1e-10 * state.number.sum(axis=-1)).all()


def test_cold_air_is_the_ideal_gas_of_tables():
    """Enthalpy of air at 1000 K: 1046 kJ/kg in the ideal-gas tables (Keenan & Kaye, value from memory)."""
    state = equilibrium_state(1000.0, 1.0)
    assert float(state.enthalpy) / 1e3 == pytest.approx(1046.0, rel=8e-3)
    # argon counts as nitrogen: 0.4 % by the molar mass, 0.3 % by what nitrogen holds more
    # a little NO: log10 K_f = -4.06 at 1000 K (tables, value from memory) makes 110 J/kg; today's bond energies
    # give NO 1 kJ/mol more than those tables, an eighth less of it at 1000 K
    assert float(state.formation_enthalpy) == pytest.approx(110.0, rel=0.125)


def test_the_law_of_mass_action_of_oxygen():
    """Kp of O2 = 2 O at 4000 K: log10 (Kp/bar) 0.340 in thermochemical tables (value from memory).

    Ours is 0.369: rigid rotors and harmonic oscillators count 4 to 5 % too few states of O2 at 4000 K, and
    electronic levels above its second excited one are left out. 10 % in Kp is what that leaves.
    """
    state = equilibrium_state(4000.0, 1e-3)
    partial = state.number * 1.380649e-23 * 4000.0 / 1e5
    assert float(np.log10(partial[4] ** 2 / partial[1])) == pytest.approx(0.340, abs=np.log10(1.1))


def test_compression_to_rest_keeps_the_entropy():
    line = stagnation_line(1e-4, 220.0, np.array([2000.0, 4000.0, 7000.0, 12000.0]))
    np.testing.assert_allclose(line.edge.entropy, line.shock.entropy, rtol=1e-5)
    assert (line.edge.enthalpy > line.shock.enthalpy).all()


def test_gibbs_relation_ties_entropy_to_enthalpy():
    """At fixed composition path or not, T ds = dh - dp/rho in equilibrium; differences of 1e-4 relative."""
    low, high = equilibrium_state(5000.0, 0.01), equilibrium_state(5000.5, 0.01001)
    t_ds = 5000.25 * float(high.entropy - low.entropy)
    dh = float(high.enthalpy - low.enthalpy)
    dp = float(high.pressure - low.pressure)
    assert t_ds == pytest.approx(dh - dp / 0.010005, rel=1e-5)


def test_slow_flow_and_bad_input_have_no_answer():
    line = stagnation_line([1e-4, np.nan, 1e-4], 220.0, [200.0, 7000.0, 7000.0])
    assert np.isnan(line.edge.temperature).tolist() == [True, True, False]
    assert stagnation_line(np.empty(0), 220.0, np.empty(0)).edge.temperature.shape == (0,)
    assert np.isnan(equilibrium_state(-5.0, 1.0).pressure)
    with pytest.raises(ValueError, match="nose_radius must be positive"):
        fay_riddell(1e-4, 220.0, 7000.0, 0.0, 300.0)
    with pytest.raises(ValueError, match="transport is 'wet', expected one of: sutherland, blottner"):
        fay_riddell(1e-4, 220.0, 7000.0, 1.0, 300.0, "wet")


def test_viscosity_of_cold_and_hot_air():
    """Dilute-gas table at 1000 K (tests/published/viscosity_dilute_gas.csv), the cold end of the fits of 1971.

    Nitrogen's lies 5.3 % under, oxygen's 1.0 %: no fit is better than that at 1000 K, and it is hot air that
    they are for. Recorded in docs/validation.md.
    """
    assert float(viscosity_of(1000.0, [1, 0, 0, 0, 0, 0, 0, 0, 0])) == pytest.approx(4.154e-5, rel=0.06)
    assert float(viscosity_of(1000.0, [0, 1, 0, 0, 0, 0, 0, 0, 0])) == pytest.approx(4.911e-5, rel=0.06)
    air = float(viscosity_of(1000.0, [79, 21, 0, 0, 0, 0, 0, 0, 0]))
    assert air == pytest.approx(4.3275e-5, rel=0.06)


def test_flight_state_beside_the_other_correlations():
    """At 11.31 km/s the published correlations give 2.41 to 2.93 MW/m2: ours lies between them."""
    flux = float(fay_riddell(*FLIGHT).heat_flux) / 1e6
    assert flux == pytest.approx(2.466, abs=5e-4)  # pinned: recorded in docs/validation.md
    assert 2.38 < flux < 2.93
    real = float(fay_riddell(*FLIGHT, "blottner").heat_flux) / 1e6
    assert real / flux == pytest.approx(1.30, abs=0.005)  # recorded, see the docstring


@pytest.mark.parametrize("density", [1e-5, 1e-4, 1e-3])
def test_between_sutton_graves_and_detra_kemp_riddell_to_the_sigma_of_correlations(density):
    """From 3 to 7.9 km/s the three differ by less than 12 %, the 1-sigma this package gives each."""
    speed = np.linspace(3000.0, 7900.0, 30)
    ours = CONVECTIVE["fay-riddell"](density, speed, 1.0)
    for other in ("sutton-graves", "detra-kemp-riddell"):
        assert np.abs(CONVECTIVE[other](density, speed, 1.0) / ours - 1.0).max() < 0.12


def test_table_against_the_formula_at_random_points():
    random = np.random.default_rng(7)
    density, speed = 10.0 ** random.uniform(-7.0, -1.0, 800), random.uniform(1500.0, 13000.0, 800)
    exact = fay_riddell(density, 230.0, speed, 1.0, COLD_WALL)
    # the error its docstring states
    np.testing.assert_allclose(fay_riddell_cold(density, speed, np.ones(800)), exact.heat_flux, rtol=5e-4)
    np.testing.assert_allclose(dissociation_share(density, speed), exact.dissociation_share, atol=3e-3)


@pytest.mark.parametrize(("speed", "most"), [(2000.0, 0.025), (4000.0, 0.0061), (7500.0, 0.0061)])
def test_what_the_temperature_of_the_free_stream_changes(speed, most):
    for temperature in (190.0, 270.0):
        exact = float(fay_riddell(1e-4, temperature, speed, 1.0, COLD_WALL).heat_flux)
        assert float(fay_riddell_cold(np.array(1e-4), np.array(speed), np.array(1.0))) == pytest.approx(
            exact, rel=most
        )


@pytest.mark.parametrize("name", TRANSPORT)
def test_flux_goes_with_the_root_of_the_radius(name):
    one, four = fay_riddell(1e-4, 220.0, 7000.0, [1.0, 4.0], 300.0, name).heat_flux
    assert one / four == pytest.approx(2.0, rel=1e-12)


def test_comparison_holds_every_correlation_as_the_stagnation_point_sees_it():
    air = mixed_air(np.full(2, 220.0), 2.1e21, altitude=70e3)
    moving = flow(air, [7500.0, 2500.0])
    found = compare_convective(Vehicle.from_shape(Sphere(diameter=2.0)), air, moving, 700.0)
    assert list(found) == list(CONVECTIVE)
    for name, flux in found.items():
        expected = convective_flux(air.density, moving.speed, 1.0, moving.total_enthalpy, 700.0, name)
        np.testing.assert_array_equal(flux, expected)
    assert np.isnan(found["brandis-johnston"][1])
