"""Distortion: rectifier pulses by numerical Fourier analysis, loops, limits, and the whole chain against
the oracle.
"""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from model_fixtures import BACKUP, DEPOT, ROOFTOP
from probe_device import At

from models.catalog import Catalog, load_catalog
from models.distortion import (
    LOW_ORDERS,
    Lines,
    dead_time_voltage,
    loop_left,
    low_orders,
    rectifier_harmonic,
    summarise,
)
from models.output_distortion import current_distortion, voltage_distortion
from models.output_filter import Filter, grid_transfer, open_circuit_transfer, output_impedance
from models.waveforms.bridges import BRIDGES

sys.path.insert(0, str(Path(__file__).parent / "waveforms"))
from oracle import SCHEMES, LinePeriod

CREST = st.floats(1.45, 4.0)


def pulse(crest: float, count: int = 200_000) -> np.ndarray:
    """One half-sine pulse in the middle of each half wave, of the width that gives the crest factor."""
    angle = 2.0 * np.pi * (np.arange(count) + 0.5) / count
    width = 2.0 * np.pi / crest**2
    place = (angle + 0.5 * np.pi) % np.pi - 0.5 * np.pi  # distance from the middle of a half wave at 0 and pi
    shape = np.where(np.abs(place) < 0.5 * width, np.cos(np.pi * place / width), 0.0)
    return np.where((angle + 0.5 * np.pi) % (2.0 * np.pi) < np.pi, shape, -shape)


@pytest.mark.parametrize("crest", [1.5, 2.0, 2.5, 3.0])
def test_rectifier_pulse(crest: float) -> None:
    wave = pulse(crest)
    rms = np.sqrt(np.mean(wave**2))
    assert wave.max() / rms == pytest.approx(crest, rel=1e-3)
    lines = np.abs(np.fft.rfft(wave)) / len(wave) * np.sqrt(2.0)
    for order in (1, 3, 5, 7, 9, 11, 25):
        assert float(rectifier_harmonic(np.array(order), crest)) == pytest.approx(
            lines[order] / rms, abs=2e-4
        )


@given(CREST)
def test_rectifier_harmonics_sum_to_the_rms(crest: float) -> None:
    """Parseval: all odd orders together are the current's rms value."""
    orders = np.arange(1, 4001, 2)
    assert np.sum(rectifier_harmonic(orders, crest) ** 2) == pytest.approx(1.0, abs=2e-3)


def test_a_sine_is_all_fundamental() -> None:
    found = rectifier_harmonic(np.array([1, 3, 5, 7]), float(np.sqrt(2.0)))
    assert found == pytest.approx([1.0, 0.0, 0.0, 0.0], abs=1e-6)


@given(st.floats(1.0, 1e5), st.floats(1.0, 1e5))
def test_loop(frequency: float, bandwidth: float) -> None:
    left = float(loop_left(np.array(frequency), np.array(bandwidth)))
    assert 0.0 < left < 1.0
    assert float(loop_left(np.array(bandwidth), np.array(bandwidth))) == pytest.approx(np.sqrt(0.5))


@given(st.floats(1e-8, 1e-6), st.floats(1e3, 1e5))
def test_dead_time_square_wave(dead: float, frequency: float) -> None:
    """Harmonics of a square wave of V_dc t_d f_s: sum of squares of the peaks is twice its square."""
    orders = np.arange(1, 20001, 2)
    found = dead_time_voltage(orders, np.array(400.0), np.array(dead), np.array(frequency))
    assert 0.5 * np.sum(found**2) == pytest.approx((400.0 * dead * frequency) ** 2, rel=1e-3)


def test_low_orders_of_the_bridges() -> None:
    assert low_orders(1) == pytest.approx(LOW_ORDERS)
    assert set(low_orders(3)) == {order for order in range(3, 50, 2) if order % 3}


def lines_of(order: list[float], amplitude: list[float], listed: list[bool]) -> Lines:
    return Lines(np.array([order]), np.array([amplitude]), np.array([listed]))


def test_summary_picks_the_tightest_line() -> None:
    limits = np.full(51, np.inf)
    limits[[3, 5]] = 0.04, 0.02
    found = summarise(
        lines_of([3.0, 5.0, 400.0, 900.0], [0.02, 0.015, 0.002, 0.5], [True, True, True, False]),
        limits,
        0.003,
    )
    assert found.worst_order == 5.0
    assert found.worst_share == pytest.approx(0.75)
    assert found.low == pytest.approx(np.hypot(0.02, 0.015))
    assert found.total == pytest.approx(np.sqrt(0.02**2 + 0.015**2 + 0.002**2 + 0.5**2))
    assert np.isinf(found.line_limit[0, 3])  # a rest line is no line of its own


RATIO = {1: 401, 3: 405}


@pytest.mark.parametrize("name", SCHEMES)
@pytest.mark.parametrize("resonance_share", [0.15, 0.35])
def test_switching_distortion_of_the_current_against_the_oracle(
    catalog: Catalog, name: str, resonance_share: float
) -> None:
    """All exact lines around the carrier multiples through the filter: total within 2 %.

    The rest lines stand at the carrier multiples while what they stand for lies on both sides: a small part
    of the difference.
    """
    spec = ROOFTOP if len(SCHEMES[name].weights) == 2 else DEPOT
    ratio = RATIO[spec.phases]
    hertz = ratio * spec.line_frequency_hz
    first, second = 1e-3, 0.4e-3
    parallel = first * second / (first + second)
    capacitance = 1.0 / ((2.0 * np.pi * resonance_share * hertz) ** 2 * parallel)
    circuit = Filter(
        *(np.array([v]) for v in (first, second, capacitance, 0.2 * np.sqrt(parallel / capacitance)))
    )
    bridge = next(b for b in BRIDGES.values() if name in [s.name for s in b.modulations])
    index = 0.83 * SCHEMES[name].limit
    state = At(bridge.name, name, index, dc_voltage=spec.dc_voltage_max_v).state()
    found = current_distortion(
        spec,
        catalog.limit_table(spec.limit_table),
        circuit.columns(),
        At(bridge.name, name, index).tables,
        state,
        0,
        np.array([hertz]),
        np.array([0.0]),
    )
    exact = LinePeriod(SCHEMES[name], index, ratio)
    orders = np.arange(ratio // 2, 12 * ratio)
    volts = (
        np.array([abs(exact.harmonic(int(order))) for order in orders]) * spec.dc_voltage_max_v / np.sqrt(2.0)
    )
    amperes = (
        volts * grid_transfer(circuit.columns(), orders[None] * spec.line_frequency_hz).output_current[0]
    )
    expected = float(np.sqrt(np.sum(amperes**2))) / spec.rated_current_a
    assert float(found.low[0]) == 0.0
    assert 0.985 * expected <= float(found.total[0]) <= 1.02 * expected


def test_dead_time_alone(catalog: Catalog) -> None:
    """No switching ripple gets through a huge filter at the carrier; what is left is the dead time's square
    wave.
    """
    spec = replace(ROOFTOP, rules=replace(ROOFTOP.rules, dead_time_compensated=0.0))
    circuit = Filter(*(np.array([value]) for value in (2e-3, 1e-3, 5e-5, 1.0))).columns()
    at = At("single-phase full bridge", "unipolar", 0.8, dc_voltage=450.0)
    hertz, dead = np.array([40e3]), np.array([5e-7])
    found = current_distortion(
        spec, catalog.limit_table(spec.limit_table), circuit, at.tables, at.state(), 0, hertz, dead
    )
    orders = np.arange(3, 50, 2)
    peak = 2.0 * dead_time_voltage(orders, np.array(450.0), dead, hertz)  # two switching legs
    left = loop_left(orders * 50.0, spec.rules.current_loop_share * hertz)
    expected = peak / np.sqrt(2.0) * left * grid_transfer(circuit, orders[None] * 50.0).output_current[0]
    assert float(found.low[0]) == pytest.approx(float(np.sqrt(np.sum(expected**2))) / spec.rated_current_a)
    assert found.lines.amplitude[0, : len(orders)] == pytest.approx(expected / spec.rated_current_a)


def test_compensation_takes_dead_time_distortion_away(catalog: Catalog) -> None:
    circuit = Filter(*(np.array([value]) for value in (2e-3, 1e-3, 5e-6, 1.0))).columns()
    at = At("single-phase full bridge", "unipolar", 0.8, dc_voltage=450.0)
    low = []
    for share in (0.0, 0.5, 1.0):
        spec = replace(ROOFTOP, rules=replace(ROOFTOP.rules, dead_time_compensated=share))
        arguments = (circuit, at.tables, at.state(), 0, np.array([40e3]), np.array([5e-7]))
        low.append(float(current_distortion(spec, catalog.limit_table(spec.limit_table), *arguments).low[0]))
    assert low[1] == pytest.approx(0.5 * low[0])
    assert low[2] == 0.0


def test_stand_alone_voltage_under_a_rectifier() -> None:
    """The load's harmonic currents through the output impedance as the loop leaves it; more of it, more
    distortion.
    """
    circuit = Filter(*(np.array([value]) for value in (5e-4, 0.0, 1e-5, 1.0))).columns()
    at = At("single-phase full bridge", "unipolar", 0.8, dc_voltage=450.0)
    hertz, dead = np.array([40e3]), np.array([0.0])
    limits = load_catalog().limit_table("IEC 62040-3 stand-alone output")
    found = [
        voltage_distortion(BACKUP, limits, circuit, at.tables, at.state(), 0, hertz, dead, share)
        for share in (0.0, 0.5, 1.0)
    ]
    assert float(found[0].low[0]) == 0.0
    assert float(found[2].low[0]) == pytest.approx(2.0 * float(found[1].low[0]))
    orders = np.arange(3, 50, 2)
    current = BACKUP.rated_current_a * rectifier_harmonic(orders, BACKUP.crest_factor)
    left = loop_left(orders * 50.0, BACKUP.rules.voltage_loop_share * hertz)
    expected = current * output_impedance(circuit, orders[None] * 50.0)[0] * left / BACKUP.phase_voltage_v
    assert found[2].lines.amplitude[0, : len(orders)] == pytest.approx(expected)


@pytest.mark.parametrize("name", ["bipolar", "unipolar", "one leg at line frequency"])
def test_switching_ripple_of_an_unloaded_filter_against_the_oracle(name: str) -> None:
    ratio = RATIO[1]
    hertz = ratio * 50.0
    circuit = Filter(*(np.array([value]) for value in (8e-4, 0.0, 4e-6, 0.3))).columns()
    at = At("single-phase full bridge", name, 0.72, dc_voltage=BACKUP.dc_voltage_max_v)
    limits = load_catalog().limit_table("IEC 62040-3 stand-alone output")
    found = voltage_distortion(
        BACKUP, limits, circuit, at.tables, at.state(), 0, np.array([hertz]), np.array([0.0]), 0.0
    )
    exact = LinePeriod(SCHEMES[name], 0.72, ratio)
    orders = np.arange(ratio // 2, 12 * ratio)
    lines = np.array([abs(exact.harmonic(int(order))) for order in orders])
    volts = lines * BACKUP.dc_voltage_max_v / np.sqrt(2.0)
    left = volts * open_circuit_transfer(circuit, orders[None] * 50.0).capacitor_voltage[0]
    expected = float(np.sqrt(np.sum(left**2))) / BACKUP.phase_voltage_v
    assert 0.985 * expected <= float(found.total[0]) <= 1.02 * expected
