"""Designs of several runs that can be held against each other, and what moved between them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from optimizer.charts.quantities import COMPONENT_WORDS
from optimizer.charts.thinning import balanced_row
from optimizer.comparison.study_changes import Change, study_changes
from optimizer.decision.figures import ALWAYS, LOSS, VOLUME, Told, figure
from optimizer.decision.picks import on_front
from optimizer.decision.wording import TELLING, headline, listed
from optimizer.errors import InputError, Problem
from optimizer.report.designs import KINDS
from optimizer.runs.stored_run import StoredRun

BALANCED, EQUAL_VOLUME = "balanced design", "least loss at equal volume"
MOST_TOLD = 3
TELLING_SHARE = 0.05
"""Share of all that moved below which a component is not named."""


@dataclass(frozen=True)
class Pick:
    """The designs of all runs that answer one question.

    Attributes:
        title: what they were picked for.
        rule: how, in words.
        designs: one a run, as rows of their fronts.
    """

    title: str
    rule: str
    designs: tuple[Mapping[Any, Any], ...]


@dataclass(frozen=True)
class Comparison:
    """Several runs beside each other; everything is told against the first.

    Attributes:
        runs: as they were named.
        labels: what they are called.
        picks: designs held against each other.
        changes: what the study of each further run has other than the first's.
    """

    runs: tuple[StoredRun, ...]
    labels: tuple[str, ...]
    picks: tuple[Pick, ...]
    changes: tuple[tuple[Change, ...], ...]

    @property
    def currency(self) -> str:
        """Of the first run."""
        return self.runs[0].study.currency


def compare(runs: Sequence[StoredRun]) -> Comparison:
    """Hold runs against the first of them.

    Raises:
        InputError: for fewer than two runs.
    """
    if len(runs) < 2:
        raise InputError(Problem(f"{len(runs)} run", "at least two run folders"))
    return Comparison(
        runs=tuple(runs),
        labels=_labels(runs),
        picks=(_balanced(runs), _equal_volume(runs)),
        changes=tuple(study_changes(runs[0], run) for run in runs[1:]),
    )


def _labels(runs: Sequence[StoredRun]) -> tuple[str, ...]:
    """Folder names, numbered so that they stay apart."""
    return tuple(f"{place}: {run.folder.resolve().name}" for place, run in enumerate(runs, start=1))


def _balanced(runs: Sequence[StoredRun]) -> Pick:
    rows = [balanced_row(run.table, run.objective_columns) for run in runs]
    rule = "nearest to the ideal point of the run's objectives (compromise programming, Zeleny 1973)"
    return Pick(BALANCED, rule, _designs(runs, rows))


def _equal_volume(runs: Sequence[StoredRun]) -> Pick:
    """Least weighted loss up to the volume of the first run's balanced design, or the least that all have."""
    balanced = runs[0].table[VOLUME.column].iloc[balanced_row(runs[0].table, runs[0].objective_columns)]
    volume = max(
        float(balanced), *(float(run.table[VOLUME.column][run.table.overall_front].min()) for run in runs)
    )
    rule = f"least weighted loss of designs of up to {figure(volume, 2)} l"
    return Pick(EQUAL_VOLUME, rule, _designs(runs, [_least_loss(run.table, volume) for run in runs]))


def _least_loss(table: pd.DataFrame, volume: float) -> int:
    rows = on_front(table)
    small = rows[table[VOLUME.column].to_numpy(dtype=float)[rows] <= volume]
    return int(small[np.argmin(table[LOSS.column].to_numpy(dtype=float)[small])])


def _designs(runs: Sequence[StoredRun], rows: Sequence[int]) -> tuple[Mapping[Any, Any], ...]:
    return tuple(dict(run.table.iloc[row]) for run, row in zip(runs, rows, strict=True))


def moved(before: Mapping[Any, Any], after: Mapping[Any, Any], kind: str) -> list[tuple[str, float]]:
    """Change of every component, by its words, the greatest first.

    Args:
        before, after: designs.
        kind: a key of `optimizer.report.designs.KINDS`, which says the unit.
    """
    start, end, total, _ = KINDS[kind]
    names = dict.fromkeys(
        name
        for design in (before, after)
        for name in map(str, design)
        if name.startswith(start)
        and name.endswith(end)
        and name != total
        and not name.endswith(NO_COMPONENTS)
    )
    changes = [(_component(name, start, end), _value(after, name) - _value(before, name)) for name in names]
    return sorted((entry for entry in changes if entry[1] != 0.0), key=lambda entry: -abs(entry[1]))


NO_COMPONENTS = ("_percent", "_p05", "_p95")


def _component(name: str, start: str, end: str) -> str:
    part = name.removeprefix(start).removesuffix(end)
    return COMPONENT_WORDS.get(part, part.replace("_", " "))


def _value(design: Mapping[Any, Any], name: str) -> float:
    value = float(design.get(name, 0.0))
    return 0.0 if np.isnan(value) else value


def movement_words(
    before: Mapping[Any, Any], after: Mapping[Any, Any], currency: str, told: Sequence[Told] = ALWAYS
) -> tuple[str, ...]:
    """Sentences about what moved between two designs, and through which components."""
    first = listed(f"{entry.title} {_change(entry, before, after, currency)}" for entry in told)
    became = (
        f"{_capital(headline(before))} became {headline(after)}"
        if headline(before) != headline(after)
        else (f"{_capital(headline(before))} in both")
    )
    causes = [
        _causes(before, after, kind, words, currency)
        for kind, words in (
            ("Losses at rated load", "loss at rated load"),
            ("Volumes", "volume"),
            ("Prices", "price"),
        )
    ]
    return (f"{became}: {first}.", *filter(None, causes))


def _change(entry: Told, before: Mapping[Any, Any], after: Mapping[Any, Any], currency: str) -> str:
    old, new = float(before[entry.column]), float(after[entry.column])
    return f"{entry.number(old)} to {entry.figure(new, currency)}"


def _causes(before: Mapping[Any, Any], after: Mapping[Any, Any], kind: str, words: str, currency: str) -> str:
    changes = moved(before, after, kind)
    whole = sum(abs(change) for _, change in changes)
    if whole == 0.0:
        return ""
    unit = KINDS[kind][3] or currency
    told = [entry for entry in changes if abs(entry[1]) >= TELLING_SHARE * whole][:MOST_TOLD]
    total = sum(change for _, change in changes)
    whole_before = float(before[KINDS[kind][2]])
    size = f"{signed(total)} {unit}" if abs(total) >= TELLING * whole_before else "about the same"
    return (
        f"{_capital(words)} {size}, above all {listed(f'{name} {signed(change)}' for name, change in told)}."
    )


def signed(value: float, digits: int = 2) -> str:
    """A change with its sign."""
    shown = figure(abs(value), digits)
    return shown if shown == "0" else f"{'+' if value > 0.0 else '-'}{shown}"


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
