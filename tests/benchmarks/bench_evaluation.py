"""Designs evaluated per second on one core, all load levels included, beside a plain NumPy baseline of the
same run.

    python tests/benchmarks/bench_evaluation.py [study]

Candidates are random points of the search space, and the feasible ones of a short search, at population size
and in a large block. The baseline is 300 elementwise operations on as many numbers, the price of a small
vectorised model.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

from models.designs import Designs
from optimizer.evolution.concept_search import search_concept
from optimizer.prepared import search_space
from optimizer.study.study import Study

ROOT = Path(__file__).parents[2]
LARGE, POPULATION, REPEATS = 16_384, 100, 9


def rate(work: Callable[[], object], count: int) -> float:
    """Items per second, median over repeats."""
    times = []
    for _ in range(REPEATS):
        started = time.perf_counter()
        work()
        times.append(time.perf_counter() - started)
    return count / statistics.median(times)


def elementwise(count: int) -> None:
    """300 elementwise operations on `count` numbers."""
    values = np.linspace(0.1, 1.0, count)
    for _ in range(100):
        values = values * 1.0001 + 0.0001
        values = values / 1.0001
    assert np.isfinite(values).all()


def first_rows(designs: Designs, count: int) -> Designs:
    """The first `count` candidates, repeated where there are fewer."""
    return designs.take(np.arange(count) % len(designs))


def main(name: str) -> None:
    """Print rates for every class of a study."""
    study = Study.read(ROOT / "studies" / f"{name}.toml")
    rng = np.random.default_rng(1)
    base = rate(lambda: elementwise(LARGE), LARGE)
    print(
        f"{study.name}: designs per second on one core (goals: 50,000 in large blocks, 10,000 at population)"
    )
    print(f"{'candidates':42} {'large block':>12} {'population':>12} {'large block / baseline':>24}")
    for concept in study.concepts:
        space = search_space(study, concept)
        inverter = space.inverter
        points = space.repaired(rng.random((LARGE, len(space.variables))))
        found = search_concept(study.with_effort(100, 30), concept, 1).points
        for words, chosen in (("random", points), ("feasible", found)):
            designs = space.designs(chosen)
            large, small = first_rows(designs, LARGE), first_rows(designs, POPULATION)
            fast = rate(lambda large=large, inverter=inverter: inverter.evaluate(large), LARGE)
            slow = rate(lambda small=small, inverter=inverter: inverter.evaluate(small), POPULATION)
            print(f"{concept.name + ', ' + words:42} {fast:12,.0f} {slow:12,.0f} {fast / base:24.4f}")


if __name__ == "__main__":
    main(sys.argv[1] if len(sys.argv) > 1 else "rooftop_5kw")
