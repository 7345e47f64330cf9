"""A plate-fin heatsink: geometry, metal, and the heat it gives off in natural and in forced convection."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from models.cooling import forced_convection as forced
from models.cooling import natural_convection as natural
from models.cooling import radiation
from models.cooling.air import Air
from models.cooling.spreading import base_conduction, spreading_resistance

Array = NDArray[np.float64]

ONE_SIDED: Array = np.array(1.0)
ONE_SIDED.setflags(write=False)


@dataclass(frozen=True, kw_only=True)
class PlateFin:
    """Geometry of one or many heatsinks; the fields broadcast.

    Two equal halves, fins tip to tip, make one duct with a base on either side (halves = 2).

    Attributes:
        length: along fins and flow [m].
        fin_height: base to tip [m].
        fin_thickness: [m].
        gap: clear distance between fins [m].
        fin_count: fins on one base, at least 2 [-].
        base_thickness: [m].
        halves: bases around one duct, 1 or 2 [-].
    """

    length: Array
    fin_height: Array
    fin_thickness: Array
    gap: Array
    fin_count: Array
    base_thickness: Array
    halves: Array = field(default_factory=lambda: ONE_SIDED)

    @property
    def channels(self) -> Array:
        """Number of gaps between fins [-]."""
        return self.fin_count - 1.0

    @property
    def width(self) -> Array:
        """Across the fins [m]."""
        return self.fin_count * self.fin_thickness + self.channels * self.gap

    @property
    def base_area(self) -> Array:
        """Mounting area of all bases [m2]."""
        return self.halves * self.width * self.length

    @property
    def height(self) -> Array:
        """Boxed height, bases included [m]."""
        return self.halves * (self.fin_height + self.base_thickness)

    @property
    def boxed_volume(self) -> Array:
        """Volume of the enclosing box [m3]."""
        return self.width * self.length * self.height

    @property
    def metal_volume(self) -> Array:
        """Volume of bases and fins [m3]."""
        section = self.width * self.base_thickness + self.fin_count * self.fin_thickness * self.fin_height
        return self.halves * self.length * section

    @property
    def fin_area(self) -> Array:
        """Both sides of all fins, tips left out [m2]."""
        return 2.0 * self.halves * self.fin_count * self.fin_height * self.length

    @property
    def duct_height(self) -> Array:
        """Height of one duct between base and cover, or between the two bases [m]."""
        return self.halves * self.fin_height


def plain_coefficient(length: Array, rise: Array, ambient_k: Array, air: Air, emissivity: Array) -> Array:
    """Convection and radiation of a plain vertical face up to Ra 1e9, in air some 0.6 m
    (Churchill & Chu 1975, eq. 5; Stefan-Boltzmann).

    Args:
        length: height of the face along the flow [m].
        rise: over ambient [K].
        ambient_k: absolute [K].
        air: at film temperature.
        emissivity: [-].

    Returns:
        Coefficient [W/(m2 K)].
    """
    ra = natural.rayleigh(length, rise, air.expansion, air.kinematic_viscosity, air.prandtl)
    convection = natural.vertical_plate_laminar_nusselt(ra, air.prandtl) * air.conductivity / length
    return convection + emissivity * radiation.linear_coefficient(ambient_k + rise, ambient_k)


def channel_coefficient(sink: PlateFin, rise: Array, ambient_k: Array, air: Air, emissivity: Array) -> Array:
    """Convection and radiation per wetted area of one vertical channel (Bar-Cohen & Rohsenow 1984; grey
    channel).

    Args:
        sink: geometry, fins upright.
        rise: over ambient [K].
        ambient_k: absolute [K].
        air: at film temperature.
        emissivity: [-].

    Returns:
        Coefficient [W/(m2 K)].
    """
    ra = natural.rayleigh(sink.gap, rise, air.expansion, air.kinematic_viscosity, air.prandtl)
    convection = natural.channel_isothermal_nusselt(ra * sink.gap / sink.length) * air.conductivity / sink.gap
    wetted = sink.length * (2.0 * sink.fin_height + sink.gap)
    exchange = radiation.channel_exchange_area(sink.gap, sink.fin_height, sink.length, emissivity)
    return convection + radiation.linear_coefficient(ambient_k + rise, ambient_k) * exchange / wetted


def natural_conductance(
    sink: PlateFin, rise: Array, ambient_k: Array, air: Air, conductivity: Array, emissivity: Array
) -> Array:
    """Heat over base rise in natural convection, fins upright, back of the base insulated.

    Notes:
        Channels by Bar-Cohen & Rohsenow and the grey-channel network, the outer faces of the end fins, the
        tips and the two side edges of the base as plain plates. One fin efficiency for convection and
        radiation together.

    Args:
        sink: geometry, halves = 1.
        rise: of the base over ambient [K].
        ambient_k: absolute [K].
        air: at film temperature.
        conductivity: of the metal [W/(m K)].
        emissivity: of the surface [-].

    Returns:
        Conductance [W/K].
    """
    inner = channel_coefficient(sink, rise, ambient_k, air, emissivity)
    outer = plain_coefficient(sink.length, rise, ambient_k, air, emissivity)
    slenderness = sink.fin_height * np.sqrt(2.0 * inner / (conductivity * sink.fin_thickness))
    efficiency = forced.fin_efficiency(slenderness)
    per_channel = inner * (2.0 * sink.fin_height * efficiency + sink.gap)
    ends = outer * 2.0 * (sink.fin_height * efficiency + sink.base_thickness)
    tips = outer * efficiency * sink.fin_thickness * sink.fin_count
    return sink.length * (sink.channels * per_channel + ends + tips)


def duct_nusselt(sink: PlateFin, reynolds: Array, prandtl: Array) -> Array:
    """Mean Nusselt number of the ducts, laminar, transitional or turbulent (on the hydraulic diameter).

    Notes:
        Between Re 2300 and 4000 the laminar law passes linearly into the turbulent one (weight of
        Gnielinski 2013). In ducts of a few diameters the developing laminar law may lie above the turbulent
        one; the higher of the two holds.

    Args:
        sink: geometry.
        reynolds: on the hydraulic diameter [-].
        prandtl: [-].

    Returns:
        Nusselt number, rising with Re [-].
    """
    short, long = np.minimum(sink.gap, sink.duct_height), np.maximum(sink.gap, sink.duct_height)
    slim = forced.hydraulic_diameter(short, long) / sink.length
    friction, developed = (
        forced.laminar_friction(short / long),
        forced.laminar_isothermal_nusselt(short / long),
    )
    laminar = forced.developing_nusselt(1.0 / (slim * reynolds * prandtl), prandtl, friction, developed)
    turbulent = forced.turbulent_nusselt(np.maximum(reynolds, forced.TURBULENT_START), prandtl, slim)
    return laminar + forced.turbulent_share(reynolds) * np.maximum(turbulent - laminar, 0.0)


def duct_velocity(sink: PlateFin, flow: Array) -> Array:
    """Mean velocity between the fins, no bypass.

    Args:
        sink: geometry.
        flow: volume flow through all ducts, above 0 [m3/s].

    Returns:
        Velocity [m/s].
    """
    return flow / (sink.channels * sink.gap * sink.duct_height)


def pressure_drop(sink: PlateFin, flow: Array, air: Air) -> Array:
    """Pressure drop over ducts, entry and exit; through the transition as the Nusselt number of the ducts.

    Args:
        sink: geometry.
        flow: volume flow through all ducts, above 0 [m3/s].
        air: at film temperature.

    Returns:
        Pressure drop [Pa].
    """
    short, long = np.minimum(sink.gap, sink.duct_height), np.maximum(sink.gap, sink.duct_height)
    diameter = forced.hydraulic_diameter(short, long)
    free_share = sink.gap / (sink.gap + sink.fin_thickness)
    ends = forced.contraction_loss(free_share) + forced.expansion_loss(free_share)
    developed = forced.laminar_friction(short / long)
    slim = sink.length / diameter
    velocity = duct_velocity(sink, flow)
    reynolds = velocity * diameter / air.kinematic_viscosity
    laminar = forced.developing_friction(slim / reynolds, developed) / reynolds
    turbulent = forced.turbulent_friction(np.maximum(reynolds, forced.TURBULENT_START))
    factor = laminar + forced.turbulent_share(reynolds) * np.maximum(turbulent - laminar, 0.0)
    return 0.5 * air.density * velocity * velocity * (factor * slim + ends)


def forced_conductance(sink: PlateFin, flow: Array, air: Air, conductivity: Array) -> Array:
    """Heat over the rise of the base above the inlet air, in a shroud without bypass.

    Notes:
        Isothermal base; the air warms along the duct, so heat = m cp (1 - exp(-NTU)) times the inlet
        difference. Fin tips end at the cover or at the other half's tips and pass no heat; radiation is
        left out.

    Args:
        sink: geometry.
        flow: volume flow through all ducts, above 0 [m3/s].
        air: at film temperature.
        conductivity: of the metal [W/(m K)].

    Returns:
        Conductance [W/K].
    """
    diameter = forced.hydraulic_diameter(sink.gap, sink.duct_height)
    reynolds = duct_velocity(sink, flow) * diameter / air.kinematic_viscosity
    coefficient = duct_nusselt(sink, reynolds, air.prandtl) * air.conductivity / diameter
    slenderness = sink.fin_height * np.sqrt(2.0 * coefficient / (conductivity * sink.fin_thickness))
    efficiency = forced.fin_efficiency(slenderness)
    per_channel = sink.halves * sink.length * (2.0 * sink.fin_height * efficiency + sink.gap)
    stream = flow * air.density * air.heat_capacity
    return -stream * np.expm1(-coefficient * sink.channels * per_channel / stream)


def base_resistance(
    sink: PlateFin, film_resistance: Array, conductivity: Array, source_area: Array, source_count: Array
) -> Array:
    """Resistance from the hottest point under equal, evenly spread sources to the fins' roots (Lee et al.
    1995).

    Args:
        sink: geometry.
        film_resistance: of the whole sink, fin roots to air [K/W].
        conductivity: of the metal [W/(m K)].
        source_area: footprint of all sources [m2].
        source_count: number of sources [-].

    Returns:
        Base conduction plus greatest spreading resistance, over all heat [K/W].
    """
    plate, source = sink.base_area / source_count, source_area / source_count
    film = film_resistance * source_count
    spread = spreading_resistance(source, plate, sink.base_thickness, conductivity, film)
    return base_conduction(sink.base_thickness, conductivity, sink.base_area) + spread.greatest / source_count
