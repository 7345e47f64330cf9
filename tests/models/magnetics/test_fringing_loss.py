"""Fringing field beside an air gap: closed form against the field itself, limits, and what it costs."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import Catalog
from models.designs import InductorDesigns
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import build
from models.magnetics.fringing_loss import field_share, shield_share, tape_gap_loss

RHO = np.array(2.2e-8)


def share_by_the_field(clearance: float, height: float, pitch: float) -> float:
    """Mean square of the fringing field over a third of the even field's, point by point.

    Narrow gaps in the pitch P along a wall of iron: the complex field is (F/P) coth(pi z/P), whose mean
    across the pitch is the even field F/P far away (Schwarz-Christoffel, or the sum of the circular
    fields of all gaps). No series of components is used.
    """
    x = clearance + height * (np.arange(1500) + 0.5) / 1500
    y = pitch * (np.arange(400) + 0.5) / 400
    field = 1.0 / np.tanh(np.pi * (x[:, None] + 1j * y) / pitch)
    return float(3.0 * np.mean(np.abs(field) ** 2 - 1.0))


@pytest.mark.parametrize("clearance", [1e-3, 3e-3])
@pytest.mark.parametrize("pitch", [10e-3, 30e-3, 80e-3])
def test_closed_form_of_the_field(clearance: float, pitch: float) -> None:
    found = float(field_share(np.array(clearance), np.array(8e-3), np.array(pitch)))
    assert found == pytest.approx(share_by_the_field(clearance, 8e-3, pitch), rel=0.01, abs=1e-4)


@pytest.mark.parametrize("ratio", [0.2, 0.5, 0.8, 1.0, 1.5, 3.0, 10.0])
def test_closed_form_of_the_shield(ratio: float) -> None:
    """2 sum sech^2(2 pi k c/P), term by term."""
    expected = 2.0 * np.sum(1.0 / np.cosh(np.minimum(np.arange(1, 400) / ratio, 300.0)) ** 2)
    found = shield_share(np.array(1e-3), np.array(2.0 * np.pi * ratio * 1e-3))
    assert float(found) == pytest.approx(expected, rel=0.1)


@given(st.floats(2e-4, 5e-3), st.floats(1e-3, 0.03), st.floats(5e-3, 0.1), st.floats(1.05, 4.0))
def test_distance_and_sections_lower_it(clearance: float, height: float, pitch: float, factor: float) -> None:
    c, h, p = (np.array(value) for value in (clearance, height, pitch))
    here = field_share(c, h, p)
    assert here >= 0.0
    assert field_share(factor * c, h, p) <= here
    assert field_share(c, h, p / factor) <= here * (1.0 + 1e-9)
    assert shield_share(factor * c, p) <= shield_share(c, p)


def test_gap_sections_closer_than_four_clearances_hardly_matter() -> None:
    """Rule for distributed gaps: pitch below four times the way to the winding (Hu and Sullivan 1998)."""
    found = field_share(np.array(2e-3), np.array(8e-3), np.array(8e-3))
    assert float(found) < 0.05


def test_gap_loss_of_a_tape_core() -> None:
    """0.0388 x 2 cm x 0.1 cm x 20 kHz x (0.05 T)^2 = 0.388 W (McLyman's formula in his units)."""
    found = tape_gap_loss(np.array(0.02), np.array(1e-3), np.array(20e3 * 0.05**2))
    assert float(found) == pytest.approx(0.388)


def test_what_the_gap_adds_to_each_conductor(catalog: Catalog) -> None:
    """Nothing without gap, less with more sections; fine litz suffers least, in proportion to its own
    proximity loss.
    """
    names = catalog.conductors.names
    kinds = [part.kind for part in catalog.conductors]
    conductor = np.array([names.index("litz 0.1 mm"), kinds.index("round"), kinds.index("foil")])
    same = np.ones(3, dtype=np.int64)
    built = build(
        catalog,
        InductorDesigns(
            material=0 * same,
            shape=catalog.core_shapes.index("E65/32/27") * same,
            stack=same,
            turns=30 * same,
            conductor=conductor,
            copper_area_m2=np.full(3, 4e-6),
        ),
        1.5e-3,
    )
    frequency = np.full((3, 1), 20e3)
    none, one, four = (
        resistance_ratio(built, frequency, RHO, np.full(3, sections))[:, 0] for sections in (0.0, 1.0, 4.0)
    )
    assert np.all(none < four)
    assert np.all(four < one)
    pitch = built.breadth[0]
    share = share_by_the_field(float(built.clearance[0]), float(built.layers.height[0]), float(pitch))
    assert (one[0] - 1.0) / (none[0] - 1.0) == pytest.approx(1.0 + share, rel=0.01)
    added = one - none
    assert added[0] < 0.1 * added[1:].min()
