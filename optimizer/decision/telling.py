"""A shortlist as people and programs read it: on the terminal, as CSV, as JSON."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pandas as pd
from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.markup import escape
from rich.table import Table

from optimizer.charts.words import CAUTION
from optimizer.decision.figures import told_of
from optimizer.decision.shortlist import Shortlist
from optimizer.errors import InputError, Problem

SUFFIXES = (".csv", ".json")


def table_suffix(path: Path) -> str:
    """The ending of a file that a table is to be written to.

    Raises:
        InputError: for another ending, or a folder that is not there.
    """
    if path.suffix.lower() not in SUFFIXES:
        raise InputError(Problem(str(path), "a file ending in .csv or .json", key="--out"))
    if not path.parent.is_dir():
        raise InputError(Problem(str(path), "a file in an existing folder", key="--out"))
    return path.suffix.lower()


def as_json(found: Shortlist) -> str:
    """The shortlist as JSON: every entry with its words and all columns of its design."""
    return json.dumps(_content(found), indent=1, ensure_ascii=False) + "\n"


def _content(found: Shortlist) -> dict[str, Any]:
    rows = json.loads(found.table.to_json(orient="records", double_precision=12))
    return {
        "study": found.study.name,
        "currency": found.study.currency,
        "recommended": str(found.table["design_id"].iloc[found.recommended]),
        "reason": found.reason,
        "shortlist": [
            {
                "role": entry.role,
                "rule": entry.rule,
                "words": list(entry.sentences),
                "design": rows[entry.row],
            }
            for entry in found.entries
        ],
        "caution": CAUTION,
    }


def as_csv(found: Shortlist) -> str:
    """The shortlist as CSV: role, rule and words before the columns of front.csv."""
    told = pd.DataFrame(
        {
            "role": [entry.role for entry in found.entries],
            "rule": [entry.rule for entry in found.entries],
            "recommended": [entry.row == found.recommended for entry in found.entries],
            "words": [" ".join(entry.sentences) for entry in found.entries],
        }
    )
    designs = found.table.iloc[[entry.row for entry in found.entries]].reset_index(drop=True)
    return str(pd.concat([told, designs], axis=1).to_csv(index=False, lineterminator="\n"))


def print_shortlist(found: Shortlist) -> None:
    """Print the shortlist on standard output: a table, then the words of each design."""
    console = Console(highlight=False)
    console.print(_table(found))
    for row in found.rows:
        first = next(entry for entry in found.entries if entry.row == row)
        roles = ", ".join(found.roles(row))
        console.print(f"[bold]{first.design_id}[/bold] ({roles}): {escape(first.rule)}.")
        for sentence in first.sentences:
            console.print(f"  {escape(sentence)}")
        console.print()
    recommended = found.table["design_id"].iloc[found.recommended]
    console.print(f"[bold]Recommended: {recommended}[/bold]: {escape(found.reason)}.")
    console.print(f"[dim]{escape(CAUTION)}[/dim]")


def _table(found: Shortlist) -> Table:
    study = found.study
    table = Table(title=f"{escape(study.name)}: shortlist", box=SIMPLE_HEAD, padding=(0, 1, 0, 0))
    for head in ("picked as", "design", "what it is"):
        table.add_column(head)
    told = told_of(study.objectives)
    for entry in told:
        table.add_column(f"{entry.title}\n\\[{escape(entry.unit(study.currency))}]", justify="right")
    for pick in found.entries:
        design = found.design(pick.row)
        figures = [entry.number(float(design[entry.column])) for entry in told]
        table.add_row(pick.role, pick.design_id, escape(pick.headline), *figures)
    return table
