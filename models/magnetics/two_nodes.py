"""Temperatures of a wound part: core and winding as two nodes, each with its surface to the air, and what
conducts between them.

Structure: Van den Bossche and Valchev, Inductors and Transformers for Power Electronics (2005), ch. 6.
Natural convection: McAdams (1954), h = 1.42 (dT/L)^0.25 on vertical faces in air. Forced: laminar flow along
a plate (Pohlhausen), Nu = 0.664 Re^0.5 Pr^0.33. Radiation: grey surfaces to surroundings at the air's
temperature.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.constants import sigma, zero_Celsius

from models.cooling.air import STANDARD_PRESSURE_PA, air_at

Array = NDArray[np.float64]
EMISSIVITY = 0.85  # of varnished windings, ferrite, lacquered cores (common practice, 0.8 to 0.95)
STILL_AIR = 1.42  # W/(m2 K) at 1 K over 1 m, McAdams, laminar air at sea level
FILM_C = 70.0  # at which forced air's properties are taken, between air and winding [degC]
SURFACE_OF_BOX = 6.4  # surface over volume^(2/3): a cube has 6, boxes of wound cores 6.2 to 6.8 (geometry)
FORMER_CONDUCTIVITY = 0.25  # of coil formers [W/(m K)] (filled polyamide, from memory 0.2 to 0.35)
WINDING_CONDUCTIVITY = 1.0  # across a varnished winding [W/(m K)], from memory 0.5 to 2
AIR_FILM = 0.5e-3  # between former and core and between winding and former together [m], judgement
AIR_CONDUCTIVITY = 0.029  # at 80 degC [W/(m K)]
LEAST_RISE = 1e-6  # K, keeps roots and quotients finite where there is no loss
WINDING_SHARE = {
    "E": 0.4,
    "ETD": 0.4,
    "PQ": 0.25,
    "RM": 0.3,
    "U": 0.6,
    "cut C": 0.6,
    "three-limb": 0.5,
    "toroid powder": 0.95,
    "toroid ferrite": 0.95,
}
"""Winding's part of the outer surface by family: faces of the middle sizes, by geometry (E65 0.42, C 25/40
0.62); rings are wound all over."""
OTHER_SHARE = 0.4


def winding_shares(families: NDArray[np.str_]) -> Array:
    """Winding's part of the outer surface of shapes of the families (k,) [-]."""
    return np.array([WINDING_SHARE.get(str(family), OTHER_SHARE) for family in families])


@dataclass(frozen=True)
class Air:
    """Air around a part: its temperature [degC], pressure over that at sea level [-], speed, 0 for still air
    (n,) [m/s].
    """

    ambient_c: float
    pressure_share: float
    speed: Array


@dataclass(frozen=True)
class Nodes:
    """Surfaces and conductance of parts (n,).

    Attributes:
        core_surface, winding_surface: to the air [m2].
        between: conductance from core to winding [W/K].
        length: of the faces along which the air flows [m].
    """

    core_surface: Array
    winding_surface: Array
    between: Array
    length: Array


def nodes(box_volume: Array, winding_share: Array, contact: Array, wall: Array, build: Array) -> Nodes:
    """Surfaces and conductance of wound parts.

    Args:
        box_volume: of the box around them (n,) [m3].
        winding_share: winding's part of the surface (n,) [-].
        contact: area of the winding's inner face (n,) [m2].
        wall: between core and winding, 0 on rings (n,) [m].
        build: height of the winding across its layers (n,) [m].
    """
    surface = SURFACE_OF_BOX * box_volume ** (2.0 / 3.0)
    way = wall / FORMER_CONDUCTIVITY + AIR_FILM / AIR_CONDUCTIVITY + 0.5 * build / WINDING_CONDUCTIVITY
    return Nodes(
        core_surface=(1.0 - winding_share) * surface,
        winding_surface=winding_share * surface,
        between=contact / way,
        length=np.cbrt(box_volume),
    )


def forced_coefficient(air: Air, length: Array) -> Array:
    """Heat transfer coefficient of laminar flow along faces of a length [m], 0 in still air (n,)
    [W/(m2 K)]. Source: Pohlhausen (1921); Incropera and DeWitt, eq. 7.30.
    """
    film = air_at(np.asarray(FILM_C + zero_Celsius), np.asarray(air.pressure_share * STANDARD_PRESSURE_PA))
    reynolds = air.speed * length / film.kinematic_viscosity
    return 0.664 * np.sqrt(reynolds) * np.cbrt(film.prandtl) * film.conductivity / length


def still_coefficient(rise: Array, length: Array, pressure_share: float) -> Array:
    """Heat transfer coefficient of natural convection [W/(m2 K)].

    Args:
        rise: surface over air [K]; length: of the faces [m]; pressure_share: over sea level [-].
    """
    return STILL_AIR * np.sqrt(pressure_share) * np.sqrt(np.sqrt(rise / length))


def radiation_coefficient(rise: Array, ambient_c: float) -> Array:
    """Heat transfer coefficient of radiation [W/(m2 K)] at a surface's rise over its surroundings [K]."""
    around = ambient_c + zero_Celsius
    surface = around + rise
    return EMISSIVITY * sigma * (surface**2 + around**2) * (surface + around)


def rises(parts: Nodes, air: Air, forced: Array, losses: tuple[Array, Array], start: Array) -> Array:
    """One fixed-point step of both nodes' rises over the air (2, n, p) [K].

    Args:
        parts, air: what gives off heat and to what.
        forced: coefficient of `forced_coefficient` (n,) [W/(m2 K)].
        losses: of core and winding (n, p) [W].
        start: rises at which the coefficients are taken (2, n, p) [K].
    """
    rise = np.clip(start, LEAST_RISE, 400.0)
    convection = np.maximum(
        still_coefficient(rise, parts.length[:, None], air.pressure_share), forced[:, None]
    )
    coefficient = convection + radiation_coefficient(rise, air.ambient_c)
    core = coefficient[0] * parts.core_surface[:, None]
    winding = coefficient[1] * parts.winding_surface[:, None]
    between = parts.between[:, None]
    core_loss, winding_loss = losses
    scale = 1.0 / (core * winding + between * (core + winding))
    both = between * (core_loss + winding_loss)
    return np.stack([(both + winding * core_loss) * scale, (both + core * winding_loss) * scale])
