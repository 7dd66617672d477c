"""Make the example flights again: runs the commands of the README beside this file.

Run it as `python trajectories/build_examples.py`, from anywhere.
"""

from __future__ import annotations

import os
import shlex
from pathlib import Path

HERE = Path(__file__).parent


def commands() -> list[list[str]]:
    """Return the arguments of every `aero fly` command in the README."""
    lines = (HERE / "README.md").read_text(encoding="utf-8").splitlines()
    return [shlex.split(line)[1:] for line in lines if line.startswith("aero fly ")]


def build() -> None:
    """Run every command from the folder above this one, where the paths in them begin."""
    from aero.cli import group

    os.chdir(HERE.parent)
    for arguments in commands():
        group.main(arguments, standalone_mode=False, prog_name="aero")


if __name__ == "__main__":
    build()
