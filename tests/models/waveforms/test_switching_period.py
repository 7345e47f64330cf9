"""One switching period: volt-second laws by hand, symmetries, scaling."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.waveforms.switching_period import SwitchingPeriod

DUTY = st.floats(0.0, 1.0)


def bipolar(m: float) -> SwitchingPeriod:
    duty = 0.5 * (1.0 + np.array([m, -m]))
    return SwitchingPeriod(duty, (1, -1), (1.0, -1.0))


def unipolar(m: float) -> SwitchingPeriod:
    return SwitchingPeriod(0.5 * (1.0 + np.array([m, -m])), (1, 1), (1.0, -1.0))


def three_phase(duty: tuple[float, float, float]) -> SwitchingPeriod:
    return SwitchingPeriod(np.array(duty), (1, 1, 1), (2.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0))


@given(st.floats(-1.0, 1.0))
def test_bipolar_ripple(m: float) -> None:
    """V_dc (1 - m^2)/(2 L f_s), a triangle: volt-second balance."""
    period = bipolar(m)
    swing = 0.5 * (1.0 - m * m)
    assert period.peak_to_peak == pytest.approx(swing, abs=1e-12)
    assert period.mean_square == pytest.approx(swing**2 / 12.0, abs=1e-12)
    assert period.voltage_mean_square == pytest.approx(1.0)


@given(st.floats(-1.0, 1.0))
def test_unipolar_ripple(m: float) -> None:
    """V_dc |m| (1 - |m|)/(2 L f_s), a triangle of twice the frequency: volt-second balance."""
    period = unipolar(m)
    swing = 0.5 * abs(m) * (1.0 - abs(m))
    assert period.peak_to_peak == pytest.approx(swing, abs=1e-12)
    assert period.mean_square == pytest.approx(swing**2 / 12.0, abs=1e-12)
    assert period.voltage_mean_square == pytest.approx(abs(m), abs=1e-12)


@given(st.floats(0.0, 1.0))
def test_one_leg_ripple(m: float) -> None:
    """V_dc |m| (1 - |m|)/(L f_s): one leg switches, the other rests."""
    duty = np.array([m, 0.0])
    period = SwitchingPeriod(duty, (1, 1), (1.0, -1.0))
    assert period.peak_to_peak == pytest.approx(m * (1.0 - m), abs=1e-12)


@given(st.tuples(DUTY, DUTY, DUTY))
def test_flux_closes_and_has_no_mean(duty: tuple[float, float, float]) -> None:
    period = three_phase(duty)
    assert period.flux[-1] == pytest.approx(period.flux[0], abs=1e-12)
    mean = np.sum(period.steps * 0.5 * (period.flux[1:] + period.flux[:-1]))
    assert mean == pytest.approx(0.0, abs=1e-12)
    assert np.sum(period.steps) == pytest.approx(1.0)
    assert np.sum(period.ripple_voltage * period.steps) == pytest.approx(0.0, abs=1e-12)


@given(st.tuples(DUTY, DUTY, DUTY))
def test_swapping_the_other_two_phases_changes_nothing(duty: tuple[float, float, float]) -> None:
    one, other = three_phase(duty), three_phase((duty[0], duty[2], duty[1]))
    assert one.peak_to_peak == pytest.approx(other.peak_to_peak, abs=1e-12)
    assert one.mean_square == pytest.approx(other.mean_square, abs=1e-12)


@given(st.tuples(DUTY, DUTY, DUTY))
def test_mirrored_states_give_the_mirrored_flux(duty: tuple[float, float, float]) -> None:
    """All on-state shares replaced by their complements: the same ripple with the other sign."""
    one = three_phase(duty)
    other = three_phase(tuple(1.0 - share for share in duty))  # type: ignore[arg-type]
    assert one.mean_square == pytest.approx(other.mean_square, abs=1e-12)
    assert one.flux_at_turn_on(0) == pytest.approx(other.flux_at_turn_on(0), abs=1e-9)


@given(st.tuples(DUTY, DUTY, DUTY))
@settings(max_examples=50)
def test_mean_square_lies_between_its_bounds(duty: tuple[float, float, float]) -> None:
    period = three_phase(duty)
    assert 0.0 <= period.mean_square <= (0.5 * period.peak_to_peak) ** 2 + 1e-15


def test_turn_on_comes_at_the_valley_of_a_triangle() -> None:
    for m in (-0.8, 0.0, 0.3, 0.9):
        assert bipolar(m).flux_at_turn_on(0) == pytest.approx(-0.25 * (1.0 - m * m))


@given(st.floats(-0.95, 0.95), st.floats(1.0, 2.0), st.floats(2.0, 3.0))
def test_loss_shape_of_a_triangle(m: float, alpha: float, beta: float) -> None:
    """Slopes 1 - m and 1 + m for the shares (1 + m)/2 and (1 - m)/2 of the period."""
    rising, falling = 0.5 * (1.0 + m), 0.5 * (1.0 - m)
    rates = rising * (1.0 - m) ** alpha + falling * (1.0 + m) ** alpha
    expected = rates * (0.5 * (1.0 - m * m)) ** (beta - alpha)
    assert bipolar(m).loss_shape(alpha, beta) == pytest.approx(expected)


def test_arrays_equal_scalars() -> None:
    duty = np.random.default_rng(2).random((6, 3))
    together = SwitchingPeriod(duty, (1, 1, 1), (2.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0))
    for row, one in enumerate(duty):
        alone = three_phase(tuple(one))
        assert together.peak_to_peak[row] == pytest.approx(float(alone.peak_to_peak), rel=1e-12)
        assert together.flux_at_turn_on(0)[row] == pytest.approx(float(alone.flux_at_turn_on(0)), rel=1e-12)
