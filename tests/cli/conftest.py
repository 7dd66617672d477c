"""The command line is tested as a process: exit codes, both streams, what is left on disk."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

EXAMPLES = Path(__file__).resolve().parents[2] / "trajectories"
Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def run(tmp_path: Path) -> Run:
    """Run `python -m aero` in an empty folder."""
    work = tmp_path / "work"
    work.mkdir()

    def call(*arguments: str, code: int = 0) -> subprocess.CompletedProcess[str]:
        environment = {**os.environ, "COLUMNS": "100", "PYTHONWARNINGS": "error"}
        environment.pop("AERO_TRACEBACK", None)
        done = subprocess.run(
            [sys.executable, "-m", "aero", *arguments],
            cwd=work,
            env=environment,
            capture_output=True,
            text=True,
            timeout=120,
            check=False,
        )
        assert done.returncode == code, done.stdout + done.stderr
        assert "Traceback" not in done.stderr
        return done

    return call


@pytest.fixture
def work(tmp_path: Path) -> Path:
    return tmp_path / "work"


@pytest.fixture
def steep() -> str:
    return str(EXAMPLES / "marram-steep.csv")


@pytest.fixture
def marram() -> str:
    return str(EXAMPLES / "marram.toml")
