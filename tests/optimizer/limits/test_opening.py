"""What would open a space without feasible designs, against laws that no design can get round."""

import math
from dataclasses import replace

import numpy as np
import pytest

from optimizer.errors import NothingFeasible
from optimizer.evolution.concept_search import search_concept
from optimizer.limits.opening import shortfall
from optimizer.prepared import search_space
from optimizer.runs.run import run_search
from optimizer.study.values import SPECIFICATION, own_limit, range_end, space_of

VALUES = {value.key: value for value in SPECIFICATION}
LINEAR_RANGE_USED = 0.98
"""The shipped rule modulation_reserve leaves 2 % of the linear range, which is M = 1 for a full bridge."""


@pytest.fixture(scope="module")
def low_dc(rooftop):
    """The rooftop study from 300 V, below the peak of the ac voltage: nothing can be feasible."""
    concept = rooftop.concepts[2]
    study = VALUES["application.dc_voltage.min"].put(rooftop, 300.0)
    space = space_of(search_space(rooftop, concept), study)
    return space, shortfall(space, concept, space.repaired(_middle(space))[0])


def _middle(space):
    return np.full((1, len(space.variables)), 0.5)


def test_the_miss_is_the_modulation_index(low_dc):
    _, found = low_dc
    assert [miss.name for miss in found.misses] == ["modulation index"]
    assert found.misses[0].value >= math.sqrt(2.0) * 230.0 / 300.0  # M = peak over dc voltage


def test_the_dc_voltage_needed_is_that_of_the_peak(low_dc):
    """M = sqrt(2) V_ac / V_dc plus a few per cent that the filter drops at the least power factor."""
    _, found = low_dc
    needed = {one.key: one.needed for one in found.openings}
    least = math.sqrt(2.0) * 230.0 / LINEAR_RANGE_USED
    assert least <= needed["application.dc_voltage.min"] <= 1.03 * least
    assert needed["application.ac_voltage"] == pytest.approx(
        230.0 * 300.0 / needed["application.dc_voltage.min"], rel=0.01
    )


def test_a_search_of_the_changed_study_finds_designs_and_one_of_a_lesser_change_does_not(low_dc, monkeypatch):
    space, found = low_dc
    value = VALUES["application.dc_voltage.min"]
    needed = next(one.needed for one in found.openings if one.key == value.key)
    for dc, feasible in ((needed, True), (300.0 + 0.9 * (needed - 300.0), False)):
        changed = space_of(space, value.put(space.study, dc)).study.with_effort(60, 20)
        monkeypatch.setattr(
            "optimizer.evolution.concept_search.search_space", lambda study, concept: space_of(space, study)
        )
        result = search_concept(changed, found.concept, 1)
        assert bool(len(result.points)) is feasible


def test_the_same_seed_gives_the_same_answer(low_dc):
    space, found = low_dc
    again = shortfall(space, found.concept, space.repaired(_middle(space))[0])
    assert again.lines() == found.lines()


def test_a_limit_of_one_s_own_is_opened_by_itself(rooftop):
    concept = rooftop.concepts[2]
    study = own_limit("price").put(rooftop, 100.0)
    space = space_of(search_space(rooftop, concept), study)
    found = shortfall(space, concept, space.repaired(_middle(space))[0])
    needed = {one.key: one.needed for one in found.openings}
    assert 100.0 < needed["objectives.at_most.price"] < 150.0
    assert any("objectives.at_most.price: 100 -> " in line for line in found.lines())


def test_an_end_of_a_search_range_is_moved_where_it_is_in_the_way(rooftop):
    """Weighted losses above 100 kHz are those of switching: from 150 kHz on they break 1.5 %."""
    concept = rooftop.concepts[2]
    study = range_end("switching_frequency", "min").put(rooftop, 150e3)
    study = replace(study, at_most={"weighted loss": 0.015})
    space = space_of(search_space(rooftop, concept), study)
    found = shortfall(space, concept, space.repaired(_middle(space))[0])
    assert "weighted loss wanted" in [miss.name for miss in found.misses]
    needed = {one.key: one.needed for one in found.openings}
    assert 8e3 < needed["search.ranges.switching_frequency.min"] < 150e3


def test_the_command_s_error_says_what_would_open_the_space(rooftop, tmp_path):
    study = replace(rooftop.with_effort(24, 4), at_most={"volume": 1e-3})
    study = replace(study, search=replace(study.search, device_classes=("SiC MOSFET",)))
    with pytest.raises(NothingFeasible) as caught:
        run_search(study, tmp_path / "run", seed=1, workers=1)
    text = str(caught.value)
    assert caught.value.exit_code == 1
    assert "objectives.at_most.volume: 1 l -> " in text
    assert not (tmp_path / "run").exists()
