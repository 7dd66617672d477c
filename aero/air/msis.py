"""NRLMSISE-00 and MSIS 2.1 as atmospheres, through pymsis."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np

from aero.air import activity as _activity
from aero.air.activity import ACTIVITIES, LEVELS, OBSERVED, Indices
from aero.air.checks import altitudes, place_and_date
from aero.air.msis_run import Question, run, to_air
from aero.air.space_weather import History, read_space_weather, shipped
from aero.air.state import Air
from aero.air.uncertainty import msis as _uncertainty
from aero.arrays import ArrayLike, Floats, Times, floats
from aero.errors import InputError, choose


@dataclass(frozen=True)
class Version:
    """One version of the model: pymsis's number, people's title, its source, and its own jumps."""

    number: float
    title: str
    source: str
    jumps: tuple[float, ...]


VERSIONS: dict[str, Version] = {
    # Jumps, seen by scanning the model in steps of 5 m: 72.5 km (0.1-0.4 % in density; O, H and N begin),
    # 123.435 km (0.1-0.2 %), then about 0.1 % of one species: He 200, Ar 240, O2 250, N 300, H 320, N 450.
    "nrlmsise-00": Version(
        0,
        "NRLMSISE-00",
        "Picone et al. 2002",
        (72.5e3, 123.435e3, 200e3, 240e3, 250e3, 300e3, 320e3, 450e3),
    ),
    # MSIS 2.1 has none in density; O, H and N begin at 50, 76 and 91 km with under 3e-7 of all molecules.
    "msis-2.1": Version(2.1, "NRLMSIS 2.1", "Emmert et al. 2022", ()),
}

BURST = 1.8  # times the 81-day mean: a day's F10.7 above this is a radio burst (judgement)


@dataclass(frozen=True)
class Msis:
    """NRLMSISE-00 or MSIS 2.1 at a place and date, for an activity level, given indices, or a file of them.

    Parameters
    ----------
    version : str
        Key of `VERSIONS`: "nrlmsise-00" or "msis-2.1".
    activity : str, optional
        "low", "moderate" (the default when nothing else is given), "high": the long-term levels of ISO 14222;
        "observed": the indices shipped with the package, the monthly forecast after their end.
    f107, f107a : float, optional [sfu]
        F10.7 of the day before and its 81-day mean; given together with `ap`, instead of `activity`.
    ap : float or seven floats, optional
        Daily Ap; seven values (`Indices.ap`) switch on the storm-time mode.
    space_weather : str or Path, optional
        A CSV of daily indices (`read_space_weather`), instead of `activity`.

    Notes
    -----
    The models run in single precision: relative rounding 1e-6. Pressure is n k T. Species the model leaves
    out low down (O, H, N) are 0; anomalous oxygen counts in O; nitric oxide (MSIS 2.1, under 6e-4) is left
    out, as it is in the model's own density. Density is the model's, whose whole-number molar masses
    (hydrogen 1) put it up to 0.1 % off the sum of the species. Local solar time is UT + longitude/15.
    The models begin at the ground; 500 m below sea level are allowed for low land.

    References
    ----------
    [Picone2002], [Emmert2021], [Emmert2022].

    Examples
    --------
    >>> when = np.datetime64("2026-03-21T12:00")
    >>> air = Msis("nrlmsise-00").at([100e3, 400e3], latitude_deg=60, longitude_deg=-70, utc=when)
    >>> air.temperature.round(0), air.species.shape
    (array([ 184., 1104.]), (2, 7))
    """

    version: str = "nrlmsise-00"
    activity: str | None = None
    f107: float | None = None
    f107a: float | None = None
    ap: float | tuple[float, ...] | None = None
    space_weather: str | Path | None = None
    _history: History | None = field(default=None, init=False, repr=False, compare=False)

    needs_place = True
    altitude_range = (-500.0, 1000e3)

    def __post_init__(self) -> None:
        choose(self.version, VERSIONS, "MSIS version")
        given = {"f107": self.f107, "f107a": self.f107a, "ap": self.ap}
        missing = [name for name, value in given.items() if value is None]
        ways = [self.activity is not None, len(missing) < len(given), self.space_weather is not None]
        if sum(ways) > 1:
            raise InputError(
                "activity, indices (f107, f107a, ap) and a space-weather file exclude one another",
                remedy="give one of the three",
            )
        if ways[1]:
            if missing:
                raise InputError(f"{', '.join(missing)} missing", remedy="f107, f107a and ap go together")
            object.__setattr__(self, "ap", _checked(self.f107, self.f107a, self.ap))
        elif self.space_weather is not None:
            object.__setattr__(self, "_history", read_space_weather(self.space_weather))
        else:
            object.__setattr__(self, "activity", choose(self.activity or "moderate", ACTIVITIES, "activity"))

    @property
    def name(self) -> str:
        """Key in `ATMOSPHERES`."""
        return self.version

    @property
    def jumps(self) -> Floats:
        """Altitudes at which the model's own formulas leave a step [m]; both also step at UTC midnight."""
        return np.array(VERSIONS[self.version].jumps)

    @property
    def history(self) -> History | None:
        """The daily indices in use, or None where they are constant."""
        return shipped() if self.activity == OBSERVED else self._history

    @property
    def description(self) -> str:
        """One sentence for people."""
        version = VERSIONS[self.version]
        return f"{version.title} ({version.source}), {self._driver()}"

    def _driver(self) -> str:
        if self.activity in LEVELS:
            return f"{self.activity} activity (long-term level of ISO 14222: {LEVELS[self.activity]})"
        if self.f107 is not None:
            return f"F10.7 {self.f107:g}, 81-day mean {self.f107a:g}, Ap {self._ap_text()}"
        history = self.history
        assert history is not None  # the constructor knows three ways only
        first, last = (np.datetime64(d, "D") for d in (history.first_day, history.last_day))
        after = ", monthly forecast after" if history.forecast else ""
        return f"3-hourly and daily indices of {first} to {last} ({history.source}){after}"

    def _ap_text(self) -> str:
        return " ".join(f"{a:g}" for a in self.ap) if isinstance(self.ap, tuple) else f"{self.ap:g}"

    def indices(self, utc: Times) -> Indices:
        """Return the indices at each of the dates (n,)."""
        history = self.history
        if history is not None:
            return _activity.lookup(history, utc)
        f107, f107a, ap = self._constant()
        return _activity.constant(utc.size, f107, f107a, ap)

    def _constant(self) -> tuple[float, float, float | tuple[float, ...]]:
        if self.f107 is not None and self.f107a is not None and self.ap is not None:
            return self.f107, self.f107a, self.ap
        level = LEVELS[self.activity or "moderate"]
        return level.f107, level.f107a, level.ap

    def at(
        self,
        altitude_m: ArrayLike,
        *,
        latitude_deg: ArrayLike | None = None,
        longitude_deg: ArrayLike | None = None,
        utc: Times | np.datetime64 | None = None,
    ) -> Air:
        """Return the air at geodetic altitudes, places and dates; scalars spread over the altitudes.

        Raises
        ------
        ValueError
            If an altitude lies outside -0.5 to 1000 km, or a place or date is missing or out of range.
        InputError
            If the indices of a date are not known.
        """
        question = self.question(altitude_m, latitude_deg=latitude_deg, longitude_deg=longitude_deg, utc=utc)
        return to_air(self.name, question.altitude, run(VERSIONS[self.version].number, question))

    def question(
        self,
        altitude_m: ArrayLike,
        *,
        latitude_deg: ArrayLike | None = None,
        longitude_deg: ArrayLike | None = None,
        utc: Times | np.datetime64 | None = None,
    ) -> Question:
        """Return what `at` would ask the model, checked and with the indices of each date."""
        altitude = altitudes(altitude_m, self.altitude_range)
        latitude, longitude, dates = place_and_date(
            altitude.shape, latitude_deg, longitude_deg, utc, self.name
        )
        return Question(altitude, latitude, longitude, dates, self.indices(dates))

    def uncertainty(
        self, altitude_m: ArrayLike, *, utc: Times | np.datetime64 | None = None
    ) -> tuple[Floats, Floats]:
        """Return the relative 1-sigma density uncertainty as (bias, scatter).

        For observed indices give `utc` (scalar or of the altitudes' shape) to have the activity of each date;
        without, moderate activity is taken.
        """
        altitude = floats(altitude_m)
        if self.history is None:
            _, f107a, ap = self._constant()
            return _uncertainty(altitude, f107a, max(ap) if isinstance(ap, tuple) else ap)
        if utc is None:
            return _uncertainty(altitude)
        dates = np.broadcast_to(np.asarray(utc, dtype="datetime64[us]"), altitude.shape)
        indices = self.indices(dates.reshape(-1))
        worst = indices.ap[:, :5].max(axis=1, initial=0.0)
        return _uncertainty(altitude, indices.f107a.reshape(altitude.shape), worst.reshape(altitude.shape))

    def notes(
        self, altitude_m: ArrayLike | None = None, utc: Times | np.datetime64 | None = None
    ) -> tuple[str, ...]:
        """Return what a reader of the results should know about the indices at these dates."""
        out = []
        high = altitude_m is None or np.max(floats(altitude_m), initial=-np.inf) > 250e3
        if self.activity == "low" and high:
            out.append(
                "At deep solar minimum the MSIS models are too dense above 250 km by about 25 +- 15 % "
                "(judgement)."
            )
        if self.history is not None and utc is not None:
            indices = self.indices(np.atleast_1d(np.asarray(utc, dtype="datetime64[us]")).reshape(-1))
            out += _index_notes(indices)
        return tuple(out)

    def provenance(self) -> dict[str, object]:
        """Return what is needed to make this atmosphere again."""
        from importlib.metadata import version

        out: dict[str, object] = {"model": self.name, "pymsis": version("pymsis")}
        history = self.history
        if history is not None:
            out |= {"indices": history.source, "indices_sha256": history.digest}
        else:
            f107, f107a, ap = self._constant()
            out |= {"f107": f107, "f107a": f107a, "ap": list(ap) if isinstance(ap, tuple) else ap}
        if self.activity is not None:
            out["activity"] = self.activity
        return out


def _checked(f107: float | None, f107a: float | None, ap: Any) -> float | tuple[float, ...]:
    """Check given indices; return `ap` as a float or a tuple of seven."""
    for name, value in (("f107", f107), ("f107a", f107a)):
        if not (0.0 < (value or 0.0) < np.inf):
            raise InputError(
                f"{name} is {value}, expected a number above 0 (solar flux units, usually 65-300)"
            )
    values = floats(ap)
    if values.shape not in ((), (7,)) or not ((values >= 0.0) & (values <= 400.0)).all():
        raise InputError(
            f"ap is {ap}, expected one value (daily Ap) or seven (storm-time history) from 0 to 400"
        )
    return tuple(float(v) for v in values) if values.ndim else float(values)


def _index_notes(indices: Indices) -> list[str]:
    out = []
    later = np.count_nonzero(indices.forecast)
    if later:
        out.append(
            f"{later} of {indices.forecast.size} points lie after the last observed indices: F10.7 is the "
            f"monthly forecast, which hides the 27-day swing, and Ap is taken as {_activity.FORECAST_AP:g} "
            "(moderate)."
        )
    burst = indices.f107 > BURST * indices.f107a
    if burst.any():
        out.append(
            f"At {np.count_nonzero(burst)} of {burst.size} points F10.7 of the day before exceeds {BURST:g} "
            f"times its 81-day mean (largest {indices.f107[burst].max():g}): a radio burst in the noon "
            "reading, not the ultraviolet that heats the air; the model is too dense there. Give f107, f107a "
            "and ap to replace it."
        )
    if (indices.ap[:, :5].max(axis=1) > 100.0).any():
        out.append(
            "A geomagnetic storm (ap above 100) falls into these dates: 40 % is added to the uncertainty."
        )
    return out
