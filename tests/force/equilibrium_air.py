"""Equilibrium air behind a normal shock from partition functions: a second route to the pitot pressure.

Rigid rotors, harmonic oscillators and the electronic levels below about 70000 K; nine species of N and O in
the ratio 79:21, singly ionised. Levels and energies as tabulated in Vincenti & Kruger 1965 (from memory).
"""

from __future__ import annotations

import numpy as np
from scipy import optimize

K, H, NA, E = 1.380649e-23, 6.62607015e-34, 6.02214076e23, 9.1093837e-31
# name: (molar mass, zero-point energy over k per particle [K], theta_rot, symmetry, theta_vib, levels (g, K))
N2, O2, NO = 113250.0, 59360.0, 75400.0  # dissociation energy over k
ION = {"N": 168660.0, "O": 158030.0, "NO": 107500.0}  # ionisation energy over k
SPECIES = {
    "N2": (28.0134, -N2, 2.88, 2, 3371.0, [(1, 0)]),
    "O2": (31.9988, -O2, 2.07, 2, 2256.0, [(3, 0), (2, 11390), (1, 18990)]),
    "NO": (30.0061, -NO, 2.45, 1, 2719.0, [(2, 0), (2, 174)]),
    "N": (14.0067, 0.0, 0, 1, 0, [(4, 0), (10, 27660), (6, 41490)]),
    "O": (15.9994, 0.0, 0, 1, 0, [(5, 0), (3, 228), (1, 326), (5, 22830), (1, 48620)]),
    "NO+": (30.0056, -NO + ION["NO"], 2.87, 1, 3373.0, [(1, 0)]),
    "N+": (14.0062, ION["N"], 0, 1, 0, [(1, 0), (3, 70), (5, 188), (5, 22037), (1, 47029)]),
    "O+": (15.9989, ION["O"], 0, 1, 0, [(4, 0), (10, 38575), (6, 58226)]),
    "e-": (E * NA * 1e3, 0.0, 0, 1, 0, [(2, 0)]),
}
ATOMS = {"N2": (2, 0), "O2": (0, 2), "NO": (1, 1), "N": (1, 0), "O": (0, 1)}
ATOMS |= {"NO+": (1, 1), "N+": (1, 0), "O+": (0, 1), "e-": (0, 0)}
CHARGE = {name: 1 if name.endswith("+") else -1 if name == "e-" else 0 for name in SPECIES}


def partition(name: str, T: float) -> tuple[float, float]:
    """Return ln(Q/V) relative to free atoms at rest, and the enthalpy per particle over k [K]."""
    mass, zero, rotation, symmetry, vibration, levels = SPECIES[name]
    m = mass * 1e-3 / NA
    ln_q, h = 1.5 * np.log(2 * np.pi * m * K * T / H**2) - zero / T, 2.5 * T + zero
    if rotation:
        x = vibration / T
        ln_q += np.log(T / (symmetry * rotation)) - np.log1p(-np.exp(-x))
        h += T + vibration / np.expm1(x)
    weights = np.array([g * np.exp(-level / T) for g, level in levels])
    energies = np.array([level for _, level in levels], dtype=float)
    return ln_q + float(np.log(weights.sum())), h + float(weights @ energies / weights.sum())


def state(T: float, p: float, guess: np.ndarray | None = None) -> tuple[float, float, np.ndarray]:
    """Return density, specific enthalpy, and the chemical potentials (N, O, charge) of equilibrium air."""
    names = list(SPECIES)
    ln_q, h = np.array([partition(name, T) for name in names]).T
    atoms = np.array([ATOMS[name] for name in names])
    charge = np.array([CHARGE[name] for name in names])
    mass = np.array([SPECIES[name][0] for name in names]) * 1e-3 / NA

    def number(mu: np.ndarray) -> np.ndarray:
        return np.exp(np.clip(ln_q + atoms @ mu[:2] - charge * mu[2], -300, 300))

    def residual(mu: np.ndarray) -> np.ndarray:
        n = number(mu)
        total = n.sum()
        ratio = np.log((n * atoms[:, 0]).sum() / (n * atoms[:, 1]).sum() / (0.79 / 0.21))
        plus, minus = n[charge > 0].sum(), n[charge < 0].sum()
        return np.array([np.log(total * K * T / p), ratio, np.log(plus / minus)])

    if guess is None:
        n = p / (K * T)
        guess = np.array([(np.log(0.79 * n) - ln_q[0]) / 2, (np.log(0.21 * n) - ln_q[1]) / 2, 0.0])
        guess[2] = 0.5 * (ln_q[5] + guess[0] + guess[1] - ln_q[8])
    found = optimize.root(residual, guess, method="lm", tol=1e-13)
    assert np.abs(residual(found.x)).max() < 1e-8
    n = number(found.x)
    density = float(n @ mass)
    return density, float((n * h).sum() * K / density), found.x


def solve_temperature(p: float, enthalpy: float, start: float) -> tuple[float, float]:
    """Return temperature and density of equilibrium air at a pressure and enthalpy."""
    guess: list[np.ndarray | None] = [None]

    def off(T: float) -> float:
        _, h, guess[0] = state(T, p)
        return h - enthalpy

    low, high = 200.0, start
    T = optimize.brentq(off, low, high, xtol=1e-6)
    return T, state(T, p)[0]


def pitot(speed: float, temperature: float, pressure: float) -> tuple[float, float]:
    """Return the pitot pressure coefficient and the density ratio of the normal shock."""
    density, h1, _ = state(temperature, pressure)
    flux = density * speed

    def mismatch(inverse: float) -> float:
        p2 = pressure + flux * speed * (1 - inverse)
        h2 = h1 + 0.5 * speed**2 * (1 - inverse**2)
        return density / solve_temperature(p2, h2, 40000.0)[1] - inverse

    inverse = optimize.brentq(mismatch, 0.03, 0.3, xtol=1e-10)
    p2 = pressure + flux * speed * (1 - inverse)
    rho2, u2 = density / inverse, speed * inverse
    h0 = h1 + 0.5 * speed**2
    # isentropic to rest: p rises by rho u^2/2, and the next order uses the mean density of the compression
    p0 = p2 + 0.5 * rho2 * u2**2
    for _ in range(3):
        rho0 = solve_temperature(p0, h0, 40000.0)[1]
        p0 = p2 + 0.5 * u2**2 * 0.5 * (rho2 + rho0)
    return (p0 - pressure) / (0.5 * density * speed**2), 1.0 / inverse
