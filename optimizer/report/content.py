"""What a report says: a page for the decision and an appendix for engineers, before it becomes a file."""

from __future__ import annotations

from dataclasses import dataclass

from optimizer.audit.audited_run import stored_points
from optimizer.certainty.neighbourhood import around
from optimizer.charts.task import task_words
from optimizer.charts.words import CAUTION, CAUTIONS
from optimizer.decision.figures import ALWAYS, COST, LOSS, MASS, PRICE, VOLUME, Told, figure, told_of
from optimizer.decision.shortlist import Shortlist
from optimizer.decision.wording import beside, what_it_is
from optimizer.limits.binding import BINDING
from optimizer.report.backgrounds import (
    energy_words,
    parts_tables,
    rules_table,
    sources_table,
    specification_table,
)
from optimizer.report.blocks import Picture, Section, Table
from optimizer.report.certainty import HOW, bands_table, drivers_table, effects_table, holding_table
from optimizer.report.designs import build_table, component_tables, margin_table, words_table
from optimizer.report.limiting import limits_table
from optimizer.report.pictures import pictures
from optimizer.runs.stored_run import StoredRun

GAINED = (LOSS, VOLUME, PRICE, COST)
MOST_FURTHER, FURTHER_SHARE = 2, 0.1
"""Further quantities in the options' table at most, and of its width what each takes."""
LETHAL = (
    "The dc link and the filter store lethal energy, also after the supply is switched off. Standards "
    "(IEC 62109, IEC 62477-1 and those of the application) and licensed practice decide what may be built, "
    "connected and touched."
)


@dataclass(frozen=True)
class Report:
    """A report's content.

    Attributes:
        title, subtitle: of the page.
        question: what is to be decided.
        recommendation: what is recommended, by which criteria; its head and the rest.
        options: the shortlist.
        gains: number and words of what every option buys.
        pictures: three charts.
        assumptions, cautions: what the figures stand on.
        sections: the appendix.
        origin: where all of it comes from.
    """

    title: str
    subtitle: str
    question: str
    recommendation: tuple[str, str]
    options: Table
    gains: tuple[tuple[str, str], ...]
    pictures: tuple[Picture, ...]
    assumptions: tuple[str, ...]
    cautions: tuple[str, ...]
    sections: tuple[Section, ...]
    origin: str


def report(run: StoredRun, found: Shortlist) -> Report:
    """Put the content of a report together.

    Args:
        run: the run.
        found: its shortlist.
    """
    return Report(
        title=run.study.name,
        subtitle=" ".join(run.study.description.split()),
        question=_question(run),
        recommendation=_recommendation(found),
        options=_options(found),
        gains=_gains(found),
        pictures=pictures(found),
        assumptions=_assumptions(run),
        cautions=(LETHAL, CAUTION.split(". ")[0] + ". " + CAUTIONS[0], CAUTIONS[1]),
        sections=_sections(run, found),
        origin=_origin(run),
    )


def _question(run: StoredRun) -> str:
    task = dict(task_words(run.study))
    total = run.summary.get("evaluations", 0)
    return (
        f"Which inverter concept for {task['rated power']}, {task['ac voltage'].split(' (')[0]} ac from "
        f"{task['dc voltage']}? {total:,} candidates of {len(run.study.concept_names)} concepts "
        f"({'; '.join(run.study.concept_names)}) were modelled. None of those shown can be bettered in "
        f"{', '.join(run.study.objectives)} at once: what is left is a choice."
    )


def _recommendation(found: Shortlist) -> tuple[str, str]:
    row = found.recommended
    design, number = found.design(row), found.rows.index(row) + 1
    study, years = found.study, found.study.specification.energy.years
    head = f"Option {number}, {design['design_id']} ({', '.join(found.roles(row))})"
    lost = figure(float(design["lost_energy_cost"]), 2)
    return head, (
        f"{what_it_is(design)} It is recommended because {found.reason}. Over "
        f"{years:g} years its losses cost {lost} {study.currency}, beside a price of "
        f"{PRICE.figure(float(design['price']), study.currency)}."
    )


def _options(found: Shortlist) -> Table:
    currency = found.study.currency
    years = f"{found.study.specification.energy.years:g} years"
    further = _further(found)[:MOST_FURTHER]
    concept = 0.325 - FURTHER_SHARE * len(further)
    rows = []
    for place, row in enumerate(found.rows, start=1):
        design = found.design(row)
        rows.append(
            (
                str(place),
                f"{', '.join(found.roles(row))}",
                f"{next(entry.headline for entry in found.entries if entry.row == row)}, {design['cooling']}",
                f"{100.0 * design['efficiency_weighted']:.1f}",
                *(entry.number(float(design[entry.column])) for entry in (VOLUME, MASS, PRICE)),
                figure(float(design["lost_energy_cost"]), 2),
                COST.number(float(design[COST.column])),
                *(entry.number(float(design[entry.column])) for entry in further),
            )
        )
    return Table(
        (
            "no.",
            "picked as",
            "concept, modulation, frequency, cooling",
            "weighted efficiency [%]",
            "volume [l]",
            "mass [kg]",
            f"price [{currency}]",
            f"lost energy, {years} [{currency}]",
            f"price and lost energy [{currency}]",
            *(f"{entry.title} [{entry.unit(currency)}]" for entry in further),
        ),
        tuple(rows),
        (0.035, 0.15, concept, 0.09, 0.07, 0.06, 0.08, 0.1, 0.09, *([FURTHER_SHARE] * len(further))),
        frozenset(range(3, 9 + len(further))),
        frozenset([found.rows.index(found.recommended)]),
    )


def _further(found: Shortlist) -> tuple[Told, ...]:
    """What the study minimises beside the usual quantities."""
    return tuple(entry for entry in told_of(found.study.objectives) if entry not in ALWAYS)


def _gains(found: Shortlist) -> tuple[tuple[str, str], ...]:
    """What every option but the balanced one buys, and for what."""
    balanced = found.entries[0].row
    number = found.rows.index(balanced) + 1
    told = (*GAINED, *_further(found))
    return tuple(
        (
            str(place),
            beside(found.design(row), found.design(balanced), told, found.study.currency, f"option {number}"),
        )
        for place, row in enumerate(found.rows, start=1)
        if row != balanced
    )


def _assumptions(run: StoredRun) -> tuple[str, ...]:
    task = dict(task_words(run.study))
    return (
        f"Lost energy: {energy_words(run.study)}.",
        f"Loss weights: {task['weighting of the loss']}. Limits: {task['distortion limits']}"
        f"{_emission(run)}; air of {task['air']}.",
        "Prices are of parts, representative and for comparison: without assembly, tooling or margins.",
    )


def _emission(run: StoredRun) -> str:
    limit = run.study.specification.emission_limit
    return f", {limit}" if limit else "; conducted emission left out"


def _sections(run: StoredRun, found: Shortlist) -> tuple[Section, ...]:
    numbers = [str(place) for place in range(1, len(found.rows) + 1)]
    designs = run.table.iloc[found.rows]
    return (
        Section("The options in words", (), (words_table(found, numbers),)),
        Section("What the options are built of", (), (build_table(found),)),
        Section(
            "Component by component",
            ("Losses at rated load and nominal voltages; volumes are boxes, with the air between them.",),
            component_tables(found),
        ),
        Section(
            "Margins",
            ("What binds where: 0 is at the limit. Temperatures count over the rise allowed, 20 dB as 100.",),
            (margin_table(found),),
        ),
        *_limits(run),
        *_certainty(run, found),
        Section(
            "Specification and design rules", (), (specification_table(run.study), rules_table(run.study))
        ),
        Section(
            "Models and their sources", ("As named in the descriptions of the models.",), (sources_table(),)
        ),
        Section(
            "Values of the parts used",
            ("Representative of a class, not of a part one can order. Replace them by data sheets' values.",),
            parts_tables(run.study, designs),
            on_slides=False,
        ),
    )


def _limits(run: StoredRun) -> tuple[Section, ...]:
    if run.binding is None or run.binding.empty:
        return ()
    words = (
        f"Requirements of which designs have less than {100.0 * BINDING:g} % left, and ends of search ranges "
        "at which they stand, with the share of a front's designs in that octave of switching frequency."
    )
    return (Section("What limits the fronts", (words,), (limits_table(run.binding),), on_slides=False),)


def _certainty(run: StoredRun, found: Shortlist) -> tuple[Section, ...]:
    if not found.tolerances:
        return ()
    samples = next(iter(found.tolerances.values())).samples
    words = (
        f"{samples:,} inverters of every option sampled under tolerances of parts and uncertainties of "
        "models that the study states. A design of a front stands at its limits by nature: where few "
        "inverters keep a limit, leave reserve before building it."
    )
    tables = (bands_table(found), holding_table(found), drivers_table(found))
    recommended = around(run, found, found.recommended, stored_points(run))
    hangs = f"What the figures of {recommended.design_id} hang on"
    return (
        Section("How sure the figures are", (words,), tables),
        Section(hangs, (HOW,), (effects_table(recommended),), on_slides=False),
    )


def _origin(run: StoredRun) -> str:
    told = run.summary
    return (
        f"Study {told['study']['file']}, searched {str(told.get('date', ''))[:10]} with wattfront "
        f"{told.get('version', '')}, seed {told.get('seed', '')}."
    )
