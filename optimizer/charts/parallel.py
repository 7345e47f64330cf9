"""Parallel coordinates: a line a design across all objectives and what decides them."""

from __future__ import annotations

import json
from collections.abc import Sequence

import altair as alt

from optimizer.charts.design_data import PLACES, DesignData
from optimizer.charts.look import FAINT, INK, QUIET, TEXT_SIZE, class_scales, heading, layered
from optimizer.charts.selections import HELD_TEST, Selections


def parallel(
    data: DesignData, concepts: Sequence[str], linked: Selections, width: int, height: int
) -> alt.LayerChart:
    """The group as thin lines, the picked design bold, the held one dashed.

    Args:
        data: shown designs.
        concepts: in the study's order.
        linked: the dashboard's selections.
        width, height: of the plot [px].
    """
    titles = [quantity.label for quantity in data.axes]
    x = alt.X(
        "axis:N",
        sort=None,
        scale=alt.Scale(domain=titles, padding=0.3),
        title=None,
        axis=alt.Axis(
            orient="top",
            labelAngle=0,
            domain=False,
            ticks=False,
            labelPadding=30,
            labelExpr="split(datum.label, ' [')[1] ? [split(datum.label, ' [')[0], "
            "'[' + split(datum.label, ' [')[1]] : datum.label",
        ),
    )
    y = alt.Y("place:Q", scale=alt.Scale(domain=[0, 1]), axis=None)
    colour = alt.Color("concept:N", scale=class_scales(concepts)[0], legend=None)
    group = alt.Chart().transform_filter(linked.classes).transform_filter(linked.group, empty=False)
    layers = {
        "rules": alt.Chart(_ends(data))
        .transform_filter("datum.place === 0")
        .mark_rule(color=FAINT)
        .encode(x=x, y=y, y2=alt.value(0)),
        "group": _across(group, titles)
        .mark_line(strokeWidth=0.8, opacity=0.35)
        .encode(x=x, y=y, detail="design_id:N", color=colour),
        "held": _across(alt.Chart().transform_filter(HELD_TEST), titles)
        .mark_line(color=INK, strokeWidth=1.8, strokeDash=[5, 4])
        .encode(x=x, y=y),
        "picked": _across(alt.Chart().transform_filter(linked.picked_test), titles)
        .mark_line(color=INK, strokeWidth=2.2, point=alt.OverlayMarkDef(size=28, filled=True, color=INK))
        .encode(x=x, y=y),
        "ends": alt.Chart(_ends(data))
        .mark_text(color=QUIET, fontSize=TEXT_SIZE, dy=alt.ExprRef("datum.place === 1 ? -9 : 11"))
        .encode(x=x, y=y, text="shown:N"),
    }
    below = "bold: picked design; dashed: the held one; thin: the group (drag a rectangle in the fronts)"
    return layered("parallel", layers, (width, height), heading("All figures of the group", below))


def _across(chart: alt.Chart, titles: Sequence[str]) -> alt.Chart:
    return chart.transform_calculate(axis=json.dumps(list(titles))).transform_flatten(
        ["axis", PLACES], as_=["axis", "place"]
    )


def _ends(data: DesignData) -> alt.Data:
    """Least and greatest figure of every axis, as text at its ends."""
    values = []
    for quantity in data.axes:
        drawn = [record[quantity.column] for record in data.records if record[quantity.column] is not None]
        for place, end in ((0, min(drawn, default=0.0)), (1, max(drawn, default=0.0))):
            values.append({"axis": quantity.label, "place": place, "shown": f"{end:.3g}"})
    return alt.Data(values=values)
