"""Which designs are drawn: extremes always, the rest evenly."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from optimizer.charts.thinning import balanced_row, extreme_rows, shown_rows, spread_rows, unit_range

CLOUDS = arrays(
    float, st.tuples(st.integers(1, 40), st.integers(1, 3)), elements=st.integers(-1000, 1000).map(float)
)


def some_front(classes=("a", "b"), each=500, seed=5):
    rng = np.random.default_rng(seed)
    angle = rng.uniform(0.0, np.pi / 2.0, len(classes) * each)
    return pd.DataFrame(
        {
            "concept": np.repeat(classes, each),
            "loss": 1.0 - np.sin(angle),
            "volume": 1.0 - np.cos(angle),
            "mass": rng.uniform(1.0, 9.0, len(angle)),
            "overall_front": rng.random(len(angle)) < 0.5,
        }
    )


@given(CLOUDS, st.integers(1, 50))
def test_rows_are_few_enough_distinct_and_hold_the_first_ones(points, count):
    first = extreme_rows(points)
    rows = spread_rows(points, count, first)
    assert len(rows) <= max(count, len(first))
    assert len(set(rows.tolist())) == len(rows)
    assert set(first.tolist()) <= set(rows.tolist())
    assert (np.diff(rows) > 0).all()


@given(CLOUDS)
def test_nothing_distinct_is_left_out_where_there_is_room(points):
    rows = spread_rows(points, len(points), extreme_rows(points))
    assert {tuple(point) for point in points[rows].tolist()} == {tuple(point) for point in points.tolist()}


def test_no_point_left_out_is_far_from_a_chosen_one():
    """21 points can cover a line of 401 even ones within 10 steps; the greedy rule does within twice that."""
    points = np.linspace(0.0, 1.0, 401)[:, None]
    rows = spread_rows(points, 21, np.array([0, 400]))
    distance = np.abs(points - points[rows].T).min(1)
    assert distance.max() <= 2.0 * 10.0 / 400.0 + 1e-12


@pytest.mark.parametrize("per_class", [10, 60, 1000])
def test_every_class_keeps_its_extremes_of_every_quantity(per_class):
    table = some_front()
    quantities = ["loss", "volume", "mass"]
    kept = table.iloc[shown_rows(table, ["loss", "volume"], quantities, per_class)]
    for name in ("a", "b"):
        whole, part = table[table.concept == name], kept[kept.concept == name]
        assert len(part) == min(per_class, len(whole))
        for quantity in quantities:
            assert part[quantity].min() == whole[quantity].min()
            assert part[quantity].max() == whole[quantity].max()


def test_a_wanted_row_is_drawn_and_counts_within_the_limit():
    table = some_front()
    without = shown_rows(table, ["loss", "volume"], ["loss"], 20)
    wanted = int(np.setdiff1d(np.arange(len(table)), without)[7])
    rows = shown_rows(table, ["loss", "volume"], ["loss"], 20, also=wanted)
    assert wanted in rows
    assert len(rows) == len(without)


def test_the_balanced_design_is_the_one_nearest_to_the_ideal_and_on_the_overall_front():
    table = pd.DataFrame(
        {
            "loss": [1.0, 1.4, 1.1, 3.0],
            "volume": [9.0, 2.0, 1.5, 1.0],
            "overall_front": [True, True, False, True],
        }
    )
    assert balanced_row(table, ["loss", "volume"]) == 1


def test_a_constant_column_does_not_divide_by_zero():
    np.testing.assert_array_equal(unit_range(np.array([[2.0, 1.0], [2.0, 3.0]])), [[0.0, 0.0], [0.0, 1.0]])
