"""Units at the edge: "120 km" -> 120e3, and column headers that state theirs.

A small table of our own and no unit library: the accepted spellings must be listable in an error
message, and start-up counts (a general unit library alone takes longer than a whole `aero point`).
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

import numpy as np

from aero.errors import InputError

# dimension -> unit -> (factor, offset): SI value = factor * (value + offset)
UNITS: dict[str, dict[str, tuple[float, float]]] = {
    "length": {
        "m": (1.0, 0.0),
        "km": (1e3, 0.0),
        "cm": (1e-2, 0.0),
        "mm": (1e-3, 0.0),
        "um": (1e-6, 0.0),
        "ft": (0.3048, 0.0),  # international foot, exact
        "kft": (304.8, 0.0),
        "in": (0.0254, 0.0),
        "mi": (1609.344, 0.0),
        "nmi": (1852.0, 0.0),  # exact
    },
    "speed": {
        "m/s": (1.0, 0.0),
        "km/s": (1e3, 0.0),
        "km/h": (1.0 / 3.6, 0.0),
        "ft/s": (0.3048, 0.0),
        "kn": (1852.0 / 3600.0, 0.0),
    },
    "angle": {"deg": (math.pi / 180.0, 0.0), "rad": (1.0, 0.0), "mrad": (1e-3, 0.0)},
    "time": {
        "s": (1.0, 0.0),
        "ms": (1e-3, 0.0),
        "min": (60.0, 0.0),
        "h": (3600.0, 0.0),
        "d": (86400.0, 0.0),
        "days": (86400.0, 0.0),
        "yr": (365.25 * 86400.0, 0.0),  # Julian year
    },
    "temperature": {
        "K": (1.0, 0.0),
        "degC": (1.0, 273.15),
        "degF": (5.0 / 9.0, 459.67),
        "degR": (5.0 / 9.0, 0.0),
    },
    "mass": {"kg": (1.0, 0.0), "g": (1e-3, 0.0), "t": (1e3, 0.0), "lb": (0.45359237, 0.0)},
    "area": {"m2": (1.0, 0.0), "cm2": (1e-4, 0.0), "mm2": (1e-6, 0.0), "ft2": (0.3048**2, 0.0)},
    "pressure": {
        "Pa": (1.0, 0.0),
        "hPa": (1e2, 0.0),
        "kPa": (1e3, 0.0),
        "mbar": (1e2, 0.0),
        "bar": (1e5, 0.0),
        "atm": (101325.0, 0.0),
    },
    "density": {"kg/m3": (1.0, 0.0), "g/m3": (1e-3, 0.0), "g/cm3": (1e3, 0.0)},
    "number density": {"1/m3": (1.0, 0.0), "1/cm3": (1e6, 0.0)},
    "ballistic coefficient": {"kg/m2": (1.0, 0.0), "g/cm2": (10.0, 0.0)},
    "energy per mass": {"J/kg": (1.0, 0.0), "MJ/kg": (1e6, 0.0)},
    "heat flux": {"W/m2": (1.0, 0.0), "kW/m2": (1e3, 0.0), "W/cm2": (1e4, 0.0)},
}

_RESPELL = {
    "µm": "um",
    "μm": "um",
    "°": "deg",
    "degrees": "deg",
    "sec": "s",
    "seconds": "s",
    "hours": "h",
    "day": "d",
    "°C": "degC",
    "/m3": "1/m3",
    "m-3": "1/m3",
    "/cm3": "1/cm3",
    "cm-3": "1/cm3",
}
_NUMBER = re.compile(r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?")


@dataclass(frozen=True)
class Header:
    """A column header split into what it means and the unit it states (None when it states none)."""

    text: str
    meaning: str
    unit: str | None


def accepted(dimension: str) -> str:
    """Return the accepted units of a dimension as "m, km, cm, ..."."""
    return ", ".join(UNITS[dimension])


def canonical(unit: str) -> str:
    """Return a unit in our spelling: no spaces, no carets, `/` for division.

    Examples
    --------
    >>> canonical("kg / m^2"), canonical("m s-1"), canonical("m²")
    ('kg/m2', 'm/s', 'm2')
    """
    text = unit.strip().replace("²", "2").replace("³", "3").replace("⁻", "-").replace("¹", "1")
    text = text.replace("**", "").replace("^", "").replace("·", " ").replace("*", " ")
    text = re.sub(r"[ .]+([A-Za-z]+)-1\b", r"/\1", text)
    text = re.sub(r"[ .]+([A-Za-z]+)-([23])\b", r"/\1\2", text)
    text = text.replace(" ", "")
    return _RESPELL.get(text, text)


def article(dimension: str) -> str:
    """Return a dimension with its article.

    Examples
    --------
    >>> article("angle"), article("length")
    ('an angle', 'a length')
    """
    return f"{'an' if dimension[0] in 'aeiou' else 'a'} {dimension}"


def factor(unit: str, dimension: str) -> tuple[float, float] | None:
    """Return (factor, offset) of a unit in a dimension, or None when it is not one of its units."""
    return UNITS[dimension].get(canonical(unit))


def to_si(value: float, unit: str, dimension: str, *, source: str | None = None) -> float:
    """Convert a number in a stated unit to SI (radians for angles).

    Raises
    ------
    InputError
        If the unit does not belong to the dimension.

    Examples
    --------
    >>> to_si(20.0, "degC", "temperature")
    293.15
    """
    found = factor(unit, dimension)
    if found is None:
        raise InputError(
            f"unit '{unit}' is not a unit of {dimension}",
            source=source,
            remedy=f"use one of: {accepted(dimension)}",
        )
    return found[0] * (value + found[1])


def quantity(text: object, dimension: str, *, source: str | None = None, column: str | None = None) -> float:
    """Read a number with its unit, such as "120 km" or "7.5km/s", as SI.

    Parameters
    ----------
    text : object
        What the user wrote. Anything but a string with a unit is an error.
    dimension : str
        A key of `UNITS`.
    source, column : str, optional
        Where it stands, for the error message.

    Returns
    -------
    float
        SI value; radians for angles.

    Raises
    ------
    InputError
        If the number or the unit is missing, unknown, or not finite.

    Examples
    --------
    >>> quantity("120km", "length")
    120000.0
    >>> quantity("1.2e18/m3", "number density")
    1.2e+18
    >>> quantity("100", "length", source="--altitude")
    Traceback (most recent call last):
    aero.errors.InputError: --altitude: '100' has no unit, expected a length such as '100 m'; use one of: \
m, km, cm, mm, um, ft, kft, in, mi, nmi.
    """
    shown = str(text).strip()
    match = _NUMBER.match(shown)
    use = f"use one of: {accepted(dimension)}"
    if match is None:
        raise InputError(
            f"{'holds ' if column else ''}'{shown}', expected a number with a unit of {dimension}",
            source=source,
            column=column,
            remedy=use,
        )
    number, unit = match.group(), shown[match.end() :].strip()
    if not unit:
        example = f"{number} {next(iter(UNITS[dimension]))}"
        raise InputError(
            f"{'holds ' if column else ''}'{shown}'{', which' if column else ''} has no unit, "
            f"expected {article(dimension)} such as '{example}'",
            source=source,
            column=column,
            remedy=use,
        )
    found = factor(unit, dimension)
    if found is None:
        raise InputError(
            f"{'holds ' if column else ''}'{shown}': '{unit}' is not a unit of {dimension}",
            source=source,
            column=column,
            remedy=use,
        )
    value = found[0] * (float(number) + found[1])
    if not math.isfinite(value):
        raise InputError(
            f"{'holds ' if column else ''}'{shown}', expected a finite {dimension}",
            source=source,
            column=column,
        )
    return value


def _suffixes() -> dict[str, str]:
    table = {}
    for units in UNITS.values():
        for unit in units:
            table[unit.removeprefix("1/").replace("/", "_")] = unit
    return table


_SUFFIXES = _suffixes()


def split_header(text: str) -> Header:
    """Split a column header into meaning and unit: "Altitude [km]", "altitude (km)" or "altitude_km".

    The meaning comes back in lower case with single spaces; the unit in our spelling, or None.

    Examples
    --------
    >>> split_header("Altitude [km]").meaning, split_header("Altitude [km]").unit
    ('altitude', 'km')
    >>> split_header("air_speed_m_s").unit, split_header("time").unit
    ('m/s', None)
    """
    bracket = re.fullmatch(r"\s*(.*?)\s*[\[(]\s*([^\])]*?)\s*[\])]\s*", text)
    if bracket:
        return Header(text, _plain(bracket.group(1)), canonical(bracket.group(2)) or None)
    words = re.split(r"[_\s]+", text.strip())
    for count in (2, 1):
        if len(words) > count:
            unit = _SUFFIXES.get("_".join(words[-count:]))
            if unit is not None:
                return Header(text, _plain(" ".join(words[:-count])), unit)
    return Header(text, _plain(text), None)


def _plain(text: str) -> str:
    return re.sub(r"[\s_]+", " ", text.strip()).lower().replace("-", " ")


_UTC = re.compile(
    r"(\d{4})-(?:(\d{2})-(\d{2})|(\d{3}))(?:[T ](\d{2}):(\d{2})(?::(\d{2})(\.\d+)?)?)?(?:Z|[+-]00:?00)?"
)


def utc(text: object, *, source: str | None = None, line: int | None = None) -> np.datetime64:
    """Read a UTC date and time in ISO 8601 as a numpy datetime in microseconds.

    Calendar and day-of-year dates are read; a leap second counts as the first second of the next minute.

    Raises
    ------
    InputError
        If it is not such a date, or states another time zone.

    Examples
    --------
    >>> utc("2026-03-01T12:00:00Z")
    np.datetime64('2026-03-01T12:00:00.000000')
    >>> utc("2025-057T12:00")
    np.datetime64('2025-02-26T12:00:00.000000')
    """
    shown = str(text).strip()
    match = _UTC.fullmatch(shown)
    zone = " (it states another time zone)" if re.search(r"T.*[+-]\d{2}:?\d{2}$", shown) else ""
    error = InputError(
        f"'{shown}' is not a UTC date{zone}, expected ISO 8601 such as '2026-03-01T12:00:00Z'",
        source=source,
        line=line,
    )
    if match is None:
        raise error
    year, month, day, ordinal, hour, minute, second, fraction = match.groups()
    try:
        if ordinal:
            if not 1 <= int(ordinal) <= 366:
                raise error
            date = np.datetime64(f"{year}-01-01", "us") + np.timedelta64(int(ordinal) - 1, "D")
        else:
            date = np.datetime64(f"{year}-{month}-{day}", "us")
    except ValueError:
        raise error from None
    if int(hour or 0) > 23 or int(minute or 0) > 59 or int(second or 0) > 60:
        raise error
    micro = round(float(fraction or 0) * 1e6)
    clock = (int(hour or 0) * 3600 + int(minute or 0) * 60 + int(second or 0)) * 1_000_000 + micro
    return date + np.timedelta64(clock, "us")
