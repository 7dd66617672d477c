"""Whole bodies by the gas-surface models: sums over elements, and what each model makes of a vehicle's drag."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import MOLECULE_MASS, SPECIES, Air
from aero.arrays import ArrayLike, Floats, floats
from aero.body.surface import accommodation as resolved
from aero.body.surface import oxygen_coverage
from aero.constants import BOLTZMANN
from aero.force.free_molecular import free_molecular
from aero.force.gas_surface import element

if TYPE_CHECKING:
    from aero.body.facets import Facets
    from aero.body.shapes import Shape
    from aero.body.surface import Surface
    from aero.body.vehicle import Vehicle
    from aero.gas.flow import Flow

CHUNK = 500_000  # elements times points evaluated at once: some 40 MB
TANGENTIAL = 1.0  # where no one says otherwise; customary for satellites, value from memory

OTHER_MODELS: dict[str, str] = {
    "maxwell-full": "diffuse, full energy accommodation",
    "maxwell": "Maxwell with the vehicle's diffuse fraction and energy accommodation",
    "oxygen-coverage": "diffuse, energy accommodation from the coverage by atomic oxygen",
    "cll": "Cercignani-Lampis-Lord; normal energy as the vehicle's accommodation unless it states its own",
    "specular": "specular reflection",
}
"""Name of a row of `other_models` -> what it stands for."""


def facets_drag(
    model: str,
    facets: Facets,
    speed_ratio: ArrayLike,
    wall_ratio: ArrayLike,
    **coefficients: ArrayLike,
) -> Floats:
    """Return drag over dynamic pressure of surface elements.

    Parameters
    ----------
    model : str
        A key of `GAS_SURFACE`.
    facets : Facets
    speed_ratio, wall_ratio : (...,) array
    **coefficients : (...,) array
        As `aero.force.gas_surface.element` takes them, one value a point.

    Returns
    -------
    (...,) array [m2]

    Examples
    --------
    >>> from aero.body.facets import flat
    >>> float(facets_drag("maxwell", flat((1.0, 0.0, 0.0), 2.0, 0.0), 80.0, 0.0).round(2))
    4.0
    """
    given = np.broadcast_arrays(*(floats(v) for v in (speed_ratio, wall_ratio, *coefficients.values())))
    shape = given[0].shape
    columns = [values.reshape(-1, 1) for values in given]
    cosines, areas = facets.cosines, facets.areas
    along = areas * np.sqrt(np.maximum(1.0 - cosines * cosines, 0.0))
    total = np.empty(columns[0].size)
    step = max(1, CHUNK // max(1, cosines.size))
    for start in range(0, total.size, step):
        ratio, wall, *rest = (column[start : start + step] for column in columns)
        named = dict(zip(coefficients, rest, strict=True))
        pressure, shear = element(model, ratio, cosines, wall, **named)
        total[start : start + step] = (pressure * (areas * cosines) + shear * along).sum(axis=1)
    return total.reshape(shape)


def body_drag(
    model: str,
    shape: Shape,
    speed_ratio: ArrayLike,
    wall_ratio: ArrayLike,
    *,
    angle_of_attack: float = 0.0,
    **coefficients: ArrayLike,
) -> Floats:
    """Return the free-molecular drag coefficient of a body in one species, on its frontal area.

    Parameters
    ----------
    model : str
        A key of `GAS_SURFACE`.
    shape : Shape
        A plate is edge-on at angle of attack 0, across the flow at a quarter turn; the frontal area of a
        plate is one face.
    speed_ratio, wall_ratio : (...,) array
        S and T_w/T.
    angle_of_attack : float [rad], optional
    **coefficients : (...,) array
        As `aero.force.gas_surface.element` takes them.

    Notes
    -----
    Gauss's rule over the shape's facets. The re-emission temperature of `maxwell` is that of each element, so
    a sphere differs a little from `aero.force.free_molecular`, which takes the mean over the body.

    Examples
    --------
    >>> from aero.body import Sphere
    >>> float(body_drag("cll", Sphere(diameter=2.0), 8.0, 0.3).round(3))
    2.112
    """
    return facets_drag(model, shape.facets(angle_of_attack), speed_ratio, wall_ratio, **coefficients) / (
        shape.frontal_area
    )


def mixture_drag(
    model: str,
    facets: Facets,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    **coefficients: ArrayLike,
) -> Floats:
    """Return drag over dynamic pressure [m2] of surface elements in a mixture, species by species.

    Parameters
    ----------
    model : str
        A key of `GAS_SURFACE`.
    facets : Facets
    air, flow : Air, Flow
    wall_temperature : (...,) array [K]
    **coefficients : (...,) array
        As `aero.force.gas_surface.element` takes them, one value a point.

    Notes
    -----
    Sum of the species' drag weighted with their mass fractions. NaN at rest and where there is no air.

    Examples
    --------
    >>> from aero.body import Sphere
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> found = mixture_drag("maxwell", Sphere(diameter=1.0).facets(0.0), air, flow(air, 7500.0), 300.0)
    >>> bool(1.6 < found < 1.8)
    True
    """
    temperature, speed = np.broadcast_arrays(air.temperature, flow.speed)
    wall = floats(wall_temperature) / temperature
    density = air.species * MOLECULE_MASS
    mass = density.sum(axis=-1)
    mass = np.where(mass > 0.0, mass, np.nan)
    total = np.zeros(temperature.shape)
    for index in range(len(SPECIES)):
        share = density[..., index] / mass
        if not np.any(share > 0.0):
            continue
        ratio = speed / np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[index])
        total = total + share * facets_drag(model, facets, ratio, wall, **coefficients)
    return total * np.where(mass > 0.0, 1.0, np.nan)


def other_models(
    vehicle: Vehicle,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    accommodation: ArrayLike | None = None,
    angle_of_attack: float | None = None,
    *,
    normal_energy_accommodation: ArrayLike | None = None,
    tangential_momentum_accommodation: ArrayLike | None = None,
) -> dict[str, Floats]:
    """Return the free-molecular drag coefficient each gas-surface model gives a vehicle.

    Parameters
    ----------
    vehicle : Vehicle
    air, flow : Air, Flow
    wall_temperature : (...,) array [K]
    accommodation : (...,) array, optional
        Default what the vehicle's surface states.
    angle_of_attack : float [rad], optional
        Default the vehicle's; sideslip is zero.
    normal_energy_accommodation : (...,) array, optional
        Of `cll`; default what a vehicle of that model states, else its energy accommodation.
    tangential_momentum_accommodation : (...,) array, optional
        Of `cll`; default what a vehicle of that model states, else 1.

    Returns
    -------
    dict of str to (...,) array
        A key of `OTHER_MODELS` each; on the reference area, NaN without a shape. Shadow as the shape's facets
        have it, one reflection, one surface for all parts.

    Notes
    -----
    The Maxwell rows take the re-emission temperature from the species' mean energy over the body. The
    cll row is summed over the facets: 0.2 us an element, species and point.

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> drag = other_models(ball, air, flow(air, 7500.0), 300.0, 0.9)
    >>> bool(drag["specular"] < drag["maxwell-full"] < drag["maxwell"] < drag["cll"])
    True
    """
    angle = vehicle.angle_of_attack if angle_of_attack is None else float(angle_of_attack)
    surface = vehicle.surface
    alpha = floats(resolved(surface, air) if accommodation is None else accommodation)
    coverage = oxygen_coverage(air.species[..., SPECIES.index("O")], air.temperature, air.molar_mass)

    def by_maxwell(energy: ArrayLike, diffuse: float) -> Floats:
        treated = vehicle.with_surface(diffuse_fraction=diffuse)
        return free_molecular(treated, air, flow, wall_temperature, energy, angle).drag

    found = {
        "maxwell-full": by_maxwell(1.0, 1.0),
        "maxwell": by_maxwell(alpha, surface.diffuse_fraction),
        "oxygen-coverage": by_maxwell(coverage, 1.0),
        "specular": by_maxwell(1.0, 0.0),
    }
    normal = _stated(normal_energy_accommodation, surface, "normal_energy_accommodation", alpha)
    tangential = _stated(
        tangential_momentum_accommodation, surface, "tangential_momentum_accommodation", TANGENTIAL
    )
    if vehicle.shape is None:
        found["cll"] = np.full_like(found["maxwell"], np.nan)
    else:
        found["cll"] = (
            mixture_drag(
                "cll", vehicle.shape.facets(angle), air, flow, wall_temperature,
                normal_energy_accommodation=normal, tangential_momentum_accommodation=tangential,
            )
            / vehicle.reference_area
        )  # fmt: skip
    return {name: found[name] for name in OTHER_MODELS}


def _stated(given: ArrayLike | None, surface: Surface, name: str, otherwise: ArrayLike) -> Floats:
    """Return what was given, else what a surface of this model states, else a default."""
    if given is not None:
        return floats(given)
    return floats(getattr(surface, name) if surface.model == "cll" else otherwise)
