"""What a wound core is made of: effective core dimensions, conductor, window fill, size, mass."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.gathered import Gathered
from models.catalog.parts import Catalog
from models.designs import InductorDesigns
from models.magnetics.layers import (
    LITZ_PACKING,
    Layers,
    foil_layers,
    former_wall,
    layers_of,
    ring_layers,
    round_layers,
)
from models.magnetics.two_nodes import winding_shares
from models.magnetics.winding import COPPER_DENSITY

Array = NDArray[np.float64]
FACE_OF_BOX = 1.17  # face of a wound box over volume^(2/3), from the E and cut-core sizes of the catalogue


@dataclass(frozen=True)
class Build:
    """Derived build of a population of inductors, all (n,).

    Attributes:
        area: effective iron area of the stack [m2]; path: effective length [m]; core_volume: effective volume
            [m3].
        breadth, height: of the bare window that one coil has, along and across its layers [m].
        clearance: between core and winding, the coil former's wall; 0 on rings [m].
        coil_turns: turns of one coil [-].
        coils: coils in series, each on a leg of its own [-].
        layers: of one coil.
        turn_length: mean length of a turn, with the layers as high as they are [m].
        inner_length: of a turn against the coil former [m].
        winding_surface_share: winding's part of the outer surface [-].
        strip_width: of the tape of wound cores, 0 for others [m].
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
    height: Array
    clearance: Array
    coil_turns: Array
    coils: Array
    layers: Layers
    turn_length: Array
    inner_length: Array
    winding_surface_share: Array
    strip_width: Array
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


def build(catalog: Catalog, choice: InductorDesigns, wall: float) -> Build:
    """Derive dimensions and masses of the chosen cores and windings.

    Args:
        catalog: parts.
        choice: indexes, stack, turns and copper area of every candidate (n,).
        wall: thickness of coil formers [m].
    """
    material = Gathered(catalog.core_materials, choice.material)
    shape = Gathered(catalog.core_shapes, choice.shape)
    conductor = Gathered(catalog.conductors, choice.conductor)
    stack, turns = choice.stack.astype(float), choice.turns.astype(float)
    kind = conductor.kind
    largest = 0.25 * np.pi * conductor.strand_diameter_m**2
    is_foil, is_litz = kind == "foil", kind == "litz"
    in_hole = catalog.core_shapes.column("in_hole")[choice.shape]
    wanted = choice.copper_area_m2 / np.where(is_foil, 1.0, largest)
    strands = np.where(
        is_foil, 1.0, np.maximum(np.where(is_litz, np.rint(wanted), np.ceil(wanted - 1e-9)), 1.0)
    )
    copper_area = np.where(is_litz, strands * largest, choice.copper_area_m2)
    coils = shape.coil_count.astype(float)
    breadth = shape.window_breadth_m
    height = shape.window_area_m2 / (coils * breadth)
    clearance = np.where(in_hole, 0.0, former_wall(wall, height))
    round_diameter = np.sqrt(4.0 / np.pi * copper_area / strands)
    diameter = np.where(
        is_foil,
        copper_area / (breadth - 2.0 * clearance),
        np.where(is_litz, conductor.strand_diameter_m, round_diameter),
    )
    outer = diameter * conductor.strand_outer_factor
    # litz lies in the window as one round bundle a turn
    wires = np.where(is_litz, 1.0, strands) * np.ceil(turns / coils)
    thick = np.where(is_litz, outer * np.sqrt(strands / LITZ_PACKING), outer)
    room = breadth - 2.0 * clearance, height - clearance
    layers = layers_of(
        (
            (is_foil, foil_layers(turns / coils, outer, room[1])),
            (in_hole, ring_layers(wires, thick, breadth / np.pi)),
            (np.ones_like(in_hole), round_layers(wires, thick, *room)),
        )
    )
    share = np.where(in_hole, conductor.copper_share_toroid, conductor.copper_share_bobbin)
    full = shape.mean_turn_length_m + 2.0 * (stack - 1.0) * shape.stack_depth_m
    # the listed turn lies in the middle of a full window
    lower = np.minimum(2.0 * clearance + layers.height - height, 0.0)
    turn_length = full + np.where(in_hole, 0.0, np.pi * lower)
    box = shape.box_volume_m3
    growth = FACE_OF_BOX * box ** (2.0 / 3.0) * shape.stack_depth_m
    area = shape.area_m2 * stack * material.area_factor
    core_volume = shape.core_volume_m3 * stack * material.area_factor
    return Build(
        area=area,
        path=shape.path_length_m,
        core_volume=core_volume,
        breadth=breadth,
        height=height,
        clearance=clearance,
        coil_turns=turns / coils,
        coils=coils,
        layers=layers,
        turn_length=turn_length,
        inner_length=np.maximum(full - np.pi * height, 2.0 * np.sqrt(np.pi * area)),
        winding_surface_share=winding_shares(catalog.core_shapes.column("family"))[choice.shape],
        strip_width=np.where(
            catalog.core_shapes.column("wound_of_tape")[choice.shape], stack * shape.stack_depth_m, 0.0
        ),
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
