"""Knudsen numbers, regime tags, exact crossings, segments and the method each calls for."""

from aero.callable_module import make_callable
from aero.regime.crossings import Crossings, find_crossings
from aero.regime.method import METHODS, advise
from aero.regime.segments import Cuts, cut_segments, extremes
from aero.regime.tags import DEFAULT_BOUNDS, REGIMES, check_bounds, knudsen, regime, regime_index
from aero.regime.track import Track

__all__ = [
    "DEFAULT_BOUNDS",
    "METHODS",
    "REGIMES",
    "Crossings",
    "Cuts",
    "Track",
    "advise",
    "check_bounds",
    "cut_segments",
    "extremes",
    "find_crossings",
    "knudsen",
    "regime",
    "regime_index",
]

make_callable(__name__)
