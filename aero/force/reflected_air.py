"""Reflections in air: every species by itself, then summed."""

from __future__ import annotations

from dataclasses import fields
from typing import TYPE_CHECKING

import numpy as np

from aero.air.state import MOLECULE_MASS, Air
from aero.arrays import ArrayLike, floats
from aero.constants import BOLTZMANN
from aero.force.ray_tree import build_tree
from aero.force.reflections import RAYS, Reflected, reflected_force

if TYPE_CHECKING:
    from aero.gas.flow import Flow

FEWEST_RAYS = 2000  # of a species that is hardly there
TRACE = 1e-6  # mass fraction below which a species is left out


def reflected_in_air(
    vertices: ArrayLike,
    direction: ArrayLike,
    air: Air,
    flow: Flow,
    wall_temperature: ArrayLike,
    *,
    energy_accommodation: ArrayLike = 1.0,
    diffuse_fraction: ArrayLike = 1.0,
    about: ArrayLike = (0.0, 0.0, 0.0),
    rays: int = RAYS,
    seed: int = 0,
) -> Reflected:
    """Return the free-molecular force of air on triangles, with shadows and every reflection.

    Parameters
    ----------
    vertices : (n, 3, 3) array [m]
        Corners, anticlockwise seen from the gas.
    direction : (3,) array
        Where the flow comes from.
    air, flow : Air, Flow
        One point.
    wall_temperature : (n,) array or float [K]
    energy_accommodation, diffuse_fraction : (n,) array or float, optional
    about : (3,) array, optional [m]
    rays : int, optional
        Shared out by mass fraction, with at least `FEWEST_RAYS` a species.
    seed : int, optional

    Returns
    -------
    Reflected
        Over the dynamic pressure of the mixture; mean hits, share in shadow and trapped weighted with mass.

    Raises
    ------
    ValueError
        If the air is not one point, or holds nothing, or as `reflected_force` raises.

    Notes
    -----
    Sum of the species' results weighted with their mass fractions, errors in quadrature.

    Examples
    --------
    >>> from aero.gas import flow, mixed_air
    >>> air = mixed_air(900.0, 1e15, [0.3, 0.01, 0.64, 0.01, 0.0, 0.03, 0.01], altitude=250e3)
    >>> plate = [[[0, 0, 0], [0, 1, 0], [0, 0, 1]]]
    >>> found = reflected_in_air(plate, [1, 0, 0], air, flow(air, 7500.0), 300.0, rays=1000)
    >>> round(float(found.force[0]), 2)
    -1.07
    """
    if air.temperature.size != 1 or flow.speed.size != 1:
        raise ValueError(f"air has {air.temperature.size} points, expected one")
    temperature, speed = float(air.temperature.reshape(-1)[0]), float(flow.speed.reshape(-1)[0])
    density = air.species.reshape(-1) * MOLECULE_MASS
    if not density.sum() > 0.0:
        raise ValueError("the air holds no molecules")
    shares = density / density.sum()
    tree = build_tree(floats(vertices))
    parts: list[tuple[float, Reflected]] = []
    for index in np.flatnonzero(shares > TRACE):
        share = float(shares[index])
        ratio = speed / float(np.sqrt(2.0 * BOLTZMANN * temperature / MOLECULE_MASS[index]))
        found = reflected_force(
            vertices, direction, ratio, floats(wall_temperature) / temperature,
            energy_accommodation=energy_accommodation, diffuse_fraction=diffuse_fraction, about=about,
            rays=max(FEWEST_RAYS, round(rays * share)), seed=seed + int(index), tree=tree,
        )  # fmt: skip
        parts.append((share, found))
    return _sum(parts)


def _sum(parts: list[tuple[float, Reflected]]) -> Reflected:
    """Return the results weighted with mass fractions: errors in quadrature, rays added up."""
    whole = sum(share for share, _ in parts)
    values = {}
    for name in (field.name for field in fields(Reflected)):
        each = [(share / whole, getattr(found, name)) for share, found in parts]
        if name == "rays":
            values[name] = sum(value for _, value in each)
        elif name.endswith("_error"):
            values[name] = np.sqrt(sum((share * value) ** 2 for share, value in each))
        else:
            values[name] = sum(share * value for share, value in each)
    return Reflected(**values)
