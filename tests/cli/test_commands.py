"""Each command as a person and as a program calls it."""

from __future__ import annotations

import csv
import io
import json
import sys
from pathlib import Path
from typing import Any

import pytest

from aero.cli import COMMANDS

POINT = ["point", "--altitude", "100km", "--speed", "7.5km/s"]


def strict(text: str) -> Any:
    def refuse(name: str) -> float:
        raise AssertionError(f"{name} in JSON")

    return json.loads(text, parse_constant=refuse)


def test_point_json_has_the_promised_keys(run) -> None:  # type: ignore[no-untyped-def]
    done = run(*POINT, "--length", "1m", "--format", "json")
    answer = strict(done.stdout)
    assert set(answer["air"]["species_m3"]) == {"N2", "O2", "O", "N", "Ar", "He", "H"}
    assert sum(answer["air"]["species_m3"].values()) == pytest.approx(answer["air"]["number_density_m3"])
    assert answer["lengths"][0]["name"] == "length"
    # U.S. Standard Atmosphere 1976, printed: n 1.189e19 1/m3 at 100 km (4 digits), so Kn of 1 m is 0.1421
    assert answer["lengths"][0]["knudsen"] == pytest.approx(0.1421, rel=5e-4)
    assert answer["lengths"][0]["regime"] == "transitional"
    assert "drag" not in answer
    assert set(answer["gas"]) >= {
        "free_path_model", "mean_free_path_m", "viscosity_Pa_s", "heat_capacity_ratio", "sound_speed_m_s",
        "mach", "speed_ratio", "dynamic_pressure_Pa", "reynolds_per_m",
    }  # fmt: skip


def test_point_with_a_shape_begins_with_the_reference(run) -> None:  # type: ignore[no-untyped-def]
    done = run(*POINT, "--shape", "sphere", "--diameter", "1m", "--length", "gap=1mm", "--format", "json")
    answer = strict(done.stdout)
    assert [length["name"] for length in answer["lengths"]] == ["reference", "gap"]
    assert answer["lengths"][0]["length_m"] == 1.0
    assert set(answer["drag"]) >= {"coefficient", "free_molecular", "continuum", "bridge", "low", "high"}
    assert answer["heating"]["wall_temperature_K"] == 300.0
    assert "not a basis for sizing thermal protection" in done.stderr


def test_point_at_rest(run) -> None:  # type: ignore[no-untyped-def]
    done = run(
        "point",
        "--altitude",
        "0km",
        "--speed",
        "0m/s",
        "--shape",
        "sphere",
        "--diameter",
        "1m",
        "--format",
        "json",
    )
    answer = strict(done.stdout)
    assert answer["drag"]["coefficient"] is None
    assert answer["heating"]["stagnation_W_m2"] == 0.0
    assert answer["heating"]["coefficient"] is None


def test_point_for_a_person_and_as_csv(run, marram: str) -> None:  # type: ignore[no-untyped-def]
    text = run(*POINT, "--vehicle", marram).stdout
    assert "Stagnation heating" in text
    assert "standard-1976" in text or "Standard Atmosphere 1976" in text
    assert max(map(len, text.splitlines())) <= 100
    rows = list(csv.reader(io.StringIO(run(*POINT, "--vehicle", marram, "--format", "csv").stdout)))
    assert len(rows) == 2
    assert len(rows[0]) == len(rows[1])
    assert "lengths.seal_gap.knudsen" in rows[0]


def test_air_includes_both_ends(run) -> None:  # type: ignore[no-untyped-def]
    done = run("air", "--from", "80km", "--to", "105km", "--step", "10km", "--format", "csv")
    rows = list(csv.DictReader(io.StringIO(done.stdout)))
    assert [float(r["altitude_m"]) for r in rows] == [80e3, 90e3, 100e3, 105e3]
    assert list(rows[0]) == [
        "altitude_m", "temperature_K", "pressure_Pa", "density_kg_m3", "number_density_m3", "molar_mass_kg_mol",
        "mean_free_path_m", "viscosity_Pa_s", "heat_capacity_ratio", "sound_speed_m_s", "n_N2_m3", "n_O2_m3",
        "n_O_m3", "n_N_m3", "n_Ar_m3", "n_He_m3", "n_H_m3",
    ]  # fmt: skip
    answer = strict(run("air", "--from", "80km", "--to", "80km", "--step", "1km", "--format", "json").stdout)
    assert answer[0]["altitude_m"] == 80e3


def test_air_as_figure(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    run("air", "--from", "0km", "--to", "200km", "--step", "1km", "--figure", "air.svg")
    assert "<svg" in (work / "air.svg").read_text()
    again = run("air", "--from", "0km", "--to", "200km", "--step", "1km", "--figure", "air.svg", code=2)
    assert "--replace" in again.stderr


def test_fly_writes_what_survey_reads(run, work: Path, marram: str) -> None:  # type: ignore[no-untyped-def]
    done = run(
        "fly", "--vehicle", marram, "--altitude", "120km", "--speed", "7.6km/s", "--flight-path-angle=-5deg",
        "--out", "flight.csv", "--format", "json",
    )  # fmt: skip
    answer = strict(done.stdout)
    assert answer["final"]["altitude_m"] == pytest.approx(0.0, abs=1e-3)
    assert answer["peak_deceleration_m_s2"] > 50.0
    done = run(
        "survey", "flight.csv", "--vehicle", marram, "--out", "out", "--figures", "none", "--format", "json"
    )
    record = strict(done.stdout)
    # the survey's largest sample and the flight's true peak: the same physics, sampled every second or so
    peak = answer["peak_heat_flux_W_m2"]
    assert record["results"]["peak_heat_flux_W_m2"] == pytest.approx(peak, rel=2e-3)
    assert record["results"]["heat_load_J_m2"] == pytest.approx(answer["heat_load_J_m2"], rel=2e-3)


def test_fly_with_a_constant_ballistic_coefficient_has_no_heating(run) -> None:  # type: ignore[no-untyped-def]
    done = run(
        "fly", "--ballistic-coefficient", "60kg/m2", "--altitude", "120km", "--speed", "7.6km/s",
        "--flight-path-angle=-5deg", "--format", "json",
    )  # fmt: skip
    assert strict(done.stdout)["peak_heat_flux_W_m2"] is None


def test_survey_says_which_air_and_what_to_open(run, work: Path, steep: str, marram: str) -> None:  # type: ignore[no-untyped-def]
    done = run("survey", steep, "--vehicle", marram, "--out", "out")
    lines = done.stdout.strip().splitlines()
    assert "NRLMSISE-00" in lines[0]
    assert "since date and place are known" in " ".join(lines[:3])
    assert "open out/report.html first" in lines[-1]
    assert "not a basis for sizing thermal protection" in " ".join(done.stdout.split())
    assert done.stderr == ""
    assert max(map(len, lines)) <= 100


def test_survey_formats_keep_stdout_clean(run, steep: str, marram: str) -> None:  # type: ignore[no-untyped-def]
    table = run("survey", steep, "--vehicle", marram, "--out", "a", "--figures", "none", "--format", "csv")
    rows = list(csv.DictReader(io.StringIO(table.stdout)))
    assert {r["regime"] for r in rows} <= {"continuum", "slip", "transitional", "free-molecular"}
    assert "Wrote" in table.stderr


def test_existing_output_is_refused_before_any_work(run, work: Path, steep: str, marram: str) -> None:  # type: ignore[no-untyped-def]
    arguments = ["survey", steep, "--vehicle", marram, "--out", "out", "--figures", "none"]
    run(*arguments)
    done = run(*arguments, code=2)
    assert "pass --replace" in done.stderr
    run(*arguments, "--replace")
    assert [p.name for p in work.iterdir()] == ["out"]


def test_a_terminated_run_leaves_nothing(work: Path, marram: str, tmp_path: Path) -> None:
    import os
    import signal
    import subprocess
    import time

    import numpy as np
    import pandas as pd

    count = 400_000
    pd.DataFrame(
        {"time_s": np.arange(count) * 1e-2, "altitude_m": np.linspace(150e3, 30e3, count), "speed_m_s": 7e3}
    ).to_parquet(tmp_path / "long.parquet")
    folder = tmp_path / "here"
    folder.mkdir()
    command = [sys.executable, "-m", "aero", "survey", str(tmp_path / "long.parquet"), "--vehicle", marram]
    process = subprocess.Popen(
        [*command, "--out", "out"], cwd=folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE
    )
    deadline = time.monotonic() + 60.0
    while not list(folder.glob(".aero-*")) and process.poll() is None and time.monotonic() < deadline:
        time.sleep(0.01)
    os.kill(process.pid, signal.SIGTERM)
    process.communicate()
    assert process.returncode == 128 + signal.SIGTERM
    assert list(folder.iterdir()) == []


def test_a_slow_warm_flight_says_that_it_cools(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    (work / "slow.csv").write_text("time_s,altitude_km,speed_m_s\n0,12,150\n60,10,150\n120,9,140\n")
    (work / "ball.toml").write_text(
        'mass = "3 kg"\n[reference]\narea = "0.1 m2"\nlength = "0.3 m"\n[shape]\nkind = "sphere"\n'
        'diameter = "0.3 m"\n[surface]\ntemperature = "350 K"\n'
    )
    done = run("survey", "slow.csv", "--vehicle", "ball.toml", "--out", "out")
    text = " ".join(done.stdout.split())
    assert "the wall loses heat" in text
    assert "of the heat load falls" not in text


def test_an_unusual_pair_of_altitude_and_speed_is_noted(run) -> None:  # type: ignore[no-untyped-def]
    done = run("point", "--altitude", "120m", "--speed", "7km/s", "--length", "1m")
    assert "check the units" in done.stdout


def test_demo_runs_from_any_folder(run, work: Path) -> None:  # type: ignore[no-untyped-def]
    done = run("demo")
    assert (work / "aero-demo" / "report.html").is_file()
    assert "aero-demo/report.html" in done.stdout


@pytest.mark.parametrize("name", [*COMMANDS, ""])
def test_help_has_a_worked_example(name: str, run) -> None:  # type: ignore[no-untyped-def]
    text = " ".join(run(*([name] if name else []), "--help").stdout.split())
    assert f"aero {name}" in text
    assert "Usage" in text


def test_start_imports_only_what_it_needs() -> None:
    import subprocess

    heavy = "pandas,matplotlib,pyarrow,polars,scipy.interpolate,scipy.optimize,scipy.integrate,jinja2,rich"
    for arguments in (["--help"], [*POINT, "--length", "1m", "--format", "json"]):
        script = (
            f"import sys; sys.argv = ['aero', *{arguments!r}]\nfrom aero.cli import main\ntry:\n    main()\n"
            "except SystemExit:\n    pass\n"
            f"print([m for m in {heavy!r}.split(',') if m in sys.modules], file=sys.stderr)"
        )
        done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
        assert done.stderr.strip().endswith("[]"), done.stderr


def test_option_texts_name_every_model() -> None:
    # the command line keeps names of its own so that help needs no model; here they are held to the registries
    from aero.air import ACTIVITIES, ATMOSPHERES
    from aero.cli import options
    from aero.force.gas_surface_bodies import OTHER_MODELS
    from aero.gas import FREE_PATHS
    from aero.heat import CONVECTIVE

    assert list(options.ATMOSPHERE_NAMES) == list(ATMOSPHERES)
    assert set(options.PLACED) == {name for name, model in ATMOSPHERES.items() if model.needs_place}
    assert list(options.ACTIVITY_NAMES) == list(ACTIVITIES)
    assert list(options.FREE_PATH_NAMES) == list(FREE_PATHS)
    assert list(options.CONVECTIVE_NAMES) == list(CONVECTIVE)
    assert list(options.SURFACE_MODELS) == list(OTHER_MODELS)


def test_a_closed_pipe_is_no_error(marram: str) -> None:
    import subprocess

    command = f"{sys.executable} -m aero air --from 0km --to 900km --step 100m --format csv | head -n 1"
    done = subprocess.run(command, shell=True, capture_output=True, text=True, check=True)
    assert done.stdout.startswith("altitude_m")
    assert done.stderr == ""
