"""What a reader hands over: columns of a file as arrays, and where each cell stands."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from numpy.typing import NDArray

from aero.trajectory.columns import Layout
from aero.trajectory.metadata import Metadata


@dataclass(frozen=True)
class Table:
    """A file, or a piece of one, before anything is checked or converted.

    Attributes
    ----------
    source : str
        The file as the user named it, for messages.
    file_name : str
        Its name without folders, for results.
    digest : str
        SHA-256 of its bytes.
    layout : Layout
    metadata : Metadata
    count : int
        Number of rows.
    values : dict of int to (n,) array
        By column place: float64 with NaN where a cell is no number, datetime64[us] with NaT where it is
        no date, anything for columns without a meaning.
    line : callable
        Row index -> line (or row number) in the file, from 1.
    cell : callable
        (row index, column place) -> the cell as it stands in the file.
    broken : dict of int to str
        Rows that could not be taken apart, and why.
    lines_are : str
        "line" or "row": what `line` counts.
    """

    source: str
    file_name: str
    digest: str
    layout: Layout
    metadata: Metadata
    count: int
    values: dict[int, NDArray[Any]]
    line: Callable[[int], int]
    cell: Callable[[int, int], str]
    broken: dict[int, str] = field(default_factory=dict)
    lines_are: str = "line"
