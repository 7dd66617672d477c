"""The user's own continuum coefficients against Mach number or altitude.

In the vehicle file, either inline or from a CSV file beside it::

    [continuum]
    mach = [2.0, 5.0, 10.0, 20.0]      # or altitude_km = [...]
    drag = [1.45, 1.55, 1.60, 1.62]
    lift = [0.0, 0.0, 0.0, 0.0]        # optional

    [continuum]
    file = "coefficients.csv"          # columns: mach or altitude [km]; drag; optionally lift
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from aero.arrays import ArrayLike, Floats, floats, readonly
from aero.body.keys import Table
from aero.errors import InputError
from aero.units import accepted, split_header, to_si


@dataclass(frozen=True, eq=False)
class ContinuumTable:
    """Coefficients on the vehicle's reference area against one variable.

    Attributes
    ----------
    against : str
        "mach" or "altitude".
    at : (k,) array
        Mach number, or altitude [m]; rising.
    drag : (k,) array
    lift : (k,) array or None
        None leaves lift to the shape.

    Notes
    -----
    Linear between rows; the first and the last row are held beyond the ends (hypersonic coefficients
    hardly depend on the Mach number). The table replaces the shape's own coefficient whole: pressure,
    friction and base.

    Examples
    --------
    >>> table = ContinuumTable("mach", np.array([5.0, 10.0]), np.array([1.5, 1.6]))
    >>> float(table.drag_at(7.5, 60e3)), float(table.drag_at(25.0, 60e3))
    (1.55, 1.6)
    """

    against: str
    at: Floats
    drag: Floats
    lift: Floats | None = None

    def __post_init__(self) -> None:
        if self.against not in ("mach", "altitude"):
            raise ValueError(f"against is '{self.against}', expected 'mach' or 'altitude'")
        columns = {self.against: self.at, "drag": self.drag}
        if self.lift is not None:
            columns["lift"] = self.lift
        for name, values in columns.items():
            if values.ndim != 1 or values.size != self.at.size:
                raise ValueError(f"{name} has {values.size} values, {self.against} has {self.at.size}")
            if not np.isfinite(values).all():
                raise ValueError(f"{name} holds a value that is not finite")
        if self.at.size < 2:
            raise ValueError(f"{self.against} has {self.at.size} value(s), expected at least 2")
        if not (np.diff(self.at) > 0.0).all():
            raise ValueError(f"{self.against} must rise from value to value")
        if self.against == "mach" and self.at[0] < 0.0:
            raise ValueError(f"mach begins at {self.at[0]:g}, expected 0 or more")
        if (self.drag < 0.0).any():
            raise ValueError("drag holds a negative value")
        for name in columns:
            field = "at" if name == self.against else name
            object.__setattr__(self, field, readonly(getattr(self, field)))

    def _variable(self, mach: ArrayLike, altitude: ArrayLike) -> Floats:
        return floats(mach if self.against == "mach" else altitude)

    def drag_at(self, mach: ArrayLike, altitude: ArrayLike) -> Floats:
        """Return the drag coefficient at a Mach number and an altitude [m]."""
        return np.interp(self._variable(mach, altitude), self.at, self.drag)

    def lift_at(self, mach: ArrayLike, altitude: ArrayLike) -> Floats | None:
        """Return the lift coefficient, None when the table has none."""
        if self.lift is None:
            return None
        return np.interp(self._variable(mach, altitude), self.at, self.lift)


def read_table(table: Table, folder: Path) -> tuple[ContinuumTable, bytes]:
    """Return the table of a [continuum] section and the bytes it came from (empty when inline).

    Raises
    ------
    InputError
        If it cannot be used.
    """
    name = table.string("file")
    if name is not None:
        table.value("mach")
        table.value("drag")
        others = [key for key in table.data if key != "file"]
        if others:
            table.fail(others[0], "stands beside 'file'", "give the table inline or as a file, not both")
        return read_csv(folder / name, name)
    columns, against, scale = _inline(table)
    table.finish()
    at = np.array([to_si(value, scale, "length") for value in columns[0]]) if scale else np.array(columns[0])
    lift = np.array(columns[2]) if columns[2] is not None else None
    try:
        return ContinuumTable(against, at, np.array(columns[1]), lift), b""
    except ValueError as error:
        table.fail(against if against in table.data else "drag", f"cannot be used: {error}")


def _inline(table: Table) -> tuple[tuple[list[float], list[float], list[float] | None], str, str]:
    mach = table.value("mach")
    altitude = next((key for key in table.data if key.startswith("altitude")), "altitude")
    heights = table.value(altitude)
    if (mach is None) == (heights is None):
        table.fail("mach", "or 'altitude_km' must be given, and only one of them", "add mach = [...]")
    drag = _list(table, "drag", table.value("drag", required=True))
    given = table.value("lift")
    lift = None if given is None else _list(table, "lift", given)
    if mach is not None:
        return (_list(table, "mach", mach), drag, lift), "mach", ""
    unit = split_header(altitude).unit
    if unit is None:
        table.fail(altitude, "has no unit", f"name it with one, such as altitude_km; {accepted('length')}")
    return (_list(table, altitude, heights), drag, lift), "altitude", unit


def _list(table: Table, key: str, values: object) -> list[float]:
    if not isinstance(values, list):
        table.fail(key, f"is '{values}', expected a list of numbers", f"write {key} = [1.0, 2.0]")
    for value in values:
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            table.fail(key, f"holds '{value}', expected a number", "write numbers without quotes")
    return [float(value) for value in values]


def read_csv(path: Path, name: str) -> tuple[ContinuumTable, bytes]:
    """Read a coefficient file: a header, then one row a Mach number or altitude.

    Raises
    ------
    InputError
        If the file is missing, or a column or cell cannot be used.
    """
    try:
        raw = path.read_bytes()
        text = raw.decode("utf-8-sig")
    except (OSError, UnicodeDecodeError) as error:
        why = error.strerror if isinstance(error, OSError) else "it is not UTF-8 text"
        raise InputError(
            f"cannot be read: {why}", source=name, remedy="give a CSV file, relative to the vehicle file"
        ) from None
    rows = [
        (number, row)
        for number, row in enumerate(csv.reader(text.splitlines()), start=1)
        if row and not row[0].lstrip().startswith("#")
    ]
    if not rows:
        raise InputError("is empty, expected a header and rows", source=name)
    columns = _header(rows[0][1], name, rows[0][0])
    values: dict[str, list[float]] = {meaning: [] for meaning in columns}
    for line, row in rows[1:]:
        if len(row) != len(rows[0][1]):
            raise InputError(
                f"has {len(row)} fields, the header has {len(rows[0][1])}", source=name, line=line
            )
        for meaning, (index, unit) in columns.items():
            number = _cell(row[index], name, line, rows[0][1][index])
            values[meaning].append(to_si(number, unit, "length") if unit else number)
    against = "mach" if "mach" in values else "altitude"
    lift = np.array(values["lift"]) if "lift" in values else None
    try:
        table = ContinuumTable(against, np.array(values[against]), np.array(values["drag"]), lift)
    except ValueError as error:
        raise InputError(str(error), source=name) from None
    return table, raw


_MEANINGS = {
    "mach": "mach",
    "mach number": "mach",
    "altitude": "altitude",
    "drag": "drag",
    "drag coefficient": "drag",
    "lift": "lift",
    "lift coefficient": "lift",
}


def _header(cells: list[str], name: str, line: int) -> dict[str, tuple[int, str]]:
    found: dict[str, tuple[int, str]] = {}
    for index, cell in enumerate(cells):
        header = split_header(cell)
        meaning = _MEANINGS.get(header.meaning)
        remedy = "expected columns: mach or altitude [km], drag, lift"
        if meaning is None or meaning in found:
            what = "is unknown" if meaning is None else "has a meaning that another column has"
            raise InputError(what, source=name, line=line, column=cell, remedy=remedy)
        if meaning == "altitude" and header.unit is None:
            raise InputError(
                "has no unit", source=name, line=line, column=cell, remedy=f"use one of: {accepted('length')}"
            )
        found[meaning] = (index, (header.unit or "") if meaning == "altitude" else "")
    if "drag" not in found or ("mach" in found) == ("altitude" in found):
        raise InputError("needs a column drag and one of mach, altitude", source=name, line=line)
    return found


def _cell(text: str, name: str, line: int, column: str) -> float:
    try:
        return float(text)
    except ValueError:
        raise InputError(
            f"holds '{text.strip()}', expected a number", source=name, line=line, column=column
        ) from None
