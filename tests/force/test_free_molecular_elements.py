"""Free-molecular formulas against direct quadrature of the Maxwellian and against published closed forms."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate
from scipy.special import erf

from aero.force import elements

RATIOS = np.array([0.01, 0.1, 0.5, 1.0, 2.0, 5.0, 12.0, 30.0])


def maxwellian_fluxes(ratio: float, cosine: float) -> tuple[float, float, float, float]:
    """Integrate the drifting Maxwellian over the velocities that strike: number, normal, tangential, energy.

    Velocities over sqrt(2kT/m); element normal against +x, drift (S cos, S sin, 0); number density 1. The two
    tangential directions by Gauss-Hermite (exact for polynomials), the normal one by adaptive quadrature.
    """
    drift, slide = ratio * cosine, ratio * np.sqrt(1.0 - cosine**2)
    nodes, weights = np.polynomial.hermite.hermgauss(20)
    weights = weights / np.sqrt(np.pi)
    first = weights @ (slide + nodes)
    square = weights @ (slide + nodes) ** 2 + weights @ nodes**2

    def moment(power: int) -> float:
        low, high = max(0.0, drift - 9.0), max(9.0, drift + 9.0)

        def integrand(x: float) -> float:
            return x**power * np.exp(-((x - drift) ** 2)) / np.sqrt(np.pi)

        middle = min(max(drift, low), high)
        return sum(
            integrate.quad(integrand, a, b, epsabs=1e-14, epsrel=1e-12)[0]
            for a, b in ((low, middle), (middle, high))
        )

    flux = moment(1)
    return flux, moment(2), flux * first, moment(3) + flux * square


@pytest.mark.parametrize("ratio", RATIOS)
@pytest.mark.parametrize("cosine", [1.0, 0.8, 0.3, 0.05, 0.0, -0.05, -0.3])
def test_element_is_the_integral_of_the_maxwellian(ratio, cosine):
    number, normal, tangential, energy = maxwellian_fluxes(ratio, cosine)
    pressure, shear, emitted = elements.element(ratio, cosine)
    # momentum flux of number density 1 over 1/2 S^2 (dynamic pressure in the same units)
    scale = 0.5 * ratio**2
    floor = 1e-12  # where next to nothing strikes
    assert pressure == pytest.approx(normal / scale, rel=1e-6, abs=floor)
    assert shear == pytest.approx(tangential / scale, rel=1e-6, abs=floor)
    # diffuse emission at T_e = T: half a Maxwellian at rest of the same flux, momentum flux sqrt(pi)/2 each
    assert emitted == pytest.approx(number * np.sqrt(np.pi) / 2.0 / scale, rel=1e-6, abs=floor)
    _, chi, drift = elements.incident(ratio * cosine)
    if number > 1e-8:
        mean = ratio**2 + 2.0 + 0.5 * drift / chi
        assert energy / number == pytest.approx(mean, rel=1e-6)


def test_schaaf_and_chambre_element():
    # Schaaf & Chambre 1958 (also Bird 1994, ch. 7): diffuse element with T_w, written out
    S, theta, T_ratio, sigma = 3.0, np.radians(40.0), 0.6, 0.8
    s = S * np.sin(theta)
    p = (
        ((2 - sigma) * s / np.sqrt(np.pi) + 0.5 * sigma * np.sqrt(T_ratio)) * np.exp(-s * s)
        + ((2 - sigma) * (s * s + 0.5) + 0.5 * sigma * np.sqrt(np.pi * T_ratio) * s) * (1 + erf(s))
    ) / S**2
    tau = sigma * np.cos(theta) / (np.sqrt(np.pi) * S) * (np.exp(-s * s) + np.sqrt(np.pi) * s * (1 + erf(s)))
    pressure, shear, emitted = elements.element(S, np.sin(theta))
    assert (2 - sigma) * pressure + sigma * emitted * np.sqrt(T_ratio) == pytest.approx(p, rel=1e-12)
    assert sigma * shear == pytest.approx(tau, rel=1e-12)


def mean_over_sphere(ratio: float) -> elements.Momentum:
    """Return the sphere by adaptive quadrature of its elements, on the frontal area."""

    def integral(function) -> float:
        edges = np.unique(np.clip([-1.0, -8.0 / ratio, 0.0, 8.0 / ratio, 1.0], -1.0, 1.0))
        parts = pairwise(edges)
        return sum(integrate.quad(function, a, b, epsabs=1e-13, epsrel=1e-11)[0] for a, b in parts)

    def drag(index: int, cosine: float) -> float:
        along = np.sqrt(1.0 - cosine**2) if index == 1 else cosine
        return 2.0 * along * float(elements.element(ratio, cosine)[index])

    number = integral(lambda c: float(elements.incident(ratio * c)[1]))
    moving = integral(lambda c: float(elements.incident(ratio * c)[2]))
    parts = [integral(lambda c, i=i: drag(i, c)) for i in range(3)]
    return elements.Momentum(*map(np.float64, parts), np.float64(2.0 + 0.5 * moving / number))


def mean_over_cylinder(ratio: float) -> elements.Momentum:
    """Return the cylinder across the flow by a periodic midpoint rule, on diameter times length."""
    turn = (np.arange(40000) + 0.5) * 2.0 * np.pi / 40000
    c = np.cos(turn)
    pressure, shear, emitted = elements.element(ratio, c)
    _, number, drift = elements.incident(ratio * c)
    parts = (pressure * c, shear * np.abs(np.sin(turn)), emitted * c)
    mean = [np.pi * part.mean() for part in parts]
    return elements.Momentum(*mean, 2.0 + 0.5 * drift.mean() / number.mean())


@pytest.mark.parametrize("ratio", RATIOS)
@pytest.mark.parametrize(
    ("closed", "summed"), [(elements.sphere, mean_over_sphere), (elements.cylinder, mean_over_cylinder)]
)
def test_closed_forms_are_the_sum_of_their_elements(ratio, closed, summed):
    for one, other in zip(closed(ratio), summed(ratio), strict=True):
        assert one == pytest.approx(other, rel=1e-8)


@pytest.mark.parametrize("ratio", RATIOS)
def test_published_sphere(ratio):
    # Bird 1994 (eq. 7.71 by memory), diffuse, C_D on the frontal area
    S, T = ratio, 0.4
    published = (2 * S**2 + 1) / (np.sqrt(np.pi) * S**3) * np.exp(-(S**2)) + (4 * S**4 + 4 * S**2 - 1) / (
        2 * S**4
    ) * erf(S)
    published += 2 * np.sqrt(np.pi) / (3 * S) * np.sqrt(T)
    found = elements.sphere(S)
    assert found.normal + found.tangential + found.emitted * np.sqrt(T) == pytest.approx(published, rel=1e-12)


def test_published_plate_across_the_flow():
    # Schaaf & Chambre 1958, plate normal to the flow, diffuse, both faces:
    # C_D = 2 exp(-S^2)/(sqrt(pi) S) + 2 (1 + 1/(2 S^2)) erf S + (sqrt(pi)/S) sqrt(T_w/T)
    S, T = RATIOS, 0.7
    drag, lift = elements.plate(S, np.pi / 2)
    published = 2 * np.exp(-S * S) / (np.sqrt(np.pi) * S) + 2 * (1 + 1 / (2 * S * S)) * erf(S)
    assert np.allclose(drag.normal, published, rtol=1e-12)
    assert np.allclose(drag.emitted * np.sqrt(T), np.sqrt(np.pi) / S * np.sqrt(T), rtol=1e-12)
    assert np.allclose(drag.tangential, 0.0, atol=1e-15)
    assert np.all(np.abs(lift.normal) < 1e-15 * published)  # the cosine of pi/2 is 6e-17


def test_argon_cylinder_of_lofthouse_boyd_and_wright():
    # Lofthouse, Boyd & Wright 2007: argon, 200 K, 2624 m/s, wall 500 K; exact free-molecular C_D 2.260
    # (computed from the Bessel form, printed to 4 digits)
    speed_ratio = 2624.0 / np.sqrt(2 * 1.380649e-23 * 200.0 / (39.948e-3 / 6.02214076e23))
    found = elements.cylinder(speed_ratio)
    drag = found.normal + found.tangential + found.emitted * np.sqrt(500.0 / 200.0)
    assert drag == pytest.approx(2.260, abs=5e-4)


@pytest.mark.parametrize("closed", [elements.sphere, elements.cylinder, lambda s: elements.cone(s, 0.5)])
def test_limits_of_fast_and_slow(closed):
    fast = closed(1e3)
    assert fast.normal + fast.tangential == pytest.approx(2.0, rel=1e-5)  # all momentum: C = 2
    assert fast.energy_excess == pytest.approx(2.5, abs=1e-5)
    slow, slower = closed(2e-3), closed(1e-3)
    assert slow.energy_excess == pytest.approx(2.0, abs=5e-3)
    # a closed body's drag goes as 1/S; the open side of a cone feels the pressure at rest, as 1/S^2
    power = 2.0 if closed in (elements.sphere, elements.cylinder) else 4.0
    assert slower.normal / slow.normal == pytest.approx(power, rel=5e-3)


def test_slow_sphere_is_epsteins_law():
    # Epstein 1924, diffuse at gas temperature: F = (4 pi/3) r^2 rho c V (1 + pi/8), c = sqrt(8kT/(pi m)), so
    # C_D S = (16/(3 sqrt(pi))) (1 + pi/8)
    found = elements.sphere(1e-3)
    law = 16.0 / (3.0 * np.sqrt(np.pi)) * (1.0 + np.pi / 8.0)
    assert (found.normal + found.tangential + found.emitted) * 1e-3 == pytest.approx(law, rel=1e-5)


@given(st.floats(-3, 3), st.floats(-np.pi, np.pi))
def test_slab_is_two_elements(log_ratio, angle):
    ratio = 10.0**log_ratio
    c, along = np.sin(angle), -np.cos(angle)
    drag, lift, number = elements.slab(ratio, c, along)
    for sign in (1.0, -1.0):
        pressure, _, emitted = elements.element(ratio, sign * c)
        _, chi, _ = elements.incident(ratio * sign * c)
        shear = chi / (np.sqrt(np.pi) * ratio)
        drag = elements.Momentum(
            drag.normal - pressure * sign * c,
            drag.tangential - shear * (1 - c * c),
            drag.emitted - emitted * sign * c,
            0,
        )
        lift = elements.Momentum(
            lift.normal + pressure * sign * along,
            lift.tangential - shear * c * along,
            lift.emitted + emitted * sign * along,
            0,
        )
        number = number - chi
    size = 1e-11 * (4.0 + 4.0 / ratio**2)
    assert max(abs(float(value)) for value in (*drag[:3], *lift[:3])) < size
    assert abs(float(number)) < 1e-11 * (1 + ratio)


@given(st.floats(-2, 2), st.floats(-1, 1))
def test_pressure_and_shear_are_never_negative(log_ratio, cosine):
    for value in elements.element(10.0**log_ratio, cosine):
        assert value >= -1e-12 * 10.0 ** (-2 * log_ratio)
