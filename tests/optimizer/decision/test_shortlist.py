"""The shortlist: which designs are picked, and what is said about them."""

import json
from dataclasses import replace

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.certainty.tolerance import sampler
from optimizer.decision import shortlist
from optimizer.decision.figures import figure
from optimizer.decision.picks import least_row, recommended_row, weighted_row
from optimizer.decision.telling import as_csv, as_json, table_suffix
from optimizer.decision.weights import read_weights, written_weights
from optimizer.decision.wording import tightest
from optimizer.errors import InputError
from optimizer.runs.fronts import front

# five designs; the fourth is off the overall front though it is best at everything
FRONT = pd.DataFrame(
    {
        "design_id": list("abcde"),
        "overall_front": [True, True, True, False, True],
        "loss_weighted_percent": [1.0, 1.4, 3.0, 0.1, 1.9],
        "volume_l": [9.0, 3.0, 1.0, 0.1, 2.0],
        "price": [300.0, 160.0, 150.0, 1.0, 140.0],
        "cost_of_ownership": [500.0, 402.0, 600.0, 1.0, 400.0],
    }
)
COLUMNS = ["loss_weighted_percent", "volume_l", "price"]


@pytest.mark.parametrize(
    ("column", "best"),
    [("loss_weighted_percent", 0), ("volume_l", 2), ("price", 4), ("cost_of_ownership", 4)],
)
def test_the_least_of_the_overall_front(column, best):
    assert least_row(FRONT, column, COLUMNS) == best


def test_of_equal_designs_the_one_nearest_to_the_ideal_is_taken():
    table = FRONT.assign(price=100.0)
    # ranges 2 % and 8 l: distances 1.00, 0.32, 1.00, -, 0.47
    assert least_row(table, "price", COLUMNS) == 1


def test_weights_move_the_pick():
    # by hand, scaled to the ranges: volume 1, 1/4, 0, -, 1/8; price 1, 1/8, 1/16, -, 0;
    # loss 0, 1/5, 1, -, 9/20
    assert weighted_row(FRONT, {"volume": 2.0, "price": 1.0}) == 2
    assert weighted_row(FRONT, {"volume": 1.0, "price": 3.0}) == 4
    assert weighted_row(FRONT, {"weighted loss": 3.0, "volume": 1.0}) == 1
    assert weighted_row(FRONT, {"weighted loss": 9.0, "volume": 1.0}) == 0


def test_costs_within_five_percent_count_as_equal():
    # 402 against 400: equal; distances to the ideal 0.34 (b) and 0.47 (e)
    assert recommended_row(FRONT, [0, 1, 2, 4], COLUMNS) == 1
    dearer = FRONT.assign(cost_of_ownership=[500.0, 430.0, 600.0, 1.0, 400.0])
    assert recommended_row(dearer, [0, 1, 2, 4], COLUMNS) == 4


@given(scale=st.lists(st.floats(0.1, 100.0), min_size=3, max_size=3), shift=st.floats(0.0, 10.0))
def test_units_of_the_columns_do_not_matter(scale, shift):
    other = FRONT.copy()
    for name, factor in zip(COLUMNS, scale, strict=True):
        other[name] = factor * other[name] + shift
    for weights in ({"volume": 2.0, "price": 1.0}, {"weighted loss": 3.0, "volume": 1.0}):
        assert weighted_row(other, weights) == weighted_row(FRONT, weights)
    assert recommended_row(other, [0, 1, 2, 4], COLUMNS) == 1


@pytest.mark.parametrize(
    ("text", "weights"),
    [
        ("volume=2, price=1", {"volume": 2.0, "price": 1.0}),
        ("cost of ownership = 1.5 ,", {"cost of ownership": 1.5}),
    ],
)
def test_weights_are_read(text, weights):
    assert read_weights(text) == weights
    assert read_weights(written_weights(weights)) == weights


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("volum=1", '--weights: given "volum", expected the name of an objective (nearest: "volume")'),
        ("volume=-1", '--weights: given "-1", expected a number of at least 0 behind volume='),
        ("volume", "--weights: given nothing, expected a number of at least 0 behind volume="),
        ("volume=nan", '--weights: given "nan", expected a number of at least 0 behind volume='),
        ("price=1, price=2", '--weights: given "price" twice, expected each only once'),
        (
            "price=0",
            '--weights: given "price=0", expected at least one weight above 0, such as "volume=2, price=1"',
        ),
        ("", '--weights: given "", expected at least one weight above 0, such as "volume=2, price=1"'),
    ],
)
def test_bad_weights_are_told(text, line):
    with pytest.raises(InputError) as caught:
        read_weights(text)
    assert str(caught.value) == line


@pytest.mark.parametrize(
    ("value", "digits", "text"),
    [
        (4.7234, 2, "4.7"), (96.43, 3, "96.4"), (1.8, 2, "1.8"), (1234.5, 3, "1,230"), (0.0, 3, "0"),
        (9.96, 2, "10"), (0.0311, 2, "0.031"), (1e-9, 3, "0"), (-2.345, 2, "-2.3"), (float("nan"), 3, "-"),
        (12.0, 2, "12"), (138.01, 3, "138"),
    ],
)  # fmt: skip
def test_figures_have_sensible_digits(value, digits, text):
    assert figure(value, digits) == text


@given(value=st.floats(1e-2, 1e6), digits=st.integers(2, 4))
def test_a_figure_stays_within_half_of_its_last_digit(value, digits):
    told = float(figure(value, digits).replace(",", ""))
    assert abs(told - value) <= 0.5001 * 10.0 ** (np.floor(np.log10(value)) - digits + 1)


@pytest.fixture(scope="module")
def found(stored):
    return shortlist(stored.study, stored.table, stored.margins, {"volume": 2.0, "price": 1.0})


def test_one_row_a_role_from_the_overall_front(found, stored):
    assert [entry.role for entry in found.entries] == [
        "balanced", "cheapest", "most efficient", "smallest", "least cost over the years",
        "best by your weights",
    ]  # fmt: skip
    front = stored.table[stored.table.overall_front]
    least = {"cheapest": "price", "most efficient": "loss_weighted_percent", "smallest": "volume_l"}
    for entry in found.entries:
        assert stored.table.overall_front[entry.row]
        if entry.role in least:
            column = least[entry.role]
            assert stored.table[column][entry.row] == front[column].min()
    assert "Zeleny 1973" in found.entries[0].rule


def test_the_words_are_made_from_the_numbers(found, stored):
    for entry in found.entries:
        design, text = stored.table.iloc[entry.row], " ".join(entry.sentences)
        assert design.modulation in text
        assert design.bridge in text
        assert f"{figure(design.switching_frequency_hz / 1e3)} kHz" in text
        assert str(design.cooling) in text
        assert f"weighted loss {design.loss_weighted_percent:.2f} % give or take" in text
        assert "Limited by" in text
        assert "_" not in text


def test_gains_and_costs_point_the_right_way(found, stored):
    balanced, smallest = stored.table.iloc[found.entries[0].row], stored.table.iloc[found.entries[3].row]
    assert smallest.volume_l < 0.99 * balanced.volume_l
    assert smallest.loss_weighted_percent > 1.01 * balanced.loss_weighted_percent
    gains, costs = found.entries[3].sentences[1].split(", but ")
    assert "smaller" in gains
    assert (
        f"loses {figure(smallest.loss_weighted_percent - balanced.loss_weighted_percent, 2)} points more"
        in costs
    )


def test_the_tightest_requirements_are_those_of_the_margins(found, stored):
    for row in found.rows:
        first, *_ = tightest(dict(stored.margins.iloc[row]))
        assert first[0] == stored.margins.tightest[row]


def test_tolerance_bands_are_told_where_the_front_has_them(stored):
    table = stored.table.copy().assign(
        loss_weighted_percent_p05=0.9 * stored.table.loss_weighted_percent,
        loss_weighted_percent_p95=1.3 * stored.table.loss_weighted_percent,
    )
    for entry in shortlist(stored.study, table, stored.margins).entries:
        value = table.loss_weighted_percent[entry.row]
        assert (
            f"nine of ten cases weighted loss {0.9 * value:.2f} to {1.3 * value:.2f} %" in entry.sentences[-1]
        )
        assert "volume" in entry.sentences[-1]


def test_recommended_by_weights_where_there_are_any(found, stored):
    assert found.recommended == found.entries[-1].row
    plain = shortlist(stored.study, stored.table, stored.margins)
    cost = stored.table.cost_of_ownership
    assert cost[plain.recommended] <= 1.05 * cost[[entry.row for entry in plain.entries]].min()


def test_files_hold_every_entry(found, tmp_path):
    content = json.loads(as_json(found))
    assert [entry["role"] for entry in content["shortlist"]] == [entry.role for entry in found.entries]
    assert content["recommended"] == found.table.design_id[found.recommended]
    (tmp_path / "shortlist.csv").write_text(as_csv(found))
    table = pd.read_csv(tmp_path / "shortlist.csv")
    assert list(table.design_id) == [entry.design_id for entry in found.entries]
    assert table.recommended.sum() >= 1


@pytest.mark.parametrize("name", ["shortlist.txt", "missing/shortlist.csv"])
def test_where_it_cannot_be_written(tmp_path, name):
    with pytest.raises(InputError, match="--out"):
        table_suffix(tmp_path / name)


def test_the_currency_of_the_study_is_told(stored):
    study = replace(stored.study, currency="EUR")
    text = " ".join(shortlist(study, stored.table, stored.margins).entries[1].sentences)
    assert " EUR" in text
    assert "currency" not in text


def test_with_tolerances_sampled_the_words_use_them(small_search):
    found, fronts = small_search, front(small_search)
    sampled = sampler(found.study, fronts.table, fronts.points)
    chosen = shortlist(found.study, fronts.table, fronts.margins, None, sampled)
    for entry in chosen.entries:
        of = chosen.tolerances[entry.row]
        words = " ".join(entry.sentences)
        assert "In nine of ten cases weighted loss" in words
        assert "typical error" not in words
        assert f"{100.0 * of.all_hold:.0f} % of inverters built so keep every limit" in words or not (
            0.01 < of.all_hold < 0.99
        )
        assert chosen.design(entry.row)["price_p95"] == of.bands["price"].high
    told = json.loads(as_json(chosen))["shortlist"][0]
    assert told["certainty"]["samples"] == 2048
    assert 0.0 <= told["certainty"]["all_limits_hold"] <= 1.0
    assert "price_p05" in as_csv(chosen).splitlines()[0]


def test_without_them_the_typical_error_stands(small_search):
    fronts = front(small_search)
    chosen = shortlist(small_search.study, fronts.table, fronts.margins)
    assert "typical error" in " ".join(chosen.entries[0].sentences)
    assert "certainty" not in json.loads(as_json(chosen))["shortlist"][0]
