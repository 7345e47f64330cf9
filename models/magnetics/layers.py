"""Layers of a winding: turns side by side along the window, layers on top of each other, and their room."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Bools = NDArray[np.bool_]
LITZ_PACKING = (
    0.79  # strands' outer circles over the bundle's circle: copper shares 0.42, 0.48, 0.52, 0.58 of
)
# the litz circle for strands of 0.05, 0.071, 0.1, 0.2 mm times (outer over bare diameter)^2: 0.73 to 0.83
LEAST_HOLE = 0.4  # inner diameter of a ring left free for the winding shuttle, share; judgement
MOST_LAYERS = 30  # that `thickest_round` tries


@dataclass(frozen=True)
class Layers:
    """Layers of one coil (n,).

    Attributes:
        count: layers [-].
        height: of all layers on top of each other [m].
        share: of the room that they take, the greater of height and breadth; above 1 they do not fit [-].
    """

    count: Array
    height: Array
    share: Array


def former_wall(wall: float, window_height: Array) -> Array:
    """Wall of a coil former [m]: of the given thickness, but thinner in windows under three times that.

    Args:
        wall: ordinary thickness [m].
        window_height: bare window across the layers (n,) [m].
    """
    return np.minimum(wall, 0.3 * window_height)


def round_layers(wires: Array, outer_diameter: Array, breadth: Array, height: Array) -> Layers:
    """Layers of round wires (or bundles) on a coil former, each layer as full as whole turns allow.

    Args:
        wires: turns of the coil times parallel wires (n,) [-].
        outer_diameter: over the insulation (n,) [m].
        breadth, height: room inside the former (n,) [m].
    """
    per_layer = np.maximum(np.floor(breadth / outer_diameter * (1.0 + 1e-9)), 1.0)
    count = np.ceil(wires / per_layer - 1e-9)
    across = np.minimum(wires, per_layer) * outer_diameter / breadth
    return Layers(count, count * outer_diameter, np.maximum(count * outer_diameter / height, across))


def ring_layers(wires: Array, outer_diameter: Array, hole: Array) -> Layers:
    """Layers of round wires in the hole of a ring: p layers take pi p (D - p d)/d wires.

    Args:
        wires, outer_diameter: as in `round_layers`.
        hole: diameter D of the hole (n,) [m].
    """
    room = np.maximum(hole**2 - 4.0 / np.pi * wires * outer_diameter**2, 0.0)
    count = np.maximum(np.ceil(0.5 * (hole - np.sqrt(room)) / outer_diameter - 1e-9), 1.0)
    height = count * outer_diameter
    return Layers(count, height, height / (0.5 * (1.0 - LEAST_HOLE) * hole))


def foil_layers(turns: Array, outer_thickness: Array, height: Array) -> Layers:
    """Foil, one turn a layer, as broad as the room: `outer_thickness` with its insulation [m]."""
    count = np.maximum(turns, 1.0)
    return Layers(count, count * outer_thickness, count * outer_thickness / height)


def thickest_round(wires: Array, breadth: Array, height: Array) -> Array:
    """Greatest outer diameter at which so many wires fit a coil former in whole layers (n,) [m].

    Arguments as in `round_layers`.
    """
    count = np.arange(1.0, MOST_LAYERS + 1.0)
    per_layer = np.ceil(wires[:, None] / count)
    return np.minimum(height[:, None] / count, breadth[:, None] / per_layer).max(-1)


def layers_of(cases: tuple[tuple[Bools, Layers], ...]) -> Layers:
    """Layers of a population of several kinds of winding: of each row those of the first case that holds."""
    conditions = [where for where, _ in cases]
    return Layers(
        *(np.select(conditions, [getattr(part, name) for _, part in cases]) for name in vars(cases[0][1]))
    )
