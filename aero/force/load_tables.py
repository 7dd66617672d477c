"""Free-molecular loads of one part at many points: tables in the logarithm of the speed ratio, or direct."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import lru_cache
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from aero.arrays import Floats, floats
from aero.force.gas_surface import reflected_momentum
from aero.force.load_sums import FreeSums, free_sums, lagrange
from aero.force.loads import flow_direction
from aero.force.speed_table import STEPS_A_UNIT, cubics, evaluate

if TYPE_CHECKING:
    from aero.body.surface import Surface
    from aero.force.attitudes import Attitudes
    from aero.force.load_body import LoadBody

LOW, HIGH = -7.0, 7.0  # ln S, as in `aero.force.speed_table`
MARGIN = 3  # nodes beyond each end for the slopes
BLOCK = 2048  # points looked up at once
KEPT_TABLES = 640
WALLS = 6  # wall ratios a Cercignani-Lampis-Lord wall is interpolated on: 4e-8 of drag over a factor 6
_FASTEST_AWAY = 6.0


class PartGas(NamedTuple):
    """The gas at n points as one part meets it, s species.

    Attributes
    ----------
    surface : Surface
    log_ratio : (s, n) array
        ln S.
    square : (s, n) array
        S^2.
    weight : (s, n) array
        Mass fractions.
    wall_ratio, accommodation : (n,) array
        T_w/T and the energy accommodation.
    """

    surface: Surface
    log_ratio: Floats
    square: Floats
    weight: Floats
    wall_ratio: Floats
    accommodation: Floats

    def at(self, who: np.ndarray | slice) -> PartGas:
        """Return the gas at some of the points."""
        return PartGas(
            self.surface, self.log_ratio[:, who], self.square[:, who], self.weight[:, who],
            self.wall_ratio[who], self.accommodation[who],
        )  # fmt: skip


class Rows(NamedTuple):
    """Sums at (s, n): (6, m, s, n), (q, 6, m, s, n) and (s, n)."""

    struck: Floats
    leaving: Floats
    excess: Floats


def free_part(body: LoadBody, part: int, gas: PartGas, near: Attitudes, modes: int) -> tuple[Floats, float]:
    """Return force and moment of a part over dynamic pressure (6, m, n) [m2] and the interpolation error."""
    walls = walls_of(gas)
    if near.interpolated:
        found = _interpolated(body, part, gas, near, modes, walls)
        return found, _check(body, part, gas, near, modes, walls, found)
    order = np.argsort(near.point[0], kind="stable")
    ends = np.searchsorted(near.point[0][order], np.arange(len(near.nodes) + 1))
    total = np.empty((6, modes, gas.wall_ratio.size))
    for node, (a, b) in enumerate(near.nodes):
        who = order[ends[node] : ends[node + 1]]
        some = gas.at(who)
        total[..., who] = _at_attitude(body, part, some, (float(a), float(b)), modes, walls)
    return total * near.weights[0], 0.0


def _at_attitude(
    body: LoadBody, part: int, gas: PartGas, attitude: tuple[float, float], modes: int, walls: Floats
) -> Floats:
    low, high = ends_of(gas.log_ratio)
    if gas.log_ratio.size <= len(table_nodes(low, high)):
        sums = _sums(
            body, part, gas.surface, attitude, np.clip(gas.log_ratio, LOW, HIGH).reshape(-1), modes, walls
        )
        return combine(
            gas, unpack(sums.reshape(len(sums), *gas.log_ratio.shape), 6, modes, len(walls)), walls
        )
    table = _table(body, part, gas.surface, attitude, (low, high), modes, walls)
    return np.concatenate(
        [
            combine(piece, unpack(read(table, low, piece.log_ratio), 6, modes, len(walls)), walls)
            for piece in _pieces(gas)
        ],
        axis=-1,
    )


def _interpolated(
    body: LoadBody, part: int, gas: PartGas, near: Attitudes, modes: int, walls: Floats
) -> Floats:
    low, high = ends_of(gas.log_ratio)
    tables = np.stack(
        [
            _table(body, part, gas.surface, (float(a), float(b)), (low, high), modes, walls)
            for a, b in near.nodes
        ]
    )  # (d, rows, 4, cells)
    cells = tables.shape[-1]
    found = []
    for start in range(0, gas.wall_ratio.size, BLOCK):
        piece = slice(start, min(start + BLOCK, gas.wall_ratio.size))
        some = gas.at(piece)
        cell, fraction = _cell(some.log_ratio, low)
        rows = np.zeros((tables.shape[1], *cell.shape))
        for index, weight in zip(near.point[:, piece], near.weights[:, piece], strict=True):
            for row in range(tables.shape[1]):
                flat = tables[:, row].reshape(-1)
                place = index * (4 * cells) + cell
                value = flat.take(place + 3 * cells)
                for order in (2, 1, 0):
                    value = value * fraction + flat.take(place + order * cells)
                rows[row] += weight * value
        found.append(combine(some, unpack(rows, 6, modes, len(walls)), walls))
    return np.concatenate(found, axis=-1)


def _check(
    body: LoadBody, part: int, gas: PartGas, near: Attitudes, modes: int, walls: Floats, found: Floats
) -> float:
    """Return the largest error over the size of the force at a few points spread over the attitudes."""
    worst = 0.0
    for point, attitude in near.checks():
        one = np.array([point])
        exact = _at_attitude(body, part, gas.at(one), attitude, modes, walls)[..., 0].sum(axis=1)
        size = float(np.sqrt((exact[:3] ** 2).sum()))
        off = float(np.abs(found[..., point].sum(axis=1) - exact)[:3].max())
        worst = max(worst, off / size if size > 0.0 else 0.0)
    return worst


def combine(gas: PartGas, rows: Rows, walls: Floats) -> Floats:
    """Return the species' sum with each one's re-emission temperature or wall ratio."""
    beyond = np.where(gas.log_ratio < LOW, np.exp(LOW - gas.log_ratio), 1.0)  # at rest C grows as 1/S
    beyond[gas.log_ratio > HIGH] = np.nan
    weight = gas.weight * beyond
    if gas.surface.model == "cll":
        leaving = (rows.leaving * _wall_weights(gas.wall_ratio, walls)[:, None, None, None, :]).sum(axis=0)
    else:
        half_energy = 0.5 * (rows.excess + gas.square)
        emission = (1.0 - gas.accommodation) * half_energy + gas.accommodation * gas.wall_ratio
        leaving = rows.leaving[0] * np.sqrt(emission)
    return floats((weight * (rows.struck + leaving)).sum(axis=2))


def _sums(
    body: LoadBody,
    part: int,
    surface: Surface,
    attitude: tuple[float, float],
    log_ratio: Floats,
    modes: int,
    walls: Floats,
) -> Floats:
    """Return the sums of a part with the surface's fractions in them, packed as (rows, k)."""
    direction = flow_direction(*attitude)
    share = body.share(*attitude)[body.members[part]]
    body.newtonian(*attitude, 1)  # made now, while the shadow is at hand
    fastest = float(np.exp(log_ratio.max())) if log_ratio.size else 1.0

    def leaving(number: Floats, normal_speed_ratio: Floats) -> Floats:
        return leaving_momentum(surface, walls, fastest, number, normal_speed_ratio)

    return pack(free_sums(body.patches[part], direction, share, log_ratio, modes, leaving), surface)


def leaving_momentum(
    surface: Surface, walls: Floats, fastest: float, number: Floats, normal_speed_ratio: Floats
) -> Floats:
    """Return the momentum of leaving molecules over rho R T, (q, ...).

    Maxwell's is for diffuse molecules at T_e = T (q = 1); Cercignani, Lampis and Lord's at each wall ratio.
    """
    if surface.model != "cll":
        return number[None] * 0.5
    top = float(np.ceil(fastest))  # rounded, so that one table serves many attitudes
    return _reflected(surface.normal_energy_accommodation, tuple(walls), top)(normal_speed_ratio)


def pack(sums: FreeSums, surface: Surface) -> Floats:
    """Return sums with the surface's fractions in them as rows (rows, k)."""
    sigma = surface.diffuse_fraction
    factors = (2.0 - sigma, sigma, sigma)
    if surface.model == "cll":
        factors = (1.0, surface.tangential_momentum_accommodation, 1.0)
    struck = factors[0] * sums.normal + factors[1] * sums.tangential
    count = len(sums.excess)
    return np.concatenate(
        [
            struck.reshape(count, -1).T,
            *(factors[2] * one.reshape(count, -1).T for one in sums.leaving),
            sums.excess[None],
        ]
    )


def unpack(rows: Floats, components: int, modes: int, walls: int) -> Rows:
    """Return packed rows as sums of a number of components."""
    size, shape = components * modes, rows.shape[1:]
    struck = rows[:size].reshape(components, modes, *shape)
    return Rows(struck, rows[size:-1].reshape(walls, components, modes, *shape), rows[-1])


def _table(
    body: LoadBody,
    part: int,
    surface: Surface,
    attitude: tuple[float, float],
    ends: tuple[int, int],
    modes: int,
    walls: Floats,
) -> Floats:
    """Return the sums as cubics in ln S, (rows, 4, cells), the same ones on every call."""
    key = (part, attitude, ends, modes, walls.tobytes())
    if key not in body.tables:
        if len(body.tables) >= KEPT_TABLES:
            body.tables.clear()
        nodes = table_nodes(*ends)
        body.tables[key] = cubics(_sums(body, part, surface, attitude, nodes, modes, walls))
    return body.tables[key]


def table_nodes(low: int, high: int) -> Floats:
    """Return ln S at the nodes of a table, with those beyond its ends that slopes need."""
    return low + (np.arange((high - low) * STEPS_A_UNIT + 1 + 2 * MARGIN) - MARGIN) / STEPS_A_UNIT


def ends_of(log_ratio: Floats) -> tuple[int, int]:
    """Return whole numbers around ln S of all points, so that blocks of one flight share a table."""
    inside = np.clip(log_ratio, LOW, HIGH)
    low = int(np.floor(inside.min()))
    return low, max(low + 1, int(np.ceil(inside.max())))


def _cell(log_ratio: Floats, low: int) -> tuple[np.ndarray, Floats]:
    place = (np.clip(log_ratio, LOW, HIGH) - low) * STEPS_A_UNIT
    cell = np.maximum(np.ceil(place) - 1.0, 0.0).astype(np.intp)  # the upper end lies in the last cell
    return cell, place - cell


def read(table: Floats, low: int, log_ratio: Floats) -> Floats:
    """Return the rows of a table that begins at `low` at ln S (...,)."""
    cell, fraction = _cell(log_ratio, low)
    return np.stack([evaluate(row, cell, fraction) for row in table])


def _pieces(gas: PartGas) -> Iterator[PartGas]:
    for start in range(0, gas.wall_ratio.size, BLOCK):
        yield gas.at(slice(start, start + BLOCK))


def walls_of(gas: PartGas) -> Floats:
    """Return the wall ratios at which leaving molecules are summed: none in particular for Maxwell."""
    if gas.surface.model != "cll":
        return np.ones(1)
    low, high = np.log(gas.wall_ratio.min()), np.log(gas.wall_ratio.max())
    if high - low < 1e-12:
        return floats(np.exp([low]))
    nodes = 0.5 * (low + high) - 0.5 * (high - low) * np.cos((np.arange(WALLS) + 0.5) * np.pi / WALLS)
    return floats(np.exp(nodes))


def _wall_weights(wall_ratio: Floats, walls: Floats) -> Floats:
    return lagrange(np.log(walls), floats(np.log(wall_ratio)))


@lru_cache(maxsize=64)
def _reflected(normal_energy: float, walls: tuple[float, ...], fastest: float) -> Callable[[Floats], Floats]:
    """Return what gives the leaving momentum of a Cercignani-Lampis-Lord wall at normal speed ratios.

    It is smooth in the normal speed ratio alone: one cubic a wall ratio serves all elements.
    """
    low, high = -_FASTEST_AWAY, fastest + 1.0
    cells = int(np.ceil((high - low) * STEPS_A_UNIT))
    nodes = low + (np.arange(cells + 1 + 2 * MARGIN) - MARGIN) / STEPS_A_UNIT
    tables = cubics(np.stack([reflected_momentum(nodes, wall, normal_energy) for wall in walls]))

    def look_up(s: Floats) -> Floats:
        place = np.clip((s - low) * STEPS_A_UNIT, 0.0, cells)
        cell = np.minimum(place.astype(np.intp), cells - 1)
        fraction = place - cell
        gone = s > low  # nothing strikes a face that flees six times as fast as molecules move
        return np.stack([np.where(gone, evaluate(table, cell, fraction), 0.0) for table in tables])

    return look_up
