"""The rows of a text file as arrays: fast while all is well, cell by cell once something is not."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from itertools import islice
from typing import Any

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats, Times
from aero.errors import InputError
from aero.trajectory.columns import Layout
from aero.trajectory.csv_head import Head, is_number
from aero.units import utc

_PROBE_ROWS = 100  # looked at to tell names such as 007 from numbers
_WHOLE = re.compile(r"\s*-?[0-9]+\s*")
_CHUNK_ROWS = 16_384


@dataclass(frozen=True)
class Found:
    """Columns by place (see `aero.trajectory.table.Table`), and rows that fell apart."""

    count: int
    values: dict[int, NDArray[Any]]
    broken: dict[int, str] = field(default_factory=dict)


class Rows:
    """The cells as they stand, and their lines. Taken apart only when something must be looked at."""

    def __init__(self, data: bytes, head: Head, source: str) -> None:
        self._data, self._head, self._source = data, head, source

    def records(self, at: int | None = None) -> Iterator[tuple[int, list[str]]]:
        """Yield every row that is not blank with the line it begins in, from a place in the bytes on."""
        stream = io.BytesIO(self._data)
        stream.seek(self._head.data_at if at is None else at)
        reader = csv.reader(
            io.TextIOWrapper(stream, encoding="utf-8", newline=""),
            delimiter=self._head.delimiter,
            strict=True,
        )
        before = self._head.data_line - 1
        end = before
        try:
            for row in reader:
                start, end = end + 1, before + reader.line_num
                if len(row) > 1 or (row and row[0].strip()):
                    yield start, row
        except csv.Error as fault:
            raise InputError(
                f"a row that begins here is not well formed ({fault})",
                source=self._source,
                line=end + 1,
                remedy="close every quote, and double quotes inside quotes",
            ) from None

    @cached_property
    def first(self) -> list[list[str]]:
        """The first rows."""
        try:
            return [row for _, row in islice(self.records(), _PROBE_ROWS)]
        except InputError:  # it will be raised again with all rows, if the fast way cannot read them either
            return []

    @cached_property
    def lines(self) -> NDArray[np.int64]:
        """The line each row begins in."""
        return np.fromiter((line for line, _ in self.records()), dtype=np.int64)

    @cached_property
    def _starts(self) -> NDArray[np.int64]:
        """Where each line from the first row on begins in the bytes."""
        data = np.frombuffer(self._data, dtype=np.uint8)[self._head.data_at :]
        feeds, returns = data == 10, data == 13
        returns[:-1] &= ~feeds[1:]  # the two marks of one line end count once
        return np.concatenate([[0], np.flatnonzero(feeds | returns) + 1]) + self._head.data_at

    def line(self, index: int) -> int:
        """Return the line a row begins in."""
        return int(self.lines[index])

    def cell(self, index: int, place: int) -> str:
        """Return a cell as it stands, empty where the row is too short."""
        _, row = next(self.records(int(self._starts[self.line(index) - self._head.data_line])))
        return row[place] if place < len(row) else ""


def fast_columns(data: bytes, head: Head, layout: Layout, first: list[list[str]]) -> Found | None:
    """Read all rows at once; None when they need a closer look.

    Notes
    -----
    Whatever this reads, `careful_columns` reads the same; it declines whenever it is not sure.
    """
    # 0x1 would be taken for a whole number in hexadecimal; here it is text. One letter is found sooner.
    if (b"x" in data and b"0x" in data) or (b"X" in data and b"0X" in data):
        return None
    names = [str(place) for place in range(len(head.headers))]
    dates = {
        str(c.index) for c in layout.columns.values() if c.meaning.name == "time" and c.unit in (None, "UTC")
    }
    numbers = {str(column.index) for column in layout.columns.values()} - dates
    texts = dates | {names[place] for place in layout.nameless}
    texts |= {names[place] for place in layout.extras if _leading_zeros(first, place)}
    table = _arrow_table(data, head, names, numbers, texts)
    # The last row of a spreadsheet may be all empty.
    if table is None or all(table.column(name)[-1].as_py() in (None, "") for name in names):
        return None
    values: dict[int, NDArray[Any]] = {}
    for place, name in enumerate(names):
        found = _dates(table.column(name)) if name in dates else _array(table.column(name))
        if found is None:
            return None
        values[place] = found
    return Found(table.num_rows, values)


def _arrow_table(data: bytes, head: Head, names: list[str], numbers: set[str], texts: set[str]) -> Any:
    """Return all rows as an Arrow table; None when it has none or is not sure of them."""
    import pyarrow as pa
    from pyarrow import csv as arrow_csv

    types = {**dict.fromkeys(numbers, pa.float64()), **dict.fromkeys(texts, pa.string())}
    quotes = b'"' in data
    while True:
        try:
            table = arrow_csv.read_csv(
                pa.py_buffer(memoryview(data)[head.data_at :]),
                read_options=arrow_csv.ReadOptions(column_names=names),
                parse_options=arrow_csv.ParseOptions(delimiter=head.delimiter, newlines_in_values=quotes),
                convert_options=arrow_csv.ConvertOptions(
                    column_types=types,
                    null_values=[""],
                    true_values=[],
                    false_values=[],
                    strings_can_be_null=False,
                ),
            )
        except pa.ArrowException:
            return None
        # Dates and times of day among the columns carried through stay the text they are.
        plain = {n for n in names if n not in types and not _carried_as_is(table.column(n).type)}
        if not plain:
            break
        types |= dict.fromkeys(plain, pa.string())
    # An unclosed quote swallows rows without a word.
    lost = quotes and table.num_rows != _filled_lines(data[head.data_at :])
    return None if lost or not table.num_rows else table


def _filled_lines(data: bytes) -> int:
    return sum(1 for line in data.splitlines() if line.strip())


def _leading_zeros(first: list[list[str]], place: int) -> bool:
    # "007" is a name and no number; the first rows are taken to show it.
    cells = (row[place].strip() for row in first if place < len(row))
    return any(len(cell) > 1 and cell[0] == "0" and cell.isdigit() for cell in cells)


def _carried_as_is(kind: Any) -> bool:
    import pyarrow as pa

    return bool(
        pa.types.is_null(kind)
        or pa.types.is_int64(kind)
        or pa.types.is_float64(kind)
        or pa.types.is_string(kind)
    )


def _array(column: Any) -> NDArray[Any]:
    import pyarrow as pa

    if pa.types.is_null(column.type):
        return np.full(len(column), np.nan)
    if pa.types.is_string(column.type):
        return np.asarray(column.to_numpy(), dtype=object)
    return np.asarray(column.to_numpy())  # integers with gaps become float64


def _dates(column: Any) -> Times | None:
    import pyarrow as pa
    from pyarrow import compute

    trimmed = compute.utf8_rtrim(compute.utf8_trim_whitespace(column), characters="Z")
    try:
        return np.asarray(compute.cast(trimmed, pa.timestamp("us")).to_numpy(), dtype="datetime64[us]")
    except pa.ArrowException:
        return None


def careful_columns(rows: Rows, head: Head, layout: Layout) -> Found:
    """Read all rows cell by cell: NaN and NaT where a cell does not read, and which rows fell apart."""
    width = len(head.headers)
    numbers = {column.index for column in layout.columns.values() if column.unit not in (None, "UTC")}
    dates = {column.index for column in layout.columns.values()} - numbers
    broken: dict[int, str] = {}
    lines: list[int] = []
    pieces: list[list[Any]] = [[] for _ in range(width)]
    filled = 0  # rows up to the last that is not all empty: a spreadsheet may leave some at the end
    records = rows.records()
    while chunk := list(islice(records, _CHUNK_ROWS)):
        for index, (line, row) in enumerate(chunk, len(lines)):
            lines.append(line)
            if any(cell.strip() for cell in row):
                filled = index + 1
            if len(row) != width:
                broken[index] = _broken(row, width)
                row.extend([""] * (width - len(row)))
        for place in range(width):
            texts = [row[place] for _, row in chunk]
            pieces[place].append(
                _numbers(texts) if place in numbers else dates_of(texts) if place in dates else texts
            )
    rows.lines = np.array(lines[:filled], dtype=np.int64)
    broken = {index: reason for index, reason in broken.items() if index < filled}
    values = {
        place: np.concatenate(parts)[:filled]
        if place in numbers | dates
        else carried([text for part in parts for text in part][:filled], broken)
        for place, parts in enumerate(pieces)
        if parts
    }
    return Found(filled, values, broken)


def _broken(row: list[str], width: int) -> str:
    if row[0].startswith("#"):
        return "is a '#' line among the rows, expected above the header"
    return f"has {len(row)} field{'' if len(row) == 1 else 's'}, expected {width} as in the header"


def _numbers(texts: list[str]) -> Floats:
    try:
        if "_" not in "".join(texts):
            return np.array(list(map(float, texts)), dtype=np.float64)
    except ValueError:
        pass
    return np.array([_number(text) for text in texts], dtype=np.float64)


def _number(text: str) -> float:
    return float(text) if is_number(text) else np.nan


def dates_of(texts: Sequence[str | None]) -> Times:
    """Return UTC dates, NaT where a text is none."""
    return np.array([_date(text) for text in texts], dtype="datetime64[us]")


def _date(text: str | None) -> np.datetime64:
    try:
        return utc(text)
    except InputError:
        return np.datetime64("NaT", "us")


def carried(texts: list[str], broken: dict[int, str]) -> NDArray[Any]:
    """Return a column without a meaning as whole numbers, numbers or text, whichever all its cells are."""
    whole = [text for index, text in enumerate(texts) if text and index not in broken]
    zeros = any(len(text) > 1 and text[0] == "0" and text.isdigit() for text in whole[:_PROBE_ROWS])
    if zeros or not all(is_number(text) for text in whole):
        return np.array(texts, dtype=object)
    if len(whole) == len(texts) and all(_WHOLE.fullmatch(text) for text in texts):
        try:
            return np.array([int(text) for text in texts], dtype=np.int64)
        except OverflowError:
            pass
    return np.array([_number(text) for text in texts], dtype=np.float64)
