"""How complete and how repeatable the fronts of the shipped studies are.

    python tests/benchmarks/bench_fronts.py [study ...] [--designs N] [--seeds N]

For every study: wall time of the whole command, by concept the share of the joint hypervolume that the search
had found (an audit of N designs a study: quasi-random points, linear steps, mating), and the spread of
the hypervolume over seeds, in one box for all of them.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import moocore
import numpy as np

from optimizer.audit.audit import REFERENCE
from optimizer.audit.audited_run import audit_run
from optimizer.objectives import OBJECTIVES
from optimizer.runs.stored_run import read_run

ROOT = Path(__file__).parents[2]
STUDIES = ("rooftop_5kw", "depot_10kw_three_phase", "backup_3kva")


def searched(name: str, seed: int, folder: Path) -> float:
    """Search a study by its command; wall time [s]."""
    started = time.perf_counter()
    command = [sys.executable, "-m", "optimizer.cli", "search", f"studies/{name}.toml"]
    subprocess.run(
        [*command, "--seed", str(seed), "--run", str(folder)], cwd=ROOT, check=True, capture_output=True
    )
    return time.perf_counter() - started


def spread(folders: list[Path]) -> dict[str, tuple[float, float]]:
    """By concept the greatest less the least hypervolume over seeds, and the standard deviation, over the
    mean [-].
    """
    runs = [read_run(folder) for folder in folders]
    columns = [OBJECTIVES[name].column for name in runs[0].study.objectives]
    found = {}
    for concept in runs[0].table.concept.unique():
        fronts = [run.table[run.table.concept == concept][columns].to_numpy() for run in runs]
        together = np.concatenate(fronts)
        best = together[moocore.is_nondominated(together)]
        low, width = best.min(0), np.ptp(best, axis=0)
        values = []
        for front in fronts:
            scaled = (front - low) / width
            scaled = scaled[(scaled < REFERENCE).all(-1)]
            values.append(moocore.hypervolume(scaled, ref=np.full(len(columns), REFERENCE)))
        found[concept] = np.ptp(values) / np.mean(values), np.std(values) / np.mean(values)
    return found


def main(names: list[str], designs: int, seeds: int) -> None:
    """Print all of it."""
    for name in names:
        with tempfile.TemporaryDirectory() as home:
            folders = [Path(home) / str(seed) for seed in range(1, seeds + 1)]
            seconds = [searched(name, seed, folder) for seed, folder in enumerate(folders, start=1)]
            print(f"{name}: command to dashboard, median {np.median(seconds):.1f} s (goal: at most 10 s)")
            for concept, (whole, deviation) in spread(folders).items() if seeds > 1 else ():
                print(
                    f"  {concept:36} spread over {seeds} seeds {whole:6.2%} from end to end, "
                    f"{deviation:6.2%} standard deviation (goal: at most 0.5 %)"
                )
            for one in audit_run(folders[0], designs=designs, seed=1).found:
                print(
                    f"  {one.concept.name:36} share of the joint hypervolume {one.share:7.2%} "
                    f"(goal: at least 99 %), {one.evaluations:,} designs"
                )


if __name__ == "__main__":
    parser = argparse.ArgumentParser()
    parser.add_argument("studies", nargs="*", default=STUDIES)
    parser.add_argument("--designs", type=int, default=2_000_000)
    parser.add_argument("--seeds", type=int, default=10)
    given = parser.parse_args()
    main(list(given.studies), given.designs, given.seeds)
