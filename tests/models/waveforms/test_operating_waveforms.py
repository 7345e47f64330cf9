"""The call itself: bad input, shapes, what it says where something vanishes, and that its parts agree."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from models.waveforms.bridges import ALL_BRIDGES, BRIDGES
from models.waveforms.legs import SAMPLINGS
from models.waveforms.operating_waveforms import OperatingWaveforms, operating_waveforms

FULL, SIX, HALF = (
    "single-phase full bridge",
    "three-phase six-switch bridge",
    "single-phase three-level half bridge",
)
USUAL: dict[str, Any] = {
    "bridge": FULL,
    "modulation": "unipolar",
    "modulation_index": 0.8,
    "displacement": 0.3,
    "dc_voltage": 400.0,
    "inductance": 1e-3,
    "switching_frequency": 2250.0,
    "line_frequency": 50.0,
    "current": 10.0,
}


def waveforms(**changes: Any) -> OperatingWaveforms:
    return operating_waveforms(**(USUAL | changes))


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"bridge": "buck"}, "bridge 'buck': expected one of"),
        ({"modulation": "sine"}, "modulation 'sine' of single-phase full bridge: expected one of bipolar"),
        ({"sampling": "regular"}, "sampling 'regular': expected one of natural"),
        ({"leg_type": "T-type"}, "leg type 'T-type' of single-phase full bridge: expected two-level"),
        ({"leg": 2}, "leg 2 of single-phase full bridge: expected 0 to 1"),
        ({"modulation_index": 1.01}, "modulation index 1.01: expected 0 to 1.0000 for unipolar"),
        ({"modulation_index": -0.1}, "modulation index -0.1: expected 0 to 1.0000"),
        ({"modulation_index": np.nan}, "modulation index nan"),
        ({"displacement": np.nan}, "displacement nan: expected a finite number"),
        ({"dc_voltage": 0.0}, "dc_voltage 0.0: expected a number above 0"),
        ({"dc_voltage": np.inf}, "dc_voltage inf: expected a finite number"),
        ({"inductance": -1e-3}, "inductance -0.001: expected a number above 0"),
        ({"inductance": np.nan}, "inductance nan: expected a number above 0"),
        ({"switching_frequency": 0.0}, "switching_frequency: expected finite numbers above 0"),
        ({"switching_frequency": np.inf}, "switching_frequency: expected finite numbers above 0"),
        ({"line_frequency": 0.0}, "line_frequency: expected finite numbers above 0"),
        ({"line_frequency": np.nan}, "line_frequency: expected finite numbers above 0"),
        ({"current": -1.0}, "current -1.0: expected a finite number of at least 0"),
        ({"current": np.nan}, "current nan: expected a finite number of at least 0"),
        ({"carrier_offset": np.inf}, "carrier_offset inf: expected a finite number"),
        ({"conduction_angle": 0.0}, "conduction_angle 0.0: expected above 0 to pi"),
        ({"conduction_angle": 3.2}, "conduction_angle 3.2: expected above 0 to pi"),
        ({"current": [1.0, 2.0], "dc_voltage": [1.0, 2.0, 3.0]}, "shape mismatch"),
    ],
)
def test_bad_input(changes: dict[str, Any], message: str) -> None:
    with pytest.raises(ValueError, match=message):
        waveforms(**changes)


def test_names_are_checked_where_there_are_no_points_at_all() -> None:
    for changes in ({"bridge": "buck"}, {"modulation": "sine"}, {"sampling": "regular"}, {"leg": -1}):
        with pytest.raises(ValueError, match="expected"):
            waveforms(modulation_index=np.zeros(0), **changes)


def test_bad_orders() -> None:
    one = waveforms()
    for orders in ([0], [1.5], [-3]):
        with pytest.raises(ValueError, match="expected whole numbers of at least 1"):
            one.spectrum(orders)
    with pytest.raises(ValueError, match="expected whole numbers of at least 1"):
        one.sidebands(0, 0)


@pytest.mark.parametrize("shape", [(), (1,), (3,), (2, 3), (2, 1, 2), (0,), (2, 0)])
def test_shapes(shape: tuple[int, ...]) -> None:
    found = waveforms(modulation_index=np.full(shape, 0.5))
    assert found.ripple_rms.shape == found.dc_capacitor_rms.shape == found.periods.shape == shape
    assert set(found.positions) == {"T1", "D1", "T2", "D2"}
    assert found.positions["T1"].turn_on_sum.shape == shape
    assert found.spectrum([1, 3, 5]).shape == (*shape, 3)
    assert found.sidebands(2, [-1, 1]).shape == found.common_mode_sidebands(2, [-1, 1]).shape == (*shape, 2)
    assert found.dc_spectrum(2).shape == (*shape, 1)
    assert found.local_ripple(np.linspace(0.0, 3.0, 4)).shape == (*shape, 4)


def test_broadcasting() -> None:
    found = waveforms(dc_voltage=np.array([[300.0], [400.0]]), switching_frequency=[1050.0, 2250.0, 4950.0])
    assert found.switching_frequency.tolist() == [[1050.0, 2250.0, 4950.0]] * 2
    assert float(found.ripple_rms[1, 2]) == float(waveforms(switching_frequency=4950.0).ripple_rms)


def test_carrier_goes_to_the_nearest_whole_multiple() -> None:
    taken = waveforms(switching_frequency=[2230.0, 2270.0, 10.0]).switching_frequency
    assert taken.tolist() == [2250.0, 2250.0, 50.0]


@pytest.mark.parametrize("bridge", BRIDGES)
def test_named_three_level_bridges_have_their_own_legs(bridge: str) -> None:
    scheme = BRIDGES[bridge].modulations[0].name
    found = waveforms(bridge=bridge, modulation=scheme, leg_type=None)
    expected = {"neutral-point clamped": 10, "T-type": 8, "two-level": 4}[BRIDGES[bridge].leg_type]
    assert len(found.positions) == expected
    if BRIDGES[bridge].levels == 3:
        other = {"neutral-point clamped", "T-type"} - {BRIDGES[bridge].leg_type}
        with pytest.raises(ValueError, match="leg type"):
            waveforms(bridge=bridge, modulation=scheme, leg_type=other.pop())


@pytest.mark.parametrize(
    ("bridge", "scheme"),
    [(name, one.name) for name, entry in ALL_BRIDGES.items() for one in (*entry.modulations, *entry.further)],
)
@pytest.mark.parametrize("sampling", SAMPLINGS)
def test_nothing_is_not_a_number(bridge: str, scheme: str, sampling: str) -> None:
    """M of 0 and of the limit, no current, no ripple: all finite, but the distortion of no fundamental."""
    limit = ALL_BRIDGES[bridge].scheme(scheme).linear_limit
    found = waveforms(
        bridge=bridge, modulation=scheme, modulation_index=[0.0, limit, 0.5, 0.5, 0.0],
        current=[10.0, 10.0, 0.0, 10.0, 0.0], inductance=[1e-3, 1e-3, 1e-3, np.inf, np.inf],
        switching_frequency=[450.0, 1050.0, 1000.0, 150.0, 250.0], sampling=sampling,
    )  # fmt: skip
    for name, value in vars(found).items():
        if name not in ("periods", "positions", "voltage_thd"):
            assert np.all(np.isfinite(value)), name
    for part in found.positions.values():
        assert all(np.all(np.isfinite(value)) for value in vars(part).values())
    if any(ALL_BRIDGES[bridge].scheme(scheme).switching_legs):
        assert np.isinf(found.voltage_thd[0])
    assert found.ripple_rms[3] == found.ripple_peak_to_peak[3] == 0.0
    assert all(float(part.average[4]) == 0.0 for part in found.positions.values())


def test_current_without_voltage_lags_the_reference() -> None:
    """At M = 0 the bridge has no fundamental; the current's phase then counts from sin(theta)."""
    found = waveforms(modulation_index=0.0, displacement=0.4, inductance=np.inf)
    angle = np.linspace(0.0, 6.0, 50)
    current = found.periods.item().line_current(angle)[0]
    assert current == pytest.approx(10.0 * np.sqrt(2.0) * np.sin(angle - 0.4))


def test_pulses_vanish_at_the_limit() -> None:
    """Unipolar at M = 1 and 40 pulses: the reference meets the carrier's peak at 90 degrees, which is no
    pulse.
    """
    found = waveforms(modulation_index=[1.0, 0.99], switching_frequency=2000.0, carrier_offset=np.pi)
    assert float(found.commutation_number[0]) < 40.0
    assert float(found.commutation_number[1]) == 40.0


def test_lookups_agree() -> None:
    found = waveforms(bridge=SIX, modulation="centred space vector", modulation_index=[0.4, 1.1])
    pulses = 45
    assert found.sidebands([1, 2], [-2, 1]) == pytest.approx(found.spectrum([pulses - 2, 2 * pulses + 1]))
    assert found.sidebands(1, -pulses - 1) == pytest.approx(found.spectrum([1]))  # order -1 is order 1
    # multiples of three are equal in all legs
    assert found.leg_spectrum([3, pulses]) == pytest.approx(found.common_mode_spectrum([3, pulses]))
    assert found.common_mode_sidebands(1, 0) == pytest.approx(found.common_mode_spectrum([pulses]))
    middles = np.arange(2 * pulses) * np.pi / pulses
    assert found.local_ripple(middles).max(-1) == pytest.approx(found.ripple_peak_to_peak)
    assert found.local_ripple(middles + 2.0 * np.pi) == pytest.approx(found.local_ripple(middles))
    assert np.all(found.ripple_peak <= found.ripple_peak_to_peak)
    assert np.all(found.ripple_peak >= 0.4 * found.ripple_peak_to_peak)


def test_dc_spectrum_holds_the_capacitor_current() -> None:
    """Parseval, to twelve carriers; its second line is the double-frequency current."""
    found = waveforms()
    lines = found.dc_spectrum(np.arange(1, 12 * 45))
    assert float(lines[1]) / np.sqrt(2.0) == pytest.approx(float(found.dc_double_frequency_rms))
    total = float(np.sqrt(0.5 * np.sum(lines**2)))
    assert 0.98 * float(found.dc_capacitor_rms) < total <= float(found.dc_capacitor_rms) * (1.0 + 1e-9)


def test_local_ripple_of_unipolar_switching() -> None:
    """V_dc |m| (1 - |m|)/(2 L f_s) at every angle (closed form of the common books); 2 %, since it grows
    within the window.
    """
    found = waveforms(switching_frequency=999 * 50.0)
    angle = np.array([0.2, 0.6, 1.0, 1.5, 2.5, 4.0])
    level = np.abs(0.8 * np.sin(angle))
    expected = 400.0 * level * (1.0 - level) / (2.0 * 1e-3 * 999 * 50.0)
    assert found.local_ripple(angle) == pytest.approx(expected, rel=0.02)


def test_positions_and_leg_count_the_same_commutations() -> None:
    """Hard turn-ons of all switches are the leg's, and as many diodes recover; away from the limit no leg
    jumps over two levels.
    """
    for bridge, scheme, leg_type in (
        (FULL, "bipolar", None),
        (HALF, "phase disposition", "T-type"),
        (HALF, "phase disposition", "neutral-point clamped"),
        (SIX, "third harmonic one sixth", None),
    ):
        found = waveforms(bridge=bridge, modulation=scheme, leg_type=leg_type)
        switches = [part for name, part in found.positions.items() if name.startswith("T")]
        diodes = [part for name, part in found.positions.items() if name.startswith("D")]
        assert sum(int(one.turn_on_number) for one in switches) == int(found.hard_number)
        assert sum(int(one.turn_off_number) for one in diodes) == int(found.hard_number)
        assert sum(int(one.turn_off_number) for one in switches) == int(found.turn_off_number)
        assert sum(float(one.turn_off_sum) for one in switches) == pytest.approx(float(found.turn_off_sum))
        assert sum(float(one.turn_on_sum) for one in switches) == pytest.approx(float(found.turn_on_sum))


def test_soft_turn_on_where_the_ripple_reverses_the_current() -> None:
    """Ripple far above the load current: every switch turns off a current and turns on soft."""
    found = waveforms(modulation="bipolar", modulation_index=0.1, current=0.01)
    assert int(found.hard_number) == 0
    assert int(found.turn_off_number) == 2 * int(found.commutation_number)


def test_a_leg_at_line_frequency_follows_the_sampler() -> None:
    """With regular sampling both legs change with the polarity that the sampler sees, so that no pulse of the
    wrong sign is left at the zeros: the output never has the sign opposite to the sampled reference.
    """
    for sampling in SAMPLINGS[1:]:
        one = waveforms(modulation="one leg at line frequency", sampling=sampling, switching_frequency=1050.0)
        period = one.periods.item()
        level, middle = period.output_levels[0], period.middles
        delay = np.pi / 21 * (2.0 if sampling.startswith("symmetrical") else 1.0)
        positive = (middle > delay) & (middle < np.pi)
        assert level[positive].min() == 0.0
        assert level[(middle > np.pi + delay)].max() == 0.0
        assert float(one.fundamental_peak) == pytest.approx(320.0, rel=5e-3)
