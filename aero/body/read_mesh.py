"""A mesh file -> its triangles in m, checked: every way it can be wrong has one message."""

from __future__ import annotations

import io
import math
import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from aero.arrays import Floats, floats
from aero.body import triangles
from aero.errors import InputError, nearest
from aero.units import UNITS, accepted

ENDINGS = ("stl", "obj", "ply")
"""Endings of the files that are read."""
MOST_TRIANGLES = 1_000_000
MOST_BYTES = 400_000_000  # a million triangles in text at 400 bytes each, more than any program writes
SMALLEST, LARGEST = 1e-3, 1e3  # m, longest side of a body
FEWER = "export it with at most a million triangles (20,000 give drag to a part in a thousand)"


@dataclass(frozen=True, eq=False)
class MeshFile:
    """What a mesh file holds.

    Attributes
    ----------
    vertices : (n, 3, 3) array [m]
    raw : bytes
        The file.
    """

    vertices: Floats
    raw: bytes

    @property
    def digest(self) -> str:
        """SHA-256 of the file."""
        import hashlib

        return hashlib.sha256(self.raw).hexdigest()


def read_mesh(path: str | Path, unit: str, *, source: str | None = None) -> MeshFile:
    """Read a closed body from an STL (text or binary), OBJ or PLY file.

    Parameters
    ----------
    path : str or Path
    unit : str
        Unit of length the file is in: m, cm, mm, in, ...
    source : str, optional
        What to call the file in messages; default its path.

    Returns
    -------
    MeshFile

    Raises
    ------
    InputError
        If it is missing, of another kind, unreadable or empty; has more than a million triangles, points that
        are not finite or triangles without area; is open, partly or wholly inside out; or is not between
        1 mm and 1 km long.

    Notes
    -----
    Points that agree within a millionth of the longest side count as one. The order of a triangle's corners
    says where outside is (counter-clockwise seen from there); normals in the file are not used.
    """
    place, name = Path(path), source or str(path)
    scale = UNITS["length"].get(unit)
    if scale is None:
        raise InputError(
            f"unit '{unit}' is not a unit of length", source=name, remedy=f"use one of: {accepted('length')}"
        )
    ending = place.suffix.lower().removeprefix(".")
    if ending not in ENDINGS:
        known = ", ".join(f".{one}" for one in ENDINGS)
        guess = nearest(ending, ENDINGS) if ending else None
        raise InputError(
            f"ends in '{place.suffix}', expected one of: {known}",
            source=name,
            remedy=guess or "export it as STL",
        )
    raw = _bytes(place, ending, name)
    vertices = _parsed(raw, ending, name) * scale[0]
    _check_numbers(vertices, unit, name)
    _check_surface(vertices, name)
    return MeshFile(vertices, raw)


def other_units(size: float, unit: str, wanted: float) -> list[str]:
    """Return the units in which a size [m] read in `unit` would be within a factor 10 of what is wanted [m].

    Examples
    --------
    >>> other_units(800.0, "m", 0.9)
    ['mm', 'cm']
    """
    length = UNITS["length"]
    found = []
    for name in ("m", "cm", "mm", "in", "ft", "um", "km"):
        ratio = size / length[unit][0] * length[name][0] / wanted
        if name != unit and 0.1 <= ratio <= 10.0:
            found.append((abs(math.log(ratio)), name))
    return [name for _, name in sorted(found)]


def _bytes(place: Path, ending: str, name: str) -> bytes:
    try:
        size = place.stat().st_size
        with place.open("rb") as file:
            head = file.read(4096)
            if not head:
                raise InputError("is empty, expected a mesh", source=name)
            _check_count(_stated_count(head, ending, size), name)
            if size > MOST_BYTES:
                raise InputError(
                    f"is {size / 1e6:,.0f} MB long, more than a million triangles take",
                    source=name,
                    remedy=FEWER,
                )
            raw = head + file.read()
    except OSError as error:
        raise InputError(
            f"cannot be read: {error.strerror}",
            source=name,
            remedy="give a mesh file, relative to the vehicle file",
        ) from None
    if ending == "obj":
        _check_count(raw.count(b"\nf "), name)
    elif ending == "stl" and not _binary_stl(head, size):
        _check_count(raw.count(b"endfacet"), name)
    return raw


def _check_count(count: int, name: str) -> None:
    if count > MOST_TRIANGLES:
        raise InputError(
            f"has {count:,} triangles, expected at most {MOST_TRIANGLES:,}", source=name, remedy=FEWER
        )


def _binary_stl(head: bytes, size: int) -> bool:
    """Whether an STL file is binary: its length is what its count of triangles says, or it is no text."""
    stated = int.from_bytes(head[80:84], "little") if len(head) >= 84 else 0
    return size == 84 + 50 * stated or not head.lstrip().lower().startswith(b"solid")


def _stated_count(head: bytes, ending: str, size: int) -> int:
    if ending == "stl" and len(head) >= 84 and _binary_stl(head, size):
        count = int.from_bytes(head[80:84], "little")
        return count if size > 25 * count else 0  # a file far shorter than that is none
    found = re.search(rb"element\s+face\s+(\d+)", head) if ending == "ply" else None
    return int(found.group(1)) if found else 0


def _parsed(raw: bytes, ending: str, name: str) -> Floats:
    """Return the corners of the triangles, still in the file's unit."""
    import trimesh  # not at the top: half a second

    broken = InputError(
        f"is not a mesh that can be read as {ending.upper()}",
        source=name,
        remedy="export the body again as STL",
    )
    if ending == "stl" and _binary_stl(raw[:84], len(raw)):
        return _binary_triangles(raw, name)
    try:
        found: Any = trimesh.load_mesh(io.BytesIO(raw), file_type=ending, process=False)
        if not isinstance(found, trimesh.Trimesh):  # several bodies in one file
            found = found.to_mesh()
        faces = np.asarray(found.faces, dtype=np.intp).reshape(-1, 3)
        vertices = floats(found.vertices)[faces]
    except Exception:  # a reader of any file may fail in any way; all mean the same to the user
        raise broken from None
    _check_count(len(vertices), name)
    if not len(vertices):
        raise InputError("holds no triangles, expected a closed body", source=name)
    return vertices


def _binary_triangles(raw: bytes, name: str) -> Floats:
    count = int.from_bytes(raw[80:84], "little") if len(raw) >= 84 else 0
    wanted = 84 + 50 * count
    if len(raw) < 84 or (len(raw) != wanted and count > 10 * len(raw)):
        raise InputError(
            "is not a mesh that can be read as STL", source=name, remedy="export the body again as STL"
        )
    if len(raw) != wanted:
        raise InputError(
            f"is {len(raw)} bytes long, but binary STL with the {count} triangles it states is {wanted}",
            source=name,
            remedy="export it again; it may be cut short",
        )
    if not count:
        raise InputError("holds no triangles, expected a closed body", source=name)
    rows = np.frombuffer(
        raw, dtype=[("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("skip", "<u2")], offset=84
    )
    return floats(rows["corners"])


def _check_numbers(vertices: Floats, unit: str, name: str) -> None:
    bad = np.asarray(~np.isfinite(vertices).all(axis=(1, 2)))
    if bad.any():
        raise InputError(
            f"has {int(bad.sum())} of {bad.size} triangles with a corner that is not finite (first: triangle "
            f"{int(np.argmax(bad)) + 1})",
            source=name,
            remedy="mend or export it again",
        )
    corners = vertices.reshape(-1, 3)
    size = float((corners.max(axis=0) - corners.min(axis=0)).max())
    if not SMALLEST <= size <= LARGEST:
        raise InputError(
            f"is {size:.4g} m long in unit '{unit}', expected 1 mm to 1 km",
            source=name,
            remedy="state the unit the file is in",
        )
    empty = triangles.areas(vertices) <= 1e-14 * size * size  # single precision, squared
    if empty.any():
        raise InputError(
            f"has {int(empty.sum())} of {len(empty)} triangles without an area (first: triangle "
            f"{int(np.argmax(empty)) + 1})",
            source=name,
            remedy="remove degenerate triangles and export it again",
        )


def _check_surface(vertices: Floats, name: str) -> None:
    points, faces = triangles.merged(vertices)
    twice = len(faces) - len(np.unique(np.sort(faces, axis=1), axis=0))
    if twice:
        raise InputError(
            f"has {twice:,} of {len(faces):,} triangles twice, expected each once",
            source=name,
            remedy="remove the copies; a body exported twice has twice its drag",
        )
    found = triangles.edges(faces)
    if found.open_count:
        raise InputError(
            f"is not watertight: {found.open_count:,} open edges, expected a closed surface",
            source=name,
            remedy="close its holes; a sheet needs a thickness, or is a flat-plate part",
        )
    if found.torn:
        raise InputError(
            f"is partly inside out: neighbouring triangles turn opposite ways along {found.torn:,} edges",
            source=name,
            remedy="make all normals point outwards and export it again",
        )
    signed = triangles.volumes(points, faces, found.neighbours)
    if signed.sum() < 0.0:
        raise InputError(
            f"is inside out: its normals point inwards (volume {signed.sum():.4g} m3)",
            source=name,
            remedy="flip all normals and export it again",
        )
    inwards = int((signed < 0.0).sum())
    if inwards:
        raise InputError(
            f"has {inwards} of {signed.size} separate pieces whose normals point inwards",
            source=name,
            remedy="flip them, or remove inner cavities: no gas gets there",
        )
