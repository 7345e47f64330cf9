"""What candidates are ranked by: the models' own values, or those that 95 % of inverters stay below."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from models.evaluation import Evaluation
from models.uncertainty import (
    FACTORS,
    HIGH_NORMAL,
    TOLERANCE,
    ModelFactors,
    Uncertainty,
    factors_beside,
    law_of,
)
from optimizer.objectives import Objective, margins_of, requirements_of
from optimizer.space import SearchSpace
from optimizer.study.schema import HIGH_VALUES, NOMINAL_VALUES

Array = NDArray[np.float64]
GOOD_WHEN_HIGH = frozenset({"dc_link_life"})
"""Factors whose low side is the bad one."""


@dataclass(frozen=True)
class Figures:
    """What a candidate is ranked by: objectives (n, m) in their columns' units, margins (n, c) [-]; volume of
    its filters (n,) [m3].
    """

    objectives: Array
    margins: Array
    filter_volume: Array


def nominal_figures(space: SearchSpace, points: Array, chosen: Sequence[Objective]) -> Figures:
    """The models' own values.

    Args:
        space: the search space.
        points: repaired (n, k).
        chosen: objectives.
    """
    result = space.inverter.evaluate(space.designs(points))
    return Figures(*_read(space, result, chosen), result.filter_volume)


def high_figures(space: SearchSpace, points: Array, chosen: Sequence[Objective]) -> Figures:
    """Values that 95 % of inverters stay below, and margins that the study's share of inverters keeps.

    Every factor of `models.uncertainty` alone is moved to its bad side, to what 5 % exceed; a tolerance to
    both sides. The deviations that come of it add up as independent ones do, by the root of their squares
    (first-order error propagation, JCGM 100:2008, 5.1), and margins are scaled from 95 % to the study's share
    by the normal distribution. `tests/optimizer/evolution/test_ranking.py` holds it against Monte Carlo.

    Args:
        space, points, chosen: as in `nominal_figures`.
    """
    deviations, owner = bad_sides(space.study.uncertainty)
    sides, count = len(deviations) + 1, len(points)
    at = np.concatenate([np.zeros((1, len(FACTORS))), deviations])
    factors = factors_beside(space.study.uncertainty, at)
    spread = ModelFactors(**{name: np.tile(value, count) for name, value in vars(factors).items()})
    designs = space.designs(points).take(np.repeat(np.arange(count), sides))
    result = space.inverter.evaluate(designs, spread)
    objectives, margins = (values.reshape(count, sides, -1) for values in _read(space, result, chosen))
    wanted = float(ndtri(space.study.search.limits_hold)) / HIGH_NORMAL
    return Figures(
        objectives[:, 0] + _together(objectives[:, 1:] - objectives[:, :1], owner),
        margins[:, 0] - wanted * _together(margins[:, :1] - margins[:, 1:], owner),
        result.filter_volume[::sides],
    )


def bad_sides(uncertainty: Uncertainty) -> tuple[Array, NDArray[np.int64]]:
    """Deviations (s, k) that move one factor each, in standard deviations, and the factor of each (s,) [-].

    A factor without spread has none; a tolerance has two, since either side may be the bad one.
    """
    sides = [
        (place, sign * HIGH_NORMAL)
        for place, name in enumerate(FACTORS)
        if getattr(uncertainty, name) > 0.0
        for sign in _signs(name)
    ]
    deviations = np.zeros((len(sides), len(FACTORS)))
    for row, (place, deviation) in enumerate(sides):
        deviations[row, place] = deviation
    return deviations, np.array([place for place, _ in sides], dtype=np.int64)


def _signs(name: str) -> tuple[float, ...]:
    if law_of(name) == TOLERANCE:
        return 1.0, -1.0
    return (-1.0,) if name in GOOD_WHEN_HIGH else (1.0,)


def _together(worse: Array, owner: NDArray[np.int64]) -> Array:
    """Root of the sum of squares over factors (n, ...) of how much worse each makes it (n, s, ...).

    A factor of one side counts by its size: where it makes it better there, its other side makes it worse.
    """
    total = np.zeros((worse.shape[0], worse.shape[2]))
    for place in np.unique(owner):
        own = worse[:, owner == place]
        size = np.abs(own[:, 0]) if own.shape[1] == 1 else np.maximum(own.max(1), 0.0)
        total += size**2
    return np.asarray(np.sqrt(total))


def _read(space: SearchSpace, result: Evaluation, chosen: Sequence[Objective]) -> tuple[Array, Array]:
    objectives = np.stack([objective.read(result) for objective in chosen], axis=-1)
    return objectives, margins_of(requirements_of(space.study.at_most, result))


RANKED_BY: Mapping[str, Callable[[SearchSpace, Array, Sequence[Objective]], Figures]] = {
    NOMINAL_VALUES: nominal_figures,
    HIGH_VALUES: high_figures,
}
