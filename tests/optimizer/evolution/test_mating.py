"""The steps of mating against what they promise."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.evolution.mating import (
    MUTATED_AXES,
    NEIGHBOUR_TRIES,
    Axes,
    Members,
    crossover,
    differential,
    exchange,
    mutation,
    neighbours,
    new_rows,
    offspring,
    redrawn_part,
    tournament,
)

SEEDS = st.integers(0, 2**32 - 1)
AXES = Axes(np.array([0, 0, 0, 1, 1, 1, 2, 2, 2, 3, 3, 3]), np.array([True] + [False] * 11))


@given(SEEDS)
def test_tournament_prefers_feasible_then_rank_then_crowding(seed):
    rng = np.random.default_rng(seed)
    nothing = np.zeros((4, 1))
    members = Members(
        nothing,
        nothing,
        np.array([0.0, 0.0, 0.0, 5.0]),
        np.array([0, 1, 0, 0]),
        np.array([1.0, 9.0, 2.0, 9.0]),
    )
    counts = np.bincount(tournament(rng, 800, members), minlength=4)
    assert counts[2] > counts[0] > counts[1] > counts[3]


@given(SEEDS)
def test_crossover_keeps_means_and_what_parents_share(seed):
    rng = np.random.default_rng(seed)
    mothers = rng.random((4000, 3))
    fathers = rng.random((4000, 3))
    fathers[:, 1] = mothers[:, 1]
    children = crossover(rng, mothers, fathers)
    np.testing.assert_allclose(children[:, 1], mothers[:, 1], atol=1e-12)
    assert np.all(np.isfinite(children))
    assert abs(children[:, 0].mean() - 0.5) < 0.03


@given(SEEDS)
def test_mutation_moves_some_axes_and_redraws_choices_uniformly(seed):
    rng = np.random.default_rng(seed)
    points = np.full((3000, 12), 0.5)
    changed = mutation(rng, points, AXES.redrawn)
    moved = changed != 0.5
    assert 0.85 * MUTATED_AXES < moved.sum(1).mean() < 1.15 * MUTATED_AXES
    assert np.abs(changed[moved[:, 1], 1] - 0.5).mean() < np.abs(changed[moved[:, 0], 0] - 0.5).mean()


@given(SEEDS)
def test_exchange_takes_every_part_whole(seed):
    rng = np.random.default_rng(seed)
    mothers, fathers = np.zeros((500, 12)), np.ones((500, 12))
    children = exchange(rng, mothers, fathers, AXES).reshape(500, 4, 3)
    assert np.all(children == children[:, :, :1])
    assert 0.4 < children.mean() < 0.6


@given(SEEDS)
def test_neighbours_are_nearer_than_chance(seed):
    """The nearest of k evenly spread places is on average k + 1 times nearer than one of them is to 0."""
    rng = np.random.default_rng(seed)
    place = np.linspace(0.0, 1.0, 400)
    objectives = np.stack([place, 1.0 - place], axis=-1)
    of = np.zeros(2000, dtype=np.int64)
    found = neighbours(rng, objectives, of)
    assert np.all(found != of)
    assert place[found].mean() == pytest.approx(1.0 / (NEIGHBOUR_TRIES + 1), rel=0.15)


@given(SEEDS)
def test_differential_moves_lie_along_differences_of_members(seed):
    rng = np.random.default_rng(seed)
    points = np.full((50, 12), 0.5)
    points[:, 4] = rng.random(50)
    moved = differential(rng, points, points, AXES) - points
    assert np.all(moved[:, np.arange(12) != 4] == 0.0)
    same = np.full((50, 12), 0.3)
    np.testing.assert_array_equal(differential(rng, same, same, AXES), same)


@given(SEEDS)
def test_redrawn_part_changes_one_part_at_most(seed):
    rng = np.random.default_rng(seed)
    changed = (redrawn_part(rng, np.full((2000, 12), 2.0), AXES) != 2.0).reshape(2000, 4, 3).any(-1)
    assert changed.sum(-1).max() == 1
    assert 0.02 < changed.any(-1).mean() < 0.09


@given(SEEDS)
def test_new_rows_are_new_once_and_in_order(seed):
    rng = np.random.default_rng(seed)
    known, points = (rng.integers(0, 3, size=(n, 2)).astype(float) for n in (6, 12))
    expected: list[list[float]] = []
    for row in points.tolist():
        if row not in known.tolist() and row not in expected:
            expected.append(row)
    assert new_rows(points, known).tolist() == expected


@given(SEEDS)
def test_offspring_of_equal_members_differ_by_mutation_and_redrawing_alone(seed):
    rng = np.random.default_rng(seed)
    points = np.full((30, 12), 0.4)
    members = Members(points, rng.random((30, 2)), np.zeros(30), np.zeros(30), np.zeros(30))
    children = offspring(rng, members, AXES, 1000)
    assert children.shape == (1000, 12)
    assert 0.3 < (children == 0.4).all(-1).mean() < 0.75
