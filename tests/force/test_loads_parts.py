"""Shadows in the loads, parts with surfaces of their own, gas-surface models, and the tables behind."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from aero.air.state import MOLECULE_MASS
from aero.body import Box, FlatPlate, Mesh, Sphere, SphereCone, Surface, Vehicle
from aero.body.part import Part
from aero.constants import BOLTZMANN
from aero.force import continuum_loads, free_molecular_loads, projected_area
from aero.force.attitudes import attitudes
from aero.force.gas_surface import element
from aero.force.load_sums import MODE_COSINES, MODES, lagrange
from aero.force.newtonian import base_pressure_coefficient, stagnation_pressure_coefficient
from aero.gas import flow, mixed_air

NITROGEN = [1.0, 0, 0, 0, 0, 0, 0]
ORBIT = [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01]


def stream(speed_ratio, temperature=300.0):
    air = mixed_air(temperature, 1e15, NITROGEN, altitude=250e3)
    return air, flow(air, speed_ratio * np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[0]))


def plates_in_a_row(gap, **surface):
    """Two unit plates across the flow at angle of attack 0, one `gap` behind the other."""
    skin = Surface(**surface)
    shape = FlatPlate(length=1.0, width=1.0)
    upright = {"axis": (0.0, 1.0, 0.0), "angle": np.pi / 2}
    parts = (
        Part("front", shape, skin, position=(0.0, 0.0, 0.0), **upright),
        Part("hind", shape, skin, position=(-gap, 0.0, 0.0), **upright),
    )
    one = Vehicle.from_shape(shape, surface=skin)
    return replace(one.with_parts(parts), moment_point=(0.0, 0.0, 0.0)), one


@pytest.mark.parametrize("degrees", [0.0, 15.0, 30.0, 60.0])
def test_hind_plate_carries_what_the_front_one_leaves(degrees):
    angle, gap = np.radians(degrees), 0.9
    pair, _ = plates_in_a_row(gap)
    lit = min(1.0, gap * np.tan(angle))
    # two outlines, each placed to half a pixel of at most 1.9/512 and seen at the cosine of the angle
    slack = 2 * 0.5 * 1.9 / 512
    assert float(projected_area(pair, angle)) == pytest.approx((1.0 + lit) * np.cos(angle), abs=slack)
    ratio = 30.0
    air, moving = stream(ratio)
    found = free_molecular_loads(pair, air, moving, 300.0, 1.0, angle)
    p, t = element("maxwell", ratio, np.cos(angle), 1.0)
    lee_p, lee_t = element("maxwell", ratio, -np.cos(angle), 1.0)
    # the faces turned away see next to nothing at this speed but are part of the sum; p and t are at most 2
    axial = p * (1.0 + lit) - 2.0 * lee_p
    normal = t * (1.0 + lit) + 2.0 * lee_t
    assert float(found.axial) == pytest.approx(float(axial), abs=3.0 * slack)
    assert float(found.normal) == pytest.approx(float(normal), abs=3.0 * slack)
    # the lit strip is the lower one, centred (1 - lit)/2 below the axis (z down); its pull turns the nose down
    strip = -p * lit * (1.0 - lit) / 2.0 - t * lit * -gap * -1.0
    assert float(found.pitch) == pytest.approx(float(strip), abs=3.0 * slack)


def test_newtonian_shadow_takes_base_pressure():
    pair, one = plates_in_a_row(0.9)
    air, moving = stream(8.0)
    found = continuum_loads(pair, air, moving, 1e-6, 0.0, real_gas=False)
    peak = stagnation_pressure_coefficient(moving.mach, moving.heat_capacity_ratio)
    base = base_pressure_coefficient(moving.mach)
    # front: peak ahead, base behind; hind: base on both sides, which cancels
    assert float(found.axial) == pytest.approx(float(peak - base), rel=1e-9)
    free = continuum_loads(pair, air, moving, 1e-6, 0.0, real_gas=False, shadow=False)
    assert float(free.axial) == pytest.approx(2.0 * float(peak - base), rel=1e-9)
    alone = continuum_loads(one, air, moving, 1e-6, np.pi / 2, real_gas=False)
    assert float(alone.drag) == pytest.approx(float(peak - base), rel=1e-9)


def test_shadows_off_twice_over():
    pair, _ = plates_in_a_row(0.5)
    air, moving = stream(8.0)
    without = free_molecular_loads(pair, air, moving, 300.0, 1.0, 0.0, shadow=False)
    stated = free_molecular_loads(replace(pair, shadows=False), air, moving, 300.0, 1.0, 0.0)
    assert (without.force == stated.force).all()
    assert float(without.axial) > 1.9 * float(free_molecular_loads(pair, air, moving, 300.0, 1.0, 0.0).axial)


def test_shadow_of_a_convex_mesh_changes_nothing():
    shape = SphereCone(nose_radius=0.2, half_angle=0.9, base_radius=0.5)
    vehicle = Vehicle.from_shape(shape)
    air, moving = stream(6.0)
    angle = np.linspace(-3.0, 3.0, 7)
    air = mixed_air(np.full(7, 300.0), 1e15, NITROGEN, altitude=250e3)
    moving = flow(air, 3000.0)
    elements = vehicle.elements(1500)
    with_shadow = free_molecular_loads(vehicle, air, moving, 300.0, 1.0, angle, 0.2, elements=elements)
    without = free_molecular_loads(vehicle, air, moving, 300.0, 1.0, angle, 0.2, count=1500)
    assert with_shadow.force == pytest.approx(without.force, abs=1e-12)


def test_each_part_has_its_own_surface():
    plain = Surface(temperature=300.0)
    hot = Surface(temperature=900.0, energy_accommodation=0.5, diffuse_fraction=0.4)
    box, wing = Box(length=0.3, width=0.2, height=0.1), FlatPlate(length=0.4, width=0.2)
    apart = {"position": (0.0, 5.0, 0.0), "angle": 0.7}
    whole = Vehicle.from_shape(box, surface=plain)
    both = whole.with_parts((Part("body", box, plain), Part("wing", wing, hot, **apart)))
    air = mixed_air(900.0, 1e15, ORBIT, altitude=250e3)
    moving = flow(air, 7500.0)
    found = free_molecular_loads(both, air, moving, 350.0, 0.9, 0.1, 0.05)
    body = free_molecular_loads(whole, air, moving, 350.0, 0.9, 0.1, 0.05)
    alone = Vehicle.from_shape(wing, surface=hot).with_parts((Part("wing", wing, hot, **apart),))
    panel = free_molecular_loads(
        replace(alone, reference_area=whole.reference_area), air, moving, 900.0, 0.5, 0.1, 0.05
    )
    # the body takes the wall and accommodation handed in, the wing its own; far apart, no shadow at all
    assert found.force == pytest.approx(body.force + panel.force, rel=1e-12)
    cooler = free_molecular_loads(both, air, moving, 200.0, 0.9, 0.1, 0.05)
    assert float(cooler.drag) < float(found.drag)


@pytest.mark.parametrize(
    "coefficients",
    [{"normal_energy_accommodation": a, "tangential_momentum_accommodation": t} for a, t in
     ((0.3, 0.6), (0.9, 1.0), (0.0, 0.0))],
)  # fmt: skip
def test_lampis_lord_surface_against_its_element(coefficients):
    # a box is six elements: the loads through tables against the model's own formula, species by species
    surface = Surface(model="cll", **coefficients)
    box = Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0), surface=surface)
    temperature = np.linspace(250.0, 1200.0, 40)
    air = mixed_air(temperature, 1e15, ORBIT, altitude=250e3)
    moving = flow(air, 7500.0)
    angle = 0.35
    found = free_molecular_loads(box, air, moving, 300.0, 1.0, angle)
    mass = air.species * MOLECULE_MASS
    mass = mass / mass.sum(axis=-1, keepdims=True)
    ratio, wall = moving.speed_ratio_species, (300.0 / temperature)[:, None]
    u = np.array([np.cos(angle), 0.0, np.sin(angle)])
    force = np.zeros((40, 3))
    for normal in np.concatenate([np.eye(3), -np.eye(3)]):
        c = float(normal @ u)
        pressure, shear = element("cll", ratio, c, wall, **coefficients)
        along = u - c * normal
        along = along / max(np.sqrt(along @ along), 1e-300)
        force -= (mass * pressure).sum(axis=1)[:, None] * normal + (mass * shear).sum(axis=1)[:, None] * along
    # six wall ratios over this range and cubics of the leaving momentum: well below 1e-5
    assert found.force == pytest.approx(force, abs=1e-5)


def test_specular_lampis_lord_is_specular_maxwell():
    air, moving = stream(7.0)
    shape = SphereCone(nose_radius=0.2, half_angle=0.9, base_radius=0.5)
    lord = Surface(model="cll", normal_energy_accommodation=0.0, tangential_momentum_accommodation=0.0)
    one = free_molecular_loads(Vehicle.from_shape(shape, surface=lord), air, moving, 300.0, 1.0, 0.3)
    mirror = Vehicle.from_shape(shape, surface=Surface(diffuse_fraction=0.0))
    two = free_molecular_loads(mirror, air, moving, 300.0, 1.0, 0.3)
    assert one.force == pytest.approx(two.force, abs=1e-6)  # cubics of the leaving momentum


def mesh_vehicle():
    shape = Mesh.of(SphereCone(nose_radius=0.3, half_angle=1.0, base_radius=0.5).panels(900))
    return replace(Vehicle.from_shape(shape), moment_point=(-0.2, 0.0, 0.0))


def flight(count):
    temperature = np.linspace(200.0, 1000.0, count)
    air = mixed_air(temperature, 1e15, ORBIT, altitude=200e3)
    return air, flow(air, np.linspace(7800.0, 6000.0, count))


def test_many_points_at_one_attitude_equal_each_point_alone():
    vehicle = mesh_vehicle()
    air, moving = flight(3000)  # more points than a table has nodes
    table = free_molecular_loads(vehicle, air, moving, 300.0, 0.9, 0.2, 0.1)
    for point in (0, 1234, 2999):
        one = mixed_air(air.temperature[point], 1e15, ORBIT, altitude=200e3)
        alone = free_molecular_loads(vehicle, one, flow(one, moving.speed[point]), 300.0, 0.9, 0.2, 0.1)
        assert table.force[point] == pytest.approx(alone.force, abs=5e-8)  # cubics at 32 a unit of ln S
        assert table.moment[point] == pytest.approx(alone.moment, abs=5e-8)


@pytest.mark.parametrize("slip", [0.0, "varies"])
def test_attitude_grid_against_each_attitude(slip):
    vehicle = mesh_vehicle()
    air, moving = flight(2000)
    angle = 0.25 * np.sin(np.linspace(0.0, 20.0, 2000))
    sideslip = 0.05 * np.cos(np.linspace(0.0, 14.0, 2000)) if slip == "varies" else np.zeros(2000)
    assert attitudes(angle, sideslip).interpolated
    grid = free_molecular_loads(vehicle, air, moving, 300.0, 0.9, angle, sideslip)
    thick = continuum_loads(vehicle, air, moving, 1.0, angle, sideslip)
    assert 0.0 < grid.interpolation_error < 1e-4
    some = np.arange(5, 2000, 199)
    air_there = mixed_air(air.temperature[some], 1e15, ORBIT, altitude=200e3)
    there = flow(air_there, moving.speed[some])
    exact = free_molecular_loads(vehicle, air_there, there, 300.0, 0.9, angle[some], sideslip[some])
    dense = continuum_loads(vehicle, air_there, there, 1.0, angle[some], sideslip[some])
    assert exact.interpolation_error == 0.0
    # cubic over one degree: 1e-6 of a smooth body; 1e-4 where large flat faces turn edge-on
    assert grid.force[some] == pytest.approx(exact.force, abs=2e-5)
    assert thick.force[some] == pytest.approx(dense.force, abs=2e-5)
    assert grid.projected_area[some] == pytest.approx(exact.projected_area, abs=2e-5)


def test_attitudes_that_a_grid_would_not_serve_are_computed_each():
    random = np.random.default_rng(4)
    a, b = random.uniform(-3.0, 3.0, 40), random.uniform(-1.4, 1.4, 40)
    assert not attitudes(a, b).interpolated
    a[3] = np.nan
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    air, moving = flight(40)
    found = free_molecular_loads(ball, air, moving, 300.0, 1.0, a, b, count=200)
    assert np.isnan(found.force[3]).all()
    assert np.isfinite(np.delete(found.force, 3, axis=0)).all()


def test_modes_hold_any_polynomial_of_the_cosine():
    place = np.linspace(0.0, 1.0, 11)
    weights = lagrange(MODE_COSINES, place)
    for power in range(MODES):
        assert MODE_COSINES**power @ weights == pytest.approx(place**power, abs=1e-13)
