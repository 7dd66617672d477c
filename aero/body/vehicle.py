"""A vehicle file -> Vehicle."""

from __future__ import annotations

import hashlib
import math
import tomllib
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from aero.body.continuum_table import ContinuumTable, read_table
from aero.body.keys import Table
from aero.body.shapes import SHAPES, Shape, dimensions
from aero.body.surface import OXYGEN_COVERAGE, Surface
from aero.errors import InputError
from aero.units import split_header

_OF_FORCE = ("centre", "width", "centre_sigma", "width_sigma", "continuum_sigma", "continuum_above")
BRIDGED: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "drag": (("function", "variable"), _OF_FORCE),
    "lift": (("function", "variable"), _OF_FORCE),
    "heating": ((), ("exponent", "sigma")),
}
"""Coefficient that [bridging] may override -> (keys of text, keys of numbers)."""
POSITIVE = ("centre", "width", "exponent")
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
        None leaves the free-molecular and Newtonian coefficients without an answer.
    surface : Surface
    angle_of_attack : float [rad]
        Where the trajectory states none.
    continuum : ContinuumTable or None
    bridging : dict
        Coefficient -> the keys of `BRIDGED` that the file gives; their meaning belongs to the bridge.
    heating_nose_radius : float or None [m]
        `[heating] nose_radius`, where it is not the shape's.
    source : str
        File name without folder, empty for a shape.
    digest : str
        SHA-256 of the file (and of its coefficient file), empty for a shape.
    """

    name: str
    mass: float
    reference_area: float
    reference_length: float
    lengths: dict[str, float] = field(default_factory=dict)
    shape: Shape | None = None
    surface: Surface = field(default_factory=Surface)
    angle_of_attack: float = 0.0
    continuum: ContinuumTable | None = None
    bridging: dict[str, dict[str, Any]] = field(default_factory=dict)
    heating_nose_radius: float | None = None
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
        return tuple(found)

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
        """Return the vehicle with some surface values replaced (as options do)."""
        return replace(self, surface=replace(self.surface, **changes))

    def __str__(self) -> str:
        kind = self.shape.kind if self.shape is not None else "no shape"
        return (
            f"{self.name}: {kind}, {self.mass:g} kg, reference area {self.reference_area:g} m2, "
            f"reference length {self.reference_length:g} m"
        )


def read_vehicle(path: str | Path) -> Vehicle:
    """Read a vehicle file.

    Parameters
    ----------
    path : str or Path
        TOML file.

    Returns
    -------
    Vehicle

    Raises
    ------
    InputError
        If the file cannot be read, a key is missing, unknown or has a value that cannot be used.
    """
    place = Path(path)
    raw, data = _load(place, str(path))
    top = Table(data, str(path), raw.decode("utf-8-sig"))
    reference = _required_table(top, "reference")
    shape, surface = _shape(top), _surface(top)
    continuum, extra = _continuum(top, place.parent)
    vehicle = Vehicle(
        name=top.string("name") or place.stem,
        mass=_value(top.quantity("mass", "mass", required=True, example='"38 kg"')),
        reference_area=_value(reference.quantity("area", "area", required=True, example='"0.64 m2"')),
        reference_length=_value(reference.quantity("length", "length", required=True, example='"0.9 m"')),
        lengths=_lengths(top),
        shape=shape,
        surface=surface,
        angle_of_attack=_attitude(top),
        continuum=continuum,
        bridging=_bridging(top),
        heating_nose_radius=_heating(top),
        source=place.name,
        digest=hashlib.sha256(raw + extra).hexdigest(),
    )
    reference.finish()
    top.finish()
    return vehicle


def _load(path: Path, source: str) -> tuple[bytes, dict[str, Any]]:
    try:
        raw = path.read_bytes()
    except OSError as error:
        raise InputError(
            f"cannot be read: {error.strerror}",
            source=source,
            remedy="give the path of a vehicle file (TOML)",
        ) from None
    try:
        return raw, tomllib.loads(raw.decode("utf-8-sig"))
    except UnicodeDecodeError:
        raise InputError("is not UTF-8 text, expected TOML", source=source) from None
    except tomllib.TOMLDecodeError as error:
        table = path.suffix.lower() in (".csv", ".tsv", ".parquet")
        raise InputError(
            f"is not valid TOML{' but looks like a trajectory: is it in the place of the vehicle?' if table else ''}: "
            f"{error}",
            source=source,
            remedy='values with a unit are text in quotes, such as mass = "38 kg"',
        ) from None


def _required_table(top: Table, key: str) -> Table:
    found = top.table(key, required=True)
    assert found is not None
    return found


def _value(found: float | str | None) -> float:
    assert isinstance(found, float)
    return found


def _shape(top: Table) -> Shape | None:
    table = top.table("shape")
    if table is None:
        return None
    kind = table.choice("kind", SHAPES, required=True)
    assert kind is not None
    sizes = {
        name: _value(table.quantity(name, dimension, required=True, example=_example(dimension)))
        for name, dimension in dimensions(SHAPES[kind]).items()
    }
    table.finish()
    try:
        return SHAPES[kind](**sizes)
    except ValueError as error:
        table.fail("kind", f"is '{kind}', but {error}", "mend the dimensions")


def _example(dimension: str) -> str:
    return '"55 deg"' if dimension == "angle" else '"0.5 m"'


def _surface(top: Table) -> Surface:
    table = top.table("surface")
    if table is None:
        return Surface()
    default = Surface()
    temperature = table.quantity("temperature", "temperature", words=("radiative",))
    chosen = default.temperature if temperature is None else temperature
    emissivity = table.number("emissivity", 0.0, 1.0, open_low=True)
    accommodation = table.number("energy_accommodation", 0.0, 1.0, words=(OXYGEN_COVERAGE,))
    diffuse = table.number("diffuse_fraction", 0.0, 1.0)
    table.finish()
    return Surface(
        temperature=None if chosen == "radiative" else float(chosen or 0.0),
        emissivity=default.emissivity if emissivity is None else float(emissivity),
        energy_accommodation=default.energy_accommodation if accommodation is None else accommodation,
        diffuse_fraction=default.diffuse_fraction if diffuse is None else float(diffuse),
    )


def _lengths(top: Table) -> dict[str, float]:
    table = top.table("lengths")
    if table is None:
        return {}
    found: dict[str, float] = {}
    for key, value in table.data.items():
        suffixed = not isinstance(value, str) and split_header(key).unit is not None
        name = key.rpartition("_")[0] if suffixed else key
        if name == "reference" or name in found:
            why = "is taken by [reference] length" if name == "reference" else "is given twice"
            table.fail(key, why, "choose another name")
        if not name:
            table.fail(key, "has no name", "name the length")
        found[name] = _value(table.quantity(name, "length", required=True))
    return found


def _attitude(top: Table) -> float:
    table = top.table("attitude")
    if table is None:
        return 0.0
    angle = table.quantity("angle_of_attack", "angle", positive=False)
    table.finish()
    if angle is not None and abs(_value(angle)) > math.pi:
        table.fail("angle_of_attack", "is more than half a turn, expected -180 deg to 180 deg")
    return 0.0 if angle is None else _value(angle)


def _heating(top: Table) -> float | None:
    table = top.table("heating")
    if table is None:
        return None
    radius = table.quantity("nose_radius", "length")
    table.finish()
    return None if radius is None else _value(radius)


def _continuum(top: Table, folder: Path) -> tuple[ContinuumTable | None, bytes]:
    table = top.table("continuum")
    return (None, b"") if table is None else read_table(table, folder)


def _bridging(top: Table) -> dict[str, dict[str, Any]]:
    table = top.table("bridging")
    if table is None:
        return {}
    found: dict[str, dict[str, Any]] = {}
    for coefficient, (texts, numbers) in BRIDGED.items():
        entry = table.table(coefficient)
        if entry is None:
            continue
        values: dict[str, Any] = {key: entry.string(key) for key in texts}
        for key in numbers:
            values[key] = entry.number(key, 0.0, math.inf, open_low=key in POSITIVE)
        entry.finish()
        found[coefficient] = {key: value for key, value in values.items() if value is not None}
    table.finish()
    return found
