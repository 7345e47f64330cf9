"""What differs between the study files of two runs, key by key."""

from __future__ import annotations

import json
import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from optimizer.runs.stored_run import StoredRun

NOTHING = "nothing (its default)"
RUN_KEYS = ("seed", "population", "generations", "version")
"""What a run was started with that need not stand in the study."""


@dataclass(frozen=True)
class Change:
    """One key that differs.

    Attributes:
        key: its path in the study file.
        before, after: what stands there.
    """

    key: str
    before: str
    after: str


def study_changes(before: StoredRun, after: StoredRun) -> tuple[Change, ...]:
    """Keys that differ between two runs' studies, in the order of the files, then what the runs were started
    with.
    """
    first, second = _content(before), _content(after)
    keys = dict.fromkeys((*first, *second))
    return tuple(
        Change(key, first.get(key, NOTHING), second.get(key, NOTHING))
        for key in keys
        if first.get(key) != second.get(key)
    )


def _content(run: StoredRun) -> dict[str, str]:
    told = {key: _shown(value) for key, value in _leaves(tomllib.loads(run.study.source.decode("utf-8-sig")))}
    return told | {f"search run with {key}": _shown(run.summary.get(key)) for key in RUN_KEYS}


def _shown(value: Any) -> str:
    """A value as it stands in a study file, whole."""
    return json.dumps(value, ensure_ascii=False, default=str)


def _leaves(table: Mapping[str, Any], place: str = "") -> Iterator[tuple[str, Any]]:
    for name, value in table.items():
        key = f"{place}.{name}" if place else name
        if isinstance(value, dict):
            yield from _leaves(value, key)
        else:
            yield key, value
