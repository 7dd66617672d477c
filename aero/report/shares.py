"""Where the share of each piece of a strip is written: inside where it fits, else beside it on a thin line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from matplotlib.axes import Axes

from aero.report import palette
from aero.report.labels import spread
from aero.report.pieces import Piece, percent
from aero.report.style import SMALL, text_width

LANE = 0.13  # in: height of a line of shares beside a strip
TINY = 5.2  # pt
_WORTH = 0.0095  # from here on a share reads 1.0 % and is always written
_PAD, _TIGHT = 0.06, 0.035  # in, in all, between a text and the ends of its piece
_SEEN = 0.03  # in: the colour of a narrower piece can hardly be told, so its share names the regime
_APART = 0.05  # in, between neighbours beside a strip


@dataclass(frozen=True)
class Note:
    """A text and the middle of its piece, in inches along the strip."""

    text: str
    at: float
    size: float
    regime: str
    share: float
    upright: bool = False

    @property
    def width(self) -> float:
        """Width of the text [in]."""
        return text_width(self.text, self.size)


@dataclass(frozen=True)
class Layout:
    """The notes of one strip: those inside, and those beside it with the place of their middle [in]."""

    inside: list[Note] = field(default_factory=list)
    lanes: dict[str, list[tuple[Note, float]]] = field(default_factory=dict)


def lay_out(
    pieces: Sequence[Piece],
    limits: tuple[float, float],
    wide: float,
    tall: float,
    lanes: Sequence[str] = ("below", "above"),
) -> Layout:
    """Find a place for the share of every piece that has one worth writing, and for what else fits.

    Parameters
    ----------
    pieces : sequence of Piece
    limits : two floats
        Ends of the axis, in the unit of the pieces.
    wide, tall : float [in]
        Length of the axis and height of the strip.
    lanes : sequence of "below", "above"
        Where shares may stand that do not fit inside, the first preferred.

    Notes
    -----
    A share of 1 % or more is written across its piece, else smaller, else upright, else beside the strip.
    Only where the lanes cannot hold them all are the least of these left out.
    """
    made = Layout(lanes={lane: [] for lane in lanes})
    outside: list[Note] = []
    per_unit = wide / (limits[1] - limits[0])
    for piece in pieces:
        start, end = (
            (min(max(x, limits[0]), limits[1]) - limits[0]) * per_unit for x in (piece.start, piece.end)
        )
        note, fits = _note(piece, 0.5 * (start + end), end - start, tall)
        if note is not None:
            (made.inside if fits else outside).append(note)
    _deal(outside, made.lanes, wide)
    return made


def _note(piece: Piece, at: float, room: float, tall: float) -> tuple[Note | None, bool]:
    """Return what to write of a piece `room` inches wide, and whether it fits inside."""
    share = f"{percent(piece.share)} %" if np.isfinite(piece.share) else ""
    for text in (f"{piece.regime} {share}".strip(), share or piece.regime):
        if text_width(text, SMALL) <= room - _PAD:
            return Note(text, at, SMALL, piece.regime, piece.share), True
    if not abs(piece.share) >= _WORTH:
        return None, False
    for size, upright in ((TINY, False), (SMALL, True), (TINY, True)):
        along, across = text_width(share, size), size / 72.0
        width, height = (across, along) if upright else (along, across)
        if width <= room - _TIGHT and height <= tall - _TIGHT:
            return Note(share, at, size, piece.regime, piece.share, upright), True
    text = share if room >= _SEEN else f"{piece.regime} {share}"
    return Note(text, at, TINY, piece.regime, piece.share), False


def _deal(outside: list[Note], lanes: dict[str, list[tuple[Note, float]]], wide: float) -> None:
    """Deal notes to the lanes in turn, to one alone where it holds them all; each as near as can be."""
    notes = sorted(outside, key=lambda note: note.at)
    names = list(lanes)
    if not _overfull(notes, wide):
        names = names[:1]
    while any(_overfull(notes[k :: len(names)], wide) for k in range(len(names))):
        notes.remove(min(notes, key=lambda note: abs(note.share)))
    for k, name in enumerate(names):
        mine = notes[k :: len(names)]
        places = spread([note.at for note in mine], _APART, 0.0, wide, [note.width for note in mine])
        lanes[name] += list(zip(mine, places, strict=True))


def _overfull(notes: Sequence[Note], wide: float) -> bool:
    return sum(note.width + _APART for note in notes) > wide + _APART


def draw_notes(axes: Axes, layout: Layout, row: float, half: float) -> None:
    """Write the notes of a strip centred on `row`; the vertical axis of `axes` runs downwards."""
    left, right = axes.get_xlim()
    bottom, top = axes.get_ylim()
    box = axes.get_window_extent()
    dpi = axes.get_figure(root=True).dpi  # type: ignore[union-attr]
    across, down = (
        (right - left) * dpi / box.width,
        (bottom - top) * dpi / box.height,
    )  # an inch in data units
    for note in layout.inside:
        axes.text(
            left + note.at * across, row, note.text, size=note.size, color=palette.REGIME_TEXT[note.regime],
            ha="center", va="center" if note.upright else "center_baseline",
            rotation=90.0 if note.upright else 0.0, gid="share",
        )  # fmt: skip
    for lane, notes in layout.lanes.items():
        side = 1.0 if lane == "below" else -1.0
        edge, near, middle = (row + side * (half + gap * down) for gap in (0.0, 0.03, 0.075))
        for note, place in notes:
            axes.plot(
                [left + note.at * across, left + place * across], [edge, near], color=palette.GREY,
                linewidth=0.5, clip_on=False, gid="share-leader",
            )  # fmt: skip
            axes.text(
                left + place * across, middle, note.text, size=note.size, color=palette.INK,
                ha="center", va="center_baseline", gid="share",
            )  # fmt: skip
