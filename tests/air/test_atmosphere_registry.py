"""Every atmosphere of the registry, without being named: shapes, limits, order, and what it imports."""

from __future__ import annotations

import json
import subprocess
import sys

import numpy as np
import pytest

import aero.air as room
from aero.air import ATMOSPHERES, SPECIES
from aero.constants import BOLTZMANN

PLACE = {"latitude_deg": 12.0, "longitude_deg": 77.0, "utc": np.datetime64("2024-05-11T03:00")}


@pytest.fixture(params=sorted(ATMOSPHERES))
def model(request):
    return request.param, ATMOSPHERES[request.param].build()


def test_public_names():
    assert room.__all__ == [
        "ACTIVITIES", "ATMOSPHERES", "INTERPOLATIONS", "LEVELS", "MOLAR_MASS", "MOLECULE_MASS", "SPECIES",
        "Air", "Atmosphere", "Model", "Msis", "StandardAtmosphere1976", "TableAtmosphere",
        "read_space_weather",
    ]  # fmt: skip
    assert all(hasattr(room, name) for name in room.__all__)


def test_contract_names():
    assert list(ATMOSPHERES) == ["standard-1976", "nrlmsise-00", "msis-2.1"]


def test_entry_agrees_with_what_it_builds(model):
    name, atmosphere = model
    assert atmosphere.name == name
    assert atmosphere.needs_place == ATMOSPHERES[name].needs_place
    assert atmosphere.altitude_range == ATMOSPHERES[name].altitude_range
    assert len(atmosphere.description) > 20
    assert json.loads(json.dumps(atmosphere.provenance()))["model"] == name
    assert isinstance(atmosphere.notes(500e3, PLACE["utc"]), tuple)


@pytest.mark.parametrize("shape", [(), (1,), (5,), (2, 3), (0,), (0, 4)])
def test_shapes(model, shape):
    _, atmosphere = model
    altitude = np.linspace(50e3, 500e3, int(np.prod(shape))).reshape(shape)
    air = atmosphere.at(altitude, **PLACE)
    for name in ("altitude", "temperature", "pressure", "density", "number_density"):
        array = getattr(air, name)
        assert isinstance(array, np.ndarray)
        assert array.shape == shape
        assert array.dtype == np.float64
        assert not array.flags.writeable
    assert air.species.shape == (*shape, 7)
    assert all(part.shape == shape for part in atmosphere.uncertainty(altitude))


def test_states_are_possible(model):
    _, atmosphere = model
    low, high = atmosphere.altitude_range
    altitude = np.linspace(low, high, 5001)
    air = atmosphere.at(altitude, **PLACE)
    assert (air.species >= 0.0).all()
    assert (air.species[:, SPECIES.index("N2")] > 0.0).all()
    np.testing.assert_allclose(air.species.sum(axis=-1), air.number_density, rtol=1e-13)
    # the two Boltzmann constants, and the standard's two gas constants, differ by 2e-5
    np.testing.assert_allclose(air.pressure, air.number_density * BOLTZMANN * air.temperature, rtol=3e-5)
    assert ((air.temperature > 120.0) & (air.temperature < 2500.0)).all()
    assert ((air.molar_mass > 2e-3) & (air.molar_mass < 29.1e-3)).all()
    assert (np.diff(air.density) < 0.0).all()  # air thins upward everywhere
    bias, scatter = atmosphere.uncertainty(altitude)
    assert (bias > 0.0).all()
    assert (scatter > 0.0).all()
    assert np.abs(np.diff(bias)).max() < 0.01  # no steps between bands


def test_order_and_company_do_not_matter(model):
    _, atmosphere = model
    rng = np.random.default_rng(11)
    altitude = rng.uniform(0.0, 1000e3, 40_000 if not atmosphere.needs_place else 2000)
    together = atmosphere.at(altitude, **PLACE)
    order = rng.permutation(altitude.size)
    shuffled = atmosphere.at(altitude[order], **PLACE)
    np.testing.assert_array_equal(together.density[order], shuffled.density)
    np.testing.assert_array_equal(together.species[order], shuffled.species)
    for i in (0, 17, 999):
        alone = atmosphere.at(altitude[i], **PLACE)
        # a lone point may take another vector path of exp: the last digit
        np.testing.assert_allclose(alone.density, together.density[i], rtol=1e-14)


def test_species_of_all_points_are_contiguous(model):
    _, atmosphere = model
    air = atmosphere.at(np.linspace(0.0, 900e3, 100), **PLACE)
    assert air.species[..., 0].flags.c_contiguous


def test_outside_is_an_error_that_counts(model):
    _, atmosphere = model
    low, high = atmosphere.altitude_range
    altitude = np.full(300, 1e5)
    altitude[[17, 40]] = 1.2e6, np.nan
    with pytest.raises(ValueError, match=r"2 of 300 values do not \(first: index 17, 1.2e\+06 m\)"):
        atmosphere.at(altitude, **PLACE)
    for edge in (low, high):
        assert np.isfinite(atmosphere.at(edge, **PLACE).density)
        with pytest.raises(ValueError, match="altitude must lie in"):
            atmosphere.at(edge + np.copysign(0.01, edge), **PLACE)


def test_integers_and_lists_are_taken(model):
    _, atmosphere = model
    assert atmosphere.at([100_000, 200_000], **PLACE).density[1] == atmosphere.at(2e5, **PLACE).density


def test_import_is_light():
    code = (
        "import sys, aero.air; heavy = {'pandas', 'pymsis', 'matplotlib', 'scipy', 'polars', 'pyarrow'};"
        "print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
