"""Finds the rows that cannot be used, and says of each what is wrong."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats
from aero.errors import InputError
from aero.trajectory.columns import Column
from aero.trajectory.table import Table
from aero.trajectory.trajectory import Skipped

SKIP = "pass --skip-bad-rows"


@dataclass(frozen=True)
class Fault:
    """What is wrong with one row."""

    problem: str
    column: str | None = None
    remedy: str = "mend the row"

    def reason(self) -> str:
        """Return the fault as one clause, without its place."""
        return f"column '{self.column}' {self.problem}" if self.column else self.problem


class Faults:
    """The faulty rows of a table, found check by check; a row keeps its first fault."""

    def __init__(self, table: Table) -> None:
        self._table = table
        self.bad: NDArray[np.bool_] | None = None
        self._found: list[tuple[NDArray[np.bool_], Callable[[int], Fault]]] = []
        if table.broken:
            mask = np.zeros(table.count, dtype=bool)
            mask[list(table.broken)] = True
            self.add(mask, lambda index: Fault(table.broken[index]))

    def add(self, mask: NDArray[np.bool_] | None, describe: Callable[[int], Fault]) -> None:
        """Count the rows of `mask` as bad; None means none."""
        if mask is None or not mask.any():
            return
        self._found.append((mask, describe))
        self.bad = mask if self.bad is None else self.bad | mask

    def add_values(self, column: Column, values: Floats, shown: Callable[[int], str]) -> None:
        """Check the SI values of a column against the bounds of its meaning."""
        self.add(
            column.meaning.outside(values),
            lambda index: self._describe(column, index, shown(index)),
        )

    def _describe(self, column: Column, index: int, shown: str) -> Fault:
        cell = self._table.cell(index, column.index)
        if not cell.strip():
            return Fault(f"is empty, expected {column.meaning.bounds}", column.header)
        if column.meaning.name == "time" and column.unit in (None, "UTC"):
            expected = "a UTC date in ISO 8601 such as '2026-03-01T12:00:00Z'"
            return Fault(f"holds '{cell}', expected {expected}", column.header)
        try:
            finite = bool(np.isfinite(float(cell.replace("_", "?"))))
        except ValueError:
            finite = False
        if finite:
            return Fault(f"holds '{cell}'{shown}, expected {column.meaning.bounds}", column.header)
        remedy = "write it with a decimal point" if "," in cell else "mend the row"
        return Fault(f"holds '{cell}', expected a number", column.header, remedy)

    def add_time_order(self, column: Column, time: Floats, last: float = -np.inf) -> None:
        """Check that the times of the rows still good increase strictly, from `last` on."""
        good = time if self.bad is None else np.where(self.bad, -np.inf, time)
        if good.size == 0 or (self.bad is None and good[0] > last and bool(np.all(good[1:] > good[:-1]))):
            return
        before = np.concatenate([[last], np.maximum.accumulate(good)[:-1]])
        before = np.maximum(before, last)
        newer = good > before
        holder = np.maximum.accumulate(np.where(newer, np.arange(good.size), -1))
        late = ~newer if self.bad is None else ~newer & ~self.bad

        def describe(index: int) -> Fault:
            cell, earlier = self._table.cell(index, column.index), int(holder[index])
            where = "the last time before"
            if earlier >= 0:
                line = f"{self._table.lines_are} {self._table.line(earlier)}"
                where = f"'{self._table.cell(earlier, column.index)}' of {line}"
            if time[index] == before[index]:
                return Fault(
                    f"holds '{cell}', which repeats {where}, expected increasing times",
                    column.header,
                    "remove one of the rows",
                )
            return Fault(
                f"holds '{cell}', which goes back from {where}, expected increasing times",
                column.header,
                "sort the rows by time",
            )

        self.add(late, describe)

    def _fault(self, index: int) -> Fault:
        return next(describe(index) for mask, describe in self._found if mask[index])

    def error(self) -> InputError:
        """Return the error for the first bad row."""
        assert self.bad is not None
        index, more = int(np.argmax(self.bad)), int(self.bad.sum()) - 1
        fault, line = self._fault(index), self._table.line(index)
        rest = f" ({more} more bad row{'s' if more > 1 else ''} after it)" if more else ""
        by_line = self._table.lines_are == "line"
        return InputError(
            fault.problem + rest,
            source=self._table.source if by_line else f"{self._table.source}, {self._table.lines_are} {line}",
            line=line if by_line else None,
            column=fault.column,
            remedy=f"{fault.remedy} or {SKIP}",
        )

    def skipped(self) -> tuple[Skipped, ...]:
        """Return every bad row with its reason."""
        if self.bad is None:
            return ()
        return tuple(
            Skipped(self._table.line(index), self._fault(index).reason())
            for index in np.flatnonzero(self.bad).tolist()
        )
