"""The terminal's answers to a survey, a condition and a profile; figures written to files."""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest

from aero.report import air_text, condition_text, crossings_text, figure_air, save_figure, segments_text

ANSWER = {
    "air": {
        "model": "standard-1976", "temperature_K": 195.08, "pressure_Pa": 0.0320, "density_kg_m3": 5.604e-7,
        "species_m3": {"N2": 9.2e18, "O2": 2.15e18, "O": 4.3e17, "Ar": 9.5e16, "He": None, "H": 0.0},
    },
    "gas": {"free_path_model": "hard-sphere", "mean_free_path_m": 0.142, "mach": 26.33},
    "lengths": [
        {"name": "reference", "length_m": 0.9, "knudsen": 0.158, "regime": "transitional", "cheng": None},
        {"name": "x[b]\x1b", "length_m": 1.5e-3, "knudsen": 94.8, "regime": "free-molecular", "cheng": 2},
    ],
    "drag": {"coefficient": 1.8321, "free_molecular": 2.1, "bridge": 0.6, "low": 1.7, "high": 1.95},
    "heating": {"stagnation_W_m2": 52.1e3, "low": 41e3, "high": 63e3, "wall_temperature_K": None},
    "notes": ["no place"],
}  # fmt: skip


def test_a_condition_shows_what_it_was_given_with_its_band() -> None:
    text = condition_text(ANSWER)
    assert max(map(len, text.split("\n"))) <= 100
    for part in (
        "195.1 K", "5.604×10⁻⁷ kg/m³", "N2 77.5 %", "0.142 m", "26.33", "1.832  (95 %: 1.7 to 1.95)",
        "52.1 kW/m²  (95 %: 41 kW/m² to 63 kW/m²)", "note: no place", "x[b]␛", "hard-sphere",
    ):  # fmt: skip
        assert part in text, part
    assert "None" not in text
    assert "He" not in text
    assert "\x1b" not in text
    assert "\x1b[" in condition_text(ANSWER, colour=True)


def test_a_condition_without_a_body_has_neither_drag_nor_heating() -> None:
    text = condition_text({k: v for k, v in ANSWER.items() if k not in {"drag", "heating"}})
    assert "Drag" not in text
    assert "heating" not in text


def test_survey_tables_fit_the_terminal_and_hold_every_row(any_flight: SimpleNamespace) -> None:
    segments = segments_text(any_flight.segments)
    assert max(map(len, segments.split("\n"))) <= 100
    first = segments.split("\n\n")[0].split("\n")
    rows = [line for line in first if line.startswith(tuple(any_flight.segments["length"]))]
    assert len(rows) == len(any_flight.segments)
    crossings = crossings_text(any_flight.crossings)
    assert max(map(len, crossings.split("\n"))) <= 100
    assert crossings.count("fying") == len(any_flight.crossings)


def test_a_profile_keeps_its_decades_apart() -> None:
    height = np.arange(0.0, 200e3, 20e3)
    table = {"altitude_m": height, "density_kg_m3": 1.225 * np.exp(-height / 7e3), "n_He_m3": height}
    rows = air_text(table).split("\n")[2:]
    assert len(rows) == height.size
    shown = np.array([[float(word) for word in row.split()] for row in rows])
    np.testing.assert_allclose(shown[:, 0], height / 1e3)
    np.testing.assert_allclose(shown[:, 1], table["density_kg_m3"], rtol=5e-4)  # four digits shown


@pytest.mark.parametrize(("kind", "head"), [("svg", b"<?xml"), ("png", b"\x89PNG"), ("pdf", b"%PDF")])
def test_figures_are_written_in_each_format_twice_alike(
    kind: str, head: bytes, tmp_path: Path, capsule: SimpleNamespace
) -> None:
    for name in ("one", "two"):
        save_figure(figure_air(capsule.points), tmp_path / f"{name}.{kind}")
    save_figure(figure_air(capsule.points), tmp_path / "three.tmp", kind)
    one, two, three = (path.read_bytes() for path in sorted(tmp_path.iterdir()))
    assert one == two == three
    assert one.startswith(head)
    with pytest.raises(ValueError, match="figure format is 'gif', expected one of: svg, png, pdf"):
        save_figure(figure_air(capsule.points), tmp_path / "a.gif")
