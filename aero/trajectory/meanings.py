"""What a column can mean: the registry of meanings with their synonyms, units and bounds.

The registry is what the readers recognise, what the writer writes, and what the error texts list.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from aero.arrays import Floats


@dataclass(frozen=True)
class Meaning:
    """One thing a column can hold.

    Attributes
    ----------
    name : str
        As people call it, in messages and metadata keys.
    field : str
        Attribute of `Trajectory`.
    column : str
        Header under which it is written.
    dimension : str
        Key of `aero.units.UNITS`.
    lowest, highest : float
        Bounds in SI, both allowed.
    bounds : str
        The same bounds as shown to people.
    synonyms : tuple of str
        Words that mean it whatever unit stands beside them; lower case, single spaces, no hyphens.
    short : tuple of str
        Abbreviations that mean it only with a unit of its dimension ("T [K]" is no time).
    fixed : bool
        Whether a metadata line may give it for all points.
    """

    name: str
    field: str
    column: str
    dimension: str
    lowest: float
    highest: float
    bounds: str
    synonyms: tuple[str, ...]
    short: tuple[str, ...] = ()
    fixed: bool = False

    def outside(self, values: Floats) -> NDArray[np.bool_] | None:
        """Return which values are not finite or out of bounds, or None when all are good."""
        if values.size == 0 or (values.min() >= self.lowest and values.max() <= self.highest):
            return None  # NaN fails both comparisons
        return ~((values >= self.lowest) & (values <= self.highest))


def _bounds(lowest: float, highest: float, what: str) -> tuple[float, float, str]:
    # The same product as in the unit table: 90 deg read from a file lies inside a bound of 90 deg.
    return math.radians(lowest), math.radians(highest), f"{what} from {lowest:g} to {highest:g} deg"


def _words(text: str) -> tuple[str, ...]:
    return tuple(text.split(", "))


_ALL = (
    Meaning(
        "time",
        "time",
        "time_s",
        "time",
        -1e12,  # some 30,000 years either way: all that is asked of seconds is to be finite
        1e12,
        "a finite time",
        _words(
            "time, elapsed time, mission elapsed time, flight time, time since epoch, utc, utc time, "
            "time utc, date, date time, datetime, timestamp, time stamp"
        ),
        ("t", "met"),
    ),
    Meaning(
        "altitude",
        "altitude",
        "altitude_m",
        "length",
        -5e3,  # the range of the U.S. Standard Atmosphere, 1976
        1e6,
        "an altitude from -5 to 1000 km",
        _words(
            "altitude, alt, height, geodetic altitude, geodetic height, geometric altitude, "
            "ellipsoidal height, geocentric altitude, geopotential altitude, geopotential height"
        ),
        ("h",),
    ),
    Meaning(
        "speed",
        "speed",
        "air_speed_m_s",
        "speed",
        0.0,
        1e5,  # above any body bound to the Sun that meets the Earth (73 km/s); judgement
        "a speed from 0 to 100 km/s",
        _words(
            "speed, velocity, vel, velocity magnitude, air speed, airspeed, true airspeed, "
            "air relative speed, air relative velocity, relative speed, relative velocity, "
            "earth relative speed, earth relative velocity, inertial speed, inertial velocity"
        ),
        ("v",),
    ),
    Meaning(
        "latitude",
        "latitude",
        "latitude_deg",
        "angle",
        *_bounds(-90, 90, "a latitude"),
        ("latitude", "lat", "geodetic latitude"),
        fixed=True,
    ),
    Meaning(
        "longitude",
        "longitude",
        "longitude_deg",
        "angle",
        *_bounds(-180, 360, "a longitude"),
        ("longitude", "lon", "east longitude"),
        ("long", "lng"),
        fixed=True,
    ),
    Meaning(
        "flight-path angle",
        "flight_path_angle",
        "flight_path_angle_deg",
        "angle",
        *_bounds(-90, 90, "a flight-path angle"),
        ("flight path angle", "flightpath angle", "path angle", "fpa"),
        ("gamma",),
        fixed=True,
    ),
    Meaning(
        "heading",
        "heading",
        "heading_deg",
        "angle",
        *_bounds(-180, 360, "a heading"),
        ("heading", "heading angle", "azimuth", "velocity azimuth", "course"),
        fixed=True,
    ),
    Meaning(
        "angle of attack",
        "angle_of_attack",
        "angle_of_attack_deg",
        "angle",
        *_bounds(-180, 180, "an angle of attack"),
        ("angle of attack", "attack angle", "aoa"),
        ("alpha",),
        fixed=True,
    ),
    Meaning(
        "sideslip",
        "sideslip",
        "sideslip_deg",
        "angle",
        *_bounds(-180, 180, "a sideslip"),
        ("sideslip", "side slip", "sideslip angle", "angle of sideslip"),
        ("beta", "aos"),
        fixed=True,
    ),
    Meaning(
        "wall temperature",
        "wall_temperature",
        "wall_temperature_K",
        "temperature",
        1.0,
        1e4,  # no wall stands more or less; judgement
        "a wall temperature from 1 to 10000 K",
        ("wall temperature", "surface temperature", "t wall", "twall"),
        ("tw",),
        fixed=True,
    ),
)
MEANINGS: dict[str, Meaning] = {meaning.name: meaning for meaning in _ALL}
LONG = {words: meaning for meaning in _ALL for words in meaning.synonyms}
SHORT = {words: meaning for meaning in _ALL for words in meaning.short}
REQUIRED = ("altitude", "speed")

IMPLIED: dict[str, tuple[str, str]] = {
    **dict.fromkeys(("air speed", "airspeed", "true airspeed"), ("velocity frame", "air")),
    **dict.fromkeys(("air relative speed", "air relative velocity"), ("velocity frame", "air")),
    **dict.fromkeys(("relative speed", "relative velocity"), ("velocity frame", "air")),
    **dict.fromkeys(("earth relative speed", "earth relative velocity"), ("velocity frame", "air")),
    **dict.fromkeys(("inertial speed", "inertial velocity"), ("velocity frame", "inertial")),
    **dict.fromkeys(("geodetic altitude", "geodetic height"), ("altitude kind", "geodetic")),
    **dict.fromkeys(("ellipsoidal height", "geometric altitude"), ("altitude kind", "geodetic")),
    "geocentric altitude": ("altitude kind", "geocentric"),
    **dict.fromkeys(("geopotential altitude", "geopotential height"), ("altitude kind", "geopotential")),
}
"""Words of a header that also state what a metadata line would: (key, value)."""
