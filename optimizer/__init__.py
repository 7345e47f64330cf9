"""Studies, search, fronts and charts around the physics in `models`.

`Study.read(path)` reads a study file, `run = search(study)` searches it; `run.front` is the table of its
Pareto designs, `run.charts.front()` a chart of them, `run.shortlist()` a few of them in words. Imports happen
on first use, so that the command line answers at once.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from optimizer.fronts import Front, front
    from optimizer.notebook import search
    from optimizer.populations import SearchResult
    from optimizer.study import Study

__all__ = ["Front", "SearchResult", "Study", "front", "search"]

_HOMES = {
    "Front": "optimizer.fronts",
    "front": "optimizer.fronts",
    "SearchResult": "optimizer.populations",
    "search": "optimizer.notebook",
    "Study": "optimizer.study",
}


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'optimizer' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
