"""The picture of a body: its bytes, its size, its colours and what it says."""

from __future__ import annotations

from xml.etree import ElementTree

import numpy as np
import pytest

from aero.body import Sphere, Vehicle
from aero.report import palette
from aero.report.body import HEAT_COLOURS, figure_body, heat_colours
from aero.report.style import png, svg

BOUNDS = (0.01, 0.1, 10.0)
BALL = Vehicle.from_shape(Sphere(diameter=1.0)).elements(4000)
FLUX = np.maximum(BALL.normals[:, 0], 0.0) * 3.2e5
REGIMES = np.where(BALL.normals[:, 0] > 0.5, "slip", "transitional")
LARGEST_SVG = 400_000  # bytes; the report holds several figures in one file


def draw(**options):
    return figure_body(BALL.vertices, FLUX, REGIMES, bounds=BOUNDS, mark=[0.5, 0.0, 0.0], **options)


def words(figure):
    return [
        "".join(e.itertext()) for e in ElementTree.fromstring(svg(figure)).iter() if e.tag.endswith("}text")
    ]


@pytest.mark.parametrize("size", ["column", "slide"])
def test_same_bytes_small_enough_and_nothing_from_outside(size):
    one, two = (draw(size=size, footer="ball") for _ in range(2))
    text = svg(one)
    assert text == svg(two)
    assert png(one) == png(two)
    assert len(text) < LARGEST_SVG
    assert "href" in text  # the triangles are one image inside
    assert not [part for part in text.split('href="')[1:] if not part.startswith(("data:image/png", "#"))]
    assert one.get_size_inches()[0] == pytest.approx(160 / 25.4 if size == "column" else 8.0)


def test_axes_are_in_metres_and_the_scale_in_its_unit():
    figure = draw()
    labels = [label for a in figure.axes for label in (a.get_xlabel(), a.get_ylabel()) if label]
    assert labels == ["y [m]", "−z [m]", "x [m]", "−z [m]"] * 2 + ["heat flux [kW/m²]"]
    said = words(figure)
    assert "Heat flux over the body, at most 320 kW/m²" in said
    assert {"flow", "max", *palette.REGIMES} <= set(said)


def test_one_scale_for_both_views():
    """A metre is as long across as up, in every panel."""
    figure = draw()
    for axes in figure.axes[:4]:
        box = axes.get_window_extent()
        across, up = (abs(np.diff(limits)[0]) for limits in (axes.get_xlim(), axes.get_ylim()))
        assert box.width / across == pytest.approx(box.height / up, rel=1e-6)


def test_the_body_is_where_its_numbers_say():
    """The drawn triangles of the side view span the sphere: nose at x = 0.5 on the left."""
    side = draw().axes[1]
    drawn = np.concatenate([path.vertices for path in side.collections[0].get_paths()])
    np.testing.assert_allclose([drawn[:, 0].min(), drawn[:, 0].max()], [-0.5, 0.5], atol=2e-3)
    left, right = side.get_xlim()
    assert left > right
    facing = BALL.normals[:, 1] < 0.0  # from its left one sees the half that looks to negative y
    assert len(side.collections[0].get_paths()) == pytest.approx(facing.sum(), abs=80)


def test_far_triangles_are_drawn_first():
    """Two squares across the flow: the near one is painted last."""
    square = np.array([[0.0, -1.0, -1.0], [0.0, -1.0, 1.0], [0.0, 1.0, 1.0]])
    square = square[::-1] if np.cross(square[1] - square[0], square[2] - square[0])[0] < 0 else square
    pair = np.stack([square, square - [2.0, 0.0, 0.0]])
    for order in ([0, 1], [1, 0]):
        figure = figure_body(pair[order], np.array([1.0, 0.0])[order], ["slip"] * 2, bounds=BOUNDS)
        last = figure.axes[0].collections[0].get_facecolors()[-1]
        np.testing.assert_allclose(last, heat_colours([1.0], 1.0)[0])


def test_colours_fall_in_lightness_and_unknown_is_grey():
    colours = heat_colours(np.linspace(0.0, 1.0, 50), 1.0)
    light = colours[:, :3] @ [0.2126, 0.7152, 0.0722]
    assert (np.diff(light) < 0.0).all()
    assert heat_colours([np.nan], 1.0)[0, :3] == pytest.approx([0.7255, 0.698, 0.6549], abs=1e-3)
    assert len(set(HEAT_COLOURS)) == 5
    assert heat_colours([0.0], 0.0)[0].tolist() == colours[0].tolist()


@pytest.mark.parametrize("flux", [np.zeros(len(FLUX)), np.full(len(FLUX), np.nan), -FLUX])
def test_awkward_values_are_drawn(flux):
    figure = figure_body(BALL.vertices, flux, [""] * len(flux), bounds=BOUNDS, direction=[0.0, 0.0, 1.0])
    assert len(svg(figure)) < LARGEST_SVG


def test_wrong_shapes_are_refused():
    with pytest.raises(ValueError, match="n triangles, n values and n names"):
        figure_body(BALL.vertices[:5], FLUX[:4], ["slip"] * 5, bounds=BOUNDS)
    with pytest.raises(ValueError, match="n at least 1"):
        figure_body(np.empty((0, 3, 3)), [], [], bounds=BOUNDS)
    with pytest.raises(ValueError, match="size is 'poster'"):
        draw(size="poster")


def test_a_sheet_seen_on_edge_is_a_line():
    # a plate across the flow: seen from its side it is on edge, seen from the flow it is not
    corners = np.array([[0.0, -1.0, -1.0], [0.0, 1.0, -1.0], [0.0, 1.0, 1.0], [0.0, -1.0, 1.0]])
    sheet = corners[[[0, 1, 2], [0, 2, 3]]]
    figure = figure_body(sheet, np.full(2, 1e5), ["slip"] * 2, bounds=(0.01, 0.1, 10.0))
    drawn = [c.get_gid() for axes in figure.axes for c in axes.collections]
    assert drawn.count("edges") == 2  # heat flux and regime, from the side
    assert drawn.count("body") == 2  # and from the flow
