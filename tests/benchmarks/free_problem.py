"""What pymoo alone takes: its own NSGA-II on a free problem of the rooftop study's size, populations side by
side.

Run as a program of its own by bench_search.py, so that imports count on both sides.
"""

from __future__ import annotations

import os
import sys
from concurrent.futures import ProcessPoolExecutor
from multiprocessing import get_context

import numpy as np
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.core.problem import Problem
from pymoo.core.repair import Repair
from pymoo.optimize import minimize

VARIABLES, OBJECTIVES, CATEGORIES = 22, 3, 8


class Free(Problem):
    """A few array operations: as near to nothing as an evaluation can be."""

    def __init__(self) -> None:
        super().__init__(n_var=VARIABLES, n_obj=OBJECTIVES, n_ieq_constr=1, xl=0.0, xu=1.0)

    def _evaluate(self, x: np.ndarray, out: dict, *args: object, **kwargs: object) -> None:
        spread = 1.0 + x[:, OBJECTIVES:].sum(-1)
        out["F"] = np.stack([x[:, 0] * spread, x[:, 1] * spread, (2.0 - x[:, 0] - x[:, 1]) * spread], axis=-1)
        out["G"] = x[:, :1] - 2.0


class Snap(Repair):
    """Round some variables, as a mixed problem has to."""

    def _do(self, problem: Problem, x: np.ndarray, **kwargs: object) -> np.ndarray:
        x[:, -CATEGORIES:] = np.rint(x[:, -CATEGORIES:] * 4.0) / 4.0
        return x


def one(seed: int, population: int, generations: int) -> int:
    """One population; returns the size of its front."""
    algorithm = NSGA2(pop_size=population, repair=Snap())
    result = minimize(Free(), algorithm, ("n_gen", generations), seed=seed, verbose=False)
    return len(result.F)


if __name__ == "__main__":
    populations, population, generations = (int(word) for word in sys.argv[1:4])
    with ProcessPoolExecutor(os.cpu_count(), mp_context=get_context("fork")) as pool:
        list(pool.map(one, range(populations), [population] * populations, [generations] * populations))
