"""How the charts look: colours, shapes, type and sizes, in one place."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import altair as alt

PALETTE = ("#800921", "#b7a000", "#1f0a90", "#06aea4", "#734ba8", "#985c14", "#939ee2", "#532649")
"""One colour a concept: any two stay apart for readers with protanopia, deuteranopia or tritanopia."""

SHAPES = (
    "circle",
    "square",
    "diamond",
    "triangle-up",
    "cross",
    "triangle-down",
    "triangle-right",
    "triangle-left",
)

INK = "#20272b"
QUIET = "#6c757a"
FAINT = "#c3c8c6"
HAIRLINE = "#e6e7e2"
PAPER = "#ffffff"
ALERT = "#c2410c"
BAR = "#8fa3a8"
LINE = "#3d5a66"

FONT = "system-ui, -apple-system, 'Segoe UI', 'Liberation Sans', Arial, sans-serif"
TEXT_SIZE = 11
TITLE_SIZE = 13

ABOVE = -9
"""Height of column heads over a plot [px]."""

DIMMED = 0.16
"""Opacity of what is not in the selected group [-]."""


FIRST_CLASSES = ("silicon IGBT", "superjunction MOSFET", "SiC MOSFET", "GaN HEMT")
"""Classes that keep their colour and shape whatever others a study compares them with."""


def class_scales(concepts: Sequence[str]) -> tuple[alt.Scale, alt.Scale]:
    """Colour and shape scale of the concepts, the same in every view.

    Args:
        concepts: in the study's order; beyond eight, colours come back with other shapes.
    """
    names = list(concepts)
    order = [*FIRST_CLASSES, *(name for name in names if name not in FIRST_CLASSES)]
    rounds = [divmod(order.index(name), len(PALETTE)) for name in names]
    colours = [PALETTE[place] for _, place in rounds]
    shapes = [SHAPES[(place + turn) % len(SHAPES)] for turn, place in rounds]
    return alt.Scale(domain=names, range=colours), alt.Scale(domain=names, range=shapes)


def heading(text: str, *below: str) -> alt.TitleParams:
    """Title of a view with quieter lines under it."""
    return alt.TitleParams(text=text, subtitle=list(below))


def layered(
    base: str, layers: Mapping[str, alt.Chart], size: tuple[int, int], title: alt.TitleParams
) -> alt.LayerChart:
    """A view of several layers, each named after the view.

    Args:
        base: name of the view.
        layers: by the rest of their names, the lowest first.
        size: width and height of the plot [px].
        title: its heading.
    """
    named = [layer.properties(name=f"{base}_{key}") for key, layer in layers.items()]
    return alt.LayerChart(layer=named, width=size[0], height=size[1], title=title)


AXIS = {
    "labelColor": QUIET,
    "titleColor": INK,
    "domainColor": FAINT,
    "tickColor": FAINT,
    "gridColor": HAIRLINE,
    "labelFontSize": TEXT_SIZE,
    "titleFontSize": TEXT_SIZE,
    "titleFontWeight": "normal",
    "titlePadding": 6,
    "tickSize": 4,
}


def configuration() -> dict[str, Any]:
    """The Vega-Lite config of all charts; it stays with the chart and leaves a notebook's theme alone."""
    return {
        "background": PAPER,
        "font": FONT,
        "axis": AXIS,
        "axisBand": {"grid": False, "ticks": False, "domain": False, "labelColor": INK},
        "legend": {
            "labelColor": INK,
            "titleColor": QUIET,
            "labelFontSize": TEXT_SIZE,
            "titleFontSize": TEXT_SIZE,
            "titleFontWeight": "normal",
            "symbolSize": 80,
            "labelLimit": 240,
        },
        "title": {
            "anchor": "start",
            "frame": "group",
            "color": INK,
            "fontSize": TITLE_SIZE,
            "fontWeight": 600,
            "subtitleColor": QUIET,
            "subtitleFontSize": TEXT_SIZE,
            "subtitlePadding": 4,
            "offset": 8,
        },
        "view": {"stroke": None},
        "text": {"fontSize": TEXT_SIZE, "color": INK},
    }
