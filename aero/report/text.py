"""The tables a survey prints: what fits a terminal of crossings and segments."""

from __future__ import annotations

from aero.report.columns import SEGMENT_COLUMNS
from aero.report.names import Table, row_count
from aero.report.table import WIDTH, table_text

_CROSSING_COLUMNS = (
    "length",
    "bound",
    "direction",
    "time_s",
    "altitude_m",
    "altitude_low_m",
    "altitude_high_m",
    "air_speed_m_s",
)


def crossings_text(crossings: Table, *, width: int = WIDTH, colour: bool = False) -> str:
    """Return where the flight meets each bound, with the altitudes' 95 % range.

    Examples
    --------
    >>> crossings_text({"length": []})
    'Crossings: none, each length stays in one regime.'
    """
    if row_count(crossings) == 0:
        return "Crossings: none, each length stays in one regime."
    return table_text(
        crossings, columns=_CROSSING_COLUMNS, title="Crossings", width=width, colour=colour, keys=2
    )


def segments_text(segments: Table, *, width: int = WIDTH, colour: bool = False) -> str:
    """Return the segments with their shares and the method each calls for.

    Examples
    --------
    >>> segments_text({"length": []})
    'Segments: none, the trajectory has no time.'
    """
    if row_count(segments) == 0:
        return "Segments: none, the trajectory has no time."
    return table_text(segments, columns=SEGMENT_COLUMNS, title="Segments", width=width, colour=colour, keys=2)
