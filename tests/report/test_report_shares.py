"""Every share that counts is written, in its piece or beside it, and none lies over another."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.transforms import Bbox

from aero.report import figure_heating, figure_strips, percent
from aero.report.pieces import Piece
from aero.report.shares import lay_out
from aero.report.style import look

BOUNDS = (0.01, 0.1, 10.0)


def by_gid(figure: Figure, gid: str) -> list:
    return [artist for artist in figure.findobj() if artist.get_gid() == gid]


def boxes(figure: Figure, artists: list) -> list[Bbox]:
    """Return where artists lie, once the figure is drawn [pixels]."""
    canvas = FigureCanvasAgg(figure)
    with look():
        canvas.draw()
    return [artist.get_window_extent(canvas.get_renderer()) for artist in artists]


def decay() -> SimpleNamespace:
    """Ten days of orbit, and all that matters in the last ten minutes."""
    edges = np.array([0.0, 864_000.0, 864_200.0, 864_300.0, 864_400.0, 864_600.0])
    regimes = ["free-molecular", "transitional", "slip", "continuum", "slip"]
    segments = pd.DataFrame(
        {"length": "reference", "regime": regimes, "start_s": edges[:-1], "end_s": edges[1:],
         "heat_load_share": [0.004, 0.096, 0.2, 0.69, 0.01]}
    )  # fmt: skip
    height = np.array([200.0, 120.0, 100.0, 90.0, 60.0, 40.0]) * 1e3
    points = pd.DataFrame({"time_s": edges, "altitude_m": height, "mean_free_path_m": 0.1})
    points["knudsen.reference"] = 0.1
    points["heat_flux_W_m2"] = points["heat_load_J_m2"] = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0]
    return SimpleNamespace(points=points, segments=segments, bounds=BOUNDS)


@pytest.mark.parametrize("size", ["column", "slide"])
@pytest.mark.parametrize("draw", [figure_strips, figure_heating])
def test_every_share_of_one_per_cent_is_written_and_none_overlaps(
    draw: object, size: str, any_flight: SimpleNamespace
) -> None:
    for flight in (any_flight, decay()):
        figure = draw(flight.points, flight.segments, bounds=flight.bounds, size=size)  # type: ignore[operator]
        shown = by_gid(figure, "share")
        texts = [text.get_text() for text in shown]
        mine = flight.segments
        if draw is figure_heating:
            mine = mine[mine["length"] == "reference"]
        for share in mine["heat_load_share"]:
            if share >= 0.01:
                found = next(k for k, text in enumerate(texts) if text.endswith(f"{percent(share)} %"))
                texts.pop(found)  # each number is there as often as there are such pieces
        lie = boxes(figure, shown)
        for k, box in enumerate(lie):
            assert not any(box.overlaps(other) for other in lie[:k]), shown[k].get_text()
        leaders = by_gid(figure, "share-leader")
        beside = [text for text in shown if text.get_color() == "#1b2733" and text.get_fontsize() < 6]
        assert len(leaders) >= len(beside)


def test_a_share_takes_the_first_way_that_fits() -> None:
    def way(room: float, share: float = 0.031) -> tuple[str, float, bool, bool]:
        layout = lay_out([Piece("transitional", 0.0, room, share)], (0.0, 5.0), 5.0, 0.29)
        beside = [note for lane in layout.lanes.values() for note, _ in lane]
        (note,) = layout.inside or beside
        return note.text, note.size, note.upright, bool(beside)

    assert way(2.0) == ("transitional 3.1 %", 6.5, False, False)
    assert way(0.4) == ("3.1 %", 6.5, False, False)
    assert way(0.26) == ("3.1 %", 5.2, False, False)
    assert way(0.15, share=0.73) == ("73 %", 6.5, True, False)
    assert way(0.11) == ("3.1 %", 5.2, True, False)
    assert way(0.06) == ("3.1 %", 5.2, False, True)
    assert way(0.004) == ("transitional 3.1 %", 5.2, False, True)  # too narrow to show its colour
    narrow = lay_out([Piece("slip", 0.0, 0.06, 0.009)], (0.0, 5.0), 5.0, 0.29)
    assert not narrow.inside
    assert not any(narrow.lanes.values())


def test_shares_beside_a_strip_stay_on_it_and_lean_to_both_sides_when_many() -> None:
    pieces = [Piece("slip", 4.5 + 0.005 * k, 4.505 + 0.005 * k, 0.012) for k in range(16)]
    layout = lay_out(pieces, (0.0, 5.0), 5.0, 0.29)
    assert {lane: len(notes) for lane, notes in layout.lanes.items()} == {"below": 8, "above": 8}
    for notes in layout.lanes.values():
        left = np.array([place - 0.5 * note.width for note, place in notes])
        right = np.array([place + 0.5 * note.width for note, place in notes])
        assert left[0] >= -1e-6
        assert right[-1] <= 5.0 + 1e-6
        assert (left[1:] > right[:-1]).all()


def test_more_than_two_lines_can_hold_leaves_out_the_least() -> None:
    pieces = [Piece("slip", 0.05 * k, 0.05 * k + 0.04, 0.01 + 1e-4 * k) for k in range(100)]
    layout = lay_out(pieces, (0.0, 5.0), 5.0, 0.29)
    kept = [note.share for notes in layout.lanes.values() for note, _ in notes]
    assert 20 < len(kept) < 60
    assert min(kept) == pytest.approx(0.0199 - 1e-4 * (len(kept) - 1))


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (1.0, "100"), (0.0996, "10"), (0.0994, "9.9"), (1e-5, "<0.1"), (0.0, "0"), (-0.0, "0"),
        (-1e-5, "0"), (-0.0004, "0"), (-0.0006, "\u22120.1"), (-0.25, "\u221225"),
    ],
)  # fmt: skip
def test_per_cent_is_never_minus_nothing(share: float, text: str) -> None:
    assert percent(share) == text
