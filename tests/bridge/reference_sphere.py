"""Published sphere-drag correlations, written from the papers and sharing no code with the package.

Reynolds numbers are on the diameter and the free stream; Kn = sqrt(pi gamma/2) M/Re as in the papers.
"""

from __future__ import annotations

import math

GAMMA = 1.4


def free_molecular_sphere(speed_ratio: float, wall_over_gas: float) -> float:
    """Diffuse sphere in free-molecular flow (Schaaf & Chambre 1958)."""
    s = speed_ratio
    return (
        (2 * s**2 + 1) / (math.sqrt(math.pi) * s**3) * math.exp(-(s**2))
        + (4 * s**4 + 4 * s**2 - 1) / (2 * s**4) * math.erf(s)
        + 2 * math.sqrt(math.pi) / (3 * s) * math.sqrt(wall_over_gas)
    )


def knudsen_from_reynolds(mach: float, reynolds: float) -> float:
    return math.sqrt(math.pi * GAMMA / 2) * mach / reynolds


def loth(mach: float, reynolds: float) -> float:
    """Loth, Daspit, Jeong, Nagata & Nonomura 2021, AIAA J. 59(8)."""
    m, re = mach, reynolds
    drag_incompressible = 24 / re * (1 + 0.15 * re**0.687)
    if re > 45:
        c = 1.65 + 0.65 * math.tanh(4 * m - 3.4) if m < 1.5 else 2.18 - 0.13 * math.tanh(0.9 * m - 2.7)
        g = 166 * m**3 + 3.29 * m**2 - 10.9 * m + 20 if m < 0.8 else 5 + 40 / m**3
        h = 0.0239 * m**3 + 0.212 * m**2 - 0.074 * m + 1 if m < 1 else 0.93 + 1 / (3.5 + m**5)
        return drag_incompressible * h + 0.42 * c / (1 + 42500 / re ** (1.16 * c) + g / math.sqrt(re))
    kn = knudsen_from_reynolds(m, re)
    c1 = drag_incompressible / (1 + kn * (2.514 + 0.8 * math.exp(-0.55 / kn)))
    j = 2.26 - 0.1 / m + 0.14 / m**3 if m <= 1 else 1.6 + 0.25 / m + 0.11 / m**2 + 0.44 / m**3
    limit = free_molecular_sphere(m * math.sqrt(GAMMA / 2), 1.0)
    c2 = limit / (1 + (limit / j - 1) * math.sqrt(re / 45))
    return (c1 + m**4 * c2) / (1 + m**4)


def henderson(mach: float, reynolds: float, wall_over_gas: float) -> float:
    """Henderson 1976, AIAA J. 14(6), for Mach 1.75 and above; stated to Mach 6."""
    s = mach * math.sqrt(GAMMA / 2)
    thin = 1.86 * math.sqrt(mach / reynolds)
    inner = 2 + 2 / s**2 + 1.058 / s * math.sqrt(wall_over_gas) - 1 / s**4
    return (0.9 + 0.34 / mach**2 + thin * inner) / (1 + thin)
