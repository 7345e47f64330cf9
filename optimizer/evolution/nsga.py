"""pymoo's NSGA-II and NSGA-III with mating and survival done on whole arrays.

The algorithm object, its loop, its termination and its result are pymoo's. Only what pymoo does once for each
individual in Python is replaced: it costs several times what it does.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, cast

import numpy as np
from numpy.typing import NDArray
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.core.evaluator import Evaluator
from pymoo.core.population import Population
from pymoo.core.problem import Problem

from optimizer.evolution.mating import Axes, Members, new_rows, offspring
from optimizer.evolution.survival import ReferenceSurvival, protected_survivors, survivors

Array = NDArray[np.float64]
MATING_ROUNDS = 5
SURPLUS = 1.05  # children born for each one wanted, since some are known already
MANY_OBJECTIVES = 4  # from here on reference directions (NSGA-III) spread a population, below crowding
PROTECTED_GENERATIONS = 0.3  # share of the generations in which every stratum keeps some places


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


@dataclass(frozen=True)
class Standing:
    """All that a search needs to go on: members, generation, state of its random numbers, normalisation."""

    members: Members
    generation: int
    random_state: Any
    survival: Any


class ArrayNSGA(NSGA2):
    """NSGA-II over a unit cube; from MANY_OBJECTIVES objectives on its survival is that of NSGA-III.

    Args:
        pop_size: candidates per generation [-].
        repaired: maps points to valid ones (snapping of categories and whole numbers).
        axes: parts and kinds of the axes; each choice on its stratum axis keeps some places at first.
        generations: at most [-].
        first: points to begin with (any number, k); the population is what survives of them.
        objectives: their number [-].
        kwargs: as pymoo's NSGA2 takes them.
    """

    def __init__(
        self,
        pop_size: int,
        repaired: Callable[[Array], Array],
        axes: Axes,
        first: Array,
        objectives: int,
        generations: int,
        **kwargs: Any,
    ) -> None:
        super().__init__(pop_size=pop_size, **kwargs)
        self.protected = int(PROTECTED_GENERATIONS * generations)
        self.repaired = repaired
        self.axes = axes
        self.first = first
        self.survive: Callable[[Array, Array, int], tuple[NDArray[np.int64], Array, Array]] = (
            survivors if objectives < MANY_OBJECTIVES else ReferenceSurvival(objectives, pop_size)
        )

    @property
    def standing(self) -> Standing:
        """Where the search stands, to be taken up again by `take_up`."""
        return Standing(self.members, self.n_iter, self.random_state.bit_generator.state, self.survive)

    def take_up(self, standing: Standing) -> None:
        """Go on from where a search stood; `setup` has been called."""
        self.members, self.survive = standing.members, standing.survival
        self.pop = PointPopulation.of(self.members.points)
        self.random_state.bit_generator.state = standing.random_state
        self.n_iter, self.is_initialized = standing.generation, True
        self.start_time = 0.0

    def _initialize_infill(self) -> PointPopulation:
        return PointPopulation.of(self.first)

    def _initialize_advance(self, infills: Any = None, **kwargs: Any) -> None:
        self._survive(infills.points, infills.F, infills.violation)

    def _infill(self) -> PointPopulation:
        children = np.zeros((0, self.members.points.shape[1]))
        for _ in range(MATING_ROUNDS):
            count = int(SURPLUS * self.n_offsprings) + 1
            born = self.repaired(offspring(self.random_state, self.members, self.axes, count))
            children = np.concatenate(
                [children, new_rows(born, np.concatenate([self.members.points, children]))]
            )
            if len(children) >= self.n_offsprings:
                break
        return PointPopulation.of(children[: self.n_offsprings])

    def _advance(self, infills: Any = None, **kwargs: Any) -> None:
        self._survive(
            np.concatenate([self.members.points, infills.points]),
            np.concatenate([self.members.objectives, infills.F]),
            np.concatenate([self.members.violation, infills.violation]),
        )

    def _survive(self, points: Array, objectives: Array, violation: Array) -> None:
        if self.n_iter <= self.protected and self.axes.stratum is not None:
            stratum = np.unique(points[:, self.axes.stratum], return_inverse=True)[1]
            kept, rank, crowding = protected_survivors(objectives, violation, stratum, self.pop_size)
        else:
            kept, rank, crowding = self.survive(objectives, violation, self.pop_size)
        self.members = Members(points[kept], objectives[kept], violation[kept], rank, crowding)
        self.pop = PointPopulation.of(self.members.points)

    def _set_optimum(self, **kwargs: Any) -> None:
        self.opt = self.pop

    def _finalize(self) -> None:
        violation = self.members.violation
        best = self.members.rank == 0 if (violation <= 0.0).any() else violation == violation.min()
        self.opt = Population.new(
            "X", self.members.points[best], "F", self.members.objectives[best], "G", violation[best, None]
        )
