"""The dashboard of a batch: fronts of all cases, one picked by a selector, and the way to each case's own."""

from __future__ import annotations

import json
from collections.abc import Sequence
from html import escape
from importlib.resources import files
from string import Template
from typing import Any

import altair as alt
import numpy as np
import pandas as pd

from optimizer.batch.cases import Case
from optimizer.charts.library import library_beside
from optimizer.charts.look import FAINT, class_scales, configuration, heading
from optimizer.charts.quantities import quantity_of
from optimizer.charts.words import CAUTION, CAUTIONS
from optimizer.objectives import OBJECTIVES

SHOWN = 120
"""Designs drawn of a concept in a case, evenly by their order along the front."""
ALL = "all cases"
WIDTH, HEIGHT = 520, 380


def batch_page(cases: Sequence[Case], found: Sequence[Case], front: pd.DataFrame, rows: pd.DataFrame) -> str:
    """The whole page; nothing in it is fetched, and no text in it can become markup.

    Args:
        cases: of the study; found: those with designs.
        front: fronts of all cases, with `case`.
        rows: a row a case and concept, with the case's `folder`.
    """
    with library_beside() as library:
        study = cases[0].study
        chart = batch_chart(found, front)
        names = [case.name for case in found]
        missing = [case.name for case in cases if case not in found]
        return Template(
            files("optimizer.batch").joinpath("page.html").read_text(encoding="utf-8")
        ).substitute(
            title=escape(f"{study.name}: {len(cases)} cases"),
            description=escape(study.description),
            cautions="".join(f"<p>{escape(text)}</p>" for text in (CAUTION, CAUTIONS[0])),
            missing=escape(f"Without any feasible design: {'; '.join(missing)}" if missing else ""),
            table=_table(rows, study.objectives),
            spec=_json(chart.to_dict(validate=False)),
            folders=_json({case.name: f"cases/{case.folder or 'study'}/dashboard.html" for case in found}),
            names=_json([ALL, *names]),
            style=files("optimizer.charts").joinpath("page.css").read_text(encoding="utf-8"),
            library=library(),
        )


def batch_chart(found: Sequence[Case], front: pd.DataFrame) -> alt.HConcatChart:
    """Fronts of the cases over two pairs of objectives, and the carrier frequencies they sit at."""
    study = found[0].study
    concepts = list(dict.fromkeys(name for case in found for name in case.study.concept_names))
    quantities = [quantity_of(name) for name in study.objectives]
    columns = [OBJECTIVES[name].column for name in study.objectives]
    shown = front.groupby(["case", "concept"], sort=False)[
        ["case", "concept", "design_id", "switching_frequency_hz", *columns]
    ].apply(_thinned)
    shown = shown.assign(switching_frequency_khz=shown.switching_frequency_hz / 1e3)
    data = alt.Data(values=shown.round(5).to_dict("records"))
    case = alt.param(name="picked_case", value=ALL)
    colour, shape = class_scales(concepts)
    of_case = f"{case.name} == '{ALL}' || datum.case == {case.name}"

    legend = alt.Legend(orient="top", title=None, columns=2)

    def plot(across: str, across_title: str, upwards: int, scale: alt.Scale) -> alt.LayerChart:
        x = alt.X(f"{across}:Q", title=across_title, scale=scale)
        y = alt.Y(f"{columns[upwards]}:Q", title=quantities[upwards].label, scale=alt.Scale(zero=False))
        tooltip = [
            alt.Tooltip("design_id:N", title="design"),
            alt.Tooltip("concept:N", title="concept"),
            alt.Tooltip("switching_frequency_khz:Q", title="switching frequency [kHz]", format=".3~r"),
            *(alt.Tooltip(f"{item.column}:Q", title=item.label, format=".3~r") for item in quantities),
        ]
        base = alt.Chart().mark_point(filled=True)
        others = base.mark_point(filled=True, size=7, color=FAINT, opacity=0.5).encode(x=x, y=y)
        picked = base.transform_filter(of_case).encode(
            x=x,
            y=y,
            color=alt.Color("concept:N", scale=colour, legend=legend),
            shape=alt.Shape("concept:N", scale=shape),
            size=alt.value(26),
            opacity=alt.value(0.75),
            tooltip=tooltip,
        )
        words = f"{quantities[upwards].title} over {across_title.partition(' [')[0]}"
        return alt.LayerChart(
            layer=[others, picked], width=WIDTH, height=HEIGHT, title=heading(words[0].upper() + words[1:])
        )

    plots = [
        plot(columns[1], quantities[1].label, 0, alt.Scale(zero=False)),
        plot("switching_frequency_khz", "switching frequency [kHz]", 1, alt.Scale(type="log", nice=False)),
    ]
    chart = alt.HConcatChart(data=data, hconcat=plots, spacing=50, padding=8, config=configuration())
    return chart.add_params(case)


def _thinned(designs: pd.DataFrame) -> pd.DataFrame:
    rows = np.unique(np.linspace(0, len(designs) - 1, min(SHOWN, len(designs))).round().astype(int))
    return designs.iloc[rows]


def _table(rows: pd.DataFrame, objectives: Sequence[str]) -> str:
    heads = ["case", "concept", "designs"]
    heads += [f"least {quantity_of(name).label}" for name in objectives]
    body = []
    for row in rows.to_dict("records"):
        values = [row[f"least_{OBJECTIVES[name].column}"] for name in objectives]
        cells = [
            f"<td>{escape(str(row['case']))}</td><td>{escape(str(row['concept']))}</td>",
            f"<td class='number'>{row['designs']}</td>",
            *(f"<td class='number'>{'-' if value != value else f'{value:.3g}'}</td>" for value in values),
        ]
        body.append(f"<tr data-case='{escape(str(row['case']), quote=True)}'>{''.join(cells)}</tr>")
    head = "".join(f"<th>{escape(text)}</th>" for text in heads)
    return f"<thead><tr>{head}</tr></thead><tbody>{''.join(body)}</tbody>"


def _json(value: Any) -> str:
    """JSON that may stand inside a script element."""
    return json.dumps(value, separators=(",", ":"), ensure_ascii=True).replace("<", "\\u003c")
