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


def main() -> None:
    """Measure everything and print the table."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--rows", type=int, default=ROWS)
    rows = parser.parse_args().rows
    table: list[tuple[str, str, str]] = []
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        piece("make", folder, rows)
        million = rows / 1e6
        air = piece("standard_air", folder, rows)
        table.append(("1976 standard, air alone", f"{million / air['seconds']:.2f} M points/s", "1"))
        physics = piece("physics", folder, rows)
        table.append(
            ("physics without the atmosphere", f"{million / physics['seconds']:.2f} M points/s", "1.5")
        )
        standard = piece("survey_standard", folder, rows)
        rate = million / standard["seconds"]
        table.append(("survey, 1976 standard, Parquet in and out, one core", f"{rate:.2f} M points/s", "0.8"))
        table.append(
            (
                "  memory above imports",
                f"{standard['megabytes'] / million:.0f} MB a million points",
                "at most 600",
            )
        )
        bare = piece("bare_msis", folder, rows)
        table.append(("one bare pymsis.calculate call", f"{bare['seconds']:.2f} s", ""))
        msis = piece("survey_msis", folder, rows)
        table.append(
            (
                "survey, NRLMSISE-00, Parquet in and out, over that call, one core",
                f"{msis['seconds'] / bare['seconds']:.2f} x",
                "at most 1.25",
            )
        )
        both = piece("survey_msis", folder, rows, one_core=False)
        table.append(("  the same, both cores", f"{both['seconds'] / bare['seconds']:.2f} x", ""))
        table.append(
            (
                "  memory above imports",
                f"{msis['megabytes'] / million:.0f} MB a million points",
                "at most 600",
            )
        )
        ours, theirs = piece("csv_ours", folder, rows), piece("csv_pandas", folder, rows)
        ratio = theirs["seconds_per_row"] / ours["seconds_per_row"]
        table.append(
            ("points.csv against DataFrame.to_csv, one core", f"{ratio:.0f} x faster", "at least 10")
        )
        figures = piece("figures", folder, rows)
        table.append((f"all figures and the page of {rows:,} points", f"{figures['seconds']:.1f} s", ""))
        loop, vector = piece("script_loop", folder, rows), piece("script_pandas", folder, rows)
        for label, plain in (
            ("a loop, one atmosphere call a point", loop),
            ("pandas, one pymsis call", vector),
        ):
            table.append(
                (
                    f"plain script: {label}",
                    f"{1e-6 / plain['seconds_per_row']:.3f} M points/s",
                    "for comparison",
                )
            )
        table.append(
            ("  survey with NRLMSISE-00 beside them", f"{million / msis['seconds']:.3f} M points/s", "")
        )
    table += startup.rows()
    width = max(len(row[0]) for row in table)
    print(f"{'what':<{width}}  {'measured':>28}  goal")
    for what, measured, goal in table:
        print(f"{what:<{width}}  {measured:>28}  {goal}")


if __name__ == "__main__":
    main()
