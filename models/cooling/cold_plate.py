"""Cold plates: thermal resistance by area, box, metal, and the power of pump and heat exchanger.

A cold plate is given by its specific resistance (surface to coolant at the flow the maker states): tubed
200..700, brazed inner fin 45..150 K mm2/W. The warming of the coolant along the plate belongs to the
coolant temperature of the study.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.cooling.sink_curve import NO_FAN, SinkCurve
from models.cooling.sink_search import resistance_grid

Array = NDArray[np.float64]

# Judgements: tubed plate, from cold-plate catalogues; the price has no published source.
TUBED_SPECIFIC_RESISTANCE = 350e-6
ORDINARY_THICKNESS = 15e-3
METAL_SHARE = 0.85
ALUMINIUM_DENSITY = 2700.0
PRICE_PER_KG = 30.0
LEAST_AREA = 1.6e-3
LEAST_RESISTANCE = 0.001  # plates side by side on one manifold [K/W]
AUXILIARY_SHARE = 0.03


@dataclass(frozen=True, kw_only=True)
class ColdPlate:
    """Cold plates of one kind; arrays broadcast.

    Attributes:
        thermal_resistance_k_per_w: surface to coolant [K/W].
        volume_m3: boxed, fittings left out [m3].
        mass_kg: dry [kg].
        price: in the study's currency [-].
    """

    thermal_resistance_k_per_w: Array
    volume_m3: Array
    mass_kg: Array
    price: Array


def cold_plate(
    specific_resistance: Array,
    area: Array,
    *,
    thickness: float = ORDINARY_THICKNESS,
    price_per_kg: float = PRICE_PER_KG,
) -> ColdPlate:
    """Resistance, box and metal of a cold plate: R = r''/A.

    Args:
        specific_resistance: surface to coolant times area [K m2/W].
        area: mounting area [m2].
        thickness: [m].
        price_per_kg: judgement, no source [1/kg].

    Returns:
        The plates.

    Raises:
        ValueError: specific resistance or area not above zero.
    """
    if np.any(~(np.asarray(specific_resistance) > 0.0)) or np.any(~(np.asarray(area) > 0.0)):
        raise ValueError(
            f"specific_resistance and area must be above 0, got {specific_resistance} and {area}"
        )
    volume = area * thickness
    mass = volume * (METAL_SHARE * ALUMINIUM_DENSITY)
    return ColdPlate(
        thermal_resistance_k_per_w=specific_resistance / area,
        volume_m3=volume,
        mass_kg=mass,
        price=mass * price_per_kg,
    )


def auxiliary_power(heat: Array, share: float = AUXILIARY_SHARE) -> Array:
    """Power of pump and air-side exchanger, a share of the heat moved (estimate: 1..6 % for large skids).

    Args:
        heat: into the coolant [W].
        share: of the heat [-].

    Returns:
        Electrical power [W].
    """
    return share * heat


def sink_curve_cold_plate(
    *,
    specific_resistance: float = TUBED_SPECIFIC_RESISTANCE,
    thickness: float = ORDINARY_THICKNESS,
    price_per_kg: float = PRICE_PER_KG,
    least_area: float = LEAST_AREA,
) -> SinkCurve:
    """Cold plates over thermal resistance, in the form of the heatsink curves; temperatures count from the
    coolant.

    Args:
        specific_resistance: surface to coolant times area [K m2/W].
        thickness: [m].
        price_per_kg: judgement, no source [1/kg].
        least_area: smallest plate made [m2].

    Returns:
        The curve; pump power is not in it, see auxiliary_power.

    Raises:
        ValueError: specific resistance not above zero.
    """
    grid = resistance_grid(LEAST_RESISTANCE)
    area = np.maximum(specific_resistance / grid, least_area)
    plates = cold_plate(np.asarray(specific_resistance), area, thickness=thickness, price_per_kg=price_per_kg)
    zeros = np.zeros(len(grid))
    return SinkCurve(
        thermal_resistance_k_per_w=grid,
        volume_m3=plates.volume_m3,
        mass_kg=plates.mass_kg,
        base_area_m2=area,
        base_thickness_m=np.full(len(grid), thickness),
        fan_power_w=zeros,
        price=plates.price,
        air_flow_m3_per_s=zeros,
        geometry=None,
        fan_count=np.zeros(len(grid), dtype=np.int64),
        fan_index=np.full(len(grid), NO_FAN, dtype=np.int64),
        sink_count=np.ones(len(grid), dtype=np.int64),
        reference_rise_k=1.0,
        rise_exponent=0.0,
        rise_deviation=0.0,
    )
