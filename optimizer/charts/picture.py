"""A still picture of the fronts and the envelopes, for a page of text."""

from __future__ import annotations

import altair as alt
import pandas as pd

from optimizer.charts.content import content
from optimizer.charts.frequency import envelope_views
from optimizer.charts.look import configuration, heading
from optimizer.charts.quantities import Quantity
from optimizer.charts.scatter import class_encodings, class_legend
from optimizer.charts.selections import DESIGNS
from optimizer.runs.fronts import Front
from optimizer.study.study import Study

PICTURE_FONT = "Liberation Sans, Arial, Helvetica, sans-serif"
PIXELS_PER_POINT = 1.1
PADDING = {"left": 12, "top": 12, "bottom": 12, "right": 48}
PICTURED_PER_CLASS = 90


def front_picture(study: Study, front: Front, evaluated: pd.DataFrame | None = None) -> bytes:
    """PNG of the fronts over the first two objectives, beside the least of losses and volume over frequency.

    Args:
        study: the study.
        front: its fronts.
        evaluated: all feasible candidates found; with None the envelopes come from the front alone.
    """
    import vl_convert

    found = content(study, front, evaluated, PICTURED_PER_CLASS)
    views = envelope_views(study, found)
    envelopes = [view.lines().properties(width=430, height=140, title=view.title()) for view in views]
    across, upwards = found.designs.quantities[:2]
    chart = alt.hconcat(
        still_fronts(across, upwards, study.concept_names).properties(width=460, height=340),
        alt.vconcat(*envelopes, spacing=60, bounds="flush"),
        spacing=60,
        bounds="flush",
    ).properties(
        config=configuration() | {"font": PICTURE_FONT},
        padding={"left": 12, "top": 12, "bottom": 12, "right": 48},
    )
    spec = chart.to_dict() | {"datasets": found.datasets()}
    return vl_convert.vegalite_to_png(spec, scale=PIXELS_PER_POINT)


def still_fronts(across: Quantity, upwards: Quantity, concepts: tuple[str, ...]) -> alt.Chart:
    """The fronts over two fixed quantities."""
    scale = alt.Scale(zero=False, padding=14)
    return (
        alt.Chart(alt.NamedData(DESIGNS), name="still_fronts")
        .mark_point(strokeWidth=1.1, size=36, opacity=1.0)
        .encode(
            x=alt.X(f"{across.column}:Q", title=across.label, scale=scale, axis=alt.Axis(tickCount=8)),
            y=alt.Y(f"{upwards.column}:Q", title=upwards.label, scale=scale),
            **class_encodings(concepts, class_legend()),
        )
        .properties(
            title=heading(
                "Pareto fronts", "filled: on the front of all classes together; hollow: of its own class only"
            )
        )
    )
