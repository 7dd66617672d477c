"""Flights: an entry flown with the tool's own coefficients."""

from __future__ import annotations

from aero.flight.entry import fly
from aero.flight.forces import constant
from aero.flight.motion import integrate
from aero.flight.path import Path, States, mechanical_energy
from aero.flight.planet import Planet, apogee_height, earth
from aero.flight.result import Flight, Peak
from aero.flight.start import VELOCITY_FRAMES

__all__ = [
    "VELOCITY_FRAMES",
    "Flight",
    "Path",
    "Peak",
    "Planet",
    "States",
    "apogee_height",
    "constant",
    "earth",
    "fly",
    "integrate",
    "mechanical_energy",
]
