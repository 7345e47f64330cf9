"""How complete a front is: what quasi-random designs by the million and a local polish add to it."""

from __future__ import annotations

import os
from collections.abc import Callable
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass

import moocore
import numpy as np
from numpy.typing import NDArray

from optimizer.audit.polish import CONTINUED, FIRST_BOUND, polish_round
from optimizer.evolution.mating import Members, new_rows, offspring
from optimizer.evolution.populations import process_context
from optimizer.evolution.problem import Archive, ClassProblem
from optimizer.evolution.screening import quasi_random
from optimizer.evolution.survival import survivors
from optimizer.prepared import prepare, search_space
from optimizer.runs.fronts import distinct_rows
from optimizer.study.concepts import Concept
from optimizer.study.study import Study

Array = NDArray[np.float64]

BLOCK = 16_384
POLISH_SHARE = 0.1
"""Of an audit's designs: polish of the front, half of it linear steps, half mating of its members."""
POLISHED = 300
"""Members of a front that are polished in a round, spread over it."""
MATED = 500
REFERENCE = 1.1
"""Corner of the box in which hypervolume is taken: a tenth of the joint front's range beyond its worst, the
strictest usual choice.
"""
LARGEST_EXACT = 4000
"""Designs up to which a hypervolume of many objectives is taken over all, beyond over distinct ones."""


@dataclass(frozen=True)
class ConceptAudit:
    """What an audit found for one concept.

    Attributes:
        concept: its bridge and device class.
        evaluations: designs evaluated [-]; feasible: of them [-].
        share: of the joint hypervolume that the front had [-].
        front: designs it had [-].
        beaten: of them, those that a design of the audit dominates [-].
        points, objectives, filter_volume: the joint front.
    """

    concept: Concept
    evaluations: int
    feasible: int
    share: float
    front: int
    beaten: int
    points: Array
    objectives: Array
    filter_volume: Array


class _Joint:
    """The non-dominated designs seen so far; takes in an archive block by block, in constant memory."""

    def __init__(self, points: Array, objectives: Array, filter_volume: Array) -> None:
        self.points, self.objectives, self.filter_volume = points, objectives, filter_volume
        self.feasible = 0

    def take(self, archive: Archive) -> None:
        """Take in an archive's feasible candidates and empty it."""
        points, objectives, volume = archive.feasible()
        archive.points, archive.objectives, archive.filter_volume = [], [], []
        self.feasible += len(points)
        if len(points):
            together = np.concatenate([self.objectives, objectives])
            kept = moocore.is_nondominated(together)
            self.points = np.concatenate([self.points, points])[kept]
            self.filter_volume = np.concatenate([self.filter_volume, volume])[kept]
            self.objectives = together[kept]


def audit_concept(
    study: Study,
    concept: Concept,
    front: Array,
    designs: int,
    seed: int,
    report: Callable[[str, int], None] | None = None,
) -> ConceptAudit:
    """Audit the front of one concept.

    Args:
        study: the study searched.
        concept: one of its concepts.
        front: its designs' places in the search space (n, k).
        designs: to evaluate, about [-].
        seed: of the quasi-random sequence and the mating.
        report: told the concept and the designs evaluated so far.
    """
    problem = ClassProblem(search_space(study, concept))
    problem.figures(front)
    joint = _Joint(*(block[:0] for block in problem.archive.feasible()))
    joint.take(problem.archive)
    found, already = joint.objectives, problem.archive.evaluations

    def done() -> int:
        joint.take(problem.archive)
        evaluated = problem.archive.evaluations - already
        if report:
            report(concept.name, evaluated)
        return evaluated

    start, end = 0, int((1.0 - POLISH_SHARE) * designs)
    while start < end:
        count = min(BLOCK, end - start)
        problem.figures(problem.space.repaired(quasi_random(seed, start, count, problem.n_var)))
        start += count
        done()
    rng = np.random.default_rng([seed, study.concepts.index(concept)])
    bound = FIRST_BOUND
    while len(joint.points) and done() < designs:
        chosen = _spread(rng, joint.objectives, POLISHED)
        polish_round(problem, joint.points[chosen], np.ptp(joint.objectives, axis=0), bound)
        bound *= CONTINUED
        done()
        _mate(problem, joint, rng, POLISHED * (problem.n_var + 1))
    done()
    return ConceptAudit(
        concept,
        problem.archive.evaluations - already,
        joint.feasible - len(found),
        hypervolume_share(found, joint.objectives),
        len(front),
        _beaten(found, joint.objectives),
        joint.points,
        joint.objectives,
        joint.filter_volume,
    )


def _spread(rng: np.random.Generator, objectives: Array, count: int) -> NDArray[np.int64]:
    """Rows drawn from those that can be told apart."""
    rows = distinct_rows(objectives, 1e-3)
    return rng.permutation(rows)[:count]


def _mate(problem: ClassProblem, joint: _Joint, rng: np.random.Generator, candidates: int) -> None:
    """Mate members of the joint front for a few generations."""
    chosen = rng.permutation(len(joint.points))[:MATED]
    points, objectives = joint.points[chosen], joint.objectives[chosen]
    violation = np.zeros(len(points))
    end = problem.archive.evaluations + candidates
    while problem.archive.evaluations < end:
        kept, rank, crowding = survivors(objectives, violation, MATED)
        points, objectives, violation = points[kept], objectives[kept], violation[kept]
        members = Members(points, objectives, violation, rank, crowding)
        born = problem.space.repaired(offspring(rng, members, problem.space.axes, MATED))
        born = new_rows(born, points)
        values, missing = problem.assess(born)
        points, objectives = np.concatenate([points, born]), np.concatenate([objectives, values])
        violation = np.concatenate([violation, missing])


def hypervolume_share(found: Array, joint: Array) -> float:
    """Hypervolume of a front over that of the joint one [-].

    Args:
        found, joint: objectives of non-dominated designs; the joint front holds or dominates the other.
    """
    if not len(joint):
        return 1.0
    low, spread = joint.min(0), np.ptp(joint, axis=0)
    spread = np.where(spread > 0.0, spread, 1.0)

    def value(objectives: Array) -> float:
        scaled = (objectives - low) / spread
        scaled = scaled[(scaled < REFERENCE).all(-1)]
        if len(scaled) > LARGEST_EXACT and joint.shape[1] > 3:
            scaled = scaled[distinct_rows(scaled, 2e-3)]
        return (
            float(moocore.hypervolume(scaled, ref=np.full(joint.shape[1], REFERENCE))) if len(scaled) else 0.0
        )

    return value(found) / value(joint)


def _beaten(found: Array, joint: Array) -> int:
    """Designs of a front that are no longer on the joint one [-]."""
    together = np.concatenate([found, joint])
    return (
        int((~moocore.is_nondominated(together, keep_weakly=True)[: len(found)]).sum()) if len(found) else 0
    )


def audit(
    study: Study,
    fronts: dict[str, Array],
    *,
    designs: int,
    seed: int,
    workers: int | None = None,
    report: Callable[[str, int], None] | None = None,
) -> tuple[ConceptAudit, ...]:
    """Audit all concepts of a study, side by side on the cores.

    Args:
        study: the study searched.
        fronts: places in the search space by the concepts' names.
        designs: to evaluate in all, about [-].
        seed: same seed, same result, whatever the number of workers.
        workers: processes; default one per core.
        report: told a concept and its designs evaluated so far, as they are.
    """
    prepare(study)
    concepts = [concept for concept in study.concepts if concept.name in fronts]
    each = max(designs // max(len(concepts), 1), 1)
    count = min(workers or os.cpu_count() or 1, len(concepts))
    if count <= 1:
        return tuple(
            audit_concept(study, concept, fronts[concept.name], each, seed, report) for concept in concepts
        )
    with ProcessPoolExecutor(count, mp_context=process_context()) as pool:
        futures = [
            pool.submit(audit_concept, study, concept, fronts[concept.name], each, seed)
            for concept in concepts
        ]
        found = []
        for future, concept in zip(futures, concepts, strict=True):
            found.append(future.result())
            if report:
                report(concept.name, found[-1].evaluations)
        return tuple(found)
