"""How new candidates come from a population: parents that are alike, whole parts exchanged, small moves.

A candidate is a set of parts (carrier, switches, filter, each inductor, heatsink) whose variables only make
sense together, so that half of the children take whole parts from either parent. Parents that stand near each
other on the front have parts that fit: on the rooftop study mating with a neighbour gains 0.4 points of
hypervolume share at 100,000 candidates, exchange of whole parts 0.6, differential moves 0.1.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

NEIGHBOUR_SHARE = 0.8  # of children whose second parent stands near the first in the objectives
NEIGHBOUR_TRIES = 20  # members among which the nearest is taken
WHOLE_PARTS_SHARE, DIFFERENTIAL_SHARE = 0.5, 0.3  # of children; the rest by simulated binary crossover
REDRAWN_PART_SHARE = 0.05  # of children that get one part drawn anew
CROSSOVER_PROBABILITY = 0.9
CROSSOVER_INDEX = 12.0
MUTATED_AXES = 0.6  # mean number of axes a child changes by mutation
MUTATION_INDEX = 5.0
DIFFERENTIAL_FACTOR = (0.2, 0.9)
DIFFERENTIAL_RATES = (0.1, 0.3, 0.9)  # share of axes that a differential move takes


@dataclass(frozen=True)
class Axes:
    """What the axes of the unit cube are.

    Attributes:
        part: number of the part each axis belongs to (k,).
        redrawn: true where a mutation draws anew instead of moving a little: categories, whole numbers (k,).
        stratum: the axis of the choice that decides most, and so must not die out early; None for none.
    """

    part: Ints
    redrawn: NDArray[np.bool_]
    stratum: int | None = None

    @property
    def parts(self) -> int:
        """Number of parts [-]."""
        return int(self.part.max()) + 1


@dataclass(frozen=True)
class Members:
    """A population: points (n, k), objectives (n, m), violation, rank and crowding distance (n,)."""

    points: Array
    objectives: Array
    violation: Array
    rank: Array
    crowding: Array

    def __len__(self) -> int:
        return len(self.points)


def offspring(rng: np.random.Generator, members: Members, axes: Axes, count: int) -> Array:
    """Points of `count` new candidates (count, k), not yet repaired.

    Args:
        rng: random numbers.
        members: the population.
        axes: parts and kinds of the axes.
        count: how many [-].
    """
    mothers = tournament(rng, count, members)
    fathers = np.where(
        rng.random(count) < NEIGHBOUR_SHARE,
        neighbours(rng, members.objectives, mothers),
        tournament(rng, count, members),
    )
    first, second = members.points[mothers], members.points[fathers]
    kind = rng.random((count, 1))
    children = np.where(
        kind < WHOLE_PARTS_SHARE,
        exchange(rng, first, second, axes),
        np.where(
            kind < WHOLE_PARTS_SHARE + DIFFERENTIAL_SHARE,
            differential(rng, first, members.points, axes),
            crossover(rng, first, second),
        ),
    )
    return redrawn_part(rng, mutation(rng, children, axes.redrawn), axes)


def tournament(rng: np.random.Generator, count: int, members: Members) -> Ints:
    """Winners of binary tournaments (count,): less violation, then lower rank, then more crowding distance.

    Source: Deb et al. (2002).
    """
    violation, rank, crowding = members.violation, members.rank, members.crowding
    first, second = rng.integers(len(members), size=(2, count))
    better = np.where(crowding[second] > crowding[first], second, first)
    better = np.where(rank[second] < rank[first], second, np.where(rank[first] < rank[second], first, better))
    return np.where(
        violation[second] < violation[first],
        second,
        np.where(violation[first] < violation[second], first, better),
    )


def neighbours(rng: np.random.Generator, objectives: Array, of: Ints) -> Ints:
    """For each given member the nearest of NEIGHBOUR_TRIES others in objectives scaled by their ranges
    (count,).
    """
    among = rng.integers(len(objectives), size=(len(of), NEIGHBOUR_TRIES))
    among = np.where(among == of[:, None], (among + 1) % len(objectives), among)
    spread = np.ptp(objectives, axis=0)
    scaled = objectives / np.where(spread > 0.0, spread, 1.0)
    distance = np.abs(scaled[among] - scaled[of][:, None]).sum(-1)
    return np.take_along_axis(among, np.argmin(distance, axis=1)[:, None], axis=1)[:, 0]


def exchange(rng: np.random.Generator, mothers: Array, fathers: Array, axes: Axes) -> Array:
    """Children that take every whole part from either parent."""
    from_mother = rng.random((len(mothers), axes.parts)) < 0.5
    return np.where(from_mother[:, axes.part], mothers, fathers)


def differential(rng: np.random.Generator, mothers: Array, points: Array, axes: Axes) -> Array:
    """Mothers moved by a share of the difference of two members, on some of the continuous axes.

    Source: Storn & Price (1997).
    """
    count = len(mothers)
    one, other = rng.integers(len(points), size=(2, count))
    factor = rng.uniform(*DIFFERENTIAL_FACTOR, size=(count, 1))
    rate = rng.choice(DIFFERENTIAL_RATES, size=(count, 1))
    taken = (rng.random(mothers.shape) < rate) & ~axes.redrawn
    return np.where(taken, mothers + factor * (points[one] - points[other]), mothers)


def crossover(rng: np.random.Generator, mothers: Array, fathers: Array) -> Array:
    """Simulated binary crossover in [0, 1], one child a pair, each axis blended with probability one half.

    Source: Deb & Agrawal (1995).
    """
    spread = rng.random(mothers.shape)
    low = spread <= 0.5
    power = 1.0 / (CROSSOVER_INDEX + 1.0)
    beta = np.where(low, 2.0 * spread, 0.5 / np.maximum(1.0 - spread, 1e-12)) ** power
    side = np.where(rng.random(mothers.shape) < 0.5, 1.0, -1.0)
    blended = 0.5 * ((mothers + fathers) + side * beta * (mothers - fathers))
    active = rng.random((len(mothers), 1)) < CROSSOVER_PROBABILITY
    crossed = active & (rng.random(mothers.shape) < 0.5)
    return np.where(crossed, blended, mothers)


def mutation(rng: np.random.Generator, points: Array, redrawn: NDArray[np.bool_]) -> Array:
    """Polynomial mutation in [0, 1] of MUTATED_AXES axes a point; axes of distinct choices are drawn anew
    instead.

    Source: Deb & Agrawal (1999).
    """
    chosen = rng.random(points.shape) < MUTATED_AXES / points.shape[1]
    draw = rng.random(points.shape)
    power = 1.0 / (MUTATION_INDEX + 1.0)
    step = np.where(
        draw < 0.5, (2.0 * draw) ** power - 1.0, 1.0 - (2.0 * np.maximum(1.0 - draw, 0.0)) ** power
    )
    return np.where(chosen, np.where(redrawn, draw, points + step), points)


def redrawn_part(rng: np.random.Generator, points: Array, axes: Axes) -> Array:
    """Points of which some have one whole part drawn anew."""
    part = rng.integers(axes.parts, size=(len(points), 1))
    chosen = (rng.random((len(points), 1)) < REDRAWN_PART_SHARE) & (axes.part == part)
    return np.where(chosen, rng.random(points.shape), points)


def new_rows(points: Array, known: Array) -> Array:
    """Rows of `points` that are not among the known ones, each once, in their order."""
    both = np.ascontiguousarray(np.concatenate([known, points]))
    as_bytes = both.view(np.dtype((np.void, both.dtype.itemsize * both.shape[1]))).ravel()
    _, first = np.unique(as_bytes, return_index=True)
    first = np.sort(first[first >= len(known)])
    return both[first]
