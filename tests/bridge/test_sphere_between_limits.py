"""The bridged sphere against published correlations and wind-tunnel points at Mach 4 to 10.

Reynolds numbers come from viscosity, the Knudsen number of the bridge from hard spheres; neither is made from
the other. Air of 200 K; only what the model itself is unsure of is in the band here (bridge, levels, form of
reflection): the tunnels knew their gas.
"""

from __future__ import annotations

import csv
import importlib.util
from functools import cache
from pathlib import Path
from types import ModuleType

import numpy as np
import pytest

from aero.body import Sphere, Vehicle
from aero.bridge import blend, bridge_for, drag_band
from aero.force import continuum, free_molecular
from aero.gas import flow, mean_free_path, mixed_air

PUBLISHED = Path(__file__).parents[1] / "published"
BALL = Vehicle.from_shape(Sphere(diameter=1.0))
MACHS = (4.0, 6.0, 8.0, 10.0)


def _reference() -> ModuleType:
    spec = importlib.util.spec_from_file_location(
        "reference_sphere", Path(__file__).with_name("reference_sphere.py")
    )
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


REFERENCE = _reference()


def tunnel_points():
    with (PUBLISHED / "sphere_drag_wind_tunnel.csv").open() as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


@cache
def sphere(mach, wall, *, knudsen=None, reynolds=None):
    """Return drag, band, both limits, Reynolds and Knudsen numbers of a 1 m sphere in air of 200 K."""
    trial = mixed_air(200.0, 1e20)
    moving = flow(trial, mach * float(flow(trial, 1.0).sound_speed))
    if knudsen is None:  # both numbers are exact powers of the density
        number = 1e20 * reynolds / float(moving.reynolds(1.0))
    else:
        number = 1e20 * float(mean_free_path(trial)) / knudsen
    air = mixed_air(200.0, number)
    moving = flow(air, moving.speed)
    kn = mean_free_path(air) / 1.0
    temperature = 200.0 if wall == "cold" else 200.0 * (1 + 0.2 * mach**2)
    free = free_molecular(BALL, air, moving, temperature, 1.0)
    dense = continuum(BALL, air, moving, kn, real_gas=False, wall_temperature=temperature)
    bridge = bridge_for(BALL, "drag")
    drag = blend(dense.drag, free.drag, bridge(kn).value)
    doubt = {"density_sigma": (0.0, 0.0), "cross_section": 0.0, "accommodation": 0.0}
    band = drag_band(drag, dense.drag, free, bridge, kn, wall_temperature=temperature, **doubt)
    numbers = (drag, band.low, band.high, dense.drag, free.drag, moving.reynolds(1.0), kn)
    return tuple(float(x) for x in numbers)


@pytest.mark.parametrize("mach", MACHS)
@pytest.mark.parametrize("wall", ["cold", "adiabatic"])
def test_free_molecular_limit_is_the_closed_form(mach, wall):
    """Schaaf & Chambre's sphere, written anew; species apart differ from their mean gas by under 0.2 %."""
    *_, free, _, _ = sphere(mach, wall, knudsen=100.0)
    closed = REFERENCE.free_molecular_sphere(
        mach * np.sqrt(0.7), 1.0 if wall == "cold" else 1 + 0.2 * mach**2
    )
    assert free == pytest.approx(closed, rel=2e-3)


@pytest.mark.parametrize("mach", MACHS)
@pytest.mark.parametrize("knudsen", [float(k) for k in np.logspace(-3, 2, 21)])
def test_band_holds_the_correlation_of_loth(mach, knudsen):
    """Loth et al. 2021, over the whole transition; its own free-molecular limit has the wall at T."""
    drag, low, high, _, _, reynolds, _ = sphere(mach, "cold", knudsen=knudsen)
    published = REFERENCE.loth(mach, reynolds)
    assert low <= published <= high
    # and the largest deviation stays what docs/validation.md says: 19 %, rounded up
    assert abs(drag / published - 1) < 0.20


@pytest.mark.parametrize("row", tunnel_points(), ids=lambda row: f"Re {row['reynolds']}, {row['mark']}")
def test_band_holds_the_wind_tunnel(row):
    """Wegener & Ashkenas 1961 and the Mach 4.25 set; walls near the stagnation temperature."""
    _, low, high, *_ = sphere(float(row["mach"]), "adiabatic", reynolds=float(row["reynolds"]))
    assert low <= float(row["drag_coefficient"]) <= high


@pytest.mark.parametrize("mach", MACHS)
@pytest.mark.parametrize("wall", ["cold", "adiabatic"])
@pytest.mark.parametrize("knudsen", [float(k) for k in np.logspace(-3, 2, 21)])
def test_band_holds_the_correlation_of_henderson(mach, wall, knudsen):
    """Henderson 1976, stated to Mach 6, the lowest of the published spheres between the limits.

    The lower end of the band was set on it, so this holds that it stays so and confirms nothing.
    """
    drag, low, high, *_, reynolds, _ = sphere(mach, wall, knudsen=knudsen)
    published = REFERENCE.henderson(mach, reynolds, 1.0 if wall == "cold" else 1 + 0.2 * mach**2)
    assert low <= published <= high
    if knudsen > 0.02:  # beyond the near-continuum it lies under us, as docs/validation.md says
        assert published < drag


def test_reference_correlation_reaches_free_molecular_flow():
    """A check of the reference itself: within 0.2 % of the exact value for Mach 4 and above (published)."""
    for mach in MACHS:
        exact = REFERENCE.free_molecular_sphere(mach * np.sqrt(0.7), 1.0)
        assert REFERENCE.loth(mach, 1e-6) == pytest.approx(exact, rel=2.5e-3)  # printed "0.2 %"
        at_45 = REFERENCE.loth(mach, 45.0) / REFERENCE.loth(mach, 45.0001)
        assert at_45 == pytest.approx(1.0, abs=0.018)  # its stated jump
