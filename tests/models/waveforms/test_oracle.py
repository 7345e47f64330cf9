"""The oracle against what is known without it, before anything is held against the oracle."""

from __future__ import annotations

import math

import numpy as np
import pytest
from closed_loops import split_loss
from oracle import SCHEMES, TURN, LinePeriod, triangle

THREE_PHASE = [name for name, scheme in SCHEMES.items() if len(scheme.weights) == 3]
SINGLE_PHASE = [name for name in SCHEMES if name not in THREE_PHASE]


def test_carrier() -> None:
    assert triangle(np.array([0.0, TURN / 42.0, TURN / 21.0]), 21) == pytest.approx([-1.0, 1.0, -1.0])


@pytest.mark.parametrize("name", SCHEMES)
def test_every_instant_lies_where_reference_meets_carrier_or_jumps(name: str) -> None:
    scheme = SCHEMES[name]
    period = LinePeriod(scheme, 0.7, 63)
    for leg, sign in enumerate(scheme.carriers):
        if sign:
            angles = period.legs[leg][0][1:]
            gap = np.abs(scheme.reference(angles, 0.7)[leg] - sign * triangle(angles, 63))
            jumps = np.array([0.0, *scheme.breaks, TURN])
            near = np.min(np.abs(angles[:, None] - jumps), axis=1) < 1e-6
            assert np.all(near | (gap < 1e-7))


@pytest.mark.parametrize("name", SINGLE_PHASE)
def test_two_edges_per_carrier_period(name: str) -> None:
    period = LinePeriod(SCHEMES[name], 0.8, 120)
    assert len(period.legs[0][0]) == pytest.approx(2 * 120, abs=2)


def test_square_wave_voltage_has_the_textbook_harmonics() -> None:
    """The leg at line frequency alone: peaks 2/(pi k) of the dc voltage."""
    scheme = SCHEMES["one leg at line frequency"]
    slow = LinePeriod(type(scheme)(**{**vars(scheme), "weights": (0.0, 1.0)}), 0.5, 60)
    for order in (1, 3, 5):
        assert abs(slow.harmonic(order)) == pytest.approx(2.0 / (math.pi * order), rel=1e-6)
    assert abs(slow.harmonic(2)) < 1e-9


@pytest.mark.parametrize("name", SCHEMES)
def test_parseval(name: str) -> None:
    """Exact coefficients up to order 20 mf hold nearly all of the mean square, and never more."""
    period = LinePeriod(SCHEMES[name], 0.6, 63)
    level = float(np.sum(period.voltage() * np.diff(period.edges)) / TURN)
    orders = np.arange(1, 20 * 63)
    found = level**2 + 0.5 * sum(abs(period.harmonic(int(order))) ** 2 for order in orders)
    assert found <= period.voltage_mean_square * (1.0 + 1e-12)
    assert found == pytest.approx(period.voltage_mean_square, rel=0.05)


@pytest.mark.parametrize("name", SCHEMES)
def test_both_devices_together_carry_the_current(name: str) -> None:
    """A leg's current has half of its mean square in each position, switch and diode together."""
    period = LinePeriod(SCHEMES[name], 0.8, 63, lag=0.5)
    found = period.device_currents(0)
    legs = [found["switch_mean_square"] + found["diode_mean_square"]]
    if name in SINGLE_PHASE:
        other = period.device_currents(1)
        legs.append(other["switch_mean_square"] + other["diode_mean_square"])
    assert np.mean(legs) == pytest.approx(0.25, rel=0.01)


@pytest.mark.parametrize("name", SCHEMES)
def test_power_balance(name: str) -> None:
    """The dc current's average is the fundamental's power over the dc voltage."""
    lag = 0.4
    period = LinePeriod(SCHEMES[name], 0.9, 123, lag=lag)
    value, weights = period.dc_current()
    phases = 3 if name in THREE_PHASE else 1
    power = phases * 0.5 * np.real(period.harmonic(1) * np.conj(-1j * np.exp(-1j * lag)))
    assert np.sum(value * weights) / TURN == pytest.approx(power, rel=2e-3)


def test_ripple_of_bipolar_switching_at_no_voltage() -> None:
    """Volt-second balance at half on: V_dc/(2 L f_s), a triangle of rms p-p/sqrt 12."""
    period = LinePeriod(SCHEMES["bipolar"], 1e-6, 60, ripple_unit=1.0)
    assert period.ripple_peak_to_peak == pytest.approx(0.5, rel=1e-4)
    assert math.sqrt(period.ripple_mean_square) == pytest.approx(0.5 / math.sqrt(12.0), rel=1e-4)


def test_minor_loop_is_charged_with_its_own_swing() -> None:
    """A large triangle with one notch on its rising side, by hand."""
    lengths, slopes = np.array([0.3, 0.1, 0.2, 0.4]), np.array([2.0, -1.0, 1.0, -1.75])
    slopes[3] = -(0.3 * 2.0 - 0.1 + 0.2) / 0.4
    alpha, beta = 1.4, 2.5
    minor = 0.1 ** (beta - alpha) * (0.1 + 0.1)
    swing = 0.7
    major = swing ** (beta - alpha) * (0.3 * 2.0**alpha + 0.1 + 0.4 * 1.75**alpha)
    assert split_loss(lengths, slopes, alpha, beta) == pytest.approx(minor + major)


def test_splitting_does_not_matter_where_only_the_rate_counts() -> None:
    """With alpha = beta the swing drops out, and the loss is the integral of the rate alone."""
    for lengths, slopes in LinePeriod(SCHEMES["sine-triangle"], 0.8, 21).period_loops():
        assert split_loss(lengths, slopes, 2.0, 2.0) == pytest.approx(float(np.sum(lengths * slopes**2)))
