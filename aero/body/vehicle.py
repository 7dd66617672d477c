"""What flies: mass, reference quantities, shape or parts, surface, attitude."""

from __future__ import annotations

import math
from dataclasses import dataclass, field, replace
from typing import Any

from aero.body.assembly import Assembly
from aero.body.continuum_table import ContinuumTable
from aero.body.elements import Elements, gather
from aero.body.mesh import Mesh
from aero.body.part import Part, Vector
from aero.body.shapes import Shape
from aero.body.surface import Surface

MAIN_PART = "body"
"""Name of the part that [shape] describes where there are others."""

_OF_FORCE = ("centre", "width", "centre_sigma", "width_sigma", "continuum_sigma", "continuum_above")
BRIDGED: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "drag": (("function", "variable"), _OF_FORCE),
    "lift": (("function", "variable"), _OF_FORCE),
    "heating": ((), ("exponent", "sigma")),
}
"""Coefficient that [bridging] may override -> (keys of text, keys of numbers)."""
PARTIAL = 0.01  # recombination coefficient of a partly catalytic wall where none is stated: glassy coatings, judgement
_WHOLE_MODELS: dict[str, dict[str, Any]] = {
    "maxwell-full": {"energy_accommodation": 1.0, "diffuse_fraction": 1.0},
    "oxygen-coverage": {"energy_accommodation": "oxygen-coverage", "diffuse_fraction": 1.0},
    "specular": {"diffuse_fraction": 0.0},
}
AREA_MISMATCH = 0.1  # relative; reference and frontal area further apart than this earn a note (judgement)


@dataclass(frozen=True, eq=False)
class Vehicle:
    """A vehicle: mass, reference quantities, shape, surface.

    Attributes
    ----------
    name : str
    mass : float [kg]
        NaN when unknown (a shape without a file).
    reference_area : float [m2]
        Area of all coefficients.
    reference_length : float [m]
        Length of the headline Knudsen number.
    lengths : dict of str to float [m]
        Every other length whose regime matters.
    shape : Shape or None
        None leaves the free-molecular and Newtonian coefficients without an answer. With parts, their
        `Assembly`.
    surface : Surface
    angle_of_attack, sideslip, bank : float [rad]
        Where the trajectory states none.
    tumbling : bool
        Whether the vehicle has no fixed attitude: averages over all directions.
    parts : tuple of Part
        Empty for a plain shape.
    shadows : bool
        Whether elements behind others get no flow.
    moment_point : (x, y, z) or None [m]
        Point in body axes that moments are about.
    moment_length : float or None [m]
        Length of the moment coefficients; None is the reference length.
    continuum : ContinuumTable or None
    bridging : dict
        Coefficient -> the keys of `BRIDGED` that the file gives; their meaning belongs to the bridge.
    heating_nose_radius : float or None [m]
        `[heating] nose_radius`, where it is not the shape's.
    effective_nose_radius : bool or float [m]
        Whether heating takes an effective radius instead of the nose's (True: by the rule of the heating
        room; a number: this one).
    source : str
        File name without folder, empty for a shape.
    digest : str
        SHA-256 of the file (and of the coefficient and mesh files it names), empty for a shape.
    """

    name: str
    mass: float
    reference_area: float
    reference_length: float
    lengths: dict[str, float] = field(default_factory=dict)
    shape: Shape | None = None
    surface: Surface = field(default_factory=Surface)
    angle_of_attack: float = 0.0
    sideslip: float = 0.0
    bank: float = 0.0
    tumbling: bool = False
    parts: tuple[Part, ...] = ()
    shadows: bool = True
    moment_point: Vector | None = None
    moment_length: float | None = None
    continuum: ContinuumTable | None = None
    bridging: dict[str, dict[str, Any]] = field(default_factory=dict)
    heating_nose_radius: float | None = None
    effective_nose_radius: bool | float = False
    source: str = ""
    digest: str = ""

    @property
    def nose_radius(self) -> float | None:
        """Radius for stagnation heating [m]: [heating] nose_radius, else the shape's, else None."""
        if self.heating_nose_radius is not None:
            return self.heating_nose_radius
        return self.shape.nose_radius if self.shape is not None else None

    @property
    def body_class(self) -> str | None:
        """Key into default bridging and uncertainty, None without a shape."""
        return self.shape.body_class if self.shape is not None else None

    @property
    def heats(self) -> bool:
        """Whether there is a radius to compute stagnation heating with."""
        return self.nose_radius is not None or not isinstance(self.effective_nose_radius, bool)

    @property
    def states_nose_radius(self) -> bool:
        """Whether the radius for heating was stated apart from the shape."""
        return self.heating_nose_radius is not None

    @property
    def length_across(self) -> float:
        """Length across the flow that bridging is scaled with [m]: the shape's, else the reference length."""
        return self.shape.length_across if self.shape is not None else self.reference_length

    @property
    def notes(self) -> tuple[str, ...]:
        """What a reader of the results should know about the file."""
        found = []
        if self.shape is None:
            found.append("The vehicle has no shape: no free-molecular or Newtonian coefficients.")
        elif self.shape.kind != "flat-plate":
            ratio = self.reference_area / self.shape.frontal_area
            if abs(ratio - 1.0) > AREA_MISMATCH:
                found.append(
                    f"The reference area is {ratio:.3g} times the shape's frontal area of "
                    f"{self.shape.frontal_area:.4g} m2; coefficients are on the reference area."
                )
        return tuple(found + self._notes_on_bodies())

    def _notes_on_bodies(self) -> list[str]:
        found = []
        if isinstance(self.shape, Mesh) and self.shape.stated_class is None:
            found.append(
                f"The mesh states no body_class: default bridging and bands are the widest, those of a "
                f"{self.shape.body_class}."
            )
        if isinstance(self.shape, (Mesh, Assembly)) and self.shape.body_class in ("slender", "flat-plate"):
            found.append(
                "Friction of a mesh or of parts is not in the continuum limit; a slender body has hardly any "
                "continuum drag without it. Give a [continuum] table."
            )
        if self.tumbling:
            found.append("The vehicle tumbles: drag is the average over all directions, lift is zero.")
        if self.shape is not None and not self.shadows and (self.parts or self.shape.kind == "mesh"):
            found.append("Shadowing is off: elements behind others get the flow as if they stood free.")
        return found

    def elements(self, count: int | None = None) -> Elements:
        """Return the whole surface as triangles in body axes.

        Parameters
        ----------
        count : int, optional
            About how many panels a part (each of two triangles; a mesh has its own). Default 8000 for curved
            and 600 for flat-faced parts.

        Raises
        ------
        ValueError
            If the vehicle has no shape.

        Examples
        --------
        >>> from aero.body.shapes import Box
        >>> len(Vehicle.from_shape(Box(length=1.0, width=1.0, height=1.0)).elements(6))
        12
        """
        if self.shape is None:
            raise ValueError(f"{self.name} has no shape, so no elements")
        return gather(self.parts or (Part(MAIN_PART, self.shape, self.surface),), count)

    def with_parts(self, parts: tuple[Part, ...]) -> Vehicle:
        """Return the vehicle with other parts, and their assembly as its shape."""
        return replace(self, parts=parts, shape=Assembly(parts, self.shadows))

    def with_turned(self, name: str, angle: float) -> Vehicle:
        """Return the vehicle with a part turned to another angle [rad] of its hinge.

        Raises
        ------
        ValueError
            If there is no part of that name.
        """
        if name not in [part.name for part in self.parts]:
            raise ValueError(f"no part '{name}'; parts: {', '.join(part.name for part in self.parts)}")
        return self.with_parts(tuple(p.turned(angle) if p.name == name else p for p in self.parts))

    @classmethod
    def from_shape(cls, shape: Shape, *, name: str | None = None, surface: Surface | None = None) -> Vehicle:
        """Return a body without a file: its frontal area and length across the flow are the references.

        Examples
        --------
        >>> from aero.body.shapes import Sphere
        >>> Vehicle.from_shape(Sphere(diameter=1.0)).reference_length
        1.0
        """
        return cls(
            name=name or shape.kind,
            mass=math.nan,
            reference_area=shape.frontal_area,
            reference_length=shape.length_across,
            shape=shape,
            surface=surface or Surface(),
        )

    def with_surface(self, **changes: Any) -> Vehicle:
        """Return the vehicle with some surface values replaced (as options do), those of its parts too."""
        found = replace(self, surface=replace(self.surface, **changes))
        if not self.parts:
            return found
        parts = (replace(part, surface=replace(part.surface, **changes)) for part in self.parts)
        return found.with_parts(tuple(parts))

    def with_shadows(self, shadows: bool) -> Vehicle:
        """Return the vehicle with shadowing on or off, its mesh and its parts included."""
        shape = replace(self.shape, shadows=shadows) if isinstance(self.shape, Mesh) else self.shape
        found = replace(self, shadows=shadows, shape=shape)
        if not self.parts:
            return found
        return found.with_parts(
            tuple(
                replace(part, shape=replace(part.shape, shadows=shadows))
                if isinstance(part.shape, Mesh)
                else part
                for part in self.parts
            )
        )

    def with_model(self, model: str) -> Vehicle:
        """Return the vehicle with another gas-surface model, a key of `aero.force.OTHER_MODELS`.

        `maxwell` and `cll` take what the vehicle states; the others say all they need. A surface that was not
        Cercignani-Lampis-Lord's states no coefficients of it: the normal energy then accommodates as its energy
        does (1 for oxygen coverage), the tangential momentum wholly.

        Examples
        --------
        >>> from aero.body import Sphere
        >>> Vehicle.from_shape(Sphere(diameter=1.0)).with_model("specular").surface.diffuse_fraction
        0.0
        """
        if model in _WHOLE_MODELS:
            return self.with_surface(model="maxwell", **_WHOLE_MODELS[model])
        if model != "cll" or self.surface.model == "cll":
            return self.with_surface(model=model)
        alpha = self.surface.energy_accommodation
        return self.with_surface(
            model=model, normal_energy_accommodation=1.0 if isinstance(alpha, str) else alpha
        )

    def with_catalysis(self, catalysis: str) -> Vehicle:
        """Return the vehicle with another wall catalysis, full, partial or none.

        Partial recombines `PARTIAL` of the atoms, unless a partial surface states its own.
        """
        share = {"full": 1.0, "none": 0.0}.get(catalysis, PARTIAL)
        if catalysis == "partial" and self.surface.catalysis == "partial":
            share = self.surface.recombination
        return self.with_surface(catalysis=catalysis, recombination=share)

    def __str__(self) -> str:
        kind = self.shape.kind if self.shape is not None else "no shape"
        return (
            f"{self.name}: {kind}, {self.mass:g} kg, reference area {self.reference_area:g} m2, "
            f"reference length {self.reference_length:g} m"
        )
