"""Tables of a comparison, as text and for the page."""

from __future__ import annotations

from optimizer.comparison.comparison import Comparison, Pick, moved, signed
from optimizer.decision.figures import ALWAYS, figure
from optimizer.decision.wording import headline
from optimizer.report.blocks import Table, first_wide
from optimizer.report.designs import KINDS


def runs_table(found: Comparison) -> Table:
    """What the runs are and how far their fronts reach."""
    rows = []
    for label, run in zip(found.labels, found.runs, strict=True):
        front = run.table[run.table.overall_front]
        rows.append(
            (
                label,
                run.study.name,
                str(run.summary.get("date", ""))[:10],
                str(len(front)),
                *(entry.number(float(front[entry.column].min())) for entry in ALWAYS),
            )
        )
    heads = tuple(f"least {entry.title} [{entry.unit(found.currency)}]" for entry in ALWAYS)
    return Table(
        ("run", "study", "date", "designs on the front", *heads),
        tuple(rows),
        (0.18, 0.17, 0.09, 0.08, *([0.48 / len(heads)] * len(heads))),
        frozenset(range(3, 4 + len(heads))),
        title="The runs",
    )


def pick_table(found: Comparison, pick: Pick) -> Table:
    """One design a run and its figures."""
    rows = tuple(
        (
            label,
            str(design["design_id"]),
            f"{headline(design)}, {design['cooling']}",
            *(entry.number(float(design[entry.column])) for entry in ALWAYS),
        )
        for label, design in zip(found.labels, pick.designs, strict=True)
    )
    heads = tuple(f"{entry.title} [{entry.unit(found.currency)}]" for entry in ALWAYS)
    return Table(
        ("run", "design", "what it is", *heads),
        rows,
        (0.18, 0.09, 0.28, *([0.45 / len(heads)] * len(heads))),
        frozenset(range(3, 3 + len(heads))),
        title=f"{pick.title[:1].upper()}{pick.title[1:]}: {pick.rule}",
    )


def component_table(found: Comparison, pick: Pick, kind: str) -> Table:
    """What every component of each further run's design has more or less than the first's.

    Args:
        found: the comparison.
        pick: its designs.
        kind: a key of KINDS.
    """
    changes = [dict(moved(pick.designs[0], design, kind)) for design in pick.designs[1:]]
    names = dict.fromkeys(name for each in changes for name in each)
    rows = [(name, *(signed(each.get(name, 0.0)) for each in changes)) for name in names]
    totals = ("total", *(signed(sum(each.values())) for each in changes))
    unit = KINDS[kind][3] or found.currency
    return Table(
        ("component", *found.labels[1:]),
        (*rows, totals),
        first_wide(len(changes), 0.4),
        frozenset(range(1, 1 + len(changes))),
        frozenset([len(rows)]),
        f"{kind} [{unit}], change against {found.labels[0]}",
    )


def changes_table(found: Comparison, place: int) -> Table:
    """Keys of the study of a further run that differ from the first's."""
    rows = tuple((change.key, change.before, change.after) for change in found.changes[place])
    return Table(
        ("key", found.labels[0], found.labels[place + 1]),
        rows or (("no key differs", "", ""),),
        (0.3, 0.35, 0.35),
        title=f"What was changed for {found.labels[place + 1]}",
    )


def cares(found: Comparison) -> tuple[str, ...]:
    """Words of care where the runs are of different power or currency."""
    told = []
    powers = [run.study.specification.apparent_power_va for run in found.runs]
    if max(powers) > 1.001 * min(powers):
        sizes = ", ".join(f"{figure(power / 1e3)} kVA" for power in powers)
        told.append(
            f"The runs are of different power ({sizes}): watts, litres and prices do not compare directly."
        )
    currencies = list(dict.fromkeys(run.study.currency for run in found.runs))
    if len(currencies) > 1:
        told.append(f"Prices are in different currencies ({', '.join(currencies)}) and not converted.")
    return tuple(told)
