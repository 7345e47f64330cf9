"""`operating_waveforms` against an independent edge-by-edge calculation: every bridge, scheme and sampling,
low and high pulse numbers, any modulation index and displacement.

Tolerances: fundamental and low pulse numbers 0.1 %; distortion, lines 0.5 % of the fundamental or 1 %; ripple
1 %; device currents 0.5 % without ripple, 1 % with it; capacitor and commutated currents 1 %.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from level_oracle import Case

from models.waveforms.legs import SAMPLINGS
from models.waveforms.operating_waveforms import OperatingWaveforms, operating_waveforms

TWO, NPC, T = "two-level", "neutral-point clamped", "T-type"
FULL, SIX = "single-phase full bridge", "three-phase six-switch bridge"
HALF3, FULL3, THREE3 = (
    "single-phase three-level half bridge",
    "single-phase three-level full bridge",
    "three-phase three-level bridge",
)
WIDE = 2.0 / np.sqrt(3.0)
SPACE: list[tuple[str, str, str, str, float]] = [  # bridge, scheme, leg type, the oracle's name, limit
    *[(FULL, name, TWO, name, 1.0) for name in ("bipolar", "unipolar", "one leg at line frequency")],
    (SIX, "sine-triangle", TWO, "sine-triangle", 1.0),
    *[
        (SIX, name, TWO, name, WIDE)
        for name in (
            "third harmonic one sixth",
            "centred space vector",
            "discontinuous clamped at voltage peak",
            "discontinuous following the current",
        )
    ],
    *[
        (bridge, scheme, leg, name, limit)
        for leg in (NPC, T)
        for bridge, scheme, name, limit in (
            (HALF3, "phase disposition", "phase disposition, one leg", 1.0),
            (FULL3, "phase disposition", "phase disposition, two legs", 1.0),
            (THREE3, "phase disposition", "phase disposition, three legs", 1.0),
            (THREE3, "phase disposition with common-mode injection",
             "phase disposition with common-mode injection", WIDE),
        )
    ],
]  # fmt: skip
IDS = [f"{name}, {leg}" for _, _, leg, name, _ in SPACE]
VOLTS, AMPERES, LINE = 700.0, 20.0, 50.0


def computed(
    entry: tuple[str, str, str, str, float], case: Case, inductance: float | None = None
) -> OperatingWaveforms:
    """The same operating point by the program, in volts and amperes."""
    bridge, scheme, leg = entry[:3]
    peak = np.sqrt(2.0) * AMPERES
    unit = case.ripple_unit * peak
    henry = VOLTS / (unit * case.ratio * LINE) if unit else 1e6
    return operating_waveforms(
        bridge=bridge, modulation=scheme, modulation_index=case.index, displacement=case.lag,
        dc_voltage=VOLTS, inductance=inductance or henry, switching_frequency=case.ratio * LINE,
        line_frequency=LINE, current=AMPERES, sampling=case.sampling,
        leg_type=None if leg == TWO else leg, conduction_angle=case.conduction,
    )  # fmt: skip


def near(found: Any, expected: float, relative: float, absolute: float, what: str) -> None:
    assert float(found) == pytest.approx(expected, rel=relative, abs=absolute), what


def compare(
    entry: tuple[str, str, str, str, float], case: Case, currents: float, lines: float = 0.005
) -> None:
    """All quantities of 2 in the issue's order: voltages, ripple, devices, commutations, dc side."""
    one, peak = computed(entry, case), np.sqrt(2.0) * AMPERES
    output = case.output()
    first = abs(case.harmonic(output, 1))
    if first < 1e-6:  # clamped legs at three pulses may switch all together
        assert float(one.voltage_thd) == np.inf
        return
    near(one.fundamental_peak, VOLTS * first, 1e-3, 1e-6, "fundamental")
    thd = np.sqrt(max(case.mean_square(output) - 0.5 * first**2, 0.0) * 2.0) / first
    near(one.voltage_thd, thd, max(0.01, 2.0 * lines), lines, "distortion")
    orders = np.unique(
        np.concatenate([np.arange(2, 14), *[m * case.ratio + np.arange(-5, 6) for m in (1, 2, 3)]])
    )
    orders = orders[orders >= 2]
    for pieces, found, what in (
        (output, one.spectrum(orders), "line"),
        (case.common, one.common_mode_spectrum(orders), "common-mode line"),
    ):
        expected = VOLTS * np.abs([case.harmonic(pieces, int(order)) for order in orders])
        room = np.maximum(lines * VOLTS * first, 2.0 * lines * expected)
        assert np.all(np.abs(found - expected) <= room), (what, orders[np.abs(found - expected) > room])
    if case.ripple_unit:
        near(one.ripple_rms, peak * case.ripple_rms(), 0.01, 0.0, "ripple rms")
        near(one.ripple_peak_to_peak, peak * case.ripple_peak_to_peak(), 0.01, 0.0, "greatest ripple")
    for name, (average, rms) in case.positions().items():
        near(one.positions[name].average, peak * average, currents, currents * 0.01 * peak, name)
        near(one.positions[name].rms, peak * rms, currents, currents * 0.02 * peak, name)
    number, hard, off = case.commutated()
    assert int(one.commutation_number) == number, "commutations"
    room = 0.01 * peak * (hard + off) + 1e-6 * peak
    near(one.turn_on_sum, peak * hard, 0.01, room, "currents turned on")
    near(one.turn_off_sum, peak * off, 0.01, room, "currents turned off")
    whole, double, neutral = case.rails()
    near(one.dc_capacitor_rms, peak * whole, 0.01, 0.0, "capacitor current")
    near(one.dc_double_frequency_rms, peak * double, 0.01, 0.01 * peak, "double-frequency current")
    near(one.neutral_rms, peak * neutral, 0.01, 1e-6, "neutral-point current")


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("ratio", [21, 40, 99])
def test_naturally_sampled(entry: tuple[str, str, str, str, float], ratio: int) -> None:
    rng = np.random.default_rng([ratio, len(entry[3])])
    for ripple in (0.0, 0.3):
        index, lag = rng.uniform(0.1, entry[4]), rng.uniform(-np.pi / 2, np.pi / 2)
        compare(entry, Case(entry[3], entry[2], index, lag, ratio, ripple), 0.01 if ripple else 0.005)


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("sampling", SAMPLINGS[1:])
@pytest.mark.parametrize("ratio", [21, 63])
def test_regularly_sampled(entry: tuple[str, str, str, str, float], sampling: str, ratio: int) -> None:
    rng = np.random.default_rng([ratio, len(sampling)])
    index, lag = rng.uniform(0.1, entry[4]), rng.uniform(-np.pi / 2, np.pi / 2)
    compare(entry, Case(entry[3], entry[2], index, lag, ratio, 0.2, sampling), 0.01)


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("ratio", [3, 5, 6, 9, 12, 15, 20])
def test_low_pulse_numbers_are_exact(entry: tuple[str, str, str, str, float], ratio: int) -> None:
    """Edges, spectrum and ripple to 0.1 %."""
    index = 0.55 + 0.02 * ratio
    compare(entry, Case(entry[3], entry[2], min(index, entry[4]), 0.5, ratio, 0.1), 0.01, lines=0.0005)


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
def test_high_pulse_numbers(entry: tuple[str, str, str, str, float]) -> None:
    compare(entry, Case(entry[3], entry[2], 0.83, -0.6, 999, 0.4), 0.01)


@settings(max_examples=40, deadline=None)
@given(
    entry=st.sampled_from(SPACE),
    share=st.floats(0.09, 1.0),
    lag=st.floats(-np.pi / 2, np.pi / 2),
    ratio=st.integers(21, 400),
    ripple=st.floats(0.01, 1.5),
    sampling=st.sampled_from(SAMPLINGS),
)
def test_anywhere(
    entry: tuple[str, str, str, str, float],
    share: float,
    lag: float,
    ratio: int,
    ripple: float,
    sampling: str,
) -> None:
    compare(entry, Case(entry[3], entry[2], share * entry[4], lag, ratio, ripple, sampling), 0.01)


@pytest.mark.parametrize("lag", [-1.4, 0.0, 0.9])
@pytest.mark.parametrize(
    ("bridge", "scheme", "conduction"),
    [(FULL, "square wave", np.pi), (FULL, "quasi-square wave", 2.0), (FULL, "quasi-square wave", 2.6),
     (SIX, "six-step", np.pi)],
)  # fmt: skip
def test_line_switched(bridge: str, scheme: str, conduction: float, lag: float) -> None:
    """No carrier: one pulse number like another; ripple counts over the line period."""
    entry = (bridge, scheme, TWO, scheme, 1.0)
    for ratio, ripple in ((1, 0.0), (1, 0.4), (21, 0.4)):
        compare(entry, Case(scheme, TWO, 0.8, lag, ratio, ripple, conduction=conduction), 0.01, lines=0.0005)
