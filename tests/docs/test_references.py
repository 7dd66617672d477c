"""Every key of a source that code or docs use is in docs/references.md, and nothing there is unused."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
KEY = re.compile(r"\[((?:[A-Z][A-Za-z]+\d{2,5}[a-z]?)|(?:ECSS-[A-Z0-9-]+))\](?!\()")
ENTRY = re.compile(r"^- \*\*\[([^\]]+)\]\*\*", re.MULTILINE)
REFERENCES = ROOT / "docs" / "references.md"
USERS = [
    *sorted((ROOT / "aero").rglob("*.py")),
    *sorted((ROOT / "tests").rglob("*.py")),
    *(path for path in sorted((ROOT / "docs").rglob("*.md")) if path != REFERENCES),
]


def used() -> dict[str, str]:
    """Return every key used, with one file that uses it."""
    found: dict[str, str] = {}
    for path in USERS:
        for key in KEY.findall(path.read_text(encoding="utf-8")):
            found.setdefault(key, path.relative_to(ROOT).as_posix())
    return found


def test_every_key_used_is_listed_and_every_key_listed_is_used() -> None:
    listed = set(ENTRY.findall(REFERENCES.read_text(encoding="utf-8")))
    missing = {key: where for key, where in used().items() if key not in listed}
    assert not missing
    assert sorted(listed - used().keys()) == []


def test_no_key_is_listed_twice() -> None:
    keys = ENTRY.findall(REFERENCES.read_text(encoding="utf-8"))
    assert len(keys) == len(set(keys)) > 40  # both rooms of sources, not an empty match


@pytest.mark.parametrize("text", ["[Bird1994]", "[ECSS-E-ST-10-04C]", "[WGS84]", "[NACA1135]"])
def test_the_pattern_knows_a_key(text: str) -> None:
    assert KEY.fullmatch(text)


@pytest.mark.parametrize("text", ["[km]", "[0, 1]", "[m3/s2]", "[Text](docs/x.md)", "[NAME=]"])
def test_the_pattern_takes_nothing_else(text: str) -> None:
    assert not KEY.search(text)
