"""Headers: every meaning, synonym, unit and spelling; and the values behind them."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.trajectory.columns import lay_out, recognise
from aero.trajectory.meanings import IMPLIED, LONG, MEANINGS, SHORT
from aero.trajectory.metadata import KEYS, Statement, quoted, statement, understand, unquoted
from aero.units import UNITS, split_header

STYLES = {
    "brackets": lambda words, unit: f"{words} [{unit}]",
    "parentheses": lambda words, unit: f"{words.title()} ({unit})",
    "suffix": lambda words, unit: f"{words.replace(' ', '_')}_{unit.replace('/', '_')}",
    "capitals": lambda words, unit: f"{words.replace(' ', '_')}_{unit.replace('/', '_')}".upper(),
    "hyphens": lambda words, unit: f" {words.replace(' ', '-')} [ {unit} ] ",
}
CASES = [(words, meaning.name) for table in (LONG, SHORT) for words, meaning in table.items()]


@st.composite
def headers(draw: st.DrawFn) -> tuple[str, str, str]:
    words, name = draw(st.sampled_from(CASES))
    unit = draw(st.sampled_from(list(UNITS[MEANINGS[name].dimension])))
    return STYLES[draw(st.sampled_from(list(STYLES)))](words, unit), name, unit


@given(headers())
def test_every_spelling_of_a_header_is_understood(case: tuple[str, str, str]) -> None:
    header, name, unit = case
    found = recognise(header)
    assert found is not None, header
    assert found[0].name == name
    needed = [text for text in ("altitude_m", "speed_m_s") if recognise(text)[0].name != name]  # type: ignore[index]
    column = lay_out([header, *needed], source="a.csv").columns[name]
    factor, offset = UNITS[MEANINGS[name].dimension][unit]
    assert (column.factor, column.offset) == (factor, offset)


@given(headers(), st.floats(-1e6, 1e6))
def test_a_value_goes_to_si_and_back(case: tuple[str, str, str], value: float) -> None:
    header, name, unit = case
    needed = [text for text in ("altitude_m", "speed_m_s") if recognise(text)[0].name != name]  # type: ignore[index]
    column = lay_out([header, *needed], source="a.csv").columns[name]
    si = column.si(np.array([value]))[0]
    factor, offset = UNITS[MEANINGS[name].dimension][unit]
    # two roundings each way, at the size of the offset where there is one; below 1e-300 digits run out
    assert si / factor - offset == pytest.approx(value, rel=1e-15, abs=1e-300 + 4e-16 * abs(offset))


@given(st.text(max_size=30))
def test_any_header_is_taken_or_left_but_never_breaks(text: str) -> None:
    assert split_header(text).text == text
    found = recognise(text)
    assert found is None or found[0].name in MEANINGS


def test_no_word_has_two_meanings() -> None:
    every = [words for meaning in MEANINGS.values() for words in (*meaning.synonyms, *meaning.short)]
    assert len(every) == len(set(every))
    assert set(IMPLIED) <= set(LONG)


@pytest.mark.parametrize("name", MEANINGS)
def test_what_is_written_is_what_is_read(name: str) -> None:
    meaning = MEANINGS[name]
    found = recognise(meaning.column)
    assert found is not None
    assert found[0] is meaning
    assert UNITS[meaning.dimension][found[2]] in ((1.0, 0.0), UNITS["angle"]["deg"])  # type: ignore[index]
    assert meaning.lowest < meaning.highest


@pytest.mark.parametrize(
    "header", ["T [K]", "beta [kg/m2]", "h [J/kg]", "alpha [1/m3]", "temperature_K", "mach"]
)
def test_other_quantities_are_not_mistaken(header: str) -> None:
    assert recognise(header) is None


@pytest.mark.parametrize(
    ("name", "inside", "outside"),
    [
        ("altitude", [-5e3, 1e6], [-5000.1, 1000000.1, np.nan]),
        ("latitude", np.radians([-90, 90]), np.radians([-90.001, 90.001])),
        ("longitude", np.radians([-180, 360]), np.radians([-180.001, 360.001])),
        ("speed", [0.0, 1e5], [-1e-9, 1.1e5, np.inf]),
    ],
)
def test_bounds_are_allowed_and_no_more(name: str, inside: list[float], outside: list[float]) -> None:
    assert MEANINGS[name].outside(np.array(inside)) is None
    bad = MEANINGS[name].outside(np.array(outside))
    assert bad is not None
    assert bad.all()
    assert MEANINGS[name].outside(np.array([])) is None


@pytest.mark.parametrize("key", KEYS)
def test_the_example_of_every_key_is_understood(key: str) -> None:
    line = statement(f"#{key.upper()} :{KEYS[key]}", 1)
    assert line is not None
    assert line.key == key
    assert understand([line], source="a.csv").notes == []


@pytest.mark.parametrize("key", [key for key in KEYS if key not in ("name", "comment")])
def test_a_letter_missing_is_a_near_miss(key: str) -> None:
    for cut in (key[:-1], key[1:]):
        with pytest.raises(ValueError, match=f"did you mean '{key}'"):
            understand([Statement(cut, "1", 3)], source="a.csv")


@pytest.mark.parametrize("key", ["vehicle", "made by", "version", "notes", "mission", "comments"])
def test_other_keys_are_noted(key: str) -> None:
    told = understand([Statement(key, "x", 1)], source="a.csv")
    assert told.notes == [f"metadata key '{key}' is not known and was not used"]


@given(st.text(min_size=1, max_size=30))
def test_any_name_comes_through_a_metadata_line(name: str) -> None:
    line = statement(f"# name: {quoted(name)}", 1)
    assert line is not None
    assert unquoted(line.value) == name
