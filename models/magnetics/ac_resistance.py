"""Ac over dc resistance of the windings of a population: litz by its strands, others layer by layer."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.magnetics.build import Build
from models.magnetics.fringing_loss import field_share, shield_share
from models.magnetics.winding import litz_ratio, skin_and_proximity, skin_depth, wire_porosity

Array = NDArray[np.float64]
LEAST_CLEARANCE = 1e-4  # m, of windings straight on the core; keeps the field of a gap finite


def resistance_ratio(built: Build, frequency_hz: Array, resistivity: Array, gap_sections: Array) -> Array:
    """Ac over dc winding resistance at frequencies on the last axis, (n, k) [-].

    Args:
        built: the inductors (n,).
        frequency_hz: (n, k) [Hz].
        resistivity: of copper at working temperature [ohm m].
        gap_sections: that the air gap is split into on all legs; 0 for none (n,) [-].
    """
    gapped = gap_sections > 0.0
    pitch = built.breadth * built.coils / np.maximum(gap_sections, 1.0)
    clearance = np.maximum(built.clearance, LEAST_CLEARANCE)
    fringing = np.where(gapped, field_share(clearance, built.layers.height, pitch), 0.0)
    ratio = litz_ratio(
        frequency_hz,
        built.strands[:, None],
        built.coil_turns[:, None],
        built.strand_diameter[:, None],
        built.breadth[:, None],
        resistivity,
    )
    ratio += (ratio - 1.0) * fringing[:, None]
    solid = np.flatnonzero(built.conductor.kind != "litz")
    if solid.size:
        depth = skin_depth(frequency_hz[solid], resistivity)
        shield = np.where(gapped, shield_share(clearance, pitch), 0.0)
        ratio[solid] = _layered(built, solid, depth, fringing[solid], shield[solid])
    return ratio


def _layered(
    built: Build, rows: NDArray[np.int64], skin_depth_m: Array, fringing: Array, shield: Array
) -> Array:
    """Dowell's ratio of windings of wire and foil, rows of the population, with the field of the gap: wires
    lie in it, foil shields itself from it.
    """
    layers, thickness = built.layers.count[rows], built.strand_diameter[rows]
    wires = built.coil_turns[rows] * built.strands[rows]
    foil = built.conductor.kind[rows] == "foil"
    side, porosity = wire_porosity(wires, layers, thickness, built.breadth[rows])
    effective = np.where(foil, thickness, side * np.sqrt(porosity))
    skin, near = skin_and_proximity(effective[:, None] / skin_depth_m)
    field = 2.0 / 3.0 * (layers**2 * (1.0 + np.where(foil, 0.0, fringing)) - 1.0)
    ratio = skin + field[:, None] * near
    packs = np.flatnonzero(foil)
    turns_over_depth = np.maximum((layers * thickness)[packs, None] / skin_depth_m[packs], 1.0)
    ratio[packs] += shield[packs, None] * turns_over_depth
    return ratio
