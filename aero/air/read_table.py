"""Reads the columns of a user's atmosphere table, with their units, and checks every cell."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from aero.air.state import SPECIES
from aero.arrays import Floats
from aero.errors import InputError, nearest
from aero.units import accepted, factor, split_header

# meaning of the header -> (name, dimension); spaces for underscores and hyphens, lower case
MEANINGS: dict[str, tuple[str, str]] = {
    "altitude": ("altitude", "length"),
    "geometric altitude": ("altitude", "length"),
    "geodetic altitude": ("altitude", "length"),
    "temperature": ("temperature", "temperature"),
    "pressure": ("pressure", "pressure"),
    "density": ("density", "density"),
    "number density": ("number density", "number density"),
} | {f"n {name.lower()}": (name, "number density") for name in SPECIES}
MOLAR_RANGE = (1.0, 40.0)  # g/mol: hydrogen to argon
_EXAMPLE = "columns such as altitude_km, temperature_K, density_kg_m3"


@dataclass(frozen=True, eq=False)
class Columns:
    """A table in SI, by increasing altitude; None where a column is not there.

    Attributes
    ----------
    source : str
        File name without its path.
    lines : (n,) array of int
        Line of each row in the file.
    altitude, temperature : (n,) arrays [m, K]
    pressure, density, number_density : (n,) arrays or None [Pa, kg/m3, 1/m3]
    species : (7, n) array or None [1/m3]
        0 for species without a column.
    ignored : tuple of str
        Headers of columns with another meaning.
    """

    source: str
    lines: NDArray[np.intp]
    altitude: Floats
    temperature: Floats
    pressure: Floats | None
    density: Floats | None
    number_density: Floats | None
    species: Floats | None
    ignored: tuple[str, ...]


def read_columns(path: str | Path) -> Columns:
    """Read a CSV of an atmosphere.

    Parameters
    ----------
    path : str or Path
        `#` lines are comments; the first other line is the header. Columns: altitude (geometric) and
        temperature, at least one of density, pressure, number density or species (n_N2, n_O2, n_O, n_N,
        n_Ar, n_He, n_H), each with its unit in brackets or as a suffix. Other columns are left aside.
        Altitudes either rise or fall throughout.

    Raises
    ------
    InputError
        For a missing, repeated or unitless column, a row with the wrong number of fields, a cell that is not
        a number or out of its range, altitudes out of order, or fewer than two rows.
    """
    path = Path(path)
    header_line, header, rows, lines = _read(path)
    found, ignored = _headers(header, path.name, header_line)
    for row, line in zip(rows, lines, strict=True):
        if len(row) != len(header):
            raise InputError(
                f"{len(row)} fields, expected {len(header)} as in the header", source=path.name, line=line
            )
    if len(rows) < 2:
        raise InputError(f"holds {len(rows)} row(s), expected at least two altitudes", source=path.name)
    values = {
        name: _column([row[i] for row in rows], header[i], scale, name, lines, path.name)
        for name, (i, scale) in found.items()
    }
    order = _order(values["altitude"], header[found["altitude"][0]], lines, path.name)
    values = {name: column[order] for name, column in values.items()}
    species = None
    if any(name in values for name in SPECIES):
        none = np.zeros(len(rows))
        species = np.stack([values.get(name, none) for name in SPECIES])
        empty = np.flatnonzero(species.sum(axis=0) <= 0.0)
        if empty.size:
            raise InputError("all species are 0", source=path.name, line=int(lines[order][empty[0]]))
    return Columns(
        source=path.name,
        lines=lines[order],
        altitude=values["altitude"],
        temperature=values["temperature"],
        pressure=values.get("pressure"),
        density=values.get("density"),
        number_density=values.get("number density"),
        species=species,
        ignored=ignored,
    )


def _read(path: Path) -> tuple[int, list[str], list[list[str]], NDArray[np.intp]]:
    try:
        text = path.read_text(encoding="utf-8-sig")
    except OSError as error:
        raise InputError(
            f"cannot be read ({error.strerror})", source=path.name, remedy="check the path"
        ) from None
    except UnicodeDecodeError:
        raise InputError("is not UTF-8 text", source=path.name, remedy="save it as a UTF-8 CSV") from None
    kept = [
        (i, s) for i, s in enumerate(text.splitlines(), 1) if s.strip() and not s.lstrip().startswith("#")
    ]
    if not kept:
        raise InputError("is empty", source=path.name, remedy=f"give {_EXAMPLE}")
    rows = list(csv.reader(line for _, line in kept))
    header = [cell.strip() for cell in rows[0]]
    return kept[0][0], header, rows[1:], np.array([i for i, _ in kept[1:]], dtype=np.intp)


def _headers(
    header: list[str], source: str, line: int
) -> tuple[dict[str, tuple[int, tuple[float, float]]], tuple[str, ...]]:
    """Return name -> (column index, (factor, offset)) and the headers left aside."""
    found: dict[str, tuple[int, tuple[float, float]]] = {}
    ignored = []
    for i, text in enumerate(header):
        split = split_header(text)
        if split.meaning not in MEANINGS:
            ignored.append(text)
            continue
        name, dimension = MEANINGS[split.meaning]
        scale = factor(split.unit, dimension) if split.unit else None
        if scale is None:
            problem = (
                f"states '{split.unit}', which is not a unit of {dimension}"
                if split.unit
                else "states no unit"
            )
            raise InputError(
                problem, source=source, line=line, column=text, remedy=f"use one of: {accepted(dimension)}"
            )
        if name in found:
            raise InputError(f"is a second column of {name}", source=source, line=line, column=text)
        found[name] = (i, scale)
    for name in ("altitude", "temperature"):
        if name not in found:
            meant = nearest(name, ignored)
            raise InputError(
                f"no column of {name}", source=source, line=line, remedy=meant or f"give {_EXAMPLE}"
            )
    if len(found) < 3:
        meant = nearest("density", ignored) or nearest("pressure", ignored)
        raise InputError(
            "no column of density, pressure or number density", source=source, line=line,
            remedy=meant or f"give {_EXAMPLE}",
        )  # fmt: skip
    return found, tuple(ignored)


def _column(
    cells: list[str], header: str, scale: tuple[float, float], name: str, lines: NDArray[np.intp], source: str
) -> Floats:
    """Return one column in SI after checking each cell."""
    try:
        values = np.array(cells, dtype=np.float64)
    except ValueError:
        values = np.array([_number(cell) for cell in cells])
    values = scale[0] * (values + scale[1])
    if name == "altitude":
        good, wanted = np.isfinite(values), "a number"
    elif name in SPECIES:
        good, wanted = np.isfinite(values) & (values >= 0.0), "a number from 0"
    else:
        good, wanted = np.isfinite(values) & (values > 0.0), "a number above 0"
    bad = np.flatnonzero(~good)
    if bad.size:
        raise InputError(
            f"holds '{cells[bad[0]].strip()}', expected {wanted}",
            source=source,
            line=int(lines[bad[0]]),
            column=header,
            remedy="mend the row",
        )
    return values


def _number(cell: str) -> float:
    try:
        return float(cell)
    except ValueError:
        return np.nan


def _order(altitude: Floats, header: str, lines: NDArray[np.intp], source: str) -> slice:
    """Return the slice that puts the rows in increasing altitude."""
    step = np.diff(altitude)
    rising = step[0] > 0.0
    wrong = np.flatnonzero((step <= 0.0) if rising else (step >= 0.0))
    if wrong.size:
        i = wrong[0] + 1
        raise InputError(
            f"holds {altitude[i]:g} m after {altitude[i - 1]:g} m, expected altitudes that rise, or fall, "
            "throughout",
            source=source,
            line=int(lines[i]),
            column=header,
        )
    return slice(None) if rising else slice(None, None, -1)
