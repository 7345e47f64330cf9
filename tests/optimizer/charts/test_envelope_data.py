"""Envelopes over the switching frequency."""

import numpy as np
import pandas as pd
import pytest

from optimizer.charts.envelope_data import FEWEST, MOST_BINS, envelope


@pytest.fixture(scope="module")
def candidates():
    rng = np.random.default_rng(2)
    return pd.DataFrame(
        {
            "concept": rng.choice(["a", "b"], 6000),
            "switching_frequency_hz": np.exp(rng.uniform(np.log(8e3), np.log(2e5), 6000)),
            "volume_l": rng.uniform(1.0, 9.0, 6000),
        }
    )


def test_bins_hold_the_least_of_each_class(candidates):
    found = envelope(candidates, candidates, "volume_l")
    records = pd.DataFrame(found.records)
    assert not found.front_only
    assert found.candidates == len(candidates)
    for name, of_class in candidates.groupby("concept"):
        drawn = records[records.concept == name]
        assert 0 < len(drawn) <= MOST_BINS
        assert drawn.volume_l.min() == pytest.approx(of_class.volume_l.min(), rel=1e-3)


def test_a_point_lies_at_the_frequency_of_its_own_candidate(candidates):
    for record in envelope(candidates, candidates, "volume_l").records:
        same = candidates[candidates.concept == record["concept"]]
        near = np.isclose(same.switching_frequency_hz, 1e3 * record["switching_frequency_khz"], rtol=1e-3)
        assert np.isclose(same.volume_l[near], record["volume_l"], rtol=1e-3).any()


def test_no_candidate_of_a_full_bin_lies_below_the_envelope(candidates):
    """Bins rebuilt here by their edges: the whole range in equal parts of the logarithm."""
    edges = np.geomspace(
        candidates.switching_frequency_hz.min(), candidates.switching_frequency_hz.max(), MOST_BINS + 1
    )
    records = pd.DataFrame(envelope(candidates, candidates, "volume_l").records)
    checked = 0
    for low, high in zip(edges[:-1], edges[1:], strict=True):
        inside = candidates.switching_frequency_hz.between(low, high, inclusive="left")
        for name, of_class in candidates[inside].groupby("concept"):
            drawn = records[
                (records.concept == name)
                & (1e3 * records.switching_frequency_khz).between(low * 0.999, high * 1.001)
            ]
            if len(of_class) >= FEWEST:
                assert drawn.volume_l.min() <= of_class.volume_l.min() * 1.001
                checked += 1
    assert checked > MOST_BINS


def test_bins_with_a_few_lucky_candidates_are_left_out(candidates):
    alone = pd.DataFrame({"concept": ["a"], "switching_frequency_hz": [1e6], "volume_l": [0.001]})
    found = envelope(pd.concat([candidates, alone], ignore_index=True), candidates, "volume_l")
    assert min(record["volume_l"] for record in found.records) > 0.5


def test_a_class_with_hardly_any_candidate_is_still_drawn(candidates):
    few = pd.DataFrame({"concept": ["c", "c"], "switching_frequency_hz": [1e4, 9e4], "volume_l": [3.0, 2.0]})
    records = envelope(pd.concat([candidates, few], ignore_index=True), candidates, "volume_l").records
    assert [record["volume_l"] for record in records if record["concept"] == "c"] == [3.0, 2.0]


@pytest.mark.parametrize("evaluated", [None, pd.DataFrame({"concept": [], "switching_frequency_hz": []})])
def test_without_the_column_the_front_stands_in(evaluated, candidates):
    found = envelope(evaluated, candidates, "volume_l")
    assert found.front_only
    assert found.records == envelope(candidates, candidates, "volume_l").records


def test_a_single_frequency_is_one_bin_and_the_row_labels_do_not_matter():
    table = pd.DataFrame(
        {"concept": ["a"] * 3, "switching_frequency_hz": [2e4] * 3, "price": [3.0, 1.0, 2.0]},
        index=[7, 7, 9],
    )
    records = envelope(table.reset_index(drop=True), table, "price").records
    assert records == [{"concept": "a", "switching_frequency_khz": 20.0, "price": 1.0}]
    assert envelope(table, table, "price").records == records
