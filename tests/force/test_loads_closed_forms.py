"""Element sums of force and moment against closed forms, and how fast they get there."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from aero.air.state import MOLECULE_MASS
from aero.body import Box, Cone, Cylinder, FlatPlate, Sphere, SphereCone, Surface, Vehicle
from aero.constants import BOLTZMANN
from aero.force import (
    continuum,
    continuum_loads,
    flow_direction,
    free_molecular,
    free_molecular_loads,
    projected_area,
    stability_derivative,
)
from aero.force.elements import cone, cylinder, element, plate, sphere
from aero.gas import flow, mixed_air

NITROGEN = [1.0, 0, 0, 0, 0, 0, 0]
ORBIT = [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01]
BODIES = (
    Sphere(diameter=1.3),
    SphereCone(nose_radius=0.2, half_angle=0.9, base_radius=0.5),
    Cone(half_angle=0.5, base_radius=0.4),
    Cylinder(diameter=0.7, length=2.0),
)
FLAT = (Box(length=1.0, width=0.5, height=0.3), FlatPlate(length=1.0, width=0.5))


def stream(speed_ratio, temperature=300.0, fractions=NITROGEN):
    """Air of one kind that meets a body at a speed ratio (of nitrogen)."""
    air = mixed_air(temperature, 1e15, fractions, altitude=250e3)
    return air, flow(air, speed_ratio * np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[0]))


def specimen(shape, **surface):
    return Vehicle.from_shape(shape, surface=Surface(**surface))


@pytest.mark.parametrize("shape", BODIES, ids=lambda shape: shape.kind)
@pytest.mark.parametrize("angle", [0.0, 0.3, -1.2, 2.5])
def test_sums_reach_the_closed_forms_at_second_order(shape, angle):
    air, moving = stream(7.0, fractions=ORBIT)
    vehicle = specimen(shape, diffuse_fraction=0.8)
    exact = free_molecular(vehicle, air, moving, 300.0, 0.9, angle)
    dense = continuum(vehicle, air, moving, 10.0, angle)
    errors = []
    for count in (500, 2000, 8000):  # element size halves each time (a cylinder's panels lie in one row)
        panels = int(np.sqrt(count)) if shape.kind == "cylinder" else count
        free = free_molecular_loads(vehicle, air, moving, 300.0, 0.9, angle, count=panels)
        thick = continuum_loads(vehicle, air, moving, 10.0, angle, count=panels)
        errors.append([free.drag - exact.drag, thick.drag - dense.drag, free.lift - exact.lift])
    errors = np.abs(errors)
    # the largest error of a few hundred panels is the area a polyhedron lacks: some per cent
    assert (errors[0] < 0.03 * exact.drag).all()
    # second order: a quarter each time; a fifth of slack for what is not yet the leading term, down to 2e-8,
    # which is what the closed forms' own tables are good for
    assert (errors[1] < 0.3 * errors[0] + 2e-8).all()
    assert (errors[2] < 0.3 * errors[1] + 2e-8).all()


@pytest.mark.parametrize("shape", FLAT, ids=lambda shape: shape.kind)
@pytest.mark.parametrize("angle", [0.0, 0.3, -1.2, 2.5])
def test_flat_faces_are_exact(shape, angle):
    air, moving = stream(7.0, fractions=ORBIT)
    vehicle = specimen(shape, diffuse_fraction=0.8)
    free = free_molecular_loads(vehicle, air, moving, 300.0, 0.9, angle)
    exact = free_molecular(vehicle, air, moving, 300.0, 0.9, angle)
    dense = continuum(vehicle, air, moving, 10.0, angle)
    thick = continuum_loads(vehicle, air, moving, 10.0, angle)
    # the closed forms come from tables good to 2e-8 (their docstring: 1e-6); Newtonian ones from no table
    assert np.stack([free.drag, free.lift]) == pytest.approx(np.stack([exact.drag, exact.lift]), abs=2e-8)
    assert np.stack([thick.drag, thick.lift]) == pytest.approx(np.stack([dense.drag, dense.lift]), abs=1e-11)


@pytest.mark.parametrize("ratio", [0.3, 2.0, 9.0])
def test_published_closed_forms_of_four_bodies(ratio):
    # Schaaf & Chambre 1958, diffuse at T_w = T, straight from `aero.force.elements`
    air, moving = stream(ratio)
    T = float(air.temperature)

    def drag(shape, angle, count):
        return float(free_molecular_loads(specimen(shape), air, moving, T, 1.0, angle, count=count).drag)

    def total(parts):
        return float(parts.normal + parts.tangential + parts.emitted)

    pressure, _, emitted = element(ratio, -1.0)  # a base
    side = cone(ratio, 0.6)
    whole_cone = total(side) - float(pressure + emitted)
    # polyhedra of these counts lack 4e-4 of a sphere's area and 2e-5 of a cone's or cylinder's
    assert drag(Sphere(diameter=1.0), 0.0, 20000) == pytest.approx(total(sphere(ratio)), rel=1e-3)
    assert drag(Cylinder(diameter=1.0, length=1.0), 0.0, 400) == pytest.approx(
        total(cylinder(ratio)), rel=1e-4
    )
    assert drag(Cone(half_angle=0.6, base_radius=1.0), 0.0, 4000) == pytest.approx(whole_cone, rel=1e-5)
    for angle in (0.1, 0.7):
        assert drag(FlatPlate(length=1.0, width=2.0), angle, 2) == pytest.approx(
            total(plate(ratio, angle)[0]), rel=1e-9
        )


def test_plate_turns_about_its_leading_edge_as_force_times_half_its_length():
    air, moving = stream(5.0)
    vehicle = replace(specimen(FlatPlate(length=2.0, width=1.0)), moment_point=(1.0, 0.0, 0.0))
    found = free_molecular_loads(vehicle, air, moving, 300.0, 1.0, 0.4)
    assert float(found.pitch) == pytest.approx(-0.5 * float(found.normal), rel=1e-12)  # length 2 both ways
    assert float(found.centre_of_pressure) == pytest.approx(-1.0, rel=1e-12)


@pytest.mark.parametrize("degrees", [10.0, 20.0, 35.0])
def test_newtonian_cone_has_its_centre_of_pressure_where_theory_says(degrees):
    # a sharp cone in Newtonian flow: dC_N/da = C_p,max cos^2(half angle) on the base area and the centre of
    # pressure at 2/(3 cos^2) of the length behind the point (integrals over the cone, done by hand)
    half = np.radians(degrees)
    shape = Cone(half_angle=half, base_radius=0.5)
    length = 0.5 / np.tan(half)
    vehicle = replace(specimen(shape, diffuse_fraction=0.0), moment_point=(length, 0.0, 0.0))
    air, moving = stream(60.0)

    def at(angle):
        return continuum_loads(vehicle, air, moving, 1e-6, angle, count=4000, real_gas=False)

    slopes = stability_derivative(at, 0.0)
    peak = float(at(0.0).axial) / np.sin(half) ** 2  # the base's part is 1/M^2: 4e-4 at this Mach number
    # central difference over half a degree: 4e-5 of a sine's slope; the polyhedron of 2000 sides 2e-6
    assert float(slopes.normal) == pytest.approx(peak * np.cos(half) ** 2, rel=1e-2 if degrees < 15 else 2e-3)
    assert float(slopes.neutral_point) == pytest.approx(-2.0 / 3.0 * length / np.cos(half) ** 2, rel=2e-4)


@pytest.mark.parametrize("limit", ["free-molecular", "continuum"])
def test_flat_based_cone_is_stable_about_its_point_and_not_about_its_base(limit):
    shape = Cone(half_angle=0.25, base_radius=0.5)
    air, moving = stream(8.0)

    def slope(x):
        vehicle = replace(specimen(shape), moment_point=(x, 0.0, 0.0))

        def at(angle):
            if limit == "continuum":
                return continuum_loads(vehicle, air, moving, 1e-6, angle, count=1000)
            return free_molecular_loads(vehicle, air, moving, 300.0, 1.0, angle, count=1000)

        return float(stability_derivative(at, 0.05).pitch)

    assert slope(0.5 / np.tan(0.25)) < 0.0 < slope(0.0)


@pytest.mark.parametrize("shape", [Sphere(diameter=1.3), Box(length=1.0, width=0.5, height=0.3)])
def test_projected_area_of_convex_bodies(shape):
    a, b = np.radians([0.0, 20.0, 160.0, -75.0]), np.radians([0.0, -30.0, 10.0, 60.0])
    found = projected_area(specimen(shape), a, b, count=20000)
    if isinstance(shape, Box):
        u = np.abs(flow_direction(a, b))
        exact = u[:, 0] * 0.15 + u[:, 1] * 0.3 + u[:, 2] * 0.5
        assert found == pytest.approx(exact, rel=1e-12)
    else:
        assert found == pytest.approx(shape.frontal_area, rel=1e-3)  # area the polyhedron lacks
