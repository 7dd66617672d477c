"""The map: bands where the bounds are, marks where the crossings are, contours where they belong."""

from __future__ import annotations

import re
from types import SimpleNamespace
from xml.etree import ElementTree

import numpy as np
import pandas as pd
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from aero.report import figure_map, format_quantity, svg
from aero.report.bands import altitude_bounds, bands
from aero.report.style import look


def words(figure: Figure) -> list[str]:
    """Return every text of a figure as the SVG file holds it."""
    return [
        "".join(e.itertext()) for e in ElementTree.fromstring(svg(figure)).iter() if e.tag.endswith("}text")
    ]


def by_gid(figure: Figure, gid: str) -> list:
    return [artist for artist in figure.findobj() if artist.get_gid() == gid]


def test_map_draws_bands_in_order_with_bounds_at_the_right(capsule: SimpleNamespace) -> None:
    figure = figure_map(capsule.points, capsule.crossings, bounds=capsule.bounds)
    tops = {}
    for regime in ("continuum", "slip", "transitional", "free-molecular"):
        (patch,) = by_gid(figure, f"band-{regime}")
        tops[regime] = patch.get_y() + patch.get_height()
    mine = (
        capsule.crossings[capsule.crossings["length"] == "reference"].set_index("bound")["altitude_m"] / 1e3
    )
    assert tops["continuum"] == pytest.approx(mine[0.01])
    assert tops["slip"] == pytest.approx(mine[0.1])
    assert tops["transitional"] == pytest.approx(mine[10.0])
    shown = "\n".join(words(figure))
    for bound, altitude in mine.items():
        assert f"Kn {bound:g}" in shown
        assert f"{altitude:.{4 - len(str(int(altitude)))}f} km" in shown


def test_map_marks_each_crossing_of_its_length_and_the_whole_flight(capsule: SimpleNamespace) -> None:
    figure = figure_map(capsule.points, capsule.crossings, bounds=capsule.bounds, length_name="nose")
    (marks,) = by_gid(figure, "crossings")
    mine = capsule.crossings[capsule.crossings["length"] == "nose"]
    np.testing.assert_allclose(marks.get_ydata(), mine["altitude_m"] / 1e3)
    (line,) = by_gid(figure, "flight")
    np.testing.assert_allclose(line.get_xdata().max(), capsule.points["air_speed_m_s"].max() / 1e3)
    assert any(text.endswith(" s") for text in words(figure))


def test_map_contours_are_where_the_quantity_has_their_value(capsule: SimpleNamespace) -> None:
    figure = figure_map(capsule.points, capsule.crossings, bounds=capsule.bounds)
    (lines, *_) = by_gid(figure, "dynamic_pressure_Pa-1000")
    speed, height = lines.get_segments()[0].T
    known = capsule.points.sort_values("altitude_m")
    density = np.exp(np.interp(height * 1e3, known["altitude_m"], np.log(known["density_kg_m3"])))
    # a straight line through the logarithm on a grid of 160 by 160: 1 % of a decade
    np.testing.assert_allclose(0.5 * density * (speed * 1e3) ** 2, 1000.0, rtol=0.03)


def test_map_takes_a_field_for_both_contours_and_refuses_a_wrong_shape(capsule: SimpleNamespace) -> None:
    height, speed = np.linspace(1e4, 13e4, 30), np.linspace(100.0, 8000.0, 20)
    flux = np.exp(-height[:, None] / 7e3) * speed**3
    field = {"altitude_m": height, "air_speed_m_s": speed, "heat_flux_W_m2": flux}
    figure = figure_map(capsule.points, capsule.crossings, bounds=capsule.bounds, field=field)
    assert any(str(a.get_gid()).startswith("heat_flux_W_m2-") for a in figure.findobj())
    with pytest.raises(ValueError, match=r"field 'heat_flux_W_m2' has shape \(20, 30\)"):
        figure_map(capsule.points, bounds=capsule.bounds, field=field | {"heat_flux_W_m2": flux.T})


def test_map_draws_into_given_axes_and_leaves_title_and_footer_alone(capsule: SimpleNamespace) -> None:
    figure = Figure(figsize=(6, 4))
    axes = figure.add_subplot()
    assert figure_map(capsule.points, bounds=capsule.bounds, footer="foot", ax=axes) is figure
    assert not by_gid(figure, "title")
    assert "foot" not in words(figure)
    assert by_gid(figure, "flight")


def test_bounds_come_from_the_points_where_no_crossing_is_known(capsule: SimpleNamespace) -> None:
    with_roots = altitude_bounds(capsule.points, capsule.crossings, capsule.bounds, "nose")
    without = altitude_bounds(capsule.points, None, capsule.bounds, "nose")
    for a, b in zip(with_roots, without, strict=True):
        assert b.altitude == pytest.approx(a.altitude, abs=100.0)  # samples stand some 150 m apart


def test_a_bound_met_at_several_altitudes_says_so(capsule: SimpleNamespace) -> None:
    crossings = capsule.crossings.copy()
    extra = crossings[(crossings["length"] == "reference") & (crossings["bound"] == 0.1)].copy()
    extra["altitude_m"] += 3000.0
    figure = figure_map(capsule.points, pd.concat([crossings, extra]), bounds=capsule.bounds)
    low = float(extra["altitude_m"].iloc[0]) - 3000.0
    assert f"{low / 1e3:.2f} to {low / 1e3 + 3:.1f} km" in words(figure)


def test_one_regime_only_is_one_band(capsule: SimpleNamespace) -> None:
    high = capsule.points[capsule.points["knudsen.seal_gap"] > 20.0]
    edges = altitude_bounds(high, None, capsule.bounds, "seal_gap")
    assert [b.regime for b in bands(edges, 90e3, 130e3)] == ["free-molecular"]
    figure = figure_map(high, bounds=capsule.bounds, length_name="seal_gap")
    assert "free-molecular" in words(figure)
    assert "slip" not in words(figure)


def test_nothing_lies_under_a_label_and_no_label_lies_across_two_bands(any_flight: SimpleNamespace) -> None:
    figure = figure_map(any_flight.points, any_flight.crossings, bounds=any_flight.bounds)
    axes = figure.axes[0]
    canvas = FigureCanvasAgg(figure)
    with look():
        canvas.draw()
    edges = [p.get_y() + p.get_height() for p in axes.patches if str(p.get_gid()).startswith("band-")]
    walls = axes.transData.transform([(0.0, edge) for edge in edges])[:, 1]
    lines = [c.get_segments() for c in axes.collections if re.match(r"[a-z_A-Z0-9]+-\d", str(c.get_gid()))]
    drawn = [axes.transData.transform(segment) for segments in lines for segment in segments]
    (flight,) = by_gid(figure, "flight")
    path = axes.transData.transform(flight.get_xydata())
    steps = np.linspace(0.0, 1.0, 30)[:, None, None]
    drawn.append((path[:-1] + steps * (path[1:] - path[:-1])).reshape(-1, 2))
    labels = [t for t in figure.texts if t.get_gid() not in {"title", "footer"}]
    assert labels
    for text in labels:
        box = text.get_window_extent(canvas.get_renderer())
        # letters are lower than their line: 0.01 in of it is empty above and below
        inner = box.padded(-0.011 * figure.dpi)
        assert not ((walls > inner.y0) & (walls < inner.y1)).any(), text.get_text()
        for line in drawn:
            inside = (line[:, 0] > inner.x0) & (line[:, 0] < inner.x1)
            inside &= (line[:, 1] > inner.y0) & (line[:, 1] < inner.y1)
            assert not inside.any(), text.get_text()


def test_every_contour_drawn_is_named_and_none_is_a_scrap(any_flight: SimpleNamespace) -> None:
    height, speed = np.linspace(0.0, 13e4, 30), np.linspace(100.0, 8000.0, 20)
    flux = np.exp(-height[:, None] / 7e3) * speed**3 * 1e-3
    flux[3:5, 8:10] *= -1.0  # a hole with a rim
    field = {"altitude_m": height, "air_speed_m_s": speed, "heat_flux_W_m2": flux}
    figure = figure_map(any_flight.points, any_flight.crossings, bounds=any_flight.bounds, field=field)
    shown = " ".join(words(figure))
    lines = [c for c in figure.axes[0].collections if str(c.get_gid()).startswith(("heat", "dynamic"))]
    for one in lines:
        name, level = str(one.get_gid()).split("-", 1)
        unit = "W/m²" if name.startswith("heat") else "Pa"
        assert format_quantity(float(level), unit) in shown
        places = [figure.axes[0].transData.transform(s) / figure.dpi for s in one.get_segments()]
        assert sum(np.hypot(*np.diff(p, axis=0).T).sum() for p in places) > 0.4  # in


def test_both_ends_and_the_direction_are_marked(any_flight: SimpleNamespace) -> None:
    figure = figure_map(any_flight.points, any_flight.crossings, bounds=any_flight.bounds)
    speed = any_flight.points["air_speed_m_s"].to_numpy() / 1e3
    height = any_flight.points["altitude_m"].to_numpy() / 1e3
    for gid, row in (("start", 0), ("end", -1)):
        (mark,) = by_gid(figure, gid)
        np.testing.assert_allclose(mark.get_xydata(), [[speed[row], height[row]]])
    for mark in by_gid(figure, "direction"):
        ((x, y),) = mark.get_xydata()
        (line,) = by_gid(figure, "flight")
        path = line.axes.transData.transform(line.get_xydata())
        place = line.axes.transData.transform((x, y))
        assert np.hypot(*(path - place).T).min() < 5.0  # pixels


def test_the_end_of_a_climb_points_up_and_of_a_descent_down() -> None:
    for heights, turn in ((np.linspace(90e3, 130e3, 50), 0.0), (np.linspace(130e3, 90e3, 50), 180.0)):
        path = 1e-7 * np.exp(heights / 6.5e3) / np.exp(14)
        points = {"altitude_m": heights, "air_speed_m_s": 7e3 + 0 * heights, "knudsen.reference": path}
        (mark,) = by_gid(figure_map(points, bounds=(0.01, 0.1, 10.0)), "end")
        assert abs(mark.get_marker()[2]) % 360.0 == pytest.approx(turn)


def test_start_and_end_in_one_place_share_a_label(capsule: SimpleNamespace) -> None:
    there = capsule.points.iloc[:200]
    back = pd.concat([there, there.iloc[::-1]]).drop(columns="time_s")
    assert "start, end" in words(figure_map(back, bounds=capsule.bounds))


def test_a_long_range_of_altitudes_at_the_edge_stays_in_the_figure(capsule: SimpleNamespace) -> None:
    crossings = capsule.crossings.copy()
    extra = crossings[crossings["length"] == "reference"].copy()
    extra["altitude_m"] += 1400.0
    figure = figure_map(capsule.points, pd.concat([crossings, extra]), bounds=capsule.bounds)
    canvas = FigureCanvasAgg(figure)
    with look():
        canvas.draw()
    named = [t for t in figure.axes[0].texts if t.get_text().startswith("Kn ")]
    assert len(named) == 3
    for text in named:
        assert " to " in text.get_text()
        right = text.get_window_extent(canvas.get_renderer()).x1
        assert right < figure.bbox.x1 - 0.05 * figure.dpi
