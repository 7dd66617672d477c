"""A vehicle file -> Vehicle."""

from __future__ import annotations

import hashlib
import math
import tomllib
from pathlib import Path
from typing import Any

from aero.body.assembly import Assembly
from aero.body.continuum_table import ContinuumTable, read_table
from aero.body.keys import Table
from aero.body.part import Part
from aero.body.shape_tables import read_parts, read_shape, read_surface
from aero.body.surface import Surface
from aero.body.vehicle import BRIDGED, MAIN_PART, Vehicle
from aero.errors import InputError
from aero.units import split_header

POSITIVE = ("centre", "width", "exponent")


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
    length = _value(reference.quantity("length", "length", required=True, example='"0.9 m"'))
    area = _value(reference.quantity("area", "area", required=True, example='"0.64 m2"'))
    stated = top.switch("shadowing")
    bodies, meshes = _bodies(top, place.parent, length, shadows=stated is not False)
    continuum, coefficients = _continuum(top, place.parent)
    vehicle = Vehicle(
        name=top.string("name") or place.stem,
        mass=_value(top.quantity("mass", "mass", required=True, example='"38 kg"')),
        reference_area=area,
        reference_length=length,
        lengths=_lengths(top),
        continuum=continuum,
        bridging=_bridging(top),
        source=place.name,
        digest=hashlib.sha256(raw + coefficients + meshes).hexdigest(),
        **bodies,
        **_attitude(top),
        **_moment(top),
        **_heating(top),
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


def _bodies(top: Table, folder: Path, length: float, *, shadows: bool) -> tuple[dict[str, Any], bytes]:
    """Return shape, surface and parts of a file, and the bytes of the mesh files it names."""
    surface = read_surface(top, Surface())
    shape, raw = read_shape(top, folder, shadows=shadows, reference_length=length)
    taken = () if shape is None else (MAIN_PART,)
    parts, more = read_parts(top, folder, surface, shadows=shadows, taken=taken)
    if parts:
        if shape is not None:
            parts = (Part(MAIN_PART, shape, surface), *parts)
        shape = Assembly(parts, shadows)
    return {"shape": shape, "surface": surface, "parts": parts, "shadows": shadows}, raw + more


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


def _attitude(top: Table) -> dict[str, Any]:
    table = top.table("attitude")
    if table is None:
        return {}
    found: dict[str, Any] = {}
    for key, most in (("angle_of_attack", 180.0), ("sideslip", 90.0), ("bank", 180.0)):
        angle = table.quantity(key, "angle", positive=False)
        if angle is None:
            continue
        found[key] = _value(angle)
        if abs(found[key]) > math.radians(most):
            turn = "half a turn" if most == 180.0 else "a quarter of a turn"
            table.fail(key, f"is more than {turn}, expected -{most:g} deg to {most:g} deg")
    tumbling = table.switch("tumbling")
    table.finish()
    if tumbling and found:
        table.fail(
            next(iter(found)), "stands beside tumbling = true, which averages over all directions", "drop one"
        )
    return found | {"tumbling": bool(tumbling)}


def _moment(top: Table) -> dict[str, Any]:
    table = top.table("moment")
    if table is None:
        return {}
    point = table.point("point", "length", required=True)
    length = table.quantity("length", "length")
    table.finish()
    return {"moment_point": point, "moment_length": _or_none(length)}


def _heating(top: Table) -> dict[str, Any]:
    table = top.table("heating")
    if table is None:
        return {}
    radius = table.quantity("nose_radius", "length")
    effective: bool | float | None
    if isinstance(table.data.get("effective_nose_radius"), bool):
        effective = table.switch("effective_nose_radius")
    else:
        effective = _or_none(table.quantity("effective_nose_radius", "length"))
    table.finish()
    if radius is not None and effective:
        table.fail(
            "effective_nose_radius", "stands beside nose_radius, which heating takes as it is", "drop one"
        )
    return {"heating_nose_radius": _or_none(radius), "effective_nose_radius": effective or False}


def _or_none(found: float | str | None) -> float | None:
    return None if found is None else _value(found)


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
