"""Labels that miss lines and each other: each takes the first of its places that is free."""

from __future__ import annotations

from collections.abc import Sequence

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


class Labels:
    """Places labels in one pair of axes whose limits are already set.

    Parameters
    ----------
    axes : Axes
        Where to write.
    """

    def __init__(self, axes: Axes) -> None:
        self.axes = axes
        self._dpi = axes.get_figure(root=True).dpi  # type: ignore[union-attr]
        box = axes.bbox
        self._frame: Box = tuple(  # type: ignore[assignment]
            float(edge) / self._dpi for edge in (box.x0, box.y0, box.x1, box.y1)
        )
        self._boxes: list[Box] = []
        self._last: Text | None = None
        self._points = np.empty((0, 2))

    def inches(self, x: ArrayLike, y: ArrayLike) -> Floats:
        """Return data points as (n, 2) inches on the figure; those without a place are left out."""
        with np.errstate(divide="ignore", invalid="ignore"):
            places = self.axes.transData.transform(np.column_stack([floats(x).ravel(), floats(y).ravel()]))
        return floats(places[np.isfinite(places).all(axis=1)] / self._dpi)

    def avoid(self, x: ArrayLike, y: ArrayLike) -> None:
        """Keep later labels off a line."""
        places = self.inches(x, y)
        if len(places) == 0:
            return
        reach = np.concatenate([[0.0], np.hypot(*np.diff(places, axis=0).T).cumsum()])
        count = int(min(reach[-1] / 0.03, 20_000)) + 1
        along = np.linspace(0.0, reach[-1], count)
        dense = np.column_stack([np.interp(along, reach, places[:, k]) for k in (0, 1)])
        self._points = np.concatenate([self._points, dense])

    def avoid_box(self, box: Box) -> None:
        """Keep later labels off a rectangle [in]."""
        self._boxes.append(box)

    def distance(self, place: Floats) -> float:
        """Return how far a place is from the nearest line or label [in]."""
        gaps = [float(np.hypot(*(self._points - place).T).min())] if len(self._points) else [np.inf]
        for left, bottom, right, top in self._boxes:
            across = max(left - place[0], 0.0, place[0] - right)
            up = max(bottom - place[1], 0.0, place[1] - top)
            gaps.append(float(np.hypot(across, up)))
        return min(gaps)

    def inside(self, place: Floats, margin: float) -> bool:
        """Return whether a place lies at least `margin` inches from the left and right of the axes."""
        return bool(self._frame[0] + margin < place[0] < self._frame[2] - margin)

    def free(self, box: Box) -> bool:
        """Return whether a rectangle lies inside the axes and touches no line and no label."""
        left, bottom, right, top = box
        frame = self._frame
        if left < frame[0] or bottom < frame[1] or right > frame[2] or top > frame[3]:
            return False
        if any(left < b[2] and right > b[0] and bottom < b[3] and top > b[1] for b in self._boxes):
            return False
        p = self._points
        return not ((p[:, 0] > left) & (p[:, 0] < right) & (p[:, 1] > bottom) & (p[:, 1] < top)).any()

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
    ) -> Text | None:
        """Write a label beside a data point, on the first of `sides` that is free.

        Returns
        -------
        Text or None
            None when no side is free; then nothing is written.
        """
        anchor = self.inches([x], [y])
        if len(anchor) == 0:
            return None
        lines = text.split("\n")
        width = max(text_width(line, size, weight) for line in lines)
        height = size / 72.0 * (1.05 + 1.25 * (len(lines) - 1))
        for side in sides:
            across, up = SIDES[side]
            reach = gap if across == 0 or up == 0 else 0.75 * gap
            corner = (anchor[0, 0] + across * reach, anchor[0, 1] + up * reach)
            left = corner[0] - width * (1 - across) / 2
            bottom = corner[1] - height * (1 - up) / 2
            box = (left, bottom, left + width, bottom + height)
            if self.free(box):
                self._boxes.append(box)
                self._last = self._write(corner, text, colour, size, weight, across, up)
                return self._last
        return None

    def heights(self) -> tuple[float, float]:
        """Return bottom and top of the label written last, in data units."""
        box = self._boxes[-1]
        low, high = self.axes.transData.inverted().transform(
            [(0.0, edge * self._dpi) for edge in (box[1], box[3])]
        )
        return float(low[1]), float(high[1])

    def back(self, colour: str) -> None:
        """Lay a colour under the label written last."""
        if self._last is not None:
            self._last.set_bbox({"facecolor": colour, "edgecolor": "none", "pad": 0.6})

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


def spread(wanted: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """Return positions as near as can be to those wanted, in their order, at least `gap` apart.

    Examples
    --------
    >>> spread([1.0, 1.1, 5.0], 0.5, 0.0, 6.0)
    [0.8, 1.3, 5.0]
    """
    order = sorted(range(len(wanted)), key=lambda i: wanted[i])
    groups: list[list[float]] = []  # [sum of wanted offsets, count]
    for rank in order:
        groups.append([wanted[rank], 1.0])
        while len(groups) > 1 and _start(groups[-1], gap) < _start(groups[-2], gap) + groups[-2][1] * gap:
            total, count = groups.pop()
            groups[-1] = [groups[-1][0] + total, groups[-1][1] + count]
    places = [0.0] * len(wanted)
    rank = 0
    for group in groups:
        start = min(max(_start(group, gap), low), high - (group[1] - 1) * gap)
        for step in range(int(group[1])):
            places[order[rank]] = round(start + step * gap, 9)
            rank += 1
    return places


def _start(group: list[float], gap: float) -> float:
    """Return where the first of a group stands when the group is centred on its wanted mean."""
    return group[0] / group[1] - 0.5 * (group[1] - 1.0) * gap
