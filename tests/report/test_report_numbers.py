"""Numbers, names and thinning."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.report.labels import spread
from aero.report.names import shorten, shorten_all, visible
from aero.report.numbers import align_decimals, format_number, format_quantity, split_unit
from aero.report.thin import monotone_runs, thin


@settings(max_examples=200, deadline=None)
@given(st.floats(allow_nan=False, allow_infinity=False, min_value=-1e12, max_value=1e12), st.integers(2, 6))
def test_a_formatted_number_is_the_number_to_its_digits(value: float, digits: int) -> None:
    shown = float(format_number(value, digits))
    # half a unit of the last significant digit is at most half of 10^(1-digits) of the number
    assert shown == pytest.approx(value, rel=0.5001 * 10.0 ** (1 - digits), abs=1e-300)


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (131704.6, "m", "131.7 km"), (0.9, "m", "0.9 m"), (0.02, "m", "20 mm"), (6.63e-8, "m", "66.3 nm"),
        (0.0, "m", "0 m"), (971.3e3, "W/m²", "971.3 kW/m²"), (7.179e7, "J/m²", "71.79 MJ/m²"),
        (2.5e-5, "Pa", "25 µPa"), (7600.0, "m/s", "7.6 km/s"), (90.0, "s", "90 s"), (5 * 86400.0, "s", "5 d"),
        (float("nan"), "m", "–"), (1.5e-9, "kg/m³", "1.5×10⁻⁹ kg/m³"), (-0.3, "", "-0.3"),
    ],
)  # fmt: skip
def test_quantities_read_as_people_say_them(value: float, unit: str, text: str) -> None:
    assert format_quantity(value, unit) == text


def test_decimal_points_stand_under_each_other() -> None:
    cells = align_decimals(["85.12", "131705", "0.5", "–", "1.2e-07", "-3.25"])
    assert len({len(cell) for cell in cells}) == 1
    assert len({cell.index(".") for cell in cells if "." in cell}) == 1


def test_units_are_read_off_the_contracts_column_names() -> None:
    named = {
        "altitude_m": "m", "air_speed_m_s": "m/s", "heat_flux_low_W_m2": "W/m²", "heat_load_J_m2": "J/m²",
        "drag_deceleration_m_s2": "m/s²", "ballistic_coefficient_kg_m2": "kg/m²", "viscosity_Pa_s": "Pa s",
        "molar_mass_kg_mol": "kg/mol", "number_density_m3": "1/m³", "density_kg_m3": "kg/m³", "time_s": "s",
        "latitude_deg": "°", "temperature_K": "K", "pressure_Pa": "Pa", "mach": "", "regime.arm_m": "",
        "heat_load_share": "share", "reynolds_per_m": "1/m", "input.flag_s": "",
    }  # fmt: skip
    assert {name: split_unit(name)[1] for name in named} == named


@settings(max_examples=100, deadline=None)
@given(st.text(max_size=60))
def test_any_name_becomes_one_line_of_legal_xml(text: str) -> None:
    from xml.etree import ElementTree
    from xml.sax.saxutils import escape

    shown = visible(text)
    assert len(shown) == len(text)
    assert ElementTree.fromstring(f"<a>{escape(shown)}</a>".encode()).text == (shown or None)
    assert "\n" not in shown
    assert len(shorten(text, 12)) <= 12


@settings(max_examples=50, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(1, 30_000), st.integers(1, 4))
def test_thinning_keeps_ends_and_extremes_of_every_series(seed: int, count: int, series: int) -> None:
    rng = np.random.default_rng(seed)
    values = rng.normal(size=(series, count)).cumsum(axis=1)
    values[:, rng.random(count) < 0.1] = np.nan
    rows = thin(*values, limit=500)
    assert len(rows) <= 500 or count <= 500
    assert rows[0] == 0
    assert rows[-1] == count - 1
    assert (np.diff(rows) > 0).all()
    for one in values:
        if np.isfinite(one).any():
            assert np.nanmin(one[rows]) == np.nanmin(one)
            assert np.nanmax(one[rows]) == np.nanmax(one)


def test_thinning_keeps_a_gap_and_refuses_nonsense() -> None:
    values = np.ones(100_000)
    values[40_000:60_000] = np.nan
    assert np.isnan(values[thin(values)]).sum() > 100
    with pytest.raises(ValueError, match="equal length"):
        thin(np.ones(3), np.ones(4))
    with pytest.raises(ValueError, match="one or more series"):
        thin()
    with pytest.raises(ValueError, match="leaves no room"):
        thin(values, limit=3)
    assert thin(np.array([])).size == 0


def test_runs_cover_the_series_and_each_goes_one_way() -> None:
    values = np.array([5.0, 4.0, 4.0, 3.0, 6.0, 7.0, 7.0, 2.0])
    runs = monotone_runs(values)
    assert [run.start for run in runs[1:]] == [run.stop - 1 for run in runs[:-1]]
    for run in runs:
        step = np.diff(values[run])
        assert (step >= 0).all() or (step <= 0).all()
    assert monotone_runs([]) == []
    assert monotone_runs([1.0, 1.0]) == [slice(0, 2)]


@settings(max_examples=100, deadline=None)
@given(st.lists(st.floats(0.0, 4.0), max_size=8))
def test_spread_labels_keep_their_order_and_distance(wanted: list[float]) -> None:
    places = spread(wanted, 0.3, -10.0, 20.0)
    order = sorted(range(len(wanted)), key=lambda i: wanted[i])
    steps = np.diff([places[i] for i in order])
    assert (steps >= 0.3 - 1e-6).all()


@settings(max_examples=200, deadline=None)
@given(st.lists(st.text("ab\x01\x80", min_size=1, max_size=40), unique=True, max_size=6), st.integers(10, 24))
def test_shortened_names_stay_within_the_limit_and_apart(names: list[str], limit: int) -> None:
    short = shorten_all(names, limit)
    assert all(len(one) <= limit for one in short)
    assert len(set(short)) == len(names)
    assert shorten_all(names * 2, limit) == short * 2


def test_names_alike_at_both_ends_show_where_they_differ() -> None:
    names = [f"thermal_protection_gap_{k}_windward_side_panel" for k in ("left", "right")]
    assert len({shorten(name, 24) for name in names}) == 1
    short = shorten_all([*names, "nose"], 24)
    assert short[2] == "nose"
    assert [word for word in ("left", "right") if any(word[:2] in one for one in short[:2])] == [
        "left",
        "right",
    ]
