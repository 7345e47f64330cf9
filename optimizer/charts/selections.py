"""The selections and choices that link the views."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import altair as alt

from optimizer.charts.look import INK
from optimizer.charts.quantities import Quantity

DESIGNS = "designs"
"""Name of the shared data set."""
X, Y, SIZE = "x_axis", "y_axis", "point_size"
X_VALUE, Y_VALUE, SIZE_VALUE = "x_value", "y_value", "size_value"
CLASSES, GROUP, POINTED, PINNED = "classes", "group", "pointed", "pinned"
FROM_TABLE, PICKED, PICKED_DESIGN = "from_table", "picked", "picked_design"
EQUAL = "equal"
HELD = "held"
"""Id of the design that is held beside the picked one; empty where none is."""
HELD_TEST = f"datum.design_id === ({HELD} || {PICKED})"
"""True for the held design; for the picked one where none is held, since a layer must not be empty."""
POINTS, REACH = "front_points", "front_reach"
"""Names of the layers that hold the selections: the rectangle and the legend below, the pointer above it."""
DRAG = "[pointerdown[!event.altKey], window:pointerup] > window:pointermove!"
"""What draws the group's rectangle; with Alt a press is a click only and leaves the group as it is."""
LET_GO = "dblclick, window:keydown[event.key === 'Escape']"
"""What empties the group and the pin."""
NEW_AXIS = f"window:change[event.target.name === '{X}' || event.target.name === '{Y}']"
"""Another axis empties the group too: its range means nothing there."""


@dataclass(frozen=True)
class Selections:
    """Parameters of the dashboard.

    Attributes:
        classes: concepts chosen in the legend.
        group: designs within the rectangle drawn in the front.
        pointed: design nearest to the pointer; pinned: design that was clicked.
        variables: choices of the axes and the id of the design that all detail views show.
        picked_test: expression that is true for that design.
    """

    classes: alt.Parameter
    group: alt.Parameter
    pointed: alt.Parameter
    pinned: alt.Parameter
    variables: tuple[alt.Parameter, ...]
    picked_test: str = f"datum.design_id === {PICKED}"

    def declared(self, views: Sequence[str]) -> list[Any]:
        """All parameters as a chart of many views declares them, each selection bound to its one layer.

        Args:
            views: names of all layers; the chart library appends numbers to those it puts together.
        """
        held = ((self.group, POINTS), (self.classes, POINTS), (self.pointed, REACH), (self.pinned, REACH))
        found: list[Any] = []
        for parameter, base in held:
            layer = [view for view in views if view.startswith(base)]
            declaration: Any = parameter.param
            found.append(alt.TopLevelSelectionParameter(**declaration.to_dict(), views=layer))
        return [*found, *(parameter.param for parameter in self.variables)]


def selections(quantities: tuple[Quantity, ...], at_start: str) -> Selections:
    """All parameters.

    Args:
        quantities: what an axis can show; the first two are on the axes at the start, the third is the size.
        at_start: id of the design shown until one is picked.
    """
    by_id: dict[str, Any] = {"fields": ["design_id"], "nearest": True}
    rectangle = alt.BrushConfig(fill=INK, fillOpacity=0.05, stroke=INK, strokeDash=[3, 3], strokeOpacity=0.5)
    return Selections(
        classes=alt.selection_point(name=CLASSES, fields=["concept"], bind="legend", toggle="true"),
        group=alt.selection_interval(
            name=GROUP,
            encodings=["x", "y"],
            on=DRAG,
            clear=f"{LET_GO}, {NEW_AXIS}",
            translate=False,
            zoom=False,
            mark=rectangle,
        ),
        pointed=alt.selection_point(name=POINTED, on="pointerover", clear=False, **by_id),
        pinned=alt.selection_point(name=PINNED, on="click", clear=LET_GO, toggle=False, **by_id),
        variables=(*_choices(quantities), *_variables(at_start)),
    )


def _choices(quantities: tuple[Quantity, ...]) -> list[alt.Parameter]:
    """What a reader chooses from lists: both axes and the size of the points."""
    options = {quantity.column: quantity.label for quantity in quantities}
    names = list(options)
    third = names[2] if len(names) > 2 else EQUAL
    return [
        _choice(X, "across ", names[0], options),
        _choice(Y, "upwards ", names[1], options),
        _choice(SIZE, "point size ", third, options | {EQUAL: "all equal"}),
    ]


def _choice(name: str, words: str, value: str, options: Mapping[str, str]) -> alt.Parameter:
    choices = alt.binding_select(options=list(options), labels=list(options.values()), name=words)
    return alt.param(name=name, value=value, bind=choices)


def _variables(at_start: str) -> list[alt.Parameter]:
    """What follows from the selections: the id and the record of the picked design."""
    record = f"data('{DESIGNS}')[indexof(pluck(data('{DESIGNS}'), 'design_id'), {PICKED})]"
    return [
        alt.param(name=FROM_TABLE, value=""),
        alt.param(name=HELD, value=""),
        alt.param(name=PICKED, expr=_picked(at_start)),
        alt.param(name=PICKED_DESIGN, expr=record),
    ]


def _picked(at_start: str) -> str:
    """The picked design: chosen in the table, else clicked, else pointed at, else the one of the start."""
    rest = json.dumps(at_start)
    for name in (POINTED, PINNED):
        rest = f"({name}.design_id && {name}.design_id.length ? {name}.design_id[0] : {rest})"
    return f"{FROM_TABLE} ? {FROM_TABLE} : {rest}"


def axis_values() -> list[alt.CalculateTransform]:
    """What makes the chosen quantities into columns."""
    values = {
        X_VALUE: f"datum[{X}]",
        Y_VALUE: f"datum[{Y}]",
        SIZE_VALUE: f"{SIZE} === '{EQUAL}' ? 1 : datum[{SIZE}]",
    }
    return [alt.CalculateTransform(calculate=value, **{"as": name}) for name, value in values.items()]


def axis_title(parameter: str, quantities: tuple[Quantity, ...]) -> str:
    """Expression of the title that belongs to an axis choice."""
    titles = json.dumps({quantity.column: quantity.label for quantity in quantities})
    return f"{titles}[{parameter}]"
