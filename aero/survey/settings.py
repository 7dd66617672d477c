"""What a user may choose about a survey, apart from the atmosphere."""

from __future__ import annotations

from dataclasses import dataclass

from aero.errors import InputError, choose
from aero.gas import FREE_PATHS
from aero.regime import DEFAULT_BOUNDS, check_bounds


@dataclass(frozen=True)
class Settings:
    """Choices of a survey.

    Attributes
    ----------
    bounds : tuple of three floats
        Regime bounds in Knudsen number.
    free_path : str
        Definition shown and used for the tags, a key of `aero.gas.FREE_PATHS`. Bridges are always evaluated in
        the hard-sphere definition they were fitted in, so this never moves drag or heating.
    wall : float, "radiative" or None
        Wall temperature [K] that replaces the vehicle's own.
    convective : str
        Continuum stagnation heating, a key of `aero.heat.CONVECTIVE`.
    real_gas : bool
        Equilibrium-air stagnation pressure in the continuum limit; False for a perfect gas.
    """

    bounds: tuple[float, float, float] = DEFAULT_BOUNDS
    free_path: str = "hard-sphere"
    wall: float | str | None = None
    convective: str = "sutton-graves"
    real_gas: bool = True

    def __post_init__(self) -> None:
        object.__setattr__(self, "bounds", check_bounds(self.bounds))
        choose(self.free_path, FREE_PATHS, "free path")
        if self.convective != Settings.convective:
            # imported here: the default needs no check, and a condition without a vehicle starts faster
            from aero.heat import CONVECTIVE

            choose(self.convective, CONVECTIVE, "convective heating")
        if isinstance(self.wall, str):
            choose(self.wall, ["radiative"], "wall temperature")
        elif self.wall is not None and not 1.0 <= self.wall <= 10e3:
            raise InputError(
                f"wall temperature is {self.wall:g} K, expected 1 K to 10000 K",
                source="--wall-temperature",
            )
