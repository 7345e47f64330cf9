"""Several equal heatsinks that share the heat: what large inverters do, one beside each group of devices."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np

from models.cooling.plate_fin import PlateFin
from models.cooling.sink_curve import SinkCurve

MOST_SINKS = 4
"""A single-phase full bridge has four switch positions to spread over sinks, others have more."""
COUNTED = ("volume_m3", "mass_kg", "base_area_m2", "fan_power_w", "price", "air_flow_m3_per_s")


def shared_by_several(curve: SinkCurve, most: int = MOST_SINKS) -> SinkCurve:
    """The curve of one sink or as many equal ones as take the least volume.

    n sinks that share the heat evenly have an n-th of one's resistance and n times its volume, metal, fans
    and price. The grid goes on, in the same steps, to an n-th of the least resistance.

    Args:
        curve: of one sink.
        most: greatest number of sinks [-].

    Returns:
        A curve whose columns are those of all sinks together, base thickness and geometry those of one.
    """
    grid = _longer_grid(curve.thermal_resistance_k_per_w, most)
    counts = np.arange(1, most + 1)
    share = np.asarray(grid[:, None] * counts, dtype=np.float64)
    volume = np.where(curve.at(share).available, counts * curve.volume_m3[curve.index(share)], np.inf)
    count = counts[volume.argmin(axis=1)]
    place = curve.index(np.asarray(grid * count, dtype=np.float64))
    columns = {name: count * getattr(curve, name)[place] for name in COUNTED}
    return replace(
        curve,
        thermal_resistance_k_per_w=grid,
        base_thickness_m=curve.base_thickness_m[place],
        fan_count=count * curve.fan_count[place],
        fan_index=curve.fan_index[place],
        geometry=_rows(curve.geometry, place),
        sink_count=count,
        **columns,
    )


def _longer_grid(grid: np.ndarray, most: int) -> np.ndarray:
    step = grid[1] / grid[0]
    further = int(np.floor(np.log(most) / -np.log(step) + 1e-9))
    return np.concatenate([grid, grid[-1] * step ** np.arange(1, further + 1)])


def _rows(geometry: PlateFin | None, place: np.ndarray) -> PlateFin | None:
    if geometry is None:
        return None
    return replace(geometry, **{one.name: getattr(geometry, one.name)[place] for one in fields(geometry)})
