"""Which designs of a large front are drawn: every extreme, and an even spread of the rest."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd
from numpy.typing import NDArray

Array = NDArray[np.float64]
Rows = NDArray[np.int64]
SHOWN_PER_CLASS, MOST_SHOWN = 300, 1200
"""Designs drawn at most of one class and in all: more hide each other, slow the pointer, swell the page."""


def unit_range(points: Array) -> Array:
    """Points (n, m) scaled so that every column runs over [0, 1]; constant columns become 0 [-]."""
    low, high = points.min(0), points.max(0)
    return (points - low) / np.where(high > low, high - low, 1.0)


def extreme_rows(points: Array) -> Rows:
    """Rows with the least or the greatest value of a column, each row once, ascending."""
    return np.unique(np.concatenate([points.argmin(0), points.argmax(0)]))


def spread_rows(points: Array, count: int, first: Rows) -> Rows:
    """Rows that cover a cloud of points evenly: time after time the point farthest from all chosen ones.

    The greedy rule of Gonzalez (1985), "Clustering to minimize the maximum intercluster distance": no point
    left out is farther from a chosen one than twice the best possible.

    Args:
        points: (n, m), n > 0.
        count: rows wanted; all of `first` are kept even where they are more [-].
        first: rows that are chosen at the start, at least one.

    Returns:
        Rows, ascending.
    """
    chosen = list(first)
    nearest = np.min([np.square(points - points[row]).sum(-1) for row in chosen], axis=0)
    while len(chosen) < min(count, len(points)):
        farthest = int(nearest.argmax())
        if nearest[farthest] <= 0.0:
            break
        chosen.append(np.int64(farthest))
        np.minimum(nearest, np.square(points - points[farthest]).sum(-1), out=nearest)
    return np.unique(np.asarray(chosen, dtype=np.int64))


def shown_rows(
    table: pd.DataFrame,
    spread_over: Sequence[str],
    extremes_of: Sequence[str],
    per_class: int = SHOWN_PER_CLASS,
    also: int | None = None,
) -> Rows:
    """Rows of a front that are drawn, in the table's order.

    Args:
        table: front, with `concept`.
        spread_over: columns whose space is to be covered evenly (the objectives).
        extremes_of: columns whose least and greatest values in every class are always drawn.
        per_class: rows of a class at most [-].
        also: a row that is drawn in any case.
    """
    classes = table["concept"].to_numpy()
    kept = []
    per_class = min(per_class, max(MOST_SHOWN // len(pd.unique(classes)), 1))
    for name in pd.unique(classes):
        rows = np.flatnonzero(classes == name)
        of_class = table.iloc[rows]
        ends = extreme_rows(of_class[list(extremes_of)].to_numpy(dtype=float))
        ends = np.union1d(ends, np.flatnonzero(rows == also))
        points = unit_range(of_class[list(spread_over)].to_numpy(dtype=float))
        kept.append(rows[spread_rows(points, per_class, ends)])
    return np.sort(np.concatenate(kept))


def balanced_row(table: pd.DataFrame, columns: Sequence[str]) -> int:
    """Position of the overall-front design nearest to the ideal point: the least of every column at once.

    Columns are scaled to the overall front's own range, its ideal point at 0 and its nadir at 1; constant
    ones do not count. Where no row is on the overall front, all are taken.

    Source: compromise programming, Zeleny (1973); Miettinen, Nonlinear Multiobjective Optimization (1999),
        ch. 2.

    Args:
        table: front, with `overall_front`.
        columns: what is to be small.
    """
    eligible = table["overall_front"].to_numpy(dtype=bool)
    rows = np.flatnonzero(eligible if eligible.any() else np.ones(len(table), dtype=bool))
    points = unit_range(table[list(columns)].to_numpy(dtype=float)[rows])
    return int(rows[np.square(points).sum(-1).argmin()])
