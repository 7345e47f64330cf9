"""The progress bar of a search: evaluations, hypervolume of every population, time left."""

from __future__ import annotations

from collections.abc import Sequence
from types import TracebackType
from typing import Self

from rich.console import Console
from rich.progress import BarColumn, Progress, TaskID, TextColumn, TimeElapsedColumn, TimeRemainingColumn

from optimizer.batch.cases import Case
from optimizer.evolution.concept_search import Progress as ClassProgress
from optimizer.evolution.screening import planned_evaluations
from optimizer.study.study import Study


class _Shown:
    """A bar that is on the screen while its block runs."""

    progress: Progress

    def __enter__(self) -> Self:
        self.progress.start()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, trouble: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.progress.stop()


class AuditBar(_Shown):
    """Shows a running audit on standard error; `report` feeds it.

    Args:
        designs: to evaluate in all [-].
        hidden: show nothing.
    """

    def __init__(self, designs: int, *, hidden: bool) -> None:
        self.done: dict[str, int] = {}
        self.progress = _bar("{task.completed:,.0f}/{task.total:,.0f} designs", hidden)
        self.task: TaskID = self.progress.add_task("auditing", total=designs, note="")

    def report(self, concept: str, designs: int) -> None:
        """Take in how many designs of a concept are done."""
        self.done[concept] = designs
        self.progress.update(self.task, completed=sum(self.done.values()))


def _bar(count: str, hidden: bool) -> Progress:
    return Progress(
        TextColumn("{task.description}"),
        BarColumn(bar_width=24),
        TextColumn(count),
        TextColumn("{task.fields[note]}"),
        TimeElapsedColumn(),
        TextColumn("left"),
        TimeRemainingColumn(),
        console=Console(stderr=True),
        disable=hidden,
        transient=True,
    )


class BatchBar(_Shown):
    """Shows a running batch on standard error; `report` feeds it.

    Args:
        cases: of the batch.
        hidden: show nothing.
    """

    def __init__(self, cases: Sequence[Case], *, hidden: bool) -> None:
        self.progress = _bar("{task.completed:,.0f}/{task.total:,.0f} concepts of all cases", hidden)
        total = sum(len(case.study.concepts) for case in cases)
        self.task: TaskID = self.progress.add_task("searching", total=total, note="")

    def report(self, case: str, concept: str) -> None:
        """Take in that a concept of a case is done."""
        note = ": ".join(filter(None, (case, concept)))
        self.progress.update(self.task, advance=1, note=note)


class SearchBar(_Shown):
    """Shows a running search on standard error; `report` and `stage` feed it.

    Args:
        study: the study searched.
        hidden: show nothing.
    """

    def __init__(self, study: Study, *, hidden: bool) -> None:
        self.total = len(study.concepts) * planned_evaluations(study.search)
        self.evaluations: dict[str, int] = {}
        self.hypervolumes: dict[str, float] = {}
        self.progress = _bar("{task.completed:,.0f}/{task.total:,.0f} evaluations", hidden)
        self.task: TaskID = self.progress.add_task("preparing", total=self.total, note="")

    def report(self, progress: ClassProgress) -> None:
        """Take in the progress of one population."""
        self.evaluations[progress.concept] = progress.evaluations
        self.hypervolumes[progress.concept] = progress.hypervolume
        note = "hypervolume " + ", ".join(f"{name} {value:.3f}" for name, value in self.hypervolumes.items())
        done = sum(self.evaluations.values())
        self.progress.update(self.task, completed=done, note=note, description="searching")

    def stage(self, words: str) -> None:
        """Say what is being done now."""
        self.progress.update(self.task, description=words)
