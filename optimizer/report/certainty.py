"""Tables of how sure the options' figures are: bands, shares that keep limits, sources of scatter."""

from __future__ import annotations

import pandas as pd

from optimizer.certainty.neighbourhood import Neighbourhood, tightest
from optimizer.certainty.sensitivity import PERCENT
from optimizer.certainty.tolerance import factor_words
from optimizer.decision.figures import told_of
from optimizer.decision.shortlist import Shortlist
from optimizer.decision.wording import requirement_words
from optimizer.objectives import OBJECTIVES
from optimizer.report.blocks import Table, first_wide
from optimizer.report.designs import LABEL_SHARE, heads

MOST_DRIVERS = 3
HOW = (
    "The change of a figure when one thing rises by 1 %, temperatures by 1 K. Along a variable of the "
    "design its inductors are built anew, and at constant ripple current the inductance follows the "
    "frequency. Under another specification the very same design is judged; only what the models size "
    "themselves (dc link, emission filter) follows. Slopes are taken over plus and minus 5 % (5 K), since "
    "inductors have whole turns."
)
TIGHTEST = 4
"""Requirements whose margins are told of a design's neighbourhood."""


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


def effects_table(found: Neighbourhood) -> Table:
    """Changes of all objectives and of the tightest margins, a row a thing varied."""
    names = [*OBJECTIVES, *tightest(found, TIGHTEST)]
    effects = found.effects.assign(words=varied_words(found.effects))
    wide = effects.pivot_table(index="words", columns="figure", values="change", sort=False, aggfunc="first")
    columns = [name for name in names if name in wide]
    rows = [
        (str(words), *(f"{value:+.2f}" if value == value else "-" for value in row))
        for words, row in zip(wide.index, wide[columns].to_numpy(), strict=True)
    ]
    heads = tuple(
        f"{OBJECTIVES[name].title} [%]" if name in OBJECTIVES else f"{requirement_words(name)} [points]"
        for name in columns
    )
    share = 0.76 / max(len(columns), 1)
    return Table(
        ("raised", *heads),
        tuple(rows),
        (0.24, *([share] * len(columns))),
        frozenset(range(1, len(columns) + 1)),
    )


def varied_words(effects: pd.DataFrame) -> pd.Series:
    """What is varied, with its step where that is not 1 %."""
    step = effects["raised by"].map(lambda told: "" if told == PERCENT else f" (+{told})")
    return effects["varied"] + step


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
