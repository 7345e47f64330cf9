"""Where the watts and the litres go: the picked design, and beside it the mean of the group."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

import altair as alt

from optimizer.charts.design_data import reach_of
from optimizer.charts.look import ABOVE, BAR, INK, QUIET, TEXT_SIZE, heading, layered
from optimizer.charts.selections import PICKED_DESIGN, Selections

LABELS = 178
"""Room for the words on the left [px]."""
FIGURES = 104
"""Room for the two columns of figures on the right [px]."""
COLUMN = 52
LEAST = 0.001
"""Amount below which the figure says only that it is less."""
NOTHING = 1e-6
"""Amount up to which it says zero: what running means leave behind."""
SHORT = ".3~r"


def breakdown(
    kind: str,
    title: str,
    unit: str,
    words: Mapping[str, str],
    linked: Selections,
    width: int,
    height: int,
) -> alt.LayerChart:
    """Horizontal bars of the parts of a loss or a volume, with the group's mean as a mark on each.

    Args:
        kind: LOSS or VOLUME.
        title: heading.
        unit: of the parts.
        words: label by column.
        linked: the dashboard's selections.
        width, height: of the view [px].
    """
    labels = list(words.values())
    x = _amount(kind, unit, width)
    y = alt.Y("component:N", axis=None, scale=alt.Scale(domain=labels, paddingInner=0.35))
    picked, group = _picked(words, linked), _group(words, linked)
    tooltip = [
        alt.Tooltip("component:N", title="part"),
        alt.Tooltip("amount:Q", title=f"[{unit}]", format=SHORT),
    ]
    named = alt.Chart(alt.Data(values=[{"component": label} for label in labels]))
    layers = {
        "labels": named.mark_text(align="left").encode(y=y, x=alt.value(0), text="component:N"),
        "bars": picked.mark_bar(color=BAR).encode(x=x, y=y, tooltip=tooltip),
        "means": group.mark_tick(orient="vertical", thickness=2, color=INK).encode(x=x, y=y, tooltip=tooltip),
        "figures": _figures(picked, y, width - COLUMN, INK),
        "mean_figures": _figures(group, y, width, QUIET),
        "head_picked": _head("picked", width - COLUMN),
        "head_group": _head("group", width),
    }
    below = "bar: picked design; upright mark: mean of the group, or of all drawn"
    return layered(kind, layers, (width, height), heading(title, below))


def _amount(kind: str, unit: str, width: int) -> alt.X:
    """An axis between words and figures that ends at the picked design's next round figure."""
    end = f"({PICKED_DESIGN} ? {PICKED_DESIGN}.{reach_of(kind)} : 1)"
    ends = [LABELS, width - FIGURES]
    return alt.X(
        "amount:Q",
        title=f"[{unit}]",
        axis=alt.Axis(values=alt.ExprRef(f"[0, 0.5 * {end}, {end}]"), format="~r"),
        scale=alt.Scale(domain=[0.0, alt.ExprRef(end)], range=ends, nice=False, clamp=True),
    )


def _picked(words: Mapping[str, str], linked: Selections) -> alt.Chart:
    return _named_parts(alt.Chart().transform_filter(linked.picked_test), words)


def _group(words: Mapping[str, str], linked: Selections) -> alt.Chart:
    chart = (
        alt.Chart()
        .transform_filter(linked.classes)
        .transform_filter(linked.group)
        .transform_aggregate([_mean(column) for column in words])
    )
    return _named_parts(chart, words).transform_filter("isValid(datum.amount)")


def _mean(column: str) -> alt.AggregatedFieldDef:
    return alt.AggregatedFieldDef(op="mean", field=column, **{"as": column})


def _named_parts(chart: alt.Chart, words: Mapping[str, str]) -> alt.Chart:
    """Columns to rows, and the words of each."""
    small = f"datum.amount > {NOTHING} ? '< {LEAST}' : '0'"
    return chart.transform_fold(list(words), as_=["part", "amount"]).transform_calculate(
        component=f"{json.dumps(dict(words))}[datum.part]",
        told=f"datum.amount >= {LEAST} ? format(datum.amount, '{SHORT}') : {small}",
    )


def _figures(chart: alt.Chart, y: alt.Y, place: int, colour: str) -> alt.Chart:
    return chart.mark_text(align="right", color=colour).encode(y=y, x=alt.value(place), text="told:N")


def _head(words: str, place: int) -> alt.Chart:
    style: dict[str, Any] = {"align": "right", "color": QUIET, "fontSize": TEXT_SIZE - 1}
    return alt.Chart(alt.Data(values=[{}])).mark_text(text=words, x=place, y=ABOVE, **style)
