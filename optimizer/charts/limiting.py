"""What limits the fronts: a field for every concept and octave of switching frequency, with words in it."""

from __future__ import annotations

from collections.abc import Sequence
from textwrap import wrap
from typing import Any

import altair as alt
import numpy as np
import pandas as pd

from optimizer.charts.look import FAINT, INK, QUIET, TEXT_SIZE, heading, layered
from optimizer.limits.binding import BINDING, KINDS, RANGE

TINTS = ("#e9dfd0", "#d8cdea", "#f5c3a6", "#b9d6ec", "#f4e497", "#cbe3bd", "#dcdedd", "#ffffff")
"""One tint a kind of limit, light enough for words on it; the words carry the meaning."""
LINES, LINE_HEIGHT, HEIGHT = 3, 13, 84
"""Lines of a limit's name, the height of one and of a field [px]."""
CHARACTER = 6.2
"""Width of a letter, on average [px]."""


def limiting(found: pd.DataFrame, concepts: Sequence[str], width: int) -> alt.LayerChart:
    """Fields of concepts over octaves.

    Args:
        found: binding.csv's rows (`optimizer.binding`).
        concepts: in the study's order.
        width: of the plot [px].
    """
    bands = sorted(set(zip(found["from [kHz]"], found["to [kHz]"], strict=True)))
    names = [f"{low:g} to {high:g}" for low, high in bands]
    drawn = [name for name in concepts if name in set(found["concept"])]
    letters = int((width / max(len(bands), 1) - 16) / CHARACTER)
    records = fields(found, letters)
    x = alt.X(
        "band:O",
        title="octave of switching frequency [kHz]",
        scale=alt.Scale(domain=names, paddingInner=0.03, paddingOuter=0.0),
        axis=alt.Axis(labelAngle=0),
    )
    y = alt.Y(
        "concept:N",
        title=None,
        scale=alt.Scale(domain=drawn, paddingInner=0.06, paddingOuter=0.0),
        axis=alt.Axis(orient="right", labelLimit=0, labelExpr="split(datum.label, ', ')"),
    )
    kinds = [kind for kind in KINDS if kind in {record["kind"] for record in records}]
    colour = alt.Color(
        "kind:N",
        scale=alt.Scale(domain=kinds, range=[TINTS[KINDS.index(kind)] for kind in kinds]),
        legend=alt.Legend(orient="top", title=None, symbolType="square", symbolStrokeColor=FAINT, columns=8),
    )
    tooltip = [
        alt.Tooltip("concept:N", title="concept"),
        alt.Tooltip("band:O", title="kHz"),
        alt.Tooltip("designs:Q", title="designs on its front"),
        alt.Tooltip("all:N", title="limits, and share of these designs at them"),
    ]
    at = {"x": alt.X("band:O", bandPosition=0.0), "y": alt.Y("concept:N", bandPosition=0.0)}
    base = alt.Chart(alt.Data(values=records))
    words: dict[str, Any] = {"align": "left", "baseline": "top", "dx": 7, "lineHeight": LINE_HEIGHT}
    layers = {
        "fields": base.mark_rect(stroke=FAINT).encode(x=x, y=y, color=colour, tooltip=tooltip),
        "first": base.mark_text(dy=7, color=INK, fontWeight=600, **words).encode(**at, text="first:N"),
        "share": base.mark_text(
            dy=alt.ExprRef(f"8 + {LINE_HEIGHT} * length(datum.first)"), color=INK, **words
        ).encode(**at, text="share:N"),
        "second": base.mark_text(
            dy=alt.ExprRef(f"11 + {LINE_HEIGHT} * (length(datum.first) + 1)"),
            color=QUIET,
            fontSize=TEXT_SIZE - 1,
            **words,
        ).encode(**at, text="second:N"),
    }
    below = (
        f"the requirement that most designs of a front stand at (less than {100.0 * BINDING:g} % left), and "
        "below it the search range at whose end most of them stand"
    )
    return layered("limiting", layers, (width, HEIGHT * len(drawn)), heading("What limits the fronts", below))


def fields(found: pd.DataFrame, letters: int) -> list[dict[str, Any]]:
    """A record a concept and octave: its limits in words, wrapped.

    Args:
        found: rows of binding.csv.
        letters: of a line [-].
    """
    records = []
    for (concept, low, high), rows in found.groupby(["concept", "from [kHz]", "to [kHz]"], sort=False):
        shares = [
            f"{name} ({share:.0f} %)"
            for name, share in zip(rows["limit"], rows["designs at it [%]"], strict=True)
        ]
        ends = (rows["kind"] == RANGE).to_numpy()
        place = int(np.argmin(ends))  # the first requirement, where there is one
        first, second = rows.iloc[place], next((shares[at] for at in np.flatnonzero(ends) if at != place), "")
        records.append(
            {
                "concept": concept,
                "band": f"{low:g} to {high:g}",
                "kind": first["kind"],
                "designs": int(first["designs"]),
                "first": _lines(str(first["limit"]), letters, LINES),
                "share": f"{first['designs at it [%]']:.0f} % of {int(first['designs']):,} designs",
                "second": _lines(second, int(1.08 * letters), 2) or [""],
                "all": "; ".join(shares),
            }
        )
    return records


def _lines(text: str, letters: int, most: int) -> list[str]:
    return wrap(text, max(letters, 8), max_lines=most, placeholder=" ...")
