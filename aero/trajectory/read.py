"""Reads a trajectory of any kind, told apart by its content and its extension."""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

import numpy as np

from aero.errors import InputError, nearest
from aero.trajectory.read_csv import read_csv
from aero.trajectory.read_parquet import read_parquet
from aero.trajectory.trajectory import Trajectory

READERS: dict[str, Callable[..., Trajectory]] = {"CSV": read_csv, "TSV": read_csv, "Parquet": read_parquet}
"""Kind of file -> its reader."""

_TWO_LINES = re.compile(rb"(?:^|[\r\n])1 [ \dA-Z]{5}[A-Z ].{61}\s*[\r\n]+2 [ \dA-Z]{5} ")
_OTHERS: tuple[tuple[str, tuple[str, ...], tuple[bytes, ...]], ...] = (
    ("an orbit ephemeris (OEM)", (".oem",), (b"CCSDS_OEM_VERS",)),
    ("an orbit element set (OMM)", (".omm",), (b"CCSDS_OMM_VERS",)),
    ("an orbit element set (TLE)", (".tle", ".2le", ".3le"), ()),
    ("an XML file", (".xml",), (b"<?xml",)),
    ("a spreadsheet or another archive", (".xlsx", ".xls", ".ods", ".zip"), (b"PK\x03\x04",)),
    ("a compressed file", (".gz", ".bz2", ".xz", ".zst"), (b"\x1f\x8b",)),
)
"""What is often given instead: words, extensions, marks near the top."""


def read_trajectory(
    path: str | Path, skip_bad_rows: bool = False, time_zero: np.datetime64 | str | None = None
) -> Trajectory:
    r"""Read a trajectory file.

    Parameters
    ----------
    path : str or Path
        CSV, TSV or Parquet; the content decides, then the extension.
    skip_bad_rows : bool
        Leave bad rows out and list them in `skipped`, instead of stopping at the first.
    time_zero : numpy.datetime64 or str, optional
        UTC of time 0 where the file has no dates of its own.

    Returns
    -------
    Trajectory

    Raises
    ------
    InputError
        If the file cannot be used; the message says where, and how to mend it.

    Examples
    --------
    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     file = Path(folder, "descent.csv")
    ...     _ = file.write_text("time_s,altitude [km],speed_m_s\n0,120,7500\n10,118,7501\n")
    ...     flight = read_trajectory(file)
    >>> flight.altitude
    array([120000., 118000.])
    """
    return READERS[_kind(Path(path), str(path))](path, skip_bad_rows=skip_bad_rows, time_zero=time_zero)


def _kind(path: Path, source: str) -> str:
    top = _top(path, source)
    suffix = path.suffix.lower()
    if top.startswith(b"PAR1"):
        return "Parquet"
    if suffix in (".parquet", ".pq"):
        raise InputError(
            "is no Parquet file, though its name says so", source=source, remedy="write it again or rename it"
        )
    for words, suffixes, marks in _OTHERS:
        if (
            suffix in suffixes
            or any(mark in top for mark in marks)
            or (".tle" in suffixes and _TWO_LINES.search(top))
        ):
            raise InputError(
                f"is {words}; a survey reads {', '.join(READERS)}", source=source, remedy="give one of these"
            )
    return "TSV" if suffix in (".tsv", ".tab") else "CSV"


def _top(path: Path, source: str) -> bytes:
    if path.exists() and not path.is_file() and not path.is_dir():
        raise InputError(
            "is a pipe or a device, and a trajectory is read more than once",
            source=source,
            remedy="write it to a file first",
        )
    try:
        with path.open("rb") as stream:
            return stream.read(4096)
    except FileNotFoundError:
        folder = path.parent
        names = [entry.name for entry in folder.iterdir()] if folder.is_dir() else []
        raise InputError("there is no such file", source=source, remedy=nearest(path.name, names)) from None
    except IsADirectoryError:
        raise InputError("is a folder, expected a file", source=source, remedy="name a file in it") from None
    except OSError as fault:
        raise InputError(
            f"cannot be read ({fault.strerror})", source=source, remedy="check the name and permissions"
        ) from None
