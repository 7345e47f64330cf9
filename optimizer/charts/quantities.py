"""What the charts can put on an axis, and the words for the parts of a loss or a volume."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

import pandas as pd

from optimizer.objectives import OBJECTIVES
from optimizer.study.study import Study

DISTORTION = "distortion"
CURRENCY = "currency"
"""The unit of prices: whatever the parts' prices are in."""
LOSS, VOLUME = "loss", "volume"
SUFFIX = {LOSS: "_w", VOLUME: "_l"}
TOTALS = frozenset({"loss_rated_w", "volume_l"})

COMPONENT_WORDS = {
    "output_charge": "output charge",
    "dead_time": "dead time",
    "gate_drive": "gate drive",
    "inverter_inductor": "inverter-side inductor",
    "inverter_inductor_winding": "inverter-side inductor, winding",
    "inverter_inductor_core": "inverter-side inductor, core",
    "grid_inductor": "grid-side inductor",
    "grid_inductor_winding": "grid-side inductor, winding",
    "grid_inductor_core": "grid-side inductor, core",
    "filter_capacitor": "filter capacitor",
    "dc_link": "dc link",
    "damping": "damping resistor",
    "auxiliary": "control and auxiliary supply",
    "control": "control and auxiliary supply",
    "unused": "air between the parts",
}


@dataclass(frozen=True)
class Quantity:
    """A column that an axis can show, with its words and unit."""

    column: str
    title: str
    unit: str

    @property
    def label(self) -> str:
        """Axis title: words and unit in brackets."""
        return f"{self.title} [{self.unit}]"


def quantity_of(objective: str) -> Quantity:
    """The quantity of an objective by its name."""
    found = OBJECTIVES[objective]
    return Quantity(found.column, found.title, found.unit)


def axis_quantities(study: Study) -> tuple[Quantity, ...]:
    """The study's objectives in its order, then all others; prices in the study's currency."""
    return tuple(
        in_currency(quantity_of(name), study) for name in dict.fromkeys((*study.objectives, *OBJECTIVES))
    )


def in_currency(quantity: Quantity, study: Study) -> Quantity:
    """The same quantity; a price in the study's currency."""
    return replace(quantity, unit=study.currency) if quantity.unit == CURRENCY else quantity


def component_columns(table: pd.DataFrame, kind: str) -> list[str]:
    """Columns of a breakdown, in the table's order, without those that are zero for every design.

    Args:
        table: designs.
        kind: LOSS or VOLUME.
    """
    names = [
        name
        for name in map(str, table.columns)
        if name.startswith(f"{kind}_") and name.endswith(SUFFIX[kind]) and name not in TOTALS
    ]
    return [name for name in names if (table[name] > 0.0).any()]


def component_words(columns: Iterable[str], kind: str) -> dict[str, str]:
    """Words for the components behind breakdown columns."""
    named = {column: column.removeprefix(f"{kind}_").removesuffix(SUFFIX[kind]) for column in columns}
    return {column: COMPONENT_WORDS.get(name, name.replace("_", " ")) for column, name in named.items()}
