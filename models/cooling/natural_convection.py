"""Natural convection of air on vertical plates and between vertical parallel plates.

Nu, Ra and the best spacing are each one published law. The channel laws join the fully developed limit
(close plates) to the single-plate limit (wide apart); temperatures are wall over ambient, properties at
film temperature.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.cooling.air import GRAVITY

Array = NDArray[np.float64]

BEST_SPACING_ISOTHERMAL = 2.714
BEST_SPACING_ISOFLUX = 2.12
BEST_NUSSELT_ISOTHERMAL = 1.307


def grashof(length: Array, rise: Array, expansion: Array, kinematic_viscosity: Array) -> Array:
    """Grashof number g beta dT L^3 / nu^2.

    Args:
        length: characteristic length [m].
        rise: wall over ambient temperature [K].
        expansion: volumetric expansion coefficient [1/K].
        kinematic_viscosity: [m2/s].

    Returns:
        Grashof number [-].
    """
    cube = length * length * length
    return GRAVITY * expansion * rise * cube / (kinematic_viscosity * kinematic_viscosity)


def rayleigh(
    length: Array, rise: Array, expansion: Array, kinematic_viscosity: Array, prandtl: Array
) -> Array:
    """Rayleigh number Gr Pr.

    Args:
        length: characteristic length [m].
        rise: wall over ambient temperature [K].
        expansion: volumetric expansion coefficient [1/K].
        kinematic_viscosity: [m2/s].
        prandtl: [-].

    Returns:
        Rayleigh number [-].
    """
    return grashof(length, rise, expansion, kinematic_viscosity) * prandtl


def vertical_plate_laminar_nusselt(rayleigh_number: Array, prandtl: Array) -> Array:
    """Mean Nusselt number of an isothermal vertical plate, laminar (Churchill & Chu 1975, eq. 5), for Ra <
    1e9.

    Args:
        rayleigh_number: on the plate's height [-].
        prandtl: [-].

    Returns:
        Mean Nusselt number on the height [-].
    """
    prandtl_part = (1.0 + (0.492 / prandtl) ** (9.0 / 16.0)) ** (4.0 / 9.0)
    return 0.68 + 0.670 * np.sqrt(np.sqrt(rayleigh_number)) / prandtl_part


def vertical_plate_nusselt(rayleigh_number: Array, prandtl: Array) -> Array:
    """Mean Nusselt number of an isothermal vertical plate, any Ra up to 1e12 (Churchill & Chu 1975, eq. 9).

    Args:
        rayleigh_number: on the plate's height [-].
        prandtl: [-].

    Returns:
        Mean Nusselt number on the height [-].
    """
    prandtl_part = (1.0 + (0.492 / prandtl) ** (9.0 / 16.0)) ** (8.0 / 27.0)
    return np.square(0.825 + 0.387 * rayleigh_number ** (1.0 / 6.0) / prandtl_part)


def channel_isothermal_nusselt(elenbaas: Array) -> Array:
    """Mean Nusselt number (on the spacing) between isothermal vertical plates (Bar-Cohen & Rohsenow 1984,
    table 1).

    Notes:
        Limits: El/24 for close plates (fully developed flow), 0.59 El^(1/4) for wide ones (single plate).
            Air; the error
        against Elenbaas' measurements (1942) is some 10 %. Sideways inflow is left out, as is the closing
        of one side by the base.

    Args:
        elenbaas: Ra_S S/L: Rayleigh number on the spacing times spacing over height [-].

    Returns:
        Nusselt number h S/k, h on wall over ambient temperature [-].
    """
    return 1.0 / np.sqrt(576.0 / (elenbaas * elenbaas) + 2.873 / np.sqrt(elenbaas))


def channel_isoflux_midheight_nusselt(modified_elenbaas: Array) -> Array:
    """Nusselt number at mid height between vertical plates of uniform flux (Bar-Cohen & Rohsenow 1984,
    table 1).

    Args:
        modified_elenbaas: g beta q'' S^5 / (nu alpha k L), from the wall flux q'' [-].

    Returns:
        Nusselt number h S/k, h on the mid-height wall over ambient temperature [-].
    """
    return 1.0 / np.sqrt(12.0 / modified_elenbaas + 1.88 / modified_elenbaas**0.4)


def channel_isoflux_top_nusselt(modified_elenbaas: Array) -> Array:
    """Nusselt number at the hot upper end between vertical plates of uniform flux (Bar-Cohen & Rohsenow
    1984, table 1).

    Args:
        modified_elenbaas: g beta q'' S^5 / (nu alpha k L), from the wall flux q'' [-].

    Returns:
        Nusselt number h S/k, h on the greatest wall over ambient temperature [-].
    """
    return 1.0 / np.sqrt(48.0 / modified_elenbaas + 2.51 / modified_elenbaas**0.4)


def best_spacing_isothermal(length: Array, rayleigh_on_length: Array) -> Array:
    """Spacing of thin isothermal plates that moves most heat from a given base (Bar-Cohen & Rohsenow 1984,
    table 2).

    Args:
        length: height of the plates along the flow [m].
        rayleigh_on_length: Rayleigh number on that height [-].

    Returns:
        Spacing; there El = 54.3 and Nu = 1.307 [m].
    """
    return BEST_SPACING_ISOTHERMAL * length / np.sqrt(np.sqrt(rayleigh_on_length))


def best_spacing_isoflux(spacing: Array, modified_elenbaas: Array) -> Array:
    """Spacing of thin uniform-flux plates with least volumetric resistance (Bar-Cohen & Rohsenow 1984,
    table 2).

    Args:
        spacing: any spacing [m].
        modified_elenbaas: modified Elenbaas number at that spacing [-].

    Returns:
        Best spacing, 2.12 (S^5 / El*)^(1/5) [m].
    """
    return BEST_SPACING_ISOFLUX * spacing / modified_elenbaas**0.2
