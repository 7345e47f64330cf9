"""A comparison on the terminal and as JSON."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.markup import escape
from rich.table import Table as Printed

from optimizer.comparison.comparison import Comparison, moved, movement_words
from optimizer.comparison.tables import cares, changes_table, pick_table, runs_table
from optimizer.errors import InputError, Problem
from optimizer.report.blocks import Table
from optimizer.report.designs import KINDS


def print_comparison(found: Comparison) -> None:
    """Print the comparison on standard output."""
    console = Console(highlight=False)
    console.print(_printed(runs_table(found)))
    for place in range(len(found.changes)):
        console.print(_printed(changes_table(found, place)))
    for pick in found.picks:
        console.print(_printed(pick_table(found, pick)))
        for label, design in zip(found.labels[1:], pick.designs[1:], strict=True):
            words = " ".join(movement_words(pick.designs[0], design, found.currency))
            console.print(f"  [bold]{escape(label)}[/bold]: {escape(words)}")
        console.print()
    for care in cares(found):
        console.print(escape(care))


def _printed(table: Table) -> Printed:
    printed = Printed(title=escape(table.title), box=SIMPLE_HEAD, padding=(0, 1, 0, 0), title_justify="left")
    for place, head in enumerate(table.columns):
        printed.add_column(
            escape(head), justify="right" if place in table.figures else "left", overflow="fold"
        )
    for row in table.rows:
        printed.add_row(*(escape(cell) for cell in row))
    return printed


def as_json(found: Comparison) -> str:
    """The comparison as JSON: runs, changed keys, picked designs, changes of their components."""
    return json.dumps(_content(found), indent=1, ensure_ascii=False) + "\n"


def _content(found: Comparison) -> dict[str, Any]:
    return {
        "runs": [
            {
                "label": label,
                "folder": str(run.folder),
                "study": run.study.name,
                "date": run.summary.get("date"),
            }
            for label, run in zip(found.labels, found.runs, strict=True)
        ],
        "changes": [
            {"run": label, "keys": [vars(change) for change in changes]}
            for label, changes in zip(found.labels[1:], found.changes, strict=True)
        ],
        "picks": [
            {
                "title": pick.title,
                "rule": pick.rule,
                "designs": [_plain(design) for design in pick.designs],
                "moved": [
                    {
                        "run": label,
                        "words": list(movement_words(pick.designs[0], design, found.currency)),
                        **{kind: dict(moved(pick.designs[0], design, kind)) for kind in KINDS},
                    }
                    for label, design in zip(found.labels[1:], pick.designs[1:], strict=True)
                ],
            }
            for pick in found.picks
        ],
    }


def _plain(design: Any) -> dict[str, Any]:
    """A row as JSON can hold it."""
    values = {str(name): value.item() if hasattr(value, "item") else value for name, value in design.items()}
    return {name: None if value != value else value for name, value in values.items()}


def check_page(path: Path) -> None:
    """Check that a page can be written there.

    Raises:
        InputError: for another ending, or a folder that is not there.
    """
    if path.suffix.lower() not in (".html", ".htm"):
        raise InputError(Problem(str(path), "a file ending in .html", key="--out"))
    if not path.parent.is_dir():
        raise InputError(Problem(str(path), "a file in an existing folder", key="--out"))
