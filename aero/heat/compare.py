"""One stagnation point by every convective correlation, beside each other."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.heat.convective import CONVECTIVE, convective_flux
from aero.heat.effective_radius import heating_radius
from aero.heat.stagnation import LINE_OVER_POINT

if TYPE_CHECKING:
    from aero.body import Vehicle
    from aero.gas import Flow


def compare_convective(vehicle: Vehicle, air: Air, flow: Flow, wall: ArrayLike) -> dict[str, Floats]:
    """Return the continuum convective heat flux of the stagnation point by every correlation.

    Parameters
    ----------
    vehicle : Vehicle
    air, flow : Air, Flow
        Air of shape (...,) and its motion past the body.
    wall : (...,) array_like [K]
        Wall temperature, the same for all.

    Returns
    -------
    dict of str to (...,) array [W/m2]
        Keys of `CONVECTIVE`; empty for a vehicle without a radius for heating. NaN where a correlation has no
        answer; `CONVECTIVE[name].covers(density, speed)` says where it was fitted.

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(220.0, 2.1e21, altitude=70e3)
    >>> found = compare_convective(Vehicle.from_shape(Sphere(diameter=2.0)), air, flow(air, 7500.0), 300.0)
    >>> [f"{name} {float(q) / 1e3:.0f}" for name, q in found.items()]  # kW/m2
    ['sutton-graves 730', 'detra-kemp-riddell 842', 'brandis-johnston 908', 'fay-riddell 797']
    """
    radius = heating_radius(vehicle)
    if radius is None:
        return {}
    temperature = np.broadcast_to(floats(wall), flow.speed.shape)
    line = LINE_OVER_POINT if vehicle.body_class == "cylinder" else 1.0
    return {
        name: line
        * convective_flux(air.density, flow.speed, radius.radius, flow.total_enthalpy, temperature, name)
        for name in CONVECTIVE
    }
