"""The user's own table: what follows from what is given, interpolation, and its errors."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.interpolate import PchipInterpolator

from aero.air import INTERPOLATIONS, MOLECULE_MASS, SPECIES, StandardAtmosphere1976, TableAtmosphere
from aero.constants import BOLTZMANN
from aero.errors import InputError


def _table(tmp_path, text, name="mine.csv"):
    path = tmp_path / name
    path.write_text(text, encoding="utf-8")
    return path


def _standard_table(tmp_path, step=500.0, columns="density_kg_m3", species=False):
    altitude = np.arange(80e3, 130e3 + 1, step)
    air = StandardAtmosphere1976().at(altitude)
    given = {"density_kg_m3": air.density, "pressure_Pa": air.pressure}
    data = [altitude / 1e3, air.temperature, *(given[c] for c in columns.split(","))]
    header = f"altitude_km,temperature_K,{columns}"
    if species:
        header += "," + ",".join(f"n_{s}_m3" for s in SPECIES)
        data += list(air.species.T)
    rows = [",".join(repr(float(v)) for v in row) for row in zip(*data, strict=True)]
    return _table(tmp_path, header + "\n" + "\n".join(rows) + "\n")


@pytest.mark.parametrize("interpolation", INTERPOLATIONS)
@pytest.mark.parametrize("columns", ["density_kg_m3", "pressure_Pa", "density_kg_m3,pressure_Pa"])
@pytest.mark.parametrize("species", [False, True])
def test_the_standard_written_as_a_table_comes_back(tmp_path, interpolation, columns, species):
    table = TableAtmosphere(_standard_table(tmp_path, columns=columns, species=species), interpolation)
    altitude = np.linspace(80e3, 130e3, 777)
    ours, truth = table.at(altitude), StandardAtmosphere1976().at(altitude)
    # 500 m cells. A chord of T errs by step^2/8 T'' with T'' = 6.8 K/km2 just below 110 km: 0.21 K, 9e-4; the
    # cubic rounds off the kink at 86 km, 2 K/km, by at most 4/27 of 500 m of it: 0.15 K, 8e-4.
    for name in ("temperature", "pressure", "density", "number_density"):
        np.testing.assert_allclose(getattr(ours, name), getattr(truth, name), rtol=1e-3, err_msg=name)
    n2 = SPECIES.index("N2")
    np.testing.assert_allclose(ours.species[:, n2], truth.species[:, n2], rtol=1e-3)


def test_nodes_are_met_exactly(tmp_path):
    text = "altitude [km],temperature [K],density [kg/m3]\n0,290,1.2\n10,220,0.4\n30,230,0.018\n"
    for interpolation in INTERPOLATIONS:
        air = TableAtmosphere(_table(tmp_path, text), interpolation).at([0.0, 10e3, 30e3])
        np.testing.assert_allclose(air.temperature, [290, 220, 230], rtol=1e-13)
        np.testing.assert_allclose(air.density, [1.2, 0.4, 0.018], rtol=1e-13)
        standard = StandardAtmosphere1976().at([0.0, 10e3, 30e3])
        np.testing.assert_allclose(air.number_density, air.density / standard.molecule_mass, rtol=1e-13)
        np.testing.assert_allclose(air.pressure, air.number_density * BOLTZMANN * air.temperature, rtol=1e-13)


def test_log_linear_by_hand(tmp_path):
    text = "altitude [km],temperature [K],density [kg/m3]\n0,300,1.0\n10,200,0.01\n"
    air = TableAtmosphere(_table(tmp_path, text), "log-linear").at(5e3)
    assert air.temperature == pytest.approx(250.0, rel=1e-13)
    assert air.density == pytest.approx(0.1, rel=1e-13)


def test_monotone_cubic_against_scipy(tmp_path):
    # the same published scheme (Fritsch & Butland 1984), another program
    rng = np.random.default_rng(2)
    altitude = np.cumsum(rng.uniform(1.0, 6.0, 15))
    temperature = rng.uniform(180.0, 300.0, 15)
    density = np.exp(-altitude / 7.0)
    rows = "\n".join(
        f"{a!r},{t!r},{d!r}"
        for a, t, d in zip(*map(np.ndarray.tolist, (altitude, temperature, density)), strict=True)
    )
    air_at = np.linspace(altitude[0], altitude[-1], 501) * 1e3
    air_at[-1] = altitude[-1] * 1e3
    air = TableAtmosphere(_table(tmp_path, "altitude_km,temperature_K,density_kg_m3\n" + rows)).at(air_at)
    np.testing.assert_allclose(
        air.temperature, PchipInterpolator(altitude * 1e3, temperature)(air_at), rtol=1e-11
    )
    np.testing.assert_allclose(
        np.log(air.density), PchipInterpolator(altitude * 1e3, np.log(density))(air_at), rtol=1e-9, atol=1e-12
    )


def test_own_species_and_absence(tmp_path):
    text = (
        "# a thin, oxygen-rich layer\naltitude [km],temperature [degC],n_O [1/cm3],n_N2 [1/m3],wind [m/s]\n"
        "200,600,4e9,3e15,10\n250,700,0,1e15,20\n300,750,0,2e14,30\n350,760,1e7,5e13,30\n400,770,1e6,1e13,30\n"
    )
    table = TableAtmosphere(_table(tmp_path, text))
    air = table.at([200e3, 225e3, 260e3, 350e3, 375e3, 400e3])
    o, n2 = SPECIES.index("O"), SPECIES.index("N2")
    np.testing.assert_allclose(air.temperature[0], 873.15)
    np.testing.assert_allclose(air.species[0, [o, n2]], [4e15, 3e15])
    np.testing.assert_allclose(air.species[1:3, o], [2e15, 0.0])  # a straight line to the 0 at 250 km
    np.testing.assert_allclose(air.species[3:, o], [1e13, np.sqrt(1e13 * 1e12), 1e12])
    np.testing.assert_allclose(air.density, air.species @ MOLECULE_MASS)
    np.testing.assert_allclose(air.species.sum(axis=-1), air.number_density)
    assert table.jumps.size == 0
    assert any("wind [m/s]" in note for note in table.notes())
    assert not any("no species" in note for note in table.notes())


def test_falling_altitudes_are_read(tmp_path):
    up = "0,300,1.0", "10,200,0.01", "20,210,0.001"
    head = "altitude [km],temperature [K],density [kg/m3]\n"
    rising = TableAtmosphere(_table(tmp_path, head + "\n".join(up))).at([3e3, 17e3])
    falling = TableAtmosphere(_table(tmp_path, head + "\n".join(up[::-1]))).at([3e3, 17e3])
    np.testing.assert_array_equal(rising.density, falling.density)


HEAD = "altitude [km],temperature [K],density [kg/m3]\n"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "mine.csv: is empty; give columns such as altitude_km"),
        ("altitude,temperature_K,density_kg_m3\n", "line 1: column 'altitude' states no unit; use one of"),
        ("altitude [K],temperature_K,density_kg_m3\n", "column 'altitude [K]' states 'K', which is not a"),
        ("altitude_km,temprature_K,density_kg_m3\n", "line 1: no column of temperature; did you mean 'tem"),
        ("altitude_km,temperature_K\n", "line 1: no column of density, pressure or number density"),
        (HEAD.strip() + ",density_g_m3\n", "column 'density_g_m3' is a second column of density"),
        (HEAD + "0,300,1\n", "holds 1 row(s), expected at least two altitudes"),
        (HEAD + "0,300,1\n# note\n1,299\n", "mine.csv, line 4: 2 fields, expected 3 as in the header"),
        (HEAD + "0,300,1\n1,n/a,1\n", "line 3: column 'temperature [K]' holds 'n/a', expected a number"),
        (HEAD + "0,300,1\n1,300,0\n", "line 3: column 'density [kg/m3]' holds '0', expected a number above"),
        (HEAD + "0,300,1\n1,300,inf\n", "line 3: column 'density [kg/m3]' holds 'inf'"),
        (HEAD + "0,300,1\n1,300,0.9\n1,300,0.8\n", "line 4: column 'altitude [km]' holds 1000 m after 1000"),
        (HEAD + "0,300,1\n1200,300,0.9\n", "without species the composition is the 1976 standard's"),
        (HEAD.strip() + ",pressure_Pa\n0,300,1.1,101325\n1,300,1.0,10\n", "line 3: density over number"),
        (HEAD.strip() + ",n_N2_m3\n0,300,1,0\n1,300,1,1e25\n", "line 2: all species are 0"),
        ("altitude_km,temperature_K,pressure_Pa,n_N2_m3\n0,300,1e5,1e20\n1,300,1e5,1e25\n", "times n k T"),
    ],
)  # fmt: skip
def test_bad_tables(tmp_path, text, message):
    with pytest.raises(InputError) as caught:
        TableAtmosphere(_table(tmp_path, text))
    assert message in str(caught.value)


def test_outside_the_table_is_an_error(tmp_path):
    table = TableAtmosphere(_standard_table(tmp_path))
    with pytest.raises(
        ValueError, match=r"altitude in mine.csv must lie in \[80000, 130000\] m; 1 of 2 values does not"
    ):
        table.at([90e3, 131e3])
    with pytest.raises(
        InputError, match="interpolation is 'linear', expected one of: monotone-cubic, log-linear"
    ):
        TableAtmosphere(table.path, "linear")


def test_uncertainty_stated_or_assumed(tmp_path):
    path = _standard_table(tmp_path)
    bias, scatter = TableAtmosphere(path, total_uncertainty=0.1).uncertainty([90e3, 100e3])
    np.testing.assert_allclose(np.hypot(bias, scatter), 0.1)
    assert any("states no uncertainty" in note for note in TableAtmosphere(path).notes())
    with pytest.raises(InputError, match="total_uncertainty is -1"):
        TableAtmosphere(path, total_uncertainty=-1)


def test_provenance_holds_no_path(tmp_path):
    told = TableAtmosphere(_standard_table(tmp_path)).provenance()
    assert told["file"] == "mine.csv"
    assert str(tmp_path) not in str(told)
