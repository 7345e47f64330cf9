"""Splitting of closed loops: against the loop-by-loop oracle, cycle counting, and laws."""

from __future__ import annotations

from collections import Counter

import numpy as np
import pytest
import rainflow
from closed_loops import split_loss
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from models.waveforms.minor_loops import closed_loops

Array = NDArray[np.float64]


def random_courses(pieces: int, count: int = 300) -> tuple[Array, Array, Array]:
    """Flux at the bounds, lengths and slopes of periodic courses."""
    rng = np.random.default_rng(pieces)
    steps = rng.random((count, pieces))
    steps /= steps.sum(-1, keepdims=True)
    slope = rng.normal(size=(count, pieces))
    slope -= np.sum(slope * steps, axis=-1, keepdims=True)
    flux = np.concatenate([np.zeros((count, 1)), np.cumsum(slope * steps, axis=-1)], axis=-1)
    flux[:, -1] = 0.0
    return flux, steps, slope


@pytest.mark.parametrize("pieces", [2, 3, 5, 7, 9, 12])
@pytest.mark.parametrize(("alpha", "beta"), [(1.2, 2.2), (1.6, 2.8)])
def test_against_the_loop_by_loop_oracle(pieces: int, alpha: float, beta: float) -> None:
    flux, steps, slope = random_courses(pieces)
    found = closed_loops(flux, steps, slope).loss_shape(alpha, beta)
    expected = [split_loss(*one, alpha, beta) for one in zip(steps, slope, strict=True)]
    assert found == pytest.approx(np.array(expected), rel=1e-9)


@pytest.mark.parametrize("pieces", [5, 7, 12])
def test_swings_are_those_of_rainflow_counting(pieces: int) -> None:
    """The course begun at its lowest point: the standard's ranges, whole cycles (library of the tests)."""
    flux, steps, slope = random_courses(pieces, 60)
    found = closed_loops(flux, steps, slope)
    for row, course in enumerate(flux):
        start = int(np.argmin(course[:-1]))
        closed = np.append(np.roll(course[:-1], -start), course[start])
        counted: Counter[float] = Counter()
        for swing, _, share, *_ in rainflow.extract_cycles(closed):
            counted[round(swing, 9)] += share
        swings = Counter(round(float(swing), 9) for swing in found.swing[row] if swing > 0.0)
        assert {swing: float(count) for swing, count in swings.items()} == counted


@given(st.integers(2, 9), st.integers(0, 1000))
def test_durations_share_out_the_period(pieces: int, seed: int) -> None:
    """Also with corners at equal heights, where rounding decides which comes first."""
    rng = np.random.default_rng(seed)
    flux = rng.integers(0, 4, (50, pieces + 1)) + rng.choice([0.0, 1e-16, -1e-16], (50, pieces + 1))
    flux[:, -1] = flux[:, 0]
    steps = rng.random((50, pieces)) + 0.01
    found = closed_loops(flux, steps, np.diff(flux, axis=-1) / steps)
    assert np.all(found.duration >= 0.0)
    assert found.duration.sum((-1, -2)) == pytest.approx(steps.sum(-1))
    assert np.all(found.swing[..., 1:] <= found.swing[..., :1] + 1e-12)


def test_a_worked_course() -> None:
    """0, 3, 1, 4, 0 in steps of one second: a minor loop of 2 (down 2, up 2) in a major one of 4.

    By hand, alpha = 1, beta = 2, slopes 3, -2, 3, -4: the minor loop takes 1 s at slope 2, 2/3 s at slope 3,
    2 (2 + 2) = 8; the major one 1 s at 3, 1/3 s at 3 and 1 s at 4, 4 (3 + 1 + 4) = 32.
    """
    flux = np.array([0.0, 3.0, 1.0, 4.0, 0.0])
    steps = np.ones(4)
    found = closed_loops(flux, steps, np.diff(flux))
    assert found.swing.tolist() == [4.0, 2.0]
    assert float(found.loss_shape(1.0, 2.0)) == pytest.approx(40.0)


@given(st.floats(0.1, 5.0), st.floats(0.1, 5.0), st.floats(1.0, 2.0), st.floats(2.0, 3.0))
def test_scaling_in_height_and_time(height: float, time: float, alpha: float, beta: float) -> None:
    """Loss per period goes with height^beta and time^(1 - alpha)."""
    flux, steps, slope = random_courses(6, 20)
    one = closed_loops(flux, steps, slope).loss_shape(alpha, beta)
    other = closed_loops(height * flux, time * steps, height / time * slope).loss_shape(alpha, beta)
    assert other == pytest.approx(height**beta * time ** (1.0 - alpha) * one, rel=1e-9)


def test_minor_loops_never_cost_more_than_the_whole_swing() -> None:
    flux, steps, slope = random_courses(7)
    whole = np.sum(np.abs(slope) ** 1.5 * steps, axis=-1) * np.ptp(flux, axis=-1) ** 1.1
    found = closed_loops(flux, steps, slope).loss_shape(1.5, 2.6)
    assert np.all(found <= whole * (1.0 + 1e-12))
    assert np.any(found < 0.95 * whole)
