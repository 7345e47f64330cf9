"""Layers of a winding: whole turns, whole layers, and whether they can be wound."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import Catalog
from models.magnetics.build import build
from models.magnetics.layers import (
    LEAST_HOLE,
    LITZ_PACKING,
    MOST_LAYERS,
    foil_layers,
    former_wall,
    ring_layers,
    round_layers,
    thickest_round,
)
from models.magnetics.sizing import core_ladder, fitting_families, size_inductor

COUNT = 400
WALL = 1.5e-3


def test_a_winding_counted_by_hand() -> None:
    """45 turns of 1.1 mm in a room of 27 mm by 7 mm: 24 a layer, 2 layers, 2.2 mm high."""
    found = round_layers(np.array([45.0]), np.array([1.1e-3]), np.array([27e-3]), np.array([7e-3]))
    assert found.count.tolist() == [2.0]
    assert found.height == pytest.approx(2.2e-3)
    assert found.share == pytest.approx(24 * 1.1 / 27)  # the full layer takes most of the breadth


def test_a_ring_counted_by_hand() -> None:
    """2 mm wires in a hole of 20 mm: circles of 18 and 14 mm take 28.3 and 22.0 of them, so 40 need two."""
    found = ring_layers(np.array([28.0, 40.0]), np.array([2e-3] * 2), np.array([20e-3] * 2))
    assert found.count.tolist() == [1.0, 2.0]
    assert found.share == pytest.approx(np.array([2.0, 4.0]) / (10.0 * (1.0 - LEAST_HOLE)))


def test_foil_has_one_turn_a_layer() -> None:
    found = foil_layers(np.array([12.0]), np.array([0.25e-3]), np.array([6e-3]))
    assert found.count == 12.0
    assert found.share == pytest.approx(0.5)


@given(st.integers(1, 300), st.floats(5e-3, 0.1), st.floats(1e-3, 0.03))
def test_thickest_wire_fits_and_a_thicker_one_does_not(wires: int, breadth: float, height: float) -> None:
    room = np.array([breadth]), np.array([height])
    number = np.array([float(wires)])
    widest = thickest_round(number, *room)
    assert round_layers(number, widest * (1.0 - 1e-12), *room).share <= 1.0 + 1e-9
    thicker = round_layers(number, 1.01 * widest, *room)
    assert thicker.share > 1.0 or thicker.count > MOST_LAYERS


@given(st.integers(1, 200), st.floats(2e-4, 3e-3), st.floats(5e-3, 0.1), st.floats(1e-3, 0.03))
def test_layers_hold_all_wires_and_are_no_more_than_needed(
    wires: int, diameter: float, breadth: float, height: float
) -> None:
    found = round_layers(*(np.array([value]) for value in (float(wires), diameter, breadth, height)))
    per_layer = max(math.floor(breadth / diameter * (1 + 1e-9)), 1)
    assert (found.count - 1) * per_layer < wires <= found.count * per_layer


def test_walls_of_small_formers_are_thinner() -> None:
    assert former_wall(WALL, np.array([3e-3, 10e-3])) == pytest.approx([0.9e-3, 1.5e-3])


def test_former_leaves_the_bobbin_windows_of_data_sheets() -> None:
    """Bobbin windows of E sets (shared core table, data books, from memory): within 20 %."""
    bare = {"E20": (57.4, 14.76, 34.0), "E42": (256.0, 30.29, 178.0), "E55": (375.6, 38.19, 250.0)}
    for area, breadth, bobbin in bare.values():
        height = area / breadth
        wall = 1e3 * float(former_wall(WALL, np.array(1e-3 * height)))
        assert (breadth - 2.0 * wall) * (height - wall) == pytest.approx(bobbin, rel=0.2)


def test_sized_inductors_can_be_wound(catalog: Catalog) -> None:
    """Layers of nearly all builds fit, whatever is asked for, and litz bundles take no more than the room."""
    rng = np.random.default_rng(5)
    chosen = size_inductor(
        catalog,
        core_ladder(catalog, fitting_families(catalog, 1)),
        rng.integers(0, len(catalog.core_materials), COUNT),
        rng.integers(0, len(catalog.conductors), COUNT),
        np.full(COUNT, 3e-4),
        np.full(COUNT, 32.0),
        np.full(COUNT, 21.0),
        rng.uniform(0.8, 6.0, COUNT),
        rng.uniform(0.3, 1.0, COUNT),
        np.full(COUNT, 1.0),
        0.85,
        WALL,
    )
    found = build(catalog, chosen, WALL)
    assert np.mean(found.layers.share <= 1.0 + 1e-9) > 0.95
    litz = (found.conductor.kind == "litz") & (found.clearance > 0.0)
    bundle = found.strands * (found.strand_diameter * found.conductor.strand_outer_factor) ** 2 / LITZ_PACKING
    square = np.ceil(found.coil_turns) * bundle
    room = (found.breadth - 2.0 * found.clearance) * (found.height - found.clearance)
    fits = found.layers.share <= 1.0 + 1e-9
    assert np.all((square <= room * (1.0 + 1e-9))[litz & fits])
