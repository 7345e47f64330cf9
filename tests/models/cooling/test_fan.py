"""Fans: the curve's ends, parallel fans, the working point, density."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.cooling.fan import Fan, fan_input_power, fan_pressure, parallel_pressure, working_flow

ONE = np.array(1.0)


def test_curve_passes_its_ends():
    free, greatest = np.array(0.05), np.array(85.0)
    assert fan_pressure(np.array(0.0), free, greatest, ONE) == 85.0
    assert fan_pressure(free, free, greatest, ONE) == 0.0
    assert fan_pressure(0.5 * free, free, greatest, ONE) == pytest.approx(42.5)
    assert fan_pressure(0.5 * free, free, greatest, ONE, shape=2.0) == pytest.approx(0.75 * 85.0)


@given(st.integers(1, 8), st.floats(0.0, 1.0), st.floats(0.6, 1.2))
def test_fans_side_by_side_add_their_flows(count, share, ratio):
    free, greatest = np.array(0.05), np.array(85.0)
    alone = fan_pressure(share * free, free, greatest, np.array(ratio))
    together = parallel_pressure(count * share * free, np.array(count), free, greatest, np.array(ratio))
    assert together == pytest.approx(alone, abs=1e-9)


@given(st.floats(1e-3, 0.2), st.floats(20.0, 1000.0), st.floats(0.0, 6.0), st.floats(0.5, 1.2))
def test_working_point_of_a_square_law(free, greatest, exponent, ratio):
    # p0 r (1 - x) = c x^2 has the root x = (sqrt(1 + 4 c/(p0 r)) - 1)/(2 c/(p0 r))
    stiffness = greatest * 10.0 ** (exponent - 3.0)
    drop = stiffness / (greatest * ratio)
    expected = 2.0 / (np.sqrt(1.0 + 4.0 * drop) + 1.0)
    flow = working_flow(
        np.array(free), np.array(greatest), np.array(ratio), lambda q: stiffness * (q / free) ** 2
    )
    assert flow / free == pytest.approx(expected, abs=1e-7)


@given(st.floats(0.3, 3.0), st.floats(1.01, 3.0))
def test_stiffer_duct_takes_less_flow(stiffness, factor):
    free, greatest = np.array([0.02, 0.1]), np.array([100.0, 100.0])
    soft = working_flow(free, greatest, ONE, lambda q: 100.0 * stiffness * (q / free) ** 1.5)
    stiff = working_flow(free, greatest, ONE, lambda q: 100.0 * factor * stiffness * (q / free) ** 1.5)
    assert np.all(stiff < soft)


def test_all_candidates_at_once_equal_one_by_one():
    free, greatest = np.array([0.01, 0.03, 0.1]), np.array([900.0, 80.0, 200.0])
    stiffness = np.array([1e7, 1e5, 3e4])
    together = working_flow(free, greatest, ONE, lambda q: stiffness * q**2)
    for i in range(3):
        alone = working_flow(free[i], greatest[i], ONE, lambda q, i=i: stiffness[i] * q**2)
        assert together[i] == alone


def test_thin_air_needs_less_power():
    assert fan_input_power(np.array(6.0), np.array(0.8)) == pytest.approx(4.8)


@pytest.mark.parametrize(
    ("field", "value"), [("face_width_m", 0.0), ("free_flow_m3_per_s", -1.0), ("life_l10_h", float("nan"))]
)
def test_bad_fan(field, value):
    good = {
        "name": "x",
        "face_width_m": 0.04,
        "depth_m": 0.028,
        "free_flow_m3_per_s": 0.006,
        "greatest_pressure_pa": 190.0,
        "input_power_w": 2.0,
        "life_l10_h": 4e4,
        "price": 4.0,
    }
    assert Fan(**good).name == "x"
    with pytest.raises(ValueError, match=f"fan 'x': {field} must be above 0, got"):
        Fan(**{**good, field: value})
    with pytest.raises(ValueError, match="fan 'x': price must not be negative, got -1"):
        Fan(**{**good, "price": -1.0})
