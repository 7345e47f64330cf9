"""The three charts of a report: the front with the shortlist in it, costs over the years, volumes."""

from __future__ import annotations

from typing import Any

import altair as alt
import pandas as pd

from models.evaluation import FILTER_PARTS
from optimizer.charts.look import INK, PAPER, class_scales, configuration
from optimizer.charts.picture import PICTURE_FONT
from optimizer.charts.quantities import quantity_of
from optimizer.decision.figures import figure
from optimizer.decision.shortlist import Shortlist
from optimizer.report.blocks import Picture
from optimizer.report.designs import components

TONES = ("#2f4a56", "#5f7d88", "#94a8ae", "#bfcacd", "#e3e6e2")
WIDTH, HEIGHT = 330, 200
MOST_POINTS = 1500
FEW = alt.Axis(tickCount=6)
GROUPS = ("semiconductors, heatsink", "filters", "dc link", "control", "air between the parts")


def pictures(found: Shortlist) -> tuple[Picture, ...]:
    """The charts of page one."""
    return front_picture(found), cost_picture(found), volume_picture(found)


def numbered(found: Shortlist) -> pd.DataFrame:
    """The shortlisted designs with their numbers."""
    designs = found.table.iloc[found.rows].reset_index(drop=True).copy()
    designs.insert(0, "number", [str(place) for place in range(1, len(designs) + 1)])
    return designs


def front_picture(found: Shortlist) -> Picture:
    """The overall front over the first two objectives, the shortlist's numbers in it."""
    across, upwards = (quantity_of(name) for name in found.study.objectives[:2])
    front = found.table[found.table.overall_front]
    columns = ["concept", across.column, upwards.column]
    points = front[columns].iloc[:: max(1, len(front) // MOST_POINTS)].to_dict("records")
    picked = numbered(found)[[*columns, "number"]].to_dict("records")
    concepts = [name for name in found.study.concept_names if name in set(front.concept)]
    colour, _ = class_scales(found.study.concept_names)
    places = [found.study.concept_names.index(name) for name in concepts]
    scale = alt.Scale(domain=concepts, range=[colour.range[place] for place in places])
    scale_of_points = alt.Scale(zero=False, padding=14)
    x = alt.X(f"{across.column}:Q", title=_label(found, across), axis=FEW, scale=scale_of_points)
    y = alt.Y(f"{upwards.column}:Q", title=_label(found, upwards), axis=FEW, scale=scale_of_points)
    legend = alt.Legend(orient="top", title=None, columns=2)
    dots = (
        alt.Chart(alt.Data(values=points))
        .mark_circle(size=18, opacity=0.45)
        .encode(x=x, y=y, color=alt.Color("concept:N", scale=scale, legend=legend))
    )
    base = alt.Chart(alt.Data(values=picked)).encode(x=x, y=y)
    rings = base.mark_circle(size=210, fill=PAPER, stroke=INK, strokeWidth=1.4, opacity=1.0)
    numbers = base.mark_text(fontSize=11, fontWeight=600, color=INK, dy=0.5).encode(text="number:N")
    chart = alt.LayerChart(layer=[dots, rings, numbers], width=WIDTH, height=HEIGHT)
    words = f"{across.title} over {upwards.title} of {len(front)} designs, the options numbered"
    return _picture("The front and the options", words, chart, found)


def _label(found: Shortlist, quantity: Any) -> str:
    unit = found.study.currency if quantity.unit == "currency" else quantity.unit
    return f"{quantity.title} [{unit}]"


def cost_picture(found: Shortlist) -> Picture:
    """Price and lost energy of every option."""
    designs = numbered(found)
    terms = found.study.specification.energy
    kinds = {"price": "price", f"lost energy, {terms.years:g} years": "lost_energy_cost"}
    rows = [
        {"number": design["number"], "part": words, "place": place, "amount": float(design[column])}
        for design in designs.to_dict("records")
        for place, (words, column) in enumerate(kinds.items())
    ]
    words = "; ".join(
        f"option {design['number']}: {figure(design['cost_of_ownership'])}"
        for design in designs.to_dict("records")
    )
    chart = _bars(rows, tuple(kinds), TONES[0:3:2], f"[{found.study.currency}]", designs["cost_of_ownership"])
    return _picture("Price and lost energy", words, chart, found)


def volume_picture(found: Shortlist) -> Picture:
    """Volumes of every option by groups of components."""
    designs = numbered(found)
    rows = []
    for design in designs.to_dict("records"):
        sums = dict.fromkeys(GROUPS, 0.0)
        for column in components(designs, "Volumes"):
            sums[_group(column.removeprefix("volume_").removesuffix("_l"))] += float(design[column])
        rows += [
            {"number": design["number"], "part": group, "place": GROUPS.index(group), "amount": amount}
            for group, amount in sums.items()
        ]
    words = "; ".join(
        f"option {d['number']}: {figure(d['volume_l'], 2)} l" for d in designs.to_dict("records")
    )
    chart = _bars(rows, GROUPS, TONES, "[l]", designs["volume_l"])
    return _picture("Volume by component", words, chart, found)


def _group(part: str) -> str:
    if part in FILTER_PARTS:
        return "filters"
    return {"dc_link": "dc link", "control": "control", "unused": "air between the parts"}.get(
        part, GROUPS[0]
    )


def _bars(
    rows: list[dict[str, Any]], parts: tuple[str, ...], tones: tuple[str, ...], title: str, totals: pd.Series
) -> alt.LayerChart:
    """Stacked bars, one an option, the total above each."""
    x = alt.X("number:N", title="option", axis=alt.Axis(labelAngle=0, ticks=False), sort=None)
    scale = alt.Scale(domain=list(parts), range=list(tones))
    legend = alt.Legend(orient="top", title=None, columns=2, symbolType="square")
    bars = (
        alt.Chart(alt.Data(values=rows))
        .mark_bar()
        .encode(
            x=x,
            y=alt.Y("amount:Q", title=title, stack="zero"),
            color=alt.Color("part:N", scale=scale, legend=legend),
            order=alt.Order("place:Q"),
        )
    )
    told = [
        {"number": str(place), "amount": float(total), "told": figure(total, 3 if total >= 100.0 else 2)}
        for place, total in enumerate(totals, start=1)
    ]
    above = (
        alt.Chart(alt.Data(values=told))
        .mark_text(dy=-7, color=INK)
        .encode(x=x, y=alt.Y("amount:Q"), text="told:N")
    )
    return alt.LayerChart(layer=[bars, above], width=WIDTH, height=HEIGHT)


def _picture(title: str, words: str, chart: alt.LayerChart, found: Shortlist) -> Picture:
    chart.config, chart.padding = configuration() | {"font": PICTURE_FONT}, 6
    return Picture(title, words, chart.to_dict())


def as_png(picture: Picture, scale: float = 2.5, plot: tuple[int, int] | None = None) -> bytes:
    """A chart as PNG.

    Args:
        picture: the chart.
        scale: pixels of the image over those of the chart [-].
        plot: width and height of its plot [px]; None for its own.
    """
    import vl_convert

    size = {} if plot is None else {"width": plot[0], "height": plot[1]}
    return vl_convert.vegalite_to_png(picture.spec | size, scale=scale)


def as_svg(picture: Picture) -> str:
    """A chart as SVG."""
    import vl_convert

    return vl_convert.vegalite_to_svg(picture.spec)
