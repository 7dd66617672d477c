"""Published convective and radiative correlations, at a flight state and at their own anchors."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import aero.heat
from aero.heat import (
    CONVECTIVE,
    RADIATIVE_VALIDITY,
    convective_flux,
    convective_sigma,
    hot_wall_factor,
    radiative_flux,
    radiative_sigma,
    radiative_validity,
    wall_enthalpy,
)

# A flight state at 71.04 km: 11.31 km/s, 210 K, wall 810 K; nose radius 0.935 m
DENSITY, SPEED, RADIUS = 8.57e-5, 11310.0, 0.935


@pytest.mark.parametrize(
    ("name", "expected"), [("sutton-graves", 2.41), ("detra-kemp-riddell", 2.93), ("brandis-johnston", 2.80)]
)
def test_flight_state_at_71_km(name, expected):
    """Values computed apart from this code, printed in MW/m2 to 3 digits."""
    assert float(CONVECTIVE[name](DENSITY, SPEED, RADIUS)) / 1e6 == pytest.approx(expected, abs=5.1e-3)


def test_detra_kemp_riddell_at_its_own_anchor():
    """At sea-level density, 26,000 ft/s and 1 m the formula is its constant."""
    assert float(CONVECTIVE["detra-kemp-riddell"](1.225, 7925.0, 1.0)) == pytest.approx(110.35e6, rel=1e-12)
    # and its published hot-wall factor is 1 for a wall at 300 K
    flux = convective_flux(1.225, 7925.0, 1.0, 31.6e6, 300.0, "detra-kemp-riddell")
    assert float(flux) == pytest.approx(110.35e6, rel=1e-12)


def test_correlations_scatter_as_their_sigma_says():
    """Between 4 and 8 km/s the three lie within 1.96 x 12 % x sqrt(2) of each other (difference of two)."""
    speed = np.linspace(4000.0, 7900.0, 40)
    flux = np.array([c(1e-4, speed, 1.0) for c in CONVECTIVE.values()])
    assert (np.log(flux.max(axis=0) / flux.min(axis=0)) < 1.96 * 0.12 * np.sqrt(2)).all()
    assert convective_sigma([7999.0, 8000.0]).tolist() == [0.12, 0.20]


def test_brandis_johnston_has_no_answer_outside_its_speeds():
    flux = CONVECTIVE["brandis-johnston"](1e-4, [0.0, 2999.0, 3001.0, 9499.0, 9501.0, 17001.0], 1.0)
    assert np.isnan(flux).tolist() == [False, True, False, False, False, True]
    assert flux[0] == 0.0
    # the two branches are separate fits: they meet at 9.5 km/s to 2 %
    assert flux[4] / flux[3] == pytest.approx(1.0, abs=0.02)


@pytest.mark.parametrize("name", CONVECTIVE)
def test_every_correlation_scalar_array_empty_and_at_rest(name):
    correlation = CONVECTIVE[name]
    assert correlation(1e-4, 7000.0, 0.5).shape == ()
    assert correlation(np.full(3, 1e-4), 7000.0, 0.5).shape == (3,)
    assert correlation(np.empty(0), np.empty(0), 0.5).shape == (0,)
    assert correlation(1e-4, 0.0, 0.5) == 0.0
    assert correlation.covers(1e-4, [100.0, 6000.0]).tolist() == [False, True]
    with pytest.raises(ValueError, match="nose_radius must be positive"):
        correlation(1e-4, 7000.0, 0.0)
    # the stated exponent of density is that of the formula (two branches differ by 0.003)
    ratio = np.log(correlation(2e-4, 7000.0, 0.5) / correlation(1e-4, 7000.0, 0.5)) / np.log(2.0)
    assert float(ratio) == pytest.approx(correlation.density_exponent, abs=1e-3)


def test_unknown_correlation_is_named():
    with pytest.raises(ValueError, match=r"correlation is 'fay', expected one of: sutton-graves"):
        convective_flux(1e-4, 7000.0, 1.0, 25e6, 300.0, "fay")


@pytest.mark.parametrize(("temperature", "expected"), [(300.0, 300.5), (1000.0, 1046.0), (2000.0, 2252.0)])
def test_wall_enthalpy_against_air_tables(temperature, expected):
    """Ideal-gas air tables (Keenan & Kaye; values from memory, kJ/kg); argon's share is the difference."""
    assert float(wall_enthalpy(temperature)) / 1e3 == pytest.approx(expected, rel=4e-3)


@given(speed=st.floats(1.0, 15e3), gas=st.floats(150.0, 1500.0), wall=st.floats(100.0, 3000.0))
def test_hot_wall_keeps_the_sign_of_the_enthalpy_difference(speed, gas, wall):
    total = float(wall_enthalpy(gas)) + 0.5 * speed**2
    at_wall = float(wall_enthalpy(wall))
    for reference in (0.0, 301e3):
        factor = float(hot_wall_factor(total, at_wall, reference))
        assert np.isfinite(factor)
        assert np.sign(factor) == np.sign(total - at_wall)


def test_radiative_at_the_flight_state():
    """Tauber & Sutton at 71.04 km, computed apart: 1.02 MW/m2; its density lies inside the fitted range."""
    assert float(radiative_flux(DENSITY, SPEED, RADIUS)) / 1e6 == pytest.approx(1.02, abs=5.1e-3)
    assert int(radiative_validity(DENSITY, SPEED, RADIUS)) == 1


def test_radiative_table_is_the_published_one():
    path = Path(aero.heat.__file__).with_name("tauber_sutton_1991.csv")
    rows = [r for r in csv.reader(path.read_text().splitlines()) if r and r[0][:1].isdigit()]
    speeds = np.array([float(r[0]) for r in rows])
    values = np.array([float(r[1]) for r in rows])
    # at R = 1 m the exponent drops out: the flux shows the table itself
    flux = radiative_flux(1e-4, speeds, 1.0) / (4.736e4 * 1e4 * 1e-4**1.22)
    np.testing.assert_allclose(flux, values, rtol=1e-12)
    assert (speeds[0], values[0], speeds[-1], values[-1]) == (9000.0, 1.5, 16000.0, 2040.0)
    assert (np.diff(values) > 0).all()


def test_radiative_range_rules():
    assert radiative_flux(1e-4, [0.0, 7500.0, 8999.9], 1.0).tolist() == [0.0, 0.0, 0.0]
    assert np.isnan(radiative_flux(1e-4, 16001.0, 1.0))
    assert np.isnan(radiative_flux([np.nan], 7500.0, 1.0)).all()
    codes = radiative_validity(
        [1e-4, 1e-4, 1e-4, 1e-3, 1e-6, 1e-4], [8e3, 9.5e3, 12e3, 12e3, 12e3, 17e3], 1.0
    )
    assert codes.tolist() == [0, 2, 1, 2, 4, 3]
    assert radiative_validity(1e-4, 12e3, [0.1, 5.0]).tolist() == [2, 2]
    assert set(codes.tolist()) == set(RADIATIVE_VALIDITY)
    assert radiative_sigma(codes).round(3).tolist() == [0.0, 0.693, 0.4, 0.693, 0.693, 0.693]


def test_radiative_radius_exponent_is_held_at_its_highest():
    thin = radiative_flux(1e-6, 12e3, [0.5, 1.0])  # a would be 2 and more: held at 1
    assert thin[0] / thin[1] == pytest.approx(0.5, rel=1e-12)
    assert radiative_flux(0.0, 12e3, 0.5) == 0.0
