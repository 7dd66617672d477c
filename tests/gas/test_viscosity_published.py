"""Viscosity against the printed 1976 standard, a reference library, and its own limits."""

from __future__ import annotations

import csv
from pathlib import Path

import CoolProp.CoolProp as CoolProp
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.air.state import MOLAR_MASS, SPECIES
from aero.gas import mixed_air, viscosity, viscosity_at
from aero.gas.species import STANDARD_FRACTIONS, vhs_viscosity
from aero.gas.viscosity import air_viscosity, species_viscosity, sutherland, wilke

PUBLISHED = Path(__file__).parent.parent / "published"
LIBRARY_NAMES = {"N2": "Nitrogen", "O2": "Oxygen", "Ar": "Argon", "He": "Helium"}


def rows(name: str) -> list[dict[str, str]]:
    with (PUBLISHED / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


def standard_temperature(altitude_km: float) -> float:
    """The standard's molecular-scale temperature by its own layer table (-5 to 86 km)."""
    geopotential = 6356.766 * altitude_km / (6356.766 + altitude_km)
    bases = [-6.0, 0.0, 11.0, 20.0, 32.0, 47.0, 51.0, 71.0, 84.852]
    temperatures = [327.15, 288.15, 216.65, 216.65, 228.65, 270.65, 270.65, 214.65, 186.946]
    return float(np.interp(geopotential, bases, temperatures))


@pytest.mark.parametrize("row", rows("standard_1976_viscosity.csv"), ids=lambda row: row["altitude_km"])
def test_printed_standard(row: dict[str, str]) -> None:
    altitude, printed = float(row["altitude_km"]), float(row["viscosity_Pa_s"])
    temperature = standard_temperature(altitude)
    # printed to 5 digits: half a unit of the last is 2.6 to 4e-5 of the value
    assert sutherland(temperature) == pytest.approx(printed, rel=4.1e-5)
    air = mixed_air(temperature, 1e20, altitude=altitude * 1e3)
    # at 85 km half the mixture's law, 0.44 % above Sutherland there, has come in
    assert viscosity(air) == pytest.approx(printed, rel=4.1e-5 if altitude < 80 else 0.0025)


@pytest.mark.parametrize(
    "row", rows("viscosity_dilute_gas.csv"), ids=lambda r: f"{r['gas']}-{r['temperature_K']}"
)
def test_table_of_dilute_gases(row: dict[str, str]) -> None:
    gas, temperature, expected = row["gas"], float(row["temperature_K"]), float(row["viscosity_Pa_s"])
    if gas == "air":
        ours = float(viscosity(mixed_air(temperature, 1e19, altitude=100e3)))
    else:
        ours = float(species_viscosity(gas, temperature))
    assert ours == pytest.approx(expected, rel=0.02)  # 2 % asked of the fits


@pytest.mark.parametrize("gas", LIBRARY_NAMES)
def test_reference_library_from_150_to_2000_kelvin(gas: str) -> None:
    temperatures = np.linspace(150.0, 2000.0, 60)
    theirs = [CoolProp.PropsSI("V", "T", t, "Dmolar", 1e-3, LIBRARY_NAMES[gas]) for t in temperatures]
    # the greatest error stated beside the fits, and a little for the nodes between
    np.testing.assert_allclose(species_viscosity(gas, temperatures), theirs, rtol=0.007)


def test_reference_library_air_mixture() -> None:
    temperatures = np.array([150.0, 186.87, 250.0, 400.0, 700.0, 1000.0, 2000.0])
    theirs = [CoolProp.PropsSI("V", "T", t, "Dmolar", 1e-3, "Air") for t in temperatures]
    ours = viscosity(mixed_air(temperatures, 1e19, altitude=100e3))
    np.testing.assert_allclose(ours, theirs, rtol=0.01)  # Wilke's rule for like molecules: about 1 %


def test_sutherland_and_mixture_meet_where_they_are_blended() -> None:
    """At the mesopause's temperatures the two laws differ by less than 0.6 %: the blend hides no step."""
    cold = np.linspace(160.0, 260.0, 11)
    mixture = viscosity(mixed_air(cold, 1e19, altitude=100e3))
    np.testing.assert_allclose(mixture, sutherland(cold), rtol=0.006)


def test_hot_air_is_the_mixture_at_every_altitude() -> None:
    hot = np.array([600.0, 1000.0, 5000.0, 3e4, 1e5])
    mixture = viscosity(mixed_air(hot, 1e19, altitude=100e3))
    np.testing.assert_allclose(air_viscosity(hot), mixture, rtol=2e-4)  # the fit's own 0.014 %


def test_hot_and_cold_air_against_the_reference_library() -> None:
    temperatures = np.linspace(160.0, 2000.0, 40)
    theirs = [CoolProp.PropsSI("V", "T", t, "Dmolar", 1e-3, "Air") for t in temperatures]
    # 2 % asked; the worst is Sutherland's law on its way out, near 450 K
    np.testing.assert_allclose(air_viscosity(temperatures), theirs, rtol=0.012)


def test_variable_hard_spheres_reproduce_measured_viscosity_at_their_reference() -> None:
    """Bird's diameters were chosen to give the viscosity at 273 K; his table is rounded to 3 digits."""
    for gas, name in LIBRARY_NAMES.items():
        theirs = CoolProp.PropsSI("V", "T", 273.0, "Dmolar", 1e-3, name)
        assert vhs_viscosity(gas, 273.0) == pytest.approx(theirs, rel=0.015)


def test_wilke_as_printed_without_expanding_the_square() -> None:
    random = np.random.default_rng(3)
    n = random.uniform(0.0, 1.0, (7, 20))
    temperature = random.uniform(150.0, 30000.0, 20)
    mu = np.array([species_viscosity(s, temperature) for s in SPECIES])
    M = MOLAR_MASS
    expected = np.zeros(20)
    for i in range(7):
        phi = sum(
            n[j] * (1 + np.sqrt(mu[i] / mu[j]) * (M[j] / M[i]) ** 0.25) ** 2 / np.sqrt(8 * (1 + M[i] / M[j]))
            for j in range(7)
        )
        expected += n[i] * mu[i] / phi
    np.testing.assert_allclose(wilke(n, temperature), expected, rtol=1e-13)


@pytest.mark.parametrize("species", SPECIES)
def test_pure_gas_is_its_own_mixture(species: str) -> None:
    n = np.zeros((7, 3))
    n[SPECIES.index(species)] = [1.0, 2e10, 3e20]
    temperature = np.array([200.0, 1000.0, 20000.0])
    np.testing.assert_allclose(wilke(n, temperature), species_viscosity(species, temperature), rtol=1e-13)


@given(
    altitude=st.floats(-5e3, 1e6),
    temperature=st.floats(100.0, 8e4),
    oxygen=st.floats(0.0, 1.0),
    hydrogen=st.floats(0.0, 1.0),
)
def test_rises_with_temperature_everywhere(
    altitude: float, temperature: float, oxygen: float, hydrogen: float
) -> None:
    fractions = STANDARD_FRACTIONS + np.array([0.0, 0.0, oxygen, 0.0, 0.0, hydrogen, hydrogen])
    air = mixed_air(np.array([200.0, 200.0]), 1e15, fractions, altitude)
    lower, upper = viscosity_at(air, [temperature, temperature * 1.01])
    # between T^0.5 and T^1.4 (near 100 K): no more than 1.4 % for 1 % of temperature, and never down
    assert lower * 1.004 < upper < lower * 1.0145


def test_points_without_air_have_no_viscosity() -> None:
    nothing = mixed_air([300.0, 300.0], [np.nan, 1e15], altitude=[2e6, 5e5])
    assert np.isnan(viscosity(nothing)).tolist() == [True, False]
    assert np.isnan(wilke(np.zeros((7, 2)), np.array([300.0, 400.0]))).all()


def test_a_point_does_not_depend_on_its_block() -> None:
    """Low, blended and high points in one block answer as they do alone."""
    altitude = np.array([0.0, 79e3, 81e3, 85e3, 89e3, 91e3, 300e3])
    temperature = np.linspace(190.0, 900.0, 7)
    together = viscosity(mixed_air(temperature, 1e18, altitude=altitude))
    alone = [
        float(viscosity(mixed_air(T, 1e18, altitude=h))) for T, h in zip(temperature, altitude, strict=True)
    ]
    np.testing.assert_allclose(together, alone, rtol=1e-14)
