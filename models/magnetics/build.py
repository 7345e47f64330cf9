"""What a wound core is made of: effective core dimensions, conductor, window fill, size, mass."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.gathered import Gathered
from models.catalog.parts import Catalog
from models.designs import InductorDesigns
from models.magnetics.winding import COPPER_DENSITY, foil_ratio, litz_ratio, wire_ratio

Array = NDArray[np.float64]
FACE_OF_BOX = 1.17  # face of a wound box over volume^(2/3), from the E and cut-core sizes of the catalogue


@dataclass(frozen=True)
class Build:
    """Derived build of a population of inductors, all (n,).

    Attributes:
        area: effective iron area of the stack [m2]; path: effective length [m]; core_volume: effective volume
            [m3].
        breadth: winding breadth of one coil [m].
        coil_turns: turns of one coil [-].
        turn_length: mean length of a turn [m].
        strands, strand_diameter: conductor; foil has one strand and its thickness as diameter [-, m].
        copper_area: cross-section of a turn as built [m2].
        window_fill: copper over the copper that the window can take [-].
        box_volume: wound part boxed [m3].
        core_mass, copper_mass: [kg].
        material, conductor: catalogue columns of the choice.
    """

    area: Array
    path: Array
    core_volume: Array
    breadth: Array
    coil_turns: Array
    turn_length: Array
    strands: Array
    strand_diameter: Array
    copper_area: Array
    window_fill: Array
    box_volume: Array
    core_mass: Array
    copper_mass: Array
    turns: Array
    material: Gathered
    conductor: Gathered


def build(catalog: Catalog, choice: InductorDesigns) -> Build:
    """Derive dimensions and masses of the chosen cores and windings.

    Args:
        catalog: parts.
        choice: indexes, stack, turns and copper area of every candidate (n,).
    """
    material = Gathered(catalog.core_materials, choice.material)
    shape = Gathered(catalog.core_shapes, choice.shape)
    conductor = Gathered(catalog.conductors, choice.conductor)
    stack, turns = choice.stack.astype(float), choice.turns.astype(float)
    kind = conductor.kind
    largest = 0.25 * np.pi * conductor.strand_diameter_m**2
    is_foil, is_litz = kind == "foil", kind == "litz"
    wanted = choice.copper_area_m2 / np.where(is_foil, 1.0, largest)
    strands = np.where(
        is_foil, 1.0, np.maximum(np.where(is_litz, np.rint(wanted), np.ceil(wanted - 1e-9)), 1.0)
    )
    copper_area = np.where(is_litz, strands * largest, choice.copper_area_m2)
    breadth = shape.window_breadth_m
    round_diameter = np.sqrt(4.0 / np.pi * copper_area / strands)
    diameter = np.where(
        is_foil, copper_area / breadth, np.where(is_litz, conductor.strand_diameter_m, round_diameter)
    )
    in_hole = np.char.startswith(shape.family.astype(str), "toroid")
    share = np.where(in_hole, conductor.copper_share_toroid, conductor.copper_share_bobbin)
    turn_length = shape.mean_turn_length_m + 2.0 * (stack - 1.0) * shape.stack_depth_m
    box = shape.box_volume_m3
    growth = FACE_OF_BOX * box ** (2.0 / 3.0) * shape.stack_depth_m
    area = shape.area_m2 * stack * material.area_factor
    core_volume = shape.core_volume_m3 * stack * material.area_factor
    return Build(
        area=area,
        path=shape.path_length_m,
        core_volume=core_volume,
        breadth=breadth,
        coil_turns=turns / shape.coil_count,
        turn_length=turn_length,
        strands=strands,
        strand_diameter=diameter,
        copper_area=copper_area,
        window_fill=turns * copper_area / (np.maximum(share, 1e-3) * shape.window_area_m2),
        box_volume=box + (stack - 1.0) * growth,
        core_mass=core_volume * material.density_kg_m3,
        copper_mass=turns * turn_length * copper_area * COPPER_DENSITY,
        turns=turns,
        material=material,
        conductor=conductor,
    )


def resistance_ratio(built: Build, frequency_hz: Array, resistivity: Array) -> Array:
    """Ac over dc winding resistance at frequencies on the last axis, (n, k) [-].

    Args:
        built: the inductors (n,).
        frequency_hz: (n, k) [Hz].
        resistivity: of copper at working temperature [ohm m].
    """
    turns, breadth = built.coil_turns[:, None], built.breadth[:, None]
    strands, diameter = built.strands[:, None], built.strand_diameter[:, None]
    kind = built.conductor.kind[:, None]
    litz = litz_ratio(frequency_hz, strands, turns, diameter, breadth, resistivity)
    outer = built.conductor.strand_outer_factor[:, None]
    wire = wire_ratio(frequency_hz, strands, turns, diameter, outer, breadth, resistivity)
    sheet = foil_ratio(frequency_hz, turns, diameter, resistivity)
    return np.where(kind == "litz", litz, np.where(kind == "foil", sheet, wire))
