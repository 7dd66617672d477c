"""Force and moment between the limits: the global and the local bridge."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from aero.body import Box, Sphere, SphereCone, Vehicle
from aero.bridge import DEFAULTS, bridge_for
from aero.bridge.loads import bridged_loads, loads_between, local_fraction
from aero.force import continuum_loads, free_molecular_loads
from aero.gas import flow, mean_free_path, mixed_air

DENSITY = 10.0 ** np.linspace(14.0, 25.0, 45)
AIR = mixed_air(200.0, DENSITY, altitude=100e3)
MOVING = flow(AIR, 7500.0)
CAPSULE = SphereCone(nose_radius=0.2202, half_angle=np.radians(60.0), base_radius=0.4055)


def between(shape, angle=0.0, **options):
    vehicle = replace(Vehicle.from_shape(shape), moment_point=(-0.2, 0.0, 0.0))
    return loads_between(vehicle, AIR, MOVING, 300.0, 1.0, angle, count=3000, **options)


@pytest.mark.parametrize("shape", [Sphere(diameter=0.8), CAPSULE, Box(length=1.0, width=1.0, height=1.0)])
def test_axial_force_of_blunt_bodies_keeps_under_the_local_bridge(shape):
    found = between(shape)
    change = found.locally.axial / found.globally.axial - 1.0
    assert np.abs(change).max() < 0.035  # "a few per cent": 3.0 for the sphere, 0.8 capsule, 0.3 box
    assert np.abs(change).max() > 1e-4  # and it does something


@pytest.mark.parametrize("shape", [CAPSULE, Box(length=1.0, width=0.5, height=0.5)])
def test_both_bridges_end_in_the_limits(shape):
    found = between(shape, 0.2)
    for loads in (found.globally, found.locally):
        # the erf's tail is 3e-6 at these ends of density, up to three times that with the shift
        assert loads.force[0] == pytest.approx(found.free_molecular.force[0], abs=3e-5)
        assert loads.moment[0] == pytest.approx(found.free_molecular.moment[0], abs=3e-5)
        assert loads.force[-1] == pytest.approx(found.continuum.force[-1], abs=3e-5)
        assert loads.moment[-1] == pytest.approx(found.continuum.moment[-1], abs=3e-5)
    # the erf's tail 5.4 decades from its centre, over a width of 3: 2.4e-6
    assert np.isclose(found.fraction[[0, -1]], [1.0, 0.0], atol=3e-6).all()


def test_limits_are_the_ones_of_force():
    vehicle = Vehicle.from_shape(CAPSULE)
    found = loads_between(vehicle, AIR, MOVING, 300.0, 1.0, 0.2, count=3000)
    knudsen = mean_free_path(AIR) / vehicle.reference_length
    free = free_molecular_loads(vehicle, AIR, MOVING, 300.0, 1.0, 0.2, count=3000)
    dense = continuum_loads(vehicle, AIR, MOVING, knudsen, 0.2, count=3000)
    assert found.free_molecular.force == pytest.approx(free.force, abs=1e-12)  # modes add up to the whole
    assert found.continuum.moment == pytest.approx(dense.moment, abs=1e-12)
    assert (found.fraction == bridge_for(vehicle, "drag")(knudsen).value).all()


def test_local_bridge_against_the_sum_over_elements():
    # the polynomial in the cosine against one fraction an element, on the Newtonian side, by hand
    vehicle = Vehicle.from_shape(Box(length=1.0, width=0.7, height=0.5))
    angle = 0.6
    found = loads_between(vehicle, AIR, MOVING, 300.0, 1.0, angle, count=6)
    u = np.array([np.cos(angle), 0.0, np.sin(angle)])
    bridge = bridge_for(vehicle, "drag")
    number = mean_free_path(AIR) / vehicle.length_across
    force = np.zeros((DENSITY.size, 3))
    for normal in np.concatenate([np.eye(3), -np.eye(3)]):
        face = Vehicle.from_shape(Box(length=1.0, width=0.7, height=0.5)).elements(6)
        mine = np.flatnonzero((face.normals @ normal) > 0.99)
        only = replace(
            face, normals=face.normals[mine], areas=face.areas[mine], centroids=face.centroids[mine],
            vertices=face.vertices[mine], part=face.part[mine],
        )  # fmt: skip
        one = loads_between(vehicle, AIR, MOVING, 300.0, 1.0, angle, local=False, elements=only, shadow=False)
        share = local_fraction(bridge, number, normal @ u)[:, None]
        force += one.continuum.force + share * (one.free_molecular.force - one.continuum.force)
    assert found.locally.force == pytest.approx(force, abs=2e-5)  # degree 4 over the cosine: 1e-5 of F


def test_faces_along_the_flow_stay_free_molecular_longer():
    bridge = DEFAULTS["blunt-cone", "drag"]
    share = local_fraction(bridge, 0.1, np.array([-1.0, 0.0, 0.3, 0.75, 1.0]))
    assert share[0] == share[1]
    assert (np.diff(share[1:]) < 0.0).all()
    assert share[3] == pytest.approx(0.5, abs=1e-15)
    number = np.geomspace(1e-4, 1e3, 50)
    for cosine in (0.0, 1.0):
        found = local_fraction(bridge, number, cosine)
        assert (np.diff(found) >= 0.0).all()
        assert ((found >= 0.0) & (found <= 1.0)).all()


def test_capsule_is_unstable_in_free_molecular_flow_and_well_into_the_transition():
    # Wilmoth, Mitcheltree & Moss 1999, J. Spacecraft 36(3): "unstable in free-molecular flow and well into
    # the transitional regime" for a 60-degree sphere-cone capsule entering at 12.6 km/s. Centre of mass 0.35
    # diameters behind the nose: value from memory.
    vehicle = replace(Vehicle.from_shape(CAPSULE), moment_point=(-0.35 * 0.811, 0.0, 0.0))
    knudsen = np.array([20.0, 1.0, 0.2, 0.01, 1e-4])
    air = mixed_air(200.0, 1e19, altitude=100e3)
    density = 1e19 * float(mean_free_path(air)) / (0.811 * knudsen)
    air = mixed_air(200.0, density, altitude=100e3)
    moving = flow(air, 12600.0)
    half = np.radians(0.5)
    above, below = (loads_between(vehicle, air, moving, 500.0, 1.0, a, count=4000) for a in (half, -half))
    for kind in ("globally", "locally"):
        slope = (getattr(above, kind).pitch - getattr(below, kind).pitch) / (2.0 * half)
        assert (slope[:3] > 0.0).all()
        assert (slope[3:] < 0.0).all()
    # seen from its rim the capsule's side forces come from shear, which the local bridge keeps longer
    slopes = [
        (getattr(above, kind).pitch - getattr(below, kind).pitch)[2] for kind in ("globally", "locally")
    ]
    assert slopes[1] > slopes[0]


def test_choice_by_name():
    vehicle = Vehicle.from_shape(CAPSULE)
    both = loads_between(vehicle, AIR, MOVING, 300.0, 1.0, 0.2, count=400)
    one = bridged_loads(vehicle, AIR, MOVING, 300.0, 1.0, 0.2, bridging="local", count=400)
    assert (one.force == both.locally.force).all()
    assert loads_between(vehicle, AIR, MOVING, 300.0, 1.0, 0.2, count=400, local=False).locally is None
    with pytest.raises(ValueError, match="global, local"):
        bridged_loads(vehicle, AIR, MOVING, 300.0, 1.0, bridging="none")


def test_vehicle_without_a_shape():
    vehicle = replace(Vehicle.from_shape(CAPSULE), shape=None)
    found = loads_between(vehicle, AIR, MOVING, 300.0, 1.0)
    assert np.isnan(found.locally.force).all()
    assert np.isnan(found.globally.moment).all()
