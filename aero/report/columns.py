"""A table's columns made ready to read: header and unit for people, cells as aligned text.

Terminal and page both show what this returns, so a number reads the same in both.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from aero.arrays import Floats, floats
from aero.report.names import Table, visible
from aero.report.numbers import MISSING, format_number, scale_for, split_unit
from aero.report.palette import REGIMES

# What people call a column; all others are their own name without unit and underscores.
HEADERS = {
    "bound": "Kn bound",
    "utc": "UTC",
    "knudsen_min": "Kn min",
    "knudsen_max": "Kn max",
    "start_s": "start",
    "end_s": "end",
    "start_altitude_m": "from",
    "end_altitude_m": "to",
    "altitude_min_m": "lowest",
    "altitude_max_m": "highest",
    "altitude_low_m": "altitude low",
    "altitude_high_m": "altitude high",
    "heat_load_share": "share of heat load",
    "speed_loss_share": "share of speed loss",
    "mach": "Mach",
    "reynolds": "Reynolds",
    "knudsen": "Kn",
    "knudsen_shock": "Kn shock",
    "knudsen_emitted": "Kn emitted",
    "cheng": "Cheng",
}
# What a reader needs of the segments at once; the file has the rest.
SEGMENT_COLUMNS = (
    "length",
    "regime",
    "start_s",
    "end_s",
    "start_altitude_m",
    "end_altitude_m",
    "altitude_min_m",
    "altitude_max_m",
    "heat_load_share",
    "speed_loss_share",
    "method",
)
_EXACT = {"bound"}  # chosen numbers: shown as they were given
_DIGITS = {"share": 3}


@dataclass(frozen=True)
class ReadyColumn:
    """One column ready to be shown.

    Attributes
    ----------
    name : str
        As in the table.
    header, unit : str
        For people; the unit is "" for words and plain numbers.
    kind : str
        "number", "regime" or "text".
    cells : tuple of str
        What is shown.
    values : (n,) array or None
        The numbers themselves, unscaled; None for text.
    """

    name: str
    header: str
    unit: str
    kind: str
    cells: tuple[str, ...]
    values: Floats | None

    @property
    def title(self) -> str:
        """Header with its unit in square brackets."""
        return f"{self.header} [{self.unit}]" if self.unit else self.header


def ready(table: Table, columns: Sequence[str] | None = None, *, powers: bool = False) -> list[ReadyColumn]:
    """Return the columns of a table ready to be shown.

    Parameters
    ----------
    table : table
    columns : sequence of str, optional
        Which, and in which order; all by default.
    powers : bool
        Powers of ten as on paper instead of with an "e".

    Raises
    ------
    ValueError
        If a column is not in the table.

    Examples
    --------
    >>> one, two = ready({"altitude_m": [131700.0, 85123.4], "regime": ["slip", "continuum"]})
    >>> one.title, one.cells, two.kind
    ('altitude [km]', ('131.7', '85.12'), 'regime')
    """
    known = [str(name) for name in table]
    wanted = known if columns is None else list(columns)
    missing = [name for name in wanted if name not in known]
    if missing:
        raise ValueError(f"the table has no column {missing[0]!r}; it has: {', '.join(known)}")
    return [_ready(name, np.asarray(table[name]), powers) for name in wanted]


def _ready(name: str, raw: np.ndarray, powers: bool) -> ReadyColumn:
    if _is_number(raw):
        return _numbers(name, raw, powers)
    cells = tuple(_word(value) for value in raw.tolist()) if raw.dtype.kind != "M" else _dates(raw)
    kind = "regime" if cells and all(cell in REGIMES or cell == MISSING for cell in cells) else "text"
    return ReadyColumn(name, _header(name, name), "", kind, cells, None)


def _is_number(raw: np.ndarray) -> bool:
    if raw.dtype.kind in "fiu":
        return True
    if raw.dtype.kind != "O" or raw.size == 0:
        return False
    present = [value for value in raw.tolist() if value is not None]
    numeric = all(isinstance(v, int | float | np.number) and not isinstance(v, bool) for v in present)
    return bool(present) and numeric and not all(v != v for v in present)


def _numbers(name: str, raw: np.ndarray, powers: bool) -> ReadyColumn:
    whole = raw.dtype.kind in "iu"
    values = floats(raw)
    stem, unit = split_unit(name)
    scale = scale_for(values, unit)
    if whole and scale.factor == 1.0:
        cells = [str(int(value)) for value in raw.tolist()]
    elif name in _EXACT:
        cells = [format_number(value, 8, trim=True, powers=powers) for value in values.tolist()]
    else:
        digits = _DIGITS.get(unit, 4)
        cells = [format_number(value, digits, powers=powers) for value in scale(values).tolist()]
    return ReadyColumn(name, _header(name, stem), scale.unit, "number", tuple(cells), values)


def _header(name: str, stem: str) -> str:
    """Return the words of a header; a name a user chose (after the dot) is kept as it is."""
    if name in HEADERS:
        return HEADERS[name]
    family, dot, chosen = stem.partition(".")
    words = HEADERS.get(family, visible(family).replace("_", " "))
    return f"{words} {visible(chosen)}" if dot else words


def _word(value: object) -> str:
    if value is None or value != value:  # None and NaN are no answer
        return MISSING
    if isinstance(value, bool | np.bool_):
        return "yes" if value else "no"
    return visible(value)


def _dates(raw: np.ndarray) -> tuple[str, ...]:
    texts = np.datetime_as_string(raw.astype("datetime64[ms]"))
    return tuple(MISSING if text == "NaT" else f"{text}Z" for text in texts.tolist())
