"""Least-volume heatsinks in still air, over thermal resistance: every practicable extrusion of a grid is
evaluated.
"""

from __future__ import annotations

from dataclasses import fields

import numpy as np
from numpy.typing import NDArray

from models.cooling.air import ZERO_CELSIUS_K
from models.cooling.extrusion import ORDINARY_EXTRUSION, ORDINARY_HEAT_ENTRY, Extrusion, HeatEntry
from models.cooling.plate_fin import PlateFin, natural_conductance
from models.cooling.sink_curve import NO_FAN, SinkCurve
from models.cooling.sink_search import film_air, least_volume, picked, resistance_grid, with_heat_entry

Array = NDArray[np.float64]

SIDES, HEIGHTS, GAPS = 21, 12, 14
LEAST_HEIGHT, LEAST_GAP, GREATEST_GAP = 10e-3, 3e-3, 20e-3
THICKNESS_STEPS = (1.0, 1.25, 1.6)
FITTED_RISES_K = np.linspace(10.0, 60.0, 11)


def practicable_sinks(extrusion: Extrusion) -> PlateFin:
    """A grid of extruded sinks in all their dimensions, without those an extruder refuses.

    Args:
        extrusion: limits of the making.

    Returns:
        Geometries: one trailing axis for the base thickness, one leading for all else.
    """
    sides = np.geomspace(extrusion.least_base_side, extrusion.greatest_base_side, SIDES)
    heights = np.geomspace(LEAST_HEIGHT, extrusion.greatest_fin_height, HEIGHTS)
    gaps = np.geomspace(max(LEAST_GAP, extrusion.least_gap), GREATEST_GAP, GAPS)
    axes = np.meshgrid(sides, sides, heights, gaps, np.asarray(THICKNESS_STEPS), indexing="ij")
    length, breadth, height, gap, step = (axis.ravel() for axis in axes)
    thickness = step * extrusion.least_fin_thickness(height)
    count = np.floor((breadth + gap) / (thickness + gap))
    width = count * (thickness + gap) - gap
    ratio = np.maximum(width / length, length / width)
    # each limit with a hair's breadth of rounding
    good = (height <= extrusion.greatest_fin_ratio * gap * (1 + 1e-9)) & (count >= 2.0)
    good &= ratio <= extrusion.greatest_base_ratio * (1 + 1e-9)
    column = [values[good][:, None] for values in (length, height, thickness, gap, count)]
    return PlateFin(
        length=column[0],
        fin_height=column[1],
        fin_thickness=column[2],
        gap=column[3],
        fin_count=column[4],
        base_thickness=np.asarray(extrusion.base_thicknesses),
    )


def rise_law(rises: Array, resistance: Array, reference: float) -> tuple[float, float]:
    """Fit R = R_ref (rise/reference)^-m by least squares in logarithms, through the reference.

    Args:
        rises: of shape (r,) [K].
        resistance: over the one at the reference, of shape (n, r) [-].
        reference: reference rise [K].

    Returns:
        Exponent m, and the greatest relative departure of a point from the law [-].
    """
    x = np.log(rises / reference)
    y = np.log(resistance)
    exponent = -float(np.sum(x * y) / (np.sum(x * x) * len(y)))
    return exponent, float(np.max(np.abs(np.expm1(y + exponent * x))))


def sink_curve_natural(
    *,
    ambient_c: float,
    altitude_m: float,
    rise_k: float = 40.0,
    conductivity: float = 205.0,
    emissivity: float = 0.88,
    price_per_kg: float = 7.0,
    extrusion: Extrusion = ORDINARY_EXTRUSION,
    heat_entry: HeatEntry = ORDINARY_HEAT_ENTRY,
) -> SinkCurve:
    """Least boxed volume over thermal resistance for upright plate-fin sinks in still air.

    Notes:
        The air must be free to enter below and leave above; the box holds the sink alone. Film and
        radiation take the whole rise for the fins' (the base's own drop is a few per cent of it).

    Args:
        ambient_c: air at the sink [degC].
        altitude_m: above sea level [m].
        rise_k: base over ambient, for which resistances are stated [K].
        conductivity: of the metal, extruded 6063 [W/(m K)].
        emissivity: of the surface, anodised; 0.05 when bare [-].
        price_per_kg: cut and drilled profile, a judgement, 4.5..12 [1/kg].
        extrusion: limits of the making.
        heat_entry: how devices cover the base.

    Returns:
        The curve.

    Raises:
        ValueError: a rise not above zero, an emissivity outside 0..1, or air outside the range of the
            property fits.
    """
    if not 0.0 < emissivity <= 1.0:
        raise ValueError(f"emissivity must lie above 0 and up to 1, got {emissivity}")

    def resistance_of(sinks: PlateFin, rise: Array) -> Array:
        air = film_air(ambient_c, altitude_m, rise)
        ambient_k, metal = np.asarray(ambient_c + ZERO_CELSIUS_K), np.asarray(conductivity)
        film = 1.0 / natural_conductance(sinks, rise, ambient_k, air, metal, np.asarray(emissivity))
        return with_heat_entry(sinks, film, rise_k, conductivity, heat_entry)

    sinks = practicable_sinks(extrusion)
    resistance, volume = resistance_of(sinks, np.asarray(rise_k)), sinks.boxed_volume
    grid = resistance_grid()
    price = sinks.metal_volume * (extrusion.density * price_per_kg)
    rows = least_volume(resistance.ravel(), volume.ravel(), price.ravel(), grid)
    best = picked(sinks, rows, volume.shape)
    columns = PlateFin(**{f.name: getattr(best, f.name)[:, None] for f in fields(PlateFin)})
    at_rises = resistance_of(columns, FITTED_RISES_K) / resistance.ravel()[rows, None]
    exponent, deviation = rise_law(FITTED_RISES_K, at_rises, rise_k)
    mass = extrusion.density * best.metal_volume
    return SinkCurve(
        thermal_resistance_k_per_w=grid[: len(rows)],
        volume_m3=best.boxed_volume,
        mass_kg=mass,
        base_area_m2=best.base_area,
        base_thickness_m=best.base_thickness,
        fan_power_w=np.zeros(len(rows)),
        price=mass * price_per_kg,
        air_flow_m3_per_s=np.zeros(len(rows)),
        geometry=best,
        fan_count=np.zeros(len(rows), dtype=np.int64),
        fan_index=np.full(len(rows), NO_FAN, dtype=np.int64),
        sink_count=np.ones(len(rows), dtype=np.int64),
        reference_rise_k=rise_k,
        rise_exponent=exponent,
        rise_deviation=deviation,
    )
