"""Device currents: identities that hold for any reference, and quadrature as a second road."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from probe_device import At

from models.waveforms.bridges import BRIDGES

ENTRIES = [
    pytest.param(bridge.name, scheme.name, id=scheme.name)
    for bridge in BRIDGES.values()
    if bridge.levels == 2
    for scheme in bridge.modulations
]
CONTINUOUS = [entry for entry in ENTRIES if entry.id != "one leg at line frequency"]


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
@given(st.floats(0.05, 1.0), st.floats(-1.57, 1.57))
@settings(max_examples=15, deadline=None)
def test_switch_and_diode_share_the_leg_current(bridge: str, scheme: str, index: float, lag: float) -> None:
    """Both positions together carry |i|: averages sum to 1/pi, mean squares to 1/4 per position."""
    found = At(bridge, scheme, index, lag).read()
    assert found["switch_average"] + found["diode_average"] == pytest.approx(1.0 / math.pi, rel=1e-9)
    assert found["switch_mean_square"] + found["diode_mean_square"] == pytest.approx(0.25, rel=1e-9)


@pytest.mark.parametrize(("bridge", "scheme"), CONTINUOUS)
@given(st.floats(0.05, 1.0), st.floats(0.0, 1.57))
@settings(max_examples=15, deadline=None)
def test_lag_and_lead_are_alike(bridge: str, scheme: str, index: float, lag: float) -> None:
    one, other = At(bridge, scheme, index, lag).read(), At(bridge, scheme, index, -lag).read()
    for quantity, value in one.items():
        assert value == pytest.approx(other[quantity], rel=1e-6, abs=1e-12), quantity


@pytest.mark.parametrize(("bridge", "scheme"), CONTINUOUS)
def test_reversed_power_swaps_switch_and_diode(bridge: str, scheme: str) -> None:
    """At phi = pi (rectifying) the diode carries what the switch carried."""
    motor, brake = At(bridge, scheme, 0.8, 0.0).read(), At(bridge, scheme, 0.8, math.pi).read()
    assert brake["diode_average"] == pytest.approx(motor["switch_average"])
    assert brake["switch_mean_square"] == pytest.approx(motor["diode_mean_square"])


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
@pytest.mark.parametrize(("index", "lag"), [(0.3, 0.0), (0.8, 0.9), (0.95, -1.4)])
def test_sums_equal_quadrature(bridge: str, scheme: str, index: float, lag: float) -> None:
    """(1 + u)/2 of the current while it is positive, straight from the reference, leg by leg."""
    entry = BRIDGES[bridge]
    angle = 2.0 * np.pi * (np.arange(20000) + 0.5) / 20000
    references = entry.scheme(scheme).at(lag).references(angle, np.full_like(angle, index))
    averages, squares = [], []
    for leg, sign in zip(entry.modelled_legs, entry.current_sign, strict=True):
        current = np.maximum(sign * np.sin(angle - lag), 0.0)
        share = 0.5 * (1.0 + references[:, leg])
        averages.append(np.mean(share * current))
        squares.append(np.mean(share * current**2))
    found = At(bridge, scheme, index, lag).read()
    assert found["switch_average"] == pytest.approx(np.mean(averages), rel=1e-4, abs=5e-5)
    assert found["switch_mean_square"] == pytest.approx(np.mean(squares), rel=1e-4, abs=5e-5)


def test_currents_scale_with_the_peak() -> None:
    one = At("single-phase full bridge", "unipolar", 0.7, 0.4).read()
    ten = At("single-phase full bridge", "unipolar", 0.7, 0.4, peak=10.0).read()
    for quantity in ("switch_average", "diode_average", "turn_on", "turn_off"):
        assert ten[quantity] == pytest.approx(10.0 * one[quantity])
    assert ten["switch_mean_square"] == pytest.approx(100.0 * one["switch_mean_square"])
