"""First sizing: the core ladder, and builds that meet what was asked of them."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from models.catalog import Catalog
from models.magnetics.build import build
from models.magnetics.gap import gap_for_inductance, powder_inductance
from models.magnetics.sizing import (
    STACK_LIMIT,
    CoreLadder,
    core_ladder,
    fitting_families,
    materials_in,
    size_inductor,
)


@pytest.fixture(scope="module")
def ladder(catalog: Catalog) -> CoreLadder:
    return core_ladder(catalog, fitting_families(catalog, 1))


def sized(catalog: Catalog, ladder: CoreLadder, material: int, **changed: Any) -> Any:
    asked = {
        "inductance": 4e-4,
        "peak_current": 30.0,
        "rms_current": 20.0,
        "size_factor": 1.5,
        "flux_use": 0.8,
        "window_use": 0.7,
    } | changed
    values = {name: np.array([value]) for name, value in asked.items()}
    return size_inductor(
        catalog, ladder, np.array([material]), np.array([0]), **values, saturation_use=0.85, wall=1.5e-3
    )


def kind(catalog: Catalog, name: str) -> list[int]:
    return [i for i, part in enumerate(catalog.core_materials) if part.kind == name]


def test_ladder_rises_and_stays_within_the_materials_families(catalog: Catalog, ladder: CoreLadder) -> None:
    for place, material in enumerate(catalog.core_materials):
        assert np.all(np.diff(ladder.area_product[place]) >= 0.0)
        for shape, stack in zip(ladder.shape[place], ladder.stack[place], strict=True):
            part = catalog.core_shapes[shape]
            assert part.family in material.families
            assert 1 <= stack <= (STACK_LIMIT if part.stackable else 1)
            product = part.area_m2 * material.area_factor * stack * part.window_area_m2
            assert product in ladder.area_product[place]


def test_no_rung_is_both_larger_and_weaker_than_another(catalog: Catalog, ladder: CoreLadder) -> None:
    """Boxed volume rises with the area product along every ladder."""
    for place in range(len(catalog.core_materials)):
        rungs = [
            (int(shape), int(stack))
            for shape, stack in zip(ladder.shape[place], ladder.stack[place], strict=True)
        ]
        unique = list(dict.fromkeys(rungs))
        volumes = []
        for shape, stack in unique:
            part = catalog.core_shapes[shape]
            volumes.append(
                part.box_volume_m3
                * (1.0 + (stack - 1) * 1.17 * part.stack_depth_m / part.box_volume_m3 ** (1 / 3))
            )
        assert np.all(np.diff(volumes) > 0.0), catalog.core_materials[place].name


def test_gapped_core_uses_no_more_than_the_flux_asked_for(catalog: Catalog, ladder: CoreLadder) -> None:
    for material in kind(catalog, "gapped"):
        for use in (0.3, 0.8, 1.0):
            chosen = sized(catalog, ladder, material, flux_use=use)
            found = build(catalog, chosen, 1.5e-3)
            flux = 4e-4 * 30.0 / (found.turns * found.area)
            assert flux <= use * 0.85 * catalog.core_materials[material].saturation_t * (1.0 + 1e-9)
            one_less = 4e-4 * 30.0 / ((found.turns - 1.0) * found.area)
            assert one_less > use * 0.85 * catalog.core_materials[material].saturation_t * (1.0 - 1e-9)


def test_gapped_core_can_have_its_gap(catalog: Catalog, ladder: CoreLadder) -> None:
    for material in kind(catalog, "gapped"):
        found = build(catalog, sized(catalog, ladder, material), 1.5e-3)
        gap, _ = gap_for_inductance(
            found.turns,
            np.array([4e-4]),
            found.area,
            found.path,
            found.material.initial_permeability,
            found.breadth * found.coils,
            found.coils,
            2e-3,
        )
        assert gap > 0.0


def test_powder_core_reaches_the_inductance_at_peak_current_where_the_core_is_large_enough(
    catalog: Catalog, ladder: CoreLadder
) -> None:
    reached = []
    for material in kind(catalog, "powder"):
        part = catalog.core_materials[material]
        found = build(catalog, sized(catalog, ladder, material, size_factor=6.0, inductance=1e-4), 1.5e-3)
        core = (part.initial_permeability, part.rolloff_field_a_per_m, part.rolloff_exponent)
        at_peak = powder_inductance(
            found.turns, np.array([30.0]), found.area, found.path, *(np.array([value]) for value in core)
        )
        reached.append(float(at_peak[0]) >= 1e-4 * 0.999)
    assert np.mean(reached) > 0.8


def test_copper_fills_the_share_of_the_window(catalog: Catalog, ladder: CoreLadder) -> None:
    foil_free = [i for i, part in enumerate(catalog.conductors) if part.kind == "round"]
    chosen = sized(catalog, ladder, kind(catalog, "gapped")[0], window_use=0.6)
    assert foil_free
    assert build(catalog, chosen, 1.5e-3).window_fill == pytest.approx(0.6, rel=0.1)


def test_larger_factor_never_gives_a_smaller_core(catalog: Catalog, ladder: CoreLadder) -> None:
    for material in range(len(catalog.core_materials)):
        boxes = [
            build(catalog, sized(catalog, ladder, material, size_factor=factor), 1.5e-3).box_volume[0]
            for factor in (0.5, 1.0, 2.0, 4.0, 8.0)
        ]
        assert np.all(np.diff(boxes) >= 0.0)


def test_only_families_asked_for_are_on_the_ladder(catalog: Catalog) -> None:
    toroids = frozenset({"toroid powder"})
    ladder = core_ladder(catalog, toroids)
    usable = materials_in(catalog, toroids)
    assert {catalog.core_materials[index].kind for index in usable} == {"powder"}
    assert {catalog.core_shapes[shape].family for shape in ladder.shape[usable].ravel()} == toroids
    ferrite = catalog.core_materials.index("MnZn ferrite 25-200 kHz")
    assert ferrite not in usable
    assert ladder.area_product[ferrite].max() == 0.0  # nothing on it carries anything


def test_three_limbs_are_for_three_phases(catalog: Catalog) -> None:
    assert "three-limb" in fitting_families(catalog, 3)
    assert fitting_families(catalog, 1) == fitting_families(catalog, 3) - {"three-limb"}
