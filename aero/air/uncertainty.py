"""How far off the density of an atmosphere is: bias common to a whole flight, scatter along it."""

from __future__ import annotations

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

# The totals below are 1-sigma of ln(density). A total is split so that the squares add up, 0.8^2 + 0.6^2 = 1.
BIAS_SHARE = 0.8  # common to a whole entry or orbit; judgement, no source
SCATTER_SHARE = 0.6  # averages out along it; judgement, no source

STORM_AP = 100.0  # above this Ap the storm term is added
STORM = 0.40  # judgement, no source

# MSIS: (altitude [km], total) by the 81-day F10.7. Judgement around the 15 % published for orbital heights
# [Picone2002]; flat inside each band, straight lines across its edges. Below 120 km there is one column.
_LOW_PART = ((0, 0.05), (55, 0.05), (65, 0.08), (75, 0.08), (82, 0.12), (88, 0.12), (95, 0.22), (115, 0.22))
MSIS_TOTAL: dict[float, tuple[tuple[float, float], ...]] = {
    65.0: (
        *_LOW_PART, (125, 0.15), (190, 0.15), (210, 0.18), (330, 0.18), (370, 0.25), (480, 0.25), (520, 0.40),
    ),
    140.0: (*_LOW_PART, (125, 0.15), (480, 0.15), (520, 0.25)),
    250.0: (
        *_LOW_PART, (125, 0.18), (190, 0.18), (210, 0.17), (330, 0.17), (370, 0.20), (480, 0.20), (520, 0.30),
    ),
}  # fmt: skip

# The 1976 standard as the air of a given day and place: root mean square of ln(NRLMSISE-00 / standard) over
# 6000 random days of 1957-2025 (their observed indices) and places evenly over the globe. Computed for this
# table; tests/air/test_air_uncertainty.py computes it again. Holds the solar cycle, which rules above 150 km.
STANDARD_1976_SPREAD = (
    (-5, 0.04), (0, 0.04), (5, 0.03), (10, 0.035), (20, 0.065), (30, 0.08), (40, 0.115), (50, 0.15),
    (60, 0.17), (70, 0.19), (80, 0.185), (85, 0.16), (90, 0.13), (100, 0.20), (110, 0.26), (120, 0.21),
    (150, 0.18), (200, 0.30), (250, 0.47), (300, 0.63), (400, 0.95), (500, 1.22), (600, 1.34), (700, 1.28),
    (800, 1.14), (1000, 0.92),
)  # fmt: skip


def msis(altitude: Floats, f107a: ArrayLike = 140.0, ap: ArrayLike = 15.0) -> tuple[Floats, Floats]:
    """Return the relative 1-sigma density uncertainty of NRLMSISE-00 and MSIS 2.1 as (bias, scatter).

    Parameters
    ----------
    altitude : (...,) array [m]
        Outside the table the end values hold.
    f107a : (...,) array or float [sfu]
        81-day mean of F10.7; between the levels 65, 140 and 250 the totals are interpolated.
    ap : (...,) array or float
        Above 100, 40 % is added in quadrature above 120 km (from 0 at 90 km).

    Returns
    -------
    bias, scatter : (...,) arrays
        Of ln(density): apply as exp(+-sigma) where large.

    Notes
    -----
    Judgement. The two versions share one table: they differ from each other by 11-14 % at 80-90 and
    120-200 km, which lies within it. At deep solar minimum both are too dense above 250 km by about
    25 +- 15 %; the low column is wide enough to hold that, the result is not corrected for it.

    Examples
    --------
    >>> bias, scatter = msis(np.array([400e3]))
    >>> float(round((bias**2 + scatter**2)[0] ** 0.5, 3))
    0.15
    """
    altitude, solar = floats(altitude), floats(f107a)
    columns = [np.interp(altitude, *_nodes(nodes)) for nodes in MSIS_TOTAL.values()]
    low, middle, high = MSIS_TOTAL
    total = np.where(
        solar <= middle,
        _between(solar, low, middle, columns[0], columns[1]),
        _between(solar, middle, high, columns[1], columns[2]),
    )
    storm = np.where(floats(ap) > STORM_AP, np.interp(altitude, [90e3, 120e3], [0.0, STORM]), 0.0)
    return split(np.sqrt(total * total + storm * storm))


def standard_1976(altitude: ArrayLike) -> tuple[Floats, Floats]:
    """Return the same for the 1976 standard taken as the air of an unknown day and place.

    Notes
    -----
    The spread of NRLMSISE-00 about the standard and that model's own total, in quadrature. Of ln(density).

    Examples
    --------
    >>> bias, scatter = standard_1976([60e3])
    >>> float(round((bias**2 + scatter**2)[0] ** 0.5, 2))
    0.18
    """
    altitude = floats(altitude)
    spread = np.interp(altitude, *_nodes(STANDARD_1976_SPREAD))
    own = np.interp(altitude, *_nodes(MSIS_TOTAL[140.0]))
    return split(np.sqrt(spread * spread + own * own))


def split(total: Floats) -> tuple[Floats, Floats]:
    """Split a total into (bias, scatter) whose squares add up to its square."""
    return BIAS_SHARE * total, SCATTER_SHARE * total


def _nodes(table: tuple[tuple[float, float], ...]) -> tuple[Floats, Floats]:
    km, value = np.array(table).T
    return km * 1e3, value


def _between(x: Floats, left: float, right: float, at_left: Floats, at_right: Floats) -> Floats:
    share = np.clip((x - left) / (right - left), 0.0, 1.0)
    return floats(at_left + share * (at_right - at_left))
