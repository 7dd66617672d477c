"""Heat of oxygen recombination in free-molecular flow: the bond, the flux of atoms, limits."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate

from aero.air.state import MOLECULE_MASS
from aero.constants import AVOGADRO, BOLTZMANN
from aero.gas import flow, mixed_air
from aero.heat.free_molecular import free_molecular_flux
from aero.heat.recombination import ENERGY_PER_ATOM, oxygen_flux, recombination_flux

ATOMS = [0, 0, 1, 0, 0, 0, 0]


def oxygen(temperature=900.0, fractions=ATOMS):
    return mixed_air(temperature, 1e15, fractions, altitude=300e3)


def test_half_a_bond_is_the_atoms_heat_of_formation():
    # JANAF (NIST-JANAF Thermochemical Tables, 4th edition, 1998): O(g) at 0 K 246.790 +- 0.100 kJ/mol
    # (value from memory); 5.117 eV is printed to 4 digits
    assert abs(ENERGY_PER_ATOM * AVOGADRO - 246.790e3) < 0.100e3


@pytest.mark.parametrize(
    ("speed", "cosine"), [(0.0, 1.0), (300.0, 1.0), (2000.0, 0.5), (7500.0, 0.0), (900.0, -0.7)]
)
def test_flux_is_the_integral_of_the_maxwellian(speed, cosine):
    air = oxygen()
    spread = np.sqrt(BOLTZMANN * 900.0 / MOLECULE_MASS[2])
    drift = speed * cosine

    def integrand(v):
        return v * np.exp(-0.5 * ((v - drift) / spread) ** 2) / (np.sqrt(2 * np.pi) * spread)

    exact = 1e15 * integrate.quad(integrand, 0.0, abs(drift) + 12 * spread, epsrel=1e-11, limit=200)[0]
    assert oxygen_flux(air, flow(air, speed), cosine) == pytest.approx(exact, rel=1e-9)


def test_fast_flow_gains_half_a_bond_an_atom():
    air = oxygen()
    stream = flow(air, 7500.0)
    kinetic = free_molecular_flux(air, stream, 0.0, 1.0)
    atom = 0.5 * MOLECULE_MASS[2] * 7500.0**2 + 2.5 * BOLTZMANN * 900.0
    assert recombination_flux(air, stream, 1.0) / kinetic == pytest.approx(ENERGY_PER_ATOM / atom, rel=1e-9)


def test_efficiency_scales_and_is_checked():
    air = oxygen(np.full(4, 900.0), [0.2, 0.1, 0.7, 0, 0, 0, 0])
    stream = flow(air, [0.0, 100.0, 3000.0, 7500.0])
    full = recombination_flux(air, stream, 1.0)
    assert full.shape == (4,)
    assert np.all(np.diff(full) > 0.0)
    assert recombination_flux(air, stream, 0.25) == pytest.approx(0.25 * full, rel=1e-14)
    assert np.all(recombination_flux(air, stream, 0.0) == 0.0)
    none = oxygen(fractions=[1, 0, 0, 0, 0, 0, 0])
    assert recombination_flux(none, flow(none, 7500.0), 1.0) == 0.0
    with pytest.raises(ValueError, match=r"efficiency must lie in 0 to 1; it ranges 1\.5"):
        recombination_flux(air, stream, 1.5)
