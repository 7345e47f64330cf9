"""CostModel: log interpolation and packing styles."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import load_catalog

COST = load_catalog().cost


def test_interpolation_hits_its_points_and_the_geometric_middle() -> None:
    assert COST.control_price_at(COST.rating_va) == pytest.approx(COST.control_price)
    middle = math.sqrt(COST.rating_va[2] * COST.rating_va[3])
    expected = math.sqrt(COST.control_price[2] * COST.control_price[3])
    assert COST.control_price_at(middle) == pytest.approx(expected)


def test_values_are_held_beyond_the_ends() -> None:
    assert COST.auxiliary_power_at([1.0, 1e9]) == pytest.approx(
        [COST.auxiliary_power_w[0], COST.auxiliary_power_w[-1]]
    )


def test_arrays_equal_scalar_calls() -> None:
    ratings = np.geomspace(50, 5e6, 12).reshape(3, 4)
    prices = COST.housing_price_at(ratings)
    assert prices.shape == ratings.shape
    assert prices.ravel() == pytest.approx([float(COST.housing_price_at(r)) for r in ratings.ravel()])


@given(st.floats(min_value=10.0, max_value=1e7), st.floats(min_value=1.0, max_value=10.0))
def test_larger_inverters_cost_more_and_larger_series_less(rating: float, factor: float) -> None:
    rising = (COST.control_price_at, COST.housing_price_at, COST.inductor_labour_at, COST.auxiliary_power_at)
    for relation in rising:
        assert relation(rating * factor) >= relation(rating) * (1 - 1e-12)
    assert COST.quantity_factor_at(rating * factor) <= COST.quantity_factor_at(rating) * (1 + 1e-12)


def test_quantity_factor_is_one_at_a_thousand_pieces() -> None:
    assert COST.quantity_factor_at(1000) == pytest.approx(1.0)


def test_packing_styles() -> None:
    assert COST.packing_factor("sealed outdoor") == 0.3
    with pytest.raises(
        ValueError, match="no packing style called 'outdoor'; the nearest is 'sealed outdoor'"
    ):
        COST.packing_factor("outdoor")


def test_choke_price_rises_with_current() -> None:
    assert np.all(np.diff(COST.choke_price_at([10, 20, 50, 100, 200])) > 0.0)
