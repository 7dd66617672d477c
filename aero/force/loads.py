"""Force and moment coefficients of a vehicle in body axes, and what follows from them.

Body axes: x forward, y right, z down. The flow comes from u = (cos a cos b, sin b, sin a cos b) at angle of
attack a and sideslip b; drag acts along -u, lift along (sin a, 0, -cos a).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from aero.arrays import ArrayLike, Floats, floats

NO_FORCE = 1e-9  # normal over whole force below which a centre of pressure has no place: rounding
STEP = float(np.radians(0.5))  # half the step of the central difference: 1e-4 of a sine's slope


def flow_direction(angle_of_attack: ArrayLike, sideslip: ArrayLike = 0.0) -> Floats:
    """Return where the flow comes from, unit vectors (..., 3) in body axes.

    Parameters
    ----------
    angle_of_attack, sideslip : (...,) array [rad]

    Examples
    --------
    >>> flow_direction(0.0)
    array([1., 0., 0.])
    """
    a, b = np.broadcast_arrays(floats(angle_of_attack), floats(sideslip))
    return floats(np.stack([np.cos(a) * np.cos(b), np.sin(b), np.sin(a) * np.cos(b)], axis=-1))


def lift_direction(angle_of_attack: ArrayLike) -> Floats:
    """Return the direction of positive lift, unit vectors (..., 3) in body axes, across flow and y axis."""
    a = floats(angle_of_attack)
    return np.stack([np.sin(a), np.zeros_like(a), -np.cos(a)], axis=-1)


@dataclass(frozen=True, eq=False)
class Loads:
    """Force and moment coefficients at each point.

    Attributes
    ----------
    force : (..., 3) array
        C_X, C_Y, C_Z: force in body axes over dynamic pressure and reference area.
    moment : (..., 3) array
        C_l, C_m, C_n: roll, pitch and yaw over dynamic pressure, reference area and moment length.
    angle_of_attack, sideslip : (...,) array [rad]
    moment_length : float [m]
    projected_area : (...,) array or None [m2]
        What of the surface the flow reaches, projected along it.
    interpolation_error : float
        Largest error found by checking, over the size of the force, where attitudes were interpolated; 0
        where each was computed.

    Notes
    -----
    NaN where there is no answer: no motion, no air.
    """

    force: Floats
    moment: Floats
    angle_of_attack: Floats
    sideslip: Floats
    moment_length: float
    projected_area: Floats | None = None
    interpolation_error: float = 0.0

    @property
    def axial(self) -> Floats:
        """C_A = -C_X, positive towards the rear."""
        return -self.force[..., 0]

    @property
    def normal(self) -> Floats:
        """C_N = -C_Z, positive upwards."""
        return -self.force[..., 2]

    @property
    def side(self) -> Floats:
        """C_Y, positive to the right."""
        return self.force[..., 1]

    @property
    def roll(self) -> Floats:
        """C_l, positive with the right side going down."""
        return self.moment[..., 0]

    @property
    def pitch(self) -> Floats:
        """C_m, positive nose up."""
        return self.moment[..., 1]

    @property
    def yaw(self) -> Floats:
        """C_n, positive nose to the right."""
        return self.moment[..., 2]

    @property
    def drag(self) -> Floats:
        """C_D, along the flow."""
        return -self._along(flow_direction(self.angle_of_attack, self.sideslip))

    @property
    def lift(self) -> Floats:
        """C_L, across the flow in the plane of x and z."""
        return self._along(lift_direction(self.angle_of_attack))

    @property
    def centre_of_pressure(self) -> Floats:
        """Where the normal force acts on the x axis through the moment point [m], forward positive.

        x = L C_m/C_N; NaN without normal force, where only a slope tells (`neutral_point`).
        """
        size = np.sqrt((self.force * self.force).sum(axis=-1))
        acts = np.abs(self.normal) > NO_FORCE * size
        return floats(
            np.where(acts, self.pitch / np.where(acts, self.normal, 1.0), np.nan) * self.moment_length
        )

    def _along(self, direction: Floats) -> Floats:
        return floats((self.force * direction).sum(axis=-1))

    def about(self, shift: ArrayLike) -> Loads:
        """Return the loads about a point `shift` (3,) [m] away from this one: M' = M - shift x F.

        Examples
        --------
        >>> none = np.zeros(())
        >>> up = Loads(np.array([0.0, 0.0, -1.0]), np.zeros(3), none, none, 2.0)
        >>> float(up.about([1.0, 0.0, 0.0]).pitch)  # a force behind the point lifts the tail
        -0.5
        """
        return replace(self, moment=self.moment - np.cross(floats(shift), self.force) / self.moment_length)

    def replaced(self, drag: Floats | None, lift: Floats | None) -> Loads:
        """Return the loads with another drag or lift in the force; the moment stays as it was."""
        force = self.force
        if drag is not None:
            toward = flow_direction(self.angle_of_attack, self.sideslip)
            force = force - (drag - self.drag)[..., None] * toward
        if lift is not None:
            force = force + (lift - self.lift)[..., None] * lift_direction(self.angle_of_attack)
        return replace(self, force=floats(force))


@dataclass(frozen=True, eq=False)
class Stability:
    """Slopes with angle of attack [1/rad].

    Attributes
    ----------
    pitch : (...,) array
        dC_m/da: negative turns the nose back into the flow (statically stable).
    normal : (...,) array
        dC_N/da.
    neutral_point : (...,) array [m]
        L (dC_m/da)/(dC_N/da) from the moment point, forward positive; NaN without a slope.
    """

    pitch: Floats
    normal: Floats
    neutral_point: Floats


def stability_derivative(
    loads_at: Callable[[Floats], Loads], angle_of_attack: ArrayLike, step: float = STEP
) -> Stability:
    """Return the static stability derivative dC_m/da and its kin by central difference.

    Parameters
    ----------
    loads_at : callable
        Angle of attack [rad] -> Loads, everything else held.
    angle_of_attack : (...,) array [rad]
    step : float, optional [rad]
        To each side; the error is step squared over six times the third derivative.

    Examples
    --------
    >>> def wing(a):
    ...     force = np.stack([0 * a, 0 * a, -2.0 * np.sin(a)], -1)
    ...     return Loads(force, np.stack([0 * a, -0.1 * np.sin(a), 0 * a], -1), a, 0 * a, 1.0)
    >>> found = stability_derivative(wing, 0.0)
    >>> round(float(found.pitch), 4), round(float(found.neutral_point), 4)
    (-0.1, -0.05)
    """
    angle = floats(angle_of_attack)
    return stability(loads_at(angle + step), loads_at(angle - step), step)


def stability(above: Loads, below: Loads, step: float) -> Stability:
    """Return the slopes between loads at angles of attack `step` [rad] above and below a point's."""
    per = 1.0 / (2.0 * step)
    pitch, normal = (above.pitch - below.pitch) * per, (above.normal - below.normal) * per
    acts = np.abs(normal) > NO_FORCE
    place = np.where(acts, pitch / np.where(acts, normal, 1.0), np.nan) * above.moment_length
    return Stability(pitch, normal, floats(place))
