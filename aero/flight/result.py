"""What flying an entry gives: samples, peaks, heat load, final state."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from aero.flight.path import Path, States

if TYPE_CHECKING:
    from aero.trajectory import Trajectory

_DEGREE = math.pi / 180.0


@dataclass(frozen=True)
class Peak:
    """The largest value along a flight: the value, its time [s] and its altitude [m]."""

    value: float
    time: float
    altitude: float


@dataclass(frozen=True, eq=False)
class Flight:
    """A flown entry.

    Attributes
    ----------
    path : Path
        The flight at every time between its ends.
    samples : States
        The flight at the sampled times.
    final : States
        Its last state, as arrays of one.
    peak_deceleration : Peak
        Aerodynamic, sqrt(D^2 + L^2)/m [m/s2]; gravity excluded.
    peak_heat_flux : Peak or None
        At the stagnation point [W/m2]; None without a nose radius.
    heat_load : float or None
        Heat flux integrated over the flight [J/m2]; None without a nose radius.
    epoch : datetime64 or None
        UTC of time 0.
    angle_of_attack : float or None [rad]
        Held all the way; None with a constant ballistic coefficient.
    notes : tuple of str
        What was assumed.
    """

    path: Path
    samples: States
    final: States
    peak_deceleration: Peak
    peak_heat_flux: Peak | None
    heat_load: float | None
    epoch: np.datetime64 | None
    angle_of_attack: float | None
    notes: tuple[str, ...]

    @property
    def ended_by(self) -> str:
        """What ended it: "ground", "left the atmosphere", "until" or "time limit"."""
        return self.path.ended_by

    def trajectory(self, name: str = "flight") -> Trajectory:
        """Return the samples as a trajectory, which a survey takes and `write_trajectory` writes."""
        from aero.trajectory import Trajectory

        flown = self.samples
        angle = self.angle_of_attack
        return Trajectory(
            name=name,
            time=flown.time,
            # at the landing rounding may leave the altitude a hair under 0
            altitude=np.where(np.abs(flown.altitude) < 1e-6, 0.0, flown.altitude),
            speed=flown.speed,
            flight_path_angle=flown.flight_path_angle,
            heading=flown.heading,
            latitude=flown.latitude,
            longitude=flown.longitude,
            angle_of_attack=None if angle is None else np.full_like(flown.time, angle),
            epoch=self.epoch,
            notes=self.notes,
        )

    def summary(self) -> dict[str, object]:
        """Return peaks, heat load and final state under the names of the JSON output.

        Returns
        -------
        dict
            Units are the suffixes of the names; None where there is no answer.
        """
        heat = self.peak_heat_flux
        final = self.final
        return {
            "peak_deceleration_m_s2": self.peak_deceleration.value,
            "peak_deceleration_altitude_m": self.peak_deceleration.altitude,
            "peak_deceleration_time_s": self.peak_deceleration.time,
            "peak_heat_flux_W_m2": None if heat is None else _answer(heat.value),
            "peak_heat_flux_altitude_m": None if heat is None else _answer(heat.altitude),
            "peak_heat_flux_time_s": None if heat is None else _answer(heat.time),
            "heat_load_J_m2": None if self.heat_load is None else _answer(self.heat_load),
            "ended_by": self.ended_by,
            "final": {
                "time_s": float(final.time[0]),
                "altitude_m": float(final.altitude[0]),
                "air_speed_m_s": float(final.speed[0]),
                "flight_path_angle_deg": float(final.flight_path_angle[0] / _DEGREE),
                "heading_deg": float(final.heading[0] / _DEGREE),
                "latitude_deg": float(final.latitude[0] / _DEGREE),
                "longitude_deg": float(final.longitude[0] / _DEGREE),
            },
            "notes": list(self.notes),
        }


def _answer(value: float) -> float | None:
    return value if math.isfinite(value) else None
