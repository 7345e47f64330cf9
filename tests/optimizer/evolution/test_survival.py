"""Who survives: by the definitions of NSGA-II and NSGA-III, and with protected strata."""

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from optimizer.evolution.survival import (
    PROTECTED_SHARE,
    ReferenceSurvival,
    protected_survivors,
    survivors,
)


def test_feasible_survive_before_infeasible_and_least_violating_next():
    objectives = np.array([[9.0, 9.0], [0.0, 0.0], [1.0, 1.0], [2.0, 2.0]])
    violation = np.array([0.0, 3.0, 1.0, 2.0])
    kept, rank, _ = survivors(objectives, violation, 3)
    assert kept.tolist() == [0, 2, 3]
    assert rank[0] == 0
    assert (rank[1:] > rank[0]).all()


def test_lower_ranks_survive_and_ends_of_a_front_stay():
    front = np.array([[0.0, 1.0], [0.25, 0.7], [0.5, 0.5], [1.0, 0.0]])
    worse = front + 2.0
    kept, rank, _ = survivors(np.concatenate([worse, front]), np.zeros(8), 4)
    assert sorted(kept) == [4, 5, 6, 7]
    assert (rank == 0).all()
    kept, _, _ = survivors(front, np.zeros(4), 2)
    assert sorted(kept) == [0, 3]


@given(st.integers(0, 2**32 - 1))
def test_every_stratum_keeps_its_share(seed):
    rng = np.random.default_rng(seed)
    stratum = np.repeat([0, 1, 2], 40)
    objectives = rng.random((120, 3)) + 10.0 * stratum[:, None]  # every one of the first beats all others
    violation = np.where(rng.random(120) < 0.3, rng.random(120), 0.0)
    kept, rank, _ = protected_survivors(objectives, violation, stratum, 60)
    assert len(set(kept.tolist())) == 60
    counts = np.bincount(stratum[kept], minlength=3)
    assert counts.min() >= int(PROTECTED_SHARE * 60 / 3)
    for number in range(3):
        assert rank[stratum[kept] == number].min() == 0


def test_reference_directions_spread_where_many_crowd_one_corner():
    """Of 2,000 points of a front in four objectives, nine in ten in one corner, the survivors cover all
    directions (Deb & Jain 2014): each corner of the simplex is kept, and the crowd is thinned.
    """
    rng = np.random.default_rng(1)
    spread = rng.dirichlet(np.ones(4), 200)
    crowd = rng.dirichlet([60.0, 1.0, 1.0, 1.0], 1800)
    front = np.concatenate([spread, crowd, np.eye(4)])  # a simplex: nothing dominates anything
    survive = ReferenceSurvival(4, 120)
    kept, rank, _ = survive(front, np.zeros(len(front)), 120)
    assert len(set(kept.tolist())) == 120
    assert (rank == 0).all()
    assert (front[kept].max(0) > 0.999).all()
    assert (kept >= 200).mean() < 0.4


def test_reference_directions_put_lower_ranks_first():
    rng = np.random.default_rng(2)
    front = rng.dirichlet(np.ones(4), 30)
    objectives = np.concatenate([front + 1.0, front])
    violation = np.concatenate([np.zeros(60)])
    kept, _, _ = ReferenceSurvival(4, 40)(objectives, violation, 40)
    assert set(range(30, 60)) <= set(kept.tolist())
    violation = np.concatenate([np.zeros(30), np.arange(1.0, 31.0)])
    kept, _, _ = ReferenceSurvival(4, 40)(objectives, violation, 40)
    assert set(kept.tolist()) == set(range(40))
