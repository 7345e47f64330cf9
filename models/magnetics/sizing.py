"""First sizing of inductors: from inductance and currents to a core, turns and copper.

A candidate of the search names no core by number but by how much larger than the least core it is; the sizing
here turns that into the smallest boxed core (and stack) of the material with the area product it asks for.
The evaluation then judges the result without knowing how it was chosen. Area-product method: McLyman,
Transformer and Inductor Design Handbook.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.constants import mu_0

from models.catalog.parts import THREE_LIMB, Catalog
from models.designs import InductorDesigns
from models.magnetics.gap import powder_permeability_share
from models.magnetics.layers import LITZ_PACKING, former_wall, thickest_round

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
REFERENCE_CURRENT_DENSITY = 4e6  # A/m2, judgement for still air: it only sets what "size factor 1" means
REFERENCE_COPPER_SHARE = 0.35  # judgement, likewise
STACK_LIMIT = 4  # cores side by side, judgement
TURN_STEPS = 12
SNUG = 0.999  # of the copper that just fits in whole layers: rounded figures of it still fit


@dataclass(frozen=True)
class CoreLadder:
    """Cores of every material by rising area product; rows are materials, padded with the largest.

    Attributes:
        area_product: iron area times window area (m, k) [m4].
        shape, stack: catalogue index and stacked cores (m, k) [-].
    """

    area_product: Array
    shape: Ints
    stack: Ints


def fitting_families(catalog: Catalog, phases: int) -> frozenset[str]:
    """Core families that inductors of so many phases are made of."""
    families = frozenset(shape.family for shape in catalog.core_shapes)
    return families if phases == 3 else families - {THREE_LIMB}


def materials_in(catalog: Catalog, families: frozenset[str]) -> Ints:
    """Catalogue indexes of the core materials sold in any of some families [-]."""
    parts = enumerate(catalog.core_materials)
    return np.array([index for index, part in parts if families & set(part.families)], dtype=np.int64)


def core_ladder(catalog: Catalog, families: frozenset[str], stack_limit: int = STACK_LIMIT) -> CoreLadder:
    """For every material, the cores that no other beats in both area product and boxed volume.

    Args:
        catalog: parts.
        families: of cores to choose from; materials sold in none of them have a ladder without use.
        stack_limit: greatest number of stacked cores [-].
    """
    rows = [
        _ladder_of(catalog, material, families, stack_limit)
        for material in range(len(catalog.core_materials))
    ]
    length = max(len(row[0]) for row in rows)
    padded = [
        [np.concatenate([part, np.repeat(part[-1:], length - len(part))]) for part in row] for row in rows
    ]
    product, shape, stack = (np.stack(parts) for parts in zip(*padded, strict=True))
    return CoreLadder(product, shape, stack)


def _ladder_of(
    catalog: Catalog, material: int, families: frozenset[str], stack_limit: int
) -> tuple[Array, Ints, Ints]:
    part, shapes = catalog.core_materials[material], catalog.core_shapes
    entries = []
    for index, shape in enumerate(shapes):
        if shape.family in part.families and shape.family in families:
            for stack in range(1, (stack_limit if shape.stackable else 1) + 1):
                product = shape.area_m2 * part.area_factor * stack * shape.window_area_m2
                extra = shape.box_volume_m3 ** (2.0 / 3.0) * shape.stack_depth_m * (stack - 1)
                entries.append((product, shape.box_volume_m3 + 1.17 * extra, index, stack))
    if not entries:
        return np.zeros(1), np.zeros(1, dtype=np.int64), np.ones(1, dtype=np.int64)
    entries.sort(key=lambda entry: (-entry[0], entry[1]))
    kept, smallest = [], np.inf
    for entry in entries:
        if entry[1] < smallest:
            kept.append(entry)
            smallest = entry[1]
    kept.reverse()
    products, _, shape_index, stack_count = zip(*kept, strict=True)
    return np.array(products), np.array(shape_index, dtype=np.int64), np.array(stack_count, dtype=np.int64)


def size_inductor(
    catalog: Catalog,
    ladder: CoreLadder,
    material: Ints,
    conductor: Ints,
    inductance: Array,
    peak_current: Array,
    rms_current: Array,
    size_factor: Array,
    flux_use: Array,
    window_use: Array,
    saturation_use: float,
    wall: float,
) -> InductorDesigns:
    """Choose core, stack, turns and copper area.

    Args:
        catalog, ladder: parts.
        material, conductor: catalogue indexes (n,) [-].
        inductance: wanted at peak current (n,) [H].
        peak_current, rms_current: (n,) [A].
        size_factor: area product over the least needed (n,) [-].
        flux_use: share of the allowed flux density to use, gapped cores (n,) [-].
        window_use: share of the copper that the window takes to use (n,) [-].
        saturation_use: greatest flux density over saturation [-].
        wall: thickness of coil formers [m].

    Returns:
        The builds; turns are whole and at least 1, the copper no more than fits in whole layers. Where the
        ladder ends too early the largest core is taken, and the evaluation will say what it lacks.
    """
    materials, shapes = catalog.core_materials, catalog.core_shapes
    powder = materials.column("kind")[material] == "powder"
    allowed_flux = np.where(
        powder, powder_flux(catalog)[material], materials.column("saturation_t")[material] * saturation_use
    )
    needed = (
        inductance
        * peak_current
        * rms_current
        / (allowed_flux * REFERENCE_CURRENT_DENSITY * REFERENCE_COPPER_SHARE)
    )
    rung = np.sum(ladder.area_product[material] < (size_factor * needed)[:, None], axis=-1)
    rung = np.minimum(rung, ladder.area_product.shape[1] - 1)
    shape, stack = ladder.shape[material, rung], ladder.stack[material, rung]
    area = shapes.column("area_m2")[shape] * stack * materials.column("area_factor")[material]
    gapped_turns = np.ceil(inductance * peak_current / (allowed_flux * flux_use * area))
    powder_turns = fewest_powder_turns(
        catalog, material, area, shapes.column("path_length_m")[shape], inductance, peak_current
    )
    turns = np.maximum(np.where(powder, powder_turns, gapped_turns), 1.0)
    copper = copper_that_fits(catalog, shape, conductor, turns, window_use, wall)
    return InductorDesigns(
        material=material,
        shape=shape,
        stack=stack,
        turns=turns.astype(np.int64),
        conductor=conductor,
        copper_area_m2=copper,
    )


def copper_that_fits(
    catalog: Catalog, shape: Ints, conductor: Ints, turns: Array, window_use: Array, wall: float
) -> Array:
    """Copper of a turn: the wanted share of what the window takes, no more than fits in layers (n,) [m2]."""
    shapes, conductors = catalog.core_shapes, catalog.conductors
    in_hole = shapes.column("in_hole")[shape]
    kind, largest = (conductors.column(name)[conductor] for name in ("kind", "strand_diameter_m"))
    outer, on_bobbin, on_ring = (
        conductors.column(name)[conductor]
        for name in ("strand_outer_factor", "copper_share_bobbin", "copper_share_toroid")
    )
    share = np.where(in_hole, on_ring, on_bobbin)
    window, breadth, coils = (
        shapes.column(name)[shape] for name in ("window_area_m2", "window_breadth_m", "coil_count")
    )
    wanted = window_use * np.maximum(share, 1e-3) * window / turns
    height = window / (coils * breadth)
    inset = former_wall(wall, height)
    room = breadth - 2.0 * inset, height - inset
    parallel = np.where(
        kind == "round", np.maximum(np.ceil(wanted / (0.25 * np.pi * largest**2 + 1e-30)), 1.0), 1.0
    )
    wire = thickest_round(parallel * np.ceil(turns / coils), *room) / np.where(kind == "litz", 1.0, outer)
    packing = np.where(kind == "litz", LITZ_PACKING / outer**2, parallel)
    sheet = room[0] * room[1] / (turns / coils * outer)
    # litz is rounded to whole strands, which must not make it thicker
    strand = np.where(kind == "litz", 0.125 * np.pi * largest**2, 0.0)
    fitting = np.where(kind == "foil", sheet, 0.25 * np.pi * wire**2 * packing - strand)
    return np.where(in_hole, wanted, np.minimum(wanted, np.maximum(SNUG * fitting, 1e-3 * wanted)))


def powder_flux(catalog: Catalog) -> Array:
    """Flux density mu_0 mu_i H_50/2 at which half of a powder's permeability is left (m,) [T]."""
    materials = catalog.core_materials
    field = materials.column("rolloff_field_a_per_m")
    return np.where(np.isfinite(field), 0.5 * mu_0 * materials.column("initial_permeability") * field, 1.0)


def fewest_powder_turns(
    catalog: Catalog, material: Ints, area: Array, path: Array, inductance: Array, peak_current: Array
) -> Array:
    """Fewest turns whose inductance at peak current reaches the wanted one, by fixed-point steps [-]."""
    materials = catalog.core_materials
    half_field = materials.column("rolloff_field_a_per_m")[material]
    exponent = materials.column("rolloff_exponent")[material]
    per_turn = mu_0 * materials.column("initial_permeability")[material] * area / path
    turns = first = np.sqrt(inductance / per_turn)
    for _ in range(TURN_STEPS):
        left = powder_permeability_share(turns * peak_current / path, half_field, exponent)
        turns = np.minimum(first / np.sqrt(left), 20.0 * first)
    return np.ceil(turns)
