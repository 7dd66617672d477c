"""The 95 % band of drag and heating, from named contributions that are kept apart.

Every contribution is a signed relative 1-sigma, d ln(value)/d(cause) times the cause's 1-sigma, so that
whoever adds up an entry or a set of samples can correlate them as they are: a density bias is common to all
points, a scatter is not.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.bridge.defaults import Bridge, HeatBridge
from aero.bridge.functions import Fraction
from aero.force.newtonian import BASE_SIGMA
from aero.heat.convective import CONVECTIVE, convective_sigma
from aero.heat.radiative import radiative_sigma

if TYPE_CHECKING:
    from aero.force import Coefficients
    from aero.heat.stagnation import Stagnation

COVERAGE = 1.96  # standard deviations on either side of 95 % of a normal distribution
WALL_SIGMA = 0.10  # relative 1-sigma of a wall temperature, given or in balance (judgement)
GAS_SURFACE_SIGMA = 0.02  # relative 1-sigma of free-molecular drag from the form of reflection: closed forms
# with mean energy differ by 1.8-2.5 % from Cercignani-Lampis-Lord [Walker2014]
APPROACH = (0.20, 0.10)  # how slowly drag nears its free-molecular limit, size and scale, see `drag_band`:
# set on the sphere correlation of [Loth2021], Mach 4-10
APPROACH_TUNNEL = (0.33, 0.03)  # the same up to Mach 10, set on the lower correlation of [Henderson1976]
TUNNEL_MACH = (10.0, 20.0)  # the tunnels behind both reach Mach 10; above Mach 20 none speaks (judgement)
NON_CATALYTIC = 0.5  # a wall that does not recombine atoms may see half the continuum heating (judgement)
NO_FLUX = 1e-200  # W/m2; a flux whose inverse would overflow counts as none
_RADIATIVE_DENSITY_EXPONENT = 1.22  # [TauberSutton1991]; that the radius's exponent knows density is left out


@dataclass(frozen=True, eq=False)
class Band:
    """Bounds that hold 95 % of what the value may be, and what they are made of.

    Attributes
    ----------
    low, high : (...,) array
        Bounds, in the unit of the value; of the value's own sign.
    contributions : dict of str to (...,) array
        Signed relative 1-sigma of each independent cause.
    below, above : dict of str to (...,) array
        One-sided parts: how far, in ln(value), each may lie below or above (95 %).
    """

    low: Floats
    high: Floats
    contributions: dict[str, Floats]
    below: dict[str, Floats]
    above: dict[str, Floats]


def drag_band(
    drag: ArrayLike,
    continuum: ArrayLike,
    free_molecular: Coefficients,
    bridge: Bridge,
    number: ArrayLike,
    *,
    density_sigma: tuple[ArrayLike, ArrayLike],
    cross_section: ArrayLike,
    accommodation: ArrayLike,
    wall_temperature: ArrayLike,
    energy_accommodation: ArrayLike | None = None,
    base: ArrayLike | None = None,
    mach: ArrayLike | None = None,
    fraction: Fraction | None = None,
) -> Band:
    """Return the 95 % band of a bridged drag coefficient.

    Parameters
    ----------
    drag, continuum : (...,) array_like
        The bridged coefficient and its continuum limit.
    free_molecular : Coefficients
        The free-molecular limit with its derivatives.
    bridge : Bridge
    number : (...,) array_like
        The similarity number the bridge was evaluated at.
    density_sigma : (bias, scatter)
        Relative 1-sigma of the density.
    cross_section, accommodation : (...,) array_like
        1-sigma of the free path from cross-sections (relative, `aero.gas.free_path_uncertainty`) and of the
        energy accommodation (absolute, `aero.body.accommodation_uncertainty`).
    wall_temperature : (...,) array_like [K]
    energy_accommodation : (...,) array_like, optional
        The accommodation itself. With it, its doubt counts along the chord over 95 % and not along the
        tangent, which near 1 with a cold wall is twice as steep; without it the band is too wide.
    base : (...,) array_like, optional
        The base pressure's part of the continuum coefficient.
    mach : (...,) array_like, optional
        Mach number; without it the lower end is the wider one of slow flow.
    fraction : Fraction, optional
        What `bridge(number)` gave, to save doing it again.

    Returns
    -------
    Band
        NaN where the drag is; never through zero.

    Raises
    ------
    ValueError
        If the free-molecular limit comes without its derivatives.

    Notes
    -----
    ln C is taken as normal, which for a few percent is the same as C normal, keeps the bounds positive, and
    for a bridge far from its centre follows the exact shift more closely. Density and cross-sections enter
    through the similarity number only. One-sided below: the bridge nears F = 1 like exp(-log^2), whereas
    first collisions act as a slow power of the Knudsen number. a F/sqrt(1 + b x/x_m) is how far published
    spheres stay behind: a, b = 0.2, 0.1 holds the correlation of [Loth2021], 0.33, 0.03 that of
    [Henderson1976] too. Both rest on wind tunnels up to Mach 10, so that the wider pair goes over into the
    narrower one, linearly, from Mach 10 to 20 (judgement). One-sided above: `Bridge.continuum_above`.
    One-sided parts and the symmetric one add in quadrature on their side.
    """
    c, cc, cf = floats(drag), floats(continuum), free_molecular.drag
    by_accommodation, by_wall = free_molecular.drag_by_accommodation, free_molecular.drag_by_wall_temperature
    if by_accommodation is None or by_wall is None:
        raise ValueError("free_molecular must carry the derivatives of its drag")
    share = bridge(number) if fraction is None else fraction
    inverse = 1.0 / np.where(c == 0.0, np.nan, c)
    tilt = (cf - cc) * inverse
    thin = share.value * inverse
    level = (1.0 - share.value) * cc * inverse
    through_number = share.slope * -tilt
    spread, wall = floats(accommodation), floats(wall_temperature)
    chord = (
        1.0
        if energy_accommodation is None
        else _chord(by_accommodation, by_wall, wall, floats(energy_accommodation), spread)
    )
    bias, scatter = density_sigma
    contributions = {
        "density bias": through_number * floats(bias),
        "density scatter": through_number * floats(scatter),
        "cross-sections": through_number * floats(cross_section),
        "accommodation": thin * by_accommodation * (chord * spread),
        "gas-surface form": thin * cf * GAS_SURFACE_SIGMA,
        "bridge centre": tilt * share.by_centre * bridge.centre_sigma,
        "bridge width": tilt * share.by_width * bridge.width_sigma,
        "continuum level": level * bridge.continuum_sigma,
        "base pressure": (1.0 - share.value) * inverse * BASE_SIGMA * (0.0 if base is None else floats(base)),
        "wall": thin * by_wall * (WALL_SIGMA * wall),
    }
    behind = _approach(share, bridge.over_centre(number), mach)
    above = {"continuum above Newtonian": level * bridge.continuum_above} if bridge.continuum_above else {}
    return _band(c, contributions, {"approach to free-molecular": behind}, above)


def _approach(share: Fraction, over_centre: Floats, mach: ArrayLike | None) -> Floats:
    """Return how far, in ln C, drag may lie below for nearing its free-molecular limit slowly."""

    def part(sizes: tuple[float, float]) -> Floats:
        return floats(sizes[0] * share.value / np.sqrt(1.0 + sizes[1] * over_centre))

    wide = part(APPROACH_TUNNEL)
    if mach is None:
        return wide
    slow, fast = TUNNEL_MACH
    beyond = np.clip((floats(mach) - slow) * (1.0 / (fast - slow)), 0.0, 1.0)
    return floats(wide + beyond * (part(APPROACH) - wide))


def _chord(by_accommodation: Floats, by_wall: Floats, wall: Floats, alpha: Floats, spread: Floats) -> Floats:
    """Return the slope of drag over 95 % of the accommodation's doubt, relative to the tangent.

    The emitted part goes as sqrt(T_e), T_e = T_w + (1 - alpha) D with D the excess of the incident energy
    over the wall's as a temperature. Both derivatives hold the same factor, so that D is in their ratio.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        excess = -alpha * by_accommodation / by_wall
        reach = COVERAGE * spread * excess / (wall + (1.0 - alpha) * excess)
    return np.where(reach > 0.0, 2.0 / (1.0 + np.sqrt(1.0 + np.maximum(reach, 0.0))), 1.0)


def heat_band(
    heating: Stagnation,
    bridge: HeatBridge,
    speed: ArrayLike,
    *,
    density_sigma: tuple[ArrayLike, ArrayLike],
    accommodation: ArrayLike,
    accommodation_sigma: ArrayLike,
    radius_sigma: float = 0.0,
    catalytic: bool = True,
) -> Band:
    """Return the 95 % band of the stagnation heat flux.

    Parameters
    ----------
    heating : Stagnation
    bridge : HeatBridge
    speed : (...,) array_like [m/s]
    density_sigma : (bias, scatter)
        Relative 1-sigma of the density.
    accommodation, accommodation_sigma : (...,) array_like
        Energy accommodation and its 1-sigma.
    radius_sigma : float, optional
        Relative 1-sigma of the nose radius; the continuum flux goes with its root.
    catalytic : bool, optional
        Whether the flux is that of a fully catalytic wall. Otherwise its catalysis is in the flux, and the
        one-sided part for what a wall may not recombine falls away.

    Returns
    -------
    Band
        0 to 0 at speed 0; NaN where the flux is.

    Notes
    -----
    With w the continuum's weight, d ln q = w d ln q_c + (1 - w) d ln q_fm: density enters as w/2 + (1 - w)
    for a continuum flux that grows as its square root, and as rho^1.22 in the radiative part. The bridge's
    own 1-sigma is 4 w (1 - w) of its value midway. Cross-sections do not enter: neither limit nor their
    blend knows the free path. One-sided below: half of the continuum part for a non-catalytic wall, growing
    from nothing at 3 km/s, where the shock layer begins to dissociate, to its whole at 5 km/s (judgement).
    The wall's share is added as a flux, not as a ratio: where the flux passes through zero with the wall at the
    recovery temperature, the band keeps its width and holds zero. Its relative share in `contributions` is held
    at 1 there, and so is that of an accommodation below its own 1-sigma.
    """
    total = heating.total
    v = floats(speed)
    resting = np.abs(total) < NO_FLUX
    inverse = 1.0 / np.where(resting, np.nan, total)
    convective = heating.bridged * inverse
    radiative = heating.radiative * inverse
    thick = heating.continuum_weight * convective
    thin = convective - thick
    exponent = CONVECTIVE[heating.correlation].density_exponent
    by_density = exponent * thick + thin
    if heating.radiative.any():
        by_density = by_density + _RADIATIVE_DENSITY_EXPONENT * radiative
    bias, scatter = density_sigma
    spread = floats(accommodation_sigma)
    by_wall = heating.by_wall_temperature * WALL_SIGMA * heating.wall_temperature
    contributions = {
        "density bias": by_density * floats(bias),
        "density scatter": by_density * floats(scatter),
        "accommodation": thin * (spread / np.maximum(floats(accommodation), spread)),
        "bridge": thin * heating.continuum_weight * (4.0 * bridge.sigma),
        "continuum level": thick * convective_sigma(v),
        "nose radius": thick * (0.5 * radius_sigma),
        "radiative level": radiative * radiative_sigma(heating.radiative_validity),
    }
    dissociated = np.clip((v - 3000.0) / 2000.0, 0.0, 1.0)
    below = (
        {"non-catalytic wall": -np.log1p(thick * dissociated * (NON_CATALYTIC - 1.0))} if catalytic else {}
    )
    band = _band(total, contributions, below, {})
    reach = COVERAGE * by_wall
    low = total - np.hypot(total - np.minimum(band.low, band.high), reach)
    high = total + np.hypot(np.maximum(band.low, band.high) - total, reach)
    contributions["wall"] = np.clip(by_wall * inverse, -1.0, 1.0)
    return Band(np.where(resting, total, low), np.where(resting, total, high), contributions, below, {})


def _band(
    value: Floats, contributions: dict[str, Floats], below: dict[str, Floats], above: dict[str, Floats]
) -> Band:
    variance = np.zeros(value.shape)
    part_squared = np.empty_like(variance)
    for part in contributions.values():  # in place: this is the widest loop of the whole chain
        variance += np.multiply(part, part, out=part_squared)
    variance *= COVERAGE**2
    down = variance + sum(part * part for part in below.values())
    up = variance + sum(part * part for part in above.values())
    upper = np.exp(np.sqrt(up))
    lower = np.exp(-np.sqrt(down))
    return Band(value * lower, value * upper, contributions, below, above)
