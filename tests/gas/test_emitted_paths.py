"""Molecules re-emitted from a stagnation point: fluxes by quadrature and by counting, rates by quadrature."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import dblquad, quad
from scipy.special import gamma

from aero.air.state import MOLECULE_MASS
from aero.constants import BOLTZMANN
from aero.gas import emitted_free_path, emitted_number_density, flow, mean_free_path, mixed_air
from aero.gas.emitted import incident_energy, incident_flux_factor
from aero.gas.species import REFERENCE_TEMPERATURE, VHS_DIAMETER, VHS_OMEGA

NITROGEN = [1, 0, 0, 0, 0, 0, 0]
EVERYTHING = [0.4, 0.1, 0.4, 0.02, 0.01, 0.05, 0.02]


def moment(s: float, power: int) -> float:
    """Integral of u^power over the incoming half of a Maxwellian of unit most probable speed, drift s."""

    def integrand(u: float) -> float:
        return u**power * math.exp(-((u - s) ** 2)) / math.sqrt(math.pi)

    return float(quad(integrand, max(0.0, s - 10.0), s + 10.0, epsabs=1e-14, epsrel=1e-12, limit=200)[0])


@pytest.mark.parametrize("s", [0.0, 0.01, 0.3, 1.0, 3.0, 5.99, 6.0, 6.01, 12.0])
def test_incident_number_and_energy_by_quadrature(s: float) -> None:
    number = moment(s, 1)
    assert incident_flux_factor(s) == pytest.approx(number * 2.0 * math.sqrt(math.pi), rel=1e-10)
    # m u^2/2 = kT (u/c)^2 along the stream, and kT/2 for each of the two directions across it
    assert incident_energy(s) == pytest.approx(moment(s, 3) / number + 1.0, rel=1e-10)


def test_limits_of_the_incident_energy() -> None:
    assert incident_energy(0.0) == 2.0  # 2 kT: the effusing molecules of a gas at rest
    assert incident_energy(50.0) == 50.0**2 + 2.5


def test_at_rest_half_the_density_is_outgoing() -> None:
    c = math.sqrt(2.0 * BOLTZMANN * 500.0 / MOLECULE_MASS[0])
    half = emitted_number_density(
        np.array(7e15), np.array(0.0), np.array(c), np.array(c / math.sqrt(math.pi))
    )
    assert half == pytest.approx(3.5e15, rel=1e-14)


def test_density_of_the_emitted_by_counting_molecules() -> None:
    """Send molecules at a diffuse wall, let each leave from there, count those in a thin layer before it."""
    random = np.random.default_rng(11)
    T, T_wall, s, count = 200.0, 900.0, 1.5, 4_000_000
    c, c_wall = (math.sqrt(2.0 * BOLTZMANN * t / MOLECULE_MASS[0]) for t in (T, T_wall))
    # how many arrive in one second at a square metre from a gas of one molecule per cubic metre
    towards = random.normal(s * c, c / math.sqrt(2.0), count)
    arriving = np.clip(towards, 0.0, None).mean()
    # they leave at times spread over `age`, with the speeds of effusing molecules
    age, layer = 1.0, 0.02 * c_wall
    outgoing = c_wall * np.sqrt(-np.log(random.random(count)))
    inside = np.mean(outgoing * age * random.random(count) < layer)
    # slow ones that left before the count began are missing: x/sqrt(pi) of the layer, x = layer/(c age)
    counted = arriving * age * inside / layer / (1.0 - 0.02 / math.sqrt(math.pi))
    ours = emitted_number_density(
        np.array(1.0), np.array(s), np.array(c), np.array(c_wall / math.sqrt(math.pi))
    )
    # 3.5 % of 4e6 are inside: 0.27 % at one sigma, four taken
    assert ours == pytest.approx(counted, rel=0.011)


def reference_path(
    air_fractions: list[float], T: float, n: float, V: float, T_w: float, alpha: float
) -> float:
    """The whole of it from quadratures and plain loops."""
    x = np.array(air_fractions) / sum(air_fractions)
    path = 0.0
    for p in range(7):
        rate = 0.0
        for q in range(7):
            m = MOLECULE_MASS[q]
            c = math.sqrt(2.0 * BOLTZMANN * T / m)
            number, cubed = moment(V / c, 1), moment(V / c, 3)
            energy = BOLTZMANN * T * (cubed / number + 1.0)
            two_k_T_e = (1.0 - alpha) * energy + alpha * 2.0 * BOLTZMANN * T_w
            out = math.sqrt(two_k_T_e / (math.pi * m))
            density = n * x[q] * number * c / out
            m_r = m * MOLECULE_MASS[p] / (m + MOLECULE_MASS[p])
            d, w = 0.5 * (VHS_DIAMETER[p] + VHS_DIAMETER[q]), 0.5 * (VHS_OMEGA[p] + VHS_OMEGA[q])
            g = V + out
            stretch = (2.0 * BOLTZMANN * REFERENCE_TEMPERATURE / (m_r * g * g)) ** (w - 0.5) / gamma(2.5 - w)
            rate += density * math.pi * d * d * stretch * g
        path += x[p] * V / rate
    return path


@pytest.mark.parametrize(
    ("T", "V", "T_w", "alpha"),
    [
        (195.0, 7500.0, 300.0, 1.0),
        (900.0, 7700.0, 350.0, 0.9),
        (900.0, 7700.0, 350.0, 0.0),
        (300.0, 50.0, 500.0, 0.5),
    ],
)
def test_path_against_quadratures(T: float, V: float, T_w: float, alpha: float) -> None:
    air = mixed_air(T, 1e16, EVERYTHING, altitude=200e3)
    ours = emitted_free_path(air, flow(air, V), T_w, alpha)
    assert ours == pytest.approx(reference_path(EVERYTHING, T, 1e16, V, T_w, alpha), rel=1e-9)


@pytest.mark.parametrize(("alpha", "T_w"), [(1.0, 300.0), (0.9, 300.0), (1.0, 1500.0)])
def test_mean_normal_speed_stands_for_the_whole_distribution(alpha: float, T_w: float) -> None:
    """A molecule at V through half a Maxwellian: integrate sigma(g) g over it instead of taking one g."""
    T, V, n, m, d, w = 200.0, 7500.0, 1e18, MOLECULE_MASS[0], VHS_DIAMETER[0], VHS_OMEGA[0]
    air = mixed_air(T, n, NITROGEN, altitude=110e3)
    stream = flow(air, V)
    energy = BOLTZMANN * T * float(incident_energy(stream.speed_ratio_species[..., 0]))
    c = math.sqrt(((1.0 - alpha) * energy + alpha * 2.0 * BOLTZMANN * T_w) / m)
    density = n * V * math.sqrt(math.pi) / c  # arriving n V, leaving at c/sqrt(pi)

    def integrand(across: float, along: float) -> float:
        g = math.hypot(V + along * c, across * c)
        stretch = (4.0 * BOLTZMANN * REFERENCE_TEMPERATURE / (m * g * g)) ** (w - 0.5) / gamma(2.5 - w)
        weight = (
            2.0 / math.sqrt(math.pi) * math.exp(-along * along) * 2.0 * across * math.exp(-across * across)
        )
        return math.pi * d * d * stretch * g * weight

    rate = density * dblquad(integrand, 0.0, 7.0, 0.0, 7.0, epsabs=0.0, epsrel=1e-6)[0]
    # sigma g grows only as sqrt(g): taking it at the mean normal speed costs at most 2 %
    assert emitted_free_path(air, stream, T_w, alpha) == pytest.approx(V / rate, rel=0.02)


def test_cold_wall_shields_several_times_over() -> None:
    air = mixed_air(195.0, 1.19e19, altitude=100e3)
    path = emitted_free_path(air, flow(air, 7500.0), 300.0, 1.0)
    assert 3.0 < float(mean_free_path(air) / path) < 15.0


@given(
    temperature=st.floats(150.0, 2000.0),
    speed=st.floats(100.0, 1.5e4),
    wall=st.floats(50.0, 3000.0),
    alpha=st.floats(0.0, 1.0),
)
def test_finite_and_longer_for_a_hotter_wall(
    temperature: float, speed: float, wall: float, alpha: float
) -> None:
    air = mixed_air(np.full(2, temperature), 1e15, EVERYTHING, altitude=300e3)
    cold, hot = emitted_free_path(air, flow(air, speed), [wall, 2.0 * wall], alpha)
    assert 0.0 < cold <= hot * (1 + 1e-12)
    assert np.isfinite(hot)


def test_nothing_is_oncoming_at_rest() -> None:
    air = mixed_air([300.0, 300.0], 1e15, altitude=300e3)
    path = emitted_free_path(air, flow(air, [0.0, 10.0]), 300.0, 1.0)
    assert np.isnan(path).tolist() == [True, False]


@pytest.mark.parametrize("shape", [(), (0,), (1,), (4,), (2, 3)])
def test_shapes(shape: tuple[int, ...]) -> None:
    air = mixed_air(np.full(shape, 300.0), 1e15, EVERYTHING, altitude=300e3)
    path = emitted_free_path(air, flow(air, 7500.0), 300.0, np.full(shape, 0.9))
    assert path.shape == shape
    assert np.all(path > 0.0)


def test_slow_and_fast_species_in_one_block_answer_as_alone() -> None:
    temperature = np.array([180.0, 600.0, 1200.0])
    together_air = mixed_air(temperature, 1e15, EVERYTHING, altitude=300e3)
    together = emitted_free_path(together_air, flow(together_air, 7500.0), 300.0, 0.9)
    for T, path in zip(temperature, together, strict=True):
        alone = mixed_air(T, 1e15, EVERYTHING, altitude=300e3)
        assert emitted_free_path(alone, flow(alone, 7500.0), 300.0, 0.9) == pytest.approx(
            float(path), rel=1e-14
        )


def test_wrong_calls() -> None:
    air = mixed_air(300.0, 1e15, altitude=300e3)
    stream = flow(air, 7500.0)
    with pytest.raises(ValueError, match=r"accommodation must lie in \[0, 1\]"):
        emitted_free_path(air, stream, 300.0, 1.2)
    with pytest.raises(ValueError, match="wall_temperature must be positive"):
        emitted_free_path(air, stream, -5.0, 1.0)
