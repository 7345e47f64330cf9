"""Least loss and least volume over the switching frequency, out of everything a search has found."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from optimizer.charts.design_data import KILO, Records, plain

MOST_BINS = 60
FEWEST = 10
"""Candidates that a bin needs: the best of a few is luck. A class without one keeps its fullest bins."""
FREQUENCY = "switching_frequency_hz"
SHOWN_FREQUENCY = "switching_frequency_khz"
VOLUME_COLUMN, FILTER_COLUMN = "volume_l", "filter_volume_l"


@dataclass(frozen=True)
class Envelope:
    """A lower envelope over the switching frequency.

    Attributes:
        records: per class and frequency bin the candidate with the least value, at its own frequency [kHz];
            the least volumes with the volume of their filters.
        column: what is least.
        candidates: candidates looked at [-].
        front_only: whether only the front was at hand.
    """

    records: Records
    column: str
    candidates: int
    front_only: bool

    @property
    def name(self) -> str:
        """Name of its data set."""
        return f"least_{self.column}"


def envelope(
    evaluated: pd.DataFrame | None, table: pd.DataFrame, column: str, bins: int = MOST_BINS
) -> Envelope:
    """Least value of a column per class and logarithmic frequency bin.

    Args:
        evaluated: all feasible candidates; where it is missing or lacks the column, the front is used.
        table: the front.
        column: what is to be least.
        bins: bins over the whole range of frequencies, the same for all classes [-].
    """
    front_only = evaluated is None or column not in evaluated or evaluated.empty
    source = (table if front_only or evaluated is None else evaluated).reset_index(drop=True)
    place = _bins(source[FREQUENCY].to_numpy(dtype=float), bins)
    found = source.groupby([source["concept"], place], sort=True, observed=True)[column].agg(
        ["size", "idxmin"]
    )
    most = found["size"].groupby(level=0).transform("max")
    least = found["idxmin"][found["size"] >= np.minimum(most, FEWEST)]
    chosen = source.loc[least].sort_values(["concept", FREQUENCY], kind="stable")
    columns = {
        "concept": chosen["concept"].tolist(),
        SHOWN_FREQUENCY: plain(chosen[FREQUENCY] / KILO),
        column: plain(chosen[column]),
    }
    if column == VOLUME_COLUMN and FILTER_COLUMN in chosen:
        columns[FILTER_COLUMN] = plain(chosen[FILTER_COLUMN])
    records = [dict(zip(columns, row, strict=True)) for row in zip(*columns.values(), strict=True)]
    return Envelope(records, column, len(source), front_only)


def _bins(frequency: np.ndarray, count: int) -> np.ndarray:
    """Number of the logarithmic bin of each frequency, from 0 [-]."""
    low, high = np.log(frequency.min()), np.log(frequency.max())
    if high <= low:
        return np.zeros(len(frequency), dtype=int)
    return np.minimum((np.log(frequency) - low) / (high - low) * count, count - 1).astype(int)
