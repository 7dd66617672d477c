"""One flight condition, and a profile of the air, as text for the terminal."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from aero.report.names import Table, shorten
from aero.report.numbers import format_number, format_quantity
from aero.report.table import WIDTH, facts_text, table_text

_LEAST_SHARE = 1e-4  # of the molecules: below it a species is not worth a word
_AIR_COLUMNS = (
    "altitude_m",
    "temperature_K",
    "pressure_Pa",
    "density_kg_m3",
    "number_density_m3",
    "mean_free_path_m",
    "sound_speed_m_s",
)


def condition_text(answer: Mapping[str, Any], *, width: int = WIDTH, colour: bool = False) -> str:
    """Return everything known about one condition.

    Parameters
    ----------
    answer : mapping
        With `air`, `gas`, `lengths` and, where there is a body, `drag` and `heating`, named as in the JSON
        of the same question; `notes` are added at the end.
    width : int
        Columns of the terminal.
    colour : bool
        Colour the regimes' names.

    Examples
    --------
    >>> print(condition_text({"gas": {"mach": 26.3, "dynamic_pressure_Pa": 15.76}, "notes": ["a note"]}))
    Gas
      mach              26.3
      dynamic pressure  15.76 Pa
    <BLANKLINE>
    note: a note
    """
    blocks = []
    if "air" in answer:
        blocks.append(_block("Air", _air(answer["air"])))
    if "gas" in answer:
        blocks.append(_block("Gas", answer["gas"]))
    if answer.get("lengths"):
        blocks.append("Lengths\n" + _lengths(answer["lengths"], width, colour))
    if "drag" in answer:
        blocks.append(_block("Drag coefficient", _banded(answer["drag"], "coefficient", "")))
    if "heating" in answer:
        blocks.append(_block("Stagnation heating", _banded(answer["heating"], "stagnation_W_m2", "W/m²")))
    blocks += [f"note: {shorten(note, 1000)}" for note in answer.get("notes", ())]
    return "\n\n".join(blocks)


def _block(title: str, facts: Mapping[str, Any]) -> str:
    return f"{title}\n{facts_text(facts)}"


def _air(air: Mapping[str, Any]) -> dict[str, Any]:
    """Return the facts of the air, its species as shares of the molecules in one line."""
    facts = {name: value for name, value in air.items() if name != "species_m3"}
    known = {name: n for name, n in air.get("species_m3", {}).items() if n is not None and n > 0.0}
    total = math.fsum(known.values())
    shares = [
        f"{name} {format_number(100.0 * n / total, 3, trim=True)} %"
        for name, n in sorted(known.items(), key=lambda item: -item[1])
        if n >= _LEAST_SHARE * total
    ]
    if shares:
        facts["molecules"] = ", ".join(shares)
    return facts


def _banded(facts: Mapping[str, Any], main: str, unit: str) -> dict[str, Any]:
    """Return facts with the band joined to the value it belongs to, limits after it."""
    low, high = facts.get("low"), facts.get("high")
    shown: dict[str, Any] = {}
    for name, value in facts.items():
        if name in {"low", "high"}:
            continue
        if name == main and value is not None:
            text = format_quantity(value, unit)
            if low is not None and high is not None:
                text += f"  (95 %: {format_quantity(low, unit)} to {format_quantity(high, unit)})"
            shown["bridged"] = text
        elif name == "bridge" and value is not None:
            shown["bridging fraction F"] = value
        else:
            shown[name] = value
    return shown


def _lengths(lengths: Sequence[Mapping[str, Any]], width: int, colour: bool) -> str:
    names = list(lengths[0])
    table = {name: [_number(one[name]) for one in lengths] for name in names}
    return table_text(table, keys=1, width=width, colour=colour)


def _number(value: Any) -> Any:
    return float("nan") if value is None else value


def air_text(columns: Table, *, width: int = WIDTH) -> str:
    """Return a profile of the air as a table, the columns an engineer reads first.

    Examples
    --------
    >>> print(air_text({"altitude_m": [0.0, 1e5], "density_kg_m3": [1.225, 5.604e-7], "n_H_m3": [0.0, 0.0]}))
    altitude    density
        [km]    [kg/m³]
           0      1.225
       100.0  5.604e-07
    """
    shown = [name for name in _AIR_COLUMNS if name in columns]
    return table_text(columns, columns=shown, width=width)
