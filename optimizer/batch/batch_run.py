"""A whole batch: its cases searched, each written as a run of its own, merged into one table and one page."""

from __future__ import annotations

import json
import shutil
import time
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from pathlib import Path
from typing import Any

import pandas as pd

from optimizer.batch.cases import Case
from optimizer.batch.engine import Engine, Task
from optimizer.batch.page import batch_page
from optimizer.errors import NothingFeasible
from optimizer.evolution.concept_search import ClassResult
from optimizer.evolution.populations import SearchResult
from optimizer.evolution.unfinished import Unfinished
from optimizer.objectives import OBJECTIVES
from optimizer.prepared import prepare
from optimizer.runs.csv_table import csv_bytes
from optimizer.runs.run import RUN_FORMAT, json_text, ruled_out, version_of_program, write_result
from optimizer.runs.run_folder import RUN_FILE, STUDY_FILE, Content, check_folder, write_run

CASES = "cases"
FRONT, SUMMARY = "front.csv", "cases.csv"


@dataclass(frozen=True)
class BatchOutcome:
    """What a batch left behind: its folder, a row a case and concept, what ruled cases out, seconds."""

    folder: Path
    cases: pd.DataFrame
    ruled_out: Mapping[str, list[tuple[str, float, str]]]
    seconds: float


def run_batch(
    cases: Sequence[Case],
    folder: Path,
    engine: Engine,
    *,
    seed: int,
    source: Path,
    resume: bool = False,
    report: Callable[[str, str], None] = lambda case, concept: None,
) -> BatchOutcome:
    """Search all cases and write the batch's folder, whole or not at all.

    Cases that are done are kept beside the folder until all are, so that a batch that was killed goes on with
    the next case. A case's front is that of a search of it alone.

    Args:
        cases: of one study file.
        folder: run folder to write.
        engine: what searches.
        seed: of every case.
        source: the study file.
        resume: keep the cases that an earlier batch of this folder had finished.
        report: told every case and concept that is done.

    Raises:
        NothingFeasible: where no case has a feasible design; nothing is written then.
        InputError: as `optimizer.runs.run.run_search`.
    """
    started = time.perf_counter()
    check_folder(folder)
    prepare(cases[0].study)
    unfinished, task = Unfinished.of(folder), _task(cases, seed)
    if not (resume and unfinished.take_up(task)):
        unfinished.begin(task)
    excluded: dict[str, list[tuple[str, float, str]]] = {}
    todo = [place for place, case in enumerate(cases) if not _done(unfinished, case)]
    tasks = [
        Task(place, cases[place].study, concept, seed)
        for place in todo
        for concept in cases[place].study.concepts
    ]
    waiting: dict[int, dict[str, ClassResult]] = {place: {} for place in todo}
    for task_done, result in engine.results(tasks):
        case, of_case = cases[task_done.case], waiting[task_done.case]
        of_case[task_done.concept.name] = result
        report(case.name, task_done.concept.name)
        if len(of_case) == len(case.study.concepts):
            del waiting[task_done.case]
            whole = SearchResult(case.study, seed, tuple(of_case[one.name] for one in case.study.concepts))
            if any(len(one.points) for one in whole.classes):
                write_result(whole, _home(unfinished, case))
            else:
                excluded[case.name] = ruled_out(whole)
    found = [case for case in cases if _done(unfinished, case)]
    if not found:
        unfinished.end()
        raise NothingFeasible(next(iter(excluded.values())))
    outcome = _merged(cases, found, unfinished, folder, seed, source, excluded, started)
    unfinished.end()
    return outcome


def _task(cases: Sequence[Case], seed: int) -> dict[str, Any]:
    search = cases[0].study.search
    return {
        "study": [case.study.file_hash for case in cases],
        "seed": seed,
        "effort": [search.population, search.generations],
        "version": version_of_program(),
    }


def _home(unfinished: Unfinished, case: Case) -> Path:
    return unfinished.folder / CASES / (case.folder or "study")


def _done(unfinished: Unfinished, case: Case) -> bool:
    return (_home(unfinished, case) / RUN_FILE).exists()


def _merged(
    cases: Sequence[Case],
    found: Sequence[Case],
    unfinished: Unfinished,
    folder: Path,
    seed: int,
    source: Path,
    excluded: Mapping[str, list[tuple[str, float, str]]],
    started: float,
) -> BatchOutcome:
    """Merge the cases' runs and give the whole its place."""
    tables, runs = [], []
    files: dict[str, Content] = {}
    for case in found:
        home = _home(unfinished, case)
        table = pd.read_csv(home / FRONT)
        particular = pd.DataFrame({"case": case.name, **case.values}, index=table.index)
        table = pd.concat([particular, table], axis=1)
        tables.append(table)
        runs.append(json.loads((home / RUN_FILE).read_text()))
        for path in sorted(home.rglob("*")):
            if path.is_file():
                name = f"{CASES}/{home.name}/{path.relative_to(home).as_posix()}"
                files[name] = partial(_copied, path)
    merged = pd.concat(tables, ignore_index=True)
    merged["design_id"] = merged.case + ": " + merged.design_id
    rows = _rows(found, runs, merged)
    files[FRONT] = csv_bytes(merged)
    files[SUMMARY] = csv_bytes(rows)
    files[STUDY_FILE] = source.read_bytes()
    files["dashboard.html"] = batch_page(cases, found, merged, rows)
    seconds = time.perf_counter() - started
    files[RUN_FILE] = json_text(
        {
            "format": RUN_FORMAT,
            "cases": {case.name: f"{CASES}/{_home(unfinished, case).name}" for case in found},
            "ruled_out": dict(excluded),
            "study": {"name": cases[0].study.name, "file": source.name},
            "version": version_of_program(),
            "seed": seed,
            "evaluations": sum(run["evaluations"] for run in runs),
            "seconds": {"total": seconds, "models": sum(run["seconds"]["models"] for run in runs)},
            "caution": runs[0]["caution"],
        }
    )
    write_run(folder, files)
    return BatchOutcome(folder, rows, excluded, seconds)


def _copied(source: Path, target: Path) -> None:
    shutil.copyfile(source, target)


def _rows(found: Sequence[Case], runs: Sequence[Mapping[str, Any]], merged: pd.DataFrame) -> pd.DataFrame:
    """A row a case and concept: designs, least value of every objective, hypervolume, evaluations."""
    rows = []
    for case, run in zip(found, runs, strict=True):
        for concept, history in run["hypervolume"].items():
            designs = merged[(merged.case == case.name) & (merged.concept == concept)]
            columns = [OBJECTIVES[name].column for name in case.study.objectives]
            best = {
                f"least_{name}": designs[name].min() if len(designs) else float("nan") for name in columns
            }
            rows.append(
                {
                    "case": case.name,
                    "folder": f"{CASES}/{case.folder or 'study'}",
                    **case.values,
                    "concept": concept,
                    "designs": len(designs),
                    **best,
                    "hypervolume": history[-1]["hypervolume"],
                    "evaluations": history[-1]["evaluations"],
                }
            )
    return pd.DataFrame(rows)
