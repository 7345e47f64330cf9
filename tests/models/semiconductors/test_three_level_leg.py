"""Three-level legs: position currents against the exact line period, commutations by quadrature, symmetry."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from probe_device import METERS, At, device

from models.semiconductors.bridge_losses import BridgeLosses, Cooling, bridge_losses
from models.semiconductors.packages import Packages
from models.waveforms.bridges import BRIDGES
from models.waveforms.leg_commutations import CLAMP, INNER, OUTER, ROLES, blocking_shares, leg_commutations
from models.waveforms.leg_positions import NEUTRAL_POINT_CLAMPED, T_TYPE
from models.waveforms.operating_waveforms import operating_waveforms

THREE_LEVEL = [bridge.name for bridge in BRIDGES.values() if bridge.levels == 3]
CURRENTS = ("switch_average", "switch_mean_square", "diode_average", "diode_mean_square")
NUMBER = {OUTER: "1", INNER: "2", CLAMP: "5"}


def metered(at: At, role: str, part: Any, frequency: float = 1.0) -> BridgeLosses:
    """The bridge with the given part in one role and parts without any loss in the others."""
    entry, count = at.entry, len(part.hot_c)
    roles = list(ROLES[entry.leg_type].values())
    legs = entry.leg_copies * len(entry.modelled_legs)
    ideal = device(*[{} for _ in range(count)])
    packages = tuple(
        Packages(name, part if name == role else ideal, np.ones(count), np.ones(count),
                 roles.count(name) * legs, share)
        for name, share in blocking_shares(entry.leg_type).items()
    )  # fmt: skip
    cooling = Cooling(25.0, lambda power, rows: np.zeros_like(power))
    return bridge_losses(
        packages, np.full(count, frequency), entry, at.tables, at.state(count),
        np.array([at.dc_voltage]), cooling,
    )  # fmt: skip


@pytest.mark.parametrize("bridge", THREE_LEVEL)
@settings(max_examples=8, deadline=None)
@given(index=st.floats(0.1, 1.0), lag=st.floats(-1.57, 1.57))
def test_position_currents(bridge: str, index: float, lag: float) -> None:
    """Averages and rms of every role against the exact line period with a very large inductance, 0.5 % of the
    phase current.
    """
    entry = BRIDGES[bridge]
    scheme = entry.modulations[0].name
    exact = operating_waveforms(
        bridge=bridge, modulation=scheme, modulation_index=index, displacement=lag, dc_voltage=700.0,
        inductance=1e4, switching_frequency=501 * 50.0, line_frequency=50.0, current=1.0 / math.sqrt(2.0),
        leg_type=entry.leg_type,
    )  # fmt: skip
    at = At(bridge, scheme, index, lag)
    for role in blocking_shares(entry.leg_type):
        found = metered(at, role, device(*(METERS[name] for name in CURRENTS))).conduction[:, 0]
        found = found / (2.0 * entry.leg_copies * len(entry.modelled_legs))
        for kind, (average, square) in {"T": found[:2], "D": found[2:]}.items():
            name = f"{kind}{NUMBER[role]}"
            if name in exact.positions:
                assert average == pytest.approx(float(exact.positions[name].average), abs=0.003), name
                assert math.sqrt(square) == pytest.approx(float(exact.positions[name].rms), abs=0.005), name
            else:
                assert max(average, square) < 1e-20  # the least slope resistance of a part


@pytest.mark.parametrize("bridge", THREE_LEVEL)
@pytest.mark.parametrize("lag", [-1.2, -0.4, 0.0, 0.7, 1.5])
def test_commutated_currents(bridge: str, lag: float) -> None:
    """With 1 J per ampere and volt at half of V_dc = 1 V: the outer switch turns the current on and off while
    voltage and current agree in sign, the inner one otherwise; means over the line by integration.
    """
    angle = 2.0 * np.pi * (np.arange(36000) + 0.5) / 36000
    current = np.sin(angle - lag)
    agree = np.sign(np.sin(angle)) == np.sign(current)
    legs = BRIDGES[bridge].leg_copies
    expected = {OUTER: np.mean(np.abs(current) * agree), INNER: np.mean(np.abs(current) * ~agree)}
    at = At(bridge, BRIDGES[bridge].modulations[0].name, 0.8, lag)
    for role, mean in expected.items():
        found = metered(at, role, device(METERS["turn_on"], METERS["turn_off"])).switching[:, 0]
        assert found == pytest.approx(np.full(2, 0.5 * legs * mean), abs=0.006 * legs), role


@pytest.mark.parametrize("bridge", THREE_LEVEL)
@pytest.mark.parametrize("lag", [-1.0, 0.0, 0.8])
def test_recovering_diodes(bridge: str, lag: float) -> None:
    """Outer commutations end in the clamp (or the midpoint) diode, inner ones in the outer diode."""
    at = At(bridge, BRIDGES[bridge].modulations[0].name, 0.8, lag)
    turned_on = {
        role: metered(at, role, device(METERS["turn_on"])).switching[0, 0] for role in (OUTER, INNER)
    }
    takes_over = CLAMP if BRIDGES[bridge].leg_type == NEUTRAL_POINT_CLAMPED else INNER
    recovery = {
        role: metered(at, role, device(METERS["recovery"])).recovery[0, 0]
        for role in blocking_shares(BRIDGES[bridge].leg_type)
    }
    assert recovery[takes_over] == pytest.approx(turned_on[OUTER], rel=1e-9)
    assert recovery[OUTER] == pytest.approx(turned_on[INNER], rel=1e-9, abs=1e-12)
    if takes_over == CLAMP:
        assert recovery[INNER] == 0.0


def test_blocking_voltages_are_derived() -> None:
    """Clamped legs block half of V_dc everywhere; a T-type's outer switches block all of it, its midpoint
    switches half (common practice, no source).
    """
    assert blocking_shares(NEUTRAL_POINT_CLAMPED) == {OUTER: 0.5, INNER: 0.5, CLAMP: 0.5}
    assert blocking_shares(T_TYPE) == {OUTER: 1.0, INNER: 0.5}


@pytest.mark.parametrize("leg_type", [NEUTRAL_POINT_CLAMPED, T_TYPE])
def test_every_commutation_moves_half_of_the_dc_voltage(leg_type: str) -> None:
    found = leg_commutations(leg_type)
    assert len(found) == 4
    for one in found:
        assert one.voltage_share == 0.5
        assert one.switch != one.diode
        assert len(one.swings) == 3
        assert all(abs(after - before) == 0.5 for _, before, after in one.swings)


@pytest.mark.parametrize("bridge", THREE_LEVEL)
def test_output_charge_of_every_position_at_the_node_is_paid(bridge: str) -> None:
    """Three packages swing by V_dc/2 a commutation; with charges proportional to voltage (exponent 1) each
    costs Q V/2 = C (V_dc/2)^2/2, once a carrier period and leg.
    """
    part = {"output_charge_c_per_m2": 1.0, "output_charge_voltage_exponent": 1.0}
    at = At(bridge, BRIDGES[bridge].modulations[0].name, 0.8, 0.3)
    roles = blocking_shares(BRIDGES[bridge].leg_type)
    found = sum(metered(at, role, device(part)).output_charge[0, 0] for role in roles)
    assert found == pytest.approx(BRIDGES[bridge].leg_copies * 3.0 * 0.5 * 0.5**2, rel=1e-9)


def test_a_t_type_pays_for_its_full_voltage_switch_only_what_swings() -> None:
    """The outer switch at rest swings between V_dc/2 and V_dc: with a charge that goes as the root of the
    voltage, 1 - sqrt(1/2) instead of sqrt(1/2).
    """
    part = {"output_charge_c_per_m2": 1.0, "output_charge_voltage_exponent": 0.5}
    at = At("three-phase bridge, T-type", "phase disposition", 0.8, 0.0)
    found = metered(at, OUTER, device(part)).output_charge[0, 0]
    assert found == pytest.approx(3.0 * 0.5 * 0.5 * (math.sqrt(0.5) + 1.0 - math.sqrt(0.5)), rel=1e-9)


@pytest.mark.parametrize("bridge", THREE_LEVEL)
def test_each_switch_is_driven_in_one_half_wave(bridge: str) -> None:
    part = {"gate_charge_c_per_m2": 1.0}
    at = At(bridge, BRIDGES[bridge].modulations[0].name, 0.8, 0.3)
    gate = sum(metered(at, role, device(part), frequency=10.0).gate[0, 0] for role in (OUTER, INNER))
    assert gate == pytest.approx(BRIDGES[bridge].leg_copies * 4 * 0.5 * 10.0)
