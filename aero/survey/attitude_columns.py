"""Force and moment in body axes at a block of points, for a vehicle that states its moment point."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from aero.arrays import Floats, floats
from aero.bridge import bridge_for
from aero.bridge.loads import LoadsBetween, loads_between
from aero.force.loads import STEP, stability
from aero.survey.vehicle_columns import ROUNDING, Passing, similarity

FORCES = {
    "axial_force_coefficient": "axial",
    "normal_force_coefficient": "normal",
    "side_force_coefficient": "side",
    "roll_moment_coefficient": "roll",
    "pitch_moment_coefficient": "pitch",
    "yaw_moment_coefficient": "yaw",
}
"""Column -> property of `Loads`, by the global bridge."""
COMPARED = ("axial_force_coefficient", "normal_force_coefficient", "pitch_moment_coefficient")
"""Columns that also stand for each limit and for the local bridge, with a suffix."""
ATTITUDE_COLUMNS = (
    *FORCES,
    *(f"{name}_{kind}" for kind in ("free_molecular", "continuum", "local") for name in COMPARED),
    "centre_of_pressure_m",
    "centre_of_pressure_local_m",
    "pitch_stability_per_rad",
    "pitch_stability_local_per_rad",
    "projected_area_m2",
)
"""Every column of `attitude_columns`, in order."""


def attitude_columns(
    passing: Passing, wall: Floats, columns: Mapping[str, np.ndarray]
) -> dict[str, np.ndarray]:
    """Return force, moment and stability columns of a block of points.

    Parameters
    ----------
    passing : Passing
    wall : (n,) array [K]
    columns : mapping of str to (n,) array
        What is computed already; `drag_bridge`, where it is there, is not computed again.

    Returns
    -------
    dict of (n,) arrays
        `ATTITUDE_COLUMNS`; empty for a vehicle that states no moment point, has no surface, or tumbles.

    Notes
    -----
    The plain columns go by the global bridge, as drag does; `_local` by one fraction an element
    (`aero.bridge.loads`). Centre of pressure: L C_m/C_N, and where there is no normal force the slope of one
    over that of the other; from the moment point, forward positive. NaN at rest.
    """
    vehicle = passing.vehicle
    if vehicle.moment_point is None or vehicle.shape is None or vehicle.tumbling:
        return {}
    shape = columns["drag_coefficient"].shape if "drag_coefficient" in columns else np.shape(passing.path)
    angle = np.broadcast_to(floats(passing.angle), shape)
    sideslip = np.broadcast_to(floats(passing.sideslip), shape)
    number = similarity(passing, wall, bridge_for(vehicle, "drag"))

    def at(a: Floats) -> LoadsBetween:
        return loads_between(
            vehicle,
            passing.air,
            passing.moving,
            wall,
            passing.accommodated,
            a,
            sideslip,
            number=number,
            knudsen_reference=passing.path / vehicle.reference_length,
            real_gas=passing.settings.real_gas,
        )

    here = at(angle)
    above, below = at(angle + STEP), at(angle - STEP)
    assert here.locally is not None
    found = {name: getattr(here.globally, kind) for name, kind in FORCES.items()}
    for kind, loads in (
        ("free_molecular", here.free_molecular),
        ("continuum", here.continuum),
        ("local", here.locally),
    ):
        found |= {f"{name}_{kind}": getattr(loads, FORCES[name]) for name in COMPARED}
    for tail, kind in (("", "globally"), ("_local", "locally")):
        slopes = stability(getattr(above, kind), getattr(below, kind), STEP)
        centre = getattr(here, kind).centre_of_pressure
        found[f"centre_of_pressure{tail}_m"] = np.where(np.isnan(centre), slopes.neutral_point, centre)
        found[f"pitch_stability{tail}_per_rad"] = slopes.pitch
    assert here.globally.projected_area is not None
    found["projected_area_m2"] = here.globally.projected_area
    size = sum(np.abs(found[name]) for name in tuple(FORCES)[:3])
    for name in ATTITUDE_COLUMNS:
        # a symmetric body has none of some: what summing its elements leaves of them is rounding
        found[name] = np.where(np.abs(found[name]) < ROUNDING * size, 0.0, found[name])
    return {name: floats(found[name]) for name in ATTITUDE_COLUMNS}
