"""Molecules between a free stream and a surface: who strikes, how they leave, and where they go next.

Velocities are over sqrt(2kT/m) of the free stream, energies over kT of it times two (a speed squared).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.special import erfc

from aero.arrays import ArrayLike, Floats, floats
from aero.force.elements import SQRT_PI
from aero.force.ray_tree import Indices, RayTree, first_hit

MOST_HITS = 1000  # a molecule that has not left by then counts as trapped


@dataclass(frozen=True, eq=False)
class Walls:
    """The surface at each triangle.

    Attributes
    ----------
    normals : (n, 3) array
        Outward unit normals.
    wall_ratio : (n,) array
        T_w/T.
    energy_accommodation, diffuse_fraction : (n,) array
        Of Maxwell's model.
    """

    normals: Floats
    wall_ratio: Floats
    energy_accommodation: Floats
    diffuse_fraction: Floats


@dataclass(frozen=True, eq=False)
class Paths:
    """Where molecules ended.

    Attributes
    ----------
    position, velocity : (n, 3) array
        At the last hit, and on leaving it.
    hits : (n,) array of int
        Surfaces met after the start.
    momentum : (n, 3) array
        Velocity given up at those.
    torque : (n, 3) array
        Moment of that about the point asked for.
    trapped : (n,) array of bool
        Whether `MOST_HITS` ended the path.
    """

    position: Floats
    velocity: Floats
    hits: Indices
    momentum: Floats
    torque: Floats
    trapped: np.ndarray


def striking_speed(normal_speed_ratio: ArrayLike, share: ArrayLike) -> Floats:
    """Return the normal speed of molecules that strike an element, from a share of 0 to 1 that are faster.

    Parameters
    ----------
    normal_speed_ratio : (n,) array
        s = S cos(theta).
    share : (n,) array
        Uniform random numbers for a random molecule.

    Notes
    -----
    Inverts int_xi^inf x exp(-(x-s)^2) dx = exp(-(xi-s)^2)/2 + sqrt(pi) s erfc(xi-s)/2 by halving. Written
    for elements that are met at all: below s = -5 rounding shows.

    Examples
    --------
    >>> bool(abs(striking_speed(0.0, np.exp(-1.0)) - 1.0) < 1e-9)  # at rest xi^2 falls off exponentially
    True
    """
    s, wanted = np.broadcast_arrays(floats(normal_speed_ratio), floats(share))

    def faster(speed: Floats) -> Floats:
        distance = speed - s
        return floats(0.5 * np.exp(-distance * distance) + 0.5 * SQRT_PI * s * erfc(distance))

    target = wanted * faster(np.zeros(s.shape))
    low, high = np.zeros(s.shape), np.maximum(s, 0.0) + 7.0
    for _ in range(46):  # 7 / 2^46: 1e-13
        middle = 0.5 * (low + high)
        above = faster(middle) > target
        low, high = np.where(above, middle, low), np.where(above, high, middle)
    return floats(0.5 * (low + high))


def tangents(normals: Floats) -> tuple[Floats, Floats]:
    """Return two unit vectors along each surface, across each other.

    Examples
    --------
    >>> one, two = tangents(np.array([[0.0, 0.0, 1.0]]))
    >>> bool(np.allclose(np.cross(one, two), [[0.0, 0.0, 1.0]]))
    True
    """
    axis = np.where(np.abs(normals[:, :1]) < 0.6, [[1.0, 0.0, 0.0]], [[0.0, 1.0, 0.0]])
    first = np.cross(axis, normals)
    first /= np.sqrt((first * first).sum(axis=1, keepdims=True))
    return first, np.cross(normals, first)


def leave(
    velocity: Floats,
    triangle: Indices,
    walls: Walls,
    random: np.random.Generator,
    energy: Floats | None = None,
) -> Floats:
    """Return the velocities with which molecules leave the triangles they strike.

    Parameters
    ----------
    velocity : (n, 3) array
        On arrival.
    triangle : (n,) array of int
    walls : Walls
    random : numpy Generator
    energy : (n,) array, optional
        Mean speed squared of those that strike, for the re-emission temperature; default each one's own.

    Notes
    -----
    A share sigma leaves diffusely by the cosine law with 2 k T_e = (1 - alpha) E_i + alpha 2 k T_w, the rest
    like light from a mirror [Maxwell1879].
    """
    normals = walls.normals[triangle]
    into = (velocity * normals).sum(axis=1, keepdims=True)
    mirrored = velocity - 2.0 * into * normals
    arriving = (velocity * velocity).sum(axis=1) if energy is None else energy
    alpha = walls.energy_accommodation[triangle]
    emission = (1.0 - alpha) * 0.5 * arriving + alpha * walls.wall_ratio[triangle]
    count = len(triangle)
    outward = np.sqrt(-np.log1p(-random.random(count)))
    first, second = tangents(normals)
    along = random.normal(scale=np.sqrt(0.5), size=(2, count, 1))
    thrown = outward[:, None] * normals + along[0] * first + along[1] * second
    diffuse = random.random(count) < walls.diffuse_fraction[triangle]
    return floats(np.where(diffuse[:, None], np.sqrt(emission)[:, None] * thrown, mirrored))


def follow(
    tree: RayTree,
    walls: Walls,
    position: Floats,
    velocity: Floats,
    random: np.random.Generator,
    about: ArrayLike = (0.0, 0.0, 0.0),
) -> Paths:
    """Follow molecules through every surface they meet until they fly off.

    Parameters
    ----------
    tree : RayTree
    walls : Walls
        In the order of the triangles the tree was built from.
    position, velocity : (n, 3) array
    random : numpy Generator
    about : (3,) array, optional [m]
        Point that torque is taken about.

    Returns
    -------
    Paths
    """
    position, velocity = position.copy(), velocity.copy()
    hits = np.zeros(len(position), dtype=np.intp)
    momentum, torque = np.zeros_like(position), np.zeros_like(position)
    point = floats(about)
    flying = np.arange(len(position))
    for _ in range(MOST_HITS):
        triangle, distance = first_hit(tree, position[flying], velocity[flying])
        met = triangle >= 0
        flying, triangle, distance = flying[met], triangle[met], distance[met]
        if not flying.size:
            break
        position[flying] += distance[:, None] * velocity[flying]
        after = leave(velocity[flying], triangle, walls, random)
        given = velocity[flying] - after
        momentum[flying] += given
        torque[flying] += np.cross(position[flying] - point, given)
        velocity[flying] = after
        hits[flying] += 1
    trapped = np.zeros(len(position), dtype=bool)
    trapped[flying] = True
    return Paths(position, velocity, hits, momentum, torque, trapped)
