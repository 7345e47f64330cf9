# ruff: noqa: E501
"""Laws of the exact line period, and the search's tables against it."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.waveforms.bridges import ALL_BRIDGES, BRIDGES
from models.waveforms.device_currents import leg_currents
from models.waveforms.legs import SAMPLINGS
from models.waveforms.line_currents import dc_link_current, position_currents
from models.waveforms.line_period import LinePeriod
from models.waveforms.operating_waveforms import operating_waveforms
from models.waveforms.tables import waveform_tables

SWITCHED = [(bridge.name, scheme.name) for bridge in ALL_BRIDGES.values() for scheme in bridge.modulations]
SEARCHED = [(bridge.name, place) for bridge in BRIDGES.values() for place in range(len(bridge.modulations))]


def operation(bridge, modulation, **changes):
    values = {
        "modulation_index": 0.8,
        "displacement": 0.4,
        "dc_voltage": 700.0,
        "inductance": 2e-3,
        "pulse_number": 99,
        "line_frequency": 50.0,
        "current": 8.0,
    }
    return LinePeriod(bridge=bridge, modulation=modulation, **(values | changes))


def after_a_peak(displacement, pulses):
    """A like displacement, at which clamped sectors begin right after a peak of the carrier and so no pulse
    is moved: within 30 degrees.
    """
    step = np.pi / pulses
    return step * np.trunc(np.clip(displacement, -0.5, 0.5) / step) + 1e-6


@pytest.mark.parametrize(("bridge", "modulation"), SWITCHED)
@settings(max_examples=6, deadline=None)
@given(
    index=st.floats(0.1, 1.0),
    displacement=st.floats(-1.57, 1.57),
    pulses=st.integers(6, 20).map(lambda n: 3 * (2 * n + 1)),
)
def test_laws(bridge, modulation, index, displacement, pulses):
    if ALL_BRIDGES[bridge].scheme(modulation).follows_current:
        displacement = after_a_peak(displacement, pulses)
    one = operation(
        bridge, modulation, modulation_index=index, displacement=displacement, pulse_number=pulses
    )
    # natural sampling leaves the fundamental as the reference has it
    expected = index * one.circuit.index_base * one.dc_voltage
    assert one.fundamental_peak == pytest.approx(expected, rel=6e-3)
    # Parseval: what the orders up to twelve carriers hold, and no more than all
    orders = np.arange(1, 12 * pulses)
    total = 0.5 * np.sum(np.abs(one.harmonics(one.output_levels[0], orders)) ** 2)
    whole = float(one.widths @ one.output_levels[0] ** 2)
    assert 0.6 * whole < total < whole * (1.0 + 1e-9)
    # power balance: what the source gives is what the fundamental and the ripple's circulation take (lossless)
    link = dc_link_current(one)
    angle, weight, interval = one.nodes
    power = sum(
        (one.output_levels[phase][interval] * one.phase_current[phase]) @ weight
        for phase in range(one.circuit.phases)
    )
    if one.circuit.levels == 2:
        assert link.mean * one.dc_voltage == pytest.approx(float(power), rel=1e-6, abs=1e-6 * one.dc_voltage)
    assert float(np.abs(one.ripple @ weight).max()) < 1e-9
    assert link.capacitor_rms**2 == pytest.approx(
        link.double_frequency_rms**2 + link.switching_rms**2, rel=1e-9
    )


@pytest.mark.parametrize(("bridge", "modulation"), SWITCHED)
def test_positions_share_the_leg_current(bridge, modulation):
    """Averages of the conducting paths add up to the mean magnitude of the leg's current at every leg type."""
    one = operation(bridge, modulation)
    angle = 2.0 * np.pi * (np.arange(1 << 16) + 0.5) / (1 << 16)
    mean = float(np.abs(one.line_current(angle)[0] + one.ripple_at(angle)[0]).mean())
    for leg_type in (one.circuit.leg_type,) if one.circuit.leg_type else ("neutral-point clamped", "T-type"):
        found = position_currents(one, leg_type)
        names = {"T1", "D1", "T4", "D4"} if one.circuit.levels == 3 else {"T1", "D1", "T2", "D2"}
        middle = {"T2", "T3"} if leg_type == "T-type" else {"D5", "D6"} if one.circuit.levels == 3 else set()
        assert sum(found[name].average for name in names | middle) == pytest.approx(mean, rel=5e-5)


@pytest.mark.parametrize("sampling", SAMPLINGS)
def test_sampling_matters_less_at_high_pulse_numbers(sampling):
    low, high = (
        operation("three-phase six-switch bridge", "sine-triangle", sampling=sampling, pulse_number=pulses)
        for pulses in (21, 999)
    )
    assert low.fundamental_peak == pytest.approx(280.0, rel=6e-3)
    assert high.fundamental_peak == pytest.approx(280.0, rel=1e-5)


def test_unknown_names_and_values_are_told():
    with pytest.raises(ValueError, match="bridge 'two-switch': expected one of"):
        operation("two-switch", "unipolar")
    with pytest.raises(
        ValueError, match="modulation 'sine' of single-phase full bridge: expected one of bipolar"
    ):
        operation("single-phase full bridge", "sine")
    with pytest.raises(ValueError, match="modulation index 1.2: expected 0 to 1.0000"):
        operation("single-phase full bridge", "unipolar", modulation_index=1.2)
    with pytest.raises(ValueError, match="inductance 0.0: expected a number above 0"):
        operation("single-phase full bridge", "unipolar", inductance=0.0)


@pytest.mark.parametrize(("bridge", "place"), SEARCHED)
@settings(max_examples=6, deadline=None)
@given(index=st.floats(0.15, 1.0), displacement=st.floats(-1.5, 1.5))
def test_tables_agree_with_the_exact_line_period(bridge, place, index, displacement):
    """What the search reads against the exact waveforms at 501 pulses: 1 % (currents 0.5 %)."""
    scheme = BRIDGES[bridge].modulations[place]
    if scheme.follows_current:
        displacement = after_a_peak(displacement, 501)
    tables = waveform_tables(bridge, (), displacement if scheme.follows_current else 0.0)
    exact = operation(
        bridge, scheme.name, modulation_index=index, displacement=displacement, pulse_number=501
    )
    row, weight = tables.position(np.array(index))
    unit = exact.dc_voltage / (exact.inductance * 501 * 50.0)

    def read(table):
        return float(tables.read(table, np.array(place), row, weight))

    assert np.sqrt(read(tables.ripple_mean_square)) * unit == pytest.approx(exact.ripple_rms, rel=0.01)
    assert read(tables.peak_ripple) * unit == pytest.approx(exact.ripple_peak_to_peak, rel=0.015)


@pytest.mark.parametrize(("bridge", "place"), [one for one in SEARCHED if BRIDGES[one[0]].levels == 2])
@settings(max_examples=6, deadline=None)
@given(index=st.floats(0.15, 1.0), displacement=st.floats(-1.5, 1.5))
def test_two_level_device_currents_agree_with_the_exact_line_period(bridge, place, index, displacement):
    scheme = BRIDGES[bridge].modulations[place]
    tables = waveform_tables(bridge, (), displacement if scheme.follows_current else 0.0)
    smooth = operation(
        bridge,
        scheme.name,
        modulation_index=index,
        displacement=displacement,
        pulse_number=501,
        inductance=1e4,
    )
    legs = leg_currents(
        tables.reference_constant[place][:, None],
        tables.reference_slope[place][:, None],
        np.full((1, 1), index),
        np.full((1, 1), displacement),
    )
    found = position_currents(smooth)
    peak = np.sqrt(2.0) * smooth.current
    assert float(legs.switch_average[0, 0, 0]) * peak == pytest.approx(
        found["T1"].average, rel=0.005, abs=2e-3 * peak
    )
    assert np.sqrt(float(legs.switch_mean_square[0, 0, 0])) * peak == pytest.approx(
        found["T1"].rms, rel=0.005, abs=2e-3 * peak
    )


def test_arrays_equal_single_calls():
    shared = {
        "bridge": "three-phase six-switch bridge",
        "modulation": "centred space vector",
        "dc_voltage": 700.0,
        "inductance": 1e-3,
        "line_frequency": 50.0,
        "current": 10.0,
    }
    index, carrier = np.array([[0.4], [0.9]]), np.array([2250.0, 5250.0, 15750.0])
    together = operating_waveforms(
        modulation_index=index, displacement=0.3, switching_frequency=carrier, **shared
    )
    assert together.ripple_rms.shape == (2, 3)
    for row in range(2):
        for column in range(3):
            alone = operating_waveforms(
                modulation_index=index[row, 0],
                displacement=0.3,
                switching_frequency=carrier[column],
                **shared,
            )
            assert together.ripple_rms[row, column] == float(alone.ripple_rms)
            assert together.positions["T1"].rms[row, column] == float(alone.positions["T1"].rms)
