"""The one table of bridges: what each body class uses for each coefficient, and where that comes from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields, replace
from typing import TYPE_CHECKING, Any, Literal, overload

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.bridge.functions import BRIDGES, Fraction
from aero.errors import InputError, choose, nearest
from aero.force.newtonian import above_newtonian

if TYPE_CHECKING:
    from aero.body import Vehicle


def _as_is(number: Floats) -> Floats:
    return number


def _inverse(number: Floats) -> Floats:
    with np.errstate(divide="ignore"):
        return 1.0 / number


SIMILARITY: dict[str, Callable[[Floats], Floats]] = {
    "knudsen": _as_is,
    "knudsen_emitted": _as_is,
    "cheng": _as_is,
    "reynolds_stagnation": _inverse,
}
"""Numbers a bridge may be a function of, with what turns each into one that grows as the air thins."""


@dataclass(frozen=True)
class Bridge:
    """How a coefficient goes from its continuum to its free-molecular limit; call it with the number.

    Attributes
    ----------
    function : str
        Key of `BRIDGES`.
    similarity : str
        Key of `SIMILARITY`: the number it takes, on the length across the flow. `knudsen` is the hard-sphere
        one whatever is displayed, for the centre belongs to that definition.
    centre : float
        Value of that number at which F = 1/2.
    width : float [decades]
        1 over the slope dF/d log10 x at the centre.
    centre_sigma : float [decades]
        1-sigma of log10(centre).
    width_sigma : float [decades]
        1-sigma of the width.
    continuum_sigma : float
        Relative 1-sigma of the continuum coefficient.
    continuum_above : float
        How far, relative, the continuum coefficient may lie above its value besides (one-sided, 95 %).
    source : str
        Where function and parameters come from.
    """

    function: str
    similarity: str
    centre: float
    width: float
    centre_sigma: float
    width_sigma: float
    continuum_sigma: float
    continuum_above: float
    source: str

    def __call__(self, number: ArrayLike) -> Fraction:
        """Return the fraction at each value of the similarity number, with its derivatives.

        The derivatives are with respect to the number that grows as the air thins (1/Re0 for Re0).
        """
        turn = SIMILARITY[self.similarity]
        centre = float(turn(floats(self.centre)))
        return BRIDGES[self.function](turn(floats(number)), centre, self.width)

    def over_centre(self, number: ArrayLike) -> Floats:
        """Return the similarity number over its centre, growing as the air thins."""
        turn = SIMILARITY[self.similarity]
        return turn(floats(number)) / turn(floats(self.centre))

    def __str__(self) -> str:
        return f"{self.function} in {self.similarity}, centre {self.centre:g}, width {self.width:g}"


@dataclass(frozen=True)
class HeatBridge:
    """How stagnation heating goes between its limits.

    Attributes
    ----------
    exponent : float
        p of `aero.heat.bridged_flux`.
    sigma : float
        Relative 1-sigma midway between the limits.
    source : str
        Where they come from.
    """

    exponent: float
    sigma: float
    source: str

    def __str__(self) -> str:
        return f"blend of the limits with exponent {self.exponent:g}"


NO_SHAPE = "no-shape"  # row of a vehicle without a shape

_ERF_LOG = "erf-log form: Wilmoth, Blanchard & Moss 1998; "
_MID = "centre and slope those of the sine-squared bridge in hard-sphere Knudsen number; "
_JUDGED = "1-sigma of centre and width: judgement"
_DOUBLED = "doubled 1-sigma of centre and width: judgement"


def _row(
    centre: float, width: float, continuum: float, source: str, doubled: bool, above: float = 0.0
) -> Bridge:
    twice = 2.0 if doubled else 1.0
    return Bridge(
        "erf-log", "knudsen", centre, width, 0.25 * twice, 0.20 * width * twice, continuum, above, source
    )


_BLUNT = _ERF_LOG + _MID + _JUDGED
_FLAT = _ERF_LOG + "centre of the sine-squared bridge; width: judgement; " + _DOUBLED
_SLENDER = _ERF_LOG + "centre and width: judgement; " + _DOUBLED
_CONE_ABOVE = "; a 60-70 degree cone lies 5 % above Newtonian (judgement)"
_HEAT = HeatBridge(2.0, 0.15, "exponent and 1-sigma: judgement")

_DRAG: dict[str, Bridge] = {
    "sphere": _row(0.1, 2.55, 0.03, _BLUNT, False),
    "cylinder": _row(0.1, 2.55, 0.04, _BLUNT, False),
    "blunt-cone": _row(0.1, 2.55, 0.05, _BLUNT + _CONE_ABOVE, False, above=0.05),
    "slender": _row(0.3, 3.0, 0.10, _SLENDER, True),
    "flat-plate": _row(0.1, 3.0, 0.08, _FLAT, True),
    "box": _row(0.1, 3.0, 0.08, _FLAT, True),
    NO_SHAPE: _row(0.1, 3.0, 0.10, _FLAT + "; no shape is known", True),
}

DEFAULTS: dict[tuple[str, str], Bridge | HeatBridge] = {
    **{(body, "drag"): row for body, row in _DRAG.items()},
    **{
        (body, "lift"): replace(row, source=row.source + "; lift as drag: judgement")
        for body, row in _DRAG.items()
    },
    **{(body, "heating"): _HEAT for body in _DRAG},
}
"""Default bridge of each (body class, coefficient)."""


@overload
def bridge_for(vehicle: Vehicle, coefficient: Literal["heating"]) -> HeatBridge: ...
@overload
def bridge_for(vehicle: Vehicle, coefficient: Literal["drag", "lift"]) -> Bridge: ...
def bridge_for(vehicle: Vehicle, coefficient: str) -> Bridge | HeatBridge:
    """Return the bridge of a vehicle's coefficient: the table's row with the vehicle's own values in it.

    Parameters
    ----------
    vehicle : Vehicle
        Its body class picks the row; its `[bridging.COEFFICIENT]` table, if any, replaces values
        (`variable` there is the similarity number).
    coefficient : {"drag", "lift", "heating"}

    Returns
    -------
    Bridge or HeatBridge

    Raises
    ------
    InputError
        If the vehicle's table holds an unknown key or a value that cannot be.
    ValueError
        If there is no such coefficient or body class.

    Notes
    -----
    A function named without centre and width brings the ones it was published with. Another similarity number
    needs its own centre, for a centre belongs to its number. How far a cone may lie above its Newtonian value
    goes by its half angle (`aero.force.above_newtonian`); the table's row holds the largest.
    """
    body = vehicle.body_class or NO_SHAPE
    row = DEFAULTS.get((body, coefficient))
    if row is None:
        known = ", ".join(sorted({body for body, _ in DEFAULTS}))
        raise ValueError(f"no bridge for '{coefficient}' of '{body}'; body classes: {known}")
    if isinstance(row, Bridge) and row.continuum_above and vehicle.shape is not None:
        row = replace(row, continuum_above=above_newtonian(vehicle.shape))
    given = vehicle.bridging.get(coefficient)
    if not given:
        return row
    source = f"{vehicle.source}: [bridging.{coefficient}]"
    changes = _checked(given, row, source)
    if isinstance(row, Bridge):
        changes = _completed(changes, row, source)
    return replace(row, source=f"the vehicle's own {', '.join(given)}; otherwise {row.source}", **changes)


def _checked(given: Mapping[str, Any], row: Bridge | HeatBridge, source: str) -> dict[str, Any]:
    known = ["variable" if f.name == "similarity" else f.name for f in fields(row) if f.name != "source"]
    for key, value in given.items():
        if key not in known:
            remedy = nearest(key, known) or f"use one of: {', '.join(known)}"
            raise InputError(f"has no key '{key}'", source=source, remedy=remedy)
        if key == "function":
            choose(str(value), BRIDGES, "function", source=source)
        elif key == "variable":
            choose(str(value), SIMILARITY, "variable", source=source)
        elif isinstance(value, bool) or not isinstance(value, (int, float)) or not np.isfinite(value):
            raise InputError(f"{key} is {value!r}, expected a number", source=source)
        elif value < 0.0 or (value == 0.0 and key in ("centre", "width", "exponent")):
            raise InputError(f"{key} is {value}, expected a positive number", source=source)
    named = {"similarity" if key == "variable" else key: value for key, value in given.items()}
    return {key: value if isinstance(value, str) else float(value) for key, value in named.items()}


def _completed(changes: dict[str, Any], row: Bridge, source: str) -> dict[str, Any]:
    """Add what follows from a change: published parameters of a function, the width's own uncertainty."""
    variable = changes.get("similarity", row.similarity)
    if variable != row.similarity and "centre" not in changes:
        raise InputError(
            f"variable is '{variable}' without a centre; {row.centre:g} is one in '{row.similarity}'",
            source=source,
            remedy="add centre, the value of that number at which the bridge is half-way",
        )
    if changes.get("function", row.function) != row.function:
        published = BRIDGES[changes["function"]]
        changes.setdefault("centre", published.centre)
        changes.setdefault("width", published.width)
    if "width" in changes:
        changes.setdefault("width_sigma", row.width_sigma / row.width * changes["width"])
    return changes


def similarity_number(
    name: str,
    *,
    knudsen: ArrayLike | None = None,
    knudsen_emitted: ArrayLike | None = None,
    cheng: ArrayLike | None = None,
    reynolds_stagnation: ArrayLike | None = None,
) -> Floats:
    """Return the number a bridge asks for by name, from those at hand.

    Raises
    ------
    ValueError
        If the name is unknown or that number was not given.

    Examples
    --------
    >>> float(similarity_number("knudsen", knudsen=0.3))
    0.3
    """
    at_hand = {
        "knudsen": knudsen,
        "knudsen_emitted": knudsen_emitted,
        "cheng": cheng,
        "reynolds_stagnation": reynolds_stagnation,
    }
    if name not in SIMILARITY:
        raise ValueError(f"similarity is '{name}', expected one of: {', '.join(SIMILARITY)}")
    found = at_hand[name]
    if found is None:
        raise ValueError(f"the bridge is a function of '{name}', which was not given")
    return floats(found)
