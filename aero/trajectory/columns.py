"""Says what each column of a file means, from its header.

A header is split into words and a unit by `aero.units.split_header`; the words are looked up among the
meanings.
"""

from __future__ import annotations

import difflib
from collections.abc import Sequence
from dataclasses import dataclass

from aero.arrays import Floats
from aero.errors import InputError, nearest
from aero.trajectory.meanings import LONG, MEANINGS, REQUIRED, SHORT, Meaning
from aero.units import UNITS, accepted, canonical, split_header

UTC_UNITS = ("UTC", "ISO", "ISO8601")  # what a time column may state instead of a unit of time


@dataclass(frozen=True)
class Column:
    """A column whose meaning is known: where it stands, and how it becomes SI."""

    index: int
    header: str
    words: str
    meaning: Meaning
    unit: str | None
    """None for dates, which need none."""
    factor: float = 1.0
    offset: float = 0.0

    def si(self, values: Floats) -> Floats:
        """Return values in this column's unit as SI, without a copy where it already is SI."""
        shifted = values + self.offset if self.offset else values
        return shifted * self.factor if self.factor != 1.0 else shifted


@dataclass(frozen=True)
class Layout:
    """All columns of a file: those with a meaning by its name, the others by their place."""

    columns: dict[str, Column]
    extras: dict[int, str]
    notes: tuple[str, ...] = ()
    nameless: tuple[int, ...] = ()


def recognise(header: str) -> tuple[Meaning, str, str | None] | None:
    """Return (meaning, words, unit as stated) of a column header, or None when it has no known meaning.

    Examples
    --------
    >>> meaning, words, unit = recognise("ALTITUDE_KM")
    >>> meaning.name, words, unit
    ('altitude', 'altitude', 'km')
    >>> recognise("T [K]") is None  # a temperature, no time
    True
    """
    split = split_header(header)
    words, unit = split.meaning, split.unit
    meaning = LONG.get(words) or SHORT.get(words)
    if meaning is None and unit is None:  # a suffix in another case, such as ALTITUDE_KM
        parts = words.split()
        for count in (2, 1):
            stem, tail = " ".join(parts[:-count]), "/".join(parts[-count:])
            found = LONG.get(stem) or SHORT.get(stem)
            if found and _unit(tail, found.dimension):
                meaning, words, unit = found, stem, tail
                break
    if meaning is None or (words in SHORT and unit is not None and not _unit(unit, meaning.dimension)):
        return None
    return meaning, words, unit


def _unit(unit: str, dimension: str) -> str | None:
    # Within one dimension no two units differ by case alone, so "KM" can only be kilometres.
    text = canonical(unit)
    if text in UNITS[dimension]:
        return text
    return {name.lower(): name for name in UNITS[dimension]}.get(text.lower())


def lay_out(headers: Sequence[str], *, source: str, line: int | None = None) -> Layout:
    """Say what each column of a file means.

    Parameters
    ----------
    headers : sequence of str
        Column headers in file order.
    source : str
        File, for messages.
    line : int, optional
        Line of the header.

    Returns
    -------
    Layout
        A time column without a unit comes back with unit None: whether it holds dates, its cells say.

    Raises
    ------
    InputError
        If a unit is missing or wrong, two columns have one meaning or one name, or altitude or speed
        is not there.

    Examples
    --------
    >>> layout = lay_out(["time_s", "altitude [km]", "velocity_m_s", "phase"], source="descent.csv")
    >>> list(layout.columns), layout.extras
    (['time', 'altitude', 'speed'], {3: 'phase'})
    """
    columns: dict[str, Column] = {}
    extras: dict[int, str] = {}
    notes: list[str] = []
    nameless = tuple(index for index, header in enumerate(headers) if not header.strip())
    for index, header in enumerate(headers):
        if index in nameless:
            continue
        found = recognise(header)
        if found is None:
            if header in extras.values():
                raise InputError(
                    f"two columns are named '{header}'",
                    source=source,
                    line=line,
                    remedy="rename or remove one",
                )
            extras[index] = header
            notes += _slip(header)
            continue
        meaning, words, unit = found
        if meaning.name in columns:
            raise InputError(
                f"columns '{columns[meaning.name].header}' and '{header}' both give the {meaning.name}",
                source=source,
                line=line,
                remedy="keep one, or rename the other",
            )
        columns[meaning.name] = _column(index, header, words, meaning, unit, source, line)
    for name in REQUIRED:
        if name not in columns:
            raise _missing(MEANINGS[name], headers, source, line)
    return Layout(columns, extras, tuple(notes), nameless)


def _slip(header: str) -> list[str]:
    # 0.8 and up is a slip of the finger ("latitud"); below it, another word altogether ("attitude rate").
    close = difflib.get_close_matches(split_header(header).meaning, list(LONG), n=1, cutoff=0.8)
    if not close:
        return []
    return [f"column '{header}' has no known meaning and is carried through; did you mean '{close[0]}'?"]


def _column(
    index: int, header: str, words: str, meaning: Meaning, unit: str | None, source: str, line: int | None
) -> Column:
    if meaning.name == "time" and (unit is None or canonical(unit).upper() in UTC_UNITS):
        return Column(index, header, words, meaning, None if unit is None else "UTC")
    if unit is None:
        raise bare(header, meaning, source, line)
    known = _unit(unit, meaning.dimension)
    if known is None:
        raise InputError(
            f"states '{unit}', which is not a unit of {meaning.dimension}",
            source=source,
            line=line,
            column=header,
            remedy=f"use one of: {accepted(meaning.dimension)}",
        )
    factor, offset = UNITS[meaning.dimension][known]
    return Column(index, header, words, meaning, known, factor, offset)


def bare(header: str, meaning: Meaning, source: str, line: int | None) -> InputError:
    """Return the error for a dimensional column that states no unit."""
    units = list(UNITS[meaning.dimension])
    dates = ", or dates in ISO 8601 such as '2026-03-01T12:00:00Z'" if meaning.name == "time" else ""
    return InputError(
        f"states no unit, expected one of {meaning.dimension} in brackets or as a suffix, "
        f"such as '{header.strip()} [{units[0]}]'{dates}",
        source=source,
        line=line,
        column=header,
        remedy=f"use one of: {', '.join(units)}",
    )


def _missing(meaning: Meaning, headers: Sequence[str], source: str, line: int | None) -> InputError:
    shown = ", ".join(f"'{header}'" for header in headers[:12]) + (", ..." if len(headers) > 12 else "")
    words = [split_header(header).meaning for header in headers]
    guess = [nearest(text, meaning.synonyms) for text in words]
    hint = next((text for text in guess if text), None)
    return InputError(
        f"no column gives the {meaning.name}, expected one such as '{meaning.column}' "
        f"or '{meaning.name} [{next(iter(UNITS[meaning.dimension]))}]' among {shown}",
        source=source,
        line=line,
        remedy=hint or f"name one of the columns so, or with one of: {', '.join(meaning.synonyms[:4])}",
    )
