"""Double Fourier series: Parseval, Bessel functions, what is listed and what the rest lines close."""

from __future__ import annotations

import numpy as np
import pytest

from models.waveforms.bridges import BRIDGES, FULL_BRIDGE, SIX_SWITCH_BRIDGE, Bridge, Modulation
from models.waveforms.spectrum import CARRIER_GROUPS, carrier_coefficients, leg_sideband, sidebands
from models.waveforms.switching_period import switching_periods

ENTRIES = [
    pytest.param(bridge, scheme, id=f"{bridge.name}, {scheme.name}")
    for bridge in BRIDGES.values()
    for scheme in bridge.modulations
]
INDEX = np.array([0.1, 0.45, 0.8, 0.97])
WORKING = INDEX > 0.4


def mean_square(bridge: Bridge, scheme: Modulation) -> np.ndarray:
    angle = 2.0 * np.pi * (np.arange(3600) + 0.5) / 3600
    period = switching_periods(bridge, scheme, angle, INDEX[:, None])
    return period.voltage_mean_square.mean(-1)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_parseval(bridge: Bridge, scheme: Modulation) -> None:
    """Fundamental, all lines and all rest lines together have the mean square of the switched voltage."""
    exact = mean_square(bridge, scheme)
    found = sidebands(bridge, scheme, INDEX, exact, 24)
    fundamental = 0.5 * (bridge.index_base * INDEX) ** 2
    assert fundamental + 0.5 * np.sum(found.amplitude**2, axis=-1) == pytest.approx(exact, rel=1e-9)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_expanded_groups_leave_something_but_little(bridge: Bridge, scheme: Modulation) -> None:
    """The closing line is a true remainder: groups beyond the sixth hold some, at working indexes under
    three tenths.
    """
    exact = mean_square(bridge, scheme)
    found = sidebands(bridge, scheme, INDEX, exact, 24)
    groups = found.group_mean_square.sum(-1)
    beyond = exact - 0.5 * (bridge.index_base * INDEX) ** 2 - groups
    assert np.all(beyond > 0.0)
    assert np.all(beyond[WORKING] < 0.3 * groups[WORKING])


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_listed_lines_carry_the_ripple(bridge: Bridge, scheme: Modulation) -> None:
    """Behind an inductor a line counts by amplitude over frequency: the list holds nine tenths of the
    ripple's square.
    """
    found = sidebands(bridge, scheme, INDEX, mean_square(bridge, scheme), 24)
    weight = (found.amplitude / found.carrier_multiple) ** 2
    assert np.all(weight[WORKING][:, found.listed].sum(-1) > 0.9 * weight[WORKING].sum(-1))


def test_three_phase_voltage_has_no_triplen_sidebands() -> None:
    """Lines in which n is a multiple of three are the same in all phases where the zero sequence is the
    legs' own.
    """
    scheme = SIX_SWITCH_BRIDGE.modulations[SIX_SWITCH_BRIDGE.modulation_index("sine-triangle")]
    lines = np.abs(carrier_coefficients(SIX_SWITCH_BRIDGE, scheme, INDEX))
    assert np.all(lines[:, :, [0, 3, 6, -3, -6]] < 1e-12)


def test_unipolar_switching_has_no_odd_groups() -> None:
    scheme = FULL_BRIDGE.modulations[FULL_BRIDGE.modulation_index("unipolar")]
    lines = np.abs(carrier_coefficients(FULL_BRIDGE, scheme, INDEX))
    assert np.all(lines[:, 0::2] < 1e-12)
    assert np.all(lines[:, 1::2].max(-1) > 1e-3)


@pytest.mark.parametrize("name", ["bipolar", "unipolar"])
def test_general_series_gives_the_bessel_functions(name: str) -> None:
    """Two legs with opposite references: twice a leg's line where the legs differ, nothing where they
    agree.
    """
    scheme = FULL_BRIDGE.modulations[FULL_BRIDGE.modulation_index(name)]
    lines = np.abs(carrier_coefficients(FULL_BRIDGE, scheme, INDEX))
    for m in range(1, CARRIER_GROUPS + 1):
        for n in range(6):
            leg = leg_sideband(np.array(m), np.array(n), INDEX)  # of V_dc/2
            differ = 1.0 if name == "bipolar" or n % 2 == 1 else 0.0
            assert lines[:, m - 1, n] == pytest.approx(differ * leg, abs=1e-10), (m, n)


def test_even_sums_vanish() -> None:
    """sin((m + n) pi/2): naturally sampled double-edge modulation has lines with odd m + n only."""
    m, n = np.meshgrid(np.arange(1, 5), np.arange(-6, 7))
    found = leg_sideband(m, n, np.array(0.7))
    assert np.all(found[(m + n) % 2 == 0] < 1e-12)
    assert found[(m + n) % 2 == 1].max() > 0.1
