"""The dashboard as one page that opens without a network."""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping
from html import escape
from importlib.resources import files
from string import Template
from typing import Any

import pandas as pd

from optimizer.charts.design_data import DesignData
from optimizer.charts.library import library_beside
from optimizer.charts.quantities import LOSS, VOLUME, component_words, quantity_of
from optimizer.charts.task import task_words
from optimizer.charts.views import content, linked_views
from optimizer.charts.words import HELP, cautions, drawn, missing, origin, ranked
from optimizer.runs.fronts import Front
from optimizer.study.study import Study


def dashboard_html(
    study: Study, front: Front, evaluated: pd.DataFrame | None, summary: Mapping[str, Any]
) -> str:
    """The whole page: task, cautions, help, linked charts, a table; nothing in it is fetched from anywhere.

    Args:
        study: the study.
        front: its fronts.
        evaluated: all feasible candidates found; with None the envelopes come from the front alone.
        summary: run.json's content, or as much of it as there is.
    """
    with library_beside() as library:
        found = content(study, front, evaluated)
        spec = linked_views(study, found).to_dict(validate=False) | {"datasets": found.datasets()}
        about = [
            *missing(study, found.designs, summary),
            *drawn(found.designs),
            *ranked(study),
            *origin(summary),
        ]
        return Template(_part("page.html")).substitute(
            title=escape(study.name),
            description=escape(study.description),
            task=_terms(task_words(study)),
            cautions=_items("p", cautions(summary)),
            help=_items("li", HELP),
            about=_items("p", about),
            spec=_json(spec),
            columns=_json(table_columns(study, found.designs)),
            beside=_json(beside_rows(found.designs)),
            beside_script=_part("side_by_side.js"),
            style=_part("page.css"),
            script=_part("page.js"),
            library=library(),
        )


def table_columns(study: Study, designs: DesignData) -> dict[str, Any]:
    """What the table shows: fields and heads, and by which objective it is sorted."""
    named = [
        ("design_id", "design"),
        ("concept", "concept"),
        ("modulation", "modulation"),
        ("switching_frequency_khz", "switching frequency [kHz]"),
        *((quantity.column, quantity.label) for quantity in designs.quantities),
        ("junction_temperature_c", "junction [°C]"),
        ("inverter_inductor_core", "inverter-side core"),
    ]
    first = quantity_of(study.objectives[0])
    columns = [{"field": field, "title": title} for field, title in named]
    return {"columns": columns, "first": first.column, "firstTitle": first.title}


def beside_rows(designs: DesignData) -> list[dict[str, str]]:
    """What is told of two designs side by side: fields and titles in their order, headings between."""
    losses, volumes = component_words(designs.losses, LOSS), component_words(designs.volumes, VOLUME)
    built = (
        ("device", "device"),
        ("modulation", "modulation"),
        ("parallel", "packages in parallel"),
        ("die_area_mm2", "die area [mm²]"),
        ("inverter_inductor_build", "inverter-side inductor"),
        ("grid_inductor_build", "grid-side inductor"),
        ("filter_capacitance_uf", "filter capacitor [µF]"),
        ("dc_link_build", "dc link"),
        ("cooling", "cooling"),
    )
    return [
        *({"field": axis.column, "title": axis.label} for axis in designs.axes),
        {"heading": "made of"},
        *({"field": field, "title": title} for field, title in built),
        {"heading": "losses at rated load [W]"},
        *({"field": field, "title": title} for field, title in losses.items()),
        {"heading": "volumes [l]"},
        *({"field": field, "title": title} for field, title in volumes.items()),
    ]


def _part(name: str) -> str:
    return files("optimizer.charts").joinpath(name).read_text(encoding="utf-8")


def _items(tag: str, texts: Iterable[str]) -> str:
    return "\n".join(f"<{tag}>{escape(text)}</{tag}>" for text in texts)


def _terms(pairs: Iterable[tuple[str, str]]) -> str:
    told = ((escape(term), escape(words)) for term, words in pairs)
    return "\n".join(f"<div><dt>{term}</dt><dd>{words}</dd></div>" for term, words in told)


def _json(value: Any) -> str:
    """JSON that may stand inside a script element: no text in it can end the element."""
    text = json.dumps(value, separators=(",", ":"), allow_nan=False, ensure_ascii=False)
    return text.replace("<", "\\u003c").replace("\u2028", "\\u2028").replace("\u2029", "\\u2029")
