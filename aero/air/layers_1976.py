"""The U.S. Standard Atmosphere 1976 below 86 km: seven layers of constant temperature gradient."""

from __future__ import annotations

import numpy as np

from aero.arrays import Floats

# Constants of the standard [StandardAtmosphere1976], not the present ones: the printed table follows from these.
GAS_CONSTANT = 8314.32  # J/(kmol K), table 2
AVOGADRO = 6.022169e26  # 1/kmol, table 2
BOLTZMANN = 1.380622e-23  # J/K, table 2
GRAVITY = 9.80665  # m/s2 at sea level, table 2
RADIUS = 6356766.0  # m, effective Earth radius, table 2
PRESSURE = 101325.0  # Pa at sea level, table 2
TEMPERATURE = 288.15  # K at sea level, table 2
MOLAR_MASS_0 = 28.9644  # kg/kmol, mean of air at sea level, section 1.2.4

LAYER_BASE = np.array([0.0, 11e3, 20e3, 32e3, 47e3, 51e3, 71e3])  # m geopotential, table 4
LAPSE = np.array([-6.5e-3, 0.0, 1.0e-3, 2.8e-3, 0.0, -2.8e-3, -2.0e-3])  # K/m geopotential, table 4

# Molar mass over its sea-level value at 80, 80.5 ... 86 km geometric, table 8.
MASS_RATIO = np.array(
    [
        1.000000,
        0.999996,
        0.999989,
        0.999971,
        0.999941,
        0.999909,
        0.999870,
        0.999829,
        0.999786,
        0.999741,
        0.999694,
        0.999641,
        0.999579,
    ]
)
MASS_RATIO_ALTITUDE = np.linspace(80e3, 86e3, 13)  # m

# Fractional volumes at sea level, table 3, of those gases that `aero.air.SPECIES` holds (order of SPECIES).
FRACTION = np.array([0.78084, 0.209476, 0.0, 0.0, 0.00934, 5.24e-6, 0.0])
# The rest (CO2, Ne, Kr, Xe, CH4, H2: 3.4e-4 together) is shared out in proportion, so that the seven
# species add up to the number density.
FRACTION_7 = FRACTION / FRACTION.sum()

_HYDROSTATIC = GRAVITY * MOLAR_MASS_0 / GAS_CONSTANT  # K/m geopotential


def _bases() -> tuple[Floats, Floats]:
    temperature = TEMPERATURE + np.concatenate([[0.0], np.cumsum(LAPSE[:-1] * np.diff(LAYER_BASE))])
    log_pressure = [np.log(PRESSURE)]
    for i, thickness in enumerate(np.diff(LAYER_BASE)):
        if LAPSE[i] == 0.0:
            drop = _HYDROSTATIC * thickness / temperature[i]
        else:
            drop = _HYDROSTATIC / LAPSE[i] * np.log(temperature[i + 1] / temperature[i])
        log_pressure.append(log_pressure[-1] - drop)
    return temperature, np.exp(log_pressure)


BASE_TEMPERATURE, BASE_PRESSURE = _bases()
_GRADIENT = LAPSE != 0.0
_POWER = np.where(_GRADIENT, -_HYDROSTATIC / np.where(_GRADIENT, LAPSE, 1.0), 0.0)
_DECAY = np.where(_GRADIENT, 0.0, -_HYDROSTATIC / BASE_TEMPERATURE)
# All layers begin at whole kilometres: the layer of each kilometre from -6 to 85, looked up directly.
_LAYER_OF_KM = np.clip(np.searchsorted(LAYER_BASE, np.arange(-6, 86) * 1e3, side="right") - 1, 0, None)


def geopotential(altitude: Floats) -> Floats:
    """Return the geopotential height of a geometric altitude [m] (eq. 18)."""
    return RADIUS * altitude / (RADIUS + altitude)


def layers(altitude: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    """Return temperature, pressure, density and number density below 86 km.

    Parameters
    ----------
    altitude : (n,) array [m]
        Geometric, -5 to 86 km.

    Returns
    -------
    temperature, pressure, density, number_density : (n,) arrays [K, Pa, kg/m3, 1/m3]
        The temperature is the kinetic one; between 80 and 86 km it is lower than the printed
        molecular-scale temperature by the mass ratio.

    Notes
    -----
    T_M = T_b + L (H - H_b); p = p_b (T_M/T_b)^(-g0 M0/(R L)), or p_b exp(-g0 M0 (H - H_b)/(R T_b)) where
    L = 0; rho = p M0/(R T_M); T = T_M M/M0; n = N_A p/(R T). Range of the first layer: down to -5 km.

    References
    ----------
    [StandardAtmosphere1976], eqs. 18, 23, 33a, 33b, 42 and table 8.

    Examples
    --------
    >>> import numpy as np
    >>> [float(round(v[0], 4)) for v in layers(np.array([11e3]))[:3]]
    [216.7735, 22699.9607, 0.3648]
    """
    height = geopotential(altitude)
    layer = _LAYER_OF_KM.take(np.floor(height * 1e-3).astype(np.intp) + 6)
    above = height - LAYER_BASE.take(layer)
    base = BASE_TEMPERATURE.take(layer)
    scale_temperature = base + LAPSE.take(layer) * above
    exponent = _POWER.take(layer) * np.log(scale_temperature / base) + _DECAY.take(layer) * above
    pressure = BASE_PRESSURE.take(layer) * np.exp(exponent)
    ratio = np.interp(altitude, MASS_RATIO_ALTITUDE, MASS_RATIO)
    density = pressure * (MOLAR_MASS_0 / GAS_CONSTANT) / scale_temperature
    temperature = scale_temperature * ratio
    number_density = pressure * (AVOGADRO / GAS_CONSTANT) / temperature
    return temperature, pressure, density, number_density
