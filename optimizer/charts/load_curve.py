"""Efficiency over load: the picked design, and the group as thin lines."""

from __future__ import annotations

import json
from collections.abc import Sequence

import altair as alt
import numpy as np

from optimizer.charts.design_data import PERCENT, DesignData
from optimizer.charts.look import INK, class_scales, heading, layered
from optimizer.charts.selections import Selections

LOWEST_SHARE = 5.0
"""Percentile of the designs' least efficiencies at which the axis begins: a judgement, against poor ends."""


def load_curve(
    data: DesignData, concepts: Sequence[str], linked: Selections, width: int, height: int
) -> alt.LayerChart:
    """Efficiency over load on one fixed axis.

    Args:
        data: shown designs.
        concepts: in the study's order.
        linked: the dashboard's selections.
        width, height: of the plot [px].
    """
    x, y = _axes(data)
    levels = json.dumps([round(PERCENT * level, 6) for level in data.load_level])
    colour = alt.Color("concept:N", scale=class_scales(concepts)[0], legend=None)
    tooltip = [
        alt.Tooltip("load:Q", title="load [%]"),
        alt.Tooltip("efficiency:Q", title="efficiency [%]", format=".2f"),
    ]
    dots = alt.OverlayMarkDef(size=28, filled=True, color=INK)
    grouped = alt.Chart().transform_filter(linked.classes).transform_filter(linked.group, empty=False)
    picked = alt.Chart().transform_filter(linked.picked_test)
    layers = {
        "group": _by_load(grouped, levels)
        .mark_line(strokeWidth=0.7, opacity=0.3, clip=True)
        .encode(x=x, y=y, detail="design_id:N", color=colour),
        "picked": _by_load(picked, levels)
        .mark_line(color=INK, strokeWidth=2.2, clip=True, point=dots)
        .encode(x=x, y=y, tooltip=tooltip),
    }
    title = heading("Efficiency over load", "bold: picked design; thin: the group")
    return layered("load_curve", layers, (width, height), title)


def _by_load(chart: alt.Chart, levels: str) -> alt.Chart:
    return chart.transform_calculate(load=levels).transform_flatten(["load", "efficiency"])


def _axes(data: DesignData) -> tuple[alt.X, alt.Y]:
    """Axes that hold for every shown design."""
    every = np.array([record["efficiency"] for record in data.records])
    low = float(np.floor(np.percentile(every.min(-1), LOWEST_SHARE)))
    high = max(float(np.ceil(2.0 * every.max()) / 2.0), low + 1.0)
    x = alt.X(
        "load:Q",
        scale=alt.Scale(domain=[0, 100]),
        title="load over rated load [%]",
        axis=alt.Axis(tickCount=5),
    )
    y = alt.Y(
        "efficiency:Q",
        scale=alt.Scale(domain=[low, high], nice=False, zero=False),
        title="efficiency [%]",
        axis=alt.Axis(tickCount=6, minExtent=30),
    )
    return x, y
