"""The whole algorithm against pymoo's own on known problems, and its stopping and going on."""

import moocore
import numpy as np
import pytest
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.algorithms.moo.nsga3 import NSGA3
from pymoo.optimize import minimize
from pymoo.problems import get_problem
from pymoo.util.ref_dirs import get_reference_directions

from optimizer.evolution.mating import Axes
from optimizer.evolution.nsga import ArrayEvaluator, ArrayNSGA


def ours(problem, population, generations, seed):
    """An algorithm of ours for a free problem, every axis a part of its own."""
    axes = Axes(np.arange(problem.n_var), np.zeros(problem.n_var, dtype=bool))
    return ArrayNSGA(
        population,
        lambda points: np.clip(points, 0.0, 1.0),
        axes,
        np.random.default_rng(seed).random((population, problem.n_var)),
        problem.n_obj,
        generations,
        evaluator=ArrayEvaluator(lambda points: (problem.evaluate(points), np.zeros(len(points)))),
        output=None,
    )


@pytest.mark.parametrize("seed", [1, 2])
def test_as_good_as_pymoo_on_zdt1(seed):
    """Hypervolume on ZDT1 (Zitzler, Deb, Thiele 2000) not below pymoo's own NSGA-II by more than 1 %."""
    problem = get_problem("zdt1")
    mine = minimize(problem, ours(problem, 100, 150, seed), ("n_gen", 150), seed=seed, copy_algorithm=False).F
    theirs = minimize(problem, NSGA2(pop_size=100), ("n_gen", 150), seed=seed).F
    values = [moocore.hypervolume(front, ref=[1.1, 1.1]) for front in (mine, theirs)]
    assert values[0] > 0.99 * values[1]


def test_as_good_as_pymoo_on_four_objectives():
    """Hypervolume on DTLZ2 (Deb et al. 2005), four objectives, within 2 % of pymoo's NSGA-III."""
    problem = get_problem("dtlz2", n_var=12, n_obj=4)
    directions = get_reference_directions("das-dennis", 4, n_partitions=7)
    count = len(directions)
    mine = minimize(problem, ours(problem, count, 120, 1), ("n_gen", 120), seed=1, copy_algorithm=False).F
    theirs = minimize(problem, NSGA3(directions, pop_size=count), ("n_gen", 120), seed=1).F
    values = [moocore.hypervolume(front, ref=np.full(4, 1.1)) for front in (mine, theirs)]
    assert values[0] > 0.98 * values[1]


def test_result_is_pymoo_s():
    problem = get_problem("zdt1")
    algorithm = ours(problem, 20, 5, 1)
    result = minimize(problem, algorithm, ("n_gen", 5), seed=1, copy_algorithm=False)
    assert result.X.shape[1] == problem.n_var
    assert len(result.F) == len(result.X)
    assert algorithm.evaluator.n_eval == 100


@pytest.mark.parametrize("name", ["zdt1", "dtlz2"])
def test_taken_up_it_ends_where_it_would_have(name):
    problem = get_problem(name) if name == "zdt1" else get_problem(name, n_var=9, n_obj=4)
    ends = []
    for broken in (None, 7):
        algorithm = ours(problem, 30, 15, 3)
        algorithm.setup(problem, termination=("n_gen", 15), seed=3)
        while algorithm.has_next():
            algorithm.next()
            if algorithm.n_iter - 1 == broken:
                standing = algorithm.standing
                algorithm = ours(problem, 30, 15, 3)
                algorithm.setup(problem, termination=("n_gen", 15), seed=3)
                algorithm.take_up(standing)
        ends.append(algorithm.members.points)
    np.testing.assert_array_equal(*ends)
