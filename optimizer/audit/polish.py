"""Local polish of a front: linear steps that improve every objective and keep every limit."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import linprog
from scipy.sparse import csr_matrix

from optimizer.evolution.problem import ClassProblem

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

DIFFERENCE = 4e-3
"""Step of the difference quotients [of an axis]: wide enough to see past the steps of whole turns."""
STEP_SHARES = (1.0, 0.6, 0.35, 0.15, 0.05)
"""Shares of the linear step that are tried."""
SUM_WEIGHT = 0.2
"""Weight of the sum of all gains beside the least of them."""
SAFETY = 1e-4
"""Margin left to every limit, relative [-]."""
CONTINUED = 0.8
"""What the step bound is multiplied by after every round."""
FIRST_BOUND = 0.06
"""Greatest change of an axis in the first round [of the axis]."""


@dataclass(frozen=True)
class Slopes:
    """Difference quotients at members (n): of objectives (n, k, m) and margins (n, k, c) over the continuous
    axes.
    """

    objectives: Array
    margins: Array


def polish_round(problem: ClassProblem, points: Array, spread: Array, bound: float) -> int:
    """One round: difference quotients, a linear step a member, shares of it evaluated.

    What comes out is in the problem's archive; nothing is returned but the number of evaluations. The step of
    a member is the vector d, |d| <= bound, that gains most in the worst of all objectives while linearised
    margins stay positive: the descent direction of multi-objective programming (Fliege & Svaiter 2000) as a
    linear programme, all members in one.

    Args:
        problem: gives objectives and margins.
        points: members (n, k), repaired.
        spread: range of every objective over the front (m,), which scales gains.
        bound: greatest change of an axis [-].

    Returns:
        Candidates evaluated [-].
    """
    axes = np.flatnonzero(problem.space.parts == 0)
    objectives, margins = problem.figures(points)
    slopes = _slopes(problem, points, objectives, margins, axes)
    step = _linear_step(points[:, axes], margins, slopes, spread, bound)
    if step is None:
        return len(points) * (1 + len(axes))
    tried = np.repeat(points[None], len(STEP_SHARES), axis=0)
    tried[:, :, axes] += np.asarray(STEP_SHARES)[:, None, None] * step
    problem.figures(problem.space.repaired(tried.reshape(-1, points.shape[1])))
    return len(points) * (1 + len(axes) + len(STEP_SHARES))


def _slopes(problem: ClassProblem, points: Array, objectives: Array, margins: Array, axes: Ints) -> Slopes:
    sign = np.where(points[:, axes] + DIFFERENCE <= 1.0, DIFFERENCE, -DIFFERENCE)
    moved = np.repeat(points[:, None], len(axes), axis=1)
    moved[:, np.arange(len(axes)), axes] += sign
    other, left = problem.figures(moved.reshape(-1, points.shape[1]))
    shape = (len(points), len(axes), -1)
    return Slopes(
        (other.reshape(shape) - objectives[:, None]) / sign[:, :, None],
        (left.reshape(shape) - margins[:, None]) / sign[:, :, None],
    )


def _linear_step(
    places: Array, margins: Array, slopes: Slopes, spread: Array, bound: float
) -> NDArray[np.float64] | None:
    """Steps (n, a) by one linear programme over all members; None where the solver finds none."""
    count, axes = places.shape
    gains = slopes.objectives / np.where(spread > 0.0, spread, 1.0)
    width = axes + 1  # of a member's unknowns: its step, and its least gain
    owner, limit = np.nonzero(margins < bound * np.abs(slopes.margins).sum(1))
    rows = np.concatenate(
        [
            np.concatenate([gains.swapaxes(1, 2), np.ones((count, gains.shape[2], 1))], axis=2).reshape(
                -1, width
            ),
            np.concatenate([-slopes.margins[owner, :, limit], np.zeros((len(owner), 1))], axis=1),
        ]
    )
    owners = np.concatenate([np.repeat(np.arange(count), gains.shape[2]), owner])
    columns = owners[:, None] * width + np.arange(width)
    matrix = csr_matrix(
        (rows.ravel(), (np.repeat(np.arange(len(rows)), width), columns.ravel())),
        shape=(len(rows), count * width),
    )
    right = np.concatenate(
        [np.zeros(count * gains.shape[2]), np.maximum(margins[owner, limit] - SAFETY, 0.0)]
    )
    low = np.concatenate([np.maximum(-bound, -places), np.full((count, 1), -1.0)], axis=1)
    high = np.concatenate([np.minimum(bound, 1.0 - places), np.full((count, 1), 10.0)], axis=1)
    cost = np.concatenate([SUM_WEIGHT * gains.sum(2), np.full((count, 1), -1.0)], axis=1)
    found = linprog(
        cost.ravel(), matrix, right, bounds=np.stack([low.ravel(), high.ravel()], axis=1), method="highs"
    )
    return None if found.x is None else found.x.reshape(count, width)[:, :axes]
