"""Sums over a vehicle's surface elements, for one direction of the flow.

Force and moment of an element are its area times functions of the speed ratio S and the cosine c between its
normal and the flow. What gas, wall and accommodation do comes afterwards, so what is summed here serves every
point at that attitude. A bridge that depends on the element's incidence splits each sum into a few modes:
Lagrange polynomials of the cosine at `MODE_COSINES`, whose sum is the plain sum.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from scipy.special import erfc

from aero.arrays import Floats, floats
from aero.force.elements import SQRT_PI
from aero.force.newtonian import LEE_FULL
from aero.force.speed_table import COSINES, gathered

MODES = 5
MODE_COSINES = 0.5 - 0.5 * np.cos((np.arange(MODES) + 0.5) * np.pi / MODES)  # Chebyshev points of 0 to 1
CHUNK = 200_000  # speed ratios times elements worked on at once, to stay in the cache
FEW = 16  # speed ratios up to which gathering many elements on a grid of cosines does not pay
FAST = 6.0  # normal speed ratio beyond which erf is 1 to the last digit


class Patch(NamedTuple):
    """Elements of one part.

    Attributes
    ----------
    normals : (n, 3) array
    areas : (n,) array [m2]
    arms : (n, 3) array
        From the moment point, over the moment length.
    """

    normals: Floats
    areas: Floats
    arms: Floats


class FreeSums(NamedTuple):
    """Free-molecular sums at k speed ratios [m2], six components (force, moment) and m modes.

    Attributes
    ----------
    normal, tangential : (k, 6, m) array
        Incident momentum along the normals and along the surface, as forces.
    leaving : (q, k, 6, m) array
        Momentum of molecules that leave: for Maxwell at T_e = T (q = 1), or at each wall ratio asked for.
    excess : (k,) array
        Mean translational energy of the molecules that strike the part over kT, less S^2.
    """

    normal: Floats
    tangential: Floats
    leaving: Floats
    excess: Floats


class NewtonianSums(NamedTuple):
    """Newtonian sums [m2] and the projected area.

    Attributes
    ----------
    windward, lee : (6, m) array
        Times the pressure coefficients of stagnation point and base.
    projected : float [m2]
    """

    windward: Floats
    lee: Floats
    projected: float


def mode_weights(cosines: Floats, modes: int) -> Floats:
    """Return the weights (m, n) of elements in the modes; one mode takes all.

    Examples
    --------
    >>> float(mode_weights(np.array([0.37]), MODES).sum().round(12))
    1.0
    """
    if modes == 1:
        return np.ones((1, cosines.size))
    place = np.clip(cosines, 0.0, 1.0)
    return lagrange(MODE_COSINES, place)


def lagrange(nodes: Floats, place: Floats) -> Floats:
    """Return the Lagrange polynomials of nodes (m,) at places (...,), shape (m, ...).

    Examples
    --------
    >>> lagrange(np.array([0.0, 1.0]), np.array(0.25))
    array([0.75, 0.25])
    """
    weights = []
    for index, node in enumerate(nodes):
        others = np.delete(nodes, index)
        weight = np.ones_like(place)
        for other in others:
            weight = weight * ((place - other) / (node - other))
        weights.append(weight)
    return np.stack(weights)


def newtonian_sums(patch: Patch, direction: Floats, share: Floats, modes: int) -> NewtonianSums:
    """Return the Newtonian sums of a patch; what of a face lies in another's shadow takes base pressure.

    Parameters
    ----------
    patch : Patch
    direction : (3,) array
        Where the flow comes from.
    share : (n,) array
        Part of each element that the flow reaches.
    modes : int
    """
    c = patch.normals @ direction
    windward = c > 0.0
    lit = np.where(windward, share, 0.0)
    base = np.where(windward, 1.0 - share, np.minimum(1.0, (c / LEE_FULL) ** 2))
    vectors = _vectors(patch)
    weights = mode_weights(c, modes) * patch.areas
    total = [np.einsum("e,me,re->rm", kind, weights, vectors) for kind in (lit * c * c, base)]
    return NewtonianSums(-total[0], -total[1], float((lit * c * patch.areas).sum()))


def free_sums(
    patch: Patch,
    direction: Floats,
    share: Floats,
    log_ratio: Floats,
    modes: int,
    leaving: Callable[[Floats, Floats], Floats],
) -> FreeSums:
    """Return the free-molecular sums of a patch at speed ratios.

    Parameters
    ----------
    patch : Patch
    direction : (3,) array
    share : (n,) array
        Part of each element that molecules reach.
    log_ratio : (k,) array
        ln S.
    modes : int
    leaving : callable
        Number function and normal speed ratio (...,) -> momentum of leaving molecules over rho R T (q, ...).

    Notes
    -----
    With n, t the normal and the tangential u - c n (lengths as they are), m and N of
    `aero.force.elements.incident`: normal -n m/S^2, tangential -t N/(sqrt(pi) S), leaving -n l/S^2; their
    moments by the cross product with the arm, exact for a pressure that is even over each element.
    """
    c = patch.normals @ direction
    area = patch.areas * share
    basis = mode_weights(c, modes)
    vectors = _vectors(patch)
    turned = np.cross(patch.arms, direction)
    flow = np.concatenate([np.broadcast_to(direction[:, None], turned.T.shape), turned.T])
    weighted = np.stack([-vectors, c * vectors - flow]) * area  # (2, 6, n)
    across, along = ((part[:, None, :] * basis).reshape(-1, c.size) for part in weighted)  # (6 m, n) each
    S = np.exp(log_ratio)
    if c.size > 2 * COSINES and S.size > FEW:
        c, gathered_rows = gathered(c, np.concatenate([across, along, area[None]]))
        across, along, area = np.split(gathered_rows, [len(across), 2 * len(across)])
        area = area[0]
    rows: list[tuple[Floats, ...]] = []
    for part in _chunks(S.size, max(1, c.size)):
        normal_speed = np.multiply.outer(S[part], c)
        momentum, number, drift = fast_incident(normal_speed)
        rows.append(
            (
                _total(momentum, across),
                _total(number, along),
                np.stack([_total(one, across) for one in leaving(number, normal_speed)]),
                np.einsum("ke,e->k", number, area),
                np.einsum("ke,e->k", drift, area),
            )
        )
    momentum, number, gone = (
        np.concatenate([row[i] for row in rows], axis=axis) for i, axis in ((0, 0), (1, 0), (2, 1))
    )
    count, drift = (np.concatenate([row[i] for row in rows]) for i in (3, 4))
    square, shear = (S * S)[:, None, None], (SQRT_PI * S)[:, None, None]
    shape = (S.size, 6, modes)
    struck = count > 0.0  # nothing strikes a part that lies wholly in the shadow
    excess = 2.0 + 0.5 * np.where(struck, drift, 0.0) / np.where(struck, count, 1.0)
    return FreeSums(
        momentum.reshape(shape) / square,
        number.reshape(shape) / shear,
        gone.reshape(-1, *shape) / square,
        excess,
    )


def _vectors(patch: Patch) -> Floats:
    """Return normals and their moments, (6, n)."""
    return np.concatenate([patch.normals.T, np.cross(patch.arms, patch.normals).T])


def _total(values: Floats, weights: Floats) -> Floats:
    return floats(np.einsum("ke,re->kr", values, weights))  # einsum: no threads, the same sum everywhere


def _chunks(rows: int, columns: int) -> list[slice]:
    step = max(1, CHUNK // columns)
    return [slice(start, min(start + step, rows)) for start in range(0, rows, step)]


def fast_incident(s: Floats) -> tuple[Floats, Floats, Floats]:
    """Return what `aero.force.elements.incident` does, with limits instead of erf beyond |s| = 6.

    Examples
    --------
    >>> momentum, number, drift = fast_incident(np.array([-7.0, 0.0, 7.0]))
    >>> momentum.tolist(), number[1:].round(3).tolist()
    ([0.0, 0.5, 99.0], [1.0, 24.814])
    """
    square = s * s
    one_plus = np.where(s > 0.0, 2.0, 0.0)
    gauss = np.zeros_like(s)
    near = np.flatnonzero(np.abs(s.reshape(-1)) < FAST)
    flat = s.reshape(-1)[near]
    one_plus.reshape(-1)[near] = erfc(-flat)
    gauss.reshape(-1)[near] = np.exp(-flat * flat)
    drift = SQRT_PI * s * one_plus
    return s * gauss / SQRT_PI + (square + 0.5) * one_plus, gauss + drift, drift
