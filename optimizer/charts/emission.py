"""Conducted emission of the picked design against its limit, without and with the emission filter."""

from __future__ import annotations

import altair as alt

from models.specification import Specification
from optimizer.charts.content import BELIEVED_MHZ, DOUBT
from optimizer.charts.look import ALERT, FAINT, INK, LINE, heading, layered
from optimizer.charts.selections import Selections

LOW_MHZ, HIGH_MHZ = 0.15, 30.0
LEVELS = (0, 130)
LISTS: list[str | alt.FieldName] = ["emission_mhz", "emission_bare", "emission_left", "emission_limit"]


def emission(spec: Specification, linked: Selections, width: int, height: int) -> alt.LayerChart:
    """Levels over frequency: carrier groups without filter as faint stems, with filter as dots, the limit.

    Args:
        spec: names the limit.
        linked: the dashboard's selections.
        width, height: of the plot [px].
    """
    lines = alt.Chart().transform_filter(linked.picked_test).transform_flatten(LISTS)
    x = alt.X(
        "emission_mhz:Q",
        scale=alt.Scale(type="log", domain=[LOW_MHZ, 1.05 * HIGH_MHZ], nice=False),
        title="frequency [MHz]",
        axis=alt.Axis(values=[0.15, 0.5, 1, 5, 10, 30], format="~g", grid=False),
    )
    scale = alt.Scale(domain=list(LEVELS), clamp=True, nice=False)
    axis = alt.Axis(tickCount=6, minExtent=34)
    title = "level [dB over 1 \u00b5V]"

    def level(column: str) -> alt.Y:
        return alt.Y(f"{column}:Q", scale=scale, title=title, axis=axis)

    tooltip = [
        alt.Tooltip("emission_mhz:Q", title="frequency [MHz]", format=".3~r"),
        alt.Tooltip("emission_bare:Q", title="without emission filter [dB\u00b5V]"),
        alt.Tooltip("emission_left:Q", title="with it [dB\u00b5V]"),
        alt.Tooltip("emission_limit:Q", title="limit [dB\u00b5V]", format=".3~r"),
    ]
    layers = {
        "bare": lines.mark_rule(strokeWidth=1.4, color=FAINT).encode(
            x=x, y=level("emission_bare"), y2=alt.value(height), tooltip=tooltip
        ),
        "left": lines.mark_rule(strokeWidth=1.8, color=LINE).encode(
            x=x, y=level("emission_left"), y2=alt.value(height), tooltip=tooltip
        ),
        "heads": lines.mark_point(size=14, filled=True, opacity=1.0, color=LINE).encode(
            x=x, y=level("emission_left"), tooltip=tooltip
        ),
        "limit": lines.mark_line(strokeWidth=1.4, color=ALERT).encode(x=x, y=level("emission_limit")),
        "doubt": alt.Chart(alt.NamedData(DOUBT))
        .mark_rule(color=INK, strokeWidth=0.8, strokeDash=[2, 3])
        .encode(x=x),
    }
    told = f"quasi-peak, worst case; red: {spec.emission_limit}; grey: without the emission filter"
    doubt = f"right of the dotted line ({BELIEVED_MHZ:g} MHz) layout and parasitics decide"
    return layered(
        "emission", layers, (width, height), heading("Conducted emission of the picked design", told, doubt)
    )
