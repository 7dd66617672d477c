"""The map: bands where the bounds are, marks where the crossings are, contours where they belong."""

from __future__ import annotations

from types import SimpleNamespace
from xml.etree import ElementTree

import numpy as np
import pandas as pd
import pytest
from matplotlib.figure import Figure

from aero.report import figure_map, svg
from aero.report.bands import altitude_bounds, bands


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
