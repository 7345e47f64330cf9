"""Harmonic lines of the picked design against their limits."""

from __future__ import annotations

from math import ceil, floor, log10

import altair as alt

from models.specification import GRID_CONNECTED, Specification
from optimizer.charts.design_data import Records
from optimizer.charts.look import ALERT, LINE, heading, layered
from optimizer.charts.selections import Selections

LEAST_SHOWN = 1e-3
"""Percent of the base; lines below it lie on the axis."""
NEAR_LIMIT = 0.8
"""Share of its limit from which a line is marked [-]."""
FIRST_ORDER = 2


def spectrum(
    spec: Specification, records: Records, linked: Selections, width: int, height: int
) -> alt.LayerChart:
    """Lines over their order, both logarithmic, with the limits as ticks.

    Args:
        spec: says what the lines are related to.
        records: all shown designs: the axes hold for each of them.
        linked: the dashboard's selections.
        width, height: of the plot [px].
    """
    x, y = _axes(spec, records)
    lines = _lines(linked)
    test = f"isValid(datum.share) && datum.share >= {NEAR_LIMIT}"
    near = alt.condition(test, alt.value(ALERT), alt.value(LINE))
    tooltip = [
        alt.Tooltip("order:Q", title="order", format=".1~f"),
        alt.Tooltip("amplitude:Q", title="line [%]", format=".3~g"),
        alt.Tooltip("limit:Q", title="limit [%]", format=".3~g"),
    ]
    stems = lines.mark_rule(strokeWidth=1.6).encode(y2=alt.value(height))
    heads = lines.mark_point(size=14, filled=True, opacity=1.0)
    limits = lines.transform_filter("isValid(datum.limit)").mark_tick(
        orient="horizontal", thickness=1.5, size=9, color=ALERT, opacity=0.85
    )
    layers = {
        "stems": stems.encode(x=x, y=y, color=near, tooltip=tooltip),
        "heads": heads.encode(x=x, y=y, color=near, tooltip=tooltip),
        "limits": limits.encode(x=x, y=alt.Y("limit:Q"), tooltip=tooltip),
    }
    marked = f"marked: lines at {NEAR_LIMIT:.0%} of their limit or more"
    below = f"ticks: limits; {marked}; lines below {LEAST_SHOWN:g} % on the axis"
    return layered("spectrum", layers, (width, height), heading("Harmonics of the picked design", below))


def _lines(linked: Selections) -> alt.Chart:
    """A row a harmonic line of the picked design."""
    return (
        alt.Chart()
        .transform_filter(linked.picked_test)
        .transform_flatten(["order", "amplitude", "limit"])
        .transform_calculate(
            shown=f"max(datum.amplitude, {LEAST_SHOWN})",
            share="isValid(datum.limit) ? datum.amplitude / datum.limit : null",
        )
    )


def _axes(spec: Specification, records: Records) -> tuple[alt.X, alt.Y]:
    """Logarithmic axes that hold for every shown design."""
    base = "rated current" if spec.application == GRID_CONNECTED else "rated voltage"
    highest_order, highest = _ends(records)
    orders = [FIRST_ORDER, 5, *_decades(10.0, highest_order)]
    x = alt.X(
        "order:Q",
        scale=alt.Scale(type="log", domain=[FIRST_ORDER, highest_order], nice=False),
        title="harmonic order [-]",
        axis=alt.Axis(values=orders, format="~s", grid=False),
    )
    y = alt.Y(
        "shown:Q",
        scale=alt.Scale(type="log", domain=[LEAST_SHOWN, highest], clamp=True, nice=False),
        title=f"rms over {base} [%]",
        axis=alt.Axis(values=_decades(LEAST_SHOWN, highest), format="~g", minExtent=34),
    )
    return x, y


def _ends(records: Records) -> tuple[float, float]:
    """Greatest order and greatest line or limit of all designs, with room above."""
    order = max((max(record["order"], default=FIRST_ORDER) for record in records), default=FIRST_ORDER)
    values = [
        value
        for record in records
        for name in ("amplitude", "limit")
        for value in record[name]
        if value is not None
    ]
    return 1.15 * max(order, 10.0), 1.6 * max(values, default=1.0)


def _decades(low: float, high: float) -> list[float]:
    return [10.0**power for power in range(ceil(log10(low) - 1e-9), floor(log10(high)) + 1)]
