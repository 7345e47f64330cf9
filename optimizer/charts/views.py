"""All views in one linked chart."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import altair as alt
import pandas as pd

from optimizer.charts.breakdown import breakdown
from optimizer.charts.card import card
from optimizer.charts.content import Content, content
from optimizer.charts.emission import emission
from optimizer.charts.frequency import envelope_view, envelope_views
from optimizer.charts.limiting import limiting
from optimizer.charts.load_curve import load_curve
from optimizer.charts.look import configuration
from optimizer.charts.margins import margins
from optimizer.charts.parallel import parallel
from optimizer.charts.quantities import LOSS, VOLUME, component_words
from optimizer.charts.scatter import scatter
from optimizer.charts.selections import DESIGNS, Selections, axis_values, selections
from optimizer.charts.spectrum import spectrum
from optimizer.runs.fronts import Front
from optimizer.study.study import Study

APART = alt.ScaleResolveMap(
    color="independent", fill="independent", stroke="independent", shape="independent", size="independent"
)
WIDTH = 1150
"""Width of every row of plots and gaps [px], so that the page fits a screen of 1280."""
LIMITING_WIDTH = 1010
"""Of the fields of what limits the fronts [px]; the concepts' names stand beside them."""
GAP, NARROW_GAP, THIRD = 60, 29, 364
"""Gaps for an axis and for words only, and the width of each of three views in a row [px]."""


def dashboard(
    study: Study, front: Front, evaluated: pd.DataFrame | None, summary: Mapping[str, Any]
) -> alt.VConcatChart:
    """The linked views as one chart, which a notebook shows.

    Args:
        study: the study.
        front: its fronts.
        evaluated: all feasible candidates found; with None the envelopes come from the front alone.
        summary: run.json's content; the chart needs none of it, the page does.
    """
    found = content(study, front, evaluated)
    chart = linked_views(study, found)
    chart.datasets = found.datasets()
    return chart


def linked_views(study: Study, found: Content) -> alt.VConcatChart:
    """The chart without its data sets, which are named in it."""
    linked = selections(found.designs.quantities, found.designs.balanced)
    chart = alt.VConcatChart(
        data=alt.NamedData(DESIGNS),
        vconcat=_rows(study, found, linked),
        transform=axis_values(),
        resolve=alt.Resolve(scale=APART),
        spacing=30,
        padding=8,
        config=configuration(),
    )
    chart.params = linked.declared(_layer_names(chart))
    return chart


def _rows(study: Study, found: Content, linked: Selections) -> list[alt.LayerChart | alt.HConcatChart]:
    """Fronts and frequency; the picked design in words; where it loses, is big, binds; what it puts out."""
    designs, classes, spec = found.designs, study.concept_names, study.specification
    losses, volumes = component_words(designs.losses, LOSS), component_words(designs.volumes, VOLUME)
    envelopes = [envelope_view(view, linked, 490, 180) for view in envelope_views(study, found)]
    over_frequency = alt.VConcatChart(vconcat=envelopes, spacing=GAP, bounds="flush")
    rows: list[alt.LayerChart | alt.HConcatChart] = [
        _row(GAP, scatter(linked, designs.quantities, classes, 600, 420), over_frequency),
        card(spec, designs.headline, linked, WIDTH),
        _row(
            NARROW_GAP,
            breakdown(LOSS, "Losses at rated load", "W", losses, linked, THIRD, 290),
            breakdown(VOLUME, "Volume", "l", volumes, linked, THIRD, 290),
            margins(designs.constraints, linked, THIRD, 290),
        ),
        _row(
            GAP,
            spectrum(spec, designs.records, linked, 640, 230),
            load_curve(designs, classes, linked, 450, 230),
        ),
    ]
    rows.append(parallel(designs, classes, linked, WIDTH, 200))
    rows.append(limiting(found.binding, classes, LIMITING_WIDTH))
    if spec.emission_limit:
        rows.append(emission(spec, linked, WIDTH, 230))
    return rows


def _row(gap: int, *views: alt.LayerChart | alt.VConcatChart) -> alt.HConcatChart:
    """Views side by side; gaps count from plot to plot, so that rows end alike whatever their axes need."""
    return alt.HConcatChart(
        hconcat=list(views), spacing=gap, bounds="flush", resolve=alt.Resolve(scale=APART)
    )


def _layer_names(chart: Any) -> list[str]:
    """Names of all layers of a chart of many views."""
    parts = [part for kind in ("vconcat", "hconcat", "layer") for part in getattr(chart, kind, [])]
    return [name for part in parts for name in _layer_names(part)] if parts else [str(chart.name)]
