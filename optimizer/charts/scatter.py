"""The fronts: two quantities across and upwards, a third as size, concept as colour and shape."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import altair as alt

from optimizer.charts.look import DIMMED, INK, PAPER, QUIET, TEXT_SIZE, class_scales, heading
from optimizer.charts.quantities import Quantity
from optimizer.charts.selections import (
    HELD_TEST,
    POINTS,
    REACH,
    SIZE_VALUE,
    X_VALUE,
    Y_VALUE,
    Selections,
    X,
    Y,
    axis_title,
)

SIZES = (16, 130)
RING = 260
OVERALL_FILL, CLASS_FILL = 0.8, 0.0


def class_encodings(concepts: Sequence[str], legend: alt.Legend | None) -> dict[str, Any]:
    """Colour, outline and shape by concept; filled where a design is on the overall front."""
    colour, shape = class_scales(concepts)
    return {
        "fill": alt.Fill("concept:N", scale=colour, title="concept", legend=legend),
        "stroke": alt.Stroke("concept:N", scale=colour, title="concept", legend=legend),
        "shape": alt.Shape("concept:N", scale=shape, title="concept", legend=legend),
        "fillOpacity": alt.condition("datum.overall_front", alt.value(OVERALL_FILL), alt.value(CLASS_FILL)),
    }


def class_legend() -> alt.Legend:
    """Device classes in a row over the plot."""
    return alt.Legend(orient="top", columns=4, symbolFillColor="transparent", symbolStrokeWidth=2, title=None)


def scatter(
    linked: Selections,
    quantities: tuple[Quantity, ...],
    concepts: Sequence[str],
    width: int,
    height: int,
) -> alt.LayerChart:
    """The front with group, pointer and legend selections.

    Args:
        linked: the dashboard's selections.
        quantities: what an axis can show.
        concepts: in the study's order.
        width, height: of the plot [px].
    """
    place = _place()
    reach = alt.Chart(name=REACH).mark_point(opacity=0.0, size=RING).encode(**place)
    ring = (
        alt.Chart(name="front_picked")
        .mark_point(shape="circle", size=RING, stroke=INK, strokeWidth=1.8, fill=None, opacity=1.0)
        .encode(**place)
    )
    # The points lie in a layer of their own, so that the group's rectangle stays below the pointer's reach.
    points = alt.LayerChart(layer=[_points(linked, place, concepts)])
    held = ring.properties(name="front_held").mark_point(
        shape="circle", size=RING, stroke=INK, strokeWidth=1.4, strokeDash=[3, 3], fill=None, opacity=1.0
    )
    pointed = [
        held.transform_filter(HELD_TEST),
        *_marks(place),
        ring.transform_filter(linked.picked_test),
        reach.transform_filter(linked.classes),
    ]
    below = "filled: on the front of all classes together; hollow: on the front of its own class only"
    return alt.LayerChart(
        layer=[points, *pointed, *_axis_titles(quantities, width, height)],
        width=width,
        height=height,
        title=heading("Pareto fronts", below),
    )


def _place() -> dict[str, Any]:
    """Axes of the chosen quantities; their titles are text."""
    scale = alt.Scale(zero=False, padding=14)
    return {
        "x": alt.X(f"{X_VALUE}:Q", scale=scale, axis=alt.Axis(title=None, tickCount=8)),
        "y": alt.Y(f"{Y_VALUE}:Q", scale=scale, axis=alt.Axis(title=None, minExtent=30)),
    }


def _points(linked: Selections, place: dict[str, Any], concepts: Sequence[str]) -> alt.Chart:
    """The designs, those outside the group dimmed."""
    return (
        alt.Chart(name=POINTS)
        .mark_point(strokeWidth=1.2)
        .encode(
            **place,
            **class_encodings(concepts, class_legend()),
            size=alt.Size(
                f"{SIZE_VALUE}:Q", scale=alt.Scale(range=list(SIZES), zero=False), legend=_size_legend()
            ),
            opacity=alt.condition(linked.group, alt.value(1.0), alt.value(DIMMED)),
        )
        .transform_filter(linked.classes)
    )


def _marks(place: dict[str, Any]) -> list[alt.Chart]:
    """Words beside the designs of the shortlist: the least of every objective, and the balanced one."""
    words = alt.Chart().encode(**place, text="mark:N").transform_filter("datum.mark !== ''")
    style: dict[str, Any] = {"align": "center", "baseline": "bottom", "dy": -10, "fontSize": TEXT_SIZE}
    halo = words.mark_text(stroke=PAPER, strokeWidth=3.5, strokeJoin="round", color=PAPER, **style)
    return [
        halo.properties(name="front_marks_halo"),
        words.mark_text(color=INK, **style).properties(name="front_marks"),
    ]


def _size_legend() -> alt.Legend:
    """In the corner that a front of what is minimised leaves free."""
    return alt.Legend(
        title="point size",
        orient="top-right",
        symbolStrokeColor=QUIET,
        symbolFillColor="transparent",
        tickCount=4,
        offset=2,
        padding=4,
        fillColor="rgba(255, 255, 255, 0.85)",
    )


def _axis_titles(quantities: tuple[Quantity, ...], width: int, height: int) -> list[alt.Chart]:
    """Axis titles as text, since a title of an axis cannot follow a choice."""
    anchor = alt.Data(values=[{}])
    style: dict[str, Any] = {"color": INK, "fontSize": TEXT_SIZE, "clip": False, "tooltip": None}
    across = alt.Chart(anchor, name="front_title_across").mark_text(
        text=alt.ExprRef(axis_title(X, quantities)), x=width / 2, y=height + 34, **style
    )
    upwards = alt.Chart(anchor, name="front_title_upwards").mark_text(
        text=alt.ExprRef(axis_title(Y, quantities)), x=-40, y=height / 2, angle=270, **style
    )
    return [across, upwards]
