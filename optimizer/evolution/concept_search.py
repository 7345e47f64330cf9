"""The search of one concept: screening, generations, hypervolume records, taking up where one was killed."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import moocore
import numpy as np
from numpy.typing import NDArray

from optimizer.evolution.nsga import ArrayEvaluator, ArrayNSGA, Standing
from optimizer.evolution.problem import Archive, ClassProblem
from optimizer.evolution.screening import first_points
from optimizer.evolution.unfinished import Unfinished
from optimizer.objectives import OBJECTIVES, requirements_of
from optimizer.prepared import search_space
from optimizer.study.concepts import Concept
from optimizer.study.study import Study

Array = NDArray[np.float64]
RECORD_EVERY = 5  # generations between two hypervolume records
GAIN_WINDOW = 40  # generations over which a gain below the study's least_gain ends a population


@dataclass(frozen=True)
class Progress:
    """Where a population stands: concept, evaluations so far, hypervolume of its feasible candidates [-]."""

    concept: str
    evaluations: int
    hypervolume: float


@dataclass(frozen=True)
class ClassResult:
    """What one population found.

    Attributes:
        concept: its bridge and device class.
        points, objectives: all feasible candidates evaluated, (k, n_var) and (k, m).
        filter_volume: of their output and emission filters (k,) [m3].
        evaluations: candidates evaluated [-].
        hypervolume: (evaluations, hypervolume) records.
        constraints: names; failures: share of candidates violating each [-].
        nearest: margins of the least violating candidate [-]; nearest_point: its place (k,).
        seconds: time in the models and in all [s].
    """

    concept: Concept
    points: Array
    objectives: Array
    filter_volume: Array
    evaluations: int
    hypervolume: list[tuple[int, float]]
    constraints: tuple[str, ...]
    failures: Array
    nearest: Array
    nearest_point: Array
    seconds: dict[str, float]


@dataclass(frozen=True)
class Halfway:
    """A population between two generations: where it stands, its archive, its records, seconds in models and
    in all.
    """

    standing: Standing
    archive: Archive
    records: list[tuple[int, float]]
    seconds: tuple[float, float]


def normalised_hypervolume(study: Study, objectives: Array) -> float:
    """Share of the box between zero and the objectives' reference values that the candidates dominate [-]."""
    reference = np.array([OBJECTIVES[name].reference(study.specification) for name in study.objectives])
    scaled = objectives / reference
    scaled = scaled[(scaled < 1.0).all(-1)]
    return float(moocore.hypervolume(scaled, ref=np.ones(len(reference)))) if len(scaled) else 0.0


def search_concept(
    study: Study,
    concept: Concept,
    seed: int,
    report: Callable[[Progress], None] | None = None,
    unfinished: Unfinished | None = None,
) -> ClassResult:
    """Search one concept.

    Args:
        study: the study.
        concept: one of its concepts.
        seed: of the whole search; the concept's own generator is derived from it and the concept's position.
        report: called with the progress every few generations.
        unfinished: where the population is kept every few seconds, and taken up where it was left.
    """
    kept = unfinished.kept(concept.name) if unfinished else None
    if isinstance(kept, ClassResult):
        return kept
    halfway = kept if isinstance(kept, Halfway) else None
    problem = ClassProblem(search_space(study, concept), halfway.archive if halfway else Archive())
    clock = _Clock(problem.assess, *(halfway.seconds if halfway else (0.0, 0.0)))
    rng = np.random.default_rng([seed, study.concepts.index(concept)])
    algorithm = _algorithm(study, problem, rng, clock)
    records = list(halfway.records) if halfway else []
    if halfway:
        algorithm.take_up(halfway.standing)
    while algorithm.has_next() and not _at_rest(records, study.search.least_gain):
        algorithm.next()
        if (algorithm.n_iter - 1) % RECORD_EVERY == 0 or not algorithm.has_next():
            members = algorithm.members
            value = normalised_hypervolume(study, members.objectives[members.violation <= 0.0])
            records.append((problem.archive.evaluations, value))
            if report:
                report(Progress(concept.name, *records[-1]))
        if unfinished and unfinished.due() and algorithm.has_next():
            unfinished.keep(
                concept.name, Halfway(algorithm.standing, problem.archive, records, clock.seconds())
            )
    found = _result(concept, problem, records, clock)
    if unfinished:
        unfinished.keep(concept.name, found)
    return found


def _algorithm(study: Study, problem: ClassProblem, rng: np.random.Generator, clock: _Clock) -> ArrayNSGA:
    first = first_points(rng, problem.space, study.search.population)
    algorithm = ArrayNSGA(
        study.search.population,
        problem.space.repaired,
        problem.space.axes,
        first,
        problem.n_obj,
        study.search.generations,
        evaluator=ArrayEvaluator(clock),
        output=None,
    )
    algorithm.setup(problem, termination=("n_gen", study.search.generations), seed=int(rng.integers(2**31)))
    return algorithm


def _at_rest(records: list[tuple[int, float]], least_gain: float) -> bool:
    """Whether the hypervolume gained too little over the last GAIN_WINDOW generations to go on."""
    window = GAIN_WINDOW // RECORD_EVERY
    if least_gain == 0.0 or len(records) <= window or records[-1 - window][1] == 0.0:
        return False
    best = max(value for _, value in records)
    before = max(value for _, value in records[:-window])
    return best <= before * (1.0 + least_gain)


def _result(
    concept: Concept, problem: ClassProblem, records: list[tuple[int, float]], clock: _Clock
) -> ClassResult:
    points, objectives, filter_volume = problem.archive.feasible()
    in_models, in_all = clock.seconds()
    return ClassResult(
        concept=concept,
        points=points,
        objectives=objectives,
        filter_volume=filter_volume,
        evaluations=problem.archive.evaluations,
        hypervolume=records,
        constraints=_constraint_names(problem),
        failures=np.asarray(problem.archive.failures) / max(problem.archive.evaluations, 1),
        nearest=np.asarray(problem.archive.nearest),
        nearest_point=np.asarray(problem.archive.nearest_point),
        seconds={"models": in_models, "search": in_all - in_models},
    )


class _Clock:
    """Counts the time in the models, and in all since it was made."""

    def __init__(self, function: Callable[[Array], Any], in_models: float, in_all: float) -> None:
        self.function, self.in_models = function, in_models
        self.started = time.perf_counter() - in_all

    def __call__(self, points: Array) -> Any:
        started = time.perf_counter()
        try:
            return self.function(points)
        finally:
            self.in_models += time.perf_counter() - started

    def seconds(self) -> tuple[float, float]:
        """In the models, in all [s]."""
        return self.in_models, time.perf_counter() - self.started


def _constraint_names(problem: ClassProblem) -> tuple[str, ...]:
    point = problem.space.repaired(np.full((1, problem.n_var), 0.5))
    result = problem.space.inverter.evaluate(problem.space.designs(point))
    return tuple(entry.name for entry in requirements_of(problem.space.study.at_most, result))
