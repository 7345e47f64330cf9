"""Several equal sinks: their columns are n of one, no count does better, and one stays where one does."""

import numpy as np
import pytest
from test_sink_curve import COLUMNS, FORCED

from models.cooling import shared_by_several
from models.cooling.plate_fin import PlateFin

SHARED = shared_by_several(FORCED, 4)


def test_columns_are_those_of_all_sinks_together():
    place = FORCED.index(SHARED.thermal_resistance_k_per_w * SHARED.sink_count)
    for name in COLUMNS:
        np.testing.assert_allclose(getattr(SHARED, name), SHARED.sink_count * getattr(FORCED, name)[place])
    geometry = SHARED.geometry
    assert isinstance(geometry, PlateFin)
    np.testing.assert_allclose(SHARED.sink_count * geometry.base_area, SHARED.base_area_m2)
    assert np.all(SHARED.fan_count % SHARED.sink_count == 0)


def test_a_share_of_the_heat_meets_the_resistance_asked_for():
    """Each of n sinks carries P/n: its rise is that of P in the resistance of all."""
    place = FORCED.index(SHARED.thermal_resistance_k_per_w * SHARED.sink_count)
    each = FORCED.thermal_resistance_k_per_w[place] / SHARED.sink_count
    assert np.all(each <= SHARED.thermal_resistance_k_per_w * (1.0 + 1e-6))


def test_no_other_count_is_smaller():
    grid = SHARED.thermal_resistance_k_per_w
    for count in range(1, 5):
        other = FORCED.at(grid * count)
        built = count * FORCED.volume_m3[FORCED.index(grid * count)]
        assert np.all(SHARED.volume_m3[other.available] <= built[other.available] * (1.0 + 1e-9))


def test_one_sink_stays_where_heat_is_little_and_several_share_where_it_is_much():
    assert np.all(SHARED.sink_count[SHARED.thermal_resistance_k_per_w > 1.0] == 1)
    assert np.all(SHARED.sink_count[-10:] == 4)
    assert np.all(np.diff(SHARED.volume_m3) >= 0.0)
    reach = FORCED.thermal_resistance_k_per_w[-1] / SHARED.thermal_resistance_k_per_w[-1]
    assert reach == pytest.approx(4.0, rel=0.03)


def test_one_at_most_is_the_curve_itself():
    alone = shared_by_several(FORCED, 1)
    for name in COLUMNS:
        np.testing.assert_array_equal(getattr(alone, name), getattr(FORCED, name))


def test_count_is_read_with_the_point():
    assert SHARED.at(np.array([2.0, SHARED.thermal_resistance_k_per_w[-1]])).count.tolist() == [1, 4]
