"""A body given by its triangles, as a modelling program writes them."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from functools import cached_property
from typing import ClassVar

import numpy as np

from aero.arrays import Floats, readonly
from aero.body import triangles
from aero.body.facets import Facets, Panels, of_triangles, project
from aero.body.shadow import flow_share
from aero.body.shape import BODY_CLASSES, Shape

MESH_CLASS = "box"  # widest default bridging and continuum band: nothing is known of the body, judgement


def towards(angle_of_attack: float) -> Floats:
    """Return the unit vector (3,) in body axes that the flow comes from at an angle of attack [rad].

    Examples
    --------
    >>> towards(0.0)
    array([1., 0., 0.])
    """
    return np.array([math.cos(angle_of_attack), 0.0, math.sin(angle_of_attack)])


def seen_by_flow(panels: Panels, angle_of_attack: float, *, shadows: bool) -> Facets:
    """Return panels as the flow at an angle of attack [rad] sees them, without what others stand before.

    Parameters
    ----------
    panels : Panels
        With vertices where there are shadows.
    angle_of_attack : float [rad]
    shadows : bool
        Whether elements behind others get no flow. Elements that face away keep all of theirs: only the
        molecules' thermal motion reaches them.
    """
    cosines, lifts = project(panels.normals, np.float64(angle_of_attack))
    areas = panels.areas
    if shadows and panels.vertices is not None:
        areas = areas * flow_share(panels.normals, panels.vertices, towards(angle_of_attack))
    return Facets(cosines, areas, areas * lifts)


@dataclass(frozen=True, eq=False)
class Mesh(Shape):
    """A closed surface of triangles, in body axes: x forward, y right, z down.

    Attributes
    ----------
    vertices : (n, 3, 3) array [m]
        Corners of each triangle, counter-clockwise seen from outside.
    digest : str
        SHA-256 of what it was read from; two meshes are equal if their digests and choices are.
    nose_radius : float or None [m]
        None: no rounded nose is known.
    stated_class : str or None
        Body class that picks default bridging and band; None is the widest.
    shadows : bool
        Whether elements behind others get no flow.
    source : str
        File name.

    Raises
    ------
    ValueError
        If the class is unknown, the nose radius not positive, or the surface has no triangles.

    Notes
    -----
    `aero.body.read_mesh` reads files and checks them; this takes any triangles.

    Examples
    --------
    >>> from aero.body.round_bodies import Sphere
    >>> ball = Mesh.of(Sphere(diameter=1.0).panels(2000).triangles())
    >>> round(ball.frontal_area, 2), round(ball.length_across, 2), ball.convex
    (0.78, 1.0, True)
    """

    kind: ClassVar[str] = "mesh"
    mirrored: ClassVar[bool] = False
    vertices: Floats
    digest: str
    nose_radius: float | None = None
    stated_class: str | None = None
    shadows: bool = True
    source: str = ""
    _panels: Panels = field(init=False, repr=False)

    def __post_init__(self) -> None:
        if self.vertices.ndim != 3 or self.vertices.shape[1:] != (3, 3) or not self.vertices.size:
            raise ValueError(f"vertices have the shape {self.vertices.shape}, expected (n, 3, 3)")
        if self.nose_radius is not None and not 0.0 < self.nose_radius < math.inf:
            raise ValueError(f"nose_radius is {self.nose_radius:g}, expected a positive number")
        if self.stated_class is not None and self.stated_class not in BODY_CLASSES:
            raise ValueError(
                f"body_class is '{self.stated_class}', expected one of: {', '.join(BODY_CLASSES)}"
            )
        object.__setattr__(self, "vertices", readonly(self.vertices))
        object.__setattr__(self, "_panels", of_triangles(self.vertices))

    @classmethod
    def of(cls, panels: Panels, *, nose_radius: float | None = None, body_class: str | None = None) -> Mesh:
        """Return a mesh of the triangles of panels."""
        import hashlib

        vertices = panels.triangles().vertices
        assert vertices is not None
        digest = hashlib.sha256(np.ascontiguousarray(vertices).tobytes()).hexdigest()
        return cls(vertices, digest, nose_radius, body_class)

    def _key(self) -> tuple[object, ...]:
        # the extent tells the same file in another unit apart
        return self.digest, self.nose_radius, self.stated_class, self.shadows, self.extent

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Mesh) and self._key() == other._key()

    def __hash__(self) -> int:
        return hash(self._key())

    def __repr__(self) -> str:
        return f"Mesh({self.source or self.digest[:10]}, {len(self.vertices)} triangles)"

    def __len__(self) -> int:
        return len(self.vertices)

    @property
    def body_class(self) -> str:
        """As stated, else the one with the widest band."""
        return self.stated_class or MESH_CLASS

    @cached_property
    def extent(self) -> tuple[float, float, float]:
        """Length along x, y and z [m]."""
        corners = self.vertices.reshape(-1, 3)
        x, y, z = corners.max(axis=0) - corners.min(axis=0)
        return float(x), float(y), float(z)

    @property
    def length_across(self) -> float:
        """Longer side across x [m]."""
        return max(self.extent[1:])

    @cached_property
    def convex(self) -> bool:
        """Whether no element can stand before another."""
        points, faces = triangles.merged(self.vertices)
        found = triangles.edges(faces)
        if found.open_count or found.torn:
            return False
        corners = self.vertices
        vectors = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        normals = vectors / np.maximum(np.sqrt((vectors * vectors).sum(axis=1)), 1e-300)[:, None]
        one_piece = triangles.volumes(points, faces, found.neighbours).size == 1
        return one_piece and triangles.convex(points, faces, normals)

    @cached_property
    def frontal_area(self) -> float:
        """Area of the silhouette along x [m2], hidden elements left out."""
        seen = seen_by_flow(self._panels, 0.0, shadows=not self.convex)
        return float((np.maximum(seen.cosines, 0.0) * seen.areas).sum())

    def panels(self, count: int = 0) -> Panels:  # noqa: ARG002
        """Return the triangles, whatever the count."""
        return self._panels

    def facets(self, angle_of_attack: float) -> Facets:
        """See `Shape`; elements behind others get no flow unless shadows are off."""
        return seen_by_flow(self._panels, angle_of_attack, shadows=self.shadows and not self.convex)
