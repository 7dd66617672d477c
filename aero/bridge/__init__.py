"""Between the limits: bridging functions, their defaults with sources, and the 95 % band."""

from __future__ import annotations

from aero.bridge.defaults import DEFAULTS, SIMILARITY, Bridge, HeatBridge, bridge_for, similarity_number
from aero.bridge.functions import BRIDGES, BridgeFunction, Fraction, blend
from aero.bridge.uncertainty import (
    Band,
    drag_band,
    heat_band,
)

__all__ = [
    "BRIDGES",
    "DEFAULTS",
    "SIMILARITY",
    "Band",
    "Bridge",
    "BridgeFunction",
    "Fraction",
    "HeatBridge",
    "blend",
    "bridge_for",
    "drag_band",
    "heat_band",
    "similarity_number",
]
