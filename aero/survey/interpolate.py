"""Multilinear interpolation on a grid, of many columns at once."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

SLACK = 1e-9  # of an axis' largest value: rounding of units and of positions on the Earth, and no more


@dataclass(frozen=True)
class Scale:
    """What is interpolated in place of a value: call `to` with (value, speed) and `back` with the result."""

    to: Callable[[Floats, Floats], Floats]
    back: Callable[[Floats, Floats], Floats]
    meaning: str


FLUX_FLOOR = (
    1e-18  # W s3/m5: 1e-6 W/m2 at 10 km/s; below it a flux over speed cubed goes linearly through zero
)

SCALES: dict[str, Scale] = {
    "linear": Scale(lambda value, _: value, lambda value, _: value, "the value itself"),
    "logarithm": Scale(
        lambda value, _: floats(np.log(value)), lambda value, _: floats(np.exp(value)), "ln(value)"
    ),
    "logarithm-over-cube": Scale(
        lambda value, speed: floats(np.arcsinh(value / (FLUX_FLOOR * speed * speed * speed))),
        lambda value, speed: floats(np.sinh(value) * (FLUX_FLOOR * speed * speed * speed)),
        "ln(value/speed^3), of either sign: asinh(value/(speed^3 1e-18 W s3/m5))",
    ),
}
"""Ways to interpolate a column, by name."""


def scale_of(name: str, values: Floats) -> str:
    """Return the key of `SCALES` that suits a column: a logarithm for what spans decades."""
    if name.startswith("heat_flux") and not bool((values == 0.0).any()):
        return "logarithm-over-cube"
    positive = bool(np.all((values > 0.0) | np.isnan(values)))
    return "logarithm" if positive and name.startswith(("knudsen", "density")) else "linear"


def multilinear(axes: Sequence[Floats], values: Floats, where: Sequence[ArrayLike]) -> Floats:
    """Return k quantities between the nodes of a grid of d axes.

    Parameters
    ----------
    axes : sequence of (n_i,) arrays
        Nodes, ascending. An axis of one node answers at that node only.
    values : (k, n_1, ..., n_d) array
    where : sequence of d (...,) array_like

    Returns
    -------
    (k, ...) array
        NaN outside the grid, and where a node that counts is NaN.

    Examples
    --------
    >>> nodes = [np.array([0.0, 1.0]), np.array([0.0, 2.0])]
    >>> multilinear(nodes, np.array([[[0.0, 2.0], [1.0, 3.0]]]), [0.5, [1.0, 2.0, 3.0]])
    array([[1.5, 2.5, nan]])
    """
    wanted = np.broadcast_arrays(*(floats(value) for value in where))
    shape = wanted[0].shape
    index = np.zeros((1, wanted[0].size), dtype=np.intp)
    weight = np.ones((1, wanted[0].size))
    for nodes, given in zip(axes, wanted, strict=True):
        low, share = _place(nodes, given.reshape(-1))
        index = index * nodes.size + low
        if nodes.size == 1:
            weight = weight * (share + 1.0)  # 1, or NaN away from the node
        else:
            index = np.concatenate([index, index + 1])
            weight = np.concatenate([weight * (1.0 - share), weight * share])
    found = values.reshape(values.shape[0], -1)[:, index]
    parts = np.where(weight == 0.0, 0.0, weight * found)
    return floats(parts.sum(axis=1).reshape(values.shape[0], *shape))


def _place(nodes: Floats, given: Floats) -> tuple[np.ndarray, Floats]:
    """Return the lower node of each value's cell and the share of the way to the upper one, NaN outside."""
    slack = SLACK * max(abs(float(nodes[0])), abs(float(nodes[-1])))
    inside = (given >= nodes[0] - slack) & (given <= nodes[-1] + slack)
    if nodes.size == 1:
        return np.zeros(given.shape, dtype=np.intp), np.where(inside, 0.0, np.nan)
    low = np.clip(np.searchsorted(nodes, given, side="right") - 1, 0, nodes.size - 2)
    share = np.clip((given - nodes[low]) / (nodes[low + 1] - nodes[low]), 0.0, 1.0)
    return low, np.where(inside, share, np.nan)


def centres(axes: Sequence[Floats]) -> list[Floats]:
    """Return the middle of every cell of each axis; an axis of one node keeps it."""
    return [nodes if nodes.size == 1 else 0.5 * (nodes[1:] + nodes[:-1]) for nodes in axes]


def mesh(axes: Sequence[Floats], rows: slice) -> list[Floats]:
    """Return the coordinates of some rows of a grid in long form, the first axis changing slowest.

    Examples
    --------
    >>> mesh([np.array([1.0, 2.0]), np.array([5.0, 6.0])], slice(1, 3))
    [array([1., 2.]), array([6., 5.])]
    """
    numbers = np.arange(rows.start, rows.stop)
    places = np.unravel_index(numbers, tuple(nodes.size for nodes in axes))
    return [nodes[place] for nodes, place in zip(axes, places, strict=True)]


def face_pairs(axes: Sequence[Floats], cell: Sequence[int]) -> list[tuple[int, Floats]]:
    """Return, for each axis with cells, its number and the middles of the two faces across it (2, d)."""
    middle = [float(nodes[i]) for nodes, i in zip(centres(axes), cell, strict=True)]
    found = []
    for number in itertools.compress(range(len(axes)), [nodes.size > 1 for nodes in axes]):
        pair = np.array([middle, middle])
        pair[:, number] = axes[number][cell[number] : cell[number] + 2]
        found.append((number, pair))
    return found
