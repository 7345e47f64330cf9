"""What a population begins with: quasi-random points over the whole cube, and rules of thumb."""

from __future__ import annotations

import warnings

import numpy as np
from numpy.typing import NDArray
from scipy.stats import qmc

from optimizer.space import CARRIER, CATEGORY, SearchSpace
from optimizer.study.study import SearchSettings

Array = NDArray[np.float64]

SCREENED_PER_PLACE = 16
"""Quasi-random points screened for each place in the population."""
FREQUENCY_STEPS = 8
"""Switching frequencies at which the rules of thumb are tried, evenly on the logarithmic scale."""
RULES_OF_THUMB = {
    "ripple": 0.25,  # peak to peak over the peak of the rated current
    "grid_inductance_ratio": 0.3,  # of the bridge-side inductance
    "filter_capacitance_share": 0.05,  # of the base capacitance
    "damping": 0.33,  # of the filter's characteristic impedance
    "parallel": 1.0,
}
"""Common practice for a first try, no source; beyond a study's ranges the nearest end is taken."""


def planned_evaluations(search: SearchSettings) -> int:
    """Candidates a population evaluates, rules of thumb apart [-]."""
    return search.population * (SCREENED_PER_PLACE + search.generations - 1)


def first_points(rng: np.random.Generator, space: SearchSpace, population: int) -> Array:
    """Points to begin with (n, k), repaired: SCREENED_PER_PLACE points a place, and rules of thumb.

    Args:
        rng: random numbers.
        space: the search space.
        population: places [-].
    """
    count = SCREENED_PER_PLACE * population
    quasi = quasi_random(int(rng.integers(2**31)), 0, count, len(space.variables))
    return space.repaired(np.concatenate([rules_of_thumb(space), quasi]))


def quasi_random(seed: int, start: int, count: int, axes: int) -> Array:
    """Points number `start` to `start + count` of a scrambled Sobol sequence (count, axes) [-].

    Source: Sobol (1967), scrambling by Owen (1998), as scipy has it.
    """
    sequence = qmc.Sobol(axes, seed=seed)
    if start:
        sequence.fast_forward(start)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)  # blocks need not be powers of two here
        return sequence.random(count)


def rules_of_thumb(space: SearchSpace) -> Array:
    """Points as an engineer would try them first: every scheme and part once over the switching frequencies.

    Variables without a rule stand in the middle of their range.
    """
    variables = space.variables
    middle = np.array([variable.unit(RULES_OF_THUMB.get(variable.name)) for variable in variables])
    carriers = [variable for variable in variables if variable.part == CARRIER and variable.scale == CATEGORY]
    schemes = max(round(variable.high) + 1 for variable in carriers)
    points = np.repeat(middle[None], schemes * FREQUENCY_STEPS, axis=0)
    points[:, space.axis["modulation"]] = (np.repeat(np.arange(schemes), FREQUENCY_STEPS) + 0.5) / schemes
    points[:, space.axis["switching_frequency"]] = np.tile(
        (np.arange(FREQUENCY_STEPS) + 0.5) / FREQUENCY_STEPS, schemes
    )
    for axis, variable in enumerate(variables):
        if variable.scale == CATEGORY and variable.part != CARRIER:
            choices = round(variable.high) + 1
            points[:, axis] = (np.arange(len(points)) % choices + 0.5) / choices
    return points
