"""Forced convection of air in rectangular ducts between plate fins: friction, Nusselt numbers, fin
efficiency.

Laminar flow develops in the duct (velocity and temperature together); beyond Re = 2300 the laws pass
linearly into the turbulent ones at Re = 4000. Numbers are on the hydraulic diameter, friction factors are
Darcy's (four times Fanning's).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

LAMINAR_END = 2300.0
TURBULENT_START = 4000.0
PLATES_ISOTHERMAL_NUSSELT = 7.541
PLATES_ISOFLUX_NUSSELT = 8.235
PLATES_FRICTION = 96.0


def hydraulic_diameter(short: Array, long: Array) -> Array:
    """Four times area over perimeter of a rectangular duct.

    Args:
        short: one side [m].
        long: other side [m].

    Returns:
        Hydraulic diameter [m].
    """
    return 2.0 * short * long / (short + long)


def laminar_friction(aspect: Array) -> Array:
    """Darcy f Re of fully developed laminar flow in a rectangular duct (Shah & London 1978, eq. 341),
    within 0.05 %.

    Args:
        aspect: short over long side, 0 (parallel plates) to 1 [-].

    Returns:
        f Re [-].
    """
    a = aspect
    poly = 1.0 + a * (-1.3553 + a * (1.9467 + a * (-1.7012 + a * (0.9564 - a * 0.2537))))
    return PLATES_FRICTION * poly


def laminar_isothermal_nusselt(aspect: Array) -> Array:
    """Fully developed laminar Nusselt number, rectangular duct, uniform wall temperature (Shah & London
    1978, eq. 347).

    Args:
        aspect: short over long side, 0 to 1 [-].

    Returns:
        Nusselt number [-].
    """
    a = aspect
    poly = 1.0 + a * (-2.610 + a * (4.970 + a * (-5.119 + a * (2.702 - a * 0.548))))
    return PLATES_ISOTHERMAL_NUSSELT * poly


def laminar_isoflux_nusselt(aspect: Array) -> Array:
    """Fully developed laminar Nusselt number, rectangular duct, uniform flux along, uniform temperature
    around (H1; Shah & London 1978, eq. 348).

    Args:
        aspect: short over long side, 0 to 1 [-].

    Returns:
        Nusselt number [-].
    """
    a = aspect
    poly = 1.0 + a * (-2.0421 + a * (3.0853 + a * (-2.4765 + a * (1.0578 - a * 0.1861))))
    return PLATES_ISOFLUX_NUSSELT * poly


def plates_thermal_entrance_isothermal(x_star: Array) -> Array:
    """Mean Nusselt number of parallel plates, developed velocity, wall temperature uniform (Shah & London
    1978, eqs. 310-312).

    Args:
        x_star: L/(D_h Re Pr) [-].

    Returns:
        Mean Nusselt number, on the logarithmic mean temperature difference [-].
    """
    leveque = 1.849 / np.cbrt(x_star)
    near = np.where(x_star <= 0.0005, leveque, leveque + 0.6)
    return np.where(x_star <= 0.006, near, PLATES_ISOTHERMAL_NUSSELT + 0.0235 / x_star)


def plates_thermal_entrance_isoflux(x_star: Array) -> Array:
    """Mean Nusselt number of parallel plates, developed velocity, wall flux uniform (Shah & London 1978;
    Heat Transfer Handbook, Bejan & Kraus eds. 2003, eq. 5.40).

    Args:
        x_star: L/(D_h Re Pr) [-].

    Returns:
        Mean Nusselt number [-].
    """
    leveque = 2.236 / np.cbrt(x_star)
    near = np.where(x_star <= 0.001, leveque, leveque + 0.9)
    return np.where(x_star <= 0.01, near, PLATES_ISOFLUX_NUSSELT + 0.0364 / x_star)


def plates_combined_entrance(x_star: Array, prandtl: Array) -> Array:
    """Mean Nusselt number of isothermal parallel plates, velocity and temperature developing together
    (Stephan 1959; Heat Transfer Handbook, Bejan & Kraus eds. 2003, chapter 5), for Pr 0.1..1000.

    Args:
        x_star: L/(D_h Re Pr) [-].
        prandtl: [-].

    Returns:
        Mean Nusselt number [-].
    """
    return 7.55 + 0.024 * x_star**-1.14 / (1.0 + 0.0358 * prandtl**0.17 * x_star**-0.64)


def developing_nusselt(x_star: Array, prandtl: Array, friction: Array, developed: Array) -> Array:
    """Mean Nusselt number of a duct of any shape, isothermal wall, combined entrance (Muzychka & Yovanovich
    2004, eq. 35).

    Notes:
        Joins the laminar boundary layer on a plate, the Leveque (Graetz) entrance and the developed value
        with the paper's exponents. The paper writes the developed value as a fit to f Re (error to 10 %);
        the exact value of the shape is an argument here. With air it stays within 5 % of Stephan's law for
        plates at x* 0.001..1.

    Args:
        x_star: L/(D_h Re Pr) [-].
        prandtl: [-].
        friction: developed Darcy f Re of the shape [-].
        developed: developed isothermal Nusselt number of the shape [-].

    Returns:
        Mean Nusselt number, on the logarithmic mean temperature difference [-].
    """
    blend = 2.27 + 1.65 * np.cbrt(prandtl)
    plate = 2.0 * 0.564 / (1.0 + (1.664 * prandtl ** (1.0 / 6.0)) ** 4.5) ** (2.0 / 9.0) / np.sqrt(x_star)
    leveque = 1.5 * 0.409 * np.cbrt(friction / (4.0 * x_star))
    channel = (leveque**5 + developed**5) ** (blend / 5.0)
    return (plate**blend + channel) ** (1.0 / blend)


def developing_friction(x_plus: Array, friction: Array) -> Array:
    """Apparent Darcy f Re of developing laminar flow in a duct of any shape (Muzychka & Yovanovich 2009,
    eq. 29).

    Args:
        x_plus: L/(D_h Re) [-].
        friction: developed Darcy f Re of the shape [-].

    Returns:
        Apparent f Re, acceleration of the core included [-].
    """
    return np.sqrt((4.0 * 3.44) ** 2 / x_plus + friction * friction)


def turbulent_friction(reynolds: Array) -> Array:
    """Darcy friction factor of smooth ducts (Petukhov 1970), for Re 3000..5e6.

    Args:
        reynolds: on the hydraulic diameter [-].

    Returns:
        Friction factor [-].
    """
    return 1.0 / np.square(0.790 * np.log(reynolds) - 1.64)


def turbulent_nusselt(reynolds: Array, prandtl: Array, diameter_over_length: Array) -> Array:
    """Mean turbulent Nusselt number with entrance (Gnielinski 1976; entrance after Hausen 1959), Re
    3000..5e6.

    Args:
        reynolds: on the hydraulic diameter [-].
        prandtl: [-].
        diameter_over_length: hydraulic diameter over duct length [-].

    Returns:
        Nusselt number [-].
    """
    eighth = turbulent_friction(reynolds) / 8.0
    core = (
        eighth
        * (reynolds - 1000.0)
        * prandtl
        / (1.0 + 12.7 * np.sqrt(eighth) * (np.cbrt(prandtl) ** 2 - 1.0))
    )
    return core * (1.0 + np.cbrt(diameter_over_length) ** 2)


def turbulent_share(reynolds: Array) -> Array:
    """Weight of the turbulent law in the transition, linear from Re 2300 to 4000 (Gnielinski 2013, eq. 4).

    Args:
        reynolds: on the hydraulic diameter [-].

    Returns:
        Weight, 0 to 1 [-].
    """
    return np.clip((reynolds - LAMINAR_END) / (TURBULENT_START - LAMINAR_END), 0.0, 1.0)


def contraction_loss(free_share: Array) -> Array:
    """Loss coefficient at the entry, 0.42 (1 - sigma) (White, Fluid Mechanics; sudden contraction).

    Args:
        free_share: free over frontal area [-].

    Returns:
        Coefficient on the duct's velocity head [-].
    """
    return 0.42 * (1.0 - free_share)


def expansion_loss(free_share: Array) -> Array:
    """Loss coefficient at the exit, (1 - sigma)^2 (Borda & Carnot).

    Args:
        free_share: free over frontal area [-].

    Returns:
        Coefficient on the duct's velocity head [-].
    """
    return np.square(1.0 - free_share)


def fin_efficiency(slenderness: Array) -> Array:
    """Efficiency of a straight fin of uniform thickness, tanh(mL)/(mL) (Gardner 1945).

    Args:
        slenderness: m L with m = sqrt(2 h / (k t)) [-].

    Returns:
        Efficiency; 1 in the limit of zero [-].
    """
    ml = np.maximum(slenderness, 1e-6)
    return np.tanh(ml) / ml
