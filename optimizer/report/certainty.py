"""Tables of how sure the options' figures are: bands, shares that keep limits, sources of scatter."""

from __future__ import annotations

from optimizer.certainty.tolerance import factor_words
from optimizer.decision.figures import told_of
from optimizer.decision.shortlist import Shortlist
from optimizer.decision.wording import requirement_words
from optimizer.report.blocks import Table, first_wide
from optimizer.report.designs import LABEL_SHARE, heads

MOST_DRIVERS = 3


def bands_table(found: Shortlist) -> Table:
    """Of every option what 5 and 95 % of the inverters stay below, and the models' own value."""
    rows = []
    for entry in told_of(found.study.objectives):
        cells = []
        for row in found.rows:
            band = found.tolerances[row].bands[entry.name]
            cells.append(
                f"{entry.number(band.nominal)} ({entry.number(band.low)} to {entry.number(band.high)})"
            )
        rows.append((f"{entry.title} [{entry.unit(found.study.currency)}]", *cells))
    title = "Nominal value, and in brackets what 5 and 95 % of inverters stay below"
    return _table(found, "", rows, title)


def holding_table(found: Shortlist) -> Table:
    """Share of the inverters that keep each requirement, those that all keep left out [%]."""
    tolerances = [found.tolerances[row] for row in found.rows]
    names = [
        name for name in tolerances[0].holding if any(one.holding.get(name, 1.0) < 1.0 for one in tolerances)
    ]
    rows = [
        (requirement_words(name), *(_percent(one.holding.get(name, 1.0)) for one in tolerances))
        for name in names
    ]
    rows.append(("all limits together", *(_percent(one.all_hold) for one in tolerances)))
    table = _table(found, "requirement", rows, "Inverters that keep a limit [%]; all keep those not told")
    return Table(
        table.columns, table.rows, table.shares, table.figures, frozenset([len(rows) - 1]), table.title
    )


def drivers_table(found: Shortlist) -> Table:
    """What the scatter of each figure comes from, of every option."""
    rows = []
    for entry in told_of(found.study.objectives):
        cells = []
        for row in found.rows:
            drivers = found.tolerances[row].bands[entry.name].drivers[:MOST_DRIVERS]
            cells.append(
                ", ".join(f"{factor_words(name)} {_percent(share)} %" for name, share in drivers) or "-"
            )
        rows.append((entry.title, *cells))
    title = "What the scatter comes from (shares of squared rank correlations)"
    return Table(("", *heads(found)), tuple(rows), first_wide(len(found.rows), LABEL_SHARE), title=title)


def _table(found: Shortlist, head: str, rows: list[tuple[str, ...]], title: str) -> Table:
    count = len(found.rows)
    return Table(
        (head, *heads(found)),
        tuple(rows),
        first_wide(count, LABEL_SHARE),
        frozenset(range(1, count + 1)),
        title=title,
    )


def _percent(share: float) -> str:
    return "< 1" if 0.0 < share < 0.01 else "> 99" if 0.99 < share < 1.0 else f"{100.0 * share:.0f}"
