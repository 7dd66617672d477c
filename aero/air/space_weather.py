"""Daily solar and geomagnetic indices: the history shipped with the package and files of the same format."""

from __future__ import annotations

import csv
import hashlib
from dataclasses import dataclass
from functools import cache, cached_property
from pathlib import Path

import numpy as np

from aero.arrays import Floats, Times
from aero.errors import InputError, nearest

SHIPPED = Path(__file__).parent / "data" / "space_weather.npz"
AP_COLUMNS = tuple(f"ap{i}" for i in range(1, 9))
COLUMNS = ("date", *AP_COLUMNS, "Ap", "f107", "f107a")
_MEND = "the columns are " + ", ".join(COLUMNS)


@dataclass(frozen=True, eq=False)
class Forecast:
    """Monthly means expected after the end of a history.

    Attributes
    ----------
    day : (m,) array [days since 1970]
        Middle of each month.
    f107, f107a : (m,) arrays [sfu]
    last_day : int [days since 1970]
        Last day of the last month.
    """

    day: Floats
    f107: Floats
    f107a: Floats
    last_day: int


@dataclass(frozen=True, eq=False)
class History:
    """Indices of consecutive days.

    Attributes
    ----------
    source : str
        Name for messages and provenance, without a path.
    digest : str
        SHA-256 of the file.
    first_day : int [days since 1970]
    ap3 : (8 n,) array
        3-hourly ap, from 0 h UTC of the first day.
    ap : (n,) array
        Daily Ap.
    f107, f107a : (n,) arrays [sfu]
        F10.7 of the day as observed, and its 81-day mean centred on the day.
    forecast : Forecast or None
    """

    source: str
    digest: str
    first_day: int
    ap3: Floats
    ap: Floats
    f107: Floats
    f107a: Floats
    forecast: Forecast | None = None

    @property
    def last_day(self) -> int:
        """Last observed day [days since 1970]."""
        return self.first_day + self.ap.size - 1

    @cached_property
    def ap3_sum(self) -> Floats:
        """Running sum of `ap3` (8 n + 1,), from 0: of whole numbers, so that differences are exact."""
        return np.concatenate([[0.0], np.cumsum(self.ap3)])


@cache
def shipped() -> History:
    """Return the history shipped with the package: 1957-10-01 to 2025-07-20, monthly forecast to 2041-10.

    Notes
    -----
    ap and Ap: GFZ Potsdam, CC BY 4.0 [Matzka2021]. F10.7 observed, not adjusted to 1 AU: NRC Canada.

    Examples
    --------
    >>> float(shipped().f107[0]), float(shipped().ap[0])
    (269.3, 21.0)
    """
    content = SHIPPED.read_bytes()
    with np.load(SHIPPED) as data:
        month = data["month"].astype("datetime64[M]")
        start = month.astype("datetime64[D]").astype(np.int64)
        end = (month + 1).astype("datetime64[D]").astype(np.int64)
        forecast = Forecast(
            0.5 * (start + end), data["month_f107"] / 10.0, data["month_f107a"] / 10.0, int(end[-1]) - 1
        )
        return History(
            source="indices shipped with aero",
            digest=hashlib.sha256(content).hexdigest(),
            first_day=int(data["first_day"]),
            ap3=data["ap3"].reshape(-1).astype(np.float64),
            ap=data["ap"].astype(np.float64),
            f107=data["f107"] / 10.0,
            f107a=data["f107a"] / 10.0,
            forecast=forecast,
        )


def read_space_weather(path: str | Path) -> History:
    """Read a CSV of daily indices: date, ap1 ... ap8, Ap, f107, f107a, one row a day without gaps.

    Parameters
    ----------
    path : str or Path
        `#` lines are comments; the first other line is the header; more columns are left aside.

    Raises
    ------
    InputError
        If a column is missing, a row has the wrong number of fields, a value is not a number or out of
        range (ap and Ap 0-400, F10.7 above 0), or a date is not the day after the one before it.
    """
    path = Path(path)
    try:
        content = path.read_bytes()
        text = content.decode("utf-8-sig")
    except OSError as error:
        raise InputError(
            f"cannot be read ({error.strerror})", source=path.name, remedy="check the path"
        ) from None
    except UnicodeDecodeError:
        raise InputError("is not UTF-8 text", source=path.name, remedy="save it as a UTF-8 CSV") from None
    rows, lines = _rows(text)
    if not rows:
        raise InputError("holds no rows", source=path.name, remedy=_MEND)
    header = [name.strip() for name in rows.pop(0)]
    header_line = lines.pop(0)
    for name in COLUMNS:
        if header.count(name) != 1:
            raise InputError(
                f"column '{name}' stands {header.count(name)} times in the header, expected once",
                source=path.name,
                line=header_line,
                remedy=nearest(name, [h for h in header if h not in COLUMNS]) or _MEND,
            )
    if not rows:
        raise InputError("holds a header but no days", source=path.name, line=header_line, remedy=_MEND)
    for row, line in zip(rows, lines, strict=True):
        if len(row) != len(header):
            raise InputError(
                f"{len(row)} fields, expected {len(header)} as in the header", source=path.name, line=line
            )
    days = _days([row[header.index("date")] for row in rows], lines, path.name)
    table = {
        name: _numbers([row[header.index(name)] for row in rows], name, lines, path.name)
        for name in COLUMNS[1:]
    }
    return History(
        source=path.name,
        digest=hashlib.sha256(content).hexdigest(),
        first_day=int(days[0]),
        ap3=np.stack([table[name] for name in AP_COLUMNS], axis=1).reshape(-1),
        ap=table["Ap"],
        f107=table["f107"],
        f107a=table["f107a"],
    )


def pack(daily: str | Path, monthly: str | Path, target: str | Path) -> None:
    """Make the shipped file from a daily CSV and a monthly forecast (month, f107, f107a).

    Integers in tenths where the printed values have one decimal, so that nothing is lost.
    """
    history = read_space_weather(daily)
    rows, _ = _rows(Path(monthly).read_text(encoding="utf-8"))
    months = rows[1:]
    np.savez_compressed(
        target,
        first_day=np.int64(history.first_day),
        ap3=history.ap3.reshape(-1, 8).astype(np.uint16),
        ap=history.ap.astype(np.uint16),
        f107=np.rint(history.f107 * 10.0).astype(np.uint16),
        f107a=np.rint(history.f107a * 10.0).astype(np.uint16),
        month=np.array([row[0][:7] for row in months], dtype="datetime64[M]").astype(np.int64),
        month_f107=np.rint(np.array([row[1] for row in months], float) * 10.0).astype(np.uint16),
        month_f107a=np.rint(np.array([row[2] for row in months], float) * 10.0).astype(np.uint16),
    )


def _rows(text: str) -> tuple[list[list[str]], list[int]]:
    """Non-empty, non-comment rows and their line numbers."""
    kept = [
        (number, line)
        for number, line in enumerate(text.splitlines(), 1)
        if line.strip() and not line.lstrip().startswith("#")
    ]
    return list(csv.reader(line for _, line in kept)), [number for number, _ in kept]


def _days(cells: list[str], lines: list[int], source: str) -> Times:
    try:
        days = np.array([cell.strip() for cell in cells], dtype="datetime64[D]")
        bad = np.flatnonzero(np.isnat(days))
    except ValueError:
        days, bad = (
            np.array([], dtype="datetime64[D]"),
            np.flatnonzero([not _is_date(cell) for cell in cells]),
        )
    if bad.size:
        raise InputError(
            f"holds '{cells[bad[0]]}', expected a date such as '2024-05-10'",
            source=source,
            line=lines[bad[0]],
            column="date",
        )
    step = np.diff(days.astype(np.int64))
    wrong = np.flatnonzero(step != 1)
    if wrong.size:
        i = wrong[0] + 1
        raise InputError(
            f"holds {cells[i].strip()} after {cells[i - 1].strip()}, expected the next day",
            source=source,
            line=lines[i],
            column="date",
            remedy="one row a day, in order, without gaps",
        )
    return days.astype(np.int64)


def _is_date(cell: str) -> bool:
    try:
        return not np.isnat(np.datetime64(cell.strip(), "D"))
    except ValueError:
        return False


def _numbers(cells: list[str], name: str, lines: list[int], source: str) -> Floats:
    try:
        values = np.array(cells, dtype=np.float64)
    except ValueError:
        values = np.array([_number(cell) for cell in cells])
    low, high = (np.nextafter(0.0, 1.0), np.inf) if name.startswith("f107") else (0.0, 400.0)
    bad = np.flatnonzero(~((values >= low) & (values <= high) & np.isfinite(values)))
    if bad.size:
        wanted = "a number above 0" if name.startswith("f107") else "a number from 0 to 400"
        raise InputError(
            f"holds '{cells[bad[0]]}', expected {wanted}", source=source, line=lines[bad[0]], column=name
        )
    return values


def _number(cell: str) -> float:
    try:
        return float(cell)
    except ValueError:
        return np.nan
