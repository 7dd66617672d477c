"""Metadata lines above the header, `# key: value`, and the same keys in a Parquet file."""

from __future__ import annotations

import difflib
import json
import re
from collections.abc import Iterable
from dataclasses import dataclass, field

import numpy as np

from aero.errors import InputError, choose
from aero.trajectory.frames import ALTITUDE_KINDS, VELOCITY_FRAMES
from aero.trajectory.meanings import MEANINGS
from aero.units import quantity, utc

FIXED = tuple(meaning.name for meaning in MEANINGS.values() if meaning.fixed)
KEYS: dict[str, str] = {
    "name": "Steep return",
    "comment": "any words",
    "epoch": "2026-03-01T12:00:00Z",
    "velocity frame": "inertial",
    "altitude kind": "geocentric",
    **{name: "300 K" if MEANINGS[name].dimension == "temperature" else "45 deg" for name in FIXED},
}
"""Known keys, each with an example of its value."""
CHOICES: dict[str, tuple[str, ...]] = {
    "velocity frame": VELOCITY_FRAMES,
    "altitude kind": tuple(ALTITUDE_KINDS),
}

# Words for which a known key was surely meant: taking them as unknown would silently change the result.
_MEANT = {
    "date": "epoch",
    "utc": "epoch",
    "t0": "epoch",
    "time zero": "epoch",
    "start": "epoch",
    "start time": "epoch",
    "start date": "epoch",
    "lat": "latitude",
    "lon": "longitude",
    "azimuth": "heading",
    "frame": "velocity frame",
    "reference frame": "velocity frame",
    "speed frame": "velocity frame",
    "coordinate frame": "velocity frame",
    "altitude": "altitude kind",
    "altitude type": "altitude kind",
    "altitude reference": "altitude kind",
}
_LINE = re.compile(r"([A-Za-z][A-Za-z0-9 _-]{0,39}?)\s*:(?!//)\s*(.*)")


@dataclass(frozen=True)
class Statement:
    """One `key: value`, and the line it stands in (None where there are no lines)."""

    key: str
    value: str
    line: int | None


@dataclass
class Metadata:
    """What the metadata of a file say."""

    name: str | None = None
    epoch: np.datetime64 | None = None
    choices: dict[str, str] = field(default_factory=dict)
    fixed: dict[str, float] = field(default_factory=dict)
    """Meaning -> SI value for all points."""
    notes: list[str] = field(default_factory=list)


def statement(text: str, line: int) -> Statement | None:
    """Read a `#` line as a statement; None when it is a plain comment.

    Examples
    --------
    >>> statement("# Velocity_Frame: inertial,,", 2)
    Statement(key='velocity frame', value='inertial', line=2)
    >>> statement("# made by hand", 1) is None
    True
    """
    # A spreadsheet that saves the file again pads the line with separators and may quote it.
    shown = text.strip().rstrip(",;\t ")
    if shown.startswith('"#') and shown.endswith('"'):
        shown = shown[1:-1].replace('""', '"')
    match = _LINE.fullmatch(shown.lstrip("# \t"))
    if match is None:
        return None
    return Statement(plain_key(match.group(1)), match.group(2).strip(), line)


def plain_key(key: str) -> str:
    """Return a key in lower case with single spaces, a known one in our spelling."""
    words = re.sub(r"[\s_-]+", " ", key.strip()).lower()
    return next((known for known in KEYS if known.replace("-", " ") == words), words)


def understand(statements: Iterable[Statement], *, source: str) -> Metadata:
    """Say what the statements mean.

    Parameters
    ----------
    statements : iterable of Statement
    source : str
        File, for messages.

    Returns
    -------
    Metadata
        With a note for every unknown key.

    Raises
    ------
    InputError
        If a key is nearly a known one or stands twice, or a value cannot be read.

    Examples
    --------
    >>> understand([Statement("latitude", "90 deg", 1)], source="descent.csv").fixed
    {'latitude': 1.5707963267948966}
    """
    told = Metadata()
    seen: set[str] = set()
    for item in statements:
        key, where = item.key, source if item.line is None else f"{source}, line {item.line}"
        if key == "comment":
            continue
        if key not in KEYS:
            meant = _nearly(key)
            if meant:
                raise InputError(
                    f"metadata key '{key}' is not known",
                    source=where,
                    remedy=f"did you mean '{meant}' (as in '# {meant}: {KEYS[meant]}')?",
                )
            told.notes.append(f"metadata key '{key}' is not known and was not used")
            continue
        if key in seen:
            raise InputError(f"metadata key '{key}' stands twice", source=where, remedy="keep one")
        seen.add(key)
        _take(told, key, item.value, where)
    return told


def _nearly(key: str) -> str | None:
    if key in _MEANT:
        return _MEANT[key]
    # 'comments' or 'names' change no result, so they may pass with a note.
    matter = [known for known in KEYS if known not in ("name", "comment")]
    close = difflib.get_close_matches(key, matter, n=1, cutoff=0.75)
    return close[0] if close else None


def _take(told: Metadata, key: str, value: str, where: str) -> None:
    if not value:
        raise InputError(
            f"metadata key '{key}' has no value, expected one such as '{KEYS[key]}'",
            source=where,
            remedy="give the value or remove the line",
        )
    if key == "name":
        told.name = unquoted(value)
    elif key == "epoch":
        told.epoch = utc(value, source=f"{where}, metadata key 'epoch'")
    elif key in CHOICES:
        told.choices[key] = choose(value.lower(), CHOICES[key], f"metadata key '{key}'", source=where)
    else:
        meaning = MEANINGS[key]
        number = quantity(value, meaning.dimension, source=f"{where}, metadata key '{key}'")
        if meaning.outside(np.array([number])) is not None:
            raise InputError(
                f"metadata key '{key}' is '{value}', expected {meaning.bounds}",
                source=where,
                remedy="mend the value",
            )
        told.fixed[key] = number


def quoted(text: str) -> str:
    """Return a text as one metadata value: in JSON quotes where plain words would not read back."""
    plain = text.isprintable() and text == text.strip().rstrip(",;\t ") and text and text[0] not in '"#'
    return text if plain else json.dumps(text)


def unquoted(value: str) -> str:
    """Return the text of a metadata value written by `quoted`."""
    if len(value) > 1 and value[0] == value[-1] == '"':
        try:
            text = json.loads(value)
        except ValueError:
            return value
        return str(text)
    return value
