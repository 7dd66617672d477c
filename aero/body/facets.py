"""A body seen by the flow: flat panels for anyone, and facets that carry a quadrature over its surface.

Body axes: x forward (towards the oncoming flow at zero angle of attack), y right, z down. The angle of
attack turns the body in the x-z plane: the flow arrives from (cos a, 0, sin a), lift acts along
(sin a, 0, -cos a).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from aero.arrays import Floats, floats

AZIMUTHS = 360  # around half a circle; 1e-6 of a cone's free-molecular drag up to a speed ratio of 100
COLATITUDES = 40  # Gauss points along each part of a sphere
SLIVER = 1e-13  # of the largest triangle's area: rounding, not surface
TERMINATOR = 0.1  # rad; the flux bends within about 1/S of grazing incidence, so parts end this far from it


@dataclass(frozen=True, eq=False)
class Panels:
    """Flat panels of a closed or open surface.

    Attributes
    ----------
    normals : (n, 3) array
        Outward unit normals in body axes.
    areas : (n,) array [m2]
    centroids : (n, 3) array [m]
    vertices : (n, 3, 3) array [m] or None
        Corners of each panel where all are triangles.
    quads : (n, 4, 3) array [m] or None
        Corners of each panel where all have four sides.
    """

    normals: Floats
    areas: Floats
    centroids: Floats
    vertices: Floats | None = None
    quads: Floats | None = None

    def triangles(self) -> Panels:
        """Return the same surface in triangles, with their vertices: each four-sided panel becomes two.

        Raises
        ------
        ValueError
            If the panels carry no corners.

        Examples
        --------
        >>> edge = np.eye(3)
        >>> square = rectangles(np.zeros((1, 3)), edge[:1], edge[1:2], 1)
        >>> square.areas, square.triangles().areas
        (array([1.]), array([0.5, 0.5]))
        """
        if self.vertices is not None:
            return self
        if self.quads is None:
            raise ValueError("the panels carry no corners")
        return of_triangles(self.quads[:, [[0, 1, 2], [0, 2, 3]]].reshape(-1, 3, 3))

    def facets(self, angle_of_attack: float) -> Facets:
        """Return the panels as the flow at an angle of attack [rad] sees them."""
        cosines, lifts = project(self.normals, np.float64(angle_of_attack))
        return Facets(cosines, self.areas, self.areas * lifts)


@dataclass(frozen=True, eq=False)
class Facets:
    """Surface elements as seen from one flow direction.

    Attributes
    ----------
    cosines : (n,) array
        Cosine between the outward normal and the direction the flow comes from; 1 faces the flow.
    areas : (n,) array [m2]
    lift_areas : (n,) array [m2]
        Area times the component of the outward normal along the lift direction.
    """

    cosines: Floats
    areas: Floats
    lift_areas: Floats


def project(normals: Floats, angle_of_attack: Floats | np.float64) -> tuple[Floats, Floats]:
    """Return the components of normals towards the flow and along lift, shape (..., n).

    Parameters
    ----------
    normals : (n, 3) array
    angle_of_attack : (...,) array [rad]

    Examples
    --------
    >>> towards, along = project(np.array([[1.0, 0.0, 0.0]]), np.float64(0.0))
    >>> float(towards[0]), float(along[0])
    (1.0, 0.0)
    """
    angle = np.asarray(angle_of_attack, dtype=np.float64)[..., None]
    cosine, sine = np.cos(angle), np.sin(angle)
    return normals[:, 0] * cosine + normals[:, 2] * sine, normals[:, 0] * sine - normals[:, 2] * cosine


def join(*parts: Facets) -> Facets:
    """Return the facets of several parts as one set."""
    return Facets(
        np.concatenate([part.cosines for part in parts]),
        np.concatenate([part.areas for part in parts]),
        np.concatenate([part.lift_areas for part in parts]),
    )


def flat(normal: tuple[float, float, float], area: float, angle_of_attack: float) -> Facets:
    """Return one flat face."""
    cosines, lifts = project(np.array([normal]), np.float64(angle_of_attack))
    return Facets(cosines, np.array([area]), area * lifts)


def cone_ring(half_angle: float, area: float, angle_of_attack: float) -> Facets:
    """Return a conical surface: midpoint rule around half of it, which converges faster than any power.

    At zero (and half-turn) angle of attack all azimuths see the same flow and one facet is exact.
    """
    if np.sin(angle_of_attack) == 0.0:
        return flat((np.sin(half_angle), 0.0, 0.0), area, angle_of_attack)
    turn = (np.arange(AZIMUTHS) + 0.5) * np.pi / AZIMUTHS
    along, across = np.sin(half_angle), np.cos(half_angle) * np.cos(turn)
    cosine, sine = np.cos(angle_of_attack), np.sin(angle_of_attack)
    areas = np.full(AZIMUTHS, area / AZIMUTHS)
    return Facets(along * cosine + across * sine, areas, areas * (along * sine - across * cosine))


def sphere_cap(radius: float, edge: float, angle_of_attack: float) -> Facets:
    """Return a spherical cap around the x axis up to colatitude `edge` [rad].

    Notes
    -----
    On a sphere the flow sees only the angle from its own direction, so the cap reduces to one integral
    over that angle, weighted with the azimuth that lies inside the cap (and with its sine for lift).
    """
    tilt = abs((angle_of_attack + np.pi) % (2.0 * np.pi) - np.pi)
    side = 1.0 if np.sin(angle_of_attack) >= 0.0 else -1.0
    parts = []
    inner, outer = abs(tilt - edge), min(tilt + edge, 2.0 * np.pi - tilt - edge)
    if tilt < edge:
        parts.append(_band(0.0, inner, radius))
    if tilt + edge > np.pi:
        parts.append(_band(outer, np.pi, radius))
    if outer - inner > 1e-12:
        parts.append(_lens(inner, outer, tilt, edge, radius, side))
    return join(*parts)


def sphere_whole(radius: float) -> Facets:
    """Return a whole sphere, split where shadow and base pressure set in."""
    return join(*(_band(low, low + np.pi / 6.0, radius) for low in np.arange(6) * np.pi / 6.0))


def cylinder_mantle(radius: float, length: float) -> Facets:
    """Return the mantle of a cylinder across the flow."""
    angle, weight = _rule(floats(np.arange(7) * np.pi / 6.0))
    areas = weight * 2.0 * radius * length
    return Facets(np.cos(angle), areas, np.zeros_like(areas))


@lru_cache(maxsize=8)
def _gauss(count: int) -> tuple[Floats, Floats]:
    """Return Gauss-Legendre nodes and weights on [-1, 1]."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    return floats(nodes), floats(weights)


def _parts(low: float, high: float) -> Floats:
    """Return the ends of the parts of a range of colatitudes [rad]."""
    inside = [edge for edge in np.pi / 2.0 + TERMINATOR * np.array([-1.0, 0.0, 1.0]) if low < edge < high]
    return np.array([low, *inside, high])


def _rule(ends: Floats) -> tuple[Floats, Floats]:
    """Return nodes and weights of Gauss's rule on each part."""
    nodes, weights = _gauss(COLATITUDES)
    half = np.diff(ends)[:, None] / 2.0
    return (ends[:-1, None] + half * (nodes + 1.0)).ravel(), (half * weights).ravel()


def _band(low: float, high: float, radius: float) -> Facets:
    angle, weight = _rule(_parts(low, high))
    areas = weight * 2.0 * np.pi * radius**2 * np.sin(angle)
    return Facets(np.cos(angle), areas, np.zeros_like(areas))


def _lens(low: float, high: float, tilt: float, edge: float, radius: float, side: float) -> Facets:
    middle, half = (low + high) / 2.0, (high - low) / 2.0
    # colatitude = middle - half cos(sweep) lifts the square roots at both ends
    sweep, weight = _rule(np.arccos(np.clip((middle - _parts(low, high)) / half, -1.0, 1.0)))
    angle = middle - half * np.cos(sweep)
    step = weight * half * np.sin(sweep) * np.sin(angle) * radius**2
    inside = (np.cos(edge) - np.cos(tilt) * np.cos(angle)) / (np.sin(tilt) * np.sin(angle))
    azimuth = np.arccos(np.clip(inside, -1.0, 1.0))
    return Facets(np.cos(angle), 2.0 * azimuth * step, side * 2.0 * np.sin(azimuth) * np.sin(angle) * step)


def revolve(along: Floats, radii: Floats, around: int) -> Panels:
    """Return a body of revolution as flat four-sided panels (an inscribed closed polyhedron).

    Parameters
    ----------
    along, radii : (k,) arrays [m]
        Generator from the nose (largest x) to the base.
    around : int
        Panels around.
    """
    turn = np.arange(around + 1) * 2.0 * np.pi / around
    ring = np.stack([np.zeros_like(turn), np.sin(turn), np.cos(turn)], axis=-1)
    points = radii[:, None, None] * ring + along[:, None, None] * np.array([1.0, 0.0, 0.0])
    a, b = points[:-1, :-1], points[1:, :-1]
    c, d = points[1:, 1:], points[:-1, 1:]
    return _of_quads(np.stack([a, d, c, b], axis=-2).reshape(-1, 4, 3))


def rectangles(corner: Floats, first: Floats, second: Floats, split: int) -> Panels:
    """Return rectangles, each cut into `split` by `split` panels; the normal is first x second.

    Parameters
    ----------
    corner, first, second : (n, 3) arrays [m]
        One corner and the two edges from it.
    """
    step = np.arange(split) / split
    u, v = (grid.reshape(-1, 1, 1) for grid in np.meshgrid(step, step, indexing="ij"))
    a = corner + u * first + v * second
    quads = np.stack([a, a + first / split, a + (first + second) / split, a + second / split], axis=-2)
    return _of_quads(quads.reshape(-1, 4, 3))


def of_triangles(vertices: Floats) -> Panels:
    """Return triangles (n, 3, 3) [m] as panels; their corners turn counter-clockwise seen from outside.

    Triangles without an area are left out: a four-sided panel at a pole has one.
    """
    vectors = 0.5 * np.cross(vertices[:, 1] - vertices[:, 0], vertices[:, 2] - vertices[:, 0])
    areas = np.sqrt((vectors * vectors).sum(axis=1))
    keep = areas > SLIVER * areas.max(initial=0.0)
    kept = vertices[keep]
    return Panels(vectors[keep] / areas[keep, None], areas[keep], kept.mean(axis=1), kept)


def _of_quads(quads: Floats) -> Panels:
    vectors = 0.5 * np.cross(quads[:, 2] - quads[:, 0], quads[:, 3] - quads[:, 1])
    areas = np.sqrt((vectors * vectors).sum(axis=1))
    keep = areas > 0.0
    halves = [0.5 * np.cross(quads[:, i] - quads[:, 0], quads[:, i + 1] - quads[:, 0]) for i in (1, 2)]
    sizes = [np.sqrt((half * half).sum(axis=1)) for half in halves]
    middles = [(quads[:, 0] + quads[:, i] + quads[:, i + 1]) / 3.0 for i in (1, 2)]
    weight = np.where(keep, sizes[0] + sizes[1], 1.0)[:, None]
    centroids = (sizes[0][:, None] * middles[0] + sizes[1][:, None] * middles[1]) / weight
    return Panels(vectors[keep] / areas[keep, None], areas[keep], centroids[keep], quads=quads[keep])
