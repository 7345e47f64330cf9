"""Dead-time harmonics against switched legs whose edges are moved: in the dead time the output follows the
current.

A leg with outward current stays low until its upper switch really turns on, one with inward current stays
high until its lower switch does: the edge towards the driven level comes late by the dead time.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from model_fixtures import DEPOT, ROOFTOP

from models.distortion import dead_time_voltage, loop_left, low_orders
from models.waveforms.bridges import BRIDGES
from models.waveforms.tables import waveform_tables

sys.path.insert(0, str(Path(__file__).parent / "waveforms"))
from level_oracle import TURN, Case  # noqa: E402

RATIO, SHARE = 301, 0.02  # carrier periods in a line period; dead time over the carrier period


def leg_harmonics(case: Case, leg: int, orders: list[int], dead: float) -> np.ndarray:
    """Complex harmonics of one leg's level with the late edges moved by the dead time [V_dc]."""
    pieces = case.levels[leg]
    step = pieces - np.roll(pieces, 1)
    at = np.flatnonzero(np.abs(step) > 1e-9)
    angles = case.edges[at]
    phase = leg if case.legs == 3 else 0
    sign = -1.0 if case.legs == 2 and leg == 1 else 1.0
    current = sign * np.sin(angles - case.lag - phase * TURN / 3.0)
    late = np.where(step[at] > 0.0, current > 0.0, current < 0.0)
    moved = angles + late * dead
    # a staircase's harmonic from its steps: c_n = sum step exp(-j n a)/(j n pi)
    return np.array([np.sum(step[at] * np.exp(-1j * n * moved)) / (1j * n * np.pi) for n in orders])


@pytest.mark.parametrize("lag", [0.0, 0.5, -0.8])
@pytest.mark.parametrize(
    ("scheme", "bridge", "weights"),
    [
        ("unipolar", "single-phase full bridge", (1.0, -1.0)),
        ("bipolar", "single-phase full bridge", (1.0, -1.0)),
        ("sine-triangle", "three-phase six-switch bridge", (2 / 3, -1 / 3, -1 / 3)),
        ("centred space vector", "three-phase six-switch bridge", (2 / 3, -1 / 3, -1 / 3)),
    ],
)
def test_low_orders_of_the_output_voltage(
    scheme: str, bridge: str, weights: tuple[float, ...], lag: float
) -> None:
    """Open loop, orders 3, 5, 7 (single phase) or 5, 7, 11 (three phases): within 5 % of the published square
    wave of amplitude V_dc t_d f_s a leg, 4/(n pi) of it each.
    """
    case = Case(scheme, "two-level", 0.8, lag, RATIO)
    orders = [3, 5, 7] if case.legs == 2 else [5, 7, 11]
    dead = SHARE * TURN / RATIO
    error = sum(
        weight * (leg_harmonics(case, leg, orders, dead) - leg_harmonics(case, leg, orders, 0.0))
        for leg, weight in enumerate(weights)
    )
    legs = waveform_tables(bridge).error_legs[BRIDGES[bridge].modulation_index(scheme)]
    expected = legs * dead_time_voltage(np.array(orders), np.array(1.0), np.array(SHARE), np.array(1.0))
    assert np.abs(error) == pytest.approx(expected, rel=0.05)


@pytest.mark.parametrize("lag", [0.0, 0.7])
def test_three_level_legs_lose_half_as_much(lag: float) -> None:
    """A three-level leg commutates half of V_dc: half the error."""
    case = Case("phase disposition, two legs", "T-type", 0.8, lag, RATIO)
    dead = SHARE * TURN / RATIO
    error = sum(
        weight * (leg_harmonics(case, leg, [3, 5, 7], dead) - leg_harmonics(case, leg, [3, 5, 7], 0.0))
        for leg, weight in enumerate((1.0, -1.0))
    )
    (legs,) = waveform_tables("single-phase full bridge, T-type").error_legs
    expected = legs * dead_time_voltage(np.array([3, 5, 7]), np.array(1.0), np.array(SHARE), np.array(1.0))
    assert np.abs(error) == pytest.approx(expected, rel=0.05)


def test_orders_and_loop() -> None:
    """Odd orders of a single phase, without multiples of three in three; an integrator loop of bandwidth f_b
    leaves f/sqrt(f^2 + f_b^2).
    """
    assert low_orders(ROOFTOP.phases)[:3].tolist() == [3, 5, 7]
    assert low_orders(DEPOT.phases)[:4].tolist() == [5, 7, 11, 13]
    assert float(loop_left(np.array(300.0), np.array(400.0))) == pytest.approx(0.6)
