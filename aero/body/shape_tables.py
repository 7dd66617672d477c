"""The tables [shape], [surface] and [[part]] of a vehicle file."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from aero.body.keys import Table
from aero.body.mesh import Mesh
from aero.body.part import Part
from aero.body.read_mesh import other_units, read_mesh
from aero.body.shapes import BODY_CLASSES, SHAPES, Shape, dimensions
from aero.body.surface import CATALYSIS, OXYGEN_COVERAGE, SURFACE_MODELS, Surface
from aero.units import UNITS

FAR_OFF = 10.0  # reference length over longest side, either way: the unit is wrong then (judgement)


def read_shape(
    top: Table,
    folder: Path,
    *,
    shadows: bool = True,
    reference_length: float | None = None,
    required: bool = False,
) -> tuple[Shape | None, bytes]:
    """Return the shape of a [shape] table, None without one, and the bytes of its mesh file.

    Parameters
    ----------
    top : Table
        What holds the table: the file, or a part.
    folder : Path
        That mesh files are relative to.
    shadows : bool, optional
        Of a mesh.
    reference_length : float, optional [m]
        That a mesh's size is held against.
    required : bool, optional
        Whether there must be a table.
    """
    table = top.table("shape", required=required)
    if table is None:
        return None, b""
    kind = table.choice("kind", SHAPES, required=True)
    assert kind is not None
    if kind == Mesh.kind:
        return _mesh(table, folder, shadows, reference_length)
    sizes = {
        name: float(table.quantity(name, dimension, required=True, example=_example(dimension)) or 0.0)
        for name, dimension in dimensions(SHAPES[kind]).items()
    }
    table.finish()
    try:
        return SHAPES[kind](**sizes), b""
    except ValueError as error:
        table.fail("kind", f"is '{kind}', but {error}", "mend the dimensions")


def _example(dimension: str) -> str:
    return '"55 deg"' if dimension == "angle" else '"0.5 m"'


def _mesh(table: Table, folder: Path, shadows: bool, reference: float | None) -> tuple[Shape, bytes]:
    name = table.string("file", required=True, example='"body.stl"')
    unit = table.choice("unit", UNITS["length"], required=True, example='"mm"')
    body_class = table.choice("body_class", BODY_CLASSES)
    nose = table.quantity("nose_radius", "length")
    table.finish()
    assert name is not None
    assert unit is not None
    found = read_mesh(folder / name, unit, source=name)
    shape = Mesh(
        found.vertices,
        found.digest,
        nose_radius=None if nose is None else float(nose),
        stated_class=body_class,
        shadows=shadows,
        source=Path(name).name,
    )
    size = max(shape.extent)
    if reference is not None and not 1.0 / FAR_OFF <= size / reference <= FAR_OFF:
        likely = other_units(size, unit, reference)
        table.fail(
            "unit",
            f"is '{unit}', which makes the mesh {size:.4g} m long, more than {FAR_OFF:g} times off the "
            f"reference length of {reference:.4g} m",
            f"is unit '{likely[0]}' meant?" if likely else "state the unit the mesh is in",
        )
    return shape, found.raw


def read_surface(top: Table, default: Surface) -> Surface:
    """Return the surface of a [surface] table; keys it does not give are those of `default`."""
    table = top.table("surface")
    if table is None:
        return default
    changes: dict[str, Any] = {
        "emissivity": table.number("emissivity", 0.0, 1.0, open_low=True),
        "energy_accommodation": table.number("energy_accommodation", 0.0, 1.0, words=(OXYGEN_COVERAGE,)),
        "diffuse_fraction": table.number("diffuse_fraction", 0.0, 1.0),
        "model": table.choice("model", SURFACE_MODELS),
        "normal_energy_accommodation": table.number("normal_energy_accommodation", 0.0, 1.0),
        "tangential_momentum_accommodation": table.number("tangential_momentum_accommodation", 0.0, 2.0),
    }
    temperature = table.quantity("temperature", "temperature", words=("radiative",))
    changes |= _catalysis(table, default)
    table.finish()
    values = {name: value for name, value in changes.items() if value is not None}
    if temperature is not None:
        values["temperature"] = None if temperature == "radiative" else temperature
    return Surface(**{**vars(default), **values})


def _catalysis(table: Table, default: Surface) -> dict[str, Any]:
    given = table.choice("catalysis", CATALYSIS)
    catalysis = given or default.catalysis
    recombination = table.number("recombination", 0.0, 1.0)
    fixed = CATALYSIS[catalysis]
    if fixed is None:
        if recombination is None and given is not None:
            table.fail("catalysis", f"is '{given}' without a recombination", "add recombination = 0.1, say")
        return {"catalysis": catalysis, "recombination": recombination}
    if recombination is not None:
        table.fail(
            "recombination",
            f"stands beside catalysis '{catalysis}', which fixes it at {fixed:g}",
            'drop it or write catalysis = "partial"',
        )
    return {"catalysis": catalysis, "recombination": fixed}


def read_parts(
    top: Table, folder: Path, default: Surface, *, shadows: bool, taken: tuple[str, ...]
) -> tuple[tuple[Part, ...], bytes]:
    """Return the parts of the [[part]] tables and the bytes of their mesh files.

    Parameters
    ----------
    top : Table
        The file.
    folder : Path
        That mesh files are relative to.
    default : Surface
        For what a part's own [part.surface] does not give.
    shadows : bool
    taken : tuple of str
        Names that no part may have.
    """
    names, parts, raw = list(taken), [], b""
    for table in top.tables("part"):
        name = table.string("name", required=True, example='"panel"')
        assert name is not None
        if name in names:
            table.fail("name", f"is '{name}', which is taken", "choose another name")
        names.append(name)
        shape, more = read_shape(table, folder, shadows=shadows, required=True)
        assert shape is not None
        raw += more
        place: dict[str, Any] = {"position": table.point("position", "length") or (0.0, 0.0, 0.0)}
        place |= _turn(table)
        surface = read_surface(table, default)
        table.finish()
        parts.append(Part(name, shape, surface, **place))
    return tuple(parts), raw


def _turn(part: Table) -> dict[str, Any]:
    table = part.table("turn")
    if table is None:
        return {}
    axis = table.point("axis", None, required=True)
    hinge = table.point("hinge", "length")
    angle = table.quantity("angle", "angle", required=True, positive=False, example='"30 deg"')
    table.finish()
    if axis is None or not any(axis):
        table.fail("axis", f"is {table.data['axis']}, expected a direction", "write axis = [0, 1, 0], say")
    return {"axis": axis, "hinge": hinge, "angle": float(angle or 0.0)}
