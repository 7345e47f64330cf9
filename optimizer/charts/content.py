"""The data behind a dashboard: the designs that are drawn, and the envelopes over frequency."""

from __future__ import annotations

from dataclasses import dataclass

import pandas as pd

from optimizer.charts.design_data import DesignData, Records, design_data
from optimizer.charts.envelope_data import SHOWN_FREQUENCY, Envelope, envelope
from optimizer.charts.quantities import quantity_of
from optimizer.charts.selections import DESIGNS
from optimizer.charts.thinning import SHOWN_PER_CLASS
from optimizer.runs.fronts import Front
from optimizer.study.study import Study

ENVELOPED = ("weighted loss", "volume")
"""Objectives whose least value is drawn over the switching frequency, minimised or not."""
BAND_STEPS, DOUBT = "band_steps", "emission_doubt"
BAND_START_KHZ, MOST_STEPS = 150.0, 8
BELIEVED_MHZ = 5.0
"""Above it the chokes' and the layout's parasitics decide, which no early concept knows."""


@dataclass(frozen=True)
class Content:
    """The data behind a dashboard.

    Attributes:
        designs: shown designs.
        envelopes: one per objective of ENVELOPED.
        steps: where within the designs' frequencies a carrier group enters the band of conducted emission
            [kHz]; none where the study leaves emission out.
        binding: what limits the fronts.
    """

    designs: DesignData
    envelopes: tuple[Envelope, ...]
    steps: tuple[float, ...]
    binding: pd.DataFrame

    def datasets(self) -> dict[str, Records]:
        """Data sets by name, each once."""
        sets = {DESIGNS: self.designs.records, **{item.name: item.records for item in self.envelopes}}
        if self.steps:
            sets[BAND_STEPS] = [{SHOWN_FREQUENCY: step} for step in self.steps]
        if "emission_mhz" in self.designs.records[0]:
            sets[DOUBT] = [{"emission_mhz": BELIEVED_MHZ}]
        return sets


def content(
    study: Study, front: Front, evaluated: pd.DataFrame | None, per_class: int = SHOWN_PER_CLASS
) -> Content:
    """Choose and round what is drawn.

    Args:
        study: the study.
        front: its fronts.
        evaluated: all feasible candidates found, or None.
        per_class: designs of a class drawn at most [-].
    """
    envelopes = (envelope(evaluated, front.table, quantity_of(name).column) for name in ENVELOPED)
    designs, found = design_data(study, front, per_class), tuple(envelopes)
    steps = _band_steps(designs, found) if study.specification.emission_limit else ()
    return Content(designs, found, steps, front.binding)


def _band_steps(designs: DesignData, envelopes: tuple[Envelope, ...]) -> tuple[float, ...]:
    """Above 150 kHz/n the n-th carrier group lies in the band of conducted emission: the filter grows."""
    drawn = [*designs.records, *(record for item in envelopes for record in item.records)]
    values = [record[SHOWN_FREQUENCY] for record in drawn]
    steps = (BAND_START_KHZ / n for n in range(1, MOST_STEPS + 1))
    return tuple(step for step in steps if min(values) <= step <= max(values))
