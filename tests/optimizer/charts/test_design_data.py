"""The shared data set: all figures of a design, rounded, nothing that is no number."""

import math

import numpy as np
import pytest

from optimizer.charts.design_data import PERCENT, design_data, plain, reach_of, significant
from optimizer.charts.quantities import LOSS, VOLUME, component_columns, component_words


@pytest.fixture(scope="module")
def data(drawn):
    return design_data(drawn.study, drawn.front)


def row_of(drawn, record):
    return drawn.front.table.set_index("design_id").loc[record["design_id"]]


@pytest.mark.parametrize(
    ("given", "rounded"),
    [
        (0.0123456, 0.01235),
        (98765.4, 98770.0),
        (-1.23456, -1.235),
        (0.0, 0.0),
        (1e-12, 1e-12),
        (9999.6, 10000.0),
    ],
)
def test_four_digits_are_kept(given, rounded):
    assert significant(given) == pytest.approx(rounded, rel=1e-12)


def test_what_is_no_number_becomes_none():
    assert plain([[1.0, np.inf], [np.nan, 2.0]]) == [[1.0, None], [None, 2.0]]


def test_figures_are_those_of_the_front(drawn, data):
    for record in data.records[::7]:
        row = row_of(drawn, record)
        for name in (
            "loss_weighted_percent",
            "volume_l",
            "price",
            "mass_kg",
            "loss_conduction_w",
            "volume_heatsink_l",
        ):
            assert record[name] == pytest.approx(row[name], rel=1e-3)
        assert record["switching_frequency_khz"] == pytest.approx(
            row["switching_frequency_hz"] / 1e3, rel=1e-3
        )
        assert record["thd_percent"] == pytest.approx(100.0 * row["current_thd"], rel=1e-3)
        assert record["overall_front"] == row["overall_front"]


def test_parts_add_up_to_the_totals(data):
    for record in data.records:
        assert sum(record[name] for name in data.losses) == pytest.approx(record["loss_rated_w"], rel=2e-3)
        assert sum(record[name] for name in data.volumes) == pytest.approx(record["volume_l"], rel=2e-3)


def test_the_axis_of_the_parts_ends_above_all_of_them_but_not_far(data):
    for record in data.records:
        for kind, columns in ((LOSS, data.losses), (VOLUME, data.volumes)):
            greatest = max(record[name] for name in columns)
            assert greatest * 0.999 <= record[reach_of(kind)] <= 1.52 * greatest


def test_lists_belong_to_the_same_design(drawn, data):
    table = drawn.front.table
    for record in data.records[::11]:
        place = int(np.flatnonzero(table["design_id"] == record["design_id"])[0])
        np.testing.assert_allclose(record["efficiency"], 100.0 * drawn.front.efficiency[place], rtol=1e-3)
        assert len(record["margin"]) == len(data.constraints)
        tightest = data.constraints[int(np.argmin(record["margin"]))]
        assert min(record["margin"]) == pytest.approx(
            PERCENT * drawn.front.margins[tightest].iloc[place], rel=1e-3
        )
        assert len(record["order"]) == len(record["amplitude"]) == len(record["limit"])
        squares = np.square(drawn.front.line_amplitude[place]).sum()
        assert np.square(record["amplitude"]).sum() == pytest.approx(1e4 * squares, rel=2e-3)


def test_classes_are_counted_and_the_balanced_design_is_drawn(drawn, data):
    assert data.total == drawn.front.table["concept"].value_counts().to_dict()
    assert sum(data.shown(name) for name in data.total) == len(data.records)
    assert data.balanced in {record["design_id"] for record in data.records}


def test_a_small_share_keeps_the_extremes_of_the_whole_front(drawn):
    few = design_data(drawn.study, drawn.front, per_class=12)
    assert len(few.records) < len(drawn.front.table)
    for name in few.total:
        assert few.shown(name) <= 12
        whole = drawn.front.table[drawn.front.table.concept == name]
        for column in ("loss_weighted_percent", "volume_l", "price", "mass_kg", "distortion_percent"):
            values = [record[column] for record in few.records if record["concept"] == name]
            assert min(values) == pytest.approx(whole[column].min(), rel=1e-3)
            assert max(values) == pytest.approx(whole[column].max(), rel=1e-3)


def test_the_shortlist_is_marked(drawn, data):
    """The least of every objective on the overall front and the balanced design, each marked once."""
    overall = drawn.front.table[drawn.front.table.overall_front]
    marked = {record["design_id"]: record["mark"] for record in data.records if record["mark"]}
    words = ", ".join(marked.values()).split(", ")
    assert sorted(words) == sorted(["balanced", "least weighted loss", "least volume", "least price"])
    for column, word in (
        ("loss_weighted_percent", "weighted loss"),
        ("volume_l", "volume"),
        ("price", "price"),
    ):
        (name,) = [key for key, told in marked.items() if f"least {word}" in told.split(", ")]
        row = overall[overall.design_id == name].iloc[0]
        assert row[column] == overall[column].min()


def test_places_on_the_parallel_axes_run_from_least_to_greatest(data):
    for place, axis in enumerate(data.axes):
        values = np.array([record[axis.column] for record in data.records])
        places = np.array([record["places"][place] for record in data.records])
        assert places[values.argmin()] == 0.0
        assert places[values.argmax()] == 1.0
        order = np.argsort(values, kind="stable")
        assert np.all(np.diff(places[order]) >= 0.0)


def test_everything_is_plain(data):
    def walk(value):
        if isinstance(value, list):
            for entry in value:
                walk(entry)
        elif value is not None and not isinstance(value, str | bool):
            assert type(value) in (int, float)
            assert math.isfinite(value)

    for record in data.records:
        walk(list(record.values()))


def test_every_component_has_words_without_underscores(drawn):
    for kind in (LOSS, VOLUME):
        words = component_words(component_columns(drawn.front.table, kind), kind)
        assert len(set(words.values())) == len(words) > 5
        assert not any("_" in label for label in words.values())


def test_an_unknown_component_gets_words_of_its_own():
    assert component_words(["loss_new_part_w"], LOSS) == {"loss_new_part_w": "new part"}
