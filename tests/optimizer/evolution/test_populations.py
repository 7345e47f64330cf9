"""The search: deterministic, whatever the number of workers, and its archive holds what it says."""

import moocore
import numpy as np
import pytest

from optimizer.evolution.concept_search import normalised_hypervolume, search_concept
from optimizer.evolution.populations import search
from optimizer.evolution.problem import ClassProblem
from optimizer.objectives import OBJECTIVES, margins_of, requirements_of
from optimizer.prepared import prepared_inverter
from optimizer.space import SearchSpace


@pytest.fixture(scope="module")
def tiny(rooftop):
    return rooftop.with_effort(20, 12)


def test_same_seed_same_result_whatever_the_workers(tiny):
    alone, beside = (search(tiny, seed=5, workers=count) for count in (1, 2))
    for first, second in zip(alone.classes, beside.classes, strict=True):
        assert first.concept == second.concept
        np.testing.assert_array_equal(first.points, second.points)
        np.testing.assert_array_equal(first.objectives, second.objectives)
        assert first.hypervolume == second.hypervolume


def test_global_random_state_does_not_matter(tiny):
    np.random.seed(1)  # noqa: NPY002
    concept = tiny.concepts[tiny.concept_names.index("SiC MOSFET")]
    first = search_concept(tiny, concept, 5)
    np.random.seed(99)  # noqa: NPY002
    second = search_concept(tiny, concept, 5)
    np.testing.assert_array_equal(first.points, second.points)


def test_another_seed_gives_another_result(tiny):
    concept = tiny.concepts[tiny.concept_names.index("SiC MOSFET")]
    first, second = (search_concept(tiny, concept, seed) for seed in (5, 6))
    assert first.points.shape != second.points.shape or not np.array_equal(first.points, second.points)


def test_classes_of_one_seed_start_from_different_points(small_search):
    firsts = [found.points[0] for found in small_search.classes if len(found.points)]
    assert len({row.tobytes() for row in firsts}) == len(firsts)


def test_every_evaluation_is_counted(small_search):
    for found in small_search.classes:
        assert 40 * (16 + 39) <= found.evaluations <= 40 * (16 + 40)
        assert found.hypervolume[-1][0] == found.evaluations


def test_archived_candidates_are_feasible_and_give_their_objectives_again(small_search):
    inverter = prepared_inverter(small_search.study)
    for found in small_search.classes:
        space = SearchSpace(small_search.study, inverter, found.concept.device_class)
        rows = np.arange(0, len(found.points), 17)
        result = inverter.evaluate(space.designs(found.points[rows]))
        chosen = [OBJECTIVES[name] for name in small_search.study.objectives]
        again = np.stack([objective.read(result) for objective in chosen], axis=-1)
        np.testing.assert_allclose(again, found.objectives[rows], rtol=1e-10)
        assert np.all(margins_of(requirements_of(small_search.study.at_most, result)) >= 0.0)


def test_progress_is_reported_for_every_class(tiny):
    seen = []
    search(tiny, seed=1, workers=1, report=seen.append)
    assert {entry.concept for entry in seen} == set(tiny.concept_names)
    assert max(entry.evaluations for entry in seen) >= 20 * (16 + 11)


def test_hypervolume_grows_with_more_candidates(small_search):
    found = max(small_search.classes, key=lambda entry: len(entry.points))
    half = normalised_hypervolume(small_search.study, found.objectives[: len(found.objectives) // 2])
    assert 0.0 < half <= normalised_hypervolume(small_search.study, found.objectives) < 1.0


def test_search_beats_random_candidates_of_the_same_number(small_search):
    """NSGA-II must find more than as many random points: otherwise it does nothing."""
    study, inverter = small_search.study, prepared_inverter(small_search.study)
    found = next(entry for entry in small_search.classes if entry.concept.name == "SiC MOSFET")
    problem = ClassProblem(SearchSpace(study, inverter, found.concept.device_class))
    points = problem.space.repaired(np.random.default_rng(1).random((found.evaluations, problem.n_var)))
    problem.assess(points)
    random_objectives = problem.archive.feasible()[1]
    assert normalised_hypervolume(study, found.objectives) > 1.05 * normalised_hypervolume(
        study, random_objectives
    )


def test_archive_front_is_at_least_as_good_as_the_last_population(small_search):
    for found in small_search.classes:
        archived = found.objectives[moocore.is_nondominated(found.objectives)]
        assert normalised_hypervolume(small_search.study, archived) >= found.hypervolume[-1][1] - 1e-12
