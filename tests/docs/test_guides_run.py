"""The guides run: every fenced bash and python block of docs/guides, in order, as a reader would run it.

One folder a guide, with the examples linked into it; `aero` is this package under this interpreter.
"""

from __future__ import annotations

import contextlib
import io
import os
import re
import shlex
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
GUIDES = sorted((ROOT / "docs" / "guides").glob("*.md"))
BLOCK = re.compile(r"^```(\w+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
SET_UP = 2  # the first two bash blocks of the README install the package


def blocks(page: Path) -> list[tuple[str, str]]:
    """Return the fenced blocks that are run, as (language, text)."""
    found = [(kind, text) for kind, text in BLOCK.findall(page.read_text(encoding="utf-8"))]
    return [(kind, text) for kind, text in found if kind in ("bash", "python")]


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "trajectories").symlink_to(ROOT / "trajectories")
    commands = tmp_path / "bin"
    commands.mkdir()
    aero = commands / "aero"
    aero.write_text(f'#!/bin/sh\nexec {shlex.quote(sys.executable)} -m aero "$@"\n')
    aero.chmod(0o755)
    monkeypatch.setenv("PATH", f"{commands}{os.pathsep}{os.environ['PATH']}")
    monkeypatch.setenv("PYTHONPATH", str(ROOT))
    monkeypatch.chdir(tmp_path)
    return tmp_path


def run(kind: str, text: str, names: dict[str, object]) -> str:
    """Run one block; return what it printed."""
    if kind == "python":
        with contextlib.redirect_stdout(io.StringIO()) as printed:
            exec(compile(text, "a guide", "exec"), names)
        return printed.getvalue()
    done = subprocess.run(["bash", "-euc", text], capture_output=True, text=True, check=False, timeout=60)
    assert done.returncode == 0, f"{text}\n{done.stderr}"
    assert "Traceback" not in done.stderr
    return done.stdout


@pytest.mark.parametrize("page", GUIDES, ids=lambda page: page.stem)
def test_every_block_of_a_guide_runs(page: Path, folder: Path) -> None:
    names: dict[str, object] = {}
    found = blocks(page)
    assert found
    printed = "".join(run(kind, text, names) for kind, text in found)
    assert printed.strip()
    assert "out" in {path.name for path in folder.iterdir()} or page.stem == "point"  # outputs stay in out/


def test_the_readme_has_its_two_commands_first() -> None:
    found = [text for kind, text in blocks(ROOT / "README.md") if kind == "bash"]
    assert len(found) >= SET_UP
    first, second = found[:SET_UP]
    assert first.count("\n") == second.count("\n") == 1
    assert first.endswith("aero demo\n")
    assert "pytest" in second


def test_every_other_block_of_the_readme_runs(folder: Path) -> None:
    found = [block for block in blocks(ROOT / "README.md") if block[0] == "bash"][SET_UP:]
    found += [block for block in blocks(ROOT / "README.md") if block[0] == "python"]
    for kind, text in found:
        run(kind, text, {})
    assert (folder / "trajectories").is_dir()


def test_numbers_shown_in_the_demo_guide_are_those_of_the_demo(folder: Path) -> None:
    """The sentence that README and guide quote is the one the example gives."""
    import aero

    trajectory = aero.read_trajectory("trajectories/marram-steep.csv")
    told = aero.survey(trajectory, aero.read_vehicle("trajectories/marram.toml")).summary
    assert folder.is_dir()
    for page in (ROOT / "README.md", ROOT / "docs" / "guides" / "demo.md"):
        assert told in re.sub(r"\s+", " ", page.read_text(encoding="utf-8"))
