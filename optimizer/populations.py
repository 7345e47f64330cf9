"""The search: one NSGA-II population per concept, side by side on the cores, every evaluation kept."""

from __future__ import annotations

import multiprocessing
import os
import time
from collections.abc import Callable
from concurrent.futures import Future, ProcessPoolExecutor
from dataclasses import dataclass
from multiprocessing.context import BaseContext
from queue import Empty
from typing import Any

import moocore
import numpy as np
from numpy.typing import NDArray

from models.inverter import Inverter
from optimizer.catalog_listing import read_catalog
from optimizer.concepts import Concept
from optimizer.nsga import ArrayEvaluator, ArrayNSGA2
from optimizer.objectives import OBJECTIVES, requirements_of
from optimizer.problem import ClassProblem
from optimizer.space import SearchSpace
from optimizer.study import Study

Array = NDArray[np.float64]
RECORD_EVERY = 5  # generations between two hypervolume records


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
        nearest: margins of the least violating candidate [-].
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
    seconds: dict[str, float]


@dataclass(frozen=True)
class SearchResult:
    """All populations of a study, in the study's order."""

    study: Study
    seed: int
    classes: tuple[ClassResult, ...]

    @property
    def evaluations(self) -> int:
        """Candidates evaluated in all populations [-]."""
        return sum(found.evaluations for found in self.classes)


_prepared: dict[tuple[str, str], Inverter] = {}


def prepared_inverter(study: Study, bridge: str | None = None) -> Inverter:
    """The study's inverter with everything solved that does not depend on a candidate; kept for the last
    study asked.

    Args:
        study: the study.
        bridge: one of its bridges; its own where none is named.

    Raises:
        InputError: where the study names parts that the catalogue does not have.
    """
    key = study.file_hash, bridge or study.specification.bridge
    if key not in _prepared:
        for other in [other for other in _prepared if other[0] != study.file_hash]:
            del _prepared[other]
        catalog = next(iter(_prepared.values())).catalog if _prepared else read_catalog(study.catalog_files)
        study.check_against(catalog)
        inverter = Inverter(study.with_bridge(key[1]).specification, catalog)
        _ = inverter.tables, inverter.sinks, inverter.ac_capacitor
        _prepared[key] = inverter
    return _prepared[key]


def search_space(study: Study, concept: Concept) -> SearchSpace:
    """The search space of one concept of a study."""
    return SearchSpace(study, prepared_inverter(study, concept.bridge), concept.device_class)


def normalised_hypervolume(study: Study, objectives: Array) -> float:
    """Share of the box between zero and the objectives' reference values that the candidates dominate [-]."""
    reference = np.array([OBJECTIVES[name].reference(study.specification) for name in study.objectives])
    scaled = objectives / reference
    scaled = scaled[(scaled < 1.0).all(-1)]
    return float(moocore.hypervolume(scaled, ref=np.ones(len(reference)))) if len(scaled) else 0.0


def search_concept(
    study: Study, concept: Concept, seed: int, report: Callable[[Progress], None] | None = None
) -> ClassResult:
    """Search one concept.

    Args:
        study: the study.
        concept: one of its concepts.
        seed: of the whole search; the concept's own generator is derived from it and the concept's position.
        report: called with the progress every few generations.
    """
    started = time.perf_counter()
    problem = ClassProblem(search_space(study, concept))
    in_models = _Stopwatch(problem.assess)
    rng = np.random.default_rng([seed, study.concepts.index(concept)])
    first = problem.space.repaired(latin_hypercube(rng, study.search.population, problem.n_var))
    algorithm = ArrayNSGA2(
        study.search.population,
        problem.space.repaired,
        problem.space.redrawn,
        first,
        evaluator=ArrayEvaluator(in_models),
        output=None,
    )
    algorithm.setup(problem, termination=("n_gen", study.search.generations), seed=int(rng.integers(2**31)))
    records: list[tuple[int, float]] = []
    generation = 0
    while algorithm.has_next():
        algorithm.next()
        generation += 1
        if generation % RECORD_EVERY == 0 or not algorithm.has_next():
            value = normalised_hypervolume(study, algorithm.F[algorithm.violation <= 0.0])
            records.append((problem.archive.evaluations, value))
            if report:
                report(Progress(concept.name, *records[-1]))
    points, objectives, filter_volume = problem.archive.feasible()
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
        seconds={"models": in_models.seconds, "search": time.perf_counter() - started - in_models.seconds},
    )


def latin_hypercube(rng: np.random.Generator, count: int, axes: int) -> Array:
    """Points of the unit cube with one in each of `count` equal parts of every axis (count, axes) [-].

    Source: McKay, Beckman, Conover (1979).
    """
    parts = np.argsort(rng.random((axes, count)), axis=1).T
    return (parts + rng.random((count, axes))) / count


class _Stopwatch:
    def __init__(self, function: Callable[[Array], Any]) -> None:
        self.function, self.seconds = function, 0.0

    def __call__(self, points: Array) -> Any:
        started = time.perf_counter()
        try:
            return self.function(points)
        finally:
            self.seconds += time.perf_counter() - started


def _constraint_names(problem: ClassProblem) -> tuple[str, ...]:
    point = problem.space.repaired(np.full((1, problem.n_var), 0.5))
    result = problem.space.inverter.evaluate(problem.space.designs(point))
    return tuple(entry.name for entry in requirements_of(problem.space.study.at_most, result))


_outbox: Any = None


def _set_outbox(outbox: Any) -> None:
    global _outbox
    _outbox = outbox


def _worker(study: Study, concept: Concept, seed: int) -> ClassResult:
    return search_concept(study, concept, seed, _outbox.put if _outbox is not None else None)


def process_context() -> BaseContext:
    """How worker processes start: by fork where there is one, since they then have everything prepared."""
    return multiprocessing.get_context(
        "fork" if "fork" in multiprocessing.get_all_start_methods() else "spawn"
    )


def search(
    study: Study,
    *,
    seed: int = 1,
    workers: int | None = None,
    report: Callable[[Progress], None] | None = None,
) -> SearchResult:
    """Search all concepts of a study.

    Args:
        study: the study.
        seed: same seed, same result, whatever the number of workers.
        workers: processes; default one per core, never more than concepts.
        report: called with every population's progress.

    Returns:
        Every feasible candidate of every population.

    Raises:
        InputError: where the study names parts that the catalogue does not have.
    """
    all_concepts = study.concepts
    for bridge in study.search.bridges:
        prepared_inverter(study, bridge)
    count = min(workers or os.cpu_count() or 1, len(all_concepts))
    if count == 1:
        found = tuple(search_concept(study, concept, seed, report) for concept in all_concepts)
        return SearchResult(study, seed, found)
    context = process_context()
    outbox = context.Queue()
    with ProcessPoolExecutor(count, mp_context=context, initializer=_set_outbox, initargs=(outbox,)) as pool:
        futures = [pool.submit(_worker, study, concept, seed) for concept in all_concepts]
        _relay(futures, outbox, report)
        return SearchResult(study, seed, tuple(future.result() for future in futures))


def _relay(
    futures: list[Future[ClassResult]], outbox: Any, report: Callable[[Progress], None] | None
) -> None:
    """Pass the workers' progress on until all are done."""
    while not all(future.done() for future in futures):
        try:
            progress = outbox.get(timeout=0.1)
        except Empty:
            continue
        if report:
            report(progress)
