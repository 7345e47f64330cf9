"""Rules by which designs are picked from the overall front."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
import pandas as pd

from optimizer.charts.thinning import unit_range
from optimizer.objectives import OBJECTIVES

EQUAL_COST = 0.05
"""Share of the least cost up to which costs count as equal: a judgement, about what models that all options
share leave of their error in a difference."""


def on_front(table: pd.DataFrame) -> np.ndarray:
    """Positions of the overall front's designs."""
    return np.flatnonzero(table["overall_front"].to_numpy(dtype=bool))


def least_row(table: pd.DataFrame, column: str, columns: Sequence[str]) -> int:
    """Position of the overall-front design with the least value of a column; of equal ones the nearest to
    the ideal point of `columns`.
    """
    rows = on_front(table)
    values = table[column].to_numpy(dtype=float)[rows]
    return int(rows[np.lexsort([ideal_distance(table, columns), values])[0]])


def ideal_distance(table: pd.DataFrame, columns: Sequence[str]) -> np.ndarray:
    """Distance of the overall front's designs to its ideal point, every column scaled to its range [-]."""
    points = unit_range(table[list(columns)].to_numpy(dtype=float)[on_front(table)])
    return np.sqrt(np.square(points).sum(-1))


def weighted_row(table: pd.DataFrame, weights: Mapping[str, float]) -> int:
    """Position of the overall-front design with the least weighted sum of objectives, each scaled to the
    overall front's range. Source: simple additive weighting, Hwang & Yoon, Multiple Attribute Decision
    Making (1981).

    Args:
        table: front.
        weights: by objective [-].
    """
    rows = on_front(table)
    columns = [OBJECTIVES[name].column for name in weights]
    points = unit_range(table[columns].to_numpy(dtype=float)[rows])
    return int(rows[(points @ np.array(list(weights.values()))).argmin()])


def recommended_row(table: pd.DataFrame, picked: Sequence[int], columns: Sequence[str]) -> int:
    """Of the picked designs the one with the least price and lost energy; where costs count as equal, the one
    nearest to the ideal point of `columns`.
    """
    chosen = np.array(sorted(set(picked)))
    cost = table["cost_of_ownership"].to_numpy(dtype=float)[chosen]
    equal = chosen[cost <= (1.0 + EQUAL_COST) * cost.min()]
    distance = dict(zip(on_front(table), ideal_distance(table, columns), strict=True))
    return int(min(equal, key=lambda row: distance[row]))
