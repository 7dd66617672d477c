"""The gas of the 1976 standard, sea level to the exosphere."""

from __future__ import annotations

import numpy as np
import pytest

from aero.air import StandardAtmosphere1976
from aero.gas import FREE_PATHS, emitted_free_path, flow, mean_free_path, sound_speed, viscosity


@pytest.mark.parametrize(
    ("altitude_km", "printed"),
    # U.S. Standard Atmosphere 1976, geometric altitude (values from memory)
    [
        (0, 340.29),
        (5, 320.55),
        (10, 299.53),
        (20, 295.07),
        (30, 301.71),
        (50, 329.80),
        (75, 289.40),
        (80, 282.54),
    ],
)
def test_printed_speed_of_sound(altitude_km: float, printed: float) -> None:
    air = StandardAtmosphere1976().at(altitude_km * 1e3)
    # printed to 5 digits (1.8e-5), constants of 1976 against those of today (1.2e-5)
    assert sound_speed(air) == pytest.approx(printed, rel=3e-5)


@pytest.mark.parametrize(
    ("altitude_km", "number_density"),
    # 1/(sqrt(2) pi d^2 n) with the printed number densities at 86, 87, 89, 90, 92 km (4 digits)
    [(86, 1.447e20), (87, 1.212e20), (89, 8.496e19), (90, 7.116e19), (92, 4.993e19)],
)
def test_hard_sphere_path_of_the_printed_number_densities(altitude_km: float, number_density: float) -> None:
    air = StandardAtmosphere1976().at(altitude_km * 1e3)
    expected = 1.0 / (np.sqrt(2.0) * np.pi * 3.65e-10**2 * number_density)
    assert mean_free_path(air) == pytest.approx(expected, rel=1e-3)  # 0.1 % asked of the atmosphere


@pytest.mark.parametrize("definition", FREE_PATHS)
def test_paths_lengthen_with_altitude(definition: str) -> None:
    altitude = np.linspace(-5e3, 1e6, 4000)
    path = mean_free_path(StandardAtmosphere1976().at(altitude), definition)
    assert np.all(np.diff(path) > 0.0)


def test_nothing_steps_where_the_laws_change() -> None:
    """10 m across 80, 86 and 90 km move nothing much faster than the density's own 0.19 %."""
    altitude = np.arange(78e3, 92e3, 10.0)
    air = StandardAtmosphere1976().at(altitude)
    stream = flow(air, 7500.0)
    for quantity in (viscosity(air), sound_speed(air)):
        assert np.max(np.abs(np.diff(np.log(quantity)))) < 2e-4
    for quantity in (
        mean_free_path(air, "vhs"),
        stream.reynolds_stagnation_per_m,
        stream.cheng_per_m,
        emitted_free_path(air, stream, 300.0, 1.0),
    ):
        assert np.max(np.abs(np.diff(np.log(quantity)))) < 2.2e-3
