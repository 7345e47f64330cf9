"""From a grid of candidate sinks to the least-volume ones: air, heat entry, and the choice itself."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
from numpy.typing import NDArray

from models.cooling.air import ZERO_CELSIUS_K, Air, air_at, pressure_at_altitude
from models.cooling.extrusion import HeatEntry
from models.cooling.plate_fin import PlateFin, base_resistance

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

LEAST_RESISTANCE = 0.01
GREATEST_RESISTANCE = 5.0
POINTS_A_DECADE = 80
# A judgement: a sink at most this much larger is taken where it is cheaper.
INDIFFERENCE = 0.03


def picked(sinks: PlateFin, rows: NDArray[np.int64], shape: tuple[int, ...]) -> PlateFin:
    """The sinks of some flat indexes, each field a full one-dimensional array.

    Args:
        sinks: candidates whose fields broadcast to shape.
        rows: flat indexes into that shape [-].
        shape: broadcast shape [-].

    Returns:
        The picked sinks.
    """
    place = np.unravel_index(rows, shape)
    return PlateFin(
        **{f.name: np.broadcast_to(getattr(sinks, f.name), shape)[place] for f in fields(PlateFin)}
    )


def film_air(ambient_c: float, altitude_m: float, rise: Array) -> Air:
    """Air at the mean of ambient and surface temperature.

    Args:
        ambient_c: [degC].
        altitude_m: [m].
        rise: of the surface over ambient [K].

    Returns:
        Air.

    Raises:
        ValueError: a rise not above zero, or a temperature or altitude outside the property fits.
    """
    if not np.all(rise > 0.0):
        raise ValueError(f"rise_k must be above 0 K, got {rise}")
    film = np.asarray(ambient_c + ZERO_CELSIUS_K + 0.5 * rise)
    return air_at(film, pressure_at_altitude(np.asarray(altitude_m)))


def with_heat_entry(
    sinks: PlateFin, film: Array, rise_k: float, conductivity: float, heat_entry: HeatEntry
) -> Array:
    """Resistance from the hottest point under the devices to ambient, from that of the fins.

    Args:
        sinks: geometries.
        film: fin roots to ambient [K/W].
        rise_k: base over ambient at full heat, which sets the devices' footprint [K].
        conductivity: of the metal [W/(m K)].
        heat_entry: how devices cover the base.

    Returns:
        Resistance [K/W].
    """
    source = heat_entry.source_area(rise_k / film, sinks.base_area)
    devices = np.asarray(heat_entry.source_count)
    return film + base_resistance(sinks, film, np.asarray(conductivity), source, devices)


def resistance_grid(least: float = LEAST_RESISTANCE) -> Array:
    """Thermal resistances of every curve, 5 K/W down, POINTS_A_DECADE of them.

    Args:
        least: [K/W].

    Returns:
        Falling resistances [K/W].
    """
    points = round(POINTS_A_DECADE * float(np.log10(GREATEST_RESISTANCE / least))) + 1
    return np.geomspace(GREATEST_RESISTANCE, least, points)


def least_in_cells(values: Array, cell: Ints, cells: int) -> tuple[Array, Ints]:
    """Least value per cell and which candidate has it.

    Args:
        values: of the candidates.
        cell: of each candidate; negative is none [-].
        cells: number of cells [-].

    Returns:
        Least values, infinite in empty cells, and candidate indexes, -1 there.
    """
    rows = np.flatnonzero(cell >= 0)
    best = np.full(cells, np.inf)
    np.minimum.at(best, cell[rows], values[rows])
    rows = rows[values[rows] == best[cell[rows]]]
    winner = np.full(cells, -1, dtype=np.int64)
    winner[cell[rows]] = rows
    return best, winner


def least_volume(
    resistance: Array, volume: Array, price: Array, grid: Array, indifference: float = INDIFFERENCE
) -> Ints:
    """Candidate of least volume for each grid value among those of at most that resistance; of near equals
    the cheapest.

    Args:
        resistance: of the candidates, one axis [K/W].
        volume: of the candidates, infinite where refused [m3].
        price: of the candidates [-].
        grid: falling resistances [K/W].
        indifference: share of volume given away for a lower price [-].

    Returns:
        Candidate index per grid value, for the attainable (leading) part of the grid [-].

    Raises:
        ValueError: no candidate reaches the greatest grid value.
    """
    cells = len(grid)
    cell = np.searchsorted(-grid, -resistance, side="right") - 1
    best, _ = least_in_cells(volume, cell, cells)
    # A sink of lower resistance serves as well, so least values are carried from the low end of the grid up.
    limit = (1.0 + indifference) * np.minimum.accumulate(best[::-1])[::-1]
    near = np.where(np.isfinite(volume) & (volume <= limit[cell]), cell, -1)
    _, winner = least_in_cells(price, near, cells)
    chosen_volume = np.where(winner >= 0, volume[winner], np.inf)[::-1]
    least = np.minimum.accumulate(chosen_volume)
    attained = np.isfinite(least)
    if not attained.any():
        raise ValueError(f"no sink reaches {grid[0]:g} K/W")
    source = np.maximum.accumulate(np.where(chosen_volume <= least, np.arange(cells), 0))
    return winner[::-1][source][attained][::-1]
