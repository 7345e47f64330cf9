"""Properties of dry air at film temperature and altitude.

Pressure falls with altitude as in the standard atmosphere; the temperature is the user's own, so density
follows from the gas law and not from the standard temperature at that height. Viscosity and conductivity of
a gas do not depend on pressure.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

ZERO_CELSIUS_K = 273.15
STANDARD_PRESSURE_PA = 101_325.0
STANDARD_TEMPERATURE_K = 288.15
LAPSE_K_PER_M = 0.0065
GAS_CONSTANT_AIR = 287.053
GRAVITY = 9.80665
TROPOPAUSE_M = 11_000.0
LOWEST_M = -500.0


@dataclass(frozen=True)
class Air:
    """Dry air at one or many states (arrays broadcast).

    Attributes:
        density: [kg/m3].
        heat_capacity: at constant pressure [J/(kg K)].
        conductivity: [W/(m K)].
        viscosity: dynamic [Pa s].
        expansion: volumetric expansion coefficient [1/K].
    """

    density: Array
    heat_capacity: Array
    conductivity: Array
    viscosity: Array
    expansion: Array

    @property
    def kinematic_viscosity(self) -> Array:
        """Dynamic viscosity over density [m2/s]."""
        return self.viscosity / self.density

    @property
    def prandtl(self) -> Array:
        """Prandtl number [-]."""
        return self.viscosity * self.heat_capacity / self.conductivity


def pressure_at_altitude(altitude: Array) -> Array:
    """Air pressure of the standard atmosphere's lowest layer (ISO 2533:1975, eq. 12).

    Args:
        altitude: height above sea level, -500 to 11 000 m [m].

    Returns:
        Pressure [Pa].

    Raises:
        ValueError: an altitude outside the layer.
    """
    height = np.asarray(altitude, dtype=np.float64)
    if np.any((height < LOWEST_M) | (height > TROPOPAUSE_M) | np.isnan(height)):
        raise ValueError(f"altitude must lie within {LOWEST_M:g}..{TROPOPAUSE_M:g} m, got {altitude}")
    exponent = GRAVITY / (LAPSE_K_PER_M * GAS_CONSTANT_AIR)
    return STANDARD_PRESSURE_PA * (1.0 - LAPSE_K_PER_M * height / STANDARD_TEMPERATURE_K) ** exponent


def viscosity(temperature: Array) -> Array:
    """Dynamic viscosity of air by Sutherland's law (US Standard Atmosphere 1976, eq. 51), within 2 % at
    100..1900 K.

    Args:
        temperature: absolute [K].

    Returns:
        Dynamic viscosity [Pa s].
    """
    return 1.458e-6 * temperature**1.5 / (temperature + 110.4)


def conductivity(temperature: Array) -> Array:
    """Thermal conductivity of air (US Standard Atmosphere 1976, eq. 53).

    Args:
        temperature: absolute [K].

    Returns:
        Conductivity [W/(m K)].
    """
    return 2.64638e-3 * temperature**1.5 / (temperature + 245.4 * 10.0 ** (-12.0 / temperature))


def heat_capacity(temperature: Array) -> Array:
    """Specific heat of dry air at constant pressure, ideal gas, 300..1000 K (polynomial of NASA SP-273,
    1971, as tabled by Moran & Shapiro, table A-21); its error at 250 K is below 0.5 %.

    Args:
        temperature: absolute [K].

    Returns:
        Specific heat [J/(kg K)].
    """
    t = temperature
    return GAS_CONSTANT_AIR * (3.653 + t * (-1.337e-3 + t * (3.294e-6 + t * (-1.913e-9 + t * 0.2763e-12))))


def air_at(temperature: Array, pressure: Array) -> Air:
    """Air at a film temperature and a pressure: gas law for density and expansion, correlations for the rest.

    Args:
        temperature: absolute film temperature [K].
        pressure: [Pa].

    Returns:
        The state.

    Raises:
        ValueError: a temperature outside 200..700 K, where the fits are not meant to hold.
    """
    t = np.asarray(temperature, dtype=np.float64)
    if np.any((t < 200.0) | (t > 700.0) | np.isnan(t)):
        raise ValueError(f"film temperature must lie within 200..700 K, got {temperature}")
    return Air(
        density=pressure / (GAS_CONSTANT_AIR * t),
        heat_capacity=heat_capacity(t),
        conductivity=conductivity(t),
        viscosity=viscosity(t),
        expansion=1.0 / t,
    )
