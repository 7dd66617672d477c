"""The top of a text file: encoding, metadata lines, header, delimiter."""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator
from dataclasses import dataclass

from aero.errors import InputError
from aero.trajectory.columns import recognise
from aero.trajectory.metadata import Statement, statement

DELIMITERS = {",": "commas", "\t": "tabs", ";": "semicolons"}
_LINE_END = re.compile(rb"\r\n|\n|\r")
_BOM = b"\xef\xbb\xbf"
_SAVE = "save it as CSV in UTF-8"


@dataclass(frozen=True)
class Head:
    """What stands above the first row, and where that row begins."""

    statements: tuple[Statement, ...]
    headers: tuple[str, ...]
    delimiter: str
    line: int
    """Line of the header."""
    data_line: int
    """Line of the first row."""
    data_at: int
    """Place of the first row in the bytes."""


def check_text(data: bytes, source: str) -> None:
    """Check that the bytes are UTF-8 text.

    Raises
    ------
    InputError
        If the file is empty, binary, or in another encoding.
    """
    if not data or data.isspace():
        raise InputError("is empty, expected a header and rows", source=source, remedy="give a trajectory")
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        raise InputError("is UTF-16 text, expected UTF-8", source=source, remedy=_SAVE)
    if b"\x00" in data[: 1 << 16]:
        raise InputError("is binary, expected text", source=source, remedy="give a CSV, TSV or Parquet file")
    if data.isascii():
        return
    try:
        data.decode("utf-8")
    except UnicodeDecodeError as fault:
        line = len(_LINE_END.findall(data, 0, fault.start)) + 1
        raise InputError(
            f"holds the byte 0x{data[fault.start]:02x}, which is not UTF-8",
            source=source,
            line=line,
            remedy=_SAVE,
        ) from None


def read_head(data: bytes, source: str, *, tabs: bool = False) -> Head:
    """Read the lines above the data.

    Parameters
    ----------
    data : bytes
        The whole file, UTF-8.
    source : str
        File, for messages.
    tabs : bool
        Whether the file name promises tabs.

    Returns
    -------
    Head

    Raises
    ------
    InputError
        If there is no header.
    """
    at = len(_BOM) if data.startswith(_BOM) else 0
    statements, line = [], 0
    for text, end in _lines(data, at):
        line += 1
        plain = text.strip()
        if plain.startswith(("#", '"#')):
            found = statement(text, line)
            statements += [found] if found else []
        elif plain.strip(",;\t "):
            break
        at = end
    else:
        raise InputError("has no header", source=source, remedy="give a header line and rows")
    delimiter, headers, count, end = _header(data, at, source, line, tabs)
    return Head(tuple(statements), tuple(headers), delimiter, line, line + count, end)


def _lines(data: bytes, at: int) -> Iterator[tuple[str, int]]:
    """Yield each line with its end mark, and where the next begins."""
    while at < len(data):
        mark = _LINE_END.search(data, at)
        end = mark.end() if mark else len(data)
        yield data[at:end].decode("utf-8"), end
        at = end


def _header(data: bytes, at: int, source: str, line: int, tabs: bool) -> tuple[str, list[str], int, int]:
    """Return delimiter, headers, lines taken and where the data begin."""
    best: tuple[int, str, list[str], int, int] | None = None
    for delimiter in sorted(DELIMITERS, key=lambda text: (text == "\t") != tabs):
        ends: list[int] = []

        def feed(ends: list[int] = ends) -> Iterator[str]:
            for text, end in _lines(data, at):
                ends.append(end)
                yield text

        try:
            headers = next(csv.reader(feed(), delimiter=delimiter, skipinitialspace=True, strict=True))
        except csv.Error:
            continue
        known = sum(recognise(header) is not None for header in headers) if len(headers) > 1 else 0
        if best is None or (known, len(headers)) > (best[0], len(best[2])):
            best = known, delimiter, [header.strip() for header in headers], len(ends), ends[-1]
    if best is None:
        raise InputError("has an unclosed quote", source=source, line=line, remedy="close it")
    _, delimiter, headers, count, end = best
    shown = f"{source}, line {line}"
    if len(headers) == 1:
        raise InputError(
            f"the header '{_short(headers[0])}' is a single column, expected columns separated by "
            f"{', '.join(DELIMITERS.values())}",
            source=shown,
            remedy="separate the columns so",
        )
    if all(is_number(header) for header in headers if header):
        raise InputError(
            f"the first line holds numbers ('{_short(delimiter.join(headers))}'), expected a header",
            source=shown,
            remedy="add a line such as 'time_s,altitude_km,speed_m_s' above it",
        )
    return delimiter, headers, count, end


def _short(text: str) -> str:
    return text if len(text) <= 60 else f"{text[:60]}..."


def is_number(text: str) -> bool:
    """Return whether a cell reads as a number (NaN and infinity included).

    Examples
    --------
    >>> is_number(" 1e3 "), is_number("1_000"), is_number("1,5")
    (True, False, False)
    """
    try:
        float(text)
    except ValueError:
        return False
    return "_" not in text
