# ruff: noqa: E501
"""Fronts and their tables."""

import moocore
import numpy as np
import pytest

from optimizer.runs.fronts import front
from optimizer.objectives import OBJECTIVES


@pytest.fixture(scope="module")
def fronts(small_search):
    return front(small_search)


def test_promised_columns_are_there(fronts):
    promised = {
        "design_id", "concept", "class_front", "overall_front", "device_class", "bridge", "modulation", "switching_frequency_hz",
        "efficiency_rated", "efficiency_weighted", "volume_l", "mass_kg", "price", "current_thd", "junction_temperature_c",
        "loss_conduction_w", "volume_heatsink_l", "loss_rated_w",
    }  # fmt: skip
    assert promised <= set(fronts.table.columns)


@pytest.mark.parametrize(
    ("total", "share"),
    [
        ("loss_rated_w", r"^loss_(?!rated).*_w$"),
        ("volume_l", "^volume_.+_l$"),
        ("mass_kg", "^mass_.+_kg$"),
        ("price", "^price_"),
    ],
)
def test_shares_add_up_to_totals(fronts, total, share):
    sums = fronts.table.filter(regex=share).sum(axis=1)
    np.testing.assert_allclose(sums, fronts.table[total], rtol=1e-12)


def test_rated_efficiency_is_power_over_power_and_losses(fronts, rooftop):
    power = rooftop.specification.apparent_power_va
    np.testing.assert_allclose(
        fronts.table.efficiency_rated, power / (power + fronts.table.loss_rated_w), rtol=1e-12
    )


def test_no_design_dominates_another_of_its_class(fronts, rooftop):
    columns = [OBJECTIVES[name].column for name in rooftop.objectives]
    for _, rows in fronts.table.groupby("device_class"):
        assert moocore.is_nondominated(rows[columns].to_numpy()).all()


def test_overall_front_is_the_front_of_all(fronts, rooftop):
    columns = [OBJECTIVES[name].column for name in rooftop.objectives]
    assert (moocore.is_nondominated(fronts.table[columns].to_numpy()) == fronts.table.overall_front).all()


def test_margins_are_met_and_named(fronts):
    margins = fronts.margins.drop(columns=["design_id", "tightest"])
    assert (margins >= 0.0).all().all()
    assert [name for name, _, _ in fronts.limits] == list(margins.columns)
    assert (margins.idxmin(axis=1) == fronts.margins.tightest).all()


def test_nothing_is_nan_or_infinite(fronts):
    assert np.isfinite(fronts.table.select_dtypes("number").to_numpy()).all()
    assert np.isfinite(fronts.efficiency).all()


def test_ids_are_unique(fronts):
    assert fronts.table.design_id.is_unique
