"""`operating_waveforms` against an independent edge-by-edge calculation: every bridge, scheme and sampling,
low and high pulse numbers, any modulation index, displacement, ripple and carrier phase.

Both roads are exact, so that they must agree far better than an engineer needs: 1e-6 of spectra, 0.05 % of
currents (the oracle integrates by Simpson's rule over the current's zeros). Numbers of commutations must be
equal.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from level_oracle import TURN, Case

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


def computed(entry: tuple[str, str, str, str, float], case: Case, leg: int = 0) -> OperatingWaveforms:
    """The same operating point by the program, in volts and amperes."""
    bridge, scheme, leg_type = entry[:3]
    unit = case.ripple_unit * np.sqrt(2.0) * AMPERES
    return operating_waveforms(
        bridge=bridge, modulation=scheme, modulation_index=case.index, displacement=case.lag,
        dc_voltage=VOLTS, inductance=VOLTS / (unit * case.ratio * LINE) if unit else np.inf,
        switching_frequency=case.ratio * LINE, line_frequency=LINE, current=AMPERES, sampling=case.sampling,
        leg_type=None if leg_type == TWO else leg_type, carrier_offset=case.offset,
        conduction_angle=case.conduction, leg=leg,
    )  # fmt: skip


def near(found: Any, expected: float, what: str, *, relative: float = 5e-4, absolute: float = 0.0) -> None:
    assert float(found) == pytest.approx(expected, rel=relative, abs=absolute), what


def compare(entry: tuple[str, str, str, str, float], case: Case, leg: int = 0) -> None:
    """All quantities: voltages, ripple, devices, commutations, dc side."""
    one = computed(entry, case, leg)
    if abs(case.harmonic(case.output(), 1)) < 1e-6:  # clamped legs at three pulses may switch all together
        assert float(one.voltage_thd) == np.inf
        return
    compare_voltages(one, case)
    if case.ripple_unit:
        compare_ripple(one, case)
    compare_legs(one, case, leg)
    peak = np.sqrt(2.0) * AMPERES
    for name, expected in case.rails().items():
        near(getattr(one, f"dc_{name}", None) if "neutral" not in name else getattr(one, name),
             peak * expected, name, absolute=5e-4 * peak)  # fmt: skip


def compare_voltages(one: OperatingWaveforms, case: Case) -> None:
    output = case.output()
    first = abs(case.harmonic(output, 1))
    near(one.fundamental_peak, VOLTS * first, "fundamental", relative=1e-6)
    thd = np.sqrt(max(case.mean_square(output) - 0.5 * first**2, 0.0) * 2.0) / first
    near(one.voltage_thd, thd, "distortion", relative=1e-5)
    mean = float(np.sum(case.common * np.diff(case.edges)) / TURN)
    near(one.common_mode_rms, VOLTS * np.sqrt(case.mean_square(case.common) + mean**2), "common mode",
         relative=1e-5, absolute=1e-3)  # fmt: skip
    multiple, side = (axis.ravel() for axis in np.meshgrid([0, 1, 2, 3], np.arange(-7, 14)))
    chosen = (multiple * case.ratio + side) >= 1
    multiple, side = multiple[chosen], side[chosen]
    for pieces, found, what in (
        (output, one.sidebands(multiple, side), "line"),
        (case.common, one.common_mode_sidebands(multiple, side), "common-mode line"),
    ):
        orders = multiple * case.ratio + side
        expected = VOLTS * np.abs([case.harmonic(pieces, int(order)) for order in orders])
        np.testing.assert_allclose(found, expected, rtol=1e-5, atol=2e-6 * VOLTS * first, err_msg=what)


def compare_ripple(one: OperatingWaveforms, case: Case) -> None:
    peak = np.sqrt(2.0) * AMPERES
    near(one.ripple_rms, peak * case.ripple_rms(), "ripple rms", relative=2e-3)
    near(one.ripple_peak, peak * case.ripple_peak(), "greatest ripple", relative=2e-3)
    near(one.ripple_peak_to_peak, peak * case.ripple_peak_to_peak(), "peak to peak", relative=2e-3)
    if not case.line_switched:
        middles = np.array([0.3, 1.5, 4.4])
        expected = [peak * case.local_ripple(float(middle)) for middle in middles]
        np.testing.assert_allclose(one.local_ripple(middles), expected, rtol=5e-3)


def compare_legs(one: OperatingWaveforms, case: Case, leg: int) -> None:
    peak = np.sqrt(2.0) * AMPERES
    for name, (average, rms) in case.positions(leg).items():
        near(one.positions[name].average, peak * average, name, relative=1e-3, absolute=1e-5 * peak)
        near(one.positions[name].rms, peak * rms, name, relative=1e-3, absolute=1e-4 * peak)
    rising, hard, turned_on, turned_off = case.commutated(leg)
    assert int(one.commutation_number) == rising
    assert int(one.hard_number) == hard
    assert int(one.hard_number + one.turn_off_number) == 2 * rising
    near(one.turn_on_sum, peak * turned_on, "currents turned on", absolute=1e-6 * peak)
    near(one.turn_off_sum, peak * turned_off, "currents turned off", absolute=1e-6 * peak)
    for name, (taken, taken_sum, left, left_sum) in case.taken_over(leg).items():
        position = one.positions[name]
        assert (int(position.turn_on_number), int(position.turn_off_number)) == (taken, left), name
        near(position.turn_on_sum, peak * taken_sum, name, absolute=1e-6 * peak)
        near(position.turn_off_sum, peak * left_sum, name, absolute=1e-6 * peak)


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("sampling", SAMPLINGS)
@pytest.mark.parametrize("ratio", [3, 4, 5, 6, 9, 12, 15, 20, 21, 40, 63, 200])
def test_grid(entry: tuple[str, str, str, str, float], sampling: str, ratio: int) -> None:
    """Every scheme, sampling and band of pulse numbers: even and odd, multiples of three and not."""
    rng = np.random.default_rng([ratio, len(entry[3]), len(sampling)])
    index, lag = rng.uniform(0.1, entry[4]), rng.uniform(-np.pi / 2, np.pi / 2)
    ripple = rng.choice([0.0, 0.1, 0.6])
    compare(entry, Case(entry[3], entry[2], index, lag, ratio, ripple, sampling))


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
def test_high_pulse_numbers(entry: tuple[str, str, str, str, float]) -> None:
    compare(entry, Case(entry[3], entry[2], 0.83, -0.6, 999, 0.4))


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("lag", [-np.pi / 2, 0.0, np.pi / 2])
@pytest.mark.parametrize("share", [0.1, 0.9999])
def test_corners(entry: tuple[str, str, str, str, float], lag: float, share: float) -> None:
    """Power factor 0 and 1, least and nearly greatest index; at the limit itself pulses vanish."""
    compare(entry, Case(entry[3], entry[2], share * entry[4], lag, 45, 0.3))


@pytest.mark.parametrize("entry", SPACE, ids=IDS)
@pytest.mark.parametrize("offset", [0.5 * np.pi, np.pi, 5.1])
@pytest.mark.parametrize("ratio", [5, 14, 166])
def test_carrier_phases(entry: tuple[str, str, str, str, float], offset: float, ratio: int) -> None:
    """Jumps of clamped references then fall anywhere within a carrier period."""
    for sampling in SAMPLINGS:
        compare(entry, Case(entry[3], entry[2], 0.5711, 0.4, ratio, 0.3, sampling, offset=offset))


@pytest.mark.parametrize("sampling", SAMPLINGS)
@pytest.mark.parametrize("ratio", [4, 21, 99])
def test_leg_at_line_frequency(sampling: str, ratio: int) -> None:
    """Its two switches change twice a line period, with whatever sampling."""
    name = "one leg at line frequency"
    case = Case(name, TWO, 0.7, 0.6, ratio, 0.3, sampling)
    compare((FULL, name, TWO, name, 1.0), case, leg=1)
    assert int(computed((FULL, name, TWO, name, 1.0), case, leg=1).commutation_number) == 1


@settings(max_examples=60, deadline=None)
@given(
    entry=st.sampled_from(SPACE),
    share=st.floats(0.09, 0.999),
    lag=st.floats(-np.pi / 2, np.pi / 2),
    ratio=st.integers(3, 300),
    ripple=st.floats(0.01, 1.5),
    sampling=st.sampled_from(SAMPLINGS),
    offset=st.floats(0.0, 6.28),
)
def test_anywhere(
    entry: tuple[str, str, str, str, float],
    share: float,
    lag: float,
    ratio: int,
    ripple: float,
    sampling: str,
    offset: float,
) -> None:
    compare(entry, Case(entry[3], entry[2], share * entry[4], lag, ratio, ripple, sampling, offset=offset))


@settings(max_examples=20, deadline=None)
@given(
    volts=st.floats(10.0, 5e3),
    henry=st.floats(1e-5, 1e-1),
    hertz=st.floats(40.0, 450.0),
    amperes=st.floats(0.1, 1e3),
)
def test_units(volts: float, henry: float, hertz: float, amperes: float) -> None:
    """Volts, henries, hertz and amperes against the oracle's units of its own."""
    case = Case("unipolar", TWO, 0.8, 0.5, 45, volts / (henry * 45 * hertz) / (np.sqrt(2.0) * amperes))
    found = operating_waveforms(
        bridge=FULL, modulation="unipolar", modulation_index=0.8, displacement=0.5, dc_voltage=volts,
        inductance=henry, switching_frequency=45 * hertz, line_frequency=hertz, current=amperes,
    )  # fmt: skip
    peak = np.sqrt(2.0) * amperes
    near(found.ripple_rms, peak * case.ripple_rms(), "ripple", relative=2e-3)
    near(found.positions["T1"].rms, peak * case.positions()["T1"][1], "switch", relative=2e-3)
    near(found.turn_off_sum, peak * case.commutated()[3], "turn-off", relative=2e-3)
    near(found.dc_capacitor_rms, peak * case.rails()["capacitor_rms"], "capacitor", relative=2e-3)
    near(found.fundamental_peak, volts * 0.8, "fundamental", relative=1e-3)


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
        compare(entry, Case(scheme, TWO, 0.8, lag, ratio, ripple, conduction=conduction))
