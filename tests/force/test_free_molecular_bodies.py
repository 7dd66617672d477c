"""Free-molecular coefficients of vehicles: tables, mixtures, accommodation, invariances."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.air.state import MOLECULE_MASS
from aero.body import SHAPES, Box, Cone, Cylinder, FlatPlate, Mesh, Sphere, SphereCone, Vehicle
from aero.constants import BOLTZMANN
from aero.force import elements, free_molecular, speed_table
from aero.gas import flow, mixed_air

BODIES = {
    "sphere": Sphere(diameter=1.3),
    "cylinder": Cylinder(diameter=0.4, length=1.1),
    "flat-plate": FlatPlate(length=0.8, width=0.3),
    "cone": Cone(half_angle=np.radians(20.0), base_radius=0.4),
    "sphere-cone": SphereCone(nose_radius=0.27, half_angle=np.radians(55.0), base_radius=0.45),
    "box": Box(length=0.3, width=0.2, height=0.1),
    "mesh": Mesh.of(SphereCone(nose_radius=0.1, half_angle=0.7, base_radius=0.3).panels(900)),
}
ORBIT = [0.20, 0.01, 0.70, 0.02, 0.001, 0.06, 0.009]
OXYGEN = [0, 0, 1, 0, 0, 0, 0]


def air_of(fractions, temperature=900.0, number_density=1e15):
    return mixed_air(temperature, number_density, fractions, altitude=300e3)


def speed_for(ratio, index, temperature=900.0):
    return ratio * np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[index])


def drag_of(
    body, fractions=ORBIT, speed=7500.0, wall=300.0, alpha=1.0, angle=0.0, sigma=1.0, temperature=900.0
):
    vehicle = Vehicle.from_shape(body).with_surface(diffuse_fraction=sigma)
    air = air_of(fractions, temperature)
    return free_molecular(vehicle, air, flow(air, speed), wall, alpha, angle)


def test_every_shape_is_here():
    assert set(BODIES) == set(SHAPES)


@pytest.mark.parametrize("kind", SHAPES)
@pytest.mark.parametrize("angle", [0.0, 0.05, 0.8, 2.5])
def test_table_holds_its_own_formula_to_a_millionth(kind, angle):
    body = BODIES[kind]
    ratios = np.exp(np.random.default_rng(1).uniform(np.log(0.01), np.log(100.0), 400))
    exact = speed_table.combine(*speed_table.parts(body, angle, ratios), 0.7)
    table = speed_table.table(body, 0.7, angle)
    place = (np.log(ratios) - speed_table.LOW) * speed_table.STEPS_A_UNIT
    cell = place.astype(np.intp)
    for row, values in zip(table, exact, strict=True):
        found = speed_table.evaluate(row, cell, place - cell)
        assert np.all(np.abs(found - values) <= 1e-6 * np.maximum(np.abs(values), np.abs(exact[0])))


@pytest.mark.parametrize("kind", SHAPES)
def test_a_changing_angle_of_attack_gives_what_each_angle_gives(kind):
    vehicle = Vehicle.from_shape(BODIES[kind]).with_surface(diffuse_fraction=0.9)
    angles = np.array([-2.2, -0.3, 0.0, 0.21, 1.1, np.pi / 2, 3.0])
    air = air_of(ORBIT, np.full(angles.size, 900.0))
    stream = flow(air, 7500.0 + 0.0 * angles)
    together = free_molecular(vehicle, air, stream, 300.0, 0.9, angles)
    for i, angle in enumerate(angles):
        alone = drag_of(BODIES[kind], angle=angle, alpha=0.9, sigma=0.9)
        assert together.drag[i] == pytest.approx(float(alone.drag), rel=1e-6)
        assert together.lift[i] == pytest.approx(float(alone.lift), abs=1e-6 * float(alone.drag))


@pytest.mark.parametrize("kind", SHAPES)
def test_panels_converge_to_the_body_at_second_order(kind):
    body, ratios = BODIES[kind], np.array([0.7, 4.0])
    exact, _ = speed_table.parts(body, 0.3, ratios)
    errors = []
    for count in (600, 2400):
        seen = body.panels(count).facets(0.3)
        s = np.multiply.outer(ratios, seen.cosines)
        momentum, number, _ = elements.incident(s)
        normal = momentum @ (seen.areas * seen.cosines) / ratios**2
        tangential = number @ (seen.areas * (1 - seen.cosines**2)) / (np.sqrt(np.pi) * ratios)
        errors.append(np.max(np.abs(normal + tangential - exact.normal - exact.tangential)))
    assert errors[1] < 0.3 * errors[0] or errors[0] < 1e-12  # a quarter, some left for higher orders


def test_sphere_of_a_pure_gas_is_the_closed_form():
    found = drag_of(Sphere(diameter=1.0), OXYGEN, speed_for(7.0, 2))
    parts = elements.sphere(7.0)
    expected = parts.normal + parts.tangential + parts.emitted * np.sqrt(300.0 / 900.0)
    assert found.drag == pytest.approx(float(expected), rel=1e-8)


def test_a_mixture_is_the_sum_of_its_gases_by_mass():
    fractions = np.array(ORBIT)
    whole = drag_of(BODIES["box"], fractions, alpha=0.8, angle=0.4)
    parts = [drag_of(BODIES["box"], np.eye(7)[i], alpha=0.8, angle=0.4) for i in range(7)]
    weight = fractions * MOLECULE_MASS / (fractions @ MOLECULE_MASS)
    assert whole.drag == pytest.approx(sum(w * p.drag for w, p in zip(weight, parts, strict=True)), rel=1e-12)
    assert whole.lift == pytest.approx(sum(w * p.lift for w, p in zip(weight, parts, strict=True)), rel=1e-12)


@pytest.mark.parametrize("ratio", [0.05, 0.7, 7.0])
def test_no_accommodation_sends_molecules_back_with_the_energy_they_brought(ratio):
    # energy balance from the element formulas alone: emitted 2 k T_e a molecule = energy flux / number flux
    body = Sphere(diameter=1.0)
    found = drag_of(body, OXYGEN, speed_for(ratio, 2), alpha=0.0)
    c, weight = np.polynomial.legendre.leggauss(400)
    _, number, drift = elements.incident(ratio * c)
    energy = number * (ratio**2 + 2.0) + 0.5 * drift  # over kT, times the flux at rest
    emitted_temperature = 0.5 * (weight @ energy) / (weight @ number)
    parts = elements.sphere(ratio)
    expected = parts.normal + parts.tangential + parts.emitted * np.sqrt(emitted_temperature)
    assert found.drag == pytest.approx(float(expected), rel=1e-8)
    # and the wall's temperature then plays no part
    assert drag_of(body, OXYGEN, speed_for(ratio, 2), alpha=0.0, wall=1500.0).drag == found.drag


def test_the_short_cut_with_three_halves_kt_errs_as_stated():
    # S = 7, sphere: T_e = m V^2/(3k) instead of the mean incident energy over 2k is 3.7 % high in drag at
    # alpha 0 and 1.4 % at 0.9 (T_w/T = 0.3); printed to 2 digits
    for alpha, stated in ((0.0, 3.7), (0.9, 1.4)):
        parts = elements.sphere(7.0)
        wall = 0.3
        right = drag_of(Sphere(diameter=1.0), OXYGEN, speed_for(7.0, 2), wall=270.0, alpha=alpha).drag
        cut = np.sqrt((1 - alpha) * 2.0 / 3.0 * 49.0 + alpha * wall)
        short = parts.normal + parts.tangential + parts.emitted * cut
        assert 100 * (short / right - 1) == pytest.approx(stated, abs=0.05)


def test_mean_energy_over_the_body_stands_in_for_each_element_s_own():
    # body mean against element by element, alpha 0: below 0.1 % of what is emitted (0.02 % of drag)
    for ratio in (4.0, 7.0, 12.0):
        c, weight = np.polynomial.legendre.leggauss(400)
        _, number, drift = elements.incident(ratio * c)
        own = 0.5 * (ratio**2 + 2.0 + 0.5 * drift / np.maximum(number, 1e-300))
        emitted = weight @ (elements.element(ratio, c)[2] * c * np.sqrt(own)) * 2.0
        parts = elements.sphere(ratio)
        mean = float(parts.emitted * np.sqrt(0.5 * (ratio**2 + parts.energy_excess)))
        assert emitted == pytest.approx(mean, rel=1e-3)


def test_compact_bodies_have_about_the_customary_coefficient():
    # about 2.2 for compact satellites (Cook 1965): within 10 % for a sphere, cold wall, alpha 0.9-1
    for alpha in (0.9, 1.0):
        assert drag_of(Sphere(diameter=1.0), alpha=alpha).drag == pytest.approx(2.2, rel=0.1)


def test_specular_sphere_equals_diffuse_without_emission():
    # P = T for a sphere: the incident part does not depend on the diffuse fraction (Schaaf & Chambre 1958)
    parts = elements.sphere(5.0)
    found = drag_of(Sphere(diameter=1.0), OXYGEN, speed_for(5.0, 2), sigma=0.0)
    assert found.drag == pytest.approx(float(parts.normal + parts.tangential), rel=1e-8)
    assert found.drag_by_accommodation == 0.0


@pytest.mark.parametrize("kind", SHAPES)
def test_derivatives_are_those_of_finite_differences(kind):
    body, alpha, wall = BODIES[kind], 0.85, 420.0
    found = drag_of(body, alpha=alpha, wall=wall, angle=0.3)
    for step in (1e-4,):
        up, down = (drag_of(body, alpha=alpha + d, wall=wall, angle=0.3).drag for d in (step, -step))
        assert found.drag_by_accommodation == pytest.approx((up - down) / (2 * step), rel=1e-6)
        up, down = (
            drag_of(body, alpha=alpha, wall=wall + d, angle=0.3).drag for d in (step * 300, -step * 300)
        )
        assert found.drag_by_wall_temperature == pytest.approx((up - down) / (600 * step), rel=1e-6)


@given(
    kind=st.sampled_from(sorted(SHAPES)),
    speed=st.floats(0.1, 15e3),
    temperature=st.floats(150.0, 2500.0),
    wall=st.floats(50.0, 3000.0),
    alpha=st.floats(0.0, 1.0),
    sigma=st.floats(0.0, 1.0),
    angle=st.sampled_from([0.0, 0.1, 1.0, 2.0, np.pi]),
)
@settings(max_examples=150, deadline=None)
def test_drag_is_an_answer_and_never_a_push(kind, speed, temperature, wall, alpha, sigma, angle):
    found = drag_of(BODIES[kind], ORBIT, speed, wall, alpha, angle, sigma, temperature)
    for value in (found.drag, found.lift, found.drag_by_accommodation, found.drag_by_wall_temperature):
        assert np.isfinite(value)
    assert found.drag >= 0.0
    mirrored = drag_of(BODIES[kind], ORBIT, speed, wall, alpha, -angle, sigma, temperature)
    assert mirrored.drag == pytest.approx(float(found.drag), rel=1e-9)
    assert mirrored.lift == pytest.approx(-float(found.lift), abs=1e-9 * (1 + float(found.drag)))


def test_size_and_density_do_not_matter():
    small, large = (
        SphereCone(nose_radius=0.27 * k, half_angle=1.0, base_radius=0.45 * k) for k in (1.0, 10.0)
    )
    assert drag_of(small).drag == pytest.approx(float(drag_of(large).drag), rel=1e-12)
    vehicle = Vehicle.from_shape(small)
    thin, thick = (air_of(ORBIT, number_density=n) for n in (1e10, 1e20))
    one = free_molecular(vehicle, thin, flow(thin, 7e3), 300.0, 1.0, 0.0)
    other = free_molecular(vehicle, thick, flow(thick, 7e3), 300.0, 1.0, 0.0)
    assert one.drag == pytest.approx(float(other.drag), rel=1e-12)


@pytest.mark.parametrize("kind", ["flat-plate", "box", "cone", "sphere-cone"])
def test_bodies_at_an_angle_lift(kind):
    # diffuse, fast: shear outweighs what little the wall pushes back, and drag always exceeds lift
    specular = drag_of(BODIES["flat-plate"], angle=0.4, sigma=0.0)
    assert specular.lift > 0.0
    assert specular.lift / specular.drag == pytest.approx(
        1.0 / np.tan(0.4), rel=1e-6
    )  # a mirror: force along n
    found = drag_of(BODIES[kind], angle=0.4)
    assert 0.0 < abs(found.lift) < found.drag


def test_no_answer_is_nan():
    vehicle = Vehicle.from_shape(Sphere(diameter=1.0))
    air = air_of(ORBIT, np.array([900.0, 900.0, np.nan, 900.0]))
    found = free_molecular(vehicle, air, flow(air, np.array([0.0, 7500.0, 7500.0, np.nan])), 300.0, 1.0)
    assert np.array_equal(np.isnan(found.drag), [True, False, True, True])
    none = Vehicle("bare", 1.0, 1.0, 1.0)
    assert np.isnan(free_molecular(none, air, flow(air, np.full(4, 7e3)), 300.0, 1.0).drag).all()
    cone = Vehicle.from_shape(BODIES["cone"])
    assert np.isnan(free_molecular(cone, air, flow(air, np.full(4, 7e3)), 300.0, 1.0, np.nan).drag).all()


@pytest.mark.parametrize("kind", SHAPES)
def test_shapes_of_arrays(kind):
    vehicle = Vehicle.from_shape(BODIES[kind])
    for shape in ((), (0,), (1,), (3,), (2, 3), (5000,)):
        air = air_of(ORBIT, np.full(shape, 900.0), np.full(shape, 1e15))
        found = free_molecular(vehicle, air, flow(air, np.full(shape, 7e3)), 300.0, 1.0, 0.1)
        assert found.drag.shape == found.lift.shape == found.drag_by_accommodation.shape == shape
        if found.drag.size:
            assert np.ptp(found.drag) == 0.0
