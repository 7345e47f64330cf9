"""Hypervolume over wall time: this program, pymoo's own NSGA-II one design at a time, and random search.

    python tests/benchmarks/bench_hypervolume.py [study] [concept]

All three search the same concept in one process each, one after the other, for the same wall time; shares
are of the hypervolume of all three fronts together, in a box a tenth of their range beyond the worst.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

import moocore
import numpy as np
from numpy.typing import NDArray
from pymoo.algorithms.moo.nsga2 import NSGA2
from pymoo.core.problem import ElementwiseProblem
from pymoo.core.repair import Repair
from pymoo.optimize import minimize
from pymoo.termination import get_termination

from optimizer.audit.audit import hypervolume_share
from optimizer.evolution.concept_search import search_concept
from optimizer.evolution.problem import ClassProblem
from optimizer.evolution.screening import SCREENED_PER_PLACE
from optimizer.prepared import search_space
from optimizer.study.concepts import Concept
from optimizer.study.study import Study

Array = NDArray[np.float64]
ROOT = Path(__file__).parents[2]
MARKS = (0.125, 0.25, 0.5, 1.0)
Trace = list[tuple[float, int, Array]]
"""Seconds, designs evaluated, objectives of the front so far."""


def front_of(objectives: Array) -> Array:
    """The non-dominated rows."""
    return objectives[moocore.is_nondominated(objectives)] if len(objectives) else objectives


class Watch:
    """Takes down the front of a problem's archive at the marks of the time allowed."""

    def __init__(self, problem: ClassProblem, seconds: float) -> None:
        self.problem, self.seconds = problem, seconds
        self.started, self.trace = time.perf_counter(), Trace()
        self.waiting = [mark * seconds for mark in MARKS]

    def look(self) -> bool:
        """Whether there is time left."""
        passed = time.perf_counter() - self.started
        while self.waiting and passed >= self.waiting[0]:
            self.waiting.pop(0)
            objectives = self.problem.archive.feasible()[1]
            self.trace.append((passed, self.problem.archive.evaluations, front_of(objectives)))
        return bool(self.waiting)


def this_program(study: Study, concept: Concept, seconds: float) -> Trace:
    """Its search as shipped, as many generations as fit; the seconds are measured, not asked for."""
    trace: Trace = []
    for mark in MARKS:
        generations = max(int(mark * study.search.generations), 2)
        started = time.perf_counter()
        found = search_concept(study.with_effort(None, generations), concept, 1)
        trace.append((time.perf_counter() - started, found.evaluations, front_of(found.objectives)))
    return trace


def random_search(study: Study, concept: Concept, seconds: float) -> Trace:
    """Random points in the same blocks as a screening."""
    problem = ClassProblem(search_space(study, concept))
    watch, rng = Watch(problem, seconds), np.random.default_rng(1)
    block = SCREENED_PER_PLACE * study.search.population
    while watch.look():
        problem.assess(problem.space.repaired(rng.random((block, problem.n_var))))
    return watch.trace


class OneByOne(ElementwiseProblem):
    """The same problem as pymoo takes it: one design at a time."""

    def __init__(self, problem: ClassProblem) -> None:
        self.inner = problem
        super().__init__(n_var=problem.n_var, n_obj=problem.n_obj, n_ieq_constr=1, xl=0.0, xu=1.0)

    def _evaluate(self, x: Array, out: dict, *args: object, **kwargs: object) -> None:
        objectives, violation = self.inner.assess(x[None])
        out["F"], out["G"] = objectives[0], violation


class Snap(Repair):
    """The same repair."""

    def _do(self, problem: OneByOne, x: Array, **kwargs: object) -> Array:
        return problem.inner.space.repaired(x)


def plain_pymoo(study: Study, concept: Concept, seconds: float) -> Trace:
    """pymoo's NSGA-II with its own operators, population 100."""
    problem = OneByOne(ClassProblem(search_space(study, concept)))
    watch = Watch(problem.inner, seconds)
    minimize(
        problem,
        NSGA2(pop_size=100, repair=Snap()),
        get_termination("time", f"00:{int(seconds) // 60:02d}:{int(np.ceil(seconds)) % 60:02d}"),
        seed=1,
        callback=lambda algorithm: watch.look(),
    )
    while watch.waiting:
        time.sleep(0.01)
        watch.look()
    return watch.trace


def main(name: str, concept_name: str) -> None:
    """Print the table."""
    study = Study.read(ROOT / "studies" / f"{name}.toml")
    concept = study.concepts[study.concept_names.index(concept_name)]
    search_space(study, concept)
    own = this_program(study, concept, 0.0)
    seconds = own[-1][0]
    others: tuple[tuple[str, Callable[[Study, Concept, float], Trace]], ...] = (
        ("pymoo's NSGA-II, one at a time", plain_pymoo),
        ("random points in blocks", random_search),
    )
    traces = {"this program": own} | {words: run(study, concept, seconds) for words, run in others}
    joint = front_of(np.concatenate([trace[-1][2] for trace in traces.values()]))
    print(f"{study.name}, {concept.name}: share of the joint hypervolume over wall time (one process each)")
    for words, trace in traces.items():
        for passed, designs, found in trace:
            share = hypervolume_share(found, joint) if len(found) else 0.0
            print(
                f"{words:34} {passed:6.2f} s {designs:9,} designs {len(found):6,} on the front {share:8.2%}"
            )


if __name__ == "__main__":
    main(*(sys.argv[1:3] if len(sys.argv) > 2 else ("rooftop_5kw", "SiC MOSFET")))
