"""What the figures draw, on ordinary and on awkward flights."""

from __future__ import annotations

import re
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path
from types import SimpleNamespace
from xml.etree import ElementTree

import numpy as np
import pandas as pd
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle
from matplotlib.text import Text

from aero.report import (
    figure_air,
    figure_coefficients,
    figure_heating,
    figure_map,
    figure_strips,
    footer_text,
    png,
    save_figure,
    svg,
    why_no_heating,
)
from aero.report.style import look

ODD = "a$b_{c}$ <i>&\"'% 漢 \u202e\x1b[31m"
FIGURES: dict[str, Callable[..., Figure]] = {
    "map": lambda f, **o: figure_map(f.points, f.crossings, bounds=f.bounds, **o),
    "strips": lambda f, **o: figure_strips(f.points, f.segments, bounds=f.bounds, **o),
    "coefficients": lambda f, **o: figure_coefficients(f.points, f.crossings, bounds=f.bounds, **o),
    "heating": lambda f, **o: figure_heating(f.points, f.segments, bounds=f.bounds, **o),
    "air": lambda f, **o: figure_air(f.points, **o),
}


def words(figure: Figure) -> list[str]:
    """Return every text of a figure as the SVG file holds it."""
    return [
        "".join(e.itertext()) for e in ElementTree.fromstring(svg(figure)).iter() if e.tag.endswith("}text")
    ]


def by_gid(figure: Figure, gid: str) -> list:
    return [artist for artist in figure.findobj() if artist.get_gid() == gid]


@pytest.mark.parametrize("name", FIGURES)
def test_every_axis_states_its_unit_and_the_footer_stands_below(
    name: str, any_flight: SimpleNamespace
) -> None:
    figure = FIGURES[name](any_flight, footer="Marram  ·  steep.csv")
    labels = [axis.get_label_text() for a in figure.axes for axis in (a.xaxis, a.yaxis)]
    assert [label for label in labels if label]
    assert all(re.search(r"\[[^\]]+\]", label) for label in labels if label)
    assert ["Marram", "·", "steep.csv"][0] in " ".join(words(figure))
    assert by_gid(figure, "footer")[0].get_position()[1] < 0.05


@pytest.mark.parametrize("size", ["column", "slide"])
@pytest.mark.parametrize("name", FIGURES)
def test_the_same_input_gives_the_same_bytes_and_the_asked_size(
    name: str, size: str, capsule: SimpleNamespace
) -> None:
    one, two = (FIGURES[name](capsule, footer="f", size=size) for _ in range(2))
    assert svg(one) == svg(two) == svg(one)
    assert png(one) == png(two)
    width = one.get_size_inches()[0]
    assert width == pytest.approx(160 / 25.4 if size == "column" else 8.0)
    if size == "slide":
        assert one.get_size_inches()[1] == pytest.approx(width * 9 / 16)
    assert int.from_bytes(png(one)[16:20], "big") == int(width * 200)  # pixels in the PNG header


@pytest.mark.parametrize("name", FIGURES)
def test_svg_is_text_with_no_date_no_program_and_nothing_to_load(name: str, capsule: SimpleNamespace) -> None:
    text = svg(FIGURES[name](capsule))
    assert "<text" in text
    assert not re.search(r"Matplotlib v|dc:|DOCTYPE|\d{4}-\d\d-\d\dT", text)
    names = re.findall(r'\sid="([^"]*)"', text)
    assert len(names) == len(set(names))
    assert not re.findall(r'href="(?!#)[^"]*"', text)
    assert b"matplotlib" not in png(FIGURES[name](capsule)).lower()


@pytest.mark.parametrize("name", FIGURES)
def test_the_users_matplotlib_settings_change_nothing_and_stay(name: str, capsule: SimpleNamespace) -> None:
    import matplotlib as mpl

    plain = svg(FIGURES[name](capsule))
    with mpl.rc_context({"font.size": 20.0, "lines.linewidth": 9.0, "axes.facecolor": "red"}):
        assert svg(FIGURES[name](capsule)) == plain
        assert mpl.rcParams["font.size"] == 20.0


def test_strips_stand_smallest_first_with_every_piece_and_its_share(capsule: SimpleNamespace) -> None:
    figure = figure_strips(capsule.points, capsule.segments, bounds=capsule.bounds)
    axes = figure.axes[0]
    captions = [label.get_text() for label in axes.get_yticklabels()]
    assert captions == ["seal_gap  1.5 mm", "nose  0.27 m", "reference  0.9 m"]
    assert axes.yaxis_inverted()
    pieces = [p for p in axes.patches if str(p.get_gid()).startswith("piece-")]
    assert len(pieces) == len(capsule.segments)
    widths = sorted(p.get_width() for p in pieces)
    np.testing.assert_allclose(widths, sorted(capsule.segments["duration_s"]))
    largest = capsule.segments["heat_load_share"].max()
    assert any(text.endswith(f" {100 * largest:.0f} %") for text in words(figure))


def test_thousands_of_pieces_stay_a_small_figure_with_the_time_of_each_regime_kept() -> None:
    edges = np.linspace(0.0, 86400.0, 20_001)
    regimes = np.where(np.arange(20_000) % 4 == 0, "slip", "transitional")
    segments = pd.DataFrame(
        {"length": "reference", "regime": regimes, "start_s": edges[:-1], "end_s": edges[1:]}
    )
    points = pd.DataFrame(
        {"time_s": edges, "altitude_m": 1e5, "knudsen.reference": 0.1, "mean_free_path_m": 0.1}
    )
    figure = figure_strips(points, segments, bounds=(0.01, 0.1, 10.0))
    pieces = [p for p in figure.axes[0].patches if str(p.get_gid()).startswith("piece-")]
    assert len(pieces) < 1500
    assert sum(p.get_width() for p in pieces) == pytest.approx(24.0)  # h
    assert {p.get_gid() for p in pieces} == {"piece-transitional"}  # three quarters of every pixel


def test_strips_name_all_regimes_and_bounds_whatever_is_flown(any_flight: SimpleNamespace) -> None:
    shown = words(figure_strips(any_flight.points, any_flight.segments, bounds=(0.02, 0.2, 20)))
    for text in ("continuum", "Kn below 0.02", "Kn 0.02 to 0.2", "Kn from 20", "free-molecular"):
        assert text in [word.strip() for word in shown]


def test_twelve_lengths_with_any_names_each_get_a_strip() -> None:
    flight = _flight({ODD: 0.9, **{f"x{k}": 0.3 / 3**k for k in range(11)}})
    figure = figure_strips(flight.points, flight.segments, bounds=flight.bounds)
    assert len(figure.axes[0].get_yticks()) == 12
    assert figure.get_size_inches()[1] > 5.0


def _flight(lengths: dict[str, float]) -> SimpleNamespace:
    time = np.arange(0.0, 400.0, 2.0)
    path = 1e-7 * np.exp((130e3 - 275 * time) / 6.5e3)
    columns = {"time_s": time, "altitude_m": 130e3 - 275 * time, "air_speed_m_s": 7600 - 18 * time}
    columns |= {"mean_free_path_m": path, "density_kg_m3": 8e-8 / path}
    frame = pd.DataFrame(columns)
    for name, length in lengths.items():
        frame[f"knudsen.{name}"] = path / length
        tags = np.array(["continuum", "slip", "transitional", "free-molecular"], dtype=object)
        frame[f"regime.{name}"] = tags[np.digitize(path / length, (0.01, 0.1, 10.0))]
    return SimpleNamespace(points=frame, segments=None, bounds=(0.01, 0.1, 10.0))


def test_names_come_out_of_the_svg_as_they_went_in_but_for_invisible_characters() -> None:
    flight = _flight({"reference": 0.9, "gap <b>$x_1$ & 100%": 1e-3})
    shown = words(figure_strips(flight.points, None, bounds=flight.bounds))
    assert any(text.startswith("gap <b>$x_1$ & 100%") for text in shown)
    flight = _flight({ODD: 0.9})
    figure = figure_map(flight.points, bounds=flight.bounds, length_name=ODD, footer=ODD)
    shown = " ".join(words(figure))
    assert "a$b_{c}$ <i>&\"'% 漢" in shown
    assert "\x1b" not in shown
    assert "\u202e" not in shown
    assert png(figure).startswith(b"\x89PNG")  # a letter the font lacks is no warning


def test_points_without_time_are_drawn_by_number(capsule: SimpleNamespace) -> None:
    points = capsule.points.drop(columns=["time_s", "heat_load_J_m2"]).iloc[::50]
    strips = figure_strips(points, None, bounds=capsule.bounds)
    assert "number of the point [-]" in words(strips)
    assert "no time in the trajectory" in " ".join(words(strips))
    pieces = [p for p in strips.axes[0].patches if str(p.get_gid()).startswith("piece-")]
    assert sum(p.get_width() for p in pieces) == pytest.approx(3 * len(points))  # every point of every length
    heating = figure_heating(points, None, bounds=capsule.bounds)
    assert not by_gid(heating, "heat_load_J_m2")
    chart = figure_map(points, None, bounds=capsule.bounds)
    assert not by_gid(chart, "time-ticks")


def test_no_heating_says_why(capsule: SimpleNamespace) -> None:
    points = capsule.points.assign(heat_flux_W_m2=np.nan)
    assert "nose radius" in str(why_no_heating(points))
    with pytest.raises(ValueError, match="No stagnation heating: the vehicle gives no nose radius"):
        figure_heating(points, capsule.segments, bounds=capsule.bounds)
    assert why_no_heating(capsule.points) is None


def test_heating_shows_peak_load_and_its_own_small_radiative_part(capsule: SimpleNamespace) -> None:
    figure = figure_heating(capsule.points, capsule.segments, bounds=capsule.bounds)
    shown = words(figure)
    peak = capsule.points["heat_flux_W_m2"].max()
    assert f"peak {peak / 1e3:.0f} kW/m²" in shown
    assert f"{capsule.points['heat_load_J_m2'].iloc[-1] / 1e6:.2f} MJ/m²" in shown
    assert "part: none" in shown
    (line,) = by_gid(figure, "heat_flux_W_m2")
    assert line.get_ydata().max() == pytest.approx(peak / 1e6)
    hot = capsule.points.assign(heat_flux_radiative_W_m2=0.2 * capsule.points["heat_flux_W_m2"])
    assert by_gid(figure_heating(hot, bounds=capsule.bounds), "heat_flux_radiative_W_m2")


def test_coefficients_draw_limits_bridge_band_and_own_runs_on_both_panels(capsule: SimpleNamespace) -> None:
    results = pd.DataFrame(
        {"altitude_m": [95e3, 110e3], "knudsen.reference": [0.06, 0.9], "drag_coefficient": [1.7, 2.0]}
    )
    results["drag_coefficient_low"] = results["drag_coefficient"] - 0.05
    results["drag_coefficient_high"] = results["drag_coefficient"] + 0.02
    figure = figure_coefficients(
        capsule.points, capsule.crossings, bounds=capsule.bounds, results=results, footer="f"
    )
    for gid in ("curve_bridged", "curve_continuum", "curve_free_molecular", "wash"):
        assert len(by_gid(figure, gid)) == 2, gid
    left, right = by_gid(figure, "curve_bridged")
    np.testing.assert_allclose(left.get_xdata(), right.get_xdata())
    np.testing.assert_allclose(left.get_xdata(), capsule.points["drag_coefficient"])
    np.testing.assert_allclose(right.get_ydata(), capsule.points["knudsen.reference"])
    bars = figure.axes[0].containers[0].lines[2][0].get_segments()
    np.testing.assert_allclose([bar[:, 0] for bar in bars], [[1.65, 1.72], [1.95, 2.02]])
    assert "own runs" in words(figure)
    assert {"bridged", "95 % band", "continuum", "limit"} <= set(words(figure))


def test_the_band_of_a_skip_has_a_piece_for_each_way() -> None:
    up_down = np.concatenate([np.linspace(130, 90, 50), np.linspace(90, 140, 50)]) * 1e3
    path = 1e-7 * np.exp(up_down / 6.5e3) / np.exp(14)
    points = pd.DataFrame({"altitude_m": up_down, "knudsen.reference": path, "drag_coefficient": 2.0})
    points["drag_coefficient_low"], points["drag_coefficient_high"] = 1.9, 2.1
    figure = figure_coefficients(points, bounds=(0.01, 0.1, 10.0))
    assert sum(a in figure.axes[0].get_children() for a in by_gid(figure, "wash")) == 2


@pytest.mark.parametrize("name", FIGURES)
def test_a_million_points_are_thinned_with_their_extremes_kept(name: str, capsule: SimpleNamespace) -> None:
    count = 1_000_000
    grid = np.linspace(0, len(capsule.points) - 1, count)
    numbers = capsule.points.select_dtypes("number")
    many = pd.DataFrame({c: np.interp(grid, np.arange(len(numbers)), numbers[c]) for c in numbers})
    for column in capsule.points.columns.difference(many.columns):
        many[column] = capsule.points[column].to_numpy()[np.rint(grid).astype(int)]
    many.loc[543_210, "heat_flux_W_m2"] = 3e6  # one spike, one point wide
    flight = SimpleNamespace(**(vars(capsule) | {"points": many}))
    figure = FIGURES[name](flight)
    lines = [artist for axes in figure.axes for artist in axes.lines]
    assert all(len(line.get_xdata()) <= 4000 for line in lines)
    assert len(svg(figure)) < 500_000
    if name == "heating":
        assert max(by_gid(figure, "heat_flux_W_m2")[0].get_ydata()) == pytest.approx(3.0)


@pytest.mark.parametrize("name", FIGURES)
@pytest.mark.parametrize("rows", [slice(0, 1), slice(10, 12), slice(300, 303)])
def test_very_few_points_still_make_a_figure(name: str, rows: slice, capsule: SimpleNamespace) -> None:
    flight = SimpleNamespace(
        points=capsule.points.iloc[rows], segments=None, crossings=None, bounds=capsule.bounds
    )
    assert svg(FIGURES[name](flight)).rstrip().endswith("</svg>")


@pytest.mark.parametrize("name", FIGURES)
def test_holes_in_the_data_stay_holes(name: str, capsule: SimpleNamespace) -> None:
    points = capsule.points.copy()
    numbers = points.select_dtypes("number").columns.difference(["time_s", "altitude_m", "air_speed_m_s"])
    points.loc[100:140, numbers] = np.nan
    flight = SimpleNamespace(**(vars(capsule) | {"points": points}))
    figure = FIGURES[name](flight)
    assert svg(figure) == svg(FIGURES[name](flight))
    if name == "heating":
        assert np.isnan(by_gid(figure, "heat_flux_W_m2")[0].get_ydata()[100:141]).all()


def test_air_names_each_species_that_counts_and_leaves_out_the_rest() -> None:
    height = np.linspace(0.0, 500e3, 200)
    oxygen = 1 / (1 + np.exp(-(height - 170e3) / 30e3))
    table = {
        "altitude_m": height, "temperature_K": 300 + 0 * height, "density_kg_m3": np.exp(-height / 7e3),
        "n_N2_m3": 0.78 * (1 - oxygen), "n_O2_m3": 0.21 * (1 - oxygen), "n_O_m3": oxygen,
        "n_H_m3": 1e-6 + 0 * height,
    }  # fmt: skip
    figure = figure_air(table)
    assert {"N₂", "O₂", "O"} <= set(words(figure))
    assert "H" not in words(figure)
    assert len(figure.axes) == 3  # no free path in the table, no panel
    (line,) = by_gid(figure, "n_N2")
    assert line.get_xdata()[0] == pytest.approx(100 * 0.78 / 0.99, rel=0.01)
    with pytest.raises(ValueError, match="nothing to draw"):
        figure_air({"altitude_m": height})


def test_a_single_point_is_a_mark_in_every_panel(capsule: SimpleNamespace) -> None:
    one = capsule.points.iloc[100:101].assign(n_N2_m3=0.8, n_O2_m3=0.2)
    figure = figure_air(one)
    for gid in ("temperature_K", "density_kg_m3", "mean_free_path_m", "n_N2", "n_O2"):
        assert by_gid(figure, gid)[0].get_marker() == "o", gid
    for line in by_gid(figure_coefficients(one, bounds=capsule.bounds), "curve_bridged"):
        assert line.get_marker() == "o"
    assert by_gid(figure_air(capsule.points), "temperature_K")[0].get_marker() == "None"


def test_the_band_of_a_coefficient_is_named_on_every_flight(any_flight: SimpleNamespace) -> None:
    figure = figure_coefficients(any_flight.points, any_flight.crossings, bounds=any_flight.bounds)
    assert "95 % band" in words(figure)


def test_strips_of_names_that_differ_in_the_middle_have_captions_that_differ() -> None:
    long = [f"thermal_protection_gap_{k}_windward_side_panel" for k in ("left", "right")]
    flight = _flight(dict.fromkeys(long, 0.9))
    figure = figure_strips(flight.points, None, bounds=flight.bounds)
    captions = [label.get_text() for label in figure.axes[0].get_yticklabels()]
    assert len(set(captions)) == 2


def test_no_label_of_a_figure_lies_outside_it(any_flight: SimpleNamespace) -> None:
    for name, draw in FIGURES.items():
        figure = draw(any_flight, footer="f")
        canvas = FigureCanvasAgg(figure)
        with look():
            canvas.draw()  # axis labels find their place only now
        for text in figure.findobj(Text):
            if text.get_text() and text.get_visible():
                extent = text.get_window_extent(canvas.get_renderer())
                corners = (extent.x0, extent.y0, figure.bbox.x1 - extent.x1, figure.bbox.y1 - extent.y1)
                assert min(corners) >= 0.0, (name, text.get_text(), extent)


def test_regime_patches_wear_the_one_scale(capsule: SimpleNamespace) -> None:
    from matplotlib.colors import to_hex

    from aero.report.palette import REGIME_COLOURS

    for name in ("map", "strips", "coefficients", "heating"):
        patches = [
            p
            for p in FIGURES[name](capsule).findobj(Rectangle)
            if str(p.get_gid()).partition("-")[2] in REGIME_COLOURS
        ]
        assert patches, name
        for patch in patches:
            regime = patch.get_gid().partition("-")[2]
            assert to_hex(patch.get_facecolor()) == REGIME_COLOURS[regime]
            assert bool(patch.get_hatch()) == (regime == "transitional")


def test_the_scale_keeps_its_order_in_grey() -> None:
    from aero.report.palette import REGIME_COLOURS, REGIME_TEXT, REGIMES

    def luminance(colour: str) -> float:
        """Return the relative luminance of WCAG 2.1."""
        parts = [int(colour[k : k + 2], 16) / 255 for k in (1, 3, 5)]
        linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts]
        return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

    levels = [luminance(REGIME_COLOURS[r]) for r in REGIMES]
    assert all(b > 1.5 * a for a, b in pairwise(levels))
    for regime in REGIMES:
        pair = sorted((luminance(REGIME_COLOURS[regime]), luminance(REGIME_TEXT[regime])))
        assert (pair[1] + 0.05) / (pair[0] + 0.05) >= 4.5  # WCAG 2.1, success criterion 1.4.3


def test_footer_holds_all_its_parts_and_is_cut_to_the_width(capsule: SimpleNamespace) -> None:
    text = footer_text(
        vehicle="v" * 200,
        trajectory="t",
        atmosphere="msis-2.1",
        free_path="vhs",
        version="1",
        digest="0123456789",
    )
    assert text.endswith("aero 1  ·  01234567")
    figure = figure_map(capsule.points, bounds=capsule.bounds, footer="x" * 1000)
    (foot,) = by_gid(figure, "footer")
    assert foot.get_text().count("…") == 1
    assert foot.get_window_extent().x1 <= figure.bbox.x1


def test_an_unknown_size_is_refused(capsule: SimpleNamespace) -> None:
    with pytest.raises(ValueError, match="size is 'poster', expected one of: column, slide"):
        figure_map(capsule.points, bounds=capsule.bounds, size="poster")
    with pytest.raises(ValueError, match="three positive rising"):
        figure_map(capsule.points, bounds=(0.1, 0.01, 10))


@pytest.mark.parametrize(("kind", "head"), [("svg", b"<?xml"), ("png", b"\x89PNG"), ("pdf", b"%PDF")])
def test_figures_are_written_in_each_format_twice_alike(
    kind: str, head: bytes, tmp_path: Path, capsule: SimpleNamespace
) -> None:
    for name in ("one", "two"):
        save_figure(figure_air(capsule.points), tmp_path / f"{name}.{kind}")
    save_figure(figure_air(capsule.points), tmp_path / "three.tmp", kind)
    one, two, three = (path.read_bytes() for path in sorted(tmp_path.iterdir()))
    assert one == two == three
    assert one.startswith(head)
    with pytest.raises(ValueError, match="figure format is 'gif', expected one of: svg, png, pdf"):
        save_figure(figure_air(capsule.points), tmp_path / "a.gif")
