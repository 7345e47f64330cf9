"""The neighbourhood of a design as one page that opens without a network."""

from __future__ import annotations

from html import escape
from importlib.resources import files
from string import Template
from typing import Any

import altair as alt
import pandas as pd

from optimizer.certainty.neighbourhood import Neighbourhood, tightest
from optimizer.certainty.sensitivity import IN_STEPS, MARGIN, OBJECTIVE
from optimizer.certainty.tolerance import SAMPLES, factor_words
from optimizer.charts.look import INK, configuration
from optimizer.charts.picture import PICTURE_FONT
from optimizer.charts.words import CAUTION, CAUTIONS
from optimizer.decision.figures import told_of
from optimizer.decision.wording import (
    headline,
    how_sure,
    limited_by,
    limits_kept,
    requirement_words,
    what_it_is,
)
from optimizer.objectives import OBJECTIVES
from optimizer.report.blocks import Picture, Table, unbroken
from optimizer.report.certainty import HOW, TIGHTEST, effects_table, varied_words
from optimizer.report.html_writer import picture_html, table_html

SHOWN = 14
"""Bars of a figure, those of the greatest changes."""
BETTER, WORSE = "#5f7d88", "#b4532a"
BARS = "Red bars are for the worse, pale ones an average over steps, such as a capacitor more in series."
WIDTH, BAR, PALE = 190, 17, 0.4
SEEN = 1e-3  # of the longest bar: less is told as no change


def neighbourhood_page(found: Neighbourhood) -> str:
    """The whole page; nothing in it is fetched from anywhere, no text in it can become markup."""
    row = dict(found.chosen.table.iloc[found.row]) | found.tolerance.columns()
    told = told_of(found.chosen.study.objectives)
    currency = found.chosen.study.currency
    sentences = (what_it_is(row), limited_by(found.chosen.margins.iloc[found.row]))
    certainty = f"{how_sure(row, told, currency)} {limits_kept(found.tolerance)}"
    return Template(
        files("optimizer.certainty").joinpath("page.html").read_text(encoding="utf-8")
    ).substitute(
        style=files("optimizer.report").joinpath("page.css").read_text(encoding="utf-8"),
        title=escape(f"{found.design_id}: neighbourhood"),
        subtitle=escape(f"{found.chosen.study.name}; {headline(row)}"),
        sentences="".join(f"<p>{escape(unbroken(text))}</p>" for text in sentences),
        how=escape(f"{HOW} {BARS}"),
        objectives=picture_html(objectives_picture(found)),
        margins=picture_html(margins_picture(found)),
        table=table_html(effects_table(found)),
        certainty=escape(unbroken(certainty)),
        tolerances=table_html(bands_table(found)) + table_html(holding_table(found)),
        cautions="".join(f"<p>{escape(text)}</p>" for text in (CAUTION, CAUTIONS[0])),
    )


def objectives_picture(found: Neighbourhood) -> Picture:
    """Changes of the study's objectives, a bar a thing varied."""
    names = list(found.chosen.study.objectives)
    titles = {name: f"{OBJECTIVES[name].title} [%]" for name in names}
    return _bars(found, OBJECTIVE, titles, "Change of the objectives with a step", less_is_better=True)


def margins_picture(found: Neighbourhood) -> Picture:
    """Changes of the tightest margins, a bar a thing varied."""
    titles = {name: f"{requirement_words(name)} [points]" for name in tightest(found, TIGHTEST)}
    return _bars(found, MARGIN, titles, "Change of the tightest margins with a step", less_is_better=False)


def _bars(
    found: Neighbourhood, kind: str, titles: dict[str, str], title: str, *, less_is_better: bool
) -> Picture:
    effects = found.effects[(found.effects["kind"] == kind) & found.effects["figure"].isin(titles)]
    effects = effects.assign(words=varied_words(effects))
    greatest = effects.assign(size=_relative(effects)).groupby("words")["size"].max()
    order = list(greatest.sort_values(ascending=False).index[:SHOWN])
    charts = []
    for place, (name, words) in enumerate(titles.items()):
        rows = effects[(effects["figure"] == name) & effects["words"].isin(order)]
        values = rows[["words", "change", "moves"]].to_dict("records")
        charts.append(_one(values, order, words, first=place == 0, less_is_better=less_is_better))
    chart = alt.HConcatChart(hconcat=charts, spacing=16, config=configuration() | {"font": PICTURE_FONT})
    chart.padding = 6
    spoken = "; ".join(
        f"{row['words']}: {row['figure']} {row['change']:+.2g} {row['unit']}"
        for row in effects[effects["words"].isin(order[:4])].to_dict("records")
    )
    return Picture(title, spoken, chart.to_dict())


def _one(
    values: list[dict[str, Any]], order: list[str], title: str, *, first: bool, less_is_better: bool
) -> alt.LayerChart:
    y = alt.Y(
        "words:N",
        sort=order,
        title=None,
        scale=alt.Scale(domain=order),
        axis=alt.Axis(labelLimit=0) if first else None,
    )
    reach = max((abs(record["change"]) for record in values), default=1.0) or 1.0
    values = [
        record | {"change": record["change"] if abs(record["change"]) >= SEEN * reach else 0.0}
        for record in values
    ]
    scale = alt.Scale(domain=[-1.6 * reach, 1.6 * reach])
    x = alt.X("change:Q", title=title, scale=scale, axis=alt.Axis(tickCount=4))
    worse = "datum.change > 0" if less_is_better else "datum.change < 0"
    base = alt.Chart(alt.Data(values=values))
    bars = base.mark_bar().encode(
        x=x,
        y=y,
        color=alt.condition(worse, alt.value(WORSE), alt.value(BETTER)),
        opacity=alt.condition(f"datum.moves === '{IN_STEPS}'", alt.value(PALE), alt.value(1.0)),
    )
    text = {"text": alt.Text("change:Q", format="+.2~r")}
    right = base.transform_filter("datum.change >= 0").mark_text(align="left", dx=3, color=INK)
    left = base.transform_filter("datum.change < 0").mark_text(align="right", dx=-3, color=INK)
    layers = [bars, right.encode(x=x, y=y, **text), left.encode(x=x, y=y, **text)]
    return alt.LayerChart(layer=layers, width=WIDTH, height=BAR * len(order))


def _relative(effects: pd.DataFrame) -> pd.Series:
    """Sizes of changes over the greatest of the same figure [-]."""
    size = effects["change"].abs()
    return size / size.groupby(effects["figure"]).transform("max").clip(lower=1e-12)


def bands_table(found: Neighbourhood) -> Table:
    """Bands of every objective and what they come from."""
    study, rows = found.chosen.study, []
    for entry in told_of(study.objectives):
        band = found.tolerance.bands[entry.name]
        drivers = ", ".join(
            f"{factor_words(name)} {100.0 * share:.0f} %" for name, share in band.drivers[:4] if share >= 0.01
        )
        values = (entry.number(value) for value in (band.nominal, band.low, band.middle, band.high))
        rows.append((f"{entry.title} [{entry.unit(study.currency)}]", *values, drivers or "-"))
    return Table(
        ("", "nominal", "5 %", "50 %", "95 %", "most of the scatter from (squared rank correlation)"),
        tuple(rows),
        (0.24, 0.09, 0.09, 0.09, 0.09, 0.40),
        frozenset(range(1, 5)),
        title=f"What so many per cent of {SAMPLES:,} sampled inverters stay below",
    )


def holding_table(found: Neighbourhood) -> Table:
    """Requirements that not all inverters keep."""
    rows = [(requirement_words(name), f"{100.0 * share:.1f}") for name, share in found.tolerance.rarest()]
    rows.append(("all limits together", f"{100.0 * found.tolerance.all_hold:.1f}"))
    return Table(
        ("requirement", "inverters that keep it [%]"),
        tuple(rows),
        (0.6, 0.4),
        frozenset([1]),
        frozenset([len(rows) - 1]),
    )
