"""The second process of long flights: the same answers, and no harm when it is lost."""

from __future__ import annotations

import numpy as np
import pytest

from aero.air import Air, Msis, ahead


def blocks(model: Msis, count: int) -> list[ahead.Question]:
    return [
        model.question(
            np.linspace(90e3, 140e3, 50) + 100.0 * k,
            latitude_deg=np.full(50, 10.0 + k),
            longitude_deg=np.full(50, 20.0),
            utc=np.full(50, np.datetime64("2026-03-01T12:00:00", "us")),
        )
        for k in range(count)
    ]


def answers(source: ahead.Ahead, questions: list[ahead.Question]) -> list[Air]:
    found = []
    for k, question in enumerate(questions):
        if k % 2 == 0 and k + 1 < len(questions):
            source.ask(questions[k + 1])
        found.append(source.air(question, asked=k % 2 == 1))
    return found


@pytest.fixture
def eager(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(ahead, "FROM_POINTS", 0)
    monkeypatch.setattr(ahead, "_cores", lambda: 2)


@pytest.mark.usefixtures("eager")
def test_answers_are_the_same_bit_for_bit() -> None:
    model = Msis("nrlmsise-00", activity="moderate")
    questions = blocks(model, 5)
    with ahead.ahead(model, 250) as source:
        child = source.child
        assert child is not None
        found = answers(source, questions)
    assert child.poll() is not None  # nothing is left running
    for question, air in zip(questions, found, strict=True):
        alone = model.at(
            question.altitude,
            latitude_deg=question.latitude,
            longitude_deg=question.longitude,
            utc=question.dates,
        )
        assert np.array_equal(air.species, alone.species)
        assert np.array_equal(air.temperature, alone.temperature)


@pytest.mark.usefixtures("eager")
def test_a_lost_child_only_costs_time() -> None:
    model = Msis("nrlmsise-00", activity="moderate")
    questions = blocks(model, 6)
    with ahead.ahead(model, 300) as source:
        assert source.child is not None
        first = answers(source, questions[:2])
        source.child.kill()
        source.child.wait()
        rest = answers(source, questions[2:])
    assert len(first + rest) == 6
    assert np.isfinite([air.density.sum() for air in rest]).all()


def test_short_flights_start_none() -> None:
    with ahead.ahead(Msis("nrlmsise-00"), 1000) as source:
        assert source.child is None
