"""Checks of what is passed to an atmosphere, shared by all of them."""

from __future__ import annotations

import numpy as np

from aero.arrays import ArrayLike, Floats, Times, floats


def altitudes(altitude_m: ArrayLike, allowed: tuple[float, float], what: str = "altitude") -> Floats:
    """Return altitudes as an array after checking that all lie in the model's range.

    Raises
    ------
    ValueError
        If some do not (not-a-number included); says how many, which is the first, and its value.

    Examples
    --------
    >>> altitudes([0.0, 1.2e6], (-5e3, 1e6))
    Traceback (most recent call last):
    ValueError: altitude must lie in [-5000, 1e+06] m; 1 of 2 values does not (first: index 1, 1.2e+06 m). \
Altitudes are in metres.
    """
    array = floats(altitude_m)
    inside(array, allowed, what, "m", "Altitudes are in metres.")
    return array


def inside(array: Floats, allowed: tuple[float, float], what: str, unit: str, hint: str = "") -> None:
    """Raise ValueError unless every value is a number within the closed range `allowed`."""
    low, high = allowed
    if array.size == 0 or (array.min() >= low and array.max() <= high):  # a NaN fails both
        return
    flat = array.reshape(-1)
    bad = np.flatnonzero(~((flat >= low) & (flat <= high)))
    raise ValueError(
        f"{what} must lie in [{low:g}, {high:g}] {unit}; {bad.size} of {flat.size} "
        f"value{'s' if flat.size != 1 else ''} do{'es' if bad.size == 1 else ''} not "
        f"(first: index {bad[0]}, {flat[bad[0]]:g} {unit}).{' ' if hint else ''}{hint}"
    )


def place_and_date(
    shape: tuple[int, ...],
    latitude_deg: ArrayLike | None,
    longitude_deg: ArrayLike | None,
    utc: Times | np.datetime64 | None,
    model: str,
) -> tuple[Floats, Floats, Times]:
    """Return latitude, longitude [deg] and UTC of every point, flat, after checking them.

    Raises
    ------
    ValueError
        If one is missing, is not a number or a date, lies outside its range, or does not broadcast to the
        shape of the altitudes.
    """
    given = {"latitude_deg": latitude_deg, "longitude_deg": longitude_deg, "utc": utc}
    missing = [name for name, value in given.items() if value is None]
    if missing:
        raise ValueError(
            f"{model} needs a place and a date: {', '.join(missing)} missing. Give them, or use the "
            "standard-1976 atmosphere, which needs neither."
        )
    assert latitude_deg is not None and longitude_deg is not None  # noqa: PT018
    latitude, longitude = floats(latitude_deg), floats(longitude_deg)
    dates = np.asarray(utc, dtype="datetime64[us]")
    inside(latitude, (-90.0, 90.0), "latitude", "deg", "Angles are in degrees here.")
    inside(longitude, (-360.0, 360.0), "longitude", "deg", "Angles are in degrees here.")
    if np.isnat(dates).any():
        raise ValueError(f"utc holds {np.count_nonzero(np.isnat(dates))} dates that are not a time (NaT).")
    try:
        spread = [np.broadcast_to(a, shape).reshape(-1) for a in (latitude, longitude, dates)]
    except ValueError:
        raise ValueError(
            f"latitude_deg {latitude.shape}, longitude_deg {longitude.shape} and utc {dates.shape} must be "
            f"scalars or broadcast to the shape of the altitudes, {shape}."
        ) from None
    return spread[0], spread[1], spread[2]
