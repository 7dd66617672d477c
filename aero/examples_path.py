"""Where the shipped examples are: in the package of a plain install, beside it in a clone."""

from __future__ import annotations

from pathlib import Path


def example(name: str) -> Path:
    """Return the path of a shipped example file.

    Raises
    ------
    FileNotFoundError
        If the install does not hold it.
    """
    package = Path(__file__).resolve().parent
    for folder in (package / "examples", package.parent / "trajectories"):
        if (folder / name).is_file():
            return folder / name
    raise FileNotFoundError(f"the shipped example {name} is missing from this install")
