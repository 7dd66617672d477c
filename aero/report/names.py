"""Names a user chose (vehicles, lengths, files), made fit to be shown anywhere."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

if TYPE_CHECKING:
    import pandas as pd

Table: TypeAlias = "pd.DataFrame | Mapping[str, ArrayLike]"
"""What the report is given: a data frame or a dict of equally long columns."""

REFERENCE = "reference"


def visible(text: object) -> str:
    r"""Return text on one line in which every character is legal in HTML and SVG and can be seen.

    Control characters become their picture (U+2400 and on); direction overrides, lone surrogates and
    characters that XML forbids become the replacement character. Nothing is dropped in silence.

    Examples
    --------
    >>> visible("two\nlines"), visible("a<b>_$%")
    ('two␊lines', 'a<b>_$%')
    """
    return "".join(_visible_character(c) for c in str(text))


def _visible_character(character: str) -> str:
    code = ord(character)
    if code < 0x20:
        return chr(0x2400 + code)
    if code == 0x7F:
        return "\u2421"
    kind = unicodedata.category(character)
    overrides = 0x202A <= code <= 0x202E or 0x2066 <= code <= 0x2069
    if kind in {"Cc", "Cs", "Zl", "Zp"} or overrides or (code & 0xFFFE) == 0xFFFE:
        return "\ufffd"
    return character


def shorten(text: object, limit: int) -> str:
    """Return `visible` text of at most `limit` characters, cut in the middle where it is longer.

    Examples
    --------
    >>> shorten("antenna_boom_tip_fairing", 14)
    'antenna…airing'
    """
    shown = visible(text)
    if len(shown) <= limit:
        return shown
    head = (limit - 1 + 1) // 2
    return f"{shown[:head]}…{shown[len(shown) - (limit - 1 - head) :]}"


def shorten_all(names: Sequence[object], limit: int) -> list[str]:
    """Return names of at most `limit` characters each, names that differ still different.

    Where a cut in the middle would make two alike, both are cut elsewhere; where no cut tells them apart they
    are numbered.

    Examples
    --------
    >>> shorten_all(["antenna_boom_a_tip_fairing", "antenna_boom_b_tip_fairing", "nose"], 14)
    ['ante…m_a_tip_…', 'ante…m_b_tip_…', 'nose']
    """
    firsts = list(dict.fromkeys(names))
    made = {name: shorten(name, limit) for name in firsts}
    alike: dict[str, list[object]] = {}
    for name, short in made.items():
        alike.setdefault(short, []).append(name)
    for group in alike.values():
        if len(group) > 1:
            made |= _told_apart(group, limit)
    return [made[name] for name in names]


def _told_apart(group: Sequence[object], limit: int) -> dict[object, str]:
    """Return beginnings, each with a stretch after it in which the names differ; else numbers."""
    shown = [visible(name) for name in group]
    head = limit // 3
    alike = next((k for k, letters in enumerate(zip(*shown, strict=False)) if len(set(letters)) > 1), 0)
    first = max(alike - 2, head + 1)
    for start in (first, *range(head + 1, max(map(len, shown)))):
        cuts = [f"{text[:head]}…{text[start:]}" for text in shown]
        cuts = [cut if len(cut) <= limit else f"{cut[: limit - 1]}…" for cut in cuts]
        if len(set(cuts)) == len(cuts):
            return dict(zip(group, cuts, strict=True))
    return {
        name: f"{shorten(name, limit - len(str(count)) - 1)} {count}" for count, name in enumerate(group, 1)
    }


def column(table: Table, name: str) -> Floats:
    """Return a column as float64; all NaN where the table has no such column."""
    if name in table:
        return floats(table[name])
    return np.full(row_count(table), np.nan)


def thin_air_limit(table: Table, name: str, continuum_bound: float, length_name: str) -> Floats:
    """Return a free-molecular limit where it says something, NaN elsewhere.

    A decade below the continuum bound nothing leans on it any more, and at low speed it runs off any scale that
    would show the rest.

    Examples
    --------
    >>> thin_air_limit({"c": [9.0, 2.2], "knudsen.nose": [1e-5, 1.0]}, "c", 0.01, "nose").tolist()
    [nan, 2.2]
    """
    values = column(table, name)
    knudsen = column(table, f"knudsen.{length_name}")
    return np.where(knudsen < 0.1 * continuum_bound, np.nan, values)


def row_count(table: Table) -> int:
    """Return the number of rows."""
    for values in dict(table).values():
        return len(np.asarray(values))
    return 0


def texts(table: Table, name: str) -> list[str]:
    """Return a column as a list of str."""
    return [str(value) for value in np.asarray(table[name], dtype=object)]


def has_numbers(table: Table, name: str) -> bool:
    """Return whether a column exists and holds at least one finite number.

    Examples
    --------
    >>> has_numbers({"time_s": [float("nan"), 1.0]}, "time_s"), has_numbers({}, "time_s")
    (True, False)
    """
    return name in table and bool(np.isfinite(column(table, name)).any())


def length_names(columns: Iterable[object]) -> list[str]:
    """Return the lengths that a points table knows, in the order of its columns.

    Examples
    --------
    >>> length_names(["time_s", "knudsen.reference", "regime.reference", "knudsen.seal.2"])
    ['reference', 'seal.2']
    """
    prefix = "knudsen."
    return [name.removeprefix(prefix) for name in map(str, columns) if name.startswith(prefix)]


def length_sizes(points: Table) -> dict[str, float]:
    """Return each length in metres, as free path over Knudsen number [m]; NaN where neither is known."""
    path = column(points, "mean_free_path_m")
    sizes = {}
    for name in length_names(points):
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = path / column(points, f"knudsen.{name}")
        good = ratio[np.isfinite(ratio)]
        sizes[name] = float(good[0]) if good.size else float("nan")
    return sizes
