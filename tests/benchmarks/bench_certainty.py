"""How near the estimate behind `rank_by = "95 percent"` comes to Monte Carlo, and how many inverters keep the
limits of a nominal and of a robust front.

    python tests/benchmarks/bench_certainty.py [study] [--population 200] [--generations 100]

Searches a study both ways, takes designs evenly along every front, and samples 4,096 inverters of each.
"""

from __future__ import annotations

import argparse
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

from optimizer.certainty.tolerance import tolerance
from optimizer.evolution.populations import search
from optimizer.evolution.ranking import high_figures
from optimizer.objectives import OBJECTIVES
from optimizer.prepared import prepare, search_space
from optimizer.runs.fronts import front
from optimizer.study.schema import RANKINGS
from optimizer.study.study import Study

ROOT = Path(__file__).parents[2]
EACH, SAMPLES = 15, 4096


def held_against_samples(study: Study) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Errors of the 95 % values [%], shares that keep the limit kept least, and all limits, over designs."""
    found = front(search(study, seed=1))
    errors, least, together = [], [], []
    for concept in study.concepts:
        points = found.points.get(concept.name)
        if points is None:
            continue
        space = search_space(study, concept)
        chosen = points[np.linspace(0, len(points) - 1, EACH).astype(int)]
        high = high_figures(space, chosen, list(OBJECTIVES.values())).objectives
        for row, point in enumerate(chosen):
            sampled = tolerance(study, space.inverter, space.designs(point[None]), samples=SAMPLES)
            known = np.array([sampled.bands[name].high for name in OBJECTIVES])
            errors.append(100.0 * (high[row] / known - 1.0))
            least.append(min(sampled.holding.values()))
            together.append(sampled.all_hold)
    return np.array(errors), np.array(least), np.array(together)


def main(name: str, population: int, generations: int) -> None:
    """Print all of it."""
    study = Study.read(ROOT / "studies" / f"{name}.toml").with_effort(population, generations)
    prepare(study)
    for ranking in RANKINGS:
        started = time.perf_counter()
        asked = replace(study, search=replace(study.search, rank_by=ranking))
        errors, least, together = held_against_samples(asked)
        print(
            f"ranked by {ranking} values: {len(errors)} designs, {time.perf_counter() - started:.0f} s in all"
        )
        for place, objective in enumerate(OBJECTIVES):
            own = errors[:, place]
            worst = own[np.abs(own).argmax()]
            print(f"  95 % of {objective:27s} off by {own.mean():+6.2f} %, at worst {worst:+6.2f} %")
        for words, values in (("the limit kept least", least), ("all limits", together)):
            print(f"  {words}: kept by {np.median(values):.1%} in the median, {values.min():.1%} at worst")


if __name__ == "__main__":
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("study", nargs="?", default="rooftop_5kw")
    parser.add_argument("--population", type=int, default=200)
    parser.add_argument("--generations", type=int, default=100)
    main(**{key if key != "study" else "name": value for key, value in vars(parser.parse_args()).items()})
