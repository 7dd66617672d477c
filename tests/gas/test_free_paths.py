"""Mean free paths against published values and against collision rates by quadrature."""

from __future__ import annotations

import csv
import math
import pickle
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import gamma

from aero.air.state import MOLECULE_MASS, SPECIES
from aero.constants import BOLTZMANN
from aero.errors import InputError
from aero.gas import FREE_PATHS, free_path_uncertainty, mean_free_path, mixed_air, sea_level_air, viscosity
from aero.gas import species as species_module
from aero.gas.free_path import HARD_SPHERE_DIAMETER
from aero.gas.species import CROSS_SECTION_UNCERTAINTY, REFERENCE_TEMPERATURE, VHS_DIAMETER, VHS_OMEGA

PUBLISHED = Path(__file__).parent.parent / "published" / "mean_free_paths.csv"
EVERYTHING = [0.5, 0.1, 0.3, 0.02, 0.01, 0.05, 0.02]


def published() -> list[dict[str, str]]:
    with PUBLISHED.open(encoding="utf-8") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


@pytest.mark.parametrize("row", published(), ids=lambda row: row["gas"])
def test_hard_sphere_published(row: dict[str, str]) -> None:
    """The same formula with the diameter each table states."""
    T, p = float(row["temperature_K"]), float(row["pressure_Pa"])
    ours = float(mean_free_path(mixed_air(T, p / (BOLTZMANN * T)), "hard-sphere"))
    ours *= (HARD_SPHERE_DIAMETER / float(row["diameter_m"])) ** 2
    # CRC: 3 digits of path and diameter (0.14 % each, twice); the standard: 5 digits, older k and N_A
    assert ours == pytest.approx(float(row["mean_free_path_m"]), rel=1e-4 if row["gas"] == "air" else 4e-3)


@pytest.mark.parametrize(
    ("density_ratio", "path"),
    # U.S. Standard Atmosphere 1976, rho/rho_0 from the printed densities at 5, 10, 20, 30, 50 km over 1.2250
    # (values from memory), and the path its own definition gives there, recomputed
    [
        (0.73643 / 1.2250, 1.1034e-7),
        (0.41351 / 1.2250, 1.9651e-7),
        (0.088910 / 1.2250, 9.1393e-7),
        (0.018410 / 1.2250, 4.4137e-6),
        (0.0010269 / 1.2250, 7.9130e-5),
    ],
)
def test_hard_sphere_along_the_standard(density_ratio: float, path: float) -> None:
    air = mixed_air(250.0, 2.5470e25 * density_ratio)
    assert mean_free_path(air) == pytest.approx(path, rel=1e-4)  # both printed to 5 digits


def test_viscosity_based_published() -> None:
    """67.3 nm at 300 K, 1 atm: Jennings 1988, J. Aerosol Sci. 19, 159 (quoted)."""
    air = mixed_air(300.0, 101325.0 / (BOLTZMANN * 300.0))
    # 3 digits (0.07 %); his factor is 0.25 % above sqrt(pi/2), Sutherland 0.34 % under measured air
    assert mean_free_path(air, "viscosity") == pytest.approx(67.3e-9, rel=0.007)


def test_definition_of_the_viscosity_based_path() -> None:
    """mu = 0.499 rho c_mean lambda (Chapman); the path used here takes exactly 1/2."""
    air = mixed_air(500.0, 1e18, EVERYTHING, altitude=200e3)
    mean_speed = np.sqrt(8.0 * BOLTZMANN * 500.0 / (math.pi * air.molecule_mass))
    back = 0.5 * air.density * mean_speed * mean_free_path(air, "viscosity")
    assert back == pytest.approx(float(viscosity(air)), rel=1e-12)


def test_variable_hard_spheres_at_sea_level() -> None:
    """52 nm: the variable-hard-sphere path of sea-level air (computed from the published diameters)."""
    assert mean_free_path(sea_level_air(), "vhs") == pytest.approx(52e-9, rel=0.01)  # 2 digits


@pytest.mark.parametrize("species", SPECIES)
def test_variable_hard_spheres_of_one_gas(species: str) -> None:
    """Bird 1994: 1/(sqrt(2) pi d_ref^2 n (T_ref/T)^(w - 1/2))."""
    i = SPECIES.index(species)
    T = np.array([150.0, 273.0, 2000.0])
    air = mixed_air(T, 1e19, np.eye(7)[i], altitude=200e3)
    d, w = VHS_DIAMETER[i], VHS_OMEGA[i]
    expected = 1.0 / (math.sqrt(2.0) * math.pi * d**2 * 1e19 * (REFERENCE_TEMPERATURE / T) ** (w - 0.5))
    np.testing.assert_allclose(mean_free_path(air, "vhs"), expected, rtol=1e-13)


def mean_rate(p: int, q: int, T: float) -> float:
    """<sigma_pq(g) g> over the Maxwellian of relative speeds, by quadrature."""
    m = MOLECULE_MASS[p] * MOLECULE_MASS[q] / (MOLECULE_MASS[p] + MOLECULE_MASS[q])
    d, w = 0.5 * (VHS_DIAMETER[p] + VHS_DIAMETER[q]), 0.5 * (VHS_OMEGA[p] + VHS_OMEGA[q])
    scale = math.sqrt(2.0 * BOLTZMANN * T / m)

    def integrand(x: float) -> float:
        g = x * scale
        stretch = (2.0 * BOLTZMANN * REFERENCE_TEMPERATURE / (m * g * g)) ** (w - 0.5) / gamma(2.5 - w)
        return math.pi * d * d * stretch * g * 4.0 / math.sqrt(math.pi) * x * x * math.exp(-x * x)

    return float(quad(integrand, 0.0, 12.0, epsabs=0.0, epsrel=1e-10)[0])


@pytest.mark.parametrize("T", [190.0, 1200.0])
def test_variable_hard_spheres_of_a_mixture_from_collision_rates(T: float) -> None:
    """Path = mean speed over collision rate, each rate integrated over the relative speeds."""
    x = np.array(EVERYTHING) / sum(EVERYTHING)
    air = mixed_air(T, 1e19, x, altitude=200e3)
    path = 0.0
    for p in range(7):
        speed = math.sqrt(8.0 * BOLTZMANN * T / (math.pi * MOLECULE_MASS[p]))
        path += x[p] * speed / sum(1e19 * x[q] * mean_rate(p, q, T) for q in range(7))
    assert mean_free_path(air, "vhs") == pytest.approx(path, rel=1e-8)


def test_variable_hard_spheres_pass_hard_spheres_near_775_kelvin() -> None:
    air = mixed_air([760.0, 790.0], 1e20)
    ratio = mean_free_path(air, "vhs") / mean_free_path(air)
    assert ratio[0] < 1.0 < ratio[1]
    oxygen = mixed_air([150.0, 300.0, 1500.0], 1e15, [0, 0, 1, 0, 0, 0, 0], altitude=300e3)
    assert np.all(mean_free_path(oxygen, "vhs") > mean_free_path(oxygen))


@pytest.mark.parametrize("definition", FREE_PATHS)
@pytest.mark.parametrize("altitude", [0.0, 85e3, 300e3])
def test_every_definition_takes_any_shape(definition: str, altitude: float) -> None:
    for shape in ((), (0,), (1,), (5,), (2, 3)):
        path = mean_free_path(mixed_air(np.full(shape, 400.0), 1e18, altitude=altitude), definition)
        assert path.shape == shape
        assert np.all(path > 0.0)


@pytest.mark.parametrize("definition", FREE_PATHS)
def test_every_definition_falls_as_one_over_density(definition: str) -> None:
    n = np.logspace(10, 25, 7)
    path = mean_free_path(mixed_air(np.full(7, 500.0), n, EVERYTHING, altitude=300e3), definition)
    np.testing.assert_allclose(path * n, path[0] * n[0], rtol=1e-12)


@pytest.mark.parametrize("definition", FREE_PATHS)
def test_no_answer_where_there_is_no_air(definition: str) -> None:
    air = mixed_air([300.0, 300.0], [np.nan, 1e15], altitude=5e5)
    assert np.isnan(mean_free_path(air, definition)).tolist() == [True, False]


def test_unknown_definition_lists_the_known_and_survives_pickling() -> None:
    with pytest.raises(InputError, match="hard-sphere, vhs, viscosity; did you mean 'viscosity'") as caught:
        mean_free_path(sea_level_air(), "viscosty")
    assert str(pickle.loads(pickle.dumps(caught.value))) == str(caught.value)


@pytest.mark.parametrize(
    "fractions",
    [[0.78, 0.21, 0, 0, 0.01, 0, 0], [0.5, 0.1, 0.4, 0, 0, 0, 0], [0.05, 0, 0.9, 0.03, 0, 0.02, 0]],
)
def test_uncertainty_against_the_path_with_each_cross_section_changed(
    fractions: list[float], monkeypatch: pytest.MonkeyPatch
) -> None:
    """Change each species' cross-section a little, recompute the path, scale to 1-sigma, add in squares."""
    import aero.gas.free_path as module

    air = mixed_air(600.0, 1e16, fractions, altitude=200e3)
    base = float(mean_free_path(air, "vhs"))
    pairs = module._PAIRS
    shifts = []
    for i in range(7):
        diameter = np.array(VHS_DIAMETER)
        diameter[i] *= math.sqrt(1.0 + 1e-4)
        changed = pairs * ((diameter[:, None] + diameter) / (VHS_DIAMETER[:, None] + VHS_DIAMETER)) ** 2
        monkeypatch.setattr(module, "_PAIRS", changed)
        derivative = (float(mean_free_path(air, "vhs")) / base - 1.0) / 1e-4
        shifts.append(derivative * CROSS_SECTION_UNCERTAINTY[i])
    # -x_i is the derivative for like molecules; the doubts themselves are stated to one digit
    assert free_path_uncertainty(air) == pytest.approx(math.hypot(*shifts), rel=0.10)


def test_species_tables_are_complete_and_read_only() -> None:
    for name in ("VHS_DIAMETER", "VHS_OMEGA", "CROSS_SECTION_UNCERTAINTY", "DEGREES_OF_FREEDOM"):
        table = getattr(species_module, name)
        assert table.shape == (len(SPECIES),)
        assert not table.flags.writeable
