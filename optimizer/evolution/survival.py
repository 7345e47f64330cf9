"""Who survives a generation: by rank and crowding distance (NSGA-II) or reference directions (NSGA-III)."""

from __future__ import annotations

import numpy as np
from moocore import pareto_rank
from numpy.typing import NDArray
from pymoo.algorithms.moo.nsga3 import HyperplaneNormalization, associate_to_niches, calc_niche_count
from pymoo.operators.survival.rank_and_crowding.metrics import calc_crowding_distance
from pymoo.util.ref_dirs import get_reference_directions

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

PROTECTED_SHARE = 0.5
"""Share of the places that is divided evenly among strata while they are protected."""


def survivors(objectives: Array, violation: Array, count: int) -> tuple[Ints, Array, Array]:
    """Choose `count` candidates: feasible ones by rank and crowding distance, then the least violating ones.

    Returns:
        Their rows, their ranks and their crowding distances.

    Source: Deb et al. (2002).
    """
    feasible = np.flatnonzero(violation <= 0.0)
    rank = np.full(len(violation), len(violation), dtype=np.int64)
    crowding = np.zeros(len(violation))
    if len(feasible):
        rank[feasible] = pareto_rank(objectives[feasible])
        for level in range(rank[feasible].max() + 1):
            front = feasible[rank[feasible] == level]
            crowding[front] = calc_crowding_distance(objectives[front])
            if (rank[feasible] <= level).sum() >= count:
                break
    order = np.lexsort((-crowding[feasible], rank[feasible]))
    kept = np.concatenate([feasible[order], least_violating(violation)])[:count]
    return kept, rank[kept], crowding[kept]


def least_violating(violation: Array) -> Ints:
    """Rows of candidates that violate something, the least first."""
    others = np.flatnonzero(violation > 0.0)
    return others[np.argsort(violation[others], kind="stable")]


class ReferenceSurvival:
    """Survival by reference directions: a well-spread population for four and more objectives.

    Ranks fill the population; the rank that no longer fits gives those whose niches are least taken, the
    nearest to their direction first. Normalisation and association are pymoo's functions.

    Source: Deb & Jain (2014).

    Args:
        objectives: their number [-].
        count: population [-]; there are at most as many directions (Das & Dennis 1998).
    """

    def __init__(self, objectives: int, count: int) -> None:
        partitions = 1
        while len(get_reference_directions("das-dennis", objectives, n_partitions=partitions + 1)) <= count:
            partitions += 1
        self.directions = get_reference_directions("das-dennis", objectives, n_partitions=partitions)
        self.normalisation = HyperplaneNormalization(objectives)

    def __call__(self, objectives: Array, violation: Array, count: int) -> tuple[Ints, Array, Array]:
        """As `survivors`; the crowding distance is the negative number of others in the niche."""
        feasible = np.flatnonzero(violation <= 0.0)
        rank = np.full(len(violation), len(violation), dtype=np.int64)
        crowding = np.zeros(len(violation))
        chosen = feasible
        if len(feasible):
            values = objectives[feasible]
            rank[feasible] = pareto_rank(values)
            self.normalisation.update(values, nds=np.flatnonzero(rank[feasible] == 0))
            niche, distance, _ = associate_to_niches(
                values, self.directions, self.normalisation.ideal_point, self.normalisation.nadir_point
            )
            chosen = feasible[self._places(rank[feasible], niche, distance, count)]
            crowding[feasible] = -calc_niche_count(len(self.directions), niche)[niche].astype(float)
        kept = np.concatenate([chosen, least_violating(violation)])[:count]
        return kept, rank[kept], crowding[kept]

    def _places(self, rank: Ints, niche: Ints, distance: Array, count: int) -> Ints:
        """Rows of feasible candidates in the order of survival."""
        if len(rank) <= count:
            return np.argsort(rank, kind="stable")
        last = np.sort(rank)[count - 1]
        sure, open_places = np.flatnonzero(rank < last), np.flatnonzero(rank == last)
        taken = calc_niche_count(len(self.directions), niche[sure])
        order = open_places[np.lexsort((distance[open_places], niche[open_places]))]
        first_of_niche = np.searchsorted(niche[order], niche[order], side="left")
        turn = taken[niche[order]] + np.arange(len(order)) - first_of_niche
        return np.concatenate([sure, order[np.lexsort((distance[order], turn))]])


def protected_survivors(
    objectives: Array, violation: Array, stratum: Ints, count: int
) -> tuple[Ints, Array, Array]:
    """Survivors of which every stratum keeps some, ranked within their stratum.

    PROTECTED_SHARE of the places is divided evenly among the strata, the others go to the best of all. So no
    choice of great consequence dies out before what belongs to it is tuned.

    Args:
        objectives, violation, count: as in `survivors`.
        stratum: number of each candidate's stratum (n,).
    """
    strata = [np.flatnonzero(stratum == number) for number in np.unique(stratum)]
    quota = int(PROTECTED_SHARE * count / len(strata))
    rank, crowding = np.zeros(len(violation), dtype=np.int64), np.zeros(len(violation))
    first = np.zeros(len(violation), dtype=bool)
    for rows in strata:
        kept, ranks, distances = survivors(objectives[rows], violation[rows], len(rows))
        rank[rows[kept]], crowding[rows[kept]] = ranks, distances
        first[rows[kept[:quota]]] = True
    best = survivors(objectives, violation, len(violation))[0]
    chosen = np.concatenate([np.flatnonzero(first), best[~first[best]]])[:count]
    return chosen, rank[chosen], crowding[chosen]
