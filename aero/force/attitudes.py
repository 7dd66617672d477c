"""Which attitudes a set of points needs: each its own, or a grid of them with interpolation between."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.force.speed_table import angle_weights

STEP = np.radians(1.0)  # of the grid, cubic between its nodes
FEW = 16  # attitudes that are each computed on their own whatever the grid would cost
CHECKS = 5  # points at which interpolation is compared with the sums themselves
MOST = 600  # nodes of a grid; 30 MB of tables a part


class Attitudes(NamedTuple):
    """Attitudes to compute and how points are made up of them.

    Attributes
    ----------
    nodes : (d, 2) array [rad]
        Angle of attack and sideslip.
    point : (w, n) int array
        Nodes of each point.
    weights : (w, n) array
        NaN where an angle is not finite.
    """

    nodes: Floats
    point: np.ndarray
    weights: Floats

    @property
    def interpolated(self) -> bool:
        """Whether points lie between the attitudes."""
        return len(self.point) > 1

    def checks(self) -> list[tuple[int, tuple[float, float]]]:
        """Return a few points spread over the range, with their attitudes, to check interpolation at."""
        usable = np.flatnonzero(np.isfinite(self.weights).all(axis=0))
        if not usable.size:
            return []
        found = []
        for point in usable[np.linspace(0, usable.size - 1, CHECKS).astype(int)].tolist():
            a, b = self.weights[:, point] @ self.nodes[self.point[:, point]]  # exact: the weights hold lines
            found.append((point, (float(a), float(b))))
        return found


def attitudes(angle_of_attack: ArrayLike, sideslip: ArrayLike) -> Attitudes:
    """Return the attitudes to compute for points (n,).

    Notes
    -----
    Up to 16 different ones are computed each. More are interpolated on a grid of one degree, four points in
    each angle that varies, where the grid has fewer nodes than there are attitudes.

    Examples
    --------
    >>> found = attitudes(np.linspace(0.0, 0.1, 1000), 0.0)
    >>> found.interpolated, len(found.nodes), round(float(found.weights.sum(axis=0).max()), 12)
    (True, 9, 1.0)
    """
    a, b = np.broadcast_arrays(floats(angle_of_attack), floats(sideslip))
    unknown = ~(np.isfinite(a) & np.isfinite(b))
    pair = np.stack([np.where(unknown, 0.0, a), np.where(unknown, 0.0, b)], axis=-1).reshape(-1, 2)
    nodes, place = np.unique(pair, axis=0, return_inverse=True)
    hole = np.where(unknown.reshape(-1), np.nan, 1.0)
    own = Attitudes(nodes, place.reshape(1, -1), hole[None])
    if len(nodes) <= FEW:
        return own
    grid = _grid(pair, hole)
    return grid if len(grid.nodes) < min(len(nodes), MOST) else own


def _grid(pair: Floats, hole: Floats) -> Attitudes:
    corners, weights = [np.zeros((1, len(pair), 2))], [np.ones((1, len(pair)))]
    for axis in range(2):
        values = pair[:, axis]
        shift = np.zeros((1, len(pair), 2))
        if (values == values[0]).all():
            shift[..., axis] = values[0]
            weight = np.ones((1, len(pair)))
        else:
            cell = np.floor(values / STEP)
            weight = angle_weights(values / STEP - cell)
            shift = np.repeat(shift, 4, axis=0)
            shift[..., axis] = (cell + np.arange(-1.0, 3.0)[:, None]) * STEP
        corners = [(corners[0][:, None] + shift[None]).reshape(-1, len(pair), 2)]
        weights = [(weights[0][:, None] * weight[None]).reshape(-1, len(pair))]
    keys = np.rint(corners[0].reshape(-1, 2) * (1e6 / STEP)).astype(np.int64)  # the same node, the same key
    _, first, index = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    nodes = corners[0].reshape(-1, 2)[first]
    return Attitudes(nodes, index.reshape(len(corners[0]), -1), weights[0] * hole)
