"""The audit: its share by hand, what it finds on a poor front, and a run that takes it in."""

import json
import shutil

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.audit.audit import audit, audit_concept, hypervolume_share
from optimizer.audit.audited_run import audit_run, stored_points, taken_in
from optimizer.errors import InputError
from optimizer.runs.fronts import distinct_rows
from optimizer.runs.stored_run import read_run


def test_share_by_hand():
    """Two objectives, joint front (0, 1), (0.5, 0.5), (1, 0) in the box to 1.1.

    The rectangles: (0, 1) covers 1.1 x 0.1 = 0.11; (0.5, 0.5) covers 0.6 x 0.6 = 0.36, of which 0.6 x 0.1 is
    covered already; (1, 0) covers 0.1 x 1.1, of which 0.1 x 0.6 is covered. 0.11 + 0.30 + 0.05 = 0.46.
    """
    joint = np.array([[0.0, 1.0], [0.5, 0.5], [1.0, 0.0]])
    without_middle = 0.11 + 0.11 - 0.01
    assert hypervolume_share(joint[[0, 2]], joint) == pytest.approx(without_middle / 0.46)
    assert hypervolume_share(joint, joint) == 1.0
    assert hypervolume_share(joint[:0], joint) == 0.0


@given(st.integers(0, 2**32 - 1), st.floats(0.1, 1e6), st.floats(-10.0, 10.0))
def test_share_does_not_depend_on_units_and_grows_with_the_front(seed, scale, shift):
    rng = np.random.default_rng(seed)
    angle = np.sort(rng.random(12)) * np.pi / 2.0
    joint = 1.0 - np.stack([np.cos(angle), np.sin(angle)], axis=-1)
    few, more = joint[::3], joint[::2]
    both = np.unique(np.concatenate([few, more]), axis=0)
    share = hypervolume_share(few, joint)
    assert share <= hypervolume_share(both, joint) + 1e-12 <= 1.0 + 2e-12
    assert hypervolume_share(few * scale + shift, joint * scale + shift) == pytest.approx(share, rel=1e-6)


@given(st.integers(0, 2**32 - 1), st.sampled_from([0.002, 0.02, 0.1]))
def test_what_is_left_out_of_a_front_has_a_kept_design_near_it(seed, resolution):
    rng = np.random.default_rng(seed)
    front = rng.dirichlet(np.ones(3), 300)
    kept = distinct_rows(front, resolution)
    low, spread = front.min(0), np.ptp(front, axis=0)
    scaled = (front - low) / spread
    worse_by = (scaled[kept][None] - scaled[:, None]).max(-1).min(-1)
    assert worse_by.max() <= 2.0 * resolution  # a box, and the box that dominates it
    assert set(front.argmin(0)) <= set(kept.tolist())
    assert len(distinct_rows(front, 0.0)) == 300


def test_a_poor_front_is_found_out_and_the_same_seed_gives_the_same(small_search):
    study = small_search.study
    found = next(entry for entry in small_search.classes if entry.concept.name == "SiC MOSFET")
    poor = found.points[np.argsort(found.objectives[:, 0])[-30:]]
    one = audit_concept(study, found.concept, poor, 6000, 3)
    assert one.evaluations >= 6000
    assert one.share < 0.9
    assert one.beaten > 0
    again = audit(study, {found.concept.name: poor}, designs=6000, seed=3, workers=1)[0]
    np.testing.assert_array_equal(one.objectives, again.objectives)
    assert one.share == again.share


def test_joint_designs_are_feasible_and_none_dominates_another(small_search):
    study = small_search.study
    found = next(entry for entry in small_search.classes if entry.concept.name == "SiC MOSFET")
    one = audit_concept(study, found.concept, found.points, 4000, 3)
    better = (one.objectives[:, None] <= one.objectives[None]).all(-1) & (
        one.objectives[:, None] < one.objectives[None]
    ).any(-1)
    assert not better.any()


def test_a_run_takes_in_what_its_audit_found(stored, tmp_path):
    folder = tmp_path / "run"
    shutil.copytree(stored.folder, folder)
    before = read_run(folder)
    audited = audit_run(folder, designs=20_000, seed=2, workers=1)
    assert min(one.share for one in audited.found) < 1.0
    taken_in(audited)
    after = read_run(folder)
    assert json.loads((folder / "run.json").read_text())["audit"]
    for name in ("loss_weighted_percent", "volume_l", "price"):
        assert after.table[name].min() <= before.table[name].min() + 1e-9
    again = audit_run(folder, designs=2_000, seed=2, workers=1)
    for one, other in zip(audited.found, again.found, strict=True):
        assert other.share > one.share
    evaluated = pd.read_csv(folder / "evaluated.csv.gz")
    assert len(evaluated) > len(pd.read_csv(stored.folder / "evaluated.csv.gz"))


def test_places_that_do_not_fit_are_refused(stored, tmp_path):
    folder = tmp_path / "run"
    shutil.copytree(stored.folder, folder)
    (folder / "points.npz").write_bytes(b"no arrays")
    with pytest.raises(InputError, match="a file that cannot be read"):
        stored_points(read_run(folder))
    (folder / "points.npz").unlink()
    with pytest.raises(InputError, match="no such file"):
        stored_points(read_run(folder))
