"""The unit cube and its designs."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.prepared import prepared_inverter
from optimizer.space import CATEGORY, LINEAR, LOGARITHMIC, WHOLE, SearchSpace, Variable


@pytest.fixture(scope="module")
def space(rooftop):
    return SearchSpace(rooftop, prepared_inverter(rooftop), "SiC MOSFET")


@given(st.floats(0.0, 1.0))
def test_real_scales_reach_their_ends(unit):
    for scale in (LINEAR, LOGARITHMIC):
        variable = Variable("x", scale, 2.0, 32.0, "filter")
        assert variable.value(np.array(0.0)) == pytest.approx(2.0)
        assert variable.value(np.array(1.0)) == pytest.approx(32.0)
        assert 2.0 - 1e-9 <= variable.value(np.array(unit)) <= 32.0 + 1e-9
    assert Variable("x", LOGARITHMIC, 2.0, 32.0, "filter").value(np.array(0.5)) == pytest.approx(8.0)


@pytest.mark.parametrize(("scale", "low", "high"), [(CATEGORY, 0, 4), (WHOLE, 1, 3)])
def test_choices_get_equal_parts(scale, low, high):
    variable = Variable("x", scale, low, high, "filter")
    values = variable.value((np.arange(6000) + 0.5) / 6000)
    choices, counts = np.unique(values, return_counts=True)
    assert choices.tolist() == list(range(low, high + 1))
    assert np.ptp(counts) == 0


@given(st.integers(0, 2**32 - 1))
def test_repair_is_idempotent_and_changes_no_design(space, seed):
    points = np.random.default_rng(seed).normal(0.5, 0.5, (20, len(space.variables)))
    once = space.repaired(points)
    np.testing.assert_array_equal(space.repaired(once), once)
    first, second = space.designs(once), space.designs(space.repaired(np.clip(points, 0.0, 1.0)))
    np.testing.assert_array_equal(first.switching_frequency_hz, second.switching_frequency_hz)
    np.testing.assert_array_equal(first.inverter_inductor.turns, second.inverter_inductor.turns)


def test_equal_designs_are_equal_points(space):
    """Two points that differ only within one part of a category become one point."""
    point = np.full((2, len(space.variables)), 0.5)
    point[1, space.axis["modulation"]] += 0.01
    repaired = space.repaired(point)
    np.testing.assert_array_equal(repaired[0], repaired[1])


def test_designs_keep_the_asked_ripple(space, rooftop):
    points = space.repaired(np.random.default_rng(2).random((300, len(space.variables))))
    result = space.inverter.evaluate(space.designs(points))
    asked = space.variables[space.axis["ripple"]].value(points[:, space.axis["ripple"]])
    # the filter's voltage drop moves the modulation index, and with it the greatest ripple, by a few per cent
    np.testing.assert_allclose(result.details["ripple_share"], asked, rtol=0.05)


def test_only_devices_of_the_class_that_bear_the_voltage(space):
    catalog = space.inverter.catalog
    for index in space.devices:
        device = catalog.devices[index]
        assert device.device_class == "SiC MOSFET"
        assert device.voltage_rating_v * device.voltage_use_limit >= 450.0
