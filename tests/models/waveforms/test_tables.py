"""The waveform tables against the switching periods they are made of, and the reading of them."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.waveforms.bridges import BRIDGES, Bridge, Modulation
from models.waveforms.switching_period import SwitchingPeriod, switching_periods
from models.waveforms.tables import WaveformTables, waveform_tables

ENTRIES = [
    pytest.param(bridge, scheme, id=f"{bridge.name}, {scheme.name}")
    for bridge in BRIDGES.values()
    for scheme in bridge.modulations
]
PAIRS = ((1.3, 2.4), (1.6, 2.7))
RNG = np.random.default_rng(11)


def read(name: str, bridge: Bridge, scheme: Modulation, index: float) -> np.ndarray:
    tables = waveform_tables(bridge.name, PAIRS)
    place = np.array([bridge.modulation_index(scheme.name)])
    return tables.read(getattr(tables, name), place, *tables.position(np.array([index])))[0]


def direct(bridge: Bridge, scheme: Modulation, index: float, count: int = 5400) -> SwitchingPeriod:
    angle = np.pi * (np.arange(count) + 0.5) / count
    return switching_periods(bridge, scheme, angle, np.array(index))


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_tables_agree_with_fine_quadrature(bridge: Bridge, scheme: Modulation) -> None:
    for index in RNG.uniform(0.1, 0.98 * scheme.linear_limit, 6):
        period = direct(bridge, scheme, index)
        assert read("ripple_mean_square", bridge, scheme, index) == pytest.approx(
            period.mean_square.mean(), rel=0.01
        )
        for place, (alpha, beta) in enumerate(PAIRS):
            shape = read("core_loss_shape", bridge, scheme, index)[place]
            assert shape == pytest.approx(period.loss_shape(alpha, beta).mean(), rel=0.01)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_carrier_groups_have_the_ripple_of_the_time_domain(bridge: Bridge, scheme: Modulation) -> None:
    """Sum over groups of v^2/(2 pi m)^2: the frequency domain's ripple, short only of the groups beyond the
    sixth.
    """
    for index in (0.3, 0.7, 0.95):
        groups = read("group_ripple", bridge, scheme, index).sum()
        exact = direct(bridge, scheme, index).mean_square.mean()
        assert groups == pytest.approx(exact, rel=0.02)
        assert groups < exact * 1.005


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_peak_ripple_is_the_true_one_within_a_percent_or_so(bridge: Bridge, scheme: Modulation) -> None:
    for index in RNG.uniform(0.15, 0.98 * scheme.linear_limit, 6):
        exact = direct(bridge, scheme, index).peak_to_peak.max()
        assert 0.985 * exact < read("peak_ripple", bridge, scheme, index) <= exact * 1.011


def test_peak_ripple_of_three_phases() -> None:
    bridge = BRIDGES["three-phase six-switch bridge"]
    for scheme in bridge.modulations:
        for index in (0.5, 0.6, 0.7, 0.8):
            exact = direct(bridge, scheme, index).peak_to_peak.max()
            assert read("peak_ripple", bridge, scheme, index) == pytest.approx(exact, rel=0.003)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_tables_at_the_linear_limit(bridge: Bridge, scheme: Modulation) -> None:
    index = scheme.linear_limit
    exact = direct(bridge, scheme, index).mean_square.mean()
    assert read("ripple_mean_square", bridge, scheme, index) == pytest.approx(exact, rel=1e-3)


@pytest.mark.parametrize("bridge", BRIDGES.values(), ids=BRIDGES)
def test_switching_share(bridge: Bridge) -> None:
    tables = waveform_tables(bridge.name)
    for place, scheme in enumerate(bridge.modulations):
        share = tables.switching_share[place]
        expected = 2.0 / 3.0 if scheme.name.startswith("discontinuous") else 1.0
        assert share.mean() == pytest.approx(expected)
        assert tables.leg_switching[place] == pytest.approx(
            [scheme.switching_legs[leg] for leg in bridge.modelled_legs]
        )


@pytest.mark.parametrize("bridge", BRIDGES.values(), ids=BRIDGES)
def test_everything_is_finite_and_nothing_negative(bridge: Bridge) -> None:
    tables = waveform_tables(bridge.name, PAIRS)
    for name, value in vars(tables).items():
        if isinstance(value, np.ndarray):
            assert np.isfinite(value).all(), name
    for name in (
        "peak_ripple",
        "ripple_mean_square",
        "sideband_amplitude",
        "group_ripple",
        "core_loss_shape",
        "high_share",
        "low_share",
    ):
        assert np.all(getattr(tables, name) >= 0.0), name


@given(st.floats(-0.5, 3.0))
@settings(max_examples=60, deadline=None)
def test_position_stays_on_the_grid(index: float) -> None:
    tables: WaveformTables = waveform_tables("single-phase full bridge")
    row, weight = tables.position(np.array([index]))
    assert 0 <= row[0] <= tables.peak_ripple.shape[1] - 2
    assert 0.0 <= weight[0] <= 1.0


def test_reading_interpolates_and_appends_trailing_axes() -> None:
    table = np.arange(2.0 * 4.0 * 3.0).reshape(2, 4, 3)
    scheme, row, weight = (
        np.array([[0], [1]]),
        np.array([[0, 2], [1, 1]]),
        np.array([[0.0, 0.25], [0.5, 1.0]]),
    )
    found = WaveformTables.read(table, scheme, row, weight)
    assert found.shape == (2, 2, 3)
    assert found[0, 0] == pytest.approx(table[0, 0])
    assert found[0, 1] == pytest.approx(0.75 * table[0, 2] + 0.25 * table[0, 3])
    assert found[1, 1] == pytest.approx(table[1, 2])


def test_tables_of_one_bridge_are_built_once() -> None:
    assert waveform_tables("single-phase full bridge", PAIRS) is waveform_tables(
        "single-phase full bridge", PAIRS
    )
    with pytest.raises(KeyError):
        waveform_tables("half bridge")
