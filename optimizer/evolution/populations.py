"""The search: one population per concept, side by side on the cores, every evaluation kept."""

from __future__ import annotations

import multiprocessing
import os
from collections.abc import Callable
from concurrent.futures import Future, ProcessPoolExecutor
from dataclasses import dataclass
from multiprocessing.context import BaseContext
from queue import Empty
from typing import Any

from optimizer.evolution.concept_search import ClassResult, Progress, search_concept
from optimizer.evolution.unfinished import Unfinished
from optimizer.prepared import prepare
from optimizer.study.concepts import Concept
from optimizer.study.study import Study


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


_outbox: Any = None


def _set_outbox(outbox: Any) -> None:
    global _outbox
    _outbox = outbox


def _worker(study: Study, concept: Concept, seed: int, unfinished: Unfinished | None) -> ClassResult:
    return search_concept(study, concept, seed, _outbox.put if _outbox is not None else None, unfinished)


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
    unfinished: Unfinished | None = None,
) -> SearchResult:
    """Search all concepts of a study.

    Args:
        study: the study.
        seed: same seed, same result, whatever the number of workers.
        workers: processes; default one per core, never more than concepts.
        report: called with every population's progress.
        unfinished: where populations are kept while the search runs, and taken up from.

    Returns:
        Every feasible candidate of every population.

    Raises:
        InputError: where the study names parts that the catalogue does not have.
    """
    all_concepts = study.concepts
    prepare(study)
    count = min(workers or os.cpu_count() or 1, len(all_concepts))
    if count == 1:
        found = tuple(search_concept(study, concept, seed, report, unfinished) for concept in all_concepts)
        return SearchResult(study, seed, found)
    context = process_context()
    outbox = context.Queue()
    with ProcessPoolExecutor(count, mp_context=context, initializer=_set_outbox, initargs=(outbox,)) as pool:
        futures = [pool.submit(_worker, study, concept, seed, unfinished) for concept in all_concepts]
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
