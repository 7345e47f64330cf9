"""What the engines of a batch cost and how they scale on this machine's cores.

    python tests/benchmarks/bench_batch.py [--generations N]

The rooftop study at four powers (16 searches of a concept, about a minute on one core) four ways: one after
the other with no engine, on this machine's processes, and on a Dask cluster of one and of four workers.
Prints wall times, the engines' overhead over no engine, and how much faster more workers are.
"""

from __future__ import annotations

import argparse
import os
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from optimizer.batch.cases import read_cases
from optimizer.batch.engine import Engine, LocalEngine, Task, engine_of, search_task
from optimizer.prepared import prepare

ROOT = Path(__file__).parents[2]
POWERS = 'apparent_power = ["4 kVA", "5 kVA", "6 kVA", "7 kVA"]'


def tasks_of(generations: int) -> list[Task]:
    """All concepts of the rooftop study at four powers."""
    text = (ROOT / "studies" / "rooftop_5kw.toml").read_text()
    lines = [POWERS if line.startswith("apparent_power") else line for line in text.splitlines()]
    lines = [f"generations = {generations}" if line.startswith("generations") else line for line in lines]
    with tempfile.TemporaryDirectory() as home:
        path = Path(home) / "powers.toml"
        path.write_text("\n".join(lines))
        cases = read_cases(path)
    return [
        Task(place, case.study, concept, 1)
        for place, case in enumerate(cases)
        for concept in case.study.concepts
    ]


def seconds(work: Callable[[], object]) -> float:
    """Wall time of some work [s]."""
    started = time.perf_counter()
    work()
    return time.perf_counter() - started


def through(engine: Engine, tasks: list[Task]) -> float:
    """Wall time of all tasks through an engine [s]."""
    return seconds(lambda: list(engine.results(tasks)))


def on_cluster(workers: int, tasks: list[Task]) -> float:
    """Wall time of all tasks on a Dask cluster of so many workers, its start not counted [s]."""
    from distributed import LocalCluster

    with (
        LocalCluster(n_workers=workers, threads_per_worker=1, dashboard_address=":0") as cluster,
        engine_of(cluster.scheduler_address, None) as engine,
    ):
        for task in tasks[:1]:
            list(engine.results([task] * workers))  # the workers import what they need
        return through(engine, tasks)


def main(generations: int) -> None:
    """Print all of it."""
    tasks, cores = tasks_of(generations), os.cpu_count() or 1
    for task in tasks:
        prepare(task.study)
    alone = seconds(lambda: [search_task(task) for task in tasks])
    print(f"{len(tasks)} searches one after the other, no engine   {alone:6.1f} s")
    one = on_cluster(1, tasks)
    print(f"Dask cluster, 1 worker    {one:6.1f} s   overhead {one / alone - 1.0:6.1%} (goal: under 5 %)")
    for workers in dict.fromkeys((cores, 4)):
        many = on_cluster(workers, tasks)
        gain = f"{one / many:5.2f} times 1 worker on {cores} cores"
        print(f"Dask cluster, {workers} workers   {many:6.1f} s   {gain}")
    local = through(LocalEngine(cores), tasks)
    print(f"{cores} processes of this machine {local:6.1f} s   {alone / local:5.2f} times no engine")


if __name__ == "__main__":
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--generations", type=int, default=170)
    main(parser.parse_args().generations)
