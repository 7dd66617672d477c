"""The shapes a vehicle file may name; adding one is a class and an entry in `SHAPES`."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import fields

from aero.body.flat_bodies import Box, FlatPlate
from aero.body.mesh import Mesh
from aero.body.round_bodies import Cone, Cylinder, Sphere, SphereCone
from aero.body.shape import BODY_CLASSES, Shape
from aero.errors import InputError, choose
from aero.units import quantity

__all__ = [
    "BODY_CLASSES",
    "SHAPES",
    "Box",
    "Cone",
    "Cylinder",
    "FlatPlate",
    "Mesh",
    "Shape",
    "Sphere",
    "SphereCone",
    "build_shape",
    "dimensions",
]

SHAPES: dict[str, type[Shape]] = {
    shape.kind: shape for shape in (Sphere, Cylinder, FlatPlate, Cone, SphereCone, Box, Mesh)
}
"""Kind in a vehicle file -> class; the dimensions of the class are its keys (a mesh has a file instead)."""


def dimensions(kind: type[Shape]) -> dict[str, str]:
    """Return the dimensions of a shape as name -> "length" or "angle"; a mesh has none.

    Examples
    --------
    >>> dimensions(SHAPES["cone"])
    {'half_angle': 'angle', 'base_radius': 'length'}
    """
    return {
        item.name: str(item.metadata["dimension"]) for item in fields(kind) if "dimension" in item.metadata
    }


def build_shape(
    kind: str,
    sizes: Mapping[str, float | str],
    *,
    source: str | None = None,
    flags: Mapping[str, str] | None = None,
) -> Shape:
    """Return a shape from its kind and dimensions as a user gave them.

    Parameters
    ----------
    kind : str
        A key of `SHAPES`.
    sizes : mapping of str to float [m], [rad] or text with a unit
    source : str, optional
        Where they stand, for the message.
    flags : mapping of str to str, optional
        What the user calls each dimension.

    Raises
    ------
    InputError
        If the kind is unknown, a dimension is missing or does not belong to it, or they do not fit.

    Examples
    --------
    >>> build_shape("sphere", {"diameter": 1.0})
    Sphere(diameter=1.0)
    >>> build_shape("sphere", {"diameter": "20 cm"})
    Sphere(diameter=0.2)
    >>> build_shape("cone", {"diameter": 1.0})
    Traceback (most recent call last):
    aero.errors.InputError: a cone has no diameter; its dimensions: half_angle, base_radius.
    """
    built = SHAPES[choose(kind, SHAPES, "shape kind", source=source)]
    wanted = dimensions(built)
    if not wanted:
        raise InputError(
            f"a {kind} needs a vehicle file", source=source, remedy=f'give one with [shape] kind = "{kind}"'
        )
    called = dict(zip(wanted, wanted, strict=True)) | dict(flags or {})
    listed = f"its dimensions: {', '.join(called[name] for name in wanted)}"
    for name in sizes:
        if name not in wanted:
            raise InputError(f"a {kind} has no {called.get(name, name)}", source=source, remedy=listed)
    missing = [called[name] for name in wanted if name not in sizes]
    if missing:
        raise InputError(f"a {kind} needs {' and '.join(missing)}", source=source, remedy=f"add {missing[0]}")
    values = {
        name: quantity(size, wanted[name], source=called[name]) if isinstance(size, str) else size
        for name, size in sizes.items()
    }
    try:
        return built(**values)
    except ValueError as error:
        raise InputError(f"the {kind} cannot be built: {error}", source=source, remedy=listed) from None
