"""Force and moment between the limits: one fraction for the whole vehicle, or one an element.

A global bridge blends each coefficient with the same fraction. That holds force well and moment badly, where
the limits place their forces on different parts of the surface: faces across the flow feel the shock layer
form first, faces along it keep meeting molecules one by one. The local bridge lets the centre move with the
element's incidence.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from aero.air.state import Air
from aero.arrays import ArrayLike, Floats, floats
from aero.bridge.defaults import Bridge, bridge_for, similarity_number
from aero.bridge.functions import BRIDGES, blend
from aero.force.load_body import load_body
from aero.force.load_continuum import by_table, friction_components, newtonian_modes
from aero.force.load_limits import ModalLoads, as_loads, free_modes, no_answer, points_of
from aero.force.load_sums import MODE_COSINES, MODES
from aero.force.loads import Loads
from aero.gas import mean_free_path

if TYPE_CHECKING:
    from aero.body.elements import Elements
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

SHIFT = 0.5  # decades of the centre between faces along and across the flow: judgement
NEUTRAL = 0.75  # cosine at which the centre is the global one: between the mean cosine of a sphere's drag in
# free-molecular (2/3) and in Newtonian flow (4/5), so that the axial force of blunt bodies keeps

BRIDGINGS = ("global", "local")


@dataclass(frozen=True, eq=False)
class LoadsBetween:
    """Loads in both limits and between.

    Attributes
    ----------
    free_molecular, continuum : Loads
    globally : Loads
        One fraction for all.
    locally : Loads or None
        A fraction an element; None where it was not asked for.
    fraction : (...,) array
        Of the global bridge.
    """

    free_molecular: Loads
    continuum: Loads
    globally: Loads
    locally: Loads | None
    fraction: Floats


def local_fraction(bridge: Bridge, number: ArrayLike, cosine: ArrayLike) -> Floats:
    """Return the share of the free-molecular limit at an element.

    Parameters
    ----------
    bridge : Bridge
        The vehicle's, on its length across the flow.
    number : (...,) array
        Similarity number.
    cosine : (...,) array
        Between the element's outward normal and where the flow comes from; elements turned away count as
        along the flow.

    Notes
    -----
    F(x/(x_m 10^d)), d = 0.5 (max(cos, 0) - 0.75): the centre lies an eighth of a decade higher on a face
    across the flow and three eighths lower on one along it. Form and numbers are judgement; the sign is
    that of flight fits for a winged entry vehicle, whose axial force at Kn 0.1 had come 0.38 of the way to
    free-molecular when its normal force had come 0.27 (values from memory). Both lie within the default
    centre's own 1-sigma of a quarter of a decade, or near it.

    Examples
    --------
    >>> from aero.bridge.defaults import DEFAULTS
    >>> np.round(local_fraction(DEFAULTS["sphere", "drag"], 0.1, [0.0, 0.75, 1.0]), 3)
    array([0.644, 0.5  , 0.451])
    """
    towards = np.maximum(floats(cosine), 0.0)
    over = bridge.over_centre(number) * np.exp((-np.log(10.0) * SHIFT) * (towards - NEUTRAL))
    return BRIDGES[bridge.function](over, 1.0, bridge.width).value


def bridged_loads(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    bridging: Literal["global", "local"] = "global",
    real_gas: bool = True,
    shadow: bool = True,
    count: int | None = None,
    elements: Elements | None = None,
) -> Loads:
    """Return force and moment coefficients between the limits; see `loads_between` for all at once.

    Parameters
    ----------
    vehicle : Vehicle
    air, flow : Air, Flow
    wall_temperature : (...,) array [K]
    accommodation : (...,) array
    angle_of_attack, sideslip : (...,) array or float [rad], optional
        Default the vehicle's.
    bridging : {"global", "local"}, optional
    real_gas, shadow, count, elements
        As in `aero.force.continuum_loads`.

    Raises
    ------
    ValueError
        If the bridging is unknown.
    """
    if bridging not in BRIDGINGS:
        raise ValueError(f"bridging is '{bridging}', expected one of: {', '.join(BRIDGINGS)}")
    found = loads_between(
        vehicle, air, flow, wall_temperature, accommodation, angle_of_attack, sideslip,
        local=bridging == "local", real_gas=real_gas, shadow=shadow, count=count, elements=elements,
    )  # fmt: skip
    return found.globally if found.locally is None else found.locally


def loads_between(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    local: bool = True,
    number: ArrayLike | None = None,
    knudsen_reference: ArrayLike | None = None,
    real_gas: bool = True,
    shadow: bool = True,
    count: int | None = None,
    elements: Elements | None = None,
) -> LoadsBetween:
    """Return force and moment coefficients in both limits and between them.

    Parameters
    ----------
    vehicle : Vehicle
    air, flow : Air, Flow
    wall_temperature : (...,) array [K]
    accommodation : (...,) array
    angle_of_attack, sideslip : (...,) array or float [rad], optional
        Default the vehicle's.
    local : bool, optional
        Whether to bridge each element too.
    number : (...,) array, optional
        Similarity number of the vehicle's drag bridge, on the length across the flow; from air and flow
        without it (`knudsen`, `cheng` and `reynolds_stagnation`).
    knudsen_reference : (...,) array, optional
        For friction; from the air without it.
    real_gas, shadow, count, elements
        As in `aero.force.continuum_loads`.

    Notes
    -----
    All components take the vehicle's drag bridge. Local: per element, pressure and shear both with
    `local_fraction` of its incidence; the fraction is a polynomial of degree 4 in the cosine (error below
    1e-5 of F), so that the sums of `aero.force.load_sums` serve every Knudsen number. Friction and what a
    [continuum] table adds to drag and lift go with the global fraction in either.

    Examples
    --------
    >>> from aero.body import SphereCone, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(200.0, 1e19, altitude=100e3)
    >>> capsule = Vehicle.from_shape(SphereCone(nose_radius=0.3, half_angle=1.0, base_radius=0.5))
    >>> found = loads_between(capsule, air, flow(air, 7500.0), 300.0, 1.0, 0.1)
    >>> bool(abs(found.locally.axial / found.globally.axial - 1.0) < 0.03)
    True
    """
    shape, a, b = points_of(vehicle, air, flow, angle_of_attack, sideslip)
    bridge = bridge_for(vehicle, "drag")
    across = vehicle.length_across
    path = mean_free_path(air, "hard-sphere")
    if number is None:
        number = similarity_number(
            bridge.similarity,
            knudsen=path / across,
            cheng=flow.cheng_per_m / across,
            reynolds_stagnation=flow.reynolds_stagnation_per_m * across,
        )
    x = np.broadcast_to(floats(number), shape)
    fraction = bridge(x).value
    if elements is None and vehicle.shape is None:
        nothing = no_answer(vehicle, shape, a, b)
        given = by_table(nothing, vehicle, air, flow)
        return LoadsBetween(nothing, given, nothing, nothing if local else None, fraction)
    body = load_body(vehicle, shadow=shadow, count=count, elements=elements)
    modes = MODES if local else 1
    free = free_modes(body, vehicle, air, flow, wall_temperature, accommodation, a, b, modes=modes)
    dense = newtonian_modes(body, air, flow, a, b, real_gas=real_gas, modes=modes)
    kn = path / vehicle.reference_length if knudsen_reference is None else floats(knudsen_reference)
    rub = friction_components(body, vehicle, air, flow, kn, a, b, wall_temperature, real_gas)

    def loads(found: ModalLoads, components: Floats) -> Loads:
        return as_loads(found, components, body, vehicle, shape, a, b)

    in_gas = loads(free, free.components.sum(axis=1))
    plain = loads(dense, dense.components.sum(axis=1) + rub)
    thick = by_table(plain, vehicle, air, flow)
    globally = _mixed(thick, in_gas, fraction)
    locally = None
    if local:
        shares = np.stack([local_fraction(bridge, x.reshape(-1), c) for c in MODE_COSINES])
        mixed = blend(dense.components, free.components, shares[None]).sum(axis=1)
        locally = loads(free, mixed + (1.0 - fraction.reshape(-1)) * rub)
        added = (1.0 - fraction)[..., None] * (thick.force - plain.force)
        locally = Loads(
            locally.force + np.where(added == 0.0, 0.0, added), locally.moment, a, b, body.length,
            locally.projected_area, globally.interpolation_error,
        )  # fmt: skip
    return LoadsBetween(in_gas, thick, globally, locally, fraction)


def _mixed(continuum: Loads, free: Loads, fraction: Floats) -> Loads:
    share = fraction[..., None]
    return Loads(
        blend(continuum.force, free.force, share),
        blend(continuum.moment, free.moment, share),
        free.angle_of_attack,
        free.sideslip,
        free.moment_length,
        free.projected_area,
        max(free.interpolation_error, continuum.interpolation_error),
    )
