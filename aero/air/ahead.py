"""Long flights through MSIS: a second process works on the next block while this one works on its own.

The empirical models hold the interpreter's lock while they run, so that threads only wait for each other. A
plain child process that reads blocks from a pipe needs neither a fork of this one nor a guard in the caller's
script. What it answers is what this process would have computed, bit for bit.
"""

from __future__ import annotations

import contextlib
import os
import pickle
import subprocess
import sys
from collections.abc import Iterator
from typing import IO, Any

from aero.air.msis import VERSIONS, Msis
from aero.air.msis_run import Question as Question
from aero.air.msis_run import run, to_air
from aero.air.state import Air

FROM_POINTS = 200_000  # points from which the child's start (about 0.2 s) is worth it


class Ahead:
    """Answers questions to MSIS in order; one of them may be put to a second process beforehand."""

    def __init__(self, model: Msis, child: subprocess.Popen[bytes] | None) -> None:
        self.model = model
        self.child = child
        self.waiting = False

    def ask(self, question: Question) -> None:
        """Put the next question to the child, where there is one and it is free."""
        if self.child is not None and not self.waiting:
            try:
                _send(self.child.stdin, (VERSIONS[self.model.version].number, question))
                self.waiting = True
            except OSError:
                self._lost()

    def air(self, question: Question, *, asked: bool) -> Air:
        """Return the air a question asks for: from the child if it was `asked`, else computed here."""
        out = None
        if asked and self.waiting and self.child is not None:
            self.waiting = False
            try:
                out = pickle.load(self.child.stdout)  # type: ignore[arg-type]
            except (OSError, EOFError, pickle.UnpicklingError):
                self._lost()
        if out is None:
            out = run(VERSIONS[self.model.version].number, question)
        return to_air(self.model.name, question.altitude, out)

    def _lost(self) -> None:
        # without its helper the work goes on here, only slower
        self.child, self.waiting = None, False


@contextlib.contextmanager
def ahead(model: Msis, points: int) -> Iterator[Ahead]:
    """Give what answers for a flight of so many points; the child ends with the block."""
    child = None
    if points >= FROM_POINTS and _cores() > 1:
        with contextlib.suppress(OSError):
            child = subprocess.Popen(
                [sys.executable, "-m", "aero.air.ahead"],
                stdin=subprocess.PIPE,
                stdout=subprocess.PIPE,
                start_new_session=True,  # an interrupt at the keyboard is this process's to answer
            )
    try:
        yield Ahead(model, child)
    finally:
        if child is not None:
            child.kill()
            child.communicate()


def _cores() -> int:
    """Return how many cores this process may use, 1 where that cannot be told."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else 1


def _send(pipe: IO[bytes] | None, value: Any) -> None:
    assert pipe is not None
    pickle.dump(value, pipe, protocol=5)
    pipe.flush()


def main() -> None:
    """Answer questions from stdin on stdout until it closes."""
    answers = sys.stdout.buffer
    while True:
        try:
            number, question = pickle.load(sys.stdin.buffer)
        except EOFError:
            return
        _send(answers, run(number, question))


if __name__ == "__main__":
    main()
