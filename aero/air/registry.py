"""The atmospheres there are, by name."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from typing import Any

from aero.air.msis import Msis
from aero.air.standard_1976 import StandardAtmosphere1976


@dataclass(frozen=True)
class Model:
    """An entry of `ATMOSPHERES`.

    Attributes
    ----------
    description : str
        One line for help and error texts.
    build : callable
        Makes the atmosphere; MSIS takes activity, f107, f107a, ap and space_weather.
    needs_place : bool
        Whether latitude, longitude and date must be given to `.at`.
    altitude_range : (float, float) [m]
        Where `.at` answers; outside it raises ValueError.
    """

    description: str
    build: Callable[..., Any]
    needs_place: bool
    altitude_range: tuple[float, float]


ATMOSPHERES: dict[str, Model] = {
    "standard-1976": Model(
        "U.S. Standard Atmosphere 1976, -5 to 1000 km: one mean profile, no place or date",
        StandardAtmosphere1976,
        StandardAtmosphere1976.needs_place,
        StandardAtmosphere1976.altitude_range,
    ),
    "nrlmsise-00": Model(
        "NRLMSISE-00, -0.5 to 1000 km: place, date and solar activity",
        partial(Msis, "nrlmsise-00"),
        Msis.needs_place,
        Msis.altitude_range,
    ),
    "msis-2.1": Model(
        "NRLMSIS 2.1, -0.5 to 1000 km: place, date and solar activity; 11-14 % thinner at 80-90 and 120-200 km",
        partial(Msis, "msis-2.1"),
        Msis.needs_place,
        Msis.altitude_range,
    ),
}
