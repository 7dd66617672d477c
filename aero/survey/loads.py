"""Integrals along the flight: heat load and speed loss, to any time."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from aero.arrays import Floats
from aero.regime.track import Cubic


@dataclass(frozen=True, eq=False)
class Load:
    """The running integral of a rate over the flight.

    Attributes
    ----------
    samples : (n,) array
        Integral from the first sample to each sample.

    Notes
    -----
    The rate is a shape-preserving cubic between samples and its integral exact, so that pieces cut anywhere
    add up to the whole.
    """

    cubic: Cubic
    samples: Floats

    @classmethod
    def of(cls, time: Floats, rate: Floats) -> Load:
        """Return the running integral of a rate; NaN rates make it NaN from there on."""
        cubic = Cubic(time, rate)
        return cls(cubic, cubic.running_integral())

    def between(self, start: Floats, end: Floats) -> Floats:
        """Return the integral from each start to each end."""
        return self.cubic.integral(end, self.samples) - self.cubic.integral(start, self.samples)

    @property
    def total(self) -> float:
        """Integral over the whole flight."""
        return float(self.samples[-1])


def share(parts: Floats, total: float) -> Floats:
    """Return each part as a fraction of the total, NaN where the total is zero."""
    return parts / total if total != 0.0 and np.isfinite(total) else np.full_like(parts, np.nan)
