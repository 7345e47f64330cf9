"""What a finished search prints: a table of the fronts, and where the dashboard lies."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.table import Table

from optimizer.objectives import OBJECTIVES

if TYPE_CHECKING:
    from optimizer.audit.audited_run import Audited
    from optimizer.batch.batch_run import BatchOutcome
    from optimizer.runs.run import Outcome


def print_summary(outcome: Outcome, *, as_json: bool) -> None:
    """Print the summary on standard output, as a table or as run.json's content plus the folder."""
    if as_json:
        print(json.dumps({"folder": str(outcome.folder), **outcome.summary}))
        return
    console = Console()
    console.print(_table(outcome))
    for concept, reasons in outcome.summary["ruled_out"].items():
        console.print(
            f"{concept}: nothing feasible. " + "; ".join(f"{name}: {miss}" for name, _, miss in reasons)
        )
        for line in outcome.summary["openings"].get(concept, {}).get("words", [])[1:]:
            console.print(line, soft_wrap=True, markup=False, highlight=False)
    seconds = outcome.summary["seconds"]
    if outcome.kept:
        console.print(
            f"The earlier run held files of your own and was kept as {outcome.kept}", soft_wrap=True
        )
    console.print(
        f"{outcome.result.evaluations:,} evaluations in {seconds['total']:.1f} s, seed {outcome.result.seed}"
    )
    console.print(f"Dashboard: {outcome.folder / 'dashboard.html'}", soft_wrap=True)
    console.print(f'Next: wattfront shortlist "{outcome.folder}", or report instead', soft_wrap=True)
    console.print(
        "[dim]Early-concept figures; lethal dc-link energy; standards and licensed practice decide.[/dim]",
        soft_wrap=True,
    )


def _table(outcome: Outcome) -> Table:
    study, front = outcome.result.study, outcome.front.table
    table = Table(
        title=f"{study.name}: Pareto designs by concept (best value of each objective)",
        box=SIMPLE_HEAD,
        padding=(0, 1, 0, 0),
    )
    table.add_column("concept")
    table.add_column("designs", justify="right")
    table.add_column("on overall\nfront", justify="right")
    for name in study.objectives:
        objective = OBJECTIVES[name]
        heading = f"{objective.title}\n\\[{objective.unit}]"
        table.add_column(heading, justify="right")
    table.add_column("frequency\n\\[kHz]", justify="right")
    for found in outcome.result.classes:
        rows = front[front.concept == found.concept.name]
        if len(rows):
            best = [f"{rows[OBJECTIVES[name].column].min():.3g}" for name in study.objectives]
            hertz = rows.switching_frequency_hz / 1e3
            span = f"{hertz.min():.3g} to {hertz.max():.3g}"
            table.add_row(found.concept.name, str(len(rows)), str(int(rows.overall_front.sum())), *best, span)
        else:
            table.add_row(found.concept.name, "0", "0", *["-"] * len(study.objectives), "-")
    return table


def print_audit(audited: Audited, *, as_json: bool) -> None:
    """Print what an audit found, as a table or as JSON by concept."""
    from optimizer.audit.audited_run import audit_entries

    if as_json:
        print(json.dumps(audit_entries(audited.found)))
        return
    table = Table(
        title=f"{audited.run.study.name}: share of the joint hypervolume that the search had found",
        box=SIMPLE_HEAD,
        padding=(0, 1, 0, 0),
    )
    for heading in ("concept", "designs\nevaluated", "of them\nfeasible", "front", "of it\nbeaten", "share"):
        table.add_column(heading, justify="left" if heading == "concept" else "right")
    for one in audited.found:
        table.add_row(
            one.concept.name,
            f"{one.evaluations:,}",
            f"{one.feasible:,}",
            f"{one.front:,}",
            f"{one.beaten:,}",
            f"{one.share:.2%}",
        )
    console = Console()
    console.print(table)
    console.print(
        "A beaten design has a better one somewhere near it; the share says how much that matters.",
        soft_wrap=True,
    )


def print_batch(found: BatchOutcome, *, as_json: bool) -> None:
    """Print a finished batch: a row a case and concept, or JSON."""
    if as_json:
        rows = json.loads(found.cases.to_json(orient="records"))
        print(json.dumps({"folder": str(found.folder), "cases": rows, "ruled_out": dict(found.ruled_out)}))
        return
    console = Console()
    best = [name for name in found.cases.columns if name.startswith("least_")]
    columns = {OBJECTIVES[name].column: OBJECTIVES[name] for name in OBJECTIVES}
    table = Table(title="Best of each case", box=SIMPLE_HEAD, padding=(0, 1, 0, 0))
    for heading in ("case", "concept", "designs"):
        table.add_column(heading, justify="right" if heading == "designs" else "left")
    for name in best:
        objective = columns[name.removeprefix("least_")]
        table.add_column(f"least {objective.title}\n\\[{objective.unit}]", justify="right")
    last = None
    for row in found.cases.to_dict("records"):
        values = ["-" if row[name] != row[name] else f"{row[name]:.3g}" for name in best]
        case, last = "" if row["case"] == last else str(row["case"]), row["case"]
        table.add_row(case, str(row["concept"]), str(row["designs"]), *values)
    console.print(table)
    for case, reasons in found.ruled_out.items():
        told = "; ".join(f"{name}: {miss}" for name, _, miss in reasons)
        console.print(f"{case}: nothing feasible. {told}", soft_wrap=True)
    count = found.cases.evaluations.sum()
    console.print(f"{count:,} evaluations in {found.seconds:.1f} s")
    console.print(f"Dashboard: {found.folder / 'dashboard.html'}", soft_wrap=True)
    console.print(
        "[dim]Early-concept figures; lethal dc-link energy; standards and licensed practice decide.[/dim]",
        soft_wrap=True,
    )
