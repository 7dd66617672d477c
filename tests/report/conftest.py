"""Made-up but plausible flights for the report's tests: no physics of the package is used."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest

BOUNDS = (0.01, 0.1, 10.0)
REGIMES = np.array(["continuum", "slip", "transitional", "free-molecular"], dtype=object)
LENGTHS = {"reference": 0.9, "nose": 0.27, "seal_gap": 1.5e-3}
# U.S. Standard Atmosphere 1976, table I, density by geometric altitude, from memory: only to look plausible.
HEIGHT = (
    np.array([0, 10, 20, 30, 40, 50, 60, 70, 80, 90, 100, 110, 120, 130, 150, 200, 300, 400, 500.0]) * 1e3
)
DENSITY = np.array(
    [1.225, 0.4135, 0.08891, 0.01841, 3.996e-3, 1.027e-3, 3.097e-4, 8.283e-5, 1.846e-5, 3.416e-6, 5.604e-7,
     9.708e-8, 2.222e-8, 8.152e-9, 2.076e-9, 2.541e-10, 1.916e-11, 2.803e-12, 5.215e-13]
)  # fmt: skip
TEMPERATURE = np.array(
    [288, 223, 217, 227, 250, 271, 247, 220, 199, 187, 195, 240, 360, 469, 634, 855, 976, 996, 999.0]
)


def density_at(altitude: np.ndarray) -> np.ndarray:
    return np.exp(np.interp(altitude, HEIGHT, np.log(DENSITY)))


def entry(
    altitude: float = 130e3,
    speed: float = 7600.0,
    angle_deg: float = -2.5,
    until: float = 20e3,
    step: float = 0.5,
) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Fly a point mass of 40 kg/m2 over a round Earth without rotation."""
    state = np.array([altitude, speed, np.radians(angle_deg)])
    rows = [(0.0, *state)]

    def slope(s: np.ndarray) -> np.ndarray:
        h, v, g = s
        gravity = 9.81 * (6371e3 / (6371e3 + h)) ** 2
        drag = density_at(h) * v * v / (2 * 40.0)
        return np.array(
            [v * np.sin(g), -drag - gravity * np.sin(g), (v / (6371e3 + h) - gravity / v) * np.cos(g)]
        )

    for count in range(1, 6000):
        k1 = slope(state)
        state = state + step * slope(state + 0.5 * step * k1)
        rows.append((count * step, *state))
        if state[0] < until or state[0] > 1.3 * altitude:
            break
    time, height, velocity, angle = np.array(rows).T
    return time, height, velocity, angle


def points_from(
    time: np.ndarray | None, altitude: np.ndarray, speed: np.ndarray, lengths: dict[str, float] = LENGTHS
) -> pd.DataFrame:
    """Return a points table with the contract's columns that the report draws."""
    rho = density_at(altitude)
    temperature = np.interp(altitude, HEIGHT, TEMPERATURE)
    path = 8.12e-8 / rho
    columns: dict[str, object] = {} if time is None else {"time_s": time}
    columns |= {
        "altitude_m": altitude, "air_speed_m_s": speed, "temperature_K": temperature,
        "pressure_Pa": rho * 287.05 * temperature, "density_kg_m3": rho, "mean_free_path_m": path,
        "dynamic_pressure_Pa": 0.5 * rho * speed**2,
    }  # fmt: skip
    for name, length in lengths.items():
        knudsen = path / length
        columns[f"knudsen.{name}"] = knudsen
        columns[f"regime.{name}"] = REGIMES[np.digitize(knudsen, BOUNDS)]
    knudsen = path / lengths["reference"]
    share = 0.5 * (1 + np.tanh(1.1 * (np.log10(knudsen) + 0.9)))
    inner, outer = 1.46 + 0.02 * share, 2.09 + 0.04 * share
    drag = inner + share * (outer - inner)
    spread = 0.03 + 0.12 * 4 * share * (1 - share)
    free, continuum = 0.5 * rho * speed**3, 1.7415e-4 * np.sqrt(rho / 0.27) * speed**3
    flux = free * continuum / np.sqrt(free**2 + continuum**2 + 1e-30)
    columns |= {
        "drag_coefficient": drag, "drag_coefficient_free_molecular": outer,
        "drag_coefficient_continuum": inner,
        "drag_bridge": share, "drag_coefficient_low": drag * (1 - spread),
        "drag_coefficient_high": drag * (1 + spread),
        "heat_flux_W_m2": flux, "heat_flux_free_molecular_W_m2": free, "heat_flux_continuum_W_m2": continuum,
        "heat_flux_radiative_W_m2": 0.0 * flux, "heat_flux_low_W_m2": 0.74 * flux,
        "heat_flux_high_W_m2": 1.26 * flux,
    }  # fmt: skip
    if time is not None:
        steps = 0.5 * (flux[1:] + flux[:-1]) * np.diff(time)
        columns["heat_load_J_m2"] = np.concatenate([[0.0], np.cumsum(steps)])
    return pd.DataFrame(columns)


def cut(points: pd.DataFrame, names: list[str]) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Return segments and crossings found between samples by interpolation in time."""
    segments, crossings = [], []
    time, height = points["time_s"].to_numpy(), points["altitude_m"].to_numpy()
    speed, load = points["air_speed_m_s"].to_numpy(), points["heat_load_J_m2"].to_numpy()
    for name in names:
        knudsen = points[f"knudsen.{name}"].to_numpy()
        cuts = []
        for bound in BOUNDS:
            side = np.log(knudsen / bound)
            for k in np.flatnonzero(side[1:] * side[:-1] < 0):
                at = time[k] + (time[k + 1] - time[k]) * side[k] / (side[k] - side[k + 1])
                cuts.append(at)
                z = float(np.interp(at, time, height))
                crossings.append(
                    {"length": name, "bound": bound,
                     "direction": "rarefying" if side[k + 1] > 0 else "densifying", "time_s": at,
                     "altitude_m": z, "air_speed_m_s": float(np.interp(at, time, speed)),
                     "altitude_low_m": z - 900.0, "altitude_high_m": z + 1100.0}
                )  # fmt: skip
        edges = [time[0], *sorted(cuts), time[-1]]
        for a, b in pairwise(edges):
            numbers = np.exp(np.interp([a, 0.5 * (a + b), b], time, np.log(knudsen)))
            part = float(np.interp(b, time, load) - np.interp(a, time, load))
            lost = float(np.interp(a, time, speed) - np.interp(b, time, speed))
            segments.append(
                {"length": name, "regime": REGIMES[np.digitize(numbers[1], BOUNDS)], "start_s": a, "end_s": b,
                 "start_altitude_m": float(np.interp(a, time, height)),
                 "end_altitude_m": float(np.interp(b, time, height)), "duration_s": b - a,
                 "knudsen_min": numbers.min(), "knudsen_max": numbers.max(), "heat_load_J_m2": part,
                 "heat_load_share": part / load[-1], "speed_loss_m_s": lost,
                 "speed_loss_share": lost / (speed[0] - speed[-1]),
                 "method": "DSMC: the shock layer is not a continuum"}
            )  # fmt: skip
    return pd.DataFrame(segments), pd.DataFrame(
        crossings,
        columns=["length", "bound", "direction", "time_s", "altitude_m", "air_speed_m_s", "altitude_low_m",
                 "altitude_high_m"],
    )  # fmt: skip


def flight(
    altitude: np.ndarray, speed: np.ndarray, time: np.ndarray, lengths: dict[str, float] = LENGTHS
) -> SimpleNamespace:
    points = points_from(time, altitude, speed, lengths)
    segments, crossings = cut(points, list(lengths))
    return SimpleNamespace(points=points, segments=segments, crossings=crossings, bounds=BOUNDS)


def make_entry(lengths: dict[str, float] = LENGTHS, **options: float) -> SimpleNamespace:
    time, height, speed, _ = entry(**options)
    return flight(height, speed, time, lengths)


def make_skip() -> SimpleNamespace:
    """Two dips with a hop to 135 km between, then out again."""
    time = np.arange(0.0, 1500.0, 1.0)
    height = 105e3 + 32e3 * np.cos(2 * np.pi * time / 700.0) + 4e3 * np.cos(2 * np.pi * time / 1400.0)
    return flight(height, 7900.0 - 0.45 * time - 60 * np.sin(time / 200), time)


def make_ascent() -> SimpleNamespace:
    time = np.arange(0.0, 540.0, 0.5)
    height = np.round(205e3 * np.sin(np.pi / 2 * time / 540.0) ** 1.6, -2)  # a staircase of 100 m
    return flight(height, 0.4 * time + 7500.0 * (time / 540.0) ** 2, time)


def make_orbit() -> SimpleNamespace:
    time = np.arange(0.0, 86400.0, 30.0)
    return flight(405e3 + 4e3 * np.sin(time / 900.0), 7670.0 - 1e-5 * time, time)


CASES: dict[str, Callable[[], SimpleNamespace]] = {
    "entry": make_entry,
    "skip": make_skip,
    "ascent": make_ascent,
    "orbit": make_orbit,
}


@pytest.fixture(scope="session")
def capsule() -> SimpleNamespace:
    return make_entry()


@pytest.fixture(scope="session", params=list(CASES))
def any_flight(request: pytest.FixtureRequest) -> SimpleNamespace:
    return CASES[request.param]()
