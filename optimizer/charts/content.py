"""The data behind a dashboard: the designs that are drawn, and the envelopes over frequency."""

from __future__ import annotations

from dataclasses import dataclass

import pandas as pd

from optimizer.charts.design_data import DesignData, Records, design_data
from optimizer.charts.envelope_data import Envelope, envelope
from optimizer.charts.quantities import quantity_of
from optimizer.charts.selections import DESIGNS
from optimizer.charts.thinning import SHOWN_PER_CLASS
from optimizer.fronts import Front
from optimizer.study import Study

ENVELOPED = ("weighted loss", "volume")
"""Objectives whose least value is drawn over the switching frequency, minimised or not."""


@dataclass(frozen=True)
class Content:
    """The data behind a dashboard.

    Attributes:
        designs: shown designs.
        envelopes: one per objective of ENVELOPED.
    """

    designs: DesignData
    envelopes: tuple[Envelope, ...]

    def datasets(self) -> dict[str, Records]:
        """Data sets by name, each once."""
        return {DESIGNS: self.designs.records, **{item.name: item.records for item in self.envelopes}}


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
    return Content(design_data(study, front, per_class), tuple(envelopes))
