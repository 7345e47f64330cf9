"""The progress bar of a search: evaluations, hypervolume of every population, time left."""

from __future__ import annotations

from types import TracebackType

from rich.console import Console
from rich.progress import BarColumn, Progress, TaskID, TextColumn, TimeElapsedColumn, TimeRemainingColumn

from optimizer.concept_search import Progress as ClassProgress
from optimizer.screening import planned_evaluations
from optimizer.study import Study


class SearchBar:
    """Shows a running search on standard error; `report` and `stage` feed it.

    Args:
        study: the study searched.
        hidden: show nothing.
    """

    def __init__(self, study: Study, *, hidden: bool) -> None:
        self.total = len(study.concepts) * planned_evaluations(study.search)
        self.evaluations: dict[str, int] = {}
        self.hypervolumes: dict[str, float] = {}
        self.progress = Progress(
            TextColumn("{task.description}"),
            BarColumn(bar_width=24),
            TextColumn("{task.completed:,.0f}/{task.total:,.0f} evaluations"),
            TextColumn("{task.fields[note]}"),
            TimeElapsedColumn(),
            TextColumn("left"),
            TimeRemainingColumn(),
            console=Console(stderr=True),
            disable=hidden,
            transient=True,
        )
        self.task: TaskID = self.progress.add_task("preparing", total=self.total, note="")

    def __enter__(self) -> SearchBar:
        self.progress.start()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, trouble: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.progress.stop()

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
