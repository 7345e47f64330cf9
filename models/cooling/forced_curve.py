"""Least-volume fan-cooled heatsinks over thermal resistance: fans side by side before a shrouded fin block
of their width.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from models.cooling.air import Air
from models.cooling.extrusion import (
    ORDINARY_EXTRUSION,
    ORDINARY_FAN_MOUNTING,
    ORDINARY_HEAT_ENTRY,
    Extrusion,
    FanMounting,
    HeatEntry,
)
from models.cooling.fan import RATED_DENSITY, Fan, fan_input_power, working_flow
from models.cooling.plate_fin import PlateFin, forced_conductance, pressure_drop
from models.cooling.sink_curve import SinkCurve
from models.cooling.sink_search import film_air, least_volume, picked, resistance_grid, with_heat_entry

Array = NDArray[np.float64]

LENGTHS, LEAST_LENGTH = 36, 20e-3
GAP_STEPS = (1.0, 1.15, 1.35, 1.6, 2.0, 2.5, 3.2)
THICKNESS_STEPS = (1.0, 1.3, 1.7, 2.2)


@dataclass(frozen=True)
class FanBlocks:
    """Fin blocks behind one fan each, at their working points; arrays of shape (n,).

    Attributes:
        sink: geometry of the block behind one fan.
        fan: index of the fan [-].
        flow: working flow of the fan [m3/s].
        conductance: block to inlet air [W/K].
    """

    sink: PlateFin
    fan: NDArray[np.int64]
    flow: Array
    conductance: Array


def fan_values(fans: Sequence[Fan], name: str) -> Array:
    """One attribute of all fans.

    Args:
        fans: the fans.
        name: attribute.

    Returns:
        Values, in the attribute's unit.
    """
    return np.array([getattr(fan, name) for fan in fans], dtype=np.float64)


def practicable_blocks(
    fans: Sequence[Fan], extrusion: Extrusion, mounting: FanMounting
) -> tuple[PlateFin, NDArray[np.int64]]:
    """Fin blocks as wide and as high as one fan's face, one-sided or of two halves, without those an
    extruder refuses.

    Notes:
        A block has as many gaps as fins plus one outer fin, so that blocks side by side share their outer
        fins.

    Args:
        fans: the fans.
        extrusion: limits of the making.
        mounting: how fans sit before the sink.

    Returns:
        Geometries (base thickness still the least), and the fan of each.
    """
    lengths = np.geomspace(LEAST_LENGTH, extrusion.greatest_base_side, LENGTHS)
    bases, gaps, thicknesses = (np.asarray(v, float) for v in (mounting.bases, GAP_STEPS, THICKNESS_STEPS))
    axes = np.meshgrid(np.arange(len(fans)), bases, gaps, thicknesses, lengths, indexing="ij")
    which, halves, gap_step, thickness_step, length = (axis.ravel() for axis in axes)
    face = fan_values(fans, "face_width_m")[which]
    height = face / halves
    thickness = thickness_step * extrusion.least_fin_thickness(height)
    gap = gap_step * np.maximum(extrusion.least_gap, height / extrusion.greatest_fin_ratio)
    channels = np.floor(face / (thickness + gap))
    good = (channels >= 1.0) & (height <= extrusion.greatest_fin_height)
    gap = face / np.maximum(channels, 1.0) - thickness
    sink = PlateFin(
        length=length[good],
        fin_height=height[good],
        fin_thickness=thickness[good],
        gap=gap[good],
        fin_count=channels[good] + 1.0,
        base_thickness=np.full(int(good.sum()), min(extrusion.base_thicknesses)),
        halves=halves[good],
    )
    return sink, which[good]


def blocks_at_work(
    fans: Sequence[Fan], extrusion: Extrusion, mounting: FanMounting, air: Air, conductivity: float
) -> FanBlocks:
    """Evaluate every practicable block at the flow where its fan's curve meets its pressure drop.

    Args:
        fans: the fans.
        extrusion: limits of the making.
        mounting: how fans sit before the sink.
        air: at film temperature.
        conductivity: of the metal [W/(m K)].

    Returns:
        The blocks.
    """
    sink, which = practicable_blocks(fans, extrusion, mounting)
    free = fan_values(fans, "free_flow_m3_per_s")[which]
    pressure = fan_values(fans, "greatest_pressure_pa")[which]
    face = fan_values(fans, "face_width_m")[which]
    on_face = 0.5 * air.density * mounting.installation_loss / np.square(face * face)

    def system_drop(flow: Array) -> Array:
        return pressure_drop(sink, flow, air) + on_face * flow * flow

    flow = working_flow(free, pressure, air.density / RATED_DENSITY, system_drop)
    return FanBlocks(sink, which, flow, forced_conductance(sink, flow, air, np.asarray(conductivity)))


def side_by_side(blocks: FanBlocks, counts: Array, extrusion: Extrusion) -> PlateFin:
    """Sinks of several blocks in a row, for every base thickness: axes (block, count, base thickness).

    Args:
        blocks: blocks behind one fan each.
        counts: numbers of fans [-].
        extrusion: limits of the making.

    Returns:
        Geometries.
    """
    block = {f.name: getattr(blocks.sink, f.name)[:, None, None] for f in fields(PlateFin)}
    block["fin_count"] = counts[:, None] * (block["fin_count"] - 1.0) + 1.0
    block["base_thickness"] = np.asarray(extrusion.base_thicknesses)
    return PlateFin(**block)


def assembly_volume(sink: PlateFin, before_fins: Array, wall: float) -> Array:
    """Boxed volume of sink, shroud, plenum and fans.

    Args:
        sink: geometry.
        before_fins: depth of fan and plenum [m].
        wall: sheet on the sides, and on top of a sink with one base [m].

    Returns:
        Volume [m3].
    """
    return (
        (sink.width + 2.0 * wall) * (sink.height + (2.0 - sink.halves) * wall) * (sink.length + before_fins)
    )


def sink_curve_forced(
    *,
    ambient_c: float,
    altitude_m: float,
    fans: Sequence[Fan],
    rise_k: float = 30.0,
    conductivity: float = 205.0,
    price_per_kg: float = 7.0,
    extrusion: Extrusion = ORDINARY_EXTRUSION,
    heat_entry: HeatEntry = ORDINARY_HEAT_ENTRY,
    mounting: FanMounting = ORDINARY_FAN_MOUNTING,
) -> SinkCurve:
    """Least boxed volume over thermal resistance for fan-cooled plate-fin sinks, fans and plenum included.

    Notes:
        One row of equal fans blows into a shroud as wide and as high as their faces. All fans run at rated
        speed, whatever the load. Above the resistance of the smallest sink the curve is flat. Least volume
        favours small strong fans, whatever they draw: give one fan at a time to compare them.

    Args:
        ambient_c: inlet air [degC].
        altitude_m: above sea level [m].
        fans: those to choose from.
        rise_k: base over ambient, for the film temperature [K].
        conductivity: of the metal, extruded 6063 [W/(m K)].
        price_per_kg: cut and drilled profile, a judgement, 4.5..12 [1/kg].
        extrusion: limits of the making.
        heat_entry: how devices cover the base.
        mounting: how fans sit before the sink.

    Returns:
        The curve.

    Raises:
        ValueError: no fan given, none with a practicable fin block, a rise not above zero, or air outside
            the property fits.
    """
    if len(fans) == 0:
        raise ValueError("sink_curve_forced needs at least one fan, got none")
    air = film_air(ambient_c, altitude_m, np.asarray(rise_k))
    blocks = blocks_at_work(fans, extrusion, mounting, air, conductivity)
    if len(blocks.flow) == 0:
        raise ValueError(f"no practicable fin block for fans {[fan.name for fan in fans]}")
    counts = np.arange(1.0, mounting.greatest_count + 1.0)
    sinks = side_by_side(blocks, counts, extrusion)
    film = 1.0 / (blocks.conductance[:, None, None] * counts[:, None])
    resistance = with_heat_entry(sinks, film, rise_k, conductivity, heat_entry)
    face, depth = fan_values(fans, "face_width_m")[blocks.fan], fan_values(fans, "depth_m")[blocks.fan]
    volume = assembly_volume(sinks, (depth + mounting.plenum_share * face)[:, None, None], mounting.wall)
    fits = sinks.width <= extrusion.greatest_base_side + sinks.fin_thickness
    metal = extrusion.density * sinks.metal_volume
    price = metal * price_per_kg + counts[:, None] * fan_values(fans, "price")[blocks.fan, None, None]
    grid = resistance_grid()
    allowed = np.where(fits, volume, np.inf)
    rows = least_volume(resistance.ravel(), allowed.ravel(), price.ravel(), grid)

    block, count, _ = np.unravel_index(rows, volume.shape)
    which, fan_count = blocks.fan[block], counts[count]
    best = picked(sinks, rows, volume.shape)
    fan_mass = mounting.fan_density * (face * face * depth)[block]
    input_power = fan_values(fans, "input_power_w")[which]
    return SinkCurve(
        thermal_resistance_k_per_w=grid[: len(rows)],
        volume_m3=volume.ravel()[rows],
        mass_kg=metal.ravel()[rows] + fan_count * fan_mass,
        base_area_m2=best.base_area,
        base_thickness_m=best.base_thickness,
        fan_power_w=fan_count * fan_input_power(input_power, air.density / RATED_DENSITY),
        price=price.ravel()[rows],
        air_flow_m3_per_s=fan_count * blocks.flow[block],
        geometry=best,
        fan_count=fan_count.astype(np.int64),
        fan_index=which.astype(np.int64),
        sink_count=np.ones(len(rows), dtype=np.int64),
        reference_rise_k=rise_k,
        rise_exponent=0.0,
        rise_deviation=0.0,
    )
