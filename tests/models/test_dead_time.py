"""Dead-time harmonics against switched legs whose edges are moved: in the dead time the output follows the
current.

A leg with outward current stays low until its upper switch really turns on, one with inward current stays
high until its lower switch does: the edge towards the driven level comes late by the dead time.
"""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from model_fixtures import DEPOT, ROOFTOP
from probe_device import At

from models.catalog import Catalog
from models.distortion import dead_time_share, dead_time_voltage, loop_left, low_orders
from models.output_distortion import current_distortion
from models.output_filter import Filter
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
        ("one leg at line frequency", "single-phase full bridge", (1.0, -1.0)),
        ("sine-triangle", "three-phase six-switch bridge", (2 / 3, -1 / 3, -1 / 3)),
        ("third harmonic one sixth", "three-phase six-switch bridge", (2 / 3, -1 / 3, -1 / 3)),
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


@pytest.mark.parametrize("lag", [-1.5, -0.7, -0.2, 0.0, 0.2, 0.5, 0.7, 1.2, np.pi / 2])
def test_clamped_legs(lag: float) -> None:
    """A leg loses nothing while it rests: the square wave lacks its clamped 60 degrees. Within 5 % of the
    whole square wave's harmonic, at 1803 pulses, since the clamp ends between two edges.
    """
    name, bridge, ratio = "discontinuous clamped at voltage peak", "three-phase six-switch bridge", 1803
    case = Case(name, "two-level", 0.8, lag, ratio)
    orders = [5, 7, 11, 13]
    dead = SHARE * TURN / ratio
    error = sum(
        weight * (leg_harmonics(case, leg, orders, dead) - leg_harmonics(case, leg, orders, 0.0))
        for leg, weight in enumerate((2 / 3, -1 / 3, -1 / 3))
    )
    place = BRIDGES[bridge].modulation_index(name)
    share = dead_time_share(
        np.array(orders), waveform_tables(bridge).switching_share[place][None], np.array([lag])
    )[0]
    whole = dead_time_voltage(np.array(orders), np.array(1.0), np.array(SHARE), np.array(1.0))
    assert np.max(np.abs(np.abs(error) / whole - share)) < 0.05


def test_clamped_at_the_current_peak_half_is_left() -> None:
    """Closed form: 1 - cos(k pi/3) of the square wave's harmonic, 0.5 for every order without factor 3; a leg
    that never rests keeps all of it.
    """
    clamped = np.ones((1, 18))
    clamped[0, 6:12] = 0.0
    orders = np.array([5, 7, 11, 13])
    assert dead_time_share(orders, clamped, np.array([0.0]))[0] == pytest.approx([0.5] * 4)
    lags = np.linspace(-np.pi, np.pi, 23)
    assert dead_time_share(orders, np.ones((23, 18)), lags) == pytest.approx(np.ones((23, 4)))


@pytest.mark.parametrize("factor", [1.0, 0.9])
def test_clamped_bridge_in_the_chain(catalog: Catalog, factor: float) -> None:
    """What reaches the grid has the clamped leg's harmonics, at each operating point's own displacement."""
    spec = replace(DEPOT, rules=replace(DEPOT.rules, dead_time_compensated=0.0))
    circuit = Filter(*(np.array([value]) for value in (2e-3, 1e-3, 5e-5, 1.0))).columns()
    found = {}
    for name in ("discontinuous clamped at voltage peak", "centred space vector"):
        at = At("three-phase six-switch bridge", name, 0.8, float(np.arccos(factor)), dc_voltage=800.0)
        found[name] = current_distortion(
            spec, catalog.limit_table(spec.limit_table), circuit, at.tables, at.state(), 0,
            np.array([20e3]), np.array([1e-6]),
        ).lines.amplitude[0]  # fmt: skip
    orders = low_orders(3)
    clamped = np.ones((1, 18))
    clamped[0, 6:12] = 0.0
    share = dead_time_share(orders, clamped, np.array([np.arccos(factor)]))[0]
    first, second = (lines[: len(orders)] for lines in found.values())
    assert first == pytest.approx(second * share)


def test_orders_and_loop() -> None:
    """Odd orders of a single phase, without multiples of three in three; an integrator loop of bandwidth f_b
    leaves f/sqrt(f^2 + f_b^2).
    """
    assert low_orders(ROOFTOP.phases)[:3].tolist() == [3, 5, 7]
    assert low_orders(DEPOT.phases)[:4].tolist() == [5, 7, 11, 13]
    assert float(loop_left(np.array(300.0), np.array(400.0))) == pytest.approx(0.6)
