"""Reads CSV and TSV files."""

from __future__ import annotations

import hashlib
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import numpy as np

from aero.errors import InputError
from aero.trajectory.assemble import assemble
from aero.trajectory.columns import Layout, bare, lay_out
from aero.trajectory.csv_head import Head, check_text, is_number, read_head
from aero.trajectory.csv_rows import Found, Rows, careful_columns, fast_columns
from aero.trajectory.metadata import understand
from aero.trajectory.table import Table
from aero.trajectory.trajectory import Trajectory


def read_csv(
    path: str | Path, *, skip_bad_rows: bool = False, time_zero: np.datetime64 | str | None = None
) -> Trajectory:
    """Read a CSV or TSV file.

    Parameters
    ----------
    path : str or Path
    skip_bad_rows : bool
        Leave bad rows out and list them in `skipped`, instead of stopping at the first.
    time_zero : numpy.datetime64 or str, optional
        UTC of time 0 where the file has no dates.

    Returns
    -------
    Trajectory

    Raises
    ------
    InputError
        If the file cannot be used; the message says where, and how to mend it.

    Notes
    -----
    Of commas, tabs and semicolons the one is taken that makes most of the header. UTF-8 only.
    """
    source, data = str(path), Path(path).read_bytes()
    with ThreadPoolExecutor(1) as pool:  # hashing lets go of the interpreter, so it costs no time of its own
        digest = pool.submit(lambda: hashlib.sha256(data).hexdigest())
        check_text(data, source)
        head = read_head(data, source, tabs=Path(path).suffix.lower() in (".tsv", ".tab"))
        layout = lay_out(head.headers, source=source, line=head.line)
        told = understand(head.statements, source=source)
        rows = Rows(data, head, source)
        _check_bare_time(rows, layout, source, head)
        found = fast_columns(data, head, layout, rows.first) or careful_columns(rows, head, layout)
        _check_found(found, head, layout, source)
        table = Table(
            source=source,
            file_name=Path(path).name,
            digest=digest.result(),
            layout=layout,
            metadata=told,
            count=found.count,
            values=found.values,
            line=rows.line,
            cell=rows.cell,
            broken=found.broken,
        )
    return assemble(table, skip_bad_rows=skip_bad_rows, time_zero=time_zero)


def _check_bare_time(rows: Rows, layout: Layout, source: str, head: Head) -> None:
    """Refuse a time column without a unit that holds numbers; dates need none."""
    column = layout.columns.get("time")
    if column is None or column.unit is not None:
        return
    cells = [row[column.index] for row in rows.first if column.index < len(row) and row[column.index].strip()]
    if cells and is_number(cells[0]):
        raise bare(column.header, column.meaning, source, head.line)


def _check_found(found: Found, head: Head, layout: Layout, source: str) -> None:
    if not found.count:
        raise InputError(
            "has a header and no rows, expected at least two rows",
            source=source,
            line=head.line,
            remedy="give the rows",
        )
    for place in layout.nameless:  # a delimiter at the end of every line leaves one, empty
        if any(str(text).strip() not in ("", "nan") for text in found.values[place]):
            raise InputError(
                f"column {place + 1} has values and no name", source=source, line=head.line, remedy="name it"
            )
