"""The audit of a stored run: what it found, told and written; and a run that takes it in."""

from __future__ import annotations

import gzip
import zipfile
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from optimizer.audit.audit import ConceptAudit, audit
from optimizer.errors import InputError, Problem
from optimizer.evolution.concept_search import ClassResult
from optimizer.evolution.populations import SearchResult
from optimizer.runs.fronts import front
from optimizer.runs.run import POINTS_FILE, evaluated_table, json_text, run_files, summary_of
from optimizer.runs.run_folder import RUN_FILE, write_run
from optimizer.runs.stored_run import StoredRun, read_run

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Audited:
    """A run and what its audit found, concept by concept."""

    run: StoredRun
    found: tuple[ConceptAudit, ...]

    @property
    def table(self) -> pd.DataFrame:
        """One row a concept, for people and scripts."""
        return pd.DataFrame(
            [
                {
                    "concept": one.concept.name,
                    "designs evaluated": one.evaluations,
                    "of them feasible": one.feasible,
                    "designs of the front": one.front,
                    "of them beaten": one.beaten,
                    "hypervolume share found": one.share,
                }
                for one in self.found
            ]
        )


def audit_run(
    folder: Path,
    *,
    designs: int,
    seed: int,
    workers: int | None = None,
    report: Callable[[str, int], None] | None = None,
) -> Audited:
    """Audit a run folder.

    Args:
        folder: of the run.
        designs, seed, workers, report: as in `optimizer.audit.audit.audit`.

    Raises:
        InputError: for a folder that is no run or has lost its places in the search space.
    """
    run = read_run(folder)
    fronts = stored_points(run)
    return Audited(run, audit(run.study, fronts, designs=designs, seed=seed, workers=workers, report=report))


def stored_points(run: StoredRun) -> dict[str, Array]:
    """Places in the search space of a run's designs, by concept.

    Raises:
        InputError: where the file is missing, broken or does not fit front.csv.
    """
    path = run.folder / POINTS_FILE
    expected = "the places of front.csv's designs as the search wrote them"
    try:
        with np.load(path, allow_pickle=False) as file:
            points = {name: file[name] for name in file.files}
    except (OSError, ValueError, zipfile.BadZipFile) as trouble:
        given = "no such file" if not path.exists() else "a file that cannot be read"
        raise InputError(Problem(given, expected, file=str(path))) from trouble
    counts = run.table.concept.value_counts().to_dict()
    if {name: len(block) for name, block in points.items()} != counts:
        raise InputError(Problem("places of other designs", expected, file=str(path)))
    return points


def taken_in(audited: Audited) -> Path | None:
    """Write the run anew with the joint fronts; what was evaluated before stays in evaluated.csv.gz.

    Returns:
        Where files of the user's own in the folder were kept; None where there were none.
    """
    run = audited.run
    result = SearchResult(
        run.study, int(run.summary["seed"]), tuple(_as_result(one, run) for one in audited.found)
    )
    fronts = front(result)
    with gzip.open(run.folder / "evaluated.csv.gz", "rb") as file:
        before = pd.read_csv(file)
    evaluated = pd.concat([before, evaluated_table(result)], ignore_index=True)
    evaluated = evaluated.drop_duplicates(ignore_index=True)
    summary = _joint_summary(audited, result, summary_of(result, fronts), evaluated)
    files = run_files(run.study, fronts, evaluated, summary)
    return write_run(run.folder, files | {RUN_FILE: json_text(summary)})


def _as_result(one: ConceptAudit, run: StoredRun) -> ClassResult:
    history = run.summary["hypervolume"].get(one.concept.name, [])
    return ClassResult(
        concept=one.concept,
        points=one.points,
        objectives=one.objectives,
        filter_volume=one.filter_volume,
        evaluations=one.evaluations,
        hypervolume=[(entry["evaluations"], entry["hypervolume"]) for entry in history],
        constraints=(),
        failures=np.zeros(0),
        nearest=np.zeros(0),
        nearest_point=np.zeros(0),
        seconds={"models": 0.0, "search": 0.0},
    )


def _joint_summary(
    audited: Audited, result: SearchResult, summary: dict[str, Any], evaluated: pd.DataFrame
) -> dict[str, Any]:
    before = audited.run.summary
    return summary | {
        "evaluations": before["evaluations"] + result.evaluations,
        "feasible": evaluated.concept.value_counts().to_dict(),
        "ruled_out": before["ruled_out"],
        "openings": before.get("openings", {}),
        "seconds": before["seconds"],
        "audit": audit_entries(audited.found),
    }


def audit_entries(found: Sequence[ConceptAudit]) -> dict[str, Any]:
    """An audit for run.json: by concept the designs, and the share of the joint hypervolume found."""
    return {
        one.concept.name: {
            "evaluations": one.evaluations,
            "hypervolume_share": one.share,
            "front": one.front,
            "beaten": one.beaten,
        }
        for one in found
    }
