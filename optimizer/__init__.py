"""Studies, search, fronts and charts around the physics in `models`.

`Study.read(path)` reads a study file, `run = search(study)` searches it; `run.front` is the table of its
Pareto designs, `run.charts.front()` a chart of them, `run.shortlist()` a few of them in words. Imports happen
on first use, so that the command line answers at once.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from optimizer.evolution.populations import SearchResult
    from optimizer.notebook import search
    from optimizer.runs.fronts import Front, front
    from optimizer.study.study import Study

__all__ = ["Front", "SearchResult", "Study", "front", "search"]

_HOMES = {
    "Front": "optimizer.runs.fronts",
    "front": "optimizer.runs.fronts",
    "SearchResult": "optimizer.evolution.populations",
    "search": "optimizer.notebook",
    "Study": "optimizer.study.study",
}


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'optimizer' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
