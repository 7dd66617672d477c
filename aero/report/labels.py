"""Labels that miss lines and each other: each takes the first of its places that is free."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.text import Text

from aero.arrays import ArrayLike, Floats, floats
from aero.report.style import NORMAL, text_width

Box = tuple[float, float, float, float]  # left, bottom, right, top [in]
# side -> (horizontal, vertical) direction of the label from its anchor
SIDES = {
    "right": (1, 0),
    "left": (-1, 0),
    "above": (0, 1),
    "below": (0, -1),
    "above-right": (1, 1),
    "above-left": (-1, 1),
    "below-right": (1, -1),
    "below-left": (-1, -1),
}
_ALIGN_X = {-1: "right", 0: "center", 1: "left"}
_ALIGN_Y = {-1: "top", 0: "center", 1: "bottom"}
_CLEAR = 0.025  # in: between a label and a line, half the width of the flight with its casing
_TOUCH = 0.01  # in: of a label's height, empty above and below its letters
_ROUNDED = 1.04  # a screen rounds small letters to whole pixels: a label may come out that much wider


@dataclass(frozen=True)
class Tilted:
    """A rectangle turned by an angle [rad] about its centre; sizes are half of its sides [in]."""

    x: float
    y: float
    half_width: float
    half_height: float
    angle: float = 0.0

    def holds(self, places: Floats) -> np.ndarray:
        """Return which of (n, 2) places lie inside."""
        across, up = places[:, 0] - self.x, places[:, 1] - self.y
        cos, sin = np.cos(self.angle), np.sin(self.angle)
        inside: np.ndarray = (np.abs(cos * across + sin * up) < self.half_width) & (
            np.abs(cos * up - sin * across) < self.half_height
        )
        return inside


class Labels:
    """Places labels in one pair of axes whose limits are already set.

    Parameters
    ----------
    axes : Axes
        Where to write.

    Attributes
    ----------
    frame : Box
        Edges of the axes [in].
    """

    def __init__(self, axes: Axes) -> None:
        self.axes = axes
        self._dpi = axes.get_figure(root=True).dpi  # type: ignore[union-attr]
        box = axes.bbox
        self.frame: Box = tuple(  # type: ignore[assignment]
            float(edge) / self._dpi for edge in (box.x0, box.y0, box.x1, box.y1)
        )
        self._boxes: list[Box] = []
        self._walls: list[float] = []
        self._points = np.empty((0, 2))

    def inches(self, x: ArrayLike, y: ArrayLike) -> Floats:
        """Return data points as (n, 2) inches on the figure; those without a place are left out."""
        with np.errstate(divide="ignore", invalid="ignore"):
            places = self.axes.transData.transform(np.column_stack([floats(x).ravel(), floats(y).ravel()]))
        return floats(places[np.isfinite(places).all(axis=1)] / self._dpi)

    def from_inches(self, places: Floats) -> Floats:
        """Return (n, 2) inches on the figure as data points."""
        return floats(self.axes.transData.inverted().transform(places * self._dpi))

    def avoid(self, x: ArrayLike, y: ArrayLike) -> None:
        """Keep later labels off a line."""
        places = self.inches(x, y)
        if len(places):
            self._points = np.concatenate([self._points, dense(places)])

    def avoid_box(self, box: Box) -> None:
        """Keep later labels off a rectangle [in]."""
        self._boxes.append(box)

    def avoid_crossing(self, heights: ArrayLike) -> None:
        """Keep later labels from lying across these heights, in data units: the edges of bands."""
        left = np.full(floats(heights).size, self.axes.get_xlim()[0])
        self._walls += self.inches(left, heights)[:, 1].tolist()

    @property
    def written(self) -> list[Tilted]:
        """What labels cover so far, with a little air: lines that may be cut are cut there."""
        air = 0.02
        return [
            Tilted(
                0.5 * (b[0] + b[2]), 0.5 * (b[1] + b[3]), 0.5 * (b[2] - b[0]) + air, 0.5 * (b[3] - b[1]) + air
            )
            for b in self._boxes
        ]

    def distance(self, place: Floats) -> float:
        """Return how far a place is from the nearest line or label [in]."""
        gaps = [float(np.hypot(*(self._points - place).T).min())] if len(self._points) else [np.inf]
        return min(gaps + [gap_between(box, place[None, :]) for box in self._boxes])

    def inside(self, place: Floats, margin: float) -> bool:
        """Return whether a place lies at least `margin` inches from the left and right of the axes."""
        return bool(self.frame[0] + margin < place[0] < self.frame[2] - margin)

    def free(self, box: Box) -> bool:
        """Return whether a rectangle lies inside the axes and touches no line and no label."""
        left, bottom, right, top = box
        frame = self.frame
        if left < frame[0] or bottom < frame[1] or right > frame[2] - _CLEAR or top > frame[3]:
            return False
        if any(bottom + _TOUCH < wall < top - _TOUCH for wall in self._walls):
            return False
        if any(left < b[2] and right > b[0] and bottom < b[3] and top > b[1] for b in self._boxes):
            return False
        return not len(self._points) or gap_between(box, self._points) >= _CLEAR

    def put(
        self,
        x: float,
        y: float,
        text: str,
        *,
        colour: str,
        size: float = NORMAL,
        sides: Sequence[str] = tuple(SIDES),
        gap: float = 0.06,
        weight: str = "normal",
        strangers: Floats | None = None,
    ) -> Text | None:
        """Write a label beside a data point, on the first of `sides` that is free.

        Parameters
        ----------
        x, y : float
            In data units.
        text, colour, size, weight
            What is written, and how.
        sides : sequence of str
            Keys of `SIDES`, in the order they are tried.
        gap : float [in]
            Between point and label.
        strangers : (n, 2) array [in], optional
            Lines that the label could be taken to name by mistake: it keeps twice the gap from them.

        Returns
        -------
        Text or None
            None when no side is free; then nothing is written.
        """
        anchor = self.inches([x], [y])
        if len(anchor) == 0:
            return None
        lines = text.split("\n")
        width = _ROUNDED * max(text_width(line, size, weight) for line in lines)
        height = size / 72.0 * (1.05 + 1.25 * (len(lines) - 1))
        for side in sides:
            across, up = SIDES[side]
            reach = gap if across == 0 or up == 0 else 0.75 * gap
            corner = (anchor[0, 0] + across * reach, anchor[0, 1] + up * reach)
            left = corner[0] - width * (1 - across) / 2
            if across == 0:  # above or below near the edge: pushed into the axes
                inward = min(max(left, self.frame[0] + _CLEAR), self.frame[2] - _CLEAR - width)
                corner, left = (corner[0] + inward - left, corner[1]), inward
            bottom = corner[1] - height * (1 - up) / 2
            box = (left, bottom, left + width, bottom + height)
            mistaken = strangers is not None and len(strangers) and gap_between(box, strangers) < 2.0 * gap
            if self.free(box) and not mistaken:
                self._boxes.append(box)
                return self._write(corner, text, colour, size, weight, across, up)
        return None

    def last_height(self) -> float:
        """Return the middle of the label written last, in data units."""
        box = self._boxes[-1]
        return float(self.from_inches(np.array([[0.0, 0.5 * (box[1] + box[3])]]))[0, 1])

    def _write(
        self,
        corner: tuple[float, float],
        text: str,
        colour: str,
        size: float,
        weight: str,
        across: int,
        up: int,
    ) -> Text:
        figure = self.axes.get_figure(root=True)
        assert figure is not None  # axes always stand in a figure here
        width, height = figure.get_size_inches()
        return figure.text(
            corner[0] / width,
            corner[1] / height,
            text,
            color=colour,
            size=size,
            weight=weight,
            ha=_ALIGN_X[across],
            va=_ALIGN_Y[up],
            linespacing=1.2,
        )


def dense(places: Floats, step: float = 0.03) -> Floats:
    """Return a line of (n, 2) places [in] as places at most `step` apart; very long ones get longer steps."""
    reach = np.concatenate([[0.0], np.hypot(*np.diff(places, axis=0).T).cumsum()])
    count = int(min(reach[-1] / step, 20_000)) + 2
    along = np.linspace(0.0, reach[-1], count)
    return np.column_stack([np.interp(along, reach, places[:, k]) for k in (0, 1)])


def gap_between(box: Box, places: Floats) -> float:
    """Return the least distance of (n, 2) places from a rectangle [in]; zero inside it.

    Examples
    --------
    >>> import numpy as np
    >>> gap_between((0.0, 0.0, 1.0, 1.0), np.array([[0.5, 3.0], [4.0, 5.0]]))
    2.0
    """
    left, bottom, right, top = box
    across = np.maximum(np.maximum(left - places[:, 0], places[:, 0] - right), 0.0)
    up = np.maximum(np.maximum(bottom - places[:, 1], places[:, 1] - top), 0.0)
    return float(np.hypot(across, up).min())


def spread(
    wanted: Sequence[float], gap: float, low: float, high: float, widths: Sequence[float] | None = None
) -> list[float]:
    """Return positions as near as can be to those wanted, in their order, at least `gap` apart.

    Parameters
    ----------
    wanted : sequence of float
    gap : float
        Between neighbours; between their edges where they have widths.
    low, high : float
        Where the first may begin and the last must end.
    widths : sequence of float, optional
        Of what is placed; positions are middles.

    Examples
    --------
    >>> spread([1.0, 1.1, 5.0], 0.5, 0.0, 6.0)
    [0.8, 1.3, 5.0]
    >>> spread([1.0, 1.1], 0.0, 0.0, 6.0, widths=[1.0, 2.0])
    [0.5, 2.0]
    """
    if not wanted:
        return []
    order = sorted(range(len(wanted)), key=lambda i: wanted[i])
    half = np.zeros(len(order)) if widths is None else 0.5 * np.array([widths[i] for i in order])
    # Take away what neighbours need between them: what is left need only not fall.
    needed = np.concatenate([[0.0], np.cumsum(half[:-1] + half[1:] + gap)])
    free = _not_falling([wanted[i] - need for i, need in zip(order, needed, strict=True)])
    free = np.minimum(np.maximum(free, low + half[0]), high - half[-1] - needed[-1])
    places = [0.0] * len(wanted)
    for i, place in zip(order, (free + needed).tolist(), strict=True):
        places[i] = round(place, 9)
    return places


def _not_falling(values: Sequence[float]) -> Floats:
    """Return the values nearest to these, in least squares, of which none is less than the one before."""
    groups: list[list[float]] = []  # [mean, count]
    for value in values:
        groups.append([value, 1.0])
        while len(groups) > 1 and groups[-1][0] < groups[-2][0]:
            mean, count = groups.pop()
            total = groups[-1][1] + count
            groups[-1] = [(groups[-1][0] * groups[-1][1] + mean * count) / total, total]
    return np.repeat([mean for mean, _ in groups], [int(count) for _, count in groups])
