"""Wall catalysis and the radius a blunt body heats as."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.body import Sphere, Vehicle
from aero.body.shapes import SphereCone
from aero.body.surface import Surface
from aero.gas import flow, mixed_air
from aero.heat import (
    catalysis_of,
    catalytic_factor,
    dissociation_share,
    effective_nose_radius,
    heating_radius,
    recombination_flux,
    recombined_share,
    stagnation,
)

shares = st.floats(0.0, 0.75)


@given(d=shares, phi=st.floats(0.0, 1.0))
def test_factor_lies_between_none_and_full(d, phi):
    factor = float(catalytic_factor(d, phi))
    assert float(catalytic_factor(d, 0.0)) <= factor + 1e-12
    assert factor <= 1.0 + 1e-12
    assert float(catalytic_factor(d, 1.0)) == pytest.approx(1.0, rel=1e-12)


def test_a_wall_that_recombines_nothing_loses_the_dissociated_part():
    """With Le = 1 the factor would be 1 - d; Le^0.63 = 1.236 puts more of the heat into diffusion."""
    assert float(catalytic_factor(0.4, 0.0)) == pytest.approx(
        0.6 / (1.0 + (1.4**0.63 - 1.0) * 0.4), rel=1e-12
    )
    # at 7.5 km/s and 70 km the frozen, non-catalytic wall sees about a quarter: recorded in docs/validation.md
    d = dissociation_share(8e-5, 7500.0)
    assert float(catalytic_factor(d, 0.0)) == pytest.approx(0.27, abs=0.01)


def test_recombination_is_limited_by_the_wall_or_by_diffusion():
    slow, fast = recombined_share([1e-4, 1.0], 1500.0, 5000.0, 0.03)
    assert slow < 0.01
    assert fast > 0.98
    # the wall's rate: number flux of a gas at rest at the wall, n c/4, times gamma, at small gamma
    consumed = 5000.0 / (8.314462618 / 14.45e-3 * 1500.0)
    consumed *= 1e-4 * np.sqrt(8.0 * 8.314462618 / 14.45e-3 * 1500.0 / np.pi) / 4.0
    assert slow / (1.0 - slow) == pytest.approx(consumed / (1.4 ** (2 / 3) * 0.03), rel=1e-4)


def test_surfaces_choose_and_bad_shares_are_refused():
    full, none = Surface(), Surface(catalysis="none", recombination=0.0)
    partial = Surface(catalysis="partial", recombination=0.01)
    factors = [float(catalysis_of(s, 0.5, 1200.0, 2000.0, 0.02)) for s in (none, partial, full)]
    assert factors[0] < factors[1] < factors[2] == 1.0
    assert float(catalysis_of(partial, 0.5, 1200.0, 0.0, 0.0)) == 1.0  # nothing to be spared
    with pytest.raises(ValueError, match="dissociation_share must lie in 0 to 1"):
        catalytic_factor(1.2, 0.0)
    with pytest.raises(ValueError, match="recombination must lie in 0 to 1"):
        recombined_share(-0.1, 1000.0, 1e3, 0.01)


def test_stagnation_counts_catalysis_only_when_asked():
    air = mixed_air([220.0, 800.0], [1.7e21, 5e15], [0.5, 0.1, 0.38, 0.0, 0.01, 0.01, 0.0], [100e3, 200e3])
    moving = flow(air, 7500.0)
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    bare = ball.with_surface(catalysis="none", recombination=0.0)
    plain = stagnation(ball, air, moving, 1.0, 300.0)
    np.testing.assert_array_equal(stagnation(bare, air, moving, 1.0, 300.0).total, plain.total)
    counted = stagnation(bare, air, moving, 1.0, 300.0, catalysis=True)
    assert counted.continuum[0] / plain.continuum[0] == pytest.approx(
        float(catalytic_factor(dissociation_share(air.density[0], 7500.0), 0.0)), rel=1e-12
    )
    np.testing.assert_array_equal(counted.free_molecular, plain.free_molecular)
    full = stagnation(ball, air, moving, 1.0, 300.0, catalysis=True)
    np.testing.assert_allclose(
        full.free_molecular - plain.free_molecular, recombination_flux(air, moving, 1.0), rtol=1e-9
    )
    warm = stagnation(bare, air, moving, 1.0, "radiative", catalysis=True)
    assert (warm.wall_temperature <= stagnation(ball, air, moving, 1.0, "radiative").wall_temperature).all()


def test_effective_radius_between_a_sphere_and_a_flat_face():
    assert float(effective_nose_radius(0.4, 1.0, np.radians(45.0))) == pytest.approx(0.4, rel=1e-12)
    flat = float(effective_nose_radius(1e6, 1.0, np.arccos(1e-6)))
    assert flat == pytest.approx(3.3, rel=1e-5)  # 0.55 of a hemisphere's heating: 1/0.55^2
    assert flat**-0.5 == pytest.approx(0.55, abs=0.001)
    angle = np.radians(np.linspace(30.0, 89.0, 60))
    segment = effective_nose_radius(1.0 / np.cos(angle), 1.0, angle)
    assert (np.diff(segment) > 0.0).all()  # flatter segments heat less
    assert (segment <= 1.0 / np.cos(angle) * (1 + 1e-12)).all()
    with pytest.raises(ValueError, match="must not exceed base_radius"):
        effective_nose_radius(2.0, 1.0, np.radians(30.0))


def test_effective_radius_only_when_the_vehicle_says_so():
    capsule = Vehicle.from_shape(SphereCone(nose_radius=0.66, half_angle=np.radians(70.0), base_radius=1.32))
    assert heating_radius(capsule).radius == 0.66
    asked = heating_radius(replace(capsule, effective_nose_radius=True))
    assert asked.radius == pytest.approx(0.76, abs=0.01)
    assert asked.sigma == 0.15
    assert heating_radius(replace(capsule, effective_nose_radius=0.9)).radius == 0.9
    stated = replace(capsule, effective_nose_radius=True, heating_nose_radius=0.5)
    assert heating_radius(stated).radius == 0.5
    air = mixed_air(220.0, 1.7e21, altitude=100e3)
    cold = [stagnation(v, air, flow(air, 7000.0), 1.0, 300.0).continuum
            for v in (capsule, replace(capsule, effective_nose_radius=0.66 * 4))]  # fmt: skip
    assert float(cold[0] / cold[1]) == pytest.approx(2.0, rel=1e-12)
