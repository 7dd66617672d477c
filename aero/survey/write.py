"""What a survey leaves on disk: tables, figures, the record and the report, whole or not at all."""

from __future__ import annotations

import csv
import json
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from aero.survey.comparisons import comparisons
from aero.survey.output import check_target, only_ours, whole
from aero.survey.record import survey_record
from aero.survey.tables import write_csv, write_parquet

if TYPE_CHECKING:
    from aero.survey.one_pass import Survey

Progress = Callable[[str, float], None]
OURS = (
    "points.csv",
    "points.parquet",
    "segments.csv",
    "crossings.csv",
    "comparisons.csv",
    "skipped.csv",
    "survey.json",
    "report.html",
    "figures/*.svg",
    "figures/*.png",
)
"""Patterns of everything a survey writes: a folder that holds anything else is not replaced."""


def write_survey(
    survey: Survey,
    out: str | Path,
    *,
    replace: bool,
    tables: Sequence[str],
    figures: str,
    progress: Progress | None = None,
) -> list[str]:
    """Write a survey into a folder.

    Parameters
    ----------
    survey : Survey
    out : path
        Folder; appears only when everything in it is written.
    replace : bool
        Whether an earlier survey there may be replaced.
    tables : sequence of "csv", "parquet"
        Formats of the points table.
    figures : "all" or "none"
        Without figures there is no report page either: it is made of them.
    progress : callable, optional
        Called with what is being written and the share of the whole just done.

    Returns
    -------
    list of str
        The files, relative to the folder, in alphabetical order.

    Raises
    ------
    InputError
        If the folder exists and may not be replaced, or cannot be written.
    """
    check_out(out, replace=replace)
    tell = progress or (lambda _what, _step: None)
    with whole(out, replace=replace, folder=True) as folder:
        record = survey_record(survey)
        _points(survey, folder, tables, tell)
        write_csv(survey.segments, folder / "segments.csv")
        write_csv(survey.crossings, folder / "crossings.csv")
        compared = comparisons(survey)
        write_csv(compared, folder / "comparisons.csv")
        _skipped(survey, folder)
        (folder / "survey.json").write_text(
            json.dumps(record, indent=2, ensure_ascii=False, allow_nan=False) + "\n", encoding="utf-8"
        )
        tell("tables", 0.1)
        if figures == "all":
            from aero.survey.pages import write_report

            write_report(survey, record, compared, folder, lambda step: tell("report", 0.5 * step))
        return sorted(p.relative_to(folder).as_posix() for p in folder.rglob("*") if p.is_file())


def check_out(out: str | Path, *, replace: bool) -> None:
    """Raise an InputError where a survey may not be written, before any work.

    An existing folder is replaced only when asked, and only when everything in it was written by a survey.
    """
    check_target(out, replace=replace, folder=True)
    if replace:
        only_ours(Path(out), OURS)


def _points(survey: Survey, folder: Path, tables: Sequence[str], tell: Progress) -> None:
    writers = {"csv": write_csv, "parquet": write_parquet}
    rows = max(len(survey.points), 1)
    for kind in tables:
        writers[kind](
            survey.points,
            folder / f"points.{kind}",
            lambda done: tell("points", 0.4 * done / rows / len(tables)),
        )


def _skipped(survey: Survey, folder: Path) -> None:
    if not survey.trajectory.skipped:
        return
    with (folder / "skipped.csv").open("w", newline="", encoding="utf-8") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(["line", "reason"])
        writer.writerows([s.line, s.reason] for s in survey.trajectory.skipped)
