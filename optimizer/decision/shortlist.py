"""The shortlist of a run: one design a role, picked by a stated rule from the overall front."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import pandas as pd

from optimizer.certainty.tolerance import Sampler, Tolerance, with_bands
from optimizer.charts.thinning import balanced_row
from optimizer.decision.figures import COST, LOSS, PRICE, VOLUME, told_of
from optimizer.decision.picks import EQUAL_COST, least_row, recommended_row, weighted_row
from optimizer.decision.weights import written_weights
from optimizer.decision.wording import beside, headline, how_sure, limited_by, limits_kept, what_it_is
from optimizer.objectives import OBJECTIVES
from optimizer.study.study import Study

BALANCED, WEIGHTED = "balanced", "best by your weights"
LEAST = {
    "cheapest": PRICE,
    "most efficient": LOSS,
    "smallest": VOLUME,
    "least cost over the years": COST,
}


@dataclass(frozen=True)
class Entry:
    """A design on the shortlist.

    Attributes:
        role: what it was picked for.
        rule: how, in words.
        row: its position in the front's table [-].
        design_id, headline: what it is called.
        sentences: what it is, gains and costs, what limits it, how sure its figures are.
    """

    role: str
    rule: str
    row: int
    design_id: str
    headline: str
    sentences: tuple[str, ...]


@dataclass(frozen=True)
class Shortlist:
    """Designs picked from a front, and the one that is recommended.

    Attributes:
        study: the study.
        table, margins: the front they were picked from.
        entries: one a role; a design may have several roles.
        recommended: the recommended design's row.
        reason: by which criteria, in words.
        tolerances: of the designs by their rows, where they were sampled.
    """

    study: Study
    table: pd.DataFrame
    margins: pd.DataFrame
    entries: tuple[Entry, ...]
    recommended: int
    reason: str
    tolerances: Mapping[int, Tolerance] = field(default_factory=dict)

    @property
    def rows(self) -> list[int]:
        """Positions of the designs, each once, in the order of the entries [-]."""
        return list(dict.fromkeys(entry.row for entry in self.entries))

    def roles(self, row: int) -> list[str]:
        """All roles of one design."""
        return [entry.role for entry in self.entries if entry.row == row]

    def design(self, row: int) -> dict[Any, Any]:
        """A design's row of the table."""
        return dict(self.table.iloc[row])


def shortlist(
    study: Study,
    table: pd.DataFrame,
    margins: pd.DataFrame,
    weights: Mapping[str, float] | None = None,
    sampled: Sampler | None = None,
) -> Shortlist:
    """Pick the shortlist from a front.

    Args:
        study: the study.
        table: its front, one row a design.
        margins: of the same designs.
        weights: by objective, for one further design; None for none.
        sampled: what samples designs under tolerances; None leaves them with typical errors of the models.
    """
    columns = [OBJECTIVES[name].column for name in study.objectives]
    picks = {BALANCED: (_balanced_rule(study), balanced_row(table, columns))}
    for role, entry in LEAST.items():
        picks[role] = (f"least {entry.title} on the front", least_row(table, entry.column, columns))
    if weights:
        rule = f"least weighted sum of {written_weights(weights)}, each over its range on the front"
        picks[WEIGHTED] = (rule, weighted_row(table, weights))
    recommended, reason = _recommendation(table, picks, columns)
    rows = dict.fromkeys(row for _, row in picks.values())
    tolerances = {row: sampled(row) for row in rows} if sampled else {}
    table = with_bands(table, tolerances) if tolerances else table
    entries = tuple(
        Entry(
            role,
            rule,
            row,
            str(table["design_id"].iloc[row]),
            headline(dict(table.iloc[row])),
            (
                *_sentences(study, table, margins, row, picks[BALANCED][1]),
                *([limits_kept(tolerances[row])] if row in tolerances else []),
            ),
        )
        for role, (rule, row) in picks.items()
    )
    return Shortlist(study, table, margins, entries, recommended, reason, tolerances)


def _balanced_rule(study: Study) -> str:
    return (
        f"nearest to the ideal point of {', '.join(study.objectives)}, each scaled to its range on the front "
        "(compromise programming, Zeleny 1973)"
    )


def _recommendation(
    table: pd.DataFrame, picks: Mapping[str, tuple[str, int]], columns: list[str]
) -> tuple[int, str]:
    if WEIGHTED in picks:
        rule, row = picks[WEIGHTED]
        return row, f"it has the {rule}"
    row = recommended_row(table, [row for _, row in picks.values()], columns)
    return row, (
        "of the shortlist it has the least price and lost energy over the years of use; costs within "
        f"{100.0 * EQUAL_COST:g} % count as equal, and of these the design nearest to the ideal point stands"
    )


def _sentences(
    study: Study, table: pd.DataFrame, margins: pd.DataFrame, row: int, balanced: int
) -> tuple[str, ...]:
    design, told = dict(table.iloc[row]), told_of(study.objectives)
    other = dict(table.iloc[balanced])
    compared = (
        ("All others are told against this design.",)
        if row == balanced
        else (beside(design, other, told, study.currency, "the balanced design"),)
    )
    return (
        what_it_is(design),
        *compared,
        limited_by(margins.iloc[row]),
        how_sure(design, told, study.currency),
    )
