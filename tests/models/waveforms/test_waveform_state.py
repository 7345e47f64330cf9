"""The waveform state of a population: index from the phasors, ripple in amperes, scaling."""

from __future__ import annotations

import numpy as np
import pytest
from probe_device import At

from models.waveforms.bridges import BRIDGES

ENTRIES = [(bridge.name, scheme.name) for bridge in BRIDGES.values() for scheme in bridge.modulations]


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_index_and_lag_come_back(bridge: str, scheme: str) -> None:
    state = At(bridge, scheme, 0.77, -0.6, peak=12.0, dc_voltage=400.0).state()
    assert state.modulation_index[0, 0] == pytest.approx(0.77)
    assert state.displacement[0, 0] == pytest.approx(-0.6)
    assert state.peak_current[0, 0] == pytest.approx(12.0)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_ripple_falls_with_inductance_and_frequency(bridge: str, scheme: str) -> None:
    """Only V_dc/(L f_s) counts: half of it, half the peak-to-peak and a quarter of the mean square."""
    one = At(bridge, scheme, 0.6, dc_voltage=400.0, ripple_unit=8.0).state()
    half = At(bridge, scheme, 0.6, dc_voltage=400.0, ripple_unit=4.0).state()
    assert half.peak_ripple == pytest.approx(0.5 * one.peak_ripple)
    assert half.ripple_mean_square == pytest.approx(0.25 * one.ripple_mean_square)
    assert np.all(one.peak_ripple > 0.0)


def test_index_beyond_the_limit_is_reported_and_read_at_the_limit() -> None:
    beyond = At("single-phase full bridge", "bipolar", 1.3, ripple_unit=1.0).state()
    at_limit = At("single-phase full bridge", "bipolar", 1.0, ripple_unit=1.0).state()
    assert beyond.modulation_index[0, 0] == pytest.approx(1.3)
    assert beyond.peak_ripple == pytest.approx(at_limit.peak_ripple)
