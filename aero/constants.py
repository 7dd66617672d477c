"""Physical constants and the Earth, each with its source."""

from __future__ import annotations

BOLTZMANN = 1.380649e-23  # J/K, exact (SI 2019)
AVOGADRO = 6.02214076e23  # 1/mol, exact (SI 2019)
GAS_CONSTANT = BOLTZMANN * AVOGADRO  # J/(mol K)
STEFAN_BOLTZMANN = 5.670374419e-8  # W/(m2 K4), CODATA 2018

EARTH_GM = 3.986004418e14  # m3/s2, WGS84
EARTH_J2 = 1.08262668e-3  # EGM96, unnormalised
EARTH_RADIUS = 6378137.0  # m, equatorial, WGS84
EARTH_FLATTENING = 1.0 / 298.257223563  # WGS84
EARTH_ROTATION = 7.292115e-5  # rad/s, WGS84
