"""What a population begins with."""

import numpy as np
from scipy.stats import qmc

from models.waveforms.bridges import BRIDGES
from optimizer.evolution.screening import (
    RULES_OF_THUMB,
    SCREENED_PER_PLACE,
    first_points,
    quasi_random,
    rules_of_thumb,
)
from optimizer.prepared import search_space
from optimizer.space import CATEGORY


def space_of(study, name="SiC MOSFET"):
    return search_space(study, study.concepts[study.concept_names.index(name)])


def test_first_points_are_valid_and_fill_the_cube_evenly(rooftop):
    space = space_of(rooftop)
    points = first_points(np.random.default_rng(1), space, 64)
    np.testing.assert_array_equal(points, space.repaired(points))
    assert len(points) >= SCREENED_PER_PLACE * 64
    random = space.repaired(np.random.default_rng(1).random(points.shape))
    assert qmc.discrepancy(points[-1024:]) < qmc.discrepancy(random[-1024:])


def test_quasi_random_blocks_are_one_sequence():
    whole = quasi_random(5, 0, 96, 7)
    parts = np.concatenate([quasi_random(5, 0, 40, 7), quasi_random(5, 40, 56, 7)])
    np.testing.assert_array_equal(whole, parts)


def test_rules_of_thumb_are_what_they_say(rooftop):
    space = space_of(rooftop)
    designs = space.designs(space.repaired(rules_of_thumb(space)))
    schemes = BRIDGES[rooftop.specification.bridge].modulations
    assert set(designs.modulation) == {
        place for place, scheme in enumerate(schemes) if scheme.name in rooftop.search.modulations
    }
    assert np.all(designs.parallel == 1)
    np.testing.assert_allclose(
        designs.grid_inductance_h / designs.inverter_inductance_h, RULES_OF_THUMB["grid_inductance_ratio"]
    )
    base = rooftop.specification.base_impedance_ohm * 2.0 * np.pi * rooftop.specification.line_frequency_hz
    np.testing.assert_allclose(
        designs.filter_capacitance_f * base, RULES_OF_THUMB["filter_capacitance_share"]
    )


def test_every_choice_is_tried_among_the_rules_of_thumb(rooftop):
    space = space_of(rooftop)
    points = space.repaired(rules_of_thumb(space))
    for axis, variable in enumerate(space.variables):
        if variable.scale == CATEGORY:
            tried = set(variable.value(points[:, axis]).astype(int))
            assert tried == set(range(min(variable.parts, len(points))))
