"""Text tables: width, alignment, colours, and numbers equal to the data."""

from __future__ import annotations

import re
import subprocess
import sys
from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest

from aero.report import SEGMENT_COLUMNS, table_text
from aero.report.columns import ready
from aero.report.table import facts_text

ANSI = re.compile(r"\x1b\[[0-9;]*m")


def test_a_wide_table_is_dealt_into_narrow_ones_that_repeat_their_keys(any_flight: SimpleNamespace) -> None:
    text = table_text(any_flight.segments, keys=2, title="Segments")
    assert max(map(len, text.split("\n"))) <= 100
    assert text.startswith("Segments")
    headers = re.findall(r"^length +regime", text, re.MULTILINE)
    assert len(headers) >= 2
    assert text.count("reference") == len(headers) * (any_flight.segments["length"] == "reference").sum()


def test_numbers_in_a_table_are_those_of_the_data(capsule: SimpleNamespace) -> None:
    for one in ready(capsule.segments):
        if one.kind != "number":
            assert list(one.cells) == [str(v) for v in capsule.segments[one.name]]
            continue
        np.testing.assert_array_equal(one.values, capsule.segments[one.name])
        scale = {"km": 1e-3, "km/s": 1e-3, "%": 100.0, "MJ/m²": 1e-6}.get(one.unit, 1.0)
        digits = 3 if one.unit == "%" else 4
        # half a unit of the last digit shown
        np.testing.assert_allclose(
            [float(c) for c in one.cells], one.values * scale, rtol=0.51 * 10.0 ** (1 - digits)
        )


def test_units_stand_in_headers_and_never_in_cells(capsule: SimpleNamespace) -> None:
    text = table_text(capsule.crossings)
    titles = [one.title for one in ready(capsule.crossings)]
    assert "altitude [km]" in titles
    assert "air speed [km/s]" in titles
    cells = [cell for one in ready(capsule.crossings) if one.kind == "number" for cell in one.cells]
    assert all(re.fullmatch(r"-?[\d.]+(e[+-]\d+)?", cell) for cell in cells)
    assert "[km/s]" in text


def test_colours_only_when_asked(capsule: SimpleNamespace) -> None:
    plain = table_text(capsule.segments, keys=2)
    coloured = table_text(capsule.segments, keys=2, colour=True)
    assert "\x1b" not in plain
    assert "48;2;22;50;79m" in coloured  # the ground of continuum, #16324f

    def bare(text: str) -> list[str]:
        return [line.rstrip() for line in ANSI.sub("", text).split("\n")]

    assert bare(coloured) == bare(plain)


def test_names_cannot_write_to_the_terminal_or_use_markup() -> None:
    text = table_text(
        {"length": ["[red]x[/red]", "a\x1b]0;title\x07", "y" * 300], "length_m": [1.0, 2.0, np.nan]}
    )
    assert "[red]x[/red]" in text
    assert "\x1b" not in text
    assert "\x07" not in text
    assert max(map(len, text.split("\n"))) <= 100
    assert "–" in text


def test_empty_missing_and_mixed_cells_have_a_fixed_look() -> None:
    frame = pd.DataFrame(
        {
            "utc": pd.to_datetime(["2024-01-02T03:04:05.5", None]),
            "count": [1, 20000000],
            "on": [True, False],
            "maybe": [None, 2.5],
            "regime": ["slip", None],
        }
    )
    got = {one.name: one.cells for one in ready(frame)}
    assert got["utc"] == ("2024-01-02T03:04:05.500Z", "–")
    assert got["count"] == ("1", "20000000")
    assert got["on"] == ("yes", "no")
    assert got["maybe"] == ("–", "2.500")
    assert got["regime"] == ("slip", "–")
    assert table_text(frame.iloc[:0]).split() == ["UTC", "count", "on", "maybe", "regime"]
    with pytest.raises(ValueError, match=r"no column 'speed'; it has: utc, count"):
        ready(frame, ["speed"])


def test_facts_line_up() -> None:
    lines = facts_text({"altitude_m": 1e5, "heat_flux_W_m2": 2.5e5, "model": "x" * 300}).split("\n")
    assert lines[0].split() == ["altitude", "100", "km"]
    assert lines[1].endswith("250 kW/m²")
    assert all(len(line) <= 100 for line in lines)


def test_tables_need_neither_pandas_nor_matplotlib_nor_templates() -> None:
    code = (
        "import sys; import aero.report.table as t; "
        "t.table_text({'length': ['a'], 'knudsen': [0.5], 'regime': ['slip']}); "
        "sys.exit(any(m in sys.modules for m in ('pandas', 'matplotlib', 'jinja2')))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


def test_a_profile_keeps_its_decades_apart() -> None:
    height = np.arange(0.0, 200e3, 20e3)
    table = {"altitude_m": height, "density_kg_m3": 1.225 * np.exp(-height / 7e3), "n_He_m3": height}
    rows = table_text(table, columns=["altitude_m", "density_kg_m3"]).split("\n")[2:]
    assert len(rows) == height.size
    shown = np.array([[float(word) for word in row.split()] for row in rows])
    np.testing.assert_allclose(shown[:, 0], height / 1e3)
    np.testing.assert_allclose(shown[:, 1], table["density_kg_m3"], rtol=5e-4)  # four digits shown


def test_segments_need_one_table_for_their_numbers_and_one_for_the_method(
    any_flight: SimpleNamespace,
) -> None:
    segments = any_flight.segments.assign(altitude_min_m=80e3, altitude_max_m=130e3)
    text = table_text(segments, columns=SEGMENT_COLUMNS, keys=2)
    assert max(map(len, text.split("\n"))) <= 100
    numbers, methods = text.split("\n\n")
    assert all(word in numbers for word in ("lowest", "highest", "heat load", "speed"))
    assert methods.split()[:3] == ["length", "regime", "method"]


def test_names_of_lengths_stay_apart_in_a_table() -> None:
    names = [f"{'thermal_protection_' * 3}{k}{'_windward_side' * 3}" for k in "ab"]
    rows = table_text({"length": names, "length_m": [1.0, 2.0]}).split("\n")[-2:]
    assert rows[0].split()[0] != rows[1].split()[0]
