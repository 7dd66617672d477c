"""What a user is told when something they gave is wrong."""

from __future__ import annotations

import difflib
from collections.abc import Iterable


class InputError(ValueError):
    """Something the user gave cannot be used; the message says what, where, and how to mend it.

    Parameters
    ----------
    problem : str
        What was found and what was expected, as one clause without a full stop.
    source : str, optional
        File, option or argument it stands in.
    line : int, optional
        Line number in the file, from 1.
    column : str, optional
        Name of the column or key.
    remedy : str, optional
        How to mend it, as an imperative clause.

    Notes
    -----
    All parts are kept as attributes, and the error survives pickling, so that a worker can raise it.

    Examples
    --------
    >>> raise InputError("holds 'n/a', expected a number", source="descent.csv", line=14,
    ...                  column="altitude [km]", remedy="mend the row or pass --skip-bad-rows")
    Traceback (most recent call last):
    aero.errors.InputError: descent.csv, line 14: column 'altitude [km]' holds 'n/a', expected a number; \
mend the row or pass --skip-bad-rows.
    """

    def __init__(
        self,
        problem: str,
        *,
        source: str | None = None,
        line: int | None = None,
        column: str | None = None,
        remedy: str | None = None,
    ) -> None:
        self.problem = problem
        self.source = source
        self.line = line
        self.column = column
        self.remedy = remedy
        super().__init__(self._sentence())

    def _sentence(self) -> str:
        place = self.source or ""
        if self.line is not None:
            place += f"{', ' if place else ''}line {self.line}"
        what = f"column '{self.column}' {self.problem}" if self.column else self.problem
        tail = f"; {self.remedy}" if self.remedy else ""
        stop = "" if tail.endswith("?") else "."
        return f"{place + ': ' if place else ''}{what}{tail}{stop}"

    def __reduce__(self) -> tuple[object, ...]:
        return (_rebuild, (self.problem, self.source, self.line, self.column, self.remedy))


def _rebuild(
    problem: str, source: str | None, line: int | None, column: str | None, remedy: str | None
) -> InputError:
    return InputError(problem, source=source, line=line, column=column, remedy=remedy)


def choose(value: str, allowed: Iterable[str], what: str, *, source: str | None = None) -> str:
    """Return `value` if it is one of `allowed`; otherwise raise an error that names the nearest.

    Examples
    --------
    >>> choose("sphere", ["sphere", "box"], "shape kind")
    'sphere'
    >>> choose("spere", ["sphere", "box"], "shape kind")
    Traceback (most recent call last):
    aero.errors.InputError: shape kind is 'spere', expected one of: sphere, box; did you mean 'sphere'?
    """
    names = list(allowed)
    if value in names:
        return value
    raise InputError(
        f"{what} is '{value}', expected one of: {', '.join(names)}",
        source=source,
        remedy=nearest(value, names),
    )


def nearest(value: str, names: Iterable[str]) -> str | None:
    """Return a "did you mean" clause for the closest of `names`, or None when nothing is close."""
    close = difflib.get_close_matches(str(value), [str(n) for n in names], n=1, cutoff=0.6)
    return f"did you mean '{close[0]}'?" if close else None
