"""The blend of the limits, the wall's balance and the bundle."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from aero.body import Box, Cylinder, Sphere, Surface, Vehicle
from aero.constants import STEFAN_BOLTZMANN
from aero.gas import flow, mixed_air
from aero.heat import (
    CONVECTIVE,
    bridged_flux,
    continuum_weight,
    free_molecular_flux,
    radiative_wall,
    stagnation,
)

FLUXES = st.floats(-1e8, 1e8, allow_subnormal=False)
BALL = Vehicle.from_shape(Sphere(diameter=0.54), surface=Surface(emissivity=0.85))


@given(c=FLUXES, f=FLUXES, p=st.floats(1.0, 6.0))
def test_blend_lies_between_zero_and_both_limits_or_between_the_limits(c, f, p):
    q = float(bridged_flux(c, f, p))
    assert abs(q) <= min(abs(c), abs(f)) * (1 + 1e-12)
    if c * f > 0.0:
        assert q * c >= 0.0
    rounding = 1e-14 * abs(q)
    assert min(c, f, 0.0) - rounding <= q <= max(c, f, 0.0) + rounding


@given(c=st.floats(1e-3, 1e8), f=st.floats(1e-3, 1e8), p=st.floats(1.0, 6.0))
def test_blend_is_the_formula(c, f, p):
    """The published power mean, evaluated as written."""
    assert float(bridged_flux(c, f, p)) == pytest.approx(c / (1 + (c / f) ** p) ** (1 / p), rel=1e-10)
    assert float(bridged_flux(-c, -f, p)) == pytest.approx(-float(bridged_flux(c, f, p)), rel=1e-12)


def test_blend_against_matting():
    """Matting 1971 (from memory): q = q_c (1 - exp(-q_fm/q_c)); they differ by less than the 15 % stated."""
    ratio = np.logspace(-3, 3, 601)
    ours, theirs = bridged_flux(1.0, ratio), 1.0 - np.exp(-ratio)
    assert np.abs(ours / theirs - 1.0).max() < 0.15


def test_blend_goes_smoothly_through_a_change_of_sign():
    """Continuum -1 to 1 against a free-molecular +-3: no step larger than that of the limits."""
    c = np.linspace(-1.0, 1.0, 4001)
    for f in (-3.0, 3.0):
        steps = np.abs(np.diff(bridged_flux(c, f)))
        assert steps.max() <= 1.5 * (c[1] - c[0])
    # deep in either limit the sign is that limit's own
    assert bridged_flux(-1e6, 1.0) == pytest.approx(1.0, rel=1e-6)
    assert bridged_flux(-1.0, 1e6) == pytest.approx(-1.0, rel=1e-6)


def test_blend_at_its_edges():
    assert bridged_flux([0.0, 5.0, 0.0], [5.0, 0.0, 0.0]).tolist() == [0.0, 0.0, 0.0]
    assert np.isnan(bridged_flux(np.nan, 1.0))
    assert np.isnan(bridged_flux(1.0, np.nan))
    assert bridged_flux(np.empty(0), np.empty(0)).shape == (0,)
    assert continuum_weight(2.0, 2.0) == 0.5
    with pytest.raises(ValueError, match="exponent must be positive"):
        bridged_flux(1.0, 1.0, 0.0)


@pytest.mark.parametrize("flux", [-200.0, 0.0, 5.0, 1e3, 1e6, 3e7])
def test_wall_balance_against_the_closed_root(flux):
    """A flux that does not depend on the wall has a closed root."""
    wall = radiative_wall(lambda t: (np.full_like(t, flux), np.zeros_like(t)), 0.85)
    if flux < -0.85 * STEFAN_BOLTZMANN * 250.0**4:  # cooled by more than it receives: no temperature does
        assert np.isnan(wall)
    else:
        expected = (250.0**4 + flux / (0.85 * STEFAN_BOLTZMANN)) ** 0.25
        assert float(wall) == pytest.approx(expected, rel=1e-7)


def test_wall_balance_needs_an_emissivity():
    with pytest.raises(ValueError, match=r"emissivity must lie in \(0, 1\]"):
        radiative_wall(lambda t: (t, t), 0.0)


def states(count=400):
    altitude = np.linspace(20e3, 300e3, count)
    number = 1.8e24 * np.exp(-(altitude - 20e3) / 7e3) + 1e14 * np.exp(-altitude / 60e3)
    shares = [0.7, 0.15, 0.14, 1e-3, 8e-3, 1e-4, 1e-6]
    air = mixed_air(
        np.where(altitude < 100e3, 220.0, 220.0 + (altitude - 100e3) * 4e-3), number, shares, altitude
    )
    return air, flow(air, np.geomspace(100.0, 12e3, count))


def test_radiative_wall_of_a_body_against_a_bracketing_root_finder():
    """Independent route: Brent's method on the balance written anew, point by point."""
    air, moving = states(40)
    heat = stagnation(BALL, air, moving, 0.95, "radiative")
    for i in range(40):

        def excess(wall, i=i):
            one = mixed_air(air.temperature[i], air.number_density[i], air.species[i], air.altitude[i])
            there = stagnation(BALL, one, flow(one, moving.speed[i]), 0.95, wall)
            return 0.85 * STEFAN_BOLTZMANN * (wall**4 - 250.0**4) - float(there.total)

        root = brentq(excess, 50.0, 9000.0, xtol=1e-8, rtol=1e-12)
        assert heat.wall_temperature[i] == pytest.approx(root, rel=1e-6)  # the promise of the solver


@pytest.mark.parametrize("name", CONVECTIVE)
def test_bundle_is_consistent_and_complete(name):
    air, moving = states()
    heat = stagnation(BALL, air, moving, 0.95, 350.0, correlation=name)
    if name != "brandis-johnston":  # has no answer below 3 km/s
        assert np.isfinite(heat.total).all()
    known = np.isfinite(heat.total)
    assert (np.abs(heat.bridged[known]) <= np.abs(heat.free_molecular[known]) * (1 + 1e-12)).all()
    np.testing.assert_allclose(heat.total[known], (heat.bridged + heat.radiative)[known], rtol=1e-14)
    np.testing.assert_allclose(heat.free_molecular, free_molecular_flux(air, moving, 350.0, 0.95), rtol=1e-12)
    np.testing.assert_allclose(heat.coefficient * 0.5 * air.density * moving.speed**3, heat.total, rtol=1e-12)
    if name == "sutton-graves":
        assert heat.bridged[0] < 0.0  # 100 m/s in cold air: the hot wall loses heat


def test_both_limits_are_reached():
    air, _ = states()
    heat = stagnation(BALL, air, flow(air, 7500.0), 1.0, 300.0)
    assert heat.bridged[0] == pytest.approx(heat.continuum[0], rel=1e-4)
    assert heat.bridged[-1] == pytest.approx(heat.free_molecular[-1], rel=1e-2)
    assert heat.continuum_weight[0] > 0.999
    assert heat.continuum_weight[-1] < 0.01


def test_slope_by_wall_temperature_against_differences():
    air, _ = states()
    a, b, c = (stagnation(BALL, air, flow(air, 7500.0), 0.9, t) for t in (699.0, 700.0, 701.0))
    # central difference over 2 K: curvature leaves 1e-5
    np.testing.assert_allclose(b.by_wall_temperature, (c.total - a.total) / 2.0, rtol=1e-4)


def test_at_rest_nothing_flows_and_the_wall_takes_its_surroundings():
    air, _ = states(3)
    heat = stagnation(BALL, air, flow(air, 0.0), 1.0, "radiative")
    for flux in (heat.total, heat.bridged, heat.continuum, heat.free_molecular, heat.radiative):
        assert flux.tolist() == [0.0, 0.0, 0.0]
        assert not np.signbit(flux).any()
    assert heat.wall_temperature == pytest.approx(250.0)
    assert np.isnan(heat.coefficient).all()


def test_without_a_nose_radius_there_is_no_heating():
    box = Vehicle.from_shape(Box(length=0.3, width=0.1, height=0.1))
    assert box.nose_radius is None
    air, moving = states(5)
    assert stagnation(box, air, moving, 1.0, 300.0) is None


def test_a_line_is_heated_less_than_a_point():
    """Fay & Riddell 1958: 0.57 for a cylinder against 0.763 for a sphere of the same radius."""
    air, moving = states(5)
    rod = Vehicle.from_shape(Cylinder(diameter=0.54, length=1.0))
    ratio = (
        stagnation(rod, air, moving, 1.0, 300.0).continuum
        / stagnation(BALL, air, moving, 1.0, 300.0).continuum
    )
    np.testing.assert_allclose(ratio, 0.57 / 0.763, rtol=1e-12)


def test_wrong_calls_are_named():
    air, moving = states(2)
    with pytest.raises(ValueError, match="wall is 'cold'"):
        stagnation(BALL, air, moving, 1.0, "cold")
    with pytest.raises(ValueError, match="expected one of: sutton-graves"):
        stagnation(BALL, air, moving, 1.0, 300.0, correlation="hot")


@given(
    density=st.floats(-14.0, 0.0).map(lambda x: 10.0**x),
    speed=st.floats(0.0, 15.9e3),
    temperature=st.floats(150.0, 1800.0),
    wall=st.one_of(st.floats(100.0, 3000.0), st.just("radiative")),
    accommodation=st.floats(0.05, 1.0),
    exponent=st.floats(1.0, 4.0),
)
def test_an_answer_wherever_there_is_air(density, speed, temperature, wall, accommodation, exponent):
    air = mixed_air(temperature, density / 4.8e-26, altitude=100e3)
    heat = stagnation(BALL, air, flow(air, speed), accommodation, wall, exponent=exponent)
    assert np.isfinite(heat.total)
    assert np.isfinite(heat.wall_temperature)
    assert np.isfinite(heat.by_wall_temperature) or heat.total == 0.0
    assert abs(heat.bridged) <= abs(heat.free_molecular) * (1 + 1e-9)
    assert heat.radiative >= 0.0


def test_shapes_scalar_and_empty():
    for shape in [(), (0,), (2, 3)]:
        air = mixed_air(np.full(shape, 250.0), 1e20, altitude=90e3)
        for wall in (300.0, "radiative"):
            assert stagnation(BALL, air, flow(air, 5000.0), 1.0, wall).total.shape == shape
