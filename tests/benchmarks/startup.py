"""Start-up: whole commands against bare imports, medians of interleaved runs."""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import time

RUNS = 15
POINT = ["point", "--altitude", "100km", "--speed", "7.5km/s", "--length", "1m"]
PLACE = ["--date", "2026-03-01", "--latitude", "10deg", "--longitude", "20deg"]
COMMANDS = {
    "numpy": [sys.executable, "-c", "import numpy, scipy.special"],
    "pymsis": [sys.executable, "-c", "import numpy, scipy.special, pymsis"],
    "click": [sys.executable, "-c", "import click"],
    "point standard": [sys.executable, "-m", "aero", *POINT],
    "point msis": [sys.executable, "-m", "aero", *POINT, *PLACE],
    "help": [sys.executable, "-m", "aero", "--help"],
}


def measure() -> dict[str, float]:
    """Return the median seconds of each command; runs are interleaved so that drift hits all alike."""
    # compiled modules are kept between runs, as on a user's machine, whatever this environment says
    environment = {k: v for k, v in os.environ.items() if k != "PYTHONDONTWRITEBYTECODE"}
    times: dict[str, list[float]] = {name: [] for name in COMMANDS}
    for count in range(RUNS + 1):
        for name, command in COMMANDS.items():
            start = time.perf_counter()
            subprocess.run(
                command, check=True, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, env=environment
            )
            if count:  # the first run compiles
                times[name].append(time.perf_counter() - start)
    return {name: statistics.median(values) for name, values in times.items()}


def rows() -> list[tuple[str, str, str]]:
    """Return the lines of the table."""
    seconds = measure()
    pairs = (
        ("aero point, 1976 standard, over importing numpy and scipy.special", "point standard", "numpy"),
        ("aero point, NRLMSISE-00, over the same and pymsis", "point msis", "pymsis"),
        ("aero --help over importing the command-line library", "help", "click"),
    )
    return [
        (text, f"{seconds[ours] / seconds[bare]:.2f} x ({seconds[ours]:.2f} s)", "at most 1.5")
        for text, ours, bare in pairs
    ]
