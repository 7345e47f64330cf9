"""Published spectra, distortion factors and ripple of the two-level schemes. Ids, sources and tolerances
are the rows'.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, params, starting
from numpy.typing import NDArray

from models.distortion import dead_time_voltage
from models.waveforms.bridges import (
    FULL_BRIDGE,
    INJECTION_LIMIT,
    SINE_LIMIT,
    SIX_SWITCH_BRIDGE,
    Bridge,
    Modulation,
)
from models.waveforms.operating_waveforms import OperatingWaveforms, operating_waveforms
from models.waveforms.spectrum import carrier_coefficients, leg_sideband
from models.waveforms.switching_period import SwitchingPeriod
from models.waveforms.tables import waveform_tables

Array = NDArray[np.float64]
LEG = [name for name in starting("PWM-L") if not name.startswith(("PWM-LL", "PWM-LIM"))]
LINE_TO_LINE = [name for name in starting("PWM-LL") if not name.startswith("PWM-LL1-")]
FUNDAMENTAL = starting("PWM-LL1-")
THD = starting("PWM-THD")
FACTORS = starting("PWM-HDF-")
SINGLE = ["PWM-LIM1", "PWM-LIM3", "PWM-LIM4", "PWM-RIP-3P", "PWM-RIP-B", "PWM-EX81-77", "PWM-DT"]
LINE_SWITCHED = ["PWM-SQ1", "PWM-SQ2", "PWM-6S2", "PWM-6S3", "PWM-6S4"]
TESTED = {*LEG, *LINE_TO_LINE, *FUNDAMENTAL, *THD, *FACTORS, *SINGLE, *LINE_SWITCHED}

# One leg against the mid point of the dc link, in units of V_dc/2; two legs of a three-phase bridge, of V_dc.
ONE_LEG = replace(SIX_SWITCH_BRIDGE, voltage_weights=(2.0, 0.0, 0.0))
TWO_LEGS = replace(SIX_SWITCH_BRIDGE, voltage_weights=(1.0, -1.0, 0.0))


def scheme(bridge: Bridge, name: str) -> Modulation:
    return bridge.modulations[bridge.modulation_index(name)]


SINE = scheme(SIX_SWITCH_BRIDGE, "sine-triangle")


def line_period(bridge: Bridge, modulation: Modulation, index: float, count: int = 7200) -> SwitchingPeriod:
    """Switching periods at the middles of `count` equal cells of the line period."""
    angle = 2.0 * np.pi * (np.arange(count) + 0.5) / count
    reference = modulation.references(angle, np.full(count, index))
    return SwitchingPeriod(0.5 * (1.0 + reference), modulation.carrier_sign, bridge.voltage_weights)


def voltage_distortion(bridge: Bridge, modulation: Modulation, index: float) -> float:
    """Rms of all that is not fundamental over the fundamental, by the rms identity."""
    total = float(line_period(bridge, modulation, index).voltage_mean_square.mean())
    return float(np.sqrt(total / (0.5 * (bridge.index_base * index) ** 2) - 1.0))


@pytest.mark.parametrize("row", params(LEG))
def test_leg_harmonic_in_closed_form(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    found = leg_sideband(
        np.array(asked["carrier_multiple"]), np.array(asked["sideband"]), np.array(asked["m_a"])
    )
    assert_meets(row, float(found))


@pytest.mark.parametrize("row", params(LEG))
def test_leg_harmonic_by_the_general_series(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    lines = np.abs(carrier_coefficients(ONE_LEG, SINE, np.array([asked["m_a"]])))[0]
    for side in (asked["sideband"], -asked["sideband"]):
        assert_meets(row, float(lines[asked["carrier_multiple"] - 1, side]))


@pytest.mark.parametrize("row", params(LINE_TO_LINE))
def test_line_to_line_harmonic(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    lines = np.abs(carrier_coefficients(TWO_LEGS, SINE, np.array([asked["m_a"]])))[0]
    for side in (asked["sideband"], -asked["sideband"]):
        assert_meets(row, float(lines[asked["carrier_multiple"] - 1, side]) / np.sqrt(2.0))


@pytest.mark.parametrize("row", params(FUNDAMENTAL))
def test_line_to_line_fundamental(row: dict[str, Any]) -> None:
    angle = 2.0 * np.pi * (np.arange(720) + 0.5) / 720
    legs = 0.5 * SINE.references(angle, np.full(720, row["inputs"]["m_a"]))
    between = legs @ np.array(TWO_LEGS.voltage_weights)
    assert_meets(row, float(np.abs(np.mean(between * np.exp(-1j * angle)))) * np.sqrt(2.0))


@pytest.mark.parametrize("row", params(THD))
def test_distortion_of_the_unfiltered_voltage(row: dict[str, Any]) -> None:
    index = row["inputs"].get("m_a", row["inputs"].get("M"))
    kind = row["id"].split("-")[1]
    if kind == "THD3":  # any zero sequence: every scheme that reaches the index
        chosen = [
            (SIX_SWITCH_BRIDGE, one)
            for one in SIX_SWITCH_BRIDGE.modulations
            if index <= one.linear_limit + 1e-12
        ]
    else:
        names = {"THDB": ("bipolar",), "THDU": ("unipolar", "one leg at line frequency")}[kind]
        chosen = [(FULL_BRIDGE, scheme(FULL_BRIDGE, name)) for name in names]
    for bridge, modulation in chosen:
        assert_meets(row, 100.0 * voltage_distortion(bridge, modulation, index))


def test_linear_range_gained_by_injection() -> None:
    assert_meets(CHECKS["PWM-LIM1"], 100.0 * (INJECTION_LIMIT / SINE_LIMIT - 1.0))


@pytest.mark.parametrize(("name", "limit"), [("PWM-LIM3", SINE_LIMIT), ("PWM-LIM4", INJECTION_LIMIT)])
def test_linear_range_over_six_step(name: str, limit: float) -> None:
    six_step = 4.0 / np.pi  # peak fundamental of a square wave over its amplitude
    assert_meets(CHECKS[name], limit / six_step)


def _quarter_third(angle: Array, index: Array) -> Array:
    return SINE.references(angle, index) + (index * np.sin(3.0 * angle) / 4.0)[..., None]


def _clamped_in_thirty_degree_blocks(angle: Array, index: Array) -> Array:
    """Each phase rests at its rail in the first and the third quarter of the 120 degrees around its peak.

    There the phase of middle magnitude is clamped: of the two outer phases the one whose magnitude is the
    smaller.
    """
    sines, order = SINE.references(angle, index), SINE.references(angle, np.ones_like(index))
    top, bottom = order.max(-1), order.min(-1)
    upper = top < -bottom
    zero = np.where(upper, 1.0 - index * top, -1.0 - index * bottom)
    return sines + zero[..., None]


def _new(name: str, references: Callable[[Array, Array], Array]) -> Modulation:
    return Modulation(name, INJECTION_LIMIT, references, (1, 1, 1), (1, 1, 1))


FACTOR_SCHEMES = {
    "spwm": SINE,
    "thi6": scheme(SIX_SWITCH_BRIDGE, "third harmonic one sixth"),
    "svm": scheme(SIX_SWITCH_BRIDGE, "centred space vector"),
    "dpwm1": scheme(SIX_SWITCH_BRIDGE, "discontinuous clamped at voltage peak"),
    # Not shipped; entered here as a scheme is entered in the registry.
    "thi4": _new("third harmonic one quarter", _quarter_third),
    "dpwm3": _new("clamped in 30 degree blocks", _clamped_in_thirty_degree_blocks),
}


@pytest.mark.parametrize("row", params(FACTORS))
def test_harmonic_distortion_factor(row: dict[str, Any]) -> None:
    modulation = FACTOR_SCHEMES[row["id"].split("-")[2]]
    period = line_period(SIX_SWITCH_BRIDGE, modulation, row["inputs"]["M"])
    assert_meets(row, float(period.mean_square.mean()) * 24.0**2)


TABULATED = [
    name for name in FACTORS if name.split("-")[2] not in ("thi4", "dpwm3") and name != "PWM-HDF-spwm-100"
]


@pytest.mark.parametrize("row", params(TABULATED))
def test_harmonic_distortion_factor_read_from_the_tables(row: dict[str, Any]) -> None:
    """The tables interpolate over the index: 0.2 % instead of the row's 0.02 %, below the linear limit."""
    modulation = FACTOR_SCHEMES[row["id"].split("-")[2]]
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)
    place = np.array([SIX_SWITCH_BRIDGE.modulation_index(modulation.name)])
    found = tables.read(tables.ripple_mean_square, place, *tables.position(np.array([row["inputs"]["M"]])))
    assert found[0] * 24.0**2 == pytest.approx(row["expected"], rel=0.002)


def test_ripple_current_of_a_three_phase_bridge() -> None:
    row = CHECKS["PWM-RIP-3P"]
    asked = row["inputs"]
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)
    square = tables.read(tables.ripple_mean_square, np.array([0]), *tables.position(np.array([asked["M"]])))
    assert_meets(row, float(np.sqrt(square[0])) * asked["Vdc_V"] / (asked["L_H"] * asked["fsw_Hz"]))


def test_greatest_ripple_of_bipolar_switching() -> None:
    row = CHECKS["PWM-RIP-B"]
    asked = row["inputs"]
    tables = waveform_tables(FULL_BRIDGE.name)
    place = np.array([FULL_BRIDGE.modulation_index("bipolar")])
    greatest = tables.read(tables.peak_ripple, place, *tables.position(np.array([0.0])))
    assert_meets(row, float(greatest[0]) * asked["Vdc_V"] / (asked["L_H"] * asked["fsw_Hz"]))


def test_worked_half_bridge_harmonic() -> None:
    row = CHECKS["PWM-EX81-77"]
    asked = row["inputs"]
    side = 77 - 2 * asked["mf"]  # the 77th harmonic lies one below twice the carrier
    found = (
        leg_sideband(np.array(2), np.array(side), np.array(asked["m_a"]))
        * 0.5
        * asked["Vdc_V"]
        / np.sqrt(2.0)
    )
    assert_meets(row, float(found))


def test_dead_time_error() -> None:
    row = CHECKS["PWM-DT"]
    asked = row["inputs"]
    volts, seconds, hertz = (np.array(asked[name]) for name in ("Vdc_V", "td_s", "fsw_Hz"))
    assert_meets(row, float(dead_time_voltage(np.array(1), volts, seconds, hertz)))


def line_switched(bridge: Bridge, name: str) -> OperatingWaveforms:
    """A scheme without carrier, 1 V of dc voltage."""
    return operating_waveforms(
        bridge=bridge.name,
        modulation=name,
        modulation_index=1.0,
        displacement=0.0,
        dc_voltage=1.0,
        inductance=1.0,
        switching_frequency=1.0,
        line_frequency=1.0,
        current=1.0,
    )


def test_square_wave() -> None:
    found = line_switched(FULL_BRIDGE, "square wave")
    assert_meets(CHECKS["PWM-SQ1"], float(found.fundamental_peak))
    assert_meets(CHECKS["PWM-SQ2"], 100.0 * float(found.voltage_thd))


def test_six_step() -> None:
    found = line_switched(SIX_SWITCH_BRIDGE, "six-step")
    between = float(found.fundamental_peak) * np.sqrt(3.0) / np.sqrt(2.0)
    assert_meets(CHECKS["PWM-6S2"], between)
    assert_meets(CHECKS["PWM-6S3"], float(found.fundamental_peak))
    row = CHECKS["PWM-6S4"]
    lines = found.spectrum(row["inputs"]["orders"]) / float(found.fundamental_peak)
    for place, line in enumerate(np.ravel(lines)):
        assert_meets(row, float(line), place)
