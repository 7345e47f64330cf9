"""A comparison as one page of HTML that opens without a network."""

from __future__ import annotations

from html import escape
from importlib.resources import files
from string import Template
from typing import Any

import altair as alt

from optimizer.charts.look import INK, PALETTE, SHAPES, configuration
from optimizer.charts.picture import PICTURE_FONT
from optimizer.charts.words import CAUTION, CAUTIONS
from optimizer.comparison.comparison import Comparison, Pick, movement_words
from optimizer.comparison.tables import cares, changes_table, component_table, pick_table, runs_table
from optimizer.decision.figures import COST, LOSS, PRICE, VOLUME, Told
from optimizer.report.blocks import Picture, unbroken
from optimizer.report.designs import KINDS
from optimizer.report.html_writer import picture_html, table_html

PLOTS = ((LOSS, VOLUME), (LOSS, PRICE), (VOLUME, COST))
WIDTH, HEIGHT = 360, 280
MOST_POINTS = 800


def comparison_page(found: Comparison) -> str:
    """The whole page; nothing in it is fetched from anywhere, no text in it can become markup."""
    words = [*cares(found), CAUTION, CAUTIONS[0]]
    return Template(_part("optimizer.comparison", "page.html")).substitute(
        style=_part("optimizer.report", "page.css"),
        title=escape(" beside ".join(found.labels)),
        runs=table_html(runs_table(found)),
        changes="".join(table_html(changes_table(found, place)) for place in range(len(found.changes))),
        pictures="".join(picture_html(picture) for picture in front_pictures(found)),
        picks="".join(_pick(found, pick) for pick in found.picks),
        cautions="".join(f"<p>{escape(text)}</p>" for text in words),
    )


def _pick(found: Comparison, pick: Pick) -> str:
    told = []
    for label, design in zip(found.labels[1:], pick.designs[1:], strict=True):
        words = " ".join(movement_words(pick.designs[0], design, found.currency))
        told.append(f"<p><b>{escape(label)}</b>: {escape(unbroken(words))}</p>")
    components = "".join(table_html(component_table(found, pick, kind)) for kind in KINDS)
    return (
        f"<section>{table_html(pick_table(found, pick))}{''.join(told)}"
        f'<details><summary>component by component</summary><div class="ground">{components}</div>'
        "</details></section>"
    )


def front_pictures(found: Comparison) -> tuple[Picture, ...]:
    """The overall fronts of all runs on the same axes."""
    return tuple(_fronts(found, across, upwards) for across, upwards in PLOTS)


def _fronts(found: Comparison, across: Told, upwards: Told) -> Picture:
    points, balanced = [], []
    for label, run, design in zip(found.labels, found.runs, found.picks[0].designs, strict=True):
        front = run.table[run.table.overall_front]
        for row in front.iloc[:: max(1, len(front) // MOST_POINTS)].to_dict("records"):
            points.append(_point(label, row, across, upwards))
        balanced.append(_point(label, design, across, upwards))
    count = len(found.labels)
    colour = alt.Scale(
        domain=list(found.labels), range=[PALETTE[place % len(PALETTE)] for place in range(count)]
    )
    shape = alt.Scale(
        domain=list(found.labels), range=[SHAPES[place % len(SHAPES)] for place in range(count)]
    )
    scale, axis = alt.Scale(zero=False, padding=12), alt.Axis(tickCount=6)
    legend = alt.Legend(orient="top", title=None, columns=2)
    encodings: dict[str, Any] = {
        "x": alt.X(
            "across:Q", title=f"{across.title} [{across.unit(found.currency)}]", scale=scale, axis=axis
        ),
        "y": alt.Y(
            "upwards:Q", title=f"{upwards.title} [{upwards.unit(found.currency)}]", scale=scale, axis=axis
        ),
        "color": alt.Color("run:N", scale=colour, legend=legend),
        "shape": alt.Shape("run:N", scale=shape, legend=legend),
    }
    dots = alt.Chart(alt.Data(values=points)).mark_point(size=16, opacity=0.55).encode(**encodings)
    rings = alt.Chart(alt.Data(values=balanced)).mark_point(
        size=190, stroke=INK, strokeWidth=1.6, filled=False
    )
    chart = alt.LayerChart(
        layer=[dots, rings.encode(x=encodings["x"], y=encodings["y"])], width=WIDTH, height=HEIGHT
    )
    chart.config, chart.padding = configuration() | {"font": PICTURE_FONT}, 6
    title = f"{upwards.title} over {across.title}; rings: the balanced designs"
    return Picture(f"{title[:1].upper()}{title[1:]}", title, chart.to_dict())


def _point(label: str, row: Any, across: Told, upwards: Told) -> dict[str, Any]:
    return {"run": label, "across": float(row[across.column]), "upwards": float(row[upwards.column])}


def _part(package: str, name: str) -> str:
    return files(package).joinpath(name).read_text(encoding="utf-8")
