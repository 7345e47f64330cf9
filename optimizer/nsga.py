"""pymoo's NSGA-II with its mating and survival done on whole arrays.

The algorithm object, its loop, its termination and its result are pymoo's; ranks and crowding distances are
pymoo's functions. Only the steps that pymoo runs once per individual in Python are replaced: they cost
several times what they do (selection by binary tournament, simulated binary crossover, polynomial mutation:
Deb & Agrawal 1995; Deb et al. 2002).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, cast

import numpy as np
from moocore import pareto_rank
from numpy.typing import NDArray
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.core.evaluator import Evaluator
from pymoo.core.population import Population
from pymoo.core.problem import Problem
from pymoo.operators.survival.rank_and_crowding.metrics import calc_crowding_distance

Array = NDArray[np.float64]
CROSSOVER_PROBABILITY = 0.9
CROSSOVER_INDEX = 12.0
MUTATION_INDEX = 5.0
MATING_ROUNDS = 5


class ArrayEvaluator(Evaluator):
    """Evaluates a whole population through the problem; leaves F and the constraint violation as arrays."""

    def __init__(self, assess: Callable[[Array], tuple[Array, Array]]) -> None:
        super().__init__()
        self.assess = assess

    def eval(self, problem: Problem, pop: Any, **kwargs: Any) -> Any:
        """Set `pop.F` and `pop.violation`, both (n, ...) arrays, and count the evaluations."""
        pop.F, pop.violation = self.assess(pop.points)
        self.n_eval += len(pop)
        return pop


class PointPopulation(Population):
    """A population whose points, objectives and violations are arrays beside pymoo's list of individuals."""

    points: Array
    F: Array
    violation: Array

    @classmethod
    def of(cls, points: Array) -> PointPopulation:
        """Population of the given points; its individuals stay empty, nothing reads them."""
        population = cast(PointPopulation, np.empty(len(points), dtype=object).view(cls))
        population.points = points
        return population

    def set(self, *args: Any, **kwargs: Any) -> PointPopulation:
        """Ignore attributes that pymoo would put on every individual (generation numbers)."""
        return self


class ArrayNSGA2(NSGA2):
    """NSGA-II over a unit cube.

    Args:
        pop_size: candidates per generation [-].
        repaired: maps points to valid ones (snapping of categories and whole numbers).
        redrawn: true for axes that a mutation draws anew instead of moving them a little.
        first: points of the first generation (pop_size, k).
        kwargs: as pymoo's NSGA2 takes them.
    """

    def __init__(
        self,
        pop_size: int,
        repaired: Callable[[Array], Array],
        redrawn: NDArray[np.bool_],
        first: Array,
        **kwargs: Any,
    ) -> None:
        super().__init__(pop_size=pop_size, **kwargs)
        self.repaired = repaired
        self.redrawn = redrawn
        self.first = first

    def _initialize_infill(self) -> PointPopulation:
        return PointPopulation.of(self.first)

    def _initialize_advance(self, infills: Any = None, **kwargs: Any) -> None:
        self._survive(infills.points, infills.F, infills.violation)

    def _infill(self) -> PointPopulation:
        rng, known = self.random_state, {row.tobytes() for row in self.points}
        children: list[Array] = []
        for _ in range(MATING_ROUNDS):
            parents = tournament(rng, self.pop_size, self.violation, self.rank, self.crowding)
            born = crossover(rng, self.points[parents[:, 0]], self.points[parents[:, 1]])
            born = self.repaired(mutation(rng, born, self.redrawn))
            for row in born:
                key = row.tobytes()
                if key not in known:
                    known.add(key)
                    children.append(row)
            if len(children) >= self.n_offsprings:
                break
        return PointPopulation.of(np.array(children[: self.n_offsprings]))

    def _advance(self, infills: Any = None, **kwargs: Any) -> None:
        self._survive(
            np.concatenate([self.points, infills.points]),
            np.concatenate([self.F, infills.F]),
            np.concatenate([self.violation, infills.violation]),
        )

    def _survive(self, points: Array, objectives: Array, violation: Array) -> None:
        kept, self.rank, self.crowding = survivors(objectives, violation, self.pop_size)
        self.points, self.F, self.violation = points[kept], objectives[kept], violation[kept]
        self.pop = PointPopulation.of(self.points)

    def _set_optimum(self, **kwargs: Any) -> None:
        self.opt = self.pop

    def _finalize(self) -> None:
        best = self.rank == 0 if (self.violation <= 0.0).any() else self.violation == self.violation.min()
        self.opt = Population.new("X", self.points[best], "F", self.F[best], "G", self.violation[best, None])


def tournament(
    rng: np.random.Generator, pairs: int, violation: Array, rank: Array, crowding: Array
) -> NDArray[np.int64]:
    """Binary tournaments for `pairs` pairs of parents: less violation, then lower rank, then more crowding
    distance.
    """
    first, second = rng.integers(len(rank), size=(2, pairs, 2))
    better = np.where(crowding[second] > crowding[first], second, first)
    better = np.where(rank[second] < rank[first], second, np.where(rank[first] < rank[second], first, better))
    return np.where(
        violation[second] < violation[first],
        second,
        np.where(violation[first] < violation[second], first, better),
    )


def crossover(rng: np.random.Generator, mothers: Array, fathers: Array) -> Array:
    """Simulated binary crossover in [0, 1], one child a pair, each axis blended with probability one half."""
    spread = rng.random(mothers.shape)
    low = spread <= 0.5
    power = 1.0 / (CROSSOVER_INDEX + 1.0)
    beta = np.where(low, 2.0 * spread, 0.5 / np.maximum(1.0 - spread, 1e-12)) ** power
    side = np.where(rng.random(mothers.shape) < 0.5, 1.0, -1.0)
    blended = 0.5 * ((mothers + fathers) + side * beta * (mothers - fathers))
    active = rng.random((len(mothers), 1)) < CROSSOVER_PROBABILITY
    crossed = active & (rng.random(mothers.shape) < 0.5)
    return np.where(crossed, blended, mothers)


def mutation(rng: np.random.Generator, points: Array, redrawn: NDArray[np.bool_]) -> Array:
    """Polynomial mutation in [0, 1] of about one axis a point; axes of distinct choices are drawn anew
    instead.
    """
    chosen = rng.random(points.shape) < 1.0 / points.shape[1]
    draw = rng.random(points.shape)
    power = 1.0 / (MUTATION_INDEX + 1.0)
    step = np.where(
        draw < 0.5, (2.0 * draw) ** power - 1.0, 1.0 - (2.0 * np.maximum(1.0 - draw, 0.0)) ** power
    )
    return np.where(chosen, np.where(redrawn, draw, points + step), points)


def survivors(objectives: Array, violation: Array, count: int) -> tuple[NDArray[np.int64], Array, Array]:
    """Choose `count` candidates: feasible ones by rank and crowding distance, then the least violating ones.

    Returns:
        Their rows, their ranks and their crowding distances.
    """
    feasible = np.flatnonzero(violation <= 0.0)
    others = np.flatnonzero(violation > 0.0)
    rank = np.full(len(violation), len(violation), dtype=np.int64)
    crowding = np.zeros(len(violation))
    if len(feasible):
        rank[feasible] = pareto_rank(objectives[feasible])
        for level in range(rank[feasible].max() + 1):
            front = feasible[rank[feasible] == level]
            crowding[front] = calc_crowding_distance(objectives[front])
            if (rank[feasible] <= level).sum() >= count:
                break
    order = np.lexsort((-crowding[feasible], rank[feasible]))
    kept = np.concatenate([feasible[order], others[np.argsort(violation[others], kind="stable")]])[:count]
    return kept, rank[kept], crowding[kept]
