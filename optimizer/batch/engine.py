"""What searches the concepts of a batch: this machine's cores, or a Dask cluster."""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor, as_completed
from contextlib import AbstractContextManager, contextmanager
from dataclasses import dataclass
from typing import Any, Protocol

from optimizer.errors import InputError, Problem
from optimizer.evolution.concept_search import ClassResult, search_concept
from optimizer.evolution.populations import process_context
from optimizer.prepared import prepared_inverter
from optimizer.study.concepts import Concept
from optimizer.study.study import Study

RETRIES = 10
"""How often a task is begun anew after its worker was lost."""
CONNECT_SECONDS = 10.0


@dataclass(frozen=True)
class Task:
    """The search of one concept of one case."""

    case: int
    study: Study
    concept: Concept
    seed: int


class Engine(Protocol):
    """Searches tasks in any order and hands out results as they come."""

    def results(self, tasks: Sequence[Task]) -> Iterator[tuple[Task, ClassResult]]:
        """Results of all tasks, each once."""


def search_task(task: Task) -> ClassResult:
    """Search one task: the same result wherever it is done."""
    prepared_inverter(task.study, task.concept.bridge)
    return search_concept(task.study, task.concept, task.seed)


@dataclass(frozen=True)
class LocalEngine:
    """This machine's cores.

    Attributes:
        workers: processes [-].
    """

    workers: int

    def results(self, tasks: Sequence[Task]) -> Iterator[tuple[Task, ClassResult]]:
        """As `Engine.results`."""
        if self.workers == 1:
            for task in tasks:
                yield task, search_task(task)
            return
        with ProcessPoolExecutor(self.workers, mp_context=process_context()) as pool:
            futures = {pool.submit(search_task, task): task for task in tasks}
            for future in as_completed(futures):
                yield futures.pop(future), future.result()


@dataclass(frozen=True)
class ClusterEngine:
    """A Dask cluster; tasks of a lost worker are begun anew on another.

    Attributes:
        client: connected to the scheduler.
    """

    client: Any

    def results(self, tasks: Sequence[Task]) -> Iterator[tuple[Task, ClassResult]]:
        """As `Engine.results`."""
        from distributed import as_completed as completed

        futures = {self.client.submit(search_task, task, pure=False, retries=RETRIES): task for task in tasks}
        for future in completed(list(futures), loop=self.client.loop):
            task = futures.pop(future)
            yield task, future.result()
            future.release()


def engine_of(address: str | None, workers: int | None) -> AbstractContextManager[Engine]:
    """The engine for an address, or for this machine where there is none.

    Raises:
        InputError: where the cluster cannot be reached or its library is not installed.
    """
    return _cluster(address) if address else _local(workers)


@contextmanager
def _local(workers: int | None) -> Iterator[Engine]:
    yield LocalEngine(workers or os.cpu_count() or 1)


@contextmanager
def _cluster(address: str) -> Iterator[Engine]:
    try:
        from distributed import Client
    except ImportError as trouble:
        expected = "the cluster extra: pip install 'wattfront[cluster]'"
        raise InputError(Problem("no dask.distributed installed", expected, "--cluster")) from trouble
    try:
        client = Client(address, timeout=CONNECT_SECONDS, set_as_default=False)
    except (OSError, ValueError, TimeoutError) as trouble:
        expected = "the address of a running Dask scheduler, such as tcp://127.0.0.1:8786"
        raise InputError(Problem(repr(address), expected, "--cluster")) from trouble
    with client:
        yield ClusterEngine(client)
