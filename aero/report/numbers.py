"""Numbers for people: significant figures, prefixes, columns aligned on the decimal point."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from aero.arrays import ArrayLike, floats

MISSING = "–"
_SUPERSCRIPT = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

# unit -> (from this size on, unit shown, factor); what people say aloud in this trade
PREFIXES: dict[str, tuple[tuple[float, str, float], ...]] = {
    "m": ((1e3, "km", 1e-3), (0.1, "m", 1.0), (1e-4, "mm", 1e3), (1e-7, "µm", 1e6), (0.0, "nm", 1e9)),
    "m/s": ((1e3, "km/s", 1e-3), (0.0, "m/s", 1.0)),
    "W/m²": ((1e6, "MW/m²", 1e-6), (1e3, "kW/m²", 1e-3), (0.0, "W/m²", 1.0)),
    "J/m²": ((1e6, "MJ/m²", 1e-6), (1e3, "kJ/m²", 1e-3), (0.0, "J/m²", 1.0)),
    "Pa": ((1e6, "MPa", 1e-6), (1e3, "kPa", 1e-3), (0.1, "Pa", 1.0), (1e-4, "mPa", 1e3), (0.0, "µPa", 1e6)),
    "s": ((2 * 86400.0, "d", 1 / 86400.0), (3 * 3600.0, "h", 1 / 3600.0), (0.0, "s", 1.0)),
    "Pa s": ((0.0, "µPa s", 1e6),),
    "kg/mol": ((0.0, "g/mol", 1e3),),
    "share": ((0.0, "%", 100.0),),
}

# suffix of a column name -> unit; longer ones first
SUFFIXES = {
    "_per_m": "1/m",
    "_kg_mol": "kg/mol",
    "_kg_m3": "kg/m³",
    "_kg_m2": "kg/m²",
    "_W_m2": "W/m²",
    "_J_m2": "J/m²",
    "_m_s2": "m/s²",
    "_Pa_s": "Pa s",
    "_m_s": "m/s",
    "_deg": "°",
    "_days": "d",
    "_m3": "1/m³",
    "_m2": "m²",
    "_Pa": "Pa",
    "_kg": "kg",
    "_K": "K",
    "_s": "s",
    "_m": "m",
    "_share": "share",
}


@dataclass(frozen=True)
class Scale:
    """A unit to show numbers in, and the factor that takes SI to it."""

    unit: str
    factor: float

    def __call__(self, values: ArrayLike) -> np.ndarray:
        """Return SI values in this unit."""
        return floats(values) * self.factor


def scale_for(values: ArrayLike, unit: str) -> Scale:
    """Return the prefix in which the largest of `values` is easily read.

    Parameters
    ----------
    values : array
        SI values; NaN is left out.
    unit : str
        A key of `PREFIXES`, or any other unit, which then is kept.

    Examples
    --------
    >>> scale_for([0.0, 1.31e5], "m").unit, scale_for([2e5], "W/m²").unit, scale_for([1.0], "K").unit
    ('km', 'kW/m²', 'K')
    """
    sizes = np.abs(floats(values))
    sizes = sizes[np.isfinite(sizes)]
    largest = float(sizes.max()) if sizes.size else 0.0
    steps = PREFIXES.get(unit, ((0.0, unit, 1.0),))
    if largest == 0.0:
        plain = [step for step in steps if step[2] == 1.0] or [steps[-1]]
        return Scale(plain[0][1], plain[0][2])
    for start, shown, factor in steps:
        if largest >= start:
            return Scale(shown, factor)
    raise AssertionError("every list of prefixes ends at zero")


def split_unit(name: str) -> tuple[str, str]:
    """Return what a column is called and the unit its name ends in ("" when it has none).

    Examples
    --------
    >>> split_unit("air_speed_m_s"), split_unit("n_N2_m3"), split_unit("knudsen.arm_m")
    (('air_speed', 'm/s'), ('n_N2', '1/m³'), ('knudsen.arm_m', ''))
    """
    if "." in name:
        return name, ""
    for suffix, unit in SUFFIXES.items():
        if name.endswith(suffix) and len(name) > len(suffix):
            return name.removesuffix(suffix), unit
    return name, ""


def format_number(value: float, digits: int = 4, *, trim: bool = False, powers: bool = False) -> str:
    """Return a number in significant figures; digits before the point are never rounded away.

    Parameters
    ----------
    value : float
        NaN gives an en dash.
    digits : int
        Significant figures.
    trim : bool
        Drop zeros after the point that end the number.
    powers : bool
        Write powers of ten as people do (1.2×10⁻⁷) instead of 1.2e-07.

    Examples
    --------
    >>> format_number(131704.6), format_number(85.1234), format_number(0.012345, 3), format_number(99.996)
    ('131705', '85.12', '0.0123', '100.0')
    >>> format_number(5.604e-7), format_number(5.604e-7, powers=True), format_number(float("nan"))
    ('5.604e-07', '5.604×10⁻⁷', '–')
    """
    value = float(value)
    if math.isnan(value):
        return MISSING
    if math.isinf(value):
        return "∞" if value > 0 else "-∞"
    if value == 0.0:
        return "0"
    mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
    power = int(exponent)
    if -4 <= power < max(digits + 3, 7):
        text = f"{value:.{max(digits - 1 - power, 0)}f}"
        return text.rstrip("0").rstrip(".") if trim and "." in text else text
    if trim and "." in mantissa:
        mantissa = mantissa.rstrip("0").rstrip(".")
    if powers:
        return f"{mantissa}×10{str(power).translate(_SUPERSCRIPT)}"
    return f"{mantissa}e{power:+03d}"


def format_quantity(value: float, unit: str, digits: int = 4) -> str:
    """Return a number with the unit people would say.

    Parameters
    ----------
    value : float
        In SI.
    unit : str
        SI unit, as in `PREFIXES` where a prefix is wanted; "share" gives per cent, "" no unit.

    Examples
    --------
    >>> format_quantity(131704.6, "m"), format_quantity(0.0015, "m"), format_quantity(1.23e6, "W/m²")
    ('131.7 km', '1.5 mm', '1.23 MW/m²')
    >>> format_quantity(0.92, "share", 3), format_quantity(12.0, "deg")
    ('92 %', '12 deg')
    """
    if not math.isfinite(value):
        return format_number(value)
    scale = scale_for(value, unit)
    return f"{format_number(value * scale.factor, digits, trim=True, powers=True)} {scale.unit}".strip()


def split_decimal(text: str) -> tuple[str, str]:
    """Return what stands before the decimal point and the rest with the point.

    Examples
    --------
    >>> split_decimal("85.12"), split_decimal("131705"), split_decimal("5.6e-07")
    (('85', '.12'), ('131705', ''), ('5', '.6e-07'))
    """
    cut = next((i for i, c in enumerate(text) if c in ".e×"), len(text))
    return text[:cut], text[cut:]


def align_decimals(cells: Iterable[str]) -> list[str]:
    """Return the cells padded with spaces to one width, their decimal points under each other.

    Examples
    --------
    >>> align_decimals(["85.12", "131705", "0.5"])
    ['    85.12', '131705   ', '     0.5 ']
    """
    parts = [split_decimal(cell) for cell in cells]
    before = max((len(whole) for whole, _ in parts), default=0)
    after = max((len(rest) for _, rest in parts), default=0)
    return [whole.rjust(before) + rest.ljust(after) for whole, rest in parts]


def plain_powers(values: Sequence[float]) -> list[str]:
    """Return labels for decades: plain from 0.001 to 10000, powers of ten beyond.

    Examples
    --------
    >>> plain_powers([1e-9, 0.01, 1.0, 1000.0, 1e6])
    ['10⁻⁹', '0.01', '1', '1000', '10⁶']
    """
    labels = []
    for value in values:
        power = round(math.log10(value))
        exact = math.isclose(value, 10.0**power, rel_tol=1e-9)
        if exact and not -3 <= power <= 4:
            labels.append(f"10{str(power).translate(_SUPERSCRIPT)}")
        else:
            labels.append(format_number(value, trim=True, powers=True))
    return labels
