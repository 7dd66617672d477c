"""The timed pieces, each run in a process of its own by `tests.benchmarks`."""

from __future__ import annotations

import json
import resource
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

import aero

EPOCH = np.datetime64("2026-03-01T06:00:00", "us")
BODY = """
name = "benchmark sphere-cone"
mass = "38 kg"
[reference]
area = "0.636 m2"
length = "0.9 m"
[shape]
kind = "sphere-cone"
nose_radius = "0.27 m"
half_angle = "55 deg"
base_radius = "0.45 m"
[surface]
temperature = "300 K"
"""
CSV_ROWS = 50_000  # the slow writer is measured on a part, by the row


def flight(rows: int) -> dict[str, np.ndarray]:
    """Return an entry from 130 to 40 km, and up again, of smooth but ever-changing values."""
    s = np.linspace(0.0, 1.0, rows)
    return {
        "time_s": 1000.0 * s,
        "altitude_m": 85e3 + 45e3 * np.cos(2.0 * np.pi * s),
        "speed_m_s": 7600.0 - 3000.0 * s * s,
        "latitude_deg": 10.0 + 15.0 * s,
        "longitude_deg": 20.0 + 40.0 * s,
    }


def read(folder: Path, *, place: bool = True) -> tuple[aero.Trajectory, aero.Vehicle]:
    """Return the flight and the body, read from their files."""
    name = "flight.parquet" if place else "plain.parquet"
    return aero.read_trajectory(folder / name), aero.read_vehicle(folder / "body.toml")


def make(folder: Path, rows: int) -> float:
    """Write the input files."""
    import pandas as pd

    columns = flight(rows)
    pd.DataFrame({k: columns[k] for k in ("time_s", "altitude_m", "speed_m_s")}).to_parquet(
        folder / "plain.parquet"
    )
    utc = EPOCH + (columns.pop("time_s") * 1e6).astype("timedelta64[us]")
    pd.DataFrame({"time": utc, **columns}).to_parquet(folder / "flight.parquet")
    (folder / "body.toml").write_text(BODY)
    return 0.0


def standard_air(_folder: Path, rows: int) -> float:
    """Time the 1976 standard in the survey's blocks."""
    atmosphere = aero.StandardAtmosphere1976()
    altitude = flight(rows)["altitude_m"]
    atmosphere.at(altitude[:10])
    start = time.perf_counter()
    for first in range(0, rows, 16_384):
        atmosphere.at(altitude[first : first + 16_384])
    return time.perf_counter() - start


class Known:
    """An atmosphere that hands out air computed before."""

    def __init__(self, atmosphere: aero.StandardAtmosphere1976) -> None:
        self.atmosphere = atmosphere
        self.ready: dict[float, object] = {}

    def __getattr__(self, name: str) -> object:
        return getattr(self.atmosphere, name)

    def at(self, altitude: np.ndarray) -> object:
        """Return the block that starts at this altitude."""
        return self.ready[float(altitude[0])]


def physics(folder: Path, rows: int) -> float:
    """Time the chain of the survey on air that is ready."""
    from aero.survey.chain import conditions
    from aero.survey.inputs import Inputs
    from aero.survey.settings import Settings

    _, body = read(folder, place=False)
    columns = flight(rows)
    known = Known(aero.StandardAtmosphere1976())
    blocks = [slice(first, first + 16_384) for first in range(0, rows, 16_384)]
    for block in blocks:
        altitude = columns["altitude_m"][block]
        known.ready[float(altitude[0])] = known.atmosphere.at(altitude)
    inputs = [Inputs(altitude=columns["altitude_m"][b], speed=columns["speed_m_s"][b]) for b in blocks]
    conditions(inputs[0], known, body, {"reference": 0.9}, Settings())
    start = time.perf_counter()
    for part in inputs:
        conditions(part, known, body, {"reference": 0.9}, Settings())
    return time.perf_counter() - start


def _survey(folder: Path, atmosphere: object, *, place: bool) -> float:
    start = time.perf_counter()
    trajectory, body = read(folder, place=place)
    result = aero.survey(trajectory, body, atmosphere=atmosphere)
    result.write(folder / "out", tables=("parquet",), figures="none", replace=True)
    return time.perf_counter() - start


def survey_standard(folder: Path, _rows: int) -> float:
    """Time a survey from file to files, 1976 standard."""
    return _survey(folder, aero.StandardAtmosphere1976(), place=False)


def survey_msis(folder: Path, _rows: int) -> float:
    """Time a survey from file to files, NRLMSISE-00."""
    return _survey(folder, aero.Msis("nrlmsise-00", activity="moderate"), place=True)


def bare_msis(_folder: Path, rows: int) -> float:
    """Time one bare call on the same points."""
    import pymsis

    columns = flight(rows)
    utc = EPOCH + (columns["time_s"] * 1e6).astype("timedelta64[us]")
    start = time.perf_counter()
    pymsis.calculate(
        utc,
        columns["longitude_deg"],
        columns["latitude_deg"],
        columns["altitude_m"] / 1e3,
        np.full(rows, 140.0),
        np.full(rows, 140.0),
        np.full((rows, 7), 15.0),
        version=0,
    )
    return time.perf_counter() - start


def _points(folder: Path, rows: int) -> object:
    from aero.trajectory import read_trajectory

    trajectory = read_trajectory(folder / "plain.parquet")
    body = aero.read_vehicle(folder / "body.toml")
    return aero.survey(trajectory.part(slice(0, rows)), body, atmosphere=aero.StandardAtmosphere1976())


def csv_ours(folder: Path, rows: int) -> float:
    """Time our CSV of the points."""
    from aero.survey.tables import write_csv

    points = _points(folder, rows).points  # type: ignore[attr-defined]
    write_csv(points.head(1000), folder / "warm.csv")
    start = time.perf_counter()
    write_csv(points, folder / "ours.csv")
    return time.perf_counter() - start


def csv_pandas(folder: Path, _rows: int) -> float:
    """Time DataFrame.to_csv on a part of the points."""
    points = _points(folder, CSV_ROWS).points  # type: ignore[attr-defined]
    start = time.perf_counter()
    points.to_csv(folder / "theirs.csv", index=False)
    return time.perf_counter() - start


def figures(folder: Path, rows: int) -> float:
    """Time figures and page of all points."""
    result = _points(folder, rows)
    start = time.perf_counter()
    result.write(folder / "figures", tables=("parquet",), replace=True)  # type: ignore[attr-defined]
    return time.perf_counter() - start


def script_loop(_folder: Path, _rows: int) -> float:
    """Time the script an analyst would write first: a loop that asks the atmosphere point by point."""
    import math

    import pymsis

    columns = flight(LOOP_ROWS)
    start = time.perf_counter()
    answers = []
    for i in range(LOOP_ROWS):
        when = EPOCH + np.timedelta64(int(columns["time_s"][i] * 1e6), "us")
        air = pymsis.calculate(
            when,
            columns["longitude_deg"][i],
            columns["latitude_deg"][i],
            columns["altitude_m"][i] / 1e3,
            140.0,
            140.0,
            [[15.0] * 7],
            version=0,
        )[0]
        number = float(np.nansum(air[1:9]))
        kn = 1.0 / (math.sqrt(2.0) * math.pi * 3.65e-10**2 * number) / 0.9
        fraction = (
            math.sin(math.pi * (3 / 8 + math.log10(kn) / 8)) ** 2 if 1e-3 < kn < 10 else float(kn >= 10)
        )
        drag = 1.3 + fraction * (2.1 - 1.3)
        heat = 1.7415e-4 * math.sqrt(air[0] / 0.27) * columns["speed_m_s"][i] ** 3
        answers.append((number, kn, drag, heat))
    return time.perf_counter() - start


def script_pandas(_folder: Path, rows: int) -> float:
    """Time the better script: pandas columns and a single call of the atmosphere."""
    import pandas as pd
    import pymsis

    columns = flight(rows)
    start = time.perf_counter()
    table = pd.DataFrame(columns)
    utc = EPOCH + (columns["time_s"] * 1e6).astype("timedelta64[us]")
    air = pymsis.calculate(
        utc,
        table["longitude_deg"],
        table["latitude_deg"],
        table["altitude_m"] / 1e3,
        np.full(rows, 140.0),
        np.full(rows, 140.0),
        np.full((rows, 7), 15.0),
        version=0,
    )
    table["number_density"] = np.nansum(air[:, 1:9], axis=1)
    table["knudsen"] = 1.0 / (np.sqrt(2.0) * np.pi * 3.65e-10**2 * table["number_density"]) / 0.9
    fraction = np.sin(np.pi * (3 / 8 + np.log10(table["knudsen"]) / 8)) ** 2
    fraction = fraction.mask(table["knudsen"] < 1e-3, 0.0).mask(table["knudsen"] > 10.0, 1.0)
    table["drag"] = 1.3 + fraction * (2.1 - 1.3)
    table["heat"] = 1.7415e-4 * np.sqrt(air[:, 0] / 0.27) * table["speed_m_s"] ** 3
    return time.perf_counter() - start


LOOP_ROWS = 20_000
PIECES: dict[str, tuple[Callable[[Path, int], float], int | None]] = {
    # name -> function, and the rows it really does where that is not all of them
    "make": (make, None),
    "standard_air": (standard_air, None),
    "physics": (physics, None),
    "survey_standard": (survey_standard, None),
    "survey_msis": (survey_msis, None),
    "bare_msis": (bare_msis, None),
    "csv_ours": (csv_ours, None),
    "csv_pandas": (csv_pandas, CSV_ROWS),
    "figures": (figures, None),
    "script_loop": (script_loop, LOOP_ROWS),
    "script_pandas": (script_pandas, None),
}


def peak_megabytes() -> float:
    """Return the peak resident memory of this process so far [MB]."""
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0


def main() -> None:
    """Run one piece and print what it took as JSON."""
    name, folder, rows = sys.argv[1], Path(sys.argv[2]), int(sys.argv[3])
    function, really = PIECES[name]
    if name.startswith("survey"):
        # Libraries are loaded by a small survey first, so that time and memory are the work's own.

        small = folder / "small"
        small.mkdir(exist_ok=True)
        make(small, 1000)
        function(small, 1000)
    before = peak_megabytes()
    seconds = function(folder, rows)
    count = min(really or rows, rows) if name == "csv_pandas" else really or rows
    print(
        json.dumps(
            {"seconds": seconds, "seconds_per_row": seconds / count, "megabytes": peak_megabytes() - before}
        )
    )


if __name__ == "__main__":
    main()
