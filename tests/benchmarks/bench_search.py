"""The rooftop study from command to dashboard, beside pymoo alone on a free problem of the same size.

    python tests/benchmarks/bench_search.py [repeats]

Prints seconds and their ratio, medians of runs taken in turn; a run is a process of its own, imports
included.
"""

from __future__ import annotations

import resource
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
FREE = Path(__file__).with_name("free_problem.py")


def seconds(command: list[str]) -> float:
    """Wall-clock time of a command that must succeed [s]."""
    started = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True, cwd=ROOT)
    return time.perf_counter() - started


def main(repeats: int) -> None:
    """Run both in turn and print medians and ratio."""
    with tempfile.TemporaryDirectory() as folder:
        rooftop = [
            sys.executable,
            "-m",
            "optimizer.cli",
            "search",
            "studies/rooftop_5kw.toml",
            "--run",
            f"{folder}/run",
        ]
        free = [sys.executable, str(FREE), "4", "500", "170"]
        pairs = [(seconds(rooftop), seconds(free)) for _ in range(repeats)]
    ours, theirs = (statistics.median(column) for column in zip(*pairs, strict=True))
    help_time = statistics.median(
        seconds([sys.executable, "-m", "optimizer.cli", "--help"]) for _ in range(5)
    )
    memory = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
    print(f"rooftop study, command to dashboard   {ours:6.2f} s   (goal: at most 10 s)")
    print(f"pymoo alone, 4 x 500 x 170, free      {theirs:6.2f} s")
    print(f"ratio                                 {ours / theirs:6.2f}     (goal: at most 2)")
    print(f"--help                                {help_time:6.2f} s   (goal: below 0.4 s)")
    print(f"peak memory of one process            {memory:6.0f} MB  (goal: below 600 MB)")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 3)
