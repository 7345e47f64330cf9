"""What binds the picked design: its tightest requirements."""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

import altair as alt

from optimizer.charts.look import ABOVE, ALERT, BAR, INK, QUIET, TEXT_SIZE, heading, layered
from optimizer.charts.selections import Selections
from optimizer.limits.binding import BINDING

SHOWN = 10
MARKED = 100.0 * BINDING
"""Margin below which a requirement is marked [%]."""
LABELS = 240
"""Room for the words on the left [px]."""
FIGURES = 34
"""Room for the figure of the longest bar [px]."""


def margins(constraints: Sequence[str], linked: Selections, width: int, height: int) -> alt.LayerChart:
    """Bars of the least margins, the tightest on top.

    Args:
        constraints: names, in the order of the `margin` lists.
        linked: the dashboard's selections.
        width, height: of the view [px].
    """
    tightest = _tightest(constraints, linked)
    x = alt.X(
        "margin:Q",
        title="[%]",
        axis=alt.Axis(tickCount=4),
        scale=alt.Scale(domain=[0, 100], range=[LABELS, width - FIGURES], clamp=True),
    )
    y = alt.Y("rank:O", axis=None, scale=alt.Scale(domain=list(range(1, SHOWN + 1)), paddingInner=0.35))
    test = f"datum.margin < {MARKED:g}"
    binds, said = (alt.condition(test, alt.value(ALERT), alt.value(other)) for other in (BAR, INK))
    tooltip = [
        alt.Tooltip("constraint:N", title="requirement"),
        alt.Tooltip("margin:Q", title="margin [%]", format=".3~r"),
    ]
    head = alt.Chart(alt.Data(values=[{}])).mark_text(
        text="distance to limit", x=LABELS, y=ABOVE, align="left", color=QUIET, fontSize=TEXT_SIZE - 1
    )
    layers = {
        "head": head,
        "labels": tightest.mark_text(align="left", limit=LABELS - 6).encode(
            y=y, x=alt.value(0), text="constraint:N", tooltip=tooltip
        ),
        "bars": tightest.mark_bar().encode(x=x, y=y, color=binds, tooltip=tooltip),
        "figures": tightest.mark_text(align="left", dx=4).encode(
            x=x, y=y, color=said, text=alt.Text("margin:Q", format=".3~r")
        ),
    }
    below = f"its {SHOWN} tightest requirements; marked: less than {MARKED:g} % left"
    return layered("margins", layers, (width, height), heading("What binds the picked design", below))


def _tightest(constraints: Sequence[str], linked: Selections) -> alt.Chart:
    """A row a requirement of the picked design, ranked by its margin, the first ones only."""
    names: dict[str, Any] = {"as": "rank"}
    return (
        alt.Chart()
        .transform_filter(linked.picked_test)
        .transform_calculate(constraint=json.dumps(list(constraints)))
        .transform_flatten(["constraint", "margin"])
        .transform_window(
            window=[alt.WindowFieldDef(op="row_number", **names)],
            sort=[alt.SortField("margin", order="ascending")],
        )
        .transform_filter(f"datum.rank <= {SHOWN}")
    )
