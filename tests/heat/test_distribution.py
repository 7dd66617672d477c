"""Heating over bodies: Lees by quadrature, free-molecular flux by integrals over velocities, the whole surface."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy import integrate

from aero.air.state import MOLECULE_MASS
from aero.body import Box, Cylinder, FlatPlate, Sphere, Vehicle
from aero.body.part import Part
from aero.body.shapes import SphereCone
from aero.body.surface import Surface
from aero.constants import BOLTZMANN
from aero.gas import flow, mixed_air
from aero.heat import (
    SURFACE_METHODS,
    element_energy_fluxes,
    energy_fluxes,
    hemisphere_ratio,
    refine,
    sphere_cone_ratio,
    stagnation,
    surface_heating,
)
from aero.heat.distribution import direction
from aero.heat.local import LEE_SHARE, local_ratio, pressure_coefficients

AIR = mixed_air(220.0, 2e21, altitude=70e3)
THIN = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
BALL = Vehicle.from_shape(Sphere(diameter=1.0))


def lees(pressure, velocity, radius, end):
    """Return Lees's integral for a body of revolution with unit velocity gradient at the stagnation point."""
    whole, _ = integrate.quad(
        lambda s: pressure(s) * velocity(s) * radius(s) ** 2, 0.0, end, epsabs=0, epsrel=1e-11
    )
    return 0.5 * pressure(end) * velocity(end) * radius(end) / np.sqrt(whole)


@pytest.mark.parametrize("ratio", [0.0, 0.01, 0.1])
@pytest.mark.parametrize("degrees", [5.0, 20.0, 45.0, 70.0, 90.0])
def test_hemisphere_against_quadrature(degrees, ratio):
    """[Lees1956]: the integral itself, with the velocity proportional to the angle."""
    expected = lees(
        lambda s: (1.0 - ratio) * np.cos(s) ** 2 + ratio, lambda s: s, np.sin, np.radians(degrees)
    )
    assert float(hemisphere_ratio(np.radians(degrees), ratio)) == pytest.approx(expected, rel=1e-8, abs=1e-12)


@pytest.mark.parametrize("degrees", [15.0, 35.0, 55.0])
def test_cone_against_quadrature(degrees):
    """Past the cap pressure and velocity keep their values at its edge; nose radius 1."""
    half = np.radians(degrees)
    end = 0.5 * np.pi - half
    far = end + 1.7

    def radius(s):
        return np.where(s <= end, np.sin(s), np.cos(half) + (s - end) * np.sin(half))

    pieces = [
        integrate.quad(lambda s: np.cos(s) ** 2 * s * np.sin(s) ** 2, 0.0, end)[0],
        integrate.quad(lambda s: np.sin(half) ** 2 * end * radius(s) ** 2, end, far)[0],
    ]
    expected = 0.5 * np.sin(half) ** 2 * end * radius(far) / np.sqrt(sum(pieces))
    assert float(sphere_cone_ratio(radius(far), 1.0, half)) == pytest.approx(float(expected), rel=1e-9)


def test_lees_limits():
    assert hemisphere_ratio([0.0, 1e-4, 1e-3, 2e-3]) == pytest.approx([1.0] * 4, abs=1e-5)
    assert np.isnan(hemisphere_ratio([-0.1, 2.0])).all()
    assert (np.diff(hemisphere_ratio(np.linspace(0.0, np.pi / 2, 100))) < 0.0).all()
    edge = 0.3 * np.cos(0.9)
    near = sphere_cone_ratio([edge * (1 - 1e-9), edge * (1 + 1e-9)], 0.3, 0.9, 0.01)
    assert near[0] == pytest.approx(near[1], rel=1e-7)  # no step where the cone begins
    with pytest.raises(ValueError, match="nose_radius must be positive"):
        sphere_cone_ratio(0.1, 0.0, 0.9)


@pytest.mark.parametrize("cosine", [1.0, 0.5, 0.0, -0.4])
@pytest.mark.parametrize("speed", [300.0, 1500.0, 6000.0])
def test_free_molecular_flux_against_integrals_over_velocities(speed, cosine):
    """Energy carried across an element by a drifting Maxwellian, integrated directly; one diatomic gas."""
    gas = mixed_air(700.0, 1e16, [1, 0, 0, 0, 0, 0, 0], altitude=200e3)
    m, kt = MOLECULE_MASS[0], BOLTZMANN * 700.0
    c = np.sqrt(2.0 * kt / m)
    s, across = speed / c * cosine, speed / c * np.sqrt(1.0 - cosine**2)
    # along the inward normal u; the mean square of the other two components is across^2 + 1; rotation kT
    bell = lambda u: u * (u * u + across**2 + 1.0 + 1.0) * np.exp(-((u - s) ** 2)) / np.sqrt(np.pi)  # noqa: E731
    integral, _ = integrate.quad(bell, 0.0, max(s, 0.0) + 9.0, points=[max(s, 0.1)], epsrel=1e-10)
    incident, _ = element_energy_fluxes(gas, flow(gas, speed), [cosine])
    assert float(incident[0]) == pytest.approx(1e16 * c * kt * integral, rel=1e-8)


def test_free_molecular_flux_is_that_of_the_stagnation_element_and_a_cosine_when_fast():
    moving = flow(THIN, 7500.0)
    incident, emitted = element_energy_fluxes(THIN, moving, [1.0, 0.5])
    np.testing.assert_allclose(incident[0], energy_fluxes(THIN, moving)[0], rtol=1e-12)
    np.testing.assert_allclose(emitted[0], energy_fluxes(THIN, moving)[1], rtol=1e-12)
    fast = flow(mixed_air(1.0, 1e15, altitude=200e3), 7500.0)  # speed ratio 300
    cosines = np.array([1.0, 0.7, 0.2, -0.3])
    cold, _ = element_energy_fluxes(mixed_air(1.0, 1e15, altitude=200e3), fast, cosines)
    np.testing.assert_allclose(cold[:3] / cold[0], cosines[:3], rtol=1e-12)
    assert cold[3] == 0.0


def test_energy_over_a_sphere_is_that_of_the_stream():
    """Fast flow: what the frontal area intercepts, rho V^3/2 and the enthalpy it carries, (5/2 + j) n k T V."""
    gas = mixed_air(5.0, 1e15, [1, 0, 0, 0, 0, 0, 0], altitude=200e3)
    moving = flow(gas, 7500.0)
    nodes, weights = np.polynomial.legendre.leggauss(60)
    ends = np.array([-1.0, -0.1, -0.02, 0.0, 0.02, 0.1, 1.0])  # it bends within 1/S of grazing
    half = np.diff(ends)[:, None] / 2.0
    cosines = (ends[:-1, None] + half * (nodes + 1.0)).ravel()
    incident, _ = element_energy_fluxes(gas, moving, cosines)
    over_sphere = float(incident @ (half * weights).ravel()) * 2.0 * np.pi
    stream = 7500.0 * (0.5 * float(gas.density) * 7500.0**2 + 3.5 * 1e15 * BOLTZMANN * 5.0)
    # thermal motion also brings molecules past the rim: 1/(2 S^2), 3e-5 at a speed ratio of 138
    assert over_sphere == pytest.approx(stream * np.pi, rel=5e-5)


def test_nothing_is_taken_where_the_gas_is_at_rest_with_the_wall():
    """Energy balance: a surface at the gas's temperature in a gas at rest receives what it emits."""
    incident, emitted = element_energy_fluxes(THIN, flow(THIN, 1e-6), [1.0, 0.0, -1.0])
    np.testing.assert_allclose(incident, emitted * 900.0, rtol=1e-8)


def test_a_sphere_heats_as_its_stagnation_point_at_any_incidence():
    moving = flow(AIR, 7000.0)
    point = stagnation(BALL, AIR, moving, 1.0, 300.0)
    for angle in (0.0, 0.7):
        found = surface_heating(BALL, AIR, moving, 0.001, wall=300.0, angle_of_attack=angle)
        # the foremost triangle of 16,000 lies within 4 degrees: Lees's ratio there is 0.995
        assert float(found.maximum) == pytest.approx(float(point.bridged), rel=6e-3)
        away = found.maximum_at / np.sqrt((found.maximum_at**2).sum())
        assert float(away @ direction(angle)) > 0.99
        assert (found.flux <= point.bridged * (1 + 1e-9)).all()


def test_sphere_cone_of_lees_and_the_local_rule_beside_it():
    """The claim of `local_ratio`: within 18 % from 30 to 60 degrees, noses of 0.3 to 0.8 of the base."""
    moving = flow(AIR, 6500.0)
    for degrees in (30.0, 45.0, 60.0):
        for nose in (0.3, 0.8):
            shape = SphereCone(nose_radius=nose, half_angle=np.radians(degrees), base_radius=1.0)
            body = Vehicle.from_shape(shape)
            elements = body.elements(3000)
            ratios = []
            for tilt in (0.0, 1e-5):
                cosine = elements.normals @ direction(tilt)
                pressure = pressure_coefficients(AIR, moving, cosine)
                found, method = local_ratio(
                    body, elements, direction(tilt), cosine, np.ones(len(elements)), pressure.ratio, nose
                )
                ratios.append(found)
                assert set(method.tolist()) == {0, 1 if tilt == 0.0 else 2}
            front = elements.normals[:, 0] > 1e-3
            assert np.abs(ratios[1][front] / ratios[0][front] - 1.0).max() < 0.18
            np.testing.assert_allclose(ratios[0][elements.normals[:, 0] < 0.0], LEE_SHARE)


def test_flux_is_never_above_either_limit_and_reaches_both():
    air = mixed_air([220.0, 900.0], [2e22, 1e15], altitude=[95e3, 250e3])
    found = surface_heating(BALL, air, flow(air, 7500.0), [1e-4, 1e3], wall=300.0)
    assert (found.flux <= found.continuum * (1 + 1e-12)).all()
    front = found.elements.normals[:, 0] > 0.3
    np.testing.assert_allclose(found.flux[0, front], found.continuum[0, front], rtol=0.01)
    np.testing.assert_allclose(found.flux[1, front], found.free_molecular[1, front], rtol=0.01)
    assert found.flux.shape == (2, len(found.elements))
    one = found.at(1)
    np.testing.assert_array_equal(one.flux, found.flux[1])
    assert float(one.maximum) == float(found.maximum[1])


def test_walls_fixed_radiative_and_by_part():
    hot = Part("hot", Box(length=0.3, width=0.2, height=0.1), Surface(temperature=500.0))
    free = Part("free", Box(length=0.3, width=0.2, height=0.1), Surface(temperature=None), (0.0, 1.0, 0.0))
    pair = replace(BALL, heating_nose_radius=0.1).with_parts((hot, free))
    moving = flow(THIN, 7500.0)
    own = surface_heating(pair, THIN, moving, 100.0)
    assert (own.wall_temperature[own.elements.part == 0] == 500.0).all()
    free_wall = own.wall_temperature[own.elements.part == 1]
    assert free_wall.max() > free_wall.min() >= 249.999  # behind, the surroundings of 250 K
    balance = 0.85 * 5.670374419e-8 * (free_wall**4 - 250.0**4)
    np.testing.assert_allclose(own.flux[own.elements.part == 1], balance, rtol=1e-4, atol=1e-4)
    same = surface_heating(pair, THIN, moving, 100.0, wall=400.0)
    assert (same.wall_temperature == 400.0).all()
    assert own.regime_index().tolist() == [3] * len(own.elements)


def test_elements_behind_others_get_no_molecules():
    """Two plates of one size across the flow: the second gets nothing, and all of it once shadows are off."""
    front = Part("front", FlatPlate(length=1.0, width=1.0), angle=np.pi / 2)
    back = Part("back", FlatPlate(length=1.0, width=1.0), position=(-1.0, 0.0, 0.0), angle=np.pi / 2)
    pair = replace(BALL, heating_nose_radius=0.5).with_parts((front, back))
    moving = flow(THIN, 7500.0)
    found = surface_heating(pair, THIN, moving, 100.0, wall=300.0)
    facing = (found.elements.part == 1) & (found.elements.normals[:, 0] > 0.5)
    assert facing.any()
    np.testing.assert_array_equal(found.flux[facing], 0.0)
    assert set(found.method[facing].tolist()) == {3}
    open_ = surface_heating(pair, THIN, moving, 100.0, wall=300.0, shadow=False)
    first = (open_.elements.part == 0) & (open_.elements.normals[:, 0] > 0.5)
    np.testing.assert_allclose(np.sort(open_.flux[facing]), np.sort(open_.flux[first]), rtol=1e-9)
    assert set(found.method.tolist()) <= set(SURFACE_METHODS)


def test_catalysis_of_the_surface_counts_when_asked():
    moving = flow(THIN, 7500.0)
    plain = surface_heating(BALL, THIN, moving, 100.0, wall=300.0)
    full = surface_heating(BALL, THIN, moving, 100.0, wall=300.0, catalysis=True)
    # atomic oxygen makes 64 % of the particles: its bonds add 2.56 of 4.66 eV for its own kinetic energy
    gain = float(full.maximum / plain.maximum)
    oxygen = 0.64 * 15.9994 / float(THIN.molar_mass * 1e3)
    assert gain == pytest.approx(1.0 + oxygen * 2.558 / 4.66, rel=0.02)
    dense = flow(AIR, 7500.0)
    bare = BALL.with_surface(catalysis="none", recombination=0.0)
    off = surface_heating(bare, AIR, dense, 1e-3, wall=300.0)
    on = surface_heating(bare, AIR, dense, 1e-3, wall=300.0, catalysis=True)
    assert float(on.maximum / off.maximum) < 0.35


def test_cylinder_heats_along_its_line():
    rod = Vehicle.from_shape(Cylinder(diameter=0.5, length=2.0))
    moving = flow(AIR, 7000.0)
    found = surface_heating(rod, AIR, moving, 1e-3, wall=300.0)
    ahead = found.elements.normals[:, 0] > 0.9999
    np.testing.assert_allclose(
        found.flux[ahead], float(stagnation(rod, AIR, moving, 1.0, 300.0).bridged), rtol=2e-3
    )


def test_no_radius_and_wrong_calls():
    box = Vehicle.from_shape(Box(length=0.3, width=0.2, height=0.1))
    moving = flow(AIR, 7000.0)
    assert surface_heating(box, AIR, moving, 1e-3) is None
    with pytest.raises(ValueError, match="wall is 'cold'"):
        surface_heating(BALL, AIR, moving, 1e-3, wall="cold")
    with pytest.raises(ValueError, match="correlation is 'x'"):
        surface_heating(BALL, AIR, moving, 1e-3, correlation="x")
    with pytest.raises(ValueError, match="longest is 0 m"):
        refine(BALL.elements(100), 0.0)


def test_at_rest_there_is_no_heat():
    found = surface_heating(BALL, AIR, flow(AIR, 0.0), 1e-3, wall=300.0)
    np.testing.assert_array_equal(found.flux, 0.0)
    assert np.isnan(found.pressure_coefficient).all()
    np.testing.assert_allclose(found.knudsen, 1e-3)


def test_refining_keeps_the_surface():
    shape = SphereCone(nose_radius=0.27, half_angle=np.radians(55.0), base_radius=0.45)
    coarse = Vehicle.from_shape(shape).elements(400)
    fine = refine(coarse, 0.05)
    edges = np.roll(fine.vertices, -1, axis=1) - fine.vertices
    assert np.sqrt((edges**2).sum(axis=2)).max() <= 0.05
    assert float(fine.areas.sum()) == pytest.approx(float(coarse.areas.sum()), rel=1e-12)
    np.testing.assert_allclose(fine.areas @ fine.centroids, coarse.areas @ coarse.centroids, atol=1e-12)
    turning = np.cross(fine.vertices[:, 1] - fine.vertices[:, 0], fine.vertices[:, 2] - fine.vertices[:, 0])
    np.testing.assert_allclose((turning * fine.normals).sum(axis=1) / 2.0, fine.areas, rtol=1e-9)
