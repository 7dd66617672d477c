"""Tables for the terminal: at most 100 columns wide, decimal points under each other."""

from __future__ import annotations

import io
import textwrap
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from aero.report.columns import ReadyColumn, ready
from aero.report.names import Table, shorten, shorten_all
from aero.report.numbers import MISSING, align_decimals, format_quantity, split_unit
from aero.report.palette import REGIME_COLOURS, REGIME_TEXT

if TYPE_CHECKING:
    from rich.table import Table as RichTable
    from rich.text import Text

WIDTH = 100  # columns
_LONGEST = 50  # characters of one word cell; longer ones are cut in the middle
_HEADER = 9  # columns after which a header goes on in the next line
_GAP = 2  # columns between two columns


def terminal_tables(
    table: Table,
    *,
    columns: Sequence[str] | None = None,
    keys: int = 1,
    title: str = "",
    width: int = WIDTH,
) -> list[RichTable]:
    """Return one rich table, or several one under another where one would be too wide.

    Parameters
    ----------
    table : table
    columns : sequence of str, optional
        Which columns, in which order.
    keys : int
        How many of the first columns each further table repeats.
    title : str
        Over the first.
    width : int
        Columns of the terminal.

    Returns
    -------
    list of rich.table.Table
    """
    chosen = ready(table, columns)
    decks = _decks(chosen, keys, width)
    return [_rich(deck, title if number == 0 else "") for number, deck in enumerate(decks)]


def _decks(chosen: Sequence[ReadyColumn], keys: int, width: int) -> list[list[ReadyColumn]]:
    """Deal the columns into tables that fit; a column wider than the rest goes alone with the keys."""
    heads, rest = list(chosen[:keys]), list(chosen[keys:])
    decks = [list(heads)]
    for one in rest:
        if len(decks[-1]) > len(heads) and _width([*decks[-1], one]) > width:
            decks.append(list(heads))
        decks[-1].append(one)
    return decks


def _width(deck: Sequence[ReadyColumn]) -> int:
    return sum(max(map(_cells_wide, _lines(one)), default=0) + _GAP for one in deck) - _GAP


def _cells_wide(text: str) -> int:
    from rich.cells import cell_len

    return cell_len(text)


def _lines(one: ReadyColumn) -> list[str]:
    return [*_header(one), *_cells(one)]


def _header(one: ReadyColumn) -> list[str]:
    """Return a header in short lines, its unit in the last."""
    return [
        *textwrap.wrap(one.header, _HEADER, break_on_hyphens=False, break_long_words=False),
        *([f"[{one.unit}]"] if one.unit else []),
    ]


def _cells(one: ReadyColumn) -> list[str]:
    if one.kind == "number":
        return align_decimals(one.cells)
    return shorten_all(one.cells, _LONGEST)


def _rich(deck: Sequence[ReadyColumn], title: str) -> RichTable:
    from rich.table import Table as RichTable
    from rich.text import Text

    made = RichTable(
        box=None,
        show_edge=False,
        pad_edge=False,
        padding=(0, _GAP, 0, 0),
        title=Text(title) if title else None,
        title_justify="left",
        title_style="bold",
        header_style="bold",
    )
    for one in deck:
        side = "right" if one.kind == "number" else "left"
        header = Text("\n".join(_header(one)), justify=side)  # type: ignore[arg-type]
        made.add_column(header, justify=side, no_wrap=True, vertical="bottom")  # type: ignore[arg-type]
    for row in zip(*(_cells(one) for one in deck), strict=True):
        made.add_row(*(_text(cell) for cell in row))
    return made


def _text(cell: str) -> Text:
    from rich.text import Text

    return Text(cell, style=regime_style(cell)) if cell in REGIME_COLOURS else Text(cell)


def regime_style(regime: str) -> str:
    """Return the rich style of a regime's name; only a terminal shows it.

    Examples
    --------
    >>> regime_style("slip")
    '#fdfdfb on #3a7d8c'
    """
    return f"{REGIME_TEXT[regime]} on {REGIME_COLOURS[regime]}"


def table_text(
    table: Table,
    *,
    columns: Sequence[str] | None = None,
    keys: int = 1,
    title: str = "",
    width: int = WIDTH,
    colour: bool = False,
) -> str:
    """Return a table as text, with colours only when asked.

    Examples
    --------
    >>> print(table_text({"length": ["nose", "seal"], "altitude_m": [131700.0, 85123.4]}))
            altitude
    length      [km]
    nose       131.7
    seal       85.12
    """
    from rich.console import Console

    page = io.StringIO()
    # A console of our own: what a terminal can show is for the caller to decide, by `colour`.
    console = Console(
        file=page,
        width=width,
        force_terminal=colour,
        color_system="truecolor" if colour else None,
        highlight=False,
        markup=False,
        emoji=False,
        legacy_windows=False,
    )
    for number, made in enumerate(
        terminal_tables(table, columns=columns, keys=keys, title=title, width=width)
    ):
        if number:
            console.print()
        console.print(made, crop=False, overflow="ignore")
    lines = page.getvalue().split("\n")
    return "\n".join(line.rstrip() for line in lines).rstrip("\n")


def facts_text(facts: Mapping[str, object], *, indent: str = "  ") -> str:
    """Return named values one a line, names padded to one width, units taken from the names.

    Parameters
    ----------
    facts : mapping
        Name to value; a name that ends in a unit gives the value that unit.

    Examples
    --------
    >>> print(facts_text({"altitude_m": 100e3, "mach": 26.31, "regime": "slip"}))
      altitude  100 km
      mach      26.31
      regime    slip
    """
    rows = [(split_unit(name), value) for name, value in facts.items()]
    names = [shorten(stem.replace("_", " "), _LONGEST) for (stem, _), _ in rows]
    wide = max(map(len, names), default=0)
    lines = []
    for name, ((_, unit), value) in zip(names, rows, strict=True):
        if value is None:
            shown = MISSING
        elif isinstance(value, int | float) and not isinstance(value, bool):
            shown = format_quantity(float(value), unit)
        else:
            shown = shorten(value, WIDTH - wide - 4)
        lines.append(f"{indent}{name.ljust(wide)}  {shown}")
    return "\n".join(lines)
