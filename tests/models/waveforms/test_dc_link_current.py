"""Dc-link current laws: their limits and their two roads."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.waveforms.bridges import BRIDGES, FULL_BRIDGE
from models.waveforms.dc_link_current import (
    rail_moments,
    rail_rms,
    single_phase_double_frequency_rms,
    three_phase_rms,
)

INDEX, LAG = st.floats(0.01, 1.0), st.floats(-1.57, 1.57)
UNIPOLAR = FULL_BRIDGE.scheme("unipolar")


@given(INDEX, LAG)
def test_lag_and_lead_are_alike(index: float, lag: float) -> None:
    m = np.array(index)
    assert three_phase_rms(m, np.array(lag)) == pytest.approx(three_phase_rms(m, np.array(-lag)))


@given(INDEX, LAG)
def test_unipolar_closed_form(index: float, lag: float) -> None:
    """With the bridge state on for |m| the mean square is M/pi (1 + cos(2 phi)/3), the mean M cos(phi)/2."""
    slow, fast = rail_moments(FULL_BRIDGE, UNIPOLAR, np.array([index]))
    whole = rail_rms(slow + fast, np.array([lag]))[0] ** 2
    mean = 0.5 * index * np.cos(lag)
    assert whole == pytest.approx(index / np.pi * (1.0 + np.cos(2.0 * lag) / 3.0) - mean**2, rel=1e-3)


@given(INDEX, LAG)
def test_double_frequency_part_of_a_full_bridge(index: float, lag: float) -> None:
    slow, _ = rail_moments(FULL_BRIDGE, UNIPOLAR, np.array([index]))
    expected = single_phase_double_frequency_rms(np.array(index))
    assert rail_rms(slow, np.array([lag]))[0] == pytest.approx(float(expected), rel=1e-6)


@pytest.mark.parametrize("bridge", BRIDGES.values(), ids=BRIDGES)
def test_moments_are_those_of_a_mean_square(bridge: object) -> None:
    """A quadratic form that is never negative: its determinant neither."""
    for scheme in bridge.modulations:  # type: ignore[attr-defined]
        for part in rail_moments(bridge, scheme, np.linspace(0.0, scheme.linear_limit, 5)):  # type: ignore[arg-type]
            assert np.all(part[:, [0, 2]] >= -1e-12)
            assert np.all(part[:, 0] * part[:, 2] - part[:, 1] ** 2 >= -1e-9)


def test_no_voltage_draws_no_current() -> None:
    assert three_phase_rms(np.array(0.0), np.array(0.3)) == 0.0
    assert single_phase_double_frequency_rms(np.array(0.0)) == 0.0
