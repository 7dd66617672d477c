"""The sentence anyone can repeat: which regimes, where they change, where the heat falls."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pandas as pd

from aero.body import Vehicle
from aero.regime import REGIMES

TURN = 1.0  # km by which a turning point must differ from both ends to be named
MOST_LISTED = 6  # crossings named one by one; more are counted


def summary_sentence(
    vehicle: Vehicle,
    lengths: Mapping[str, float],
    points: pd.DataFrame,
    segments: pd.DataFrame,
    crossings: pd.DataFrame,
) -> str:
    """Return the summary of a survey.

    Parameters
    ----------
    vehicle : Vehicle
    lengths : mapping of name to length [m], `reference` first
    points, segments, crossings : DataFrame
        As in `Survey`.
    """
    name = vehicle.name or "The vehicle"
    if segments.empty:
        return _without_time(name, lengths["reference"], points)
    parts = [f"{name} ({_length(lengths['reference'])}) {_course(segments, crossings)}"]
    parts += _turns(points)
    heat = _falls(segments, "heat_load_share", "of the heat load falls") if _heats(segments) else ""
    if heat:
        parts.append(heat)
    smallest = min(lengths, key=lambda n: lengths[n])
    if smallest != "reference":
        parts.append(_small(smallest, lengths[smallest], segments, crossings))
    return "; ".join(parts) + "."


def _without_time(name: str, length: float, points: pd.DataFrame) -> str:
    counts = points["regime.reference"].value_counts()
    listed = ", ".join(f"{counts[r]} in {r} flow" for r in REGIMES if counts.get(r, 0) > 0)
    return f"{name} ({_length(length)}): of {len(points)} conditions, {listed}."


def _length(value: float) -> str:
    return f"{value:.3g} m" if value >= 0.1 else f"{value * 1e3:.3g} mm"


def _flow(regime: str) -> str:
    return "continuum flow" if regime == "continuum" else f"{regime} flow"


def _course(segments: pd.DataFrame, crossings: pd.DataFrame) -> str:
    mine = segments[segments["length"] == "reference"]
    cut = crossings[crossings["length"] == "reference"]
    regimes = list(mine["regime"])
    if cut.empty:
        return f"stays in {_flow(regimes[0])} throughout"
    if len(cut) > MOST_LISTED:
        low, high = cut["altitude_m"].min() / 1e3, cut["altitude_m"].max() / 1e3
        return (
            f"starts in {_flow(regimes[0])}, crosses a bound {len(cut)} times between {low:.1f} and {high:.1f} km "
            f"and ends in {_flow(regimes[-1])}"
        )
    altitudes = [f"{a / 1e3:.1f} km" for a in cut["altitude_m"]]
    if regimes == list(REGIMES[::-1]):
        return f"leaves free-molecular flow at {altitudes[0]} and is in continuum flow below {altitudes[-1]}"
    if regimes == list(REGIMES):
        return f"leaves continuum flow at {altitudes[0]} and is in free-molecular flow above {altitudes[-1]}"
    steps = ", ".join(f"{_flow(r)} at {a}" for r, a in zip(regimes[1:], altitudes, strict=True))
    return f"starts in {_flow(regimes[0])} and passes into {steps}"


def _turns(points: pd.DataFrame) -> list[str]:
    """Name the lowest and the highest point where the flight turns there, and is not at an end of it."""
    altitude = points["altitude_m"].to_numpy() / 1e3
    found = []
    for word, at in (("lowest", int(altitude.argmin())), ("highest", int(altitude.argmax()))):
        ends = abs(altitude[[0, -1]] - altitude[at])
        if ends.min() > TURN:
            found.append(f"{word} at {altitude[at]:.1f} km")
    return [" and ".join(found)] if found else []


def _heats(segments: pd.DataFrame) -> bool:
    """Whether the flight heats the wall at all: a load below zero is cooling and has no shares to speak of."""
    mine = segments[segments["length"] == "reference"]
    return bool(mine["heat_load_J_m2"].sum() > 0.0)


def _falls(segments: pd.DataFrame, column: str, words: str) -> str:
    mine = segments[segments["length"] == "reference"]
    shares = mine.groupby("regime", sort=False)[column].sum(min_count=1)
    shares = shares[np.isfinite(shares)].sort_values(ascending=False, kind="stable")
    if shares.empty:
        return ""
    top = shares[shares >= 0.05].head(3) if (shares >= 0.05).any() else shares.head(1)
    listed = [
        f"{_percent(value)} {words if i == 0 else ''} in {_flow(str(regime))}"
        for i, (regime, value) in enumerate(top.items())
    ]
    return ", ".join(part.replace("  ", " ") for part in listed)


def _percent(value: float) -> str:
    if value > 0.995 and value < 1.0:
        return "over 99 %"
    return f"{100.0 * value:.0f} %"


def _small(name: str, length: float, segments: pd.DataFrame, crossings: pd.DataFrame) -> str:
    regimes = list(segments[segments["length"] == name]["regime"])
    label = f"{name} ({_length(length)})"
    cut = crossings[(crossings["length"] == name)]
    if len(set(regimes)) == 1:
        return f"{label} stays in {_flow(regimes[0])} throughout"
    lowest = cut.iloc[int(cut["altitude_m"].to_numpy().argmin())]
    bounds = sorted(cut["bound"].unique())
    below = next(r for r in REGIMES if r in regimes)
    at = lowest["altitude_m"] / 1e3
    if lowest["bound"] == bounds[0] and below == "continuum":
        return f"{label} is in continuum flow only below {at:.1f} km"
    return f"{label} never gets denser than {_flow(below)}, below {at:.1f} km"
