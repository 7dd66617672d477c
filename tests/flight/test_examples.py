"""The shipped flights are those that the README's commands make, and a survey takes them as they are."""

from __future__ import annotations

import importlib.util
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner

from aero.cli import group
from aero.trajectory import read_trajectory

EXAMPLES = Path(__file__).parents[2] / "trajectories"


def commands() -> list[list[str]]:
    spec = importlib.util.spec_from_file_location("build_examples", EXAMPLES / "build_examples.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    found: list[list[str]] = module.commands()
    return found


def target(arguments: list[str]) -> str:
    return Path(arguments[arguments.index("--out") + 1]).name


def test_every_flight_has_its_command() -> None:
    made = {target(arguments) for arguments in commands()}
    assert made == {path.name for path in EXAMPLES.glob("*.csv")}
    text = (EXAMPLES / "README.md").read_text(encoding="utf-8")
    assert all(f"`{path.name}`" in text for path in EXAMPLES.iterdir() if path.suffix in {".csv", ".toml"})


@pytest.mark.parametrize("arguments", commands(), ids=target)
def test_the_command_makes_the_file(
    arguments: list[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Stale examples fail here: run `python trajectories/build_examples.py`."""
    monkeypatch.chdir(EXAMPLES.parent)
    new = tmp_path / target(arguments)
    fresh = [str(new) if Path(part).name == new.name else part for part in arguments]
    done = CliRunner().invoke(group, fresh, catch_exceptions=False)
    assert done.exit_code == 0, done.output
    shipped, flown = read_trajectory(EXAMPLES / new.name), read_trajectory(new)
    assert shipped.epoch == flown.epoch
    assert len(shipped) <= 2000
    assert len(shipped) == len(flown)
    # another machine rounds differently, which moves the integrator's steps: 1e-5 of the speed. A skip
    # stretches that: 0.1 m/s at its exit is 0.2 km at its top, 50 times the shift
    stretch = 50.0 if "skip" in new.name else 1.0
    np.testing.assert_allclose(flown.speed, shipped.speed, rtol=0, atol=0.1 * stretch)
    np.testing.assert_allclose(flown.altitude, shipped.altitude, rtol=0, atol=5.0 * stretch)
    assert flown.time is not None
    assert shipped.time is not None
    assert flown.time[-1] == pytest.approx(shipped.time[-1], abs=0.1 * stretch)


def test_the_flights_are_what_the_readme_says() -> None:
    steep, shallow, skip, away = (
        read_trajectory(EXAMPLES / f"{name}.csv")
        for name in ("marram-steep", "marram-shallow", "marram-skip", "sedge-pass")
    )
    assert steep.altitude[-1] == shallow.altitude[-1] == skip.altitude[-1] == 0.0
    lowest = int(np.argmax(np.diff(skip.altitude) > 0.0))
    assert skip.altitude[lowest] == pytest.approx(77e3, abs=1e3)
    assert 200e3 < skip.altitude[lowest:].max() < 400e3
    assert away.altitude.min() == pytest.approx(94e3, abs=1e3)
    assert away.altitude[-1] == pytest.approx(200e3, abs=10.0)
