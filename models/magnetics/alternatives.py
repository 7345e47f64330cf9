"""Every inductor that the catalogue offers for a duty, up to a size: the search's choice in full."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.designs import InductorDesigns
from models.magnetics.sizing import STACK_LIMIT, copper_that_fits, fewest_powder_turns

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
MORE_TURNS = np.geomspace(1.0, 2.5, 10)
"""Turns over the fewest of a gapped core: beyond, the copper of any window loses more than it saves."""
MORE_POWDER_TURNS = np.array([1.0, 1.03, 1.07, 1.12])
"""Likewise of a powder core, whose inductance grows with every turn."""
WINDOW_USES = np.array([0.4, 0.55, 0.7, 0.85, 1.0])


@dataclass(frozen=True)
class Offer:
    """What to choose from: catalogue indexes of materials and conductors, core families, judgement values.

    Attributes:
        catalog: parts.
        families: of cores.
        materials, conductors: catalogue indexes [-].
        saturation_use: greatest flux density over saturation [-].
        former_wall: of coil formers [m].
    """

    catalog: Catalog
    families: frozenset[str]
    materials: Ints
    conductors: Ints
    saturation_use: float
    former_wall: float


def alternatives(offer: Offer, inductance: float, peak_current: float, largest_box: float) -> InductorDesigns:
    """All combinations of core, stack, turns, conductor and copper for one duty (n,).

    Args:
        offer: what to choose from.
        inductance: at peak current [H].
        peak_current: [A].
        largest_box: boxed volume up to which cores are taken [m3].

    Returns:
        Builds; whether one keeps flux, gap, room and temperature is for the evaluation to say.
    """
    material, shape, stack = _cores(offer, largest_box)
    catalog = offer.catalog
    materials, shapes = catalog.core_materials, catalog.core_shapes
    area = shapes.column("area_m2")[shape] * stack * materials.column("area_factor")[material]
    current, wanted = np.full(len(material), peak_current), np.full(len(material), inductance)
    flux = materials.column("saturation_t")[material] * offer.saturation_use
    powder = materials.column("kind")[material] == "powder"
    fewest = np.where(
        powder,
        fewest_powder_turns(catalog, material, area, shapes.column("path_length_m")[shape], wanted, current),
        np.ceil(wanted * current / (flux * area)),
    )
    rows, turns = _turns(fewest, powder)
    material, shape, stack = material[rows], shape[rows], stack[rows]
    uses = np.tile(np.repeat(WINDOW_USES, len(offer.conductors)), len(rows))
    conductor = np.tile(offer.conductors, len(rows) * len(WINDOW_USES))
    each = np.repeat(np.arange(len(rows)), len(WINDOW_USES) * len(offer.conductors))
    copper = copper_that_fits(catalog, shape[each], conductor, turns[each], uses, offer.former_wall)
    return InductorDesigns(
        material=material[each],
        shape=shape[each],
        stack=stack[each],
        turns=turns[each].astype(np.int64),
        conductor=conductor,
        copper_area_m2=copper,
    )


def _cores(offer: Offer, largest_box: float) -> tuple[Ints, Ints, Ints]:
    """Material, shape and stack of every core not above a size."""
    rows = []
    for material in offer.materials:
        sold = offer.families & set(offer.catalog.core_materials[int(material)].families)
        for index, shape in enumerate(offer.catalog.core_shapes):
            for stack in range(1, (STACK_LIMIT if shape.stackable else 1) + 1):
                box = (
                    shape.box_volume_m3
                    + (stack - 1) * shape.box_volume_m3 ** (2.0 / 3.0) * shape.stack_depth_m
                )
                if shape.family in sold and box <= largest_box:
                    rows.append((int(material), index, stack))
    table = np.array(rows, dtype=np.int64).reshape(-1, 3)
    return table[:, 0], table[:, 1], table[:, 2]


def _turns(fewest: Array, powder: NDArray[np.bool_]) -> tuple[Ints, Array]:
    """Rows of cores and whole turns to try on them."""
    more = np.where(powder[:, None], np.resize(MORE_POWDER_TURNS, len(MORE_TURNS)), MORE_TURNS)
    tried = np.maximum(np.ceil(fewest[:, None] * more - 1e-9), 1.0)
    tried.sort(axis=1)
    new = np.concatenate([np.ones((len(tried), 1), bool), np.diff(tried, axis=1) > 0.0], axis=1)
    rows, columns = np.nonzero(new & (tried < 2000.0))
    return rows, tried[rows, columns]
