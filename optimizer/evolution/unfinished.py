"""A search under way, kept beside its run folder every few seconds so that a killed one can go on."""

from __future__ import annotations

import json
import pickle
import shutil
import time
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from optimizer.errors import InputError, Problem
from optimizer.runs.run_folder import write_whole
from optimizer.study.study import Study

KEEP_EVERY = 2.0
"""Seconds between two states of a population that are kept."""
TASK_FILE = "task.json"


@dataclass
class Unfinished:
    """The folder of a search under way: what it does, and the state of every population.

    Attributes:
        folder: `<run folder>.unfinished`.
    """

    folder: Path
    _last: float = field(default_factory=time.monotonic)
    _made: list[Path] = field(default_factory=list)

    @classmethod
    def of(cls, run: Path) -> Unfinished:
        """The one that belongs to a run folder."""
        return cls(run.resolve().with_name(f"{run.resolve().name}.unfinished"))

    def begin(self, task: dict[str, Any]) -> None:
        """Begin anew: whatever an earlier search left is removed."""
        shutil.rmtree(self.folder, ignore_errors=True)
        self._made = [above for above in self.folder.parents if not above.exists()]
        self.folder.mkdir(parents=True)
        write_whole(self.folder / TASK_FILE, json.dumps(task))

    def take_up(self, task: dict[str, Any]) -> bool:
        """Whether there is a search to go on with; it must be the same task.

        Raises:
            InputError: where the search left there is another one.
        """
        try:
            left = json.loads((self.folder / TASK_FILE).read_text())
        except (OSError, ValueError):
            return False
        different = [key for key, value in task.items() if left.get(key) != value]
        if different:
            given = f"an unfinished search of another {', another '.join(different)}"
            raise InputError(
                Problem(given, "the same study, seed and effort, or no --resume", file=str(self.folder))
            )
        return True

    def due(self) -> bool:
        """Whether it is time to keep a population's state."""
        return time.monotonic() - self._last >= KEEP_EVERY

    def keep(self, concept: str, state: Any) -> None:
        """Keep the state of a population, whole or not at all."""
        write_whole(self._file(concept), pickle.dumps(state, protocol=pickle.HIGHEST_PROTOCOL))
        self._last = time.monotonic()

    def kept(self, concept: str) -> Any:
        """The state of a population; None where there is none that can be read."""
        try:
            return pickle.loads(self._file(concept).read_bytes())
        except (OSError, EOFError, pickle.UnpicklingError, AttributeError, ImportError):
            return None

    def end(self) -> None:
        """Remove it: the run is written, or there is nothing to write; folders made for it go where empty."""
        shutil.rmtree(self.folder, ignore_errors=True)
        for above in self._made:
            if above.is_dir() and not any(above.iterdir()):
                above.rmdir()

    def _file(self, concept: str) -> Path:
        return self.folder / f"{concept.replace(' ', '_').replace(',', '')}.state"


def task_of(study: Study, seed: int, version: str) -> dict[str, Any]:
    """What makes two searches the same: study file, seed, effort, version of the program."""
    return {
        "study": study.file_hash,
        "seed": seed,
        "effort": [study.search.population, study.search.generations],
        "version": version,
    }
