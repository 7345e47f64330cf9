"""Ac over dc resistance of the windings of a population: litz by its strands, others layer by layer."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.magnetics.build import Build
from models.magnetics.winding import litz_ratio, skin_and_proximity, skin_depth, wire_porosity

Array = NDArray[np.float64]


def resistance_ratio(built: Build, frequency_hz: Array, resistivity: Array) -> Array:
    """Ac over dc winding resistance at frequencies on the last axis, (n, k) [-].

    Args:
        built: the inductors (n,).
        frequency_hz: (n, k) [Hz].
        resistivity: of copper at working temperature [ohm m].
    """
    kind = built.conductor.kind
    ratio = litz_ratio(
        frequency_hz,
        built.strands[:, None],
        built.coil_turns[:, None],
        built.strand_diameter[:, None],
        built.breadth[:, None],
        resistivity,
    )
    solid = np.flatnonzero(kind != "litz")
    ratio[solid] = _layered(built, solid, frequency_hz[solid], resistivity)
    return ratio


def _layered(built: Build, rows: NDArray[np.int64], frequency_hz: Array, resistivity: Array) -> Array:
    """Dowell's ratio of windings of wire and foil, rows of the population."""
    layers, thickness = built.layers.count[rows], built.strand_diameter[rows]
    wires = built.coil_turns[rows] * built.strands[rows]
    side, porosity = wire_porosity(wires, layers, thickness, built.breadth[rows])
    effective = np.where(built.conductor.kind[rows] == "foil", thickness, side * np.sqrt(porosity))
    depth = skin_depth(frequency_hz, resistivity)
    skin, near = skin_and_proximity(effective[:, None] / depth)
    return skin + (2.0 / 3.0 * (layers**2 - 1.0))[:, None] * near
