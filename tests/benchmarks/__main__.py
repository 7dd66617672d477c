"""Measure speed, memory and start-up, and print one table: `python -m tests.benchmarks [--rows N]`.

Goals are ratios within one run, for machines drift. Every timed piece runs in a process of its own, held to
one core where the goal says so. Nothing here is a test.
"""

from __future__ import annotations

import argparse
import json
import statistics
import subprocess
import sys
import tempfile
from pathlib import Path

from tests.benchmarks import startup

ROWS = 1_000_000
REPEATS = 3  # each piece runs so often, and the median counts


def piece(name: str, folder: Path, rows: int, *, one_core: bool = True) -> dict[str, float]:
    """Run one timed piece in fresh processes and return the medians of what they measured."""
    command = [sys.executable, "-m", "tests.benchmarks.pieces", name, str(folder), str(rows)]
    if one_core:
        command = ["taskset", "-c", "0", *command]
    runs = []
    for _ in range(1 if name == "make" else REPEATS):
        done = subprocess.run(command, check=True, capture_output=True, text=True)
        runs.append(json.loads(done.stdout.strip().splitlines()[-1]))
    return {key: statistics.median(run[key] for run in runs) for key in runs[0]}


def speed_rows(folder: Path, rows: int) -> list[tuple[str, str, str]]:
    """Measure atmosphere, physics and whole surveys."""
    million = rows / 1e6
    table = [
        (text, f"{million / piece(name, folder, rows)['seconds']:.2f} M points/s", goal)
        for text, name, goal in (
            ("1976 standard, air alone", "standard_air", "1"),
            ("physics without the atmosphere", "physics", "1.5"),
        )
    ]
    standard = piece("survey_standard", folder, rows)
    bare = piece("bare_msis", folder, rows)
    one, both = piece("survey_msis", folder, rows), piece("survey_msis", folder, rows, one_core=False)
    over = "survey, NRLMSISE-00, Parquet in and out, over that call"
    memory = "  memory above imports"
    return [
        *table,
        (
            "survey, 1976 standard, Parquet in and out, one core",
            f"{million / standard['seconds']:.2f} M points/s",
            "0.8",
        ),
        (memory, f"{standard['megabytes'] / million:.0f} MB a million points", "at most 600"),
        ("one bare pymsis.calculate call", f"{bare['seconds']:.2f} s", ""),
        (f"{over}, both cores", f"{both['seconds'] / bare['seconds']:.2f} x", "at most 1.25"),
        (memory, f"{both['megabytes'] / million:.0f} MB a million points", "at most 600"),
        (f"{over}, one core", f"{one['seconds'] / bare['seconds']:.2f} x", "at most 1.25"),
        ("  in points", f"{million / both['seconds']:.3f} M points/s", ""),
    ]


def writer_rows(folder: Path, rows: int) -> list[tuple[str, str, str]]:
    """Measure what is written, and the plain scripts."""
    ours, theirs = piece("csv_ours", folder, rows), piece("csv_pandas", folder, rows)
    ratio = theirs["seconds_per_row"] / ours["seconds_per_row"]
    figures = piece("figures", folder, rows)
    scripts = (
        ("a loop, one atmosphere call a point", "script_loop"),
        ("pandas, one pymsis call", "script_pandas"),
    )
    return [
        ("points.csv against DataFrame.to_csv, one core", f"{ratio:.0f} x faster", "at least 10"),
        (f"all figures and the page of {rows:,} points", f"{figures['seconds']:.1f} s", ""),
        *(
            (
                f"plain script: {text}",
                f"{1e-6 / piece(name, folder, rows)['seconds_per_row']:.3f} M points/s",
                "for comparison",
            )
            for text, name in scripts
        ),
    ]


def main() -> None:
    """Measure everything and print the table."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--rows", type=int, default=ROWS)
    rows = parser.parse_args().rows
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        piece("make", folder, rows)
        table = speed_rows(folder, rows) + writer_rows(folder, rows)
    table += startup.rows()
    width = max(len(row[0]) for row in table)
    print(f"{'what':<{width}}  {'measured':>28}  goal")
    for what, measured, goal in table:
        print(f"{what:<{width}}  {measured:>28}  {goal}")


if __name__ == "__main__":
    main()
