"""The temperature at which a wall radiates what it receives."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.constants import STEFAN_BOLTZMANN

ENVIRONMENT_TEMPERATURE = 250.0  # K, black-body equivalent of Earth and sun around a body (judgement)
_STEPS = 60  # bisection alone, which every step at least equals, would reach 1e-8 within 40


def radiative_wall(
    flux: Callable[[Floats], tuple[Floats, Floats]],
    emissivity: ArrayLike,
    environment_temperature: float = ENVIRONMENT_TEMPERATURE,
) -> Floats:
    """Return the wall temperature that balances heating, radiation and surroundings.

    Parameters
    ----------
    flux : callable
        (wall temperature (...,) [K]) -> heat flux into the wall [W/m2] and its slope [W/(m2 K)]. The flux
        must not grow with the temperature; the slope only steers the search.
    emissivity : array_like
        Of the surface, above 0, at most 1.
    environment_temperature : float [K]
        Black-body temperature of the surroundings, absorbed with the same emissivity.

    Returns
    -------
    (...,) array [K]
        Root of eps sigma (T^4 - T_env^4) = q(T) to a relative 1e-6 or better; NaN where the flux is NaN or
        no temperature balances.

    Raises
    ------
    ValueError
        If the emissivity does not lie in (0, 1].

    Notes
    -----
    Newton's step, kept inside a bracket that the first evaluation gives: as q falls with T, the root lies
    between T_env and the temperature that would radiate q(T_env).

    Examples
    --------
    >>> t = radiative_wall(lambda t: (np.full_like(t, 1e5), np.zeros_like(t)), 0.85)
    >>> round(float(t), 1)
    1200.7
    """
    eps = floats(emissivity)
    if np.any(eps <= 0.0) or np.any(eps > 1.0):
        raise ValueError("emissivity must lie in (0, 1] for a wall in radiative balance")
    radiance = eps * STEFAN_BOLTZMANN
    around = environment_temperature**4
    start = flux(floats(environment_temperature))[0]
    guess = np.sqrt(np.sqrt(np.maximum(around + start / radiance, 0.0)))
    low, high = np.minimum(guess, environment_temperature), np.maximum(guess, environment_temperature)
    wall, moved = guess, np.full_like(guess, np.inf)
    for _ in range(_STEPS):
        heat, slope = flux(wall)
        cube = wall * wall * wall
        excess = radiance * (cube * wall - around) - heat
        low, high = np.where(excess <= 0.0, wall, low), np.where(excess >= 0.0, wall, high)
        with np.errstate(divide="ignore", invalid="ignore"):
            step = wall - excess / (4.0 * radiance * cube - slope)
        following = np.where((step >= low) & (step <= high), step, 0.5 * (low + high))
        moved = np.abs(following - wall)
        wall = following
        if not (moved > 1e-7 * wall).any():
            break
    return np.where((moved <= 1e-6 * wall) & (wall > 0.0), wall, np.nan)
