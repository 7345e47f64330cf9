"""The commands of `wattfront`. Each reads its input, calls the library and says what came out; nothing is
computed here.

Heavy imports happen inside the commands, so that `--help` answers at once.
"""

from __future__ import annotations

import sys
from enum import StrEnum
from pathlib import Path
from typing import Annotated

import typer

from optimizer.errors import InputError, Problem, WattfrontError

app = typer.Typer(
    name="wattfront",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    help="Pareto fronts of losses, volume, price and distortion for DC-AC inverters, before any layout.",
    epilog="Early-concept figures. A dc link stores lethal energy; standards and licensed practice decide.",
)


class ReportFormat(StrEnum):
    """Formats of a report."""

    HTML, PDF, PPTX = "html", "pdf", "pptx"


RunFolder = Annotated[Path, typer.Argument(help="Run folder that a search has written.", show_default=False)]
Weights = Annotated[
    str | None,
    typer.Option(help='Weights of objectives for one more design: "volume=2, price=1".', show_default=False),
]
StudyFile = Annotated[Path, typer.Argument(help="Study file (TOML).", show_default=False)]


@app.command(epilog="Example: wattfront new my_inverter.toml")
def new(file: Annotated[Path, typer.Argument(help="Study file to write.", show_default=False)]) -> None:
    """Write a commented starter study."""
    from optimizer.runs.run_folder import write_whole
    from optimizer.study.starter import starter_text

    if file.exists():
        raise InputError(Problem("a file that exists already", "a new file name", file=str(file)))
    if not file.parent.is_dir():
        raise InputError(
            Problem(f"a folder that does not exist, {file.parent}", "an existing folder", file=str(file))
        )
    write_whole(file, starter_text())
    typer.echo(f"Wrote {file}. Next: edit it, then run  wattfront search {file}")


@app.command(epilog="Example: wattfront search studies/rooftop_5kw.toml --seed 7")
def search(
    study: StudyFile,
    run: Annotated[
        Path | None, typer.Option(help="Run folder; default runs/<study name>.", show_default=False)
    ] = None,
    seed: Annotated[int, typer.Option(help="Seed; the same seed gives the same result.", min=0)] = 1,
    workers: Annotated[
        int | None, typer.Option(help="Processes; default one per core.", min=1, max=256, show_default=False)
    ] = None,
    population: Annotated[
        int | None,
        typer.Option(
            help="Candidates per generation and class, instead of the study's.", min=8, show_default=False
        ),
    ] = None,
    generations: Annotated[
        int | None, typer.Option(help="Generations, instead of the study's.", min=1, show_default=False)
    ] = None,
    resume: Annotated[
        bool, typer.Option("--resume", help="Go on with a search of this run that was killed.")
    ] = False,
    cluster: Annotated[
        str | None,
        typer.Option(help="Address of a Dask scheduler to search on, tcp://host:port.", show_default=False),
    ] = None,
    json: Annotated[
        bool, typer.Option("--json", help="Print the summary as JSON instead of a table.")
    ] = False,
) -> None:
    """Search a study's inverter and write its run folder: fronts, margins, dashboard.

    Lists in the study at keys that take one value make a batch: every combination is searched.
    """
    from optimizer.batch.cases import read_cases
    from optimizer.progress import SearchBar
    from optimizer.runs.run import run_search
    from optimizer.summary import print_batch, print_summary

    cases = [case.with_effort(population, generations) for case in read_cases(study)]
    asked = cases[0].study
    folder = run or Path("runs") / asked.folder_name
    if cluster or len(cases) > 1:
        from optimizer.batch.batch_run import run_batch
        from optimizer.batch.engine import engine_of
        from optimizer.progress import BatchBar

        with engine_of(cluster, workers) as engine, BatchBar(cases, hidden=json) as batch_bar:
            found = run_batch(
                cases, folder, engine, seed=seed, resume=resume, source=study, report=batch_bar.report
            )
        print_batch(found, as_json=json)
        return
    with SearchBar(asked, hidden=json) as bar:
        outcome = run_search(
            asked, folder, seed=seed, workers=workers, resume=resume, report=bar.report, stage=bar.stage
        )
    print_summary(outcome, as_json=json)


@app.command(
    epilog="Example: wattfront evaluate studies/rooftop_5kw.toml --designs prototypes.csv --out results.csv"
)
def evaluate(
    study: StudyFile,
    designs: Annotated[
        Path,
        typer.Option(
            help="Designs, one a row; columns as in front.csv (wattfront evaluate --columns).",
            show_default=False,
        ),
    ],
    out: Annotated[
        Path | None,
        typer.Option(help="Result file, .csv or .json; default: standard output.", show_default=False),
    ] = None,
    spectrum: Annotated[
        Path | None,
        typer.Option(help="CSV file for the harmonic lines of every design.", show_default=False),
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="JSON instead of CSV on standard output.")] = False,
) -> None:
    """Evaluate designs given by hand: every figure, every margin, losses by part, spectrum."""
    from optimizer.given.designs_file import INNER_COLUMNS, bridges_in, read_designs
    from optimizer.given.evaluate import evaluated_table, joined, spectrum_table, written_table
    from optimizer.prepared import prepared_inverter
    from optimizer.runs.run_folder import write_whole
    from optimizer.study.study import Study

    asked = Study.read(study)
    tables, spectra = [], []
    others = INNER_COLUMNS if len(asked.search.bridges) > 1 else ()
    for bridge in bridges_in(designs, asked.search.bridges):
        inverter = prepared_inverter(asked, bridge)
        given = read_designs(designs, inverter, others, asked.specification.bridge)
        for note in given.notes:
            typer.echo(f"Left out of {designs.name}, {note}", err=True)
        tables.append(evaluated_table(asked, inverter, given))
        if spectrum is not None:
            spectra.append(spectrum_table(asked, inverter, given))
    table = joined(tables)
    if spectrum is not None:
        write_whole(spectrum, written_table(joined(spectra), "csv"))
    kind = "json" if json or (out is not None and out.suffix == ".json") else "csv"
    text = written_table(table, kind)
    if out is None:
        typer.echo(text, nl=False)
    else:
        write_whole(out, text)
        typer.echo(f"Wrote {len(table)} designs, {table.feasible.sum()} of them feasible, to {out}")


@app.command(epilog='Example: wattfront audit "runs/rooftop 5 kW" --designs 5000000')
def audit(
    run: RunFolder,
    designs: Annotated[int, typer.Option(help="Designs to evaluate in all, about.", min=1000)] = 2_000_000,
    seed: Annotated[int, typer.Option(help="Seed; the same seed gives the same result.", min=0)] = 1,
    workers: Annotated[
        int | None, typer.Option(help="Processes; default one per core.", min=1, max=256, show_default=False)
    ] = None,
    take_in: Annotated[
        bool, typer.Option("--take-in", help="Write the run anew with the better designs found.")
    ] = False,
    json: Annotated[bool, typer.Option("--json", help="Print JSON instead of a table.")] = False,
) -> None:
    """Say how complete a run's fronts are: quasi-random designs by the million, and a local polish."""
    from optimizer.audit.audited_run import audit_run, taken_in
    from optimizer.progress import AuditBar
    from optimizer.summary import print_audit

    with AuditBar(designs, hidden=json) as bar:
        audited = audit_run(run, designs=designs, seed=seed, workers=workers, report=bar.report)
    print_audit(audited, as_json=json)
    if take_in:
        kept = taken_in(audited)
        typer.echo(f"Wrote {run} anew" + (f"; the earlier one was kept as {kept}" if kept else ""), err=json)


@app.command(epilog='Example: wattfront shortlist "runs/rooftop 5 kW" --weights "volume=2, price=1"')
def shortlist(
    run: RunFolder,
    weights: Weights = None,
    out: Annotated[
        Path | None, typer.Option(help="File for the shortlist, .csv or .json.", show_default=False)
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="JSON instead of text on standard output.")] = False,
) -> None:
    """Pick a few designs from a run's front and tell them in plain words."""
    from optimizer.audit.audited_run import stored_points
    from optimizer.certainty.tolerance import sampler
    from optimizer.decision import shortlist as picked
    from optimizer.decision.telling import as_csv, as_json, print_shortlist, table_suffix
    from optimizer.decision.weights import read_weights
    from optimizer.runs.run_folder import write_whole
    from optimizer.runs.stored_run import read_run

    suffix = table_suffix(out) if out else ""
    asked = read_weights(weights) if weights is not None else None
    found = read_run(run)
    sampled = sampler(found.study, found.table, stored_points(found))
    chosen = picked(found.study, found.table, found.margins, asked, sampled)
    if out is not None:
        write_whole(out, as_json(chosen) if suffix == ".json" else as_csv(chosen))
    if json:
        typer.echo(as_json(chosen), nl=False)
    else:
        print_shortlist(chosen)


@app.command(epilog='Example: wattfront neighbourhood "runs/rooftop 5 kW" --design balanced')
def neighbourhood(
    run: RunFolder,
    design: Annotated[
        str | None,
        typer.Option(
            help="Id of front.csv, or what the shortlist picks it for; default the recommended one.",
            show_default=False,
        ),
    ] = None,
    out: Annotated[
        Path | None, typer.Option(help="Folder to write to; default RUN/neighbourhood.", show_default=False)
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="Print JSON, write nothing.")] = False,
) -> None:
    """Say what a design's figures hang on and how sure they are: bar charts and tables, CSV, JSON."""
    from optimizer.certainty.neighbourhood import FOLDER, as_json, write_neighbourhood
    from optimizer.certainty.neighbourhood import neighbourhood as look_around
    from optimizer.runs.stored_run import read_run

    found = look_around(read_run(run), design)
    if json:
        typer.echo(as_json(found), nl=False)
        return
    for path in write_neighbourhood(found, out or run / FOLDER):
        typer.echo(f"Wrote {path}")


@app.command(epilog='Example: wattfront report "runs/rooftop 5 kW" --format pdf --out for_the_board')
def report(
    run: RunFolder,
    kinds: Annotated[
        list[ReportFormat] | None,
        typer.Option("--format", help="Again for a second one; default all three.", show_default=False),
    ] = None,
    out: Annotated[
        Path | None, typer.Option(help="Folder for the report; default RUN/report.", show_default=False)
    ] = None,
    weights: Weights = None,
) -> None:
    """Write a run's report: one page for a decision, an appendix for engineers."""
    from optimizer.audit.audited_run import stored_points
    from optimizer.certainty.tolerance import sampler
    from optimizer.decision import shortlist as picked
    from optimizer.decision.weights import read_weights
    from optimizer.report import report as content_of
    from optimizer.report.writing import FOLDER, check_libraries, write_report
    from optimizer.runs.stored_run import read_run

    formats = [kind.value for kind in kinds or ReportFormat]
    check_libraries(formats)
    asked = read_weights(weights) if weights is not None else None
    found = read_run(run)
    sampled = sampler(found.study, found.table, stored_points(found))
    content = content_of(found, picked(found.study, found.table, found.margins, asked, sampled))
    for path in write_report(content, out or run / FOLDER, formats):
        typer.echo(f"Wrote {path}")


@app.command(epilog="Example: wattfront compare runs/with_silicon runs/with_sic --out compared.html")
def compare(
    runs: Annotated[list[Path], typer.Argument(help="Run folders, two or more.", show_default=False)],
    out: Annotated[
        Path | None, typer.Option(help="Page to write (.html); default: only print.", show_default=False)
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="JSON instead of text on standard output.")] = False,
) -> None:
    """Hold runs against the first: fronts on the same axes, what moved, what was changed."""
    from optimizer.comparison import compare as compared
    from optimizer.comparison.page import comparison_page
    from optimizer.comparison.telling import as_json, check_page, print_comparison
    from optimizer.runs.run_folder import write_whole
    from optimizer.runs.stored_run import read_run

    if out is not None:
        check_page(out)
    found = compared([read_run(run) for run in runs])
    if out is not None:
        write_whole(out, comparison_page(found))
    if json:
        typer.echo(as_json(found), nl=False)
    else:
        print_comparison(found)
    if out is not None:
        typer.echo(f"Wrote {out}", err=json)


@app.command(epilog="Example: wattfront catalog --kind devices --files my_parts.toml")
def catalog(
    kind: Annotated[
        str | None, typer.Option(help="List the parts of one kind with all their values.", show_default=False)
    ] = None,
    files: Annotated[
        list[Path] | None,
        typer.Option(help="Your own part files, checked and listed too.", show_default=False),
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="JSON instead of a table.")] = False,
) -> None:
    """List and check parts, your own included, with where their values come from."""
    from optimizer.catalog_listing import listing

    typer.echo(listing(kind, tuple(files or ()), as_json=json), nl=False)


def main() -> None:
    """Run the command line: exit code 0 done, 1 nothing feasible, 2 bad input."""
    try:
        app()
    except WattfrontError as trouble:
        typer.echo(str(trouble), err=True)
        sys.exit(trouble.exit_code)
    except OSError as trouble:
        typer.echo(f"{trouble.filename or 'file'}: {trouble.strerror or trouble}", err=True)
        sys.exit(InputError.exit_code)


if __name__ == "__main__":
    main()
