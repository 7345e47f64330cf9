"""What an extruder can make and how devices sit on the base: judgement values of the sink optimisation."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Extrusion:
    """Limits and metal of extruded aluminium sinks; defaults from extruders' guides and common practice.

    Attributes:
        greatest_fin_ratio: fin height over gap; 16 is the stated practical limit of extrusion [-].
        least_gap: [m].
        low_fin_height, low_fin_thickness: least thickness of fins up to this height [m].
        tall_fin_height, tall_fin_thickness: least thickness of fins of this height; linear between and
            beyond [m].
        thickest_least: the least thickness never needs to exceed this [m].
        greatest_fin_height: [m].
        base_thicknesses: those on offer [m].
        least_base_side, greatest_base_side: width and length of the base [m].
        greatest_base_ratio: longer over shorter side of a base without fan [-].
        density: of the metal [kg/m3].
    """

    greatest_fin_ratio: float = 16.0
    least_gap: float = 2.0e-3
    low_fin_height: float = 20e-3
    low_fin_thickness: float = 0.8e-3
    tall_fin_height: float = 60e-3
    tall_fin_thickness: float = 1.5e-3
    thickest_least: float = 2.0e-3
    greatest_fin_height: float = 100e-3
    base_thicknesses: tuple[float, ...] = (4e-3, 6e-3, 8e-3, 12e-3, 16e-3, 20e-3)
    least_base_side: float = 40e-3
    greatest_base_side: float = 0.6
    greatest_base_ratio: float = 2.0
    density: float = 2700.0

    def least_fin_thickness(self, fin_height: Array) -> Array:
        """Thinnest fin an extruder makes at a height, linear through the two stated points.

        Args:
            fin_height: [m].

        Returns:
            Thickness [m].
        """
        slope = (self.tall_fin_thickness - self.low_fin_thickness) / (
            self.tall_fin_height - self.low_fin_height
        )
        line = self.low_fin_thickness + slope * (fin_height - self.low_fin_height)
        return np.clip(line, self.low_fin_thickness, self.thickest_least)


@dataclass(frozen=True, kw_only=True)
class HeatEntry:
    """How heat enters the base: equal devices evenly spread (a judgement; the sub-problem does not know the
    candidate).

    Attributes:
        flux: heat over footprint; discrete packages 10..20, modules some 5 W/cm2 (from memory) [W/m2].
        source_count: number of devices [-].
        greatest_share: most of the base that devices may cover [-].
    """

    flux: float = 1.0e5
    source_count: int = 6
    greatest_share: float = 0.6

    def __post_init__(self) -> None:
        if not self.flux > 0.0:
            raise ValueError(f"flux must be above 0 W/m2, got {self.flux}")
        if not 0.0 < self.greatest_share <= 1.0:
            raise ValueError(f"greatest_share must lie above 0 and up to 1, got {self.greatest_share}")
        if self.source_count < 1:
            raise ValueError(f"source_count must be at least 1, got {self.source_count}")

    def source_area(self, heat: Array, base_area: Array) -> Array:
        """Footprint of all devices.

        Args:
            heat: [W].
            base_area: [m2].

        Returns:
            Area [m2].
        """
        return np.minimum(heat / self.flux, self.greatest_share * base_area)


@dataclass(frozen=True, kw_only=True)
class FanMounting:
    """How fans sit before a sink (judgement values).

    Attributes:
        greatest_count: most fans side by side [-].
        bases: numbers of bases around the duct to choose from; 2 means devices on two opposite faces [-].
        plenum_share: free depth between fan and fins over the fan's face width, so that the hub's shadow
            fills [-].
        wall: sheet around the duct where there is no base [m].
        installation_loss: guard, grilles and the swirl behind the hub, in velocity heads on the fan's face;
            a grille half open has 2..4 (from memory) [-].
        fan_density: mass of a fan over its box, 120 x 38 mm some 0.7, 40 x 28 mm some 1.1 kg/dm3 (from
            memory) [kg/m3].
    """

    greatest_count: int = 6
    bases: tuple[int, ...] = (1, 2)
    plenum_share: float = 0.15
    wall: float = 1.0e-3
    installation_loss: float = 3.0
    fan_density: float = 800.0


ORDINARY_EXTRUSION = Extrusion()
ORDINARY_HEAT_ENTRY = HeatEntry()
ORDINARY_FAN_MOUNTING = FanMounting()
