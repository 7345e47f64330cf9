"""The registry of bridges and schemes: what every entry must obey, whatever it is."""

from __future__ import annotations

import numpy as np
import pytest

from models.waveforms.bridges import BRIDGES, FULL_BRIDGE, SIX_SWITCH_BRIDGE, Bridge, Modulation

ENTRIES = [
    pytest.param(bridge, scheme, id=scheme.name)
    for bridge in BRIDGES.values()
    for scheme in bridge.modulations
]
ANGLE = 2.0 * np.pi * (np.arange(1440) + 0.5) / 1440


def references(scheme: Modulation, index: float) -> np.ndarray:
    return scheme.references(ANGLE, np.full_like(ANGLE, index))


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
@pytest.mark.parametrize("share", [0.1, 0.5, 1.0])
def test_references_stay_between_the_rails(bridge: Bridge, scheme: Modulation, share: float) -> None:
    found = references(scheme, share * scheme.linear_limit)
    assert found.shape == (len(ANGLE), len(bridge.voltage_weights))
    assert np.all(np.abs(found) <= 1.0 + 1e-9)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_references_leave_the_rails_beyond_the_limit(bridge: Bridge, scheme: Modulation) -> None:
    assert np.abs(references(scheme, 1.02 * scheme.linear_limit)).max() > 1.0


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
@pytest.mark.parametrize("index", [0.2, 0.7, 1.0])
def test_average_filter_voltage_is_the_sine_asked_for(
    bridge: Bridge, scheme: Modulation, index: float
) -> None:
    """Whatever zero sequence or fold a scheme adds must cancel in the filter voltage."""
    found = 0.5 * references(scheme, index) @ np.array(bridge.voltage_weights)
    assert found == pytest.approx(bridge.index_base * index * np.sin(ANGLE), abs=1e-12)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_half_wave_symmetry(bridge: Bridge, scheme: Modulation) -> None:
    found = references(scheme, 0.8)
    assert np.roll(found, len(ANGLE) // 2, axis=0) == pytest.approx(-found, abs=1e-12)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_legs_follow_one_another(bridge: Bridge, scheme: Modulation) -> None:
    """Legs that are not modelled repeat a modelled one a third of a period later."""
    if bridge.phases == 3:
        found = references(scheme, 0.8)
        for leg in (1, 2):
            assert np.roll(found[:, 0], leg * len(ANGLE) // 3) == pytest.approx(found[:, leg], abs=1e-12)
    assert len(bridge.modelled_legs) * bridge.leg_copies == len(bridge.voltage_weights)


def test_clamped_leg_rests_for_a_third_of_the_time() -> None:
    index = SIX_SWITCH_BRIDGE.modulation_index("discontinuous clamped at voltage peak")
    found = references(SIX_SWITCH_BRIDGE.modulations[index], 0.7)
    assert np.mean(np.abs(found[:, 0]) >= 1.0 - 1e-12) == pytest.approx(1.0 / 3.0, abs=2e-3)


def test_unknown_scheme() -> None:
    with pytest.raises(
        ValueError, match="'trapezoidal' of single-phase full bridge: expected one of bipolar"
    ):
        FULL_BRIDGE.modulation_index("trapezoidal")
    assert [FULL_BRIDGE.modulation_index(scheme.name) for scheme in FULL_BRIDGE.modulations] == [0, 1, 2]
