"""The array steps of NSGA-II against their definitions, and the whole against pymoo's own algorithm on a
known problem.
"""

import moocore
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.optimize import minimize
from pymoo.problems import get_problem

from optimizer.nsga import ArrayEvaluator, ArrayNSGA2, crossover, mutation, survivors, tournament

UNCHANGED = np.zeros(12, dtype=bool)


def test_feasible_survive_before_infeasible_and_least_violating_next():
    objectives = np.array([[9.0, 9.0], [0.0, 0.0], [1.0, 1.0], [2.0, 2.0]])
    violation = np.array([0.0, 3.0, 1.0, 2.0])
    kept, rank, _ = survivors(objectives, violation, 3)
    assert kept.tolist() == [0, 2, 3]
    assert rank[0] == 0
    assert (rank[1:] > rank[0]).all()


def test_lower_ranks_survive_and_ends_of_a_front_stay():
    front = np.array([[0.0, 1.0], [0.25, 0.7], [0.5, 0.5], [1.0, 0.0]])
    worse = front + 2.0
    kept, rank, crowding = survivors(np.concatenate([worse, front]), np.zeros(8), 4)
    assert sorted(kept) == [4, 5, 6, 7]
    assert (rank == 0).all()
    kept, _, _ = survivors(front, np.zeros(4), 2)
    assert sorted(kept) == [0, 3]


@given(st.integers(0, 2**32 - 1))
def test_tournament_prefers_feasible_then_rank_then_crowding(seed):
    rng = np.random.default_rng(seed)
    violation = np.array([0.0, 0.0, 0.0, 5.0])
    rank, crowding = np.array([0, 1, 0, 0]), np.array([1.0, 9.0, 2.0, 9.0])
    winners = tournament(rng, 400, violation, rank, crowding).ravel()
    counts = np.bincount(winners, minlength=4)
    assert counts[2] > counts[0] > counts[1] > counts[3]


@given(st.integers(0, 2**32 - 1))
def test_crossover_keeps_means_and_what_parents_share(seed):
    rng = np.random.default_rng(seed)
    mothers = rng.random((4000, 3))
    fathers = rng.random((4000, 3))
    fathers[:, 1] = mothers[:, 1]
    children = crossover(rng, mothers, fathers)
    np.testing.assert_allclose(children[:, 1], mothers[:, 1], atol=1e-12)
    assert np.all(np.isfinite(children))
    assert abs(children[:, 0].mean() - 0.5) < 0.03


@given(st.integers(0, 2**32 - 1))
def test_mutation_moves_about_one_axis_and_redraws_choices_uniformly(seed):
    rng = np.random.default_rng(seed)
    points = np.full((3000, 12), 0.5)
    redrawn = UNCHANGED.copy()
    redrawn[0] = True
    changed = mutation(rng, points, redrawn)
    moved = changed != 0.5
    assert 0.8 < moved.sum(1).mean() < 1.2
    assert np.abs(changed[moved[:, 1], 1] - 0.5).mean() < np.abs(changed[moved[:, 0], 0] - 0.5).mean()


@pytest.mark.parametrize("seed", [1, 2])
def test_as_good_as_pymoo_on_zdt1(seed):
    """Hypervolume on ZDT1 (Zitzler, Deb, Thiele 2000) not below pymoo's own NSGA-II by more than 1 %."""
    problem = get_problem("zdt1")

    def assess(points):
        return problem.evaluate(points), np.zeros(len(points))

    first = np.random.default_rng(seed).random((100, problem.n_var))
    ours = ArrayNSGA2(
        100,
        lambda points: np.clip(points, 0.0, 1.0),
        np.zeros(problem.n_var, dtype=bool),
        first,
        evaluator=ArrayEvaluator(assess),
        output=None,
    )
    mine = minimize(problem, ours, ("n_gen", 150), seed=seed, copy_algorithm=False).F
    theirs = minimize(problem, NSGA2(pop_size=100), ("n_gen", 150), seed=seed).F
    values = [moocore.hypervolume(front, ref=[1.1, 1.1]) for front in (mine, theirs)]
    assert values[0] > 0.99 * values[1]


def test_result_is_pymoo_s():
    problem = get_problem("zdt1")
    algorithm = ArrayNSGA2(
        20,
        lambda points: np.clip(points, 0.0, 1.0),
        np.zeros(problem.n_var, dtype=bool),
        np.random.default_rng(1).random((20, problem.n_var)),
        evaluator=ArrayEvaluator(lambda points: (problem.evaluate(points), np.zeros(len(points)))),
        output=None,
    )
    result = minimize(problem, algorithm, ("n_gen", 5), seed=1, copy_algorithm=False)
    assert result.X.shape[1] == problem.n_var
    assert len(result.F) == len(result.X)
    assert algorithm.evaluator.n_eval == 100
