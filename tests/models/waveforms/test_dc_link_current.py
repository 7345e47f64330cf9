"""Dc-link current laws: their limits and their two roads."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.waveforms.dc_link_current import (
    single_phase_double_frequency_rms,
    single_phase_mean_square,
    single_phase_switching_rms,
    three_phase_rms,
)

INDEX, LAG = st.floats(0.01, 1.0), st.floats(-1.57, 1.57)


@given(INDEX, LAG)
def test_lag_and_lead_are_alike(index: float, lag: float) -> None:
    m = np.array(index)
    assert three_phase_rms(m, np.array(lag)) == pytest.approx(three_phase_rms(m, np.array(-lag)))


@given(INDEX, LAG)
def test_unipolar_closed_form(index: float, lag: float) -> None:
    """With the bridge state on for |m|: mean 2 M/pi, cos 2 theta moment -2 M/(3 pi); sum M/pi (1 + cos(2
    phi)/3).
    """
    m, phi = np.array(index), np.array(lag)
    found = single_phase_mean_square(2.0 * m / np.pi, -2.0 * m / (3.0 * np.pi), phi)
    assert found == pytest.approx(index / np.pi * (1.0 + np.cos(2.0 * lag) / 3.0))


@given(INDEX, LAG)
def test_parts_sum_to_the_whole(index: float, lag: float) -> None:
    """Average, double-frequency part and switching part are orthogonal: their squares sum to the mean
    square.
    """
    m, phi = np.array(index), np.array(lag)
    moments = (2.0 * m / np.pi, -2.0 * m / (3.0 * np.pi))
    whole = single_phase_mean_square(*moments, phi)
    average = 0.5 * index * np.cos(lag)
    parts = (
        average**2
        + single_phase_double_frequency_rms(m) ** 2
        + single_phase_switching_rms(m, phi, *moments) ** 2
    )
    assert parts == pytest.approx(float(whole), rel=1e-9)


def test_no_voltage_draws_no_current() -> None:
    assert three_phase_rms(np.array(0.0), np.array(0.3)) == 0.0
    assert single_phase_double_frequency_rms(np.array(0.0)) == 0.0
