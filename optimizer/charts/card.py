"""The picked design in words: what it is made of and what it comes to."""

from __future__ import annotations

from typing import Any

import altair as alt

from models.specification import GRID_CONNECTED, Specification
from optimizer.charts.look import INK, QUIET
from optimizer.charts.quantities import DISTORTION, Quantity
from optimizer.charts.selections import Selections

LINE = 17
SECOND_COLUMN = 690
FIGURE = ".3~r"
BETWEEN = " + '  ·  ' + "


def card(
    spec: Specification, quantities: tuple[Quantity, ...], linked: Selections, width: int
) -> alt.LayerChart:
    """A headline and two columns of text about the picked design: what it comes to, what it is made of.

    Args:
        spec: says which distortion is meant.
        quantities: objectives and the like.
        linked: the dashboard's selections.
        width: of the view [px].
    """
    figures = (_objectives(quantities, spec), _rated(), _switches())
    parts = (
        _inductor("inverter-side", "inverter_inductor"),
        _inductor("grid-side", "grid_inductor"),
        _capacitors(),
    )
    texts = [_text("card_headline", _headline(), (0, 0), linked, fontSize=14, fontWeight=600, color=INK)]
    for name, x, lines in (("card_figures", 0, figures), ("card_parts", SECOND_COLUMN, parts)):
        for place, line in enumerate(lines):
            at = (x, LINE * (place + 1) + 6)
            texts.append(
                _text(f"{name}_{'abc'[place]}", line, at, linked, fontSize=12, color=INK if x == 0 else QUIET)
            )
    return alt.LayerChart(layer=texts, width=width, height=LINE * (len(figures) + 1) + 6)


def _text(name: str, expression: str, at: tuple[int, int], linked: Selections, **style: Any) -> alt.Chart:
    return (
        alt.Chart(name=name)
        .transform_filter(linked.picked_test)
        .transform_calculate(line=expression)
        .mark_text(align="left", baseline="top", **style)
        .encode(x=alt.value(at[0]), y=alt.value(at[1]), text="line:N")
    )


def _figure(column: str, words: str, unit: str, pattern: str = FIGURE) -> str:
    after = f" + ' {unit}'" if unit else ""
    return f"'{words} ' + format(datum.{column}, '{pattern}'){after}"


def _headline() -> str:
    return (
        "'Picked design ' + datum.design_id + '   ' + datum.device + ', ' + datum.modulation + ', ' + "
        f"format(datum.switching_frequency_khz, '{FIGURE}') + ' kHz, ' + datum.cooling + ' cooling'"
    )


def _objectives(quantities: tuple[Quantity, ...], spec: Specification) -> str:
    told = [_figure(item.column, item.title, _unit(item)) for item in quantities if item.title != DISTORTION]
    of = "current" if spec.application == GRID_CONNECTED else "voltage"
    return BETWEEN.join([*told, _figure("thd_percent", f"{of} distortion", "%")])


def _unit(quantity: Quantity) -> str:
    return quantity.unit


def _rated() -> str:
    return BETWEEN.join(
        (
            _figure("efficiency_rated_percent", "at rated load: efficiency", "%", ".2f"),
            _figure("loss_rated_w", "loss", "W"),
            _figure("junction_temperature_c", "worst junction", "°C", ".0f"),
            _figure("sink_temperature_c", "heatsink", "°C", ".0f"),
        )
    )


def _switches() -> str:
    ripple = _figure("ripple_percent", "current ripple", "% of the rated peak")
    return (
        f"'each switch: ' + datum.parallel + {_figure('die_area_mm2', ' x', 'mm² of die')}{BETWEEN}{ripple}"
    )


def _inductor(words: str, side: str) -> str:
    column = f"{side.removesuffix('_inductor')}_inductance_uh"
    told = f"{_figure(column, f'{words} inductor', 'µH: ')} + datum.{side}_build"
    return f"datum.{side}_build ? {told} : 'no {words} inductor'"


def _capacitors() -> str:
    filter_side = _figure("filter_capacitance_uf", "filter capacitor", "µF")
    return f"{filter_side}{BETWEEN}'dc link: ' + datum.dc_link_build"
