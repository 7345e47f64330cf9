"""A whole run: search, fronts, tables, dashboard, and the run folder that holds them."""

from __future__ import annotations

import gzip
import io
import json
import os
import time
from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from datetime import datetime
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from optimizer.evolution.concept_search import ClassResult, Progress
from optimizer.runs.csv_table import csv_bytes
from optimizer.errors import NothingFeasible
from optimizer.runs.fronts import LITRES, Front, choices, front, high_columns
from optimizer.objectives import OBJECTIVES
from optimizer.limits.opening import Shortfall, shortfall
from optimizer.evolution.populations import SearchResult, process_context, search
from optimizer.prepared import prepare, search_space
from optimizer.evolution.ranking import nominal_figures
from optimizer.runs.run_folder import RUN_FILE, STUDY_FILE, Content, check_folder, parts_copy, write_run
from optimizer.space import SearchSpace
from optimizer.study.study import Study
from optimizer.study.schema import HIGH_VALUES
from optimizer.evolution.unfinished import Unfinished, task_of

RUN_FORMAT = 2
"""Number of the run folder's layout, in run.json: what reads a folder back knows by it whether it can."""
POINTS_FILE = "points.npz"
GZIP_LEVEL = 1

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Outcome:
    """What a run left behind: its result, its fronts, its folder, where an earlier run was kept, and
    run.json's content.
    """

    result: SearchResult
    front: Front
    folder: Path
    kept: Path | None
    summary: dict[str, Any]


def run_search(
    study: Study,
    folder: Path,
    *,
    seed: int = 1,
    workers: int | None = None,
    resume: bool = False,
    report: Callable[[Progress], None] | None = None,
    stage: Callable[[str], None] = lambda words: None,
) -> Outcome:
    """Search a study and write its run folder, whole or not at all.

    While it runs, its populations are kept beside the run folder every few seconds.

    Args:
        study: the study.
        folder: run folder to write.
        seed, workers, report: as in `optimizer.evolution.populations.search`.
        resume: go on with a search of this run folder that did not end, where there is one; its result is
            that of a search that was never stopped.
        stage: told what is being done.

    Raises:
        NothingFeasible: where no candidate of any class meets all requirements; nothing is written then.
        InputError: for parts that do not exist or a folder that is no run.
    """
    started = time.perf_counter()
    check_folder(folder)
    prepare(study)
    unfinished, task = Unfinished.of(folder), task_of(study, seed, version_of_program())
    if not (resume and unfinished.take_up(task)):
        unfinished.begin(task)
    result = search(study, seed=seed, workers=workers, report=report, unfinished=unfinished)
    seconds = time.perf_counter() - started
    if not all(len(found.points) for found in result.classes):
        stage("looking for what would open the space")
    missing = shortfalls(result, workers)
    if not any(len(found.points) for found in result.classes):
        unfinished.end()
        raise NothingFeasible(ruled_out(result), [line for one in missing for line in one.lines()])
    outcome = write_result(result, folder, seconds, stage, missing)
    unfinished.end()
    return outcome


def write_result(
    result: SearchResult,
    folder: Path,
    seconds: float | None = None,
    stage: Callable[[str], None] = lambda words: None,
    missing: Sequence[Shortfall] = (),
) -> Outcome:
    """Write the run folder of a finished search, whole or not at all.

    Args:
        result: of a search with at least one feasible candidate.
        folder: run folder to write.
        seconds: that the search took; None for the sum over its populations [s].
        stage: told what is being done.
        missing: what concepts without a feasible design lack.
    """
    started = time.perf_counter()
    study = result.study
    stage("sorting fronts")
    fronts = front(result)
    evaluated = evaluated_table(result)
    stage("drawing")
    summary = summary_of(result, fronts)
    summary["openings"] = {one.concept.name: one.entry() for one in missing}
    files = run_files(study, fronts, evaluated, summary)
    in_models = sum(found.seconds["models"] for found in result.classes)
    searched = in_models + sum(found.seconds["search"] for found in result.classes)
    searched, output = searched if seconds is None else seconds, time.perf_counter() - started
    summary["seconds"] = {
        "models": in_models,
        "search": searched,
        "output": output,
        "total": searched + output,
    }
    stage("writing")
    kept = write_run(folder, files | {RUN_FILE: json_text(summary)})
    return Outcome(result, fronts, folder, kept, summary)


def run_files(
    study: Study, fronts: Front, evaluated: pd.DataFrame, summary: dict[str, Any]
) -> dict[str, Content]:
    """Content of a run folder's files by name, without run.json."""
    with ProcessPoolExecutor(1, mp_context=process_context()) as beside:
        packed = beside.submit(_packed, evaluated)  # as long as drawing the dashboard takes
        from optimizer.charts import dashboard_html

        page = dashboard_html(study, fronts, evaluated, summary)
        return {
            "front.csv": csv_bytes(fronts.table),
            "margins.csv": csv_bytes(fronts.margins),
            "binding.csv": csv_bytes(fronts.binding),
            "evaluated.csv.gz": packed.result(),
            "dashboard.html": page,
            POINTS_FILE: points_bytes(fronts.points),
            **_study_files(study),
        }


def json_text(summary: dict[str, Any]) -> str:
    """run.json's text."""
    return json.dumps(summary, indent=1) + "\n"


def points_bytes(points: Mapping[str, Array]) -> bytes:
    """Places in the search space of the fronts' designs, by concept, as numpy's archive of arrays."""
    file = io.BytesIO()
    np.savez_compressed(file, allow_pickle=False, **dict(points))
    return file.getvalue()


def _study_files(study: Study) -> dict[str, Content]:
    """Copies of the study and of the parts files it names, by which a run explains itself."""
    files: dict[str, Content] = {STUDY_FILE: study.source}
    for place, path in enumerate(study.catalog_files):
        files[parts_copy(place, path)] = path.read_bytes()
    return files


def _packed(evaluated: pd.DataFrame) -> bytes:
    return gzip.compress(csv_bytes(evaluated), GZIP_LEVEL, mtime=0)


def shortfalls(result: SearchResult, workers: int | None = None) -> tuple[Shortfall, ...]:
    """What the concepts without a feasible design lack, and which change of the study would open their space;
    those that miss least come first.

    Args:
        result: of a search.
        workers: processes; default one per core.
    """
    lacking = [found for found in result.classes if not len(found.points)]
    spaces = [search_space(result.study, found.concept) for found in lacking]
    asked = [
        (space, found.concept, found.nearest_point, result.seed)
        for space, found in zip(spaces, lacking, strict=True)
    ]
    count = min(workers or os.cpu_count() or 1, len(asked))
    if count <= 1:
        found = [shortfall(*one) for one in asked]
    else:
        with ProcessPoolExecutor(count, mp_context=process_context()) as pool:
            found = list(pool.map(shortfall, *zip(*asked, strict=True)))
    return tuple(sorted(found, key=lambda one: sum(miss.over for miss in one.misses)))


def ruled_out(result: SearchResult) -> list[tuple[str, float, str]]:
    """Constraints that the nearest candidate of all concepts fails: names, the share of its concept's
    candidates that fail them too, how near it came.
    """
    closest = min(result.classes, key=lambda found: float(np.maximum(-found.nearest, 0.0).sum()))
    told = []
    for name, share, margin in zip(closest.constraints, closest.failures, closest.nearest, strict=True):
        if margin < 0.0:
            told.append((name, float(share), f"{-margin:.1%} beyond its limit ({closest.concept.name})"))
    return told


def evaluated_table(result: SearchResult) -> pd.DataFrame:
    """Every feasible candidate of a search: what it is and its objectives."""
    parts = []
    for found in result.classes:
        if len(found.points):
            space = search_space(result.study, found.concept)
            columns: dict[str, Any] = {"concept": found.concept.name}
            columns |= choices(space.inverter, space.designs(found.points))
            columns |= _objective_columns(space, found)
            columns["filter_volume_l"] = LITRES * found.filter_volume
            parts.append(pd.DataFrame(columns))
    return pd.concat(parts, ignore_index=True)


def _objective_columns(space: SearchSpace, found: ClassResult) -> dict[str, Array]:
    """The models' own values, and beside them what the candidates were ranked by where that is another."""
    chosen = [OBJECTIVES[name] for name in space.study.objectives]
    high = high_columns(space.study, found.objectives)
    values = nominal_figures(space, found.points, chosen).objectives if high else found.objectives
    return {entry.column: values[:, place] for place, entry in enumerate(chosen)} | high


def summary_of(result: SearchResult, fronts: Front) -> dict[str, Any]:
    """run.json's content, without times."""
    study = result.study
    return {
        "format": RUN_FORMAT,
        "study": {
            "name": study.name,
            "file": study.path.name,
            "hash": study.file_hash,
            "parts": [parts_copy(place, path) for place, path in enumerate(study.catalog_files)],
        },
        "version": version_of_program(),
        "date": datetime.now().astimezone().isoformat(timespec="minutes"),
        "seed": result.seed,
        "population": study.search.population,
        "generations": study.search.generations,
        "rank_by": study.search.rank_by,
        "limits_hold": study.search.limits_hold if study.search.rank_by == HIGH_VALUES else None,
        "objectives": [
            {
                "name": name,
                "column": OBJECTIVES[name].column,
                "direction": "min",
                "unit": OBJECTIVES[name].unit,
            }
            for name in study.objectives
        ],
        "evaluations": result.evaluations,
        "feasible": {found.concept.name: len(found.points) for found in result.classes},
        "designs": {
            "class_front": fronts.table.concept.value_counts().to_dict(),
            "overall_front": int(fronts.table.overall_front.sum()),
        },
        "hypervolume": {
            found.concept.name: [
                {"evaluations": count, "hypervolume": value} for count, value in found.hypervolume
            ]
            for found in result.classes
        },
        "limits": [
            {"name": name, "unit": unit, "sense": sense, "limit": low if low == high else [low, high]}
            for (name, unit, sense), (low, high) in zip(fronts.limits, fronts.limit_range, strict=True)
        ],
        "ruled_out": {
            found.concept.name: ruled_out(SearchResult(study, result.seed, (found,)))
            for found in result.classes
            if not len(found.points)
        },
        "caution": "Early-concept figures from analytic models and representative parts. "
        "A dc link stores lethal energy; "
        "standards and licensed practice decide.",
    }


def version_of_program() -> str:
    """Version of this program as installed."""
    try:
        return version("wattfront")
    except PackageNotFoundError:
        return "unknown (not installed)"
