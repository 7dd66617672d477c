"""The heating figure where it is hard: losses, limits that run off the panel, lines that lie on each other."""

from __future__ import annotations

from types import SimpleNamespace
from xml.etree import ElementTree

import numpy as np
import pandas as pd
import pytest
from matplotlib.figure import Figure

from aero.report import figure_heating, svg

FREE = "heat_flux_free_molecular_W_m2"


def words(figure: Figure) -> str:
    """Return every text of a figure as the SVG file holds it, each line after a bar."""
    return "|".join(
        "".join(e.itertext()) for e in ElementTree.fromstring(svg(figure)).iter() if e.tag.endswith("}text")
    )


def by_gid(figure: Figure, gid: str) -> list:
    return [artist for artist in figure.findobj() if artist.get_gid() == gid]


def with_flux(points: pd.DataFrame, flux: np.ndarray) -> pd.DataFrame:
    spread = 0.2 * np.abs(flux)
    steps = 0.5 * (flux[1:] + flux[:-1]) * np.diff(points["time_s"])
    return points.assign(
        heat_flux_W_m2=flux, heat_flux_low_W_m2=flux - spread, heat_flux_high_W_m2=flux + spread,
        heat_flux_free_molecular_W_m2=1.3 * flux, heat_flux_continuum_W_m2=0.8 * flux,
        heat_load_J_m2=np.concatenate([[0.0], np.cumsum(steps)]),
    )  # fmt: skip


@pytest.mark.parametrize("kind", ["all", "some"])
def test_a_wall_that_loses_heat_is_in_the_panel_with_zero_marked(kind: str, capsule: SimpleNamespace) -> None:
    wave = np.sin(capsule.points["time_s"].to_numpy() / 40.0)
    flux = -1200.0 - 800.0 * wave if kind == "all" else 3000.0 * wave
    figure = figure_heating(with_flux(capsule.points, flux), capsule.segments, bounds=capsule.bounds)
    (line,) = by_gid(figure, "heat_flux_W_m2")
    low, high = line.axes.get_ylim()
    assert low < line.get_ydata().min()
    assert high > max(line.get_ydata().max(), 0.0)
    zeros = by_gid(figure, "zero")
    assert line.axes in [zero.axes for zero in zeros]
    assert all(zero.get_ydata() == [0.0, 0.0] for zero in zeros)
    shown = words(figure)
    assert ("bridged: the wall|loses up to 2 kW/m²" in shown) == (kind == "all")
    assert "radiative|part: none" in shown
    assert "-" not in shown.replace("free-molecular", "").replace("Stagnation-point", "")


def test_flux_that_is_never_negative_stands_on_the_axis(capsule: SimpleNamespace) -> None:
    figure = figure_heating(capsule.points, capsule.segments, bounds=capsule.bounds)
    assert not by_gid(figure, "zero")
    assert by_gid(figure, "heat_flux_W_m2")[0].axes.get_ylim()[0] == 0.0


def test_the_free_molecular_limit_leaves_at_the_top_and_does_not_come_back() -> None:
    """Down and up again with a slow end: the limit is cut by the panel alone, never in mid-air."""
    time = np.arange(0.0, 400.0, 1.0)
    height = 40e3 + 70e3 * np.abs(np.cos(np.pi * time / 400.0))
    knudsen = 0.1 * np.exp((height - 95e3) / 6.5e3)
    speed = np.where(time < 380.0, 2000.0, 1.0)
    flux = 3e4 * np.exp(-(((height - 60e3) / 20e3) ** 2))
    points = pd.DataFrame(
        {"time_s": time, "altitude_m": height, "heat_flux_W_m2": flux, FREE: 1e-5 * speed**3 / knudsen,
         "knudsen.reference": knudsen, "mean_free_path_m": knudsen}
    )  # fmt: skip
    points.loc[190:210, FREE] = 1.0  # at low speed in dense air it would lie in the panel again
    figure = figure_heating(points, bounds=(0.01, 0.1, 10.0))
    (line,) = by_gid(figure, FREE)
    values, top = np.asarray(line.get_ydata()), line.axes.get_ylim()[1]
    ends = np.flatnonzero(np.diff(np.isfinite(values).astype(int)))
    assert ends.size == 2
    assert values[ends[0]] > top
    assert values[ends[1] + 1] > top
    assert np.isnan(values[190:211]).all()
    assert np.isfinite(values[[0, -1]]).all()


def test_a_limit_that_lies_on_the_bridged_line_is_named_in_the_margin(capsule: SimpleNamespace) -> None:
    points = capsule.points.assign(heat_flux_continuum_W_m2=capsule.points["heat_flux_W_m2"])
    figure = figure_heating(points, capsule.segments, bounds=capsule.bounds)
    assert "dashed line:|continuum|limit" in words(figure)
    apart = points.assign(heat_flux_continuum_W_m2=0.4 * points["heat_flux_W_m2"])
    shown = words(figure_heating(apart, capsule.segments, bounds=capsule.bounds))
    assert "dashed line" not in shown
    assert "continuum|limit" in shown


def test_a_limits_name_is_nearer_to_its_own_line_than_to_any_other(any_flight: SimpleNamespace) -> None:
    figure = figure_heating(any_flight.points, any_flight.segments, bounds=any_flight.bounds)
    names = {"free-molecular\nlimit": FREE, "continuum\nlimit": "heat_flux_continuum_W_m2"}
    lines = {gid: by_gid(figure, gid)[0] for gid in (*names.values(), "heat_flux_W_m2")}

    def gap(text: object, line: object) -> float:
        box = text.get_window_extent()  # type: ignore[attr-defined]
        path = line.axes.transData.transform(line.get_xydata())  # type: ignore[attr-defined]
        path = path[np.isfinite(path).all(axis=1)]
        steps = np.linspace(0.0, 1.0, 50)[:, None, None]
        path = (path[:-1] + steps * (path[1:] - path[:-1])).reshape(-1, 2)
        frame = line.axes.bbox  # type: ignore[attr-defined]
        path = path[(path[:, 1] <= frame.y1) & (path[:, 1] >= frame.y0)]
        across = np.maximum(np.maximum(box.x0 - path[:, 0], path[:, 0] - box.x1), 0.0)
        up = np.maximum(np.maximum(box.y0 - path[:, 1], path[:, 1] - box.y1), 0.0)
        return float(np.hypot(across, up).min(initial=np.inf))

    for text in figure.texts:
        if text.get_text() in names:
            own = names[text.get_text()]
            others = [gap(text, line) for gid, line in lines.items() if gid != own]
            assert gap(text, lines[own]) < min(others)
