"""A run folder read back: its study, its fronts, its margins, what run.json says."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pandas as pd

from optimizer.limits.binding import COLUMNS
from optimizer.errors import InputError, Problem
from optimizer.objectives import OBJECTIVES
from optimizer.runs.run import RUN_FORMAT
from optimizer.runs.run_folder import RUN_FILE, STUDY_FILE
from optimizer.study.study import Study

FRONT_FILE, MARGINS_FILE, BINDING_FILE = "front.csv", "margins.csv", "binding.csv"
ID, TIGHTEST = "design_id", "tightest"
NEEDED = (
    ID,
    "concept",
    "overall_front",
    "device",
    "bridge",
    "modulation",
    "switching_frequency_hz",
    "cooling",
)
A_RUN = "the folder of a run (wattfront search writes one)"


@dataclass(frozen=True)
class StoredRun:
    """A run as its folder tells it.

    Attributes:
        folder: where it lies.
        study: the study that was searched, from the folder's own copy.
        table: front.csv, one row a design.
        margins: margins.csv, in the same order.
        summary: run.json's content.
        binding: binding.csv; None for a run of before there was one.
    """

    folder: Path
    study: Study
    table: pd.DataFrame
    margins: pd.DataFrame
    summary: Mapping[str, Any]
    binding: pd.DataFrame | None = None

    @property
    def objective_columns(self) -> list[str]:
        """Columns of what was minimised."""
        return [OBJECTIVES[name].column for name in self.study.objectives]


def read_run(folder: Path) -> StoredRun:
    """Read a run folder back.

    Args:
        folder: as `wattfront search` wrote it.

    Raises:
        InputError: for a folder that is no run, is broken, was changed by hand or comes from another version.
    """
    summary = _summary(Path(folder))
    study = _study(Path(folder), summary)
    table, margins = _table(Path(folder) / FRONT_FILE), _table(Path(folder) / MARGINS_FILE)
    path = Path(folder) / BINDING_FILE
    binding = _table(path) if path.is_file() else None
    if binding is not None:
        _check_columns(path, binding, COLUMNS)
    run = StoredRun(Path(folder), study, table, margins, summary, binding)
    _check(run)
    return run


def _summary(folder: Path) -> Mapping[str, Any]:
    if not folder.is_dir():
        raise _trouble(folder, "a file" if folder.exists() else "no such folder", A_RUN)
    path = folder / RUN_FILE
    if not path.is_file():
        raise _trouble(folder, f"a folder without {RUN_FILE}", A_RUN)
    try:
        summary = json.loads(path.read_bytes())
    except ValueError as trouble:
        raise _trouble(
            path, f"text that is no JSON ({trouble})", "run.json as the search wrote it"
        ) from trouble
    given = summary.get("format") if isinstance(summary, dict) else None
    if given != RUN_FORMAT:
        shown = "a run of an earlier version" if given is None else f"a run of format {given}"
        raise _trouble(path, shown, f"format {RUN_FORMAT}: search the study again with this version")
    if "cases" in summary:
        first = next(iter(summary["cases"].values()))
        raise _trouble(folder, "a batch of cases", f"one of its runs, such as {folder / first}")
    return summary


def _study(folder: Path, summary: Mapping[str, Any]) -> Study:
    path, told = folder / STUDY_FILE, summary.get("study")
    if not isinstance(told, dict):
        raise _trouble(folder / RUN_FILE, 'no table "study"', "run.json as the search wrote it")
    if not path.is_file():
        raise _trouble(folder, f"a run without {STUDY_FILE}", A_RUN)
    study = Study.read(path, parts=[folder / name for name in told.get("parts", ())])
    if study.file_hash != told.get("hash"):
        raise _trouble(path, "a study changed after the search", "the study as it was searched")
    return study.with_effort(summary.get("population"), summary.get("generations"))


def _table(path: Path) -> pd.DataFrame:
    expected = "a table as the search wrote it"
    if not path.is_file():
        raise _trouble(path, "no such file", expected)
    try:
        return pd.read_csv(path, keep_default_na=False, na_values=[""])
    except (ValueError, OSError) as trouble:  # pandas' parser errors are ValueErrors
        raise _trouble(path, f"text that is no table ({trouble})".replace("\n", " "), expected) from trouble


def _check(run: StoredRun) -> None:
    front, margins = run.folder / FRONT_FILE, run.folder / MARGINS_FILE
    _check_columns(front, run.table, [*NEEDED, *(entry.column for entry in OBJECTIVES.values())])
    _check_columns(margins, run.margins, [ID, TIGHTEST])
    for entry in OBJECTIVES.values():
        values = run.table[entry.column]
        if not pd.api.types.is_numeric_dtype(values) or values.isna().any():
            raise _trouble(front, "something else than numbers", "numbers", entry.column)
    if run.table.overall_front.dtype != bool or not run.table.overall_front.any():
        raise _trouble(front, "no design on the overall front", "at least one", "overall_front")
    if list(run.table[ID]) != list(run.margins[ID]):
        raise _trouble(margins, "other designs than those of front.csv", "the same, in the same order", ID)


def _check_columns(path: Path, table: pd.DataFrame, needed: Sequence[str]) -> None:
    missing = [name for name in needed if name not in table]
    if missing:
        raise _trouble(path, f"a table without {', '.join(missing)}", "a table as the search wrote it")


def _trouble(path: Path, given: str, expected: str, key: str = "") -> InputError:
    return InputError(Problem(given, expected, key, str(path)))
