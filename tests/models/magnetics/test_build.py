"""The derived build: conductors, stacking, fill, masses."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from models.catalog import Catalog
from models.designs import InductorDesigns
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import Build, build
from models.magnetics.inductor import dc_resistance
from models.magnetics.winding import COPPER_DENSITY, copper_resistivity


def choice(catalog: Catalog, conductor: int, **changed: Any) -> InductorDesigns:
    shape = next(i for i, part in enumerate(catalog.core_shapes) if part.stackable and part.coil_count == 1)
    material = next(i for i, part in enumerate(catalog.core_materials) if part.kind == "gapped")
    values = {
        "material": material,
        "shape": shape,
        "stack": 1,
        "turns": 40,
        "conductor": conductor,
        "copper_area_m2": 3e-6,
    }
    return InductorDesigns(**{name: np.array([value]) for name, value in (values | changed).items()})


def made(catalog: Catalog, chosen: InductorDesigns, wall: float = 1.5e-3) -> Build:
    return build(catalog, chosen, wall)


def conductors(catalog: Catalog, kind: str) -> list[int]:
    return [i for i, part in enumerate(catalog.conductors) if part.kind == kind]


def test_resistance_from_length_and_area(catalog: Catalog) -> None:
    for conductor in range(len(catalog.conductors)):
        found = made(catalog, choice(catalog, conductor))
        shape = catalog.core_shapes[int(choice(catalog, conductor).shape[0])]
        factor = catalog.conductors[conductor].resistance_factor
        # the listed turn lies in the middle of a full window; here the layers end where they end
        lower = shape.window_area_m2 / shape.window_breadth_m - 2.0 * found.clearance - found.layers.height
        turn = shape.mean_turn_length_m - np.pi * np.maximum(lower, 0.0)
        expected = copper_resistivity(np.array(100.0)) * 40.0 * turn * factor / found.copper_area
        assert dc_resistance(found, 100.0) == pytest.approx(expected)


def test_litz_is_made_of_whole_strands(catalog: Catalog) -> None:
    for conductor in conductors(catalog, "litz"):
        found = made(catalog, choice(catalog, conductor))
        strand = 0.25 * np.pi * catalog.conductors[conductor].strand_diameter_m ** 2
        assert found.strands == pytest.approx(np.rint(found.strands))
        assert found.copper_area == pytest.approx(found.strands * strand)
        assert found.copper_area == pytest.approx(3e-6, abs=0.51 * strand)


def test_round_wire_splits_into_parallel_wires_no_thicker_than_the_greatest(catalog: Catalog) -> None:
    for conductor in conductors(catalog, "round"):
        for area in (1e-7, 3e-6, 4e-5):
            found = made(catalog, choice(catalog, conductor, copper_area_m2=area))
            assert found.strand_diameter <= catalog.conductors[conductor].strand_diameter_m * (1.0 + 1e-9)
            assert found.strands * 0.25 * np.pi * found.strand_diameter**2 == pytest.approx(area)


def test_foil_fills_the_breadth(catalog: Catalog) -> None:
    for conductor in conductors(catalog, "foil"):
        found = made(catalog, choice(catalog, conductor))
        room = found.breadth - 2.0 * found.clearance
        assert found.strand_diameter * room == pytest.approx(3e-6)


def test_stacking(catalog: Catalog) -> None:
    """Two cores: twice the iron, the same window, longer turns, a larger box but less than two."""
    one, two = (made(catalog, choice(catalog, 0, stack=stack)) for stack in (1, 2))
    assert two.area == pytest.approx(2.0 * one.area)
    assert two.core_volume == pytest.approx(2.0 * one.core_volume)
    assert two.window_fill == pytest.approx(one.window_fill)
    depth = catalog.core_shapes[int(choice(catalog, 0).shape[0])].stack_depth_m
    assert two.turn_length - one.turn_length == pytest.approx(
        2.0 * depth
    )  # once along either side of the leg
    assert one.box_volume < two.box_volume < 2.0 * one.box_volume


def test_masses(catalog: Catalog) -> None:
    found = made(catalog, choice(catalog, 0))
    assert found.copper_mass == pytest.approx(40.0 * found.turn_length * found.copper_area * COPPER_DENSITY)
    assert found.core_mass == pytest.approx(found.core_volume * found.material.density_kg_m3)


def test_fill_is_a_share_of_what_the_window_takes(catalog: Catalog) -> None:
    one = made(catalog, choice(catalog, 0))
    assert made(catalog, choice(catalog, 0, turns=80)).window_fill == pytest.approx(2.0 * one.window_fill)


def test_ac_resistance_never_lies_below_dc(catalog: Catalog) -> None:
    frequency = np.array([[1e3, 20e3, 100e3, 600e3]])
    for conductor in range(len(catalog.conductors)):
        ratio = resistance_ratio(
            made(catalog, choice(catalog, conductor)), frequency, np.array(2.2e-8), np.ones(1)
        )
        assert np.all(ratio >= 1.0 - 1e-9), catalog.conductors[conductor].name
        assert np.all(np.diff(ratio) >= 0.0), catalog.conductors[conductor].name
