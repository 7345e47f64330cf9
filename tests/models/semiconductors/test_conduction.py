"""Conduction laws: area, temperature, and the two forms of the same loss."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from probe_device import device

from models.catalog import Catalog
from models.semiconductors.conduction import conduction_law, diode_path, switch_path

PART: dict[str, float | bool] = {
    "threshold_25_v": 1.1, "threshold_hot_v": 0.9, "slope_area_25_ohm_m2": 2e-6,
    "slope_area_hot_ohm_m2": 3e-6, "dynamic_resistance_factor": 1.2, "hot_c": 125.0,
    "diode_threshold_25_v": 1.4, "diode_threshold_hot_v": 1.0, "diode_slope_area_25_ohm_m2": 1e-6,
    "diode_slope_area_hot_ohm_m2": 1.5e-6, "diode_area_share": 0.5,
}  # fmt: skip


def array(value: float) -> Any:
    return np.array([[value]])


def test_both_ends_of_the_temperature_range() -> None:
    switch, diode = switch_path(device(PART), array(1e-4)), diode_path(device(PART), array(1e-4))
    assert switch.threshold_at(array(25.0)) == pytest.approx(1.1)
    assert switch.threshold_at(array(125.0)) == pytest.approx(0.9)
    assert switch.slope_at(array(25.0)) == pytest.approx(1.2 * 2e-6 / 1e-4)
    assert switch.slope_at(array(125.0)) == pytest.approx(1.2 * 3e-6 / 1e-4)
    assert diode.slope_at(array(125.0)) == pytest.approx(1.5e-6 / 0.5e-4)
    assert diode.threshold_at(array(75.0)) == pytest.approx(1.2)


@given(st.floats(1e-6, 1e-3), st.floats(-25.0, 200.0), st.floats(0.0, 50.0), st.floats(0.0, 5000.0))
def test_law_of_temperature_is_the_loss(
    area: float, temperature: float, average: float, square: float
) -> None:
    path = switch_path(device(PART), array(area))
    law = conduction_law(path, array(average), array(square))
    expected = path.loss(array(temperature), array(average), array(square))
    assert law.at(array(temperature)) == pytest.approx(expected, rel=1e-9, abs=1e-9)


@given(st.floats(1e-6, 1e-3), st.integers(1, 8))
def test_parallel_dies_conduct_like_one_of_their_total_area(area: float, count: int) -> None:
    """n dies of area A/n each carry 1/n of the current: the same loss as one die of area A."""
    whole = switch_path(device(PART), array(area)).loss(array(80.0), array(10.0), array(150.0))
    each = switch_path(device(PART), array(area / count))
    parts = count * each.loss(array(80.0), array(10.0 / count), array(150.0 / count**2))
    assert parts == pytest.approx(whole)


@given(st.floats(0.0, 50.0), st.floats(0.0, 5000.0))
def test_loss_grows_with_either_current(average: float, square: float) -> None:
    path = diode_path(device(PART), array(1e-4))
    here = path.loss(array(100.0), array(average), array(square))
    assert np.all(path.loss(array(100.0), array(average + 1.0), array(square + 1.0)) > here)


def test_catalogue_parts_have_growing_resistance_and_no_negative_threshold(catalog: Catalog) -> None:
    for part in catalog.devices:
        for path in (switch_path(part, np.array(1e-5)), diode_path(part, np.array(1e-5))):
            assert path.slope_log >= 0.0, part.name
            assert np.all(path.threshold_at(np.array([25.0, part.junction_limit_c])) >= 0.0), part.name
