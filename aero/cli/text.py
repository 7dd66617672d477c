"""Results as text for a person."""

from __future__ import annotations

import sys
import textwrap
from collections.abc import Mapping, Sequence
from typing import Any

from aero.cli.show import WIDTH
from aero.report import SEGMENT_COLUMNS, facts_text, table_text

CROSSING_COLUMNS = (
    "length",
    "bound",
    "direction",
    "time_s",
    "altitude_m",
    "altitude_low_m",
    "altitude_high_m",
)


_PARTS = (("drag", "Drag"), ("attitude", "Attitude"), ("heating", "Stagnation heating"))


def colour() -> bool:
    """Whether stdout is a terminal that may show colours."""
    return sys.stdout.isatty()


def condition_text(answer: Mapping[str, Any]) -> str:
    """Return a condition as `aero point` shows it."""
    air = {k: v for k, v in answer["air"].items() if k not in ("model", "species_m3")}
    shares = answer["air"]["species_m3"]
    total = answer["air"]["number_density_m3"]
    mixture = ", ".join(f"{name} {100 * n / total:.3g} %" for name, n in shares.items() if n > 1e-6 * total)
    gas = dict(answer["gas"])
    gas["unit_Reynolds_number_(1/m)"] = gas.pop("reynolds_per_m")
    parts = [
        "Air",
        facts_text({**air, "composition": mixture}),
        f"\nGas (mean free path: {gas.pop('free_path_model')})",
        facts_text(gas),
        "",
        table_text(_columns(answer["lengths"]), colour=colour()),
    ]
    for key, title in _PARTS:
        if key in answer:
            parts += [f"\n{title}", facts_text(_known(answer[key]))]
    return "\n".join(parts)


def _known(values: Mapping[str, Any]) -> dict[str, Any]:
    # low and high are the 95 % band; a coefficient has no unit, a flux has
    unit = "_W_m2" if "stagnation_W_m2" in values else ""
    names = {"low": f"low_(95_%){unit}", "high": f"high_(95_%){unit}"}
    return {names.get(k, k): v for k, v in values.items()}


def _columns(rows: Sequence[Mapping[str, Any]]) -> dict[str, list[Any]]:
    return {key: [row[key] for row in rows] for key in rows[0]}


def air_text(columns: Mapping[str, Any]) -> str:
    """Return the atmosphere as `aero air` shows it."""
    return table_text(columns)


def crossings_text(crossings: Any) -> str:
    """Return the crossings as a table."""
    return table_text(
        crossings, columns=CROSSING_COLUMNS, title="Crossings (low and high: 95 %)", colour=colour()
    )


def segments_text(segments: Any) -> str:
    """Return the segments as a table."""
    return table_text(segments, columns=SEGMENT_COLUMNS, keys=2, title="Segments", colour=colour())


def reasons_text(segments: Any) -> str:
    """Return each method's reasons once, in the order they are met."""
    seen = dict.fromkeys(zip(segments["method"], segments["method_reason"], strict=True))
    lines = [
        textwrap.fill(f"{method}: {reason}.", WIDTH, initial_indent="  ", subsequent_indent="    ")
        for method, reason in seen
    ]
    return "\n".join(["Why", *lines])


def flight_text(summary: Mapping[str, Any]) -> str:
    """Return a flight's summary as named values."""
    facts = {k: v for k, v in summary.items() if k not in ("final", "notes", "ended_by") and v is not None}
    # nine decimals are a tenth of a millimetre on the ground: below that is rounding
    final = {f"final_{k}": round(v, 9) for k, v in summary["final"].items()}
    return facts_text({**facts, **final})


__all__ = ["air_text", "condition_text", "crossings_text", "flight_text", "reasons_text", "segments_text"]
