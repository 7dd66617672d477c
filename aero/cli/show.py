"""What goes to stdout and what to stderr: results on one, everything else on the other."""

from __future__ import annotations

import csv
import io
import json
import sys
import textwrap
from collections.abc import Sequence
from typing import Any

import click

from aero.survey.plain import plain_json

WIDTH = 100  # columns of prose and tables
CAUTION = (
    "Screening results: not a basis for sizing thermal protection, clearing debris casualty risk or a "
    "licence; those need qualified practice and the authority concerned."
)


def print_json(value: Any) -> None:
    """Print strict JSON on stdout."""
    click.echo(json.dumps(plain_json(value), indent=2, ensure_ascii=False, allow_nan=False))


def print_csv(header: Sequence[str], rows: Sequence[Sequence[Any]]) -> None:
    """Print a CSV table on stdout, an empty cell where there is no answer."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(header)
    for row in rows:
        writer.writerow(["" if cell is None else cell for cell in plain_json(list(row))])
    click.echo(text.getvalue(), nl=False)


def say(text: str, *, style: str = "table") -> None:
    """Print a paragraph, wrapped: on stdout beside a table, on stderr where stdout holds only data."""
    hang = "      " if text.startswith("note: ") else ""
    folded = textwrap.fill(
        text, WIDTH, subsequent_indent=hang, break_long_words=False, break_on_hyphens=False
    )
    click.echo(folded, err=style != "table")


def show(text: str) -> None:
    """Print a result as it is."""
    click.echo(text)


def is_terminal() -> bool:
    """Whether stderr is a terminal, where progress bars may be drawn."""
    return sys.stderr.isatty()
