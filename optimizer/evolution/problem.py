"""The optimisation problem of one device class: points of the unit cube in, objectives and violations out; an
archive beside.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray
from pymoo.core.problem import Problem

from optimizer.evolution.ranking import RANKED_BY
from optimizer.objectives import OBJECTIVES, Objective
from optimizer.space import SearchSpace

Array = NDArray[np.float64]


@dataclass
class Archive:
    """Every candidate evaluated, feasible ones with their points; of the others what ruled them out.

    Attributes:
        points, objectives: blocks of feasible candidates; filter_volume: of each [m3].
        evaluations: all candidates [-].
        failures: per constraint, how many candidates violated it [-].
        nearest: margins of the candidate of least violation (c,) [-], nearest_point: its place (k,), and that
            violation.
    """

    points: list[Array] = field(default_factory=list)
    objectives: list[Array] = field(default_factory=list)
    filter_volume: list[Array] = field(default_factory=list)
    evaluations: int = 0
    failures: Array | None = None
    nearest: Array | None = None
    nearest_point: Array | None = None
    least_violation: float = np.inf

    def add(
        self, points: Array, objectives: Array, filter_volume: Array, margins: Array, violation: Array
    ) -> None:
        """Take in one evaluated block."""
        feasible = violation <= 0.0
        if feasible.any():
            self.points.append(points[feasible])
            self.objectives.append(objectives[feasible])
            self.filter_volume.append(filter_volume[feasible])
        self.evaluations += len(points)
        failed = (margins < 0.0).sum(0)
        self.failures = failed if self.failures is None else self.failures + failed
        closest = int(np.argmin(violation))
        if violation[closest] < self.least_violation:
            self.least_violation = float(violation[closest])
            self.nearest, self.nearest_point = margins[closest], points[closest]

    def feasible(self) -> tuple[Array, Array, Array]:
        """Points, objectives and filter volumes of all feasible candidates, in the order of evaluation."""
        if not self.points:
            return np.zeros((0, 0)), np.zeros((0, 0)), np.zeros(0)
        return (
            np.concatenate(self.points),
            np.concatenate(self.objectives),
            np.concatenate(self.filter_volume),
        )


class ClassProblem(Problem):
    """One device class of a study as a pymoo problem over the unit cube.

    Of the constraint violation, `violation_of`, no absurd value hides the rest, and less is always better.
    """

    def __init__(self, space: SearchSpace, archive: Archive | None = None) -> None:
        self.space = space
        self.chosen: tuple[Objective, ...] = tuple(OBJECTIVES[name] for name in space.study.objectives)
        self.archive = Archive() if archive is None else archive
        super().__init__(n_var=len(space.variables), n_obj=len(self.chosen), xl=0.0, xu=1.0)

    def assess(self, points: Array) -> tuple[Array, Array]:
        """Objectives (n, m) and violation (n,) of repaired points; feasible ones have violation 0."""
        objectives, margins = self.figures(points)
        return objectives, violation_of(margins)

    def figures(self, points: Array) -> tuple[Array, Array]:
        """Objectives (n, m) and margins (n, c) of repaired points, as the study ranks them; the archive takes
        them in.
        """
        found = RANKED_BY[self.space.study.search.rank_by](self.space, points, self.chosen)
        self.archive.add(
            points, found.objectives, found.filter_volume, found.margins, violation_of(found.margins)
        )
        return found.objectives, found.margins


def violation_of(margins: Array) -> Array:
    """Sum of what each negative margin misses, beyond one its logarithm (n,) [-]."""
    missing = np.maximum(-margins, 0.0)
    return np.where(missing > 1.0, 1.0 + np.log(np.maximum(missing, 1.0)), missing).sum(-1)
