# ruff: noqa: E501
"""Exact line-period waveforms against published values (checks.json: source beside each row) and textbook identities."""

from __future__ import annotations

import json
import re
from pathlib import Path

import numpy as np
import pytest
from probe_device import At

from models.waveforms.leg_positions import NEUTRAL_POINT_CLAMPED, T_TYPE
from models.waveforms.operating_waveforms import (
    cancelling_conduction_angle,
    least_distortion_conduction_angle,
    operating_waveforms,
)

ROWS = json.loads((Path(__file__).parent / "data" / "checks.json").read_text())
FULL, SIX = "single-phase full bridge", "three-phase six-switch bridge"
THREE_LEVEL, THREE_LEVEL_LEG = "three-phase three-level bridge", "single-phase three-level half bridge"
PULSES = 999
NO_RIPPLE = 1e3  # H, so that the current is its fundamental


def waveforms(
    bridge, modulation, index, cosine=1.0, *, pulses=PULSES, inductance=NO_RIPPLE, voltage=2.0, **more
):
    """Unit peak current at 1 Hz line frequency."""
    return operating_waveforms(
        bridge=bridge,
        modulation=modulation,
        modulation_index=index,
        displacement=np.arccos(cosine),
        dc_voltage=voltage,
        inductance=inductance,
        switching_frequency=pulses,
        line_frequency=1.0,
        current=np.sqrt(0.5),
        **more,
    )


def rows(pattern):
    chosen = [row for row in ROWS if re.match(pattern, row["id"])]
    assert chosen
    return [pytest.param(row, id=f"{row['id']} ({row['source'][:60]})") for row in chosen]


def meets(row, value):
    expected, tolerance = row["expected"], row["tolerance"]
    allowed = tolerance.get("abs", tolerance.get("rel", 0.0) * abs(expected))
    assert abs(value - expected) <= allowed, f"{value} against {expected}"


PARTS = {"A": "T1", "B": "T2", "C": "D5", "D": "D1"}


@pytest.mark.parametrize("row", rows("DEV-3L-"))
def test_three_level_leg_currents(row):
    part, kind = row["id"].split("-")[2]
    asked = row["inputs"]
    found = waveforms(
        THREE_LEVEL, "phase disposition", asked["M"], asked["cos_phi"], leg_type=NEUTRAL_POINT_CLAMPED
    )
    currents = found.positions[PARTS[part]]
    meets(row, float(currents.average if kind == "a" else currents.rms))


@pytest.mark.parametrize("row", rows("DEV-2L-"))
def test_two_level_leg_currents(row):
    asked, words = row["inputs"], row["id"].split("-")[2]
    found = waveforms(SIX, "sine-triangle", asked["M"], asked["cos_phi"])
    currents = found.positions["T1" if words.startswith("switch") else "D1"]
    meets(row, float(currents.average if words.endswith("average") else currents.rms))


@pytest.mark.parametrize("row", rows("DEV-THI-rms2"))
def test_third_harmonic_switch_current(row):
    asked = row["inputs"]
    found = waveforms(SIX, "third harmonic one sixth", asked["M"], asked["cos_phi"])
    meets(row, float(found.positions["T1"].rms) ** 2)


@pytest.mark.parametrize("row", rows("DEV-SLF-dpwm1-"))
def test_switching_loss_factor_of_clamped_modulation(row):
    """Energy linear in current: the factor is the ratio of the commutated-current sums at the same carrier."""
    cosine = np.cos(np.radians(row["inputs"]["phi_deg"]))
    clamped, plain = (
        waveforms(SIX, name, 0.9, cosine)
        for name in ("discontinuous clamped at voltage peak", "centred space vector")
    )
    sums = [float(one.turn_on_sum + one.turn_off_sum) for one in (clamped, plain)]
    assert sums[0] / sums[1] == pytest.approx(
        row["expected"], abs=0.003
    )  # whole pulses: 1 in 999 at either clamp's end


def test_following_the_current_keeps_the_least_switching_loss():
    """Clamp centred on the current's peak within 30 degrees: factor 1 - sin(30 deg) = 0.5 (Hava, Kerkman, Lipo 1999)."""
    for degrees in (-30.0, -10.0, 20.0, 30.0):
        one, other = (
            operating_waveforms(
                bridge=SIX,
                modulation=name,
                modulation_index=0.9,
                displacement=np.radians(degrees),
                dc_voltage=2.0,
                inductance=NO_RIPPLE,
                switching_frequency=PULSES,
                line_frequency=1.0,
                current=np.sqrt(0.5),
            )
            for name in ("discontinuous following the current", "centred space vector")
        )
        ratio = float((one.turn_on_sum + one.turn_off_sum) / (other.turn_on_sum + other.turn_off_sum))
        assert ratio == pytest.approx(0.5, abs=0.004)


@pytest.mark.parametrize("degrees", [-30.0, -10.0, 20.0, 30.0])
def test_the_search_finds_the_same_where_it_follows_the_current(degrees):
    """The factor 0.5 of Hava, Kerkman, Lipo (1999) again, read from the tables."""
    one, other = (
        At(SIX, name, 0.9, np.radians(degrees)).read()
        for name in ("discontinuous following the current", "centred space vector")
    )
    assert one["turn_on"] / other["turn_on"] == pytest.approx(0.5, abs=0.004)
    assert one["turn_off"] / other["turn_off"] == pytest.approx(0.5, abs=0.004)


@pytest.mark.parametrize("row", rows("DCL-3P-M0"))
def test_dc_link_capacitor_three_phase(row):
    asked = row["inputs"]
    found = waveforms(SIX, "centred space vector", asked["M"], asked["cos_phi"])
    meets(
        {**row, "tolerance": {"rel": 2e-3}}, float(found.dc_capacitor_rms) * np.sqrt(2.0)
    )  # 999 pulses, not infinitely many


@pytest.mark.parametrize("row", rows("DCL-1P-M"))
def test_dc_link_capacitor_single_phase(row):
    asked = row["inputs"]
    found = waveforms(FULL, "unipolar", asked["M"], asked["cos_phi"])
    meets({**row, "tolerance": {"rel": 2e-3}}, float(found.dc_capacitor_rms))


@pytest.mark.parametrize("row", rows("PWM-THDB") + rows("PWM-THDU"))
def test_voltage_distortion_single_phase(row):
    name = "bipolar" if "THDB" in row["id"] else "unipolar"
    meets(row, 100.0 * float(waveforms(FULL, name, row["inputs"]["m_a"]).voltage_thd))


@pytest.mark.parametrize("row", rows("PWM-THDU"))
def test_three_level_leg_has_the_unipolar_distortion(row):
    found = waveforms(THREE_LEVEL_LEG, "phase disposition", row["inputs"]["m_a"])
    meets(row, 100.0 * float(found.voltage_thd))


@pytest.mark.parametrize("row", rows(r"PWM-L\d"))
def test_leg_harmonics_at_39_pulses(row):
    """The textbook table (half-bridge leg): here a bipolar full bridge, whose voltage is twice a leg's."""
    asked = row["inputs"]
    order = asked["carrier_multiple"] * 39 + asked["sideband"]
    found = waveforms(FULL, "bipolar", asked["m_a"], pulses=39)
    meets(
        {**row, "tolerance": {"abs": 1.5e-3}}, float(found.spectrum([order])[0]) / 2.0
    )  # groups overlap a little at 39


def test_square_wave_and_six_step():
    """THD 48.34 % and 31.08 %, fundamentals 4/pi and 2/pi V_dc: closed forms."""
    square = waveforms(FULL, "square wave", 1.0, pulses=1)
    assert float(square.voltage_thd) == pytest.approx(np.sqrt(np.pi**2 / 8.0 - 1.0), rel=1e-12)
    six = waveforms(SIX, "six-step", 1.0, pulses=1)
    assert float(six.voltage_thd) == pytest.approx(np.sqrt(np.pi**2 / 9.0 - 1.0), rel=1e-12)
    assert float(six.fundamental_peak) / 2.0 == pytest.approx(2.0 / np.pi, rel=1e-12)
    orders = np.array([5, 7, 11, 13])
    np.testing.assert_allclose(six.spectrum(orders) / six.fundamental_peak, 1.0 / orders, rtol=1e-10)


def test_quasi_square_wave():
    """120 degrees: no third harmonic, 31.08 %; the least distortion is 28.96 % at 133.56 degrees (closed form)."""
    angles = [cancelling_conduction_angle(3), least_distortion_conduction_angle()]
    found = waveforms(FULL, "quasi-square wave", 1.0, pulses=1, conduction_angle=angles)
    assert found.spectrum([3])[0, 0] == pytest.approx(0.0, abs=1e-12)
    assert found.voltage_thd[0] == pytest.approx(0.31084, abs=1e-5)
    around = waveforms(
        FULL, "quasi-square wave", 1.0, pulses=1, conduction_angle=angles[1] + np.array([-0.01, 0.01])
    )
    assert found.voltage_thd[1] < around.voltage_thd.min()


def test_blocking_voltages_follow_from_the_circuit():
    """T-type: outer switches block V_dc, the midpoint switches half; neutral-point clamped: all half (Schweizer & Kolar 2013)."""
    tee = waveforms(THREE_LEVEL, "phase disposition", 0.8, leg_type=T_TYPE, pulses=99).positions
    clamped = waveforms(
        THREE_LEVEL, "phase disposition", 0.8, leg_type=NEUTRAL_POINT_CLAMPED, pulses=99
    ).positions
    shares = {name: float(entry.blocking_voltage) / 2.0 for name, entry in tee.items()}
    assert {name for name, share in shares.items() if share == 1.0} == {"T1", "D1", "T4", "D4"}
    assert {name for name, share in shares.items() if share == 0.5} == {"T2", "D2", "T3", "D3"}
    assert {float(entry.blocking_voltage) for entry in clamped.values()} == {1.0}


def test_ripple_rows():
    """PWM-RIP-*: largest ripples and rms ripple (closed forms)."""
    by_id = {row["id"]: row for row in ROWS}
    three = by_id["PWM-RIP-3P"]["inputs"]
    found = operating_waveforms(
        bridge=SIX,
        modulation="sine-triangle",
        modulation_index=three["M"],
        displacement=0.0,
        dc_voltage=three["Vdc_V"],
        inductance=three["L_H"],
        switching_frequency=three["fsw_Hz"],
        line_frequency=three["fsw_Hz"] / 321,
        current=1.0,
    )
    meets(by_id["PWM-RIP-3P"], float(found.ripple_rms))
    for name, bridge, scheme in (
        ("PWM-RIP-B", FULL, "bipolar"),
        ("PWM-RIP-3L", THREE_LEVEL_LEG, "phase disposition"),
    ):
        asked = by_id[name]["inputs"]
        found = operating_waveforms(
            bridge=bridge,
            modulation=scheme,
            modulation_index=1.0,
            displacement=0.0,
            dc_voltage=asked["Vdc_V"],
            inductance=asked["L_H"],
            switching_frequency=asked["fsw_Hz"],
            line_frequency=asked["fsw_Hz"] / 999,
            current=1.0,
        )
        meets({**by_id[name], "tolerance": {"rel": 0.005}}, float(found.ripple_peak_to_peak))
