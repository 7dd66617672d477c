"""Colours, once: the regime scale, the text that stands on it, and the inks of figures and pages.

The regime scale runs from deep to pale, so that its order survives a grey printer and any kind of
colour vision by lightness alone; a light hatch marks transitional besides.
"""

from __future__ import annotations

from collections.abc import Sequence

REGIMES = ("continuum", "slip", "transitional", "free-molecular")  # from dense to rarefied
REGIME_COLOURS = {
    "continuum": "#16324f",
    "slip": "#3a7d8c",
    "transitional": "#e2a33d",
    "free-molecular": "#f6e7c8",
}
# Neither is the paper's white nor the ink below: those two change places in the dark, these must not.
REGIME_TEXT = {
    "continuum": "#fdfdfb",
    "slip": "#fdfdfb",
    "transitional": "#1d1a14",
    "free-molecular": "#1d1a14",
}
# Lines that cross a band at full colour (contours): quiet on each, still to be seen.
REGIME_HAIR = {
    "continuum": "#8fa5bb",
    "slip": "#c4dde2",
    "transitional": "#7d5510",
    "free-molecular": "#8d7c58",
}
HATCHED = "transitional"
HATCH = "////"
HATCH_COLOUR = "#d2922a"

PAPER = "#ffffff"
INK = "#1b2733"
GREY = "#66727f"  # limits, second scales
FAINT = "#dbe1e6"  # grid
WASH = "#cbdbe3"  # the 95 % band
ACCENT = "#a8443a"  # one line beside the main one (radiative part, load), and the user's own results

# For a page that follows the reader's system: the variable that stands in for each of the above.
PAGE_INKS = {
    PAPER: ("--paper", "#14191f"),
    INK: ("--ink", "#e4e9ee"),
    GREY: ("--grey", "#98a5b2"),
    FAINT: ("--faint", "#2c353e"),
    WASH: ("--wash", "#2f4757"),
    ACCENT: ("--accent", "#e58a7f"),
}


def bound_phrases(bounds: Sequence[float]) -> dict[str, str]:
    """Return for each regime its range of Knudsen numbers in words.

    Examples
    --------
    >>> bound_phrases((0.01, 0.1, 10.0))["slip"]
    'Kn 0.01 to 0.1'
    >>> bound_phrases((0.01, 0.1, 10.0))["free-molecular"]
    'Kn from 10'
    """
    low, middle, high = check_bounds(bounds)
    return {
        "continuum": f"Kn below {low:g}",
        "slip": f"Kn {low:g} to {middle:g}",
        "transitional": f"Kn {middle:g} to {high:g}",
        "free-molecular": f"Kn from {high:g}",
    }


def check_bounds(bounds: Sequence[float]) -> tuple[float, float, float]:
    """Return the three bounds as floats.

    Raises
    ------
    ValueError
        If they are not three positive numbers in rising order.
    """
    values = tuple(float(bound) for bound in bounds)
    if len(values) != 3 or not 0.0 < values[0] < values[1] < values[2] < float("inf"):
        raise ValueError(f"regime bounds must be three positive rising Knudsen numbers, not {values}")
    return values
