"""A search from a notebook: one object with its fronts, charts and shortlist, each made when asked for."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields
from functools import cached_property
from typing import TYPE_CHECKING

import pandas as pd

from optimizer.errors import InputError, NothingFeasible, Problem
from optimizer.evolution import populations
from optimizer.evolution.populations import Progress, SearchResult
from optimizer.objectives import OBJECTIVES
from optimizer.runs.fronts import Front, front
from optimizer.runs.run import evaluated_table, ruled_out, shortfalls
from optimizer.study.quantity import show
from optimizer.study.study import Study
from optimizer.study.table import one_of

if TYPE_CHECKING:
    import altair as alt

    from optimizer.decision import Shortlist

TOLD = {
    "design_id": ("design", "N"),
    "concept": ("concept", "N"),
    "modulation": ("modulation", "N"),
    "switching_frequency_hz": ("switching frequency [Hz]", "Q"),
    "cooling": ("cooling", "N"),
}
"""What a chart's tooltip tells: words and type by column."""


def search(
    study: Study,
    *,
    seed: int = 1,
    workers: int | None = None,
    report: Callable[[Progress], None] | None = None,
) -> Run:
    """Search all concepts of a study.

    Args:
        study, seed, workers, report: as in `optimizer.evolution.populations.search`.

    Returns:
        The result, with fronts, charts and shortlist.

    Raises:
        InputError: where the study names parts that the catalogue does not have.
    """
    found = populations.search(study, seed=seed, workers=workers, report=report)
    return Run(**{entry.name: getattr(found, entry.name) for entry in fields(found)})


@dataclass(frozen=True)
class Run(SearchResult):
    """A search's result with what is made of it."""

    @cached_property
    def fronts(self) -> Front:
        """Everything about the Pareto designs.

        Raises:
            NothingFeasible: where no candidate meets all requirements.
        """
        if not any(len(found.points) for found in self.classes):
            told = [line for one in shortfalls(self) for line in one.lines()]
            raise NothingFeasible(ruled_out(self), told)
        return front(self)

    @property
    def front(self) -> pd.DataFrame:
        """One row a Pareto design, as in front.csv."""
        return self.fronts.table

    @property
    def margins(self) -> pd.DataFrame:
        """Margins of all requirements [-], one row a Pareto design, as in margins.csv."""
        return self.fronts.margins

    @cached_property
    def evaluated(self) -> pd.DataFrame:
        """Every feasible candidate that was seen."""
        return evaluated_table(self)

    @property
    def charts(self) -> Charts:
        """Its charts."""
        return Charts(self)

    def shortlist(self, weights: Mapping[str, float] | None = None) -> Shortlist:
        """A few designs picked by stated rules, told in words.

        Args:
            weights: by objective, for one further design.
        """
        from optimizer.certainty.tolerance import sampler
        from optimizer.decision import shortlist

        sampled = sampler(self.study, self.front, self.fronts.points)
        return shortlist(self.study, self.front, self.margins, weights, sampled)


@dataclass(frozen=True)
class Charts:
    """Altair charts of a run."""

    run: Run

    def front(self, across: str | None = None, upwards: str | None = None) -> alt.Chart:
        """The fronts over two objectives, by default the study's first two.

        Args:
            across, upwards: names of objectives, minimised or not.

        Raises:
            InputError: for a name that is no objective's.
        """
        import altair as alt

        from optimizer.charts.look import configuration
        from optimizer.charts.picture import still_fronts
        from optimizer.charts.quantities import quantity_of

        study = self.run.study
        names = across or study.objectives[0], upwards or study.objectives[1]
        unknown = [Problem(show(name), one_of(OBJECTIVES)) for name in names if name not in OBJECTIVES]
        if unknown:
            raise InputError(*unknown)
        quantities = [quantity_of(name) for name in names]
        columns = dict.fromkeys((*TOLD, "overall_front", *(item.column for item in quantities)))
        chart = still_fronts(quantities[0], quantities[1], study.concept_names)
        chart.data = alt.Data(values=self.run.front[list(columns)].to_dict("records"))
        tooltip = [alt.Tooltip(f"{name}:{kind}", title=words) for name, (words, kind) in TOLD.items()]
        return chart.encode(tooltip=tooltip).properties(width=480, height=340, config=configuration())

    def dashboard(self) -> alt.VConcatChart:
        """All linked views of the dashboard."""
        from optimizer.charts import dashboard

        return dashboard(self.run.study, self.run.fronts, self.run.evaluated, {})
