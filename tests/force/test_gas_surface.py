"""Gas-surface models against quadrature, an independent Monte Carlo of the kernel, limits and equilibrium."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import integrate
from scipy.special import i0e, i1e

from aero.air.state import MOLECULE_MASS
from aero.body import Box, Cylinder, FlatPlate, Sphere, SphereCone, Vehicle
from aero.constants import BOLTZMANN
from aero.force import elements, free_molecular
from aero.force.cll_kernel import reflected_momentum, rice_mean
from aero.force.gas_surface import GAS_SURFACE, cll_energy_accommodation, element
from aero.force.gas_surface_bodies import OTHER_MODELS, body_drag, mixture_drag, other_models
from aero.gas import flow, mixed_air

COSINES = np.array([-1.0, -0.3, -0.05, 0.0, 0.05, 0.3, 0.8, 1.0])
QUADRATURE = (
    3e-7  # of 24 and 8 nodes, seen against adaptive quadrature where a tenth of the gas strikes or more
)
share = st.floats(0.0, 1.0)
PLATE = FlatPlate(length=1.0, width=1.0)
BODIES = {
    "sphere": (Sphere(diameter=1.0), 0.0),
    "cylinder": (Cylinder(diameter=1.0, length=1.0), 0.0),
    "plate": (PLATE, np.pi / 2.0),
}


def coefficients(energy=1.0, diffuse=1.0, normal=1.0, tangential=1.0):
    return {
        "energy_accommodation": energy,
        "diffuse_fraction": diffuse,
        "normal_energy_accommodation": normal,
        "tangential_momentum_accommodation": tangential,
    }


def bessel_mean(square, spread, kept):
    """Return the mean of the Rice distribution in its Bessel form (Rice 1945)."""
    x = kept * square / spread
    return 0.5 * np.sqrt(np.pi * spread) * ((1.0 + x) * i0e(x / 2.0) + x * i1e(x / 2.0))


@pytest.mark.parametrize("model", GAS_SURFACE)
def test_shapes_of_arguments(model):
    for ratio, cosine in ((8.0, 0.5), (np.full((2, 1), 8.0), COSINES), (np.empty(0), 0.5), ([5.0, 6.0], 0.2)):
        pressure, shear = element(model, ratio, cosine, 0.3)
        expected = np.broadcast_shapes(np.shape(ratio), np.shape(cosine))
        assert pressure.shape == shear.shape == expected
        assert np.all(np.isfinite(pressure))
    pressure, shear = element(model, [0.0, 1.0], 0.5, 0.3)
    assert np.isnan(pressure[0])
    assert np.isnan(shear[0])
    assert np.isfinite(pressure[1])


def test_wrong_calls():
    with pytest.raises(ValueError, match="no gas-surface model 'mirror', expected one of maxwell, cll"):
        element("mirror", 8.0, 1.0, 0.3)
    with pytest.raises(ValueError, match=r"diffuse_fraction must lie in 0 to 1, it is 1\.2 to 1\.2"):
        element("maxwell", 8.0, 1.0, 0.3, diffuse_fraction=1.2)
    with pytest.raises(ValueError, match="tangential_momentum_accommodation must lie in 0 to 2"):
        element("cll", 8.0, 1.0, 0.3, tangential_momentum_accommodation=2.1)


@pytest.mark.parametrize("model", GAS_SURFACE)
@pytest.mark.parametrize("ratio", [0.1, 1.0, 6.0, 30.0])
def test_no_accommodation_is_a_mirror(model, ratio):
    pressure, shear = element(model, ratio, COSINES, 0.3, **coefficients(0.0, 0.0, 0.0, 0.0))
    incident, _, _ = elements.element(ratio, COSINES)
    assert pressure == pytest.approx(2.0 * incident, rel=1e-14)
    assert np.all(shear == 0.0)


@pytest.mark.parametrize("wall_ratio", [0.01, 0.3, 1.0, 20.0])
@pytest.mark.parametrize("ratio", [0.1, 1.0, 3.0, 6.5, 12.0, 30.0])
def test_full_accommodation_is_maxwells_diffuse_wall(ratio, wall_ratio):
    pressure, shear = element("cll", ratio, COSINES, wall_ratio)
    same, along = element("maxwell", ratio, COSINES, wall_ratio)
    assert pressure == pytest.approx(same, rel=QUADRATURE, abs=1e-30)
    assert shear == pytest.approx(along, rel=1e-14)


def test_maxwell_is_the_formula_of_the_elements():
    ratio, alpha, sigma, wall = 5.0, 0.8, 0.7, 0.4
    pressure, shear = element("maxwell", ratio, COSINES, wall, **coefficients(alpha, sigma))
    normal, tangential, emitted = elements.element(ratio, COSINES)
    _, number, drift = elements.incident(ratio * COSINES)
    hot = (1 - alpha) * 0.5 * (ratio**2 + 2.0 + 0.5 * drift / number) + alpha * wall
    assert pressure == pytest.approx((2 - sigma) * normal + sigma * emitted * np.sqrt(hot), rel=1e-12)
    assert shear == pytest.approx(sigma * tangential, rel=1e-12)


def test_rice_mean_against_its_bessel_form():
    x = np.concatenate([[0.0], np.logspace(-6, 8, 4001)])
    found = rice_mean(x, np.ones_like(x), np.ones_like(x))
    assert found == pytest.approx(bessel_mean(x, 1.0, 1.0), rel=3e-8)  # stated: 2.2e-8


@pytest.mark.parametrize("s", [-1.0, 0.0, 0.5, 2.0, 4.0, 5.9, 6.1, 9.0, 20.0])
@pytest.mark.parametrize("wall_ratio", [0.05, 0.3, 1.0, 20.0])
@pytest.mark.parametrize("normal", [1e-3, 0.1, 0.5, 0.9, 1.0])
def test_reflected_momentum_against_adaptive_quadrature(s, wall_ratio, normal):
    def integrand(xi):
        density = 2.0 / np.sqrt(np.pi) * xi * np.exp(-((xi - s) ** 2))
        return density * bessel_mean(xi * xi, normal * wall_ratio, 1.0 - normal)

    middle = max(s, 0.1)
    ends = [max(0.0, s - 8.0), middle, max(s, 0.0) + 8.0]
    exact = sum(integrate.quad(integrand, a, b, epsabs=0.0, epsrel=1e-11)[0] for a, b in pairwise(ends))
    # a kernel narrower than the nodes' spacing costs a few 1e-6 on the lee side, where 5 % of the gas strike
    assert reflected_momentum(s, wall_ratio, normal) == pytest.approx(exact, rel=1e-5 if s < 0.0 else 2e-6)


def kernel_sample(ratio, cosine, wall_ratio, normal, tangential, count=400_000):
    """Draw the kernel as Lord (1991) does, on molecules weighted with the speed they strike at.

    Velocities over sqrt(2kT/m). Nothing here is shared with the code under test: the incident gas is a plain
    Gaussian, the reflected normal speed the length of a shifted Gaussian vector in a plane.
    """
    random = np.random.default_rng(20)
    sine = np.sqrt(1.0 - cosine**2)
    x, y, z = random.normal(scale=np.sqrt(0.5), size=(3, count))
    x, y = x + ratio * cosine, y + ratio * sine
    strikes = x > 0.0
    x, y, z = x[strikes], y[strikes], z[strikes]
    spread = np.sqrt(0.5 * normal * wall_ratio)
    a, b = random.normal(scale=spread, size=(2, x.size)) if spread > 0.0 else np.zeros((2, x.size))
    out = np.hypot(np.sqrt(1.0 - normal) * x + a, b)
    energy_along = tangential * (2.0 - tangential)
    loose = random.normal(size=(2, x.size)) * np.sqrt(0.5 * energy_along * wall_ratio)
    kept = 1.0 - tangential
    after = np.stack([out, kept * y + loose[0], kept * z + loose[1]])
    return count, np.stack([x, y, z]), after


KERNELS = [
    (5.0, 0.7, 0.3, 0.6, 0.9),
    (8.0, 0.95, 0.05, 0.9, 1.0),
    (1.0, -0.5, 2.0, 0.3, 0.5),
    (0.3, 0.2, 1.0, 0.5, 1.4),
]


@pytest.mark.parametrize(("ratio", "cosine", "wall_ratio", "normal", "tangential"), KERNELS)
def test_element_against_a_monte_carlo_of_the_kernel(ratio, cosine, wall_ratio, normal, tangential):
    count, before, after = kernel_sample(ratio, cosine, wall_ratio, normal, tangential)
    pressure, shear = element("cll", ratio, cosine, wall_ratio, **coefficients(1, 1, normal, tangential))
    for found, taken in ((pressure, before[0] + after[0]), (shear, before[1] - after[1])):
        each = before[0] * taken * 2.0 / ratio**2
        mean = each.sum() / count
        error = np.sqrt((each**2).sum() / count - mean**2) / np.sqrt(count)
        assert found == pytest.approx(mean, abs=4.0 * error)  # 4 standard errors, four seeded cases
        assert error < 0.01 * abs(mean)  # and the check bites


@pytest.mark.parametrize(("ratio", "cosine", "wall_ratio", "normal", "tangential"), KERNELS[:3])
def test_energy_accommodation_against_a_monte_carlo_of_the_kernel(
    ratio, cosine, wall_ratio, normal, tangential
):
    _, before, after = kernel_sample(ratio, cosine, wall_ratio, normal, tangential)
    weights = before[0] / before[0].sum()
    arriving, leaving = ((v**2).sum(axis=0) for v in (before, after))
    found = float(cll_energy_accommodation(ratio, cosine, wall_ratio, normal, tangential))
    total = weights @ arriving - 2.0 * wall_ratio
    # E_r is what is checked: the rest of the balance stands on both sides
    each = arriving - leaving - found * (arriving - 2.0 * wall_ratio)
    error = np.sqrt((weights**2) @ each**2)
    assert weights @ each == pytest.approx(0.0, abs=4.0 * error)
    assert error < 0.02 * abs(total)


@given(normal=share, tangential=st.floats(0.0, 2.0), energy=share, diffuse=share)
@settings(max_examples=40, deadline=None)
def test_gas_at_rest_at_wall_temperature_presses_with_nkt(normal, tangential, energy, diffuse):
    # whatever the kernel, a gas in balance with its wall presses 1 n k T (detailed balance) and drags not
    slow = 1e-4
    for model in GAS_SURFACE:
        pressure, shear = element(
            model, slow, [-1.0, 0.0, 1.0], 1.0, **coefficients(energy, diffuse, normal, tangential)
        )
        over_nkt = pressure * slow**2
        assert over_nkt[1] == pytest.approx(1.0, abs=1e-5)
        assert 0.5 * (over_nkt[0] + over_nkt[2]) == pytest.approx(1.0, abs=1e-5)  # linear in S cancels
        assert shear[1] * slow**2 == pytest.approx(0.0, abs=2.0 * slow)


@pytest.mark.parametrize("normal", [0.0, 0.01, 0.3, 0.7, 1.0])
def test_kernel_in_balance_returns_the_flux_it_gets(normal):
    # s = 0, T_w = T: the reflected half must carry n k T/2 for every accommodation
    assert reflected_momentum(0.0, 1.0, normal) == pytest.approx(0.5, rel=1e-5)


@pytest.mark.parametrize("kind", BODIES)
@pytest.mark.parametrize("ratio", [0.5, 3.0, 10.0])
@pytest.mark.parametrize("model", GAS_SURFACE)
def test_bodies_with_full_accommodation_are_the_closed_forms(kind, ratio, model):
    body, angle = BODIES[kind]
    if kind == "plate":
        parts, _ = elements.plate(ratio, angle)
    else:
        parts = getattr(elements, kind)(ratio)
    exact = parts.normal + parts.tangential + parts.emitted * np.sqrt(0.3)
    found = body_drag(model, body, ratio, 0.3, angle_of_attack=angle)
    assert found == pytest.approx(exact, rel=2e-6)


# (CLL with a = alpha, sigma_t = 1) over (Maxwell with alpha), less 1, in %, at S 7 and T_w/T 0.3: ours,
# recorded to see a change. Walker, Mehta & Koller 2014 find 1.8-2.5 % at alpha 0 between fits of the two kinds
# (abstract) and more than 1 % below 0.90; the second holds here, the first does not for these bodies.
RECORDED = {"sphere": (5.65, 4.32, 2.01), "cylinder": (11.33, 8.79, 4.29), "plate": (22.25, 17.62, 9.01)}


@pytest.mark.parametrize("kind", BODIES)
def test_how_far_cll_lies_above_maxwell_at_equal_accommodation(kind):
    body, angle = BODIES[kind]
    alphas = np.array([0.0, 0.5, 0.9])
    one = body_drag("maxwell", body, 7.0, 0.3, angle_of_attack=angle, energy_accommodation=alphas)
    other = body_drag("cll", body, 7.0, 0.3, angle_of_attack=angle, normal_energy_accommodation=alphas)
    excess = 100.0 * (other / one - 1.0)
    assert excess == pytest.approx(RECORDED[kind], abs=0.006)  # recorded to 2 decimals
    assert np.all(excess > 1.0)


@given(
    normal=share,
    tangential=share,
    wall=st.floats(0.01, 20.0),
    ratio=st.floats(0.1, 30.0),
    angle=st.floats(0, 3.1),
)
@settings(max_examples=40, deadline=None)
def test_drag_is_never_negative(normal, tangential, wall, ratio, angle):
    for body in (PLATE, Box(length=0.3, width=0.2, height=0.1)):
        found = body_drag(
            "cll", body, ratio, wall, angle_of_attack=angle,
            normal_energy_accommodation=normal, tangential_momentum_accommodation=tangential,
        )  # fmt: skip
        assert found >= 0.0


def orbit_air(points=()):
    return mixed_air(np.full(points, 900.0), 1e15, [0.2, 0.01, 0.7, 0.02, 0.001, 0.06, 0.009], altitude=300e3)


def test_other_models_of_a_sphere():
    ball = Vehicle.from_shape(Sphere(diameter=1.0)).with_surface(diffuse_fraction=0.9)
    air = orbit_air((3,))
    found = other_models(ball, air, flow(air, 7500.0), 300.0, 0.85)
    assert list(found) == list(OTHER_MODELS)
    assert all(values.shape == (3,) for values in found.values())
    assert np.array_equal(found["maxwell"], free_molecular(ball, air, flow(air, 7500.0), 300.0, 0.85).drag)
    assert np.all(found["specular"] < found["maxwell-full"])
    assert np.all(found["maxwell-full"] < found["oxygen-coverage"])  # accommodation below 1
    full = other_models(ball, air, flow(air, 7500.0), 300.0, 0.85, normal_energy_accommodation=1.0)
    assert full["cll"] == pytest.approx(full["maxwell-full"], rel=3e-6)  # the body's table is good to 1e-6
    mirror = other_models(
        ball, air, flow(air, 7500.0), 300.0,
        normal_energy_accommodation=0.0, tangential_momentum_accommodation=0.0,
    )  # fmt: skip
    assert mirror["cll"] == pytest.approx(mirror["specular"], rel=3e-6)


def test_other_models_take_what_the_vehicle_states():
    cone = SphereCone(nose_radius=0.27, half_angle=np.radians(55.0), base_radius=0.45)
    stated = Vehicle.from_shape(cone).with_surface(
        model="cll", normal_energy_accommodation=0.6, tangential_momentum_accommodation=0.8
    )
    air = orbit_air()
    found = other_models(stated, air, flow(air, 7500.0), 300.0, angle_of_attack=0.3)
    same = mixture_drag(
        "cll", cone.facets(0.3), air, flow(air, 7500.0), 300.0,
        normal_energy_accommodation=0.6, tangential_momentum_accommodation=0.8,
    )  # fmt: skip
    assert found["cll"] == pytest.approx(same / stated.reference_area, rel=1e-12)
    nothing = Vehicle(name="bare", mass=1.0, reference_area=1.0, reference_length=1.0)
    bare = other_models(nothing, air, flow(air, 7500.0), 300.0)
    assert all(np.isnan(values) for values in bare.values())


def test_mixture_is_the_sum_of_its_species():
    air, body = orbit_air(), Sphere(diameter=1.0)
    masses = air.species * MOLECULE_MASS
    total = 0.0
    for mass, molecule in zip(masses, MOLECULE_MASS, strict=True):
        ratio = 7500.0 / np.sqrt(2.0 * BOLTZMANN * 900.0 / molecule)
        drag = body_drag("cll", body, ratio, 1.0 / 3.0, normal_energy_accommodation=0.8)
        total += mass / masses.sum() * drag * body.frontal_area
    found = mixture_drag(
        "cll", body.facets(0.0), air, flow(air, 7500.0), 300.0, normal_energy_accommodation=0.8
    )
    assert found == pytest.approx(total, rel=1e-12)
    assert np.isnan(mixture_drag("cll", body.facets(0.0), air, flow(air, 0.0), 300.0))
