"""Published currents, conduction and switching losses of a two-level leg. Ids, sources and tolerances are
the rows'.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, lag_of, params, starting
from probe_device import At, device

from models.semiconductors.switching import Dies, leg_switching

SIX_SWITCH = "three-phase six-switch bridge"
LEG = starting("DEV-2L-")
THIRD_HARMONIC = starting("DEV-THI-")
CLAMPED = starting("DEV-SLF-dpwm1-")
SINGLE = ["DEV-PC-D", "DEV-MOS", "DEV-SW1", "DEV-HIT"]
TESTED = {*LEG, *THIRD_HARMONIC, *CLAMPED, *SINGLE}


@pytest.mark.parametrize("row", params(LEG))
def test_currents_of_a_sine_modulated_leg(row: dict[str, Any]) -> None:
    found = At(SIX_SWITCH, "sine-triangle", row["inputs"]["M"], lag_of(row)).read()
    part = row["id"].split("-")[2]
    device_name, kind = ("switch", part[6:]) if part.startswith("switch") else ("diode", part[5:])
    value = (
        found[f"{device_name}_average"]
        if kind == "average"
        else math.sqrt(found[f"{device_name}_mean_square"])
    )
    assert_meets(row, value)


@pytest.mark.parametrize("row", params([name for name in LEG if "average" not in name]))
def test_single_phase_legs_carry_the_same(row: dict[str, Any]) -> None:
    """Both sine-modulated schemes of the full bridge have the same leg currents as the three-phase one."""
    for scheme in ("bipolar", "unipolar"):
        found = At("single-phase full bridge", scheme, row["inputs"]["M"], lag_of(row)).read()
        part = "switch" if "switch" in row["id"] else "diode"
        assert_meets(row, math.sqrt(found[f"{part}_mean_square"]))


@pytest.mark.parametrize("row", params(THIRD_HARMONIC))
def test_mean_square_with_third_harmonic(row: dict[str, Any]) -> None:
    found = At(SIX_SWITCH, "third harmonic one sixth", row["inputs"]["M"], lag_of(row)).read()
    assert_meets(row, found["switch_mean_square"])


@pytest.mark.parametrize("row", params(CLAMPED))
def test_switching_loss_of_a_clamped_scheme(row: dict[str, Any]) -> None:
    lag = math.radians(row["inputs"]["phi_deg"])
    clamped = At(SIX_SWITCH, "discontinuous clamped at voltage peak", 0.9, lag).read()
    continuous = At(SIX_SWITCH, "sine-triangle", 0.9, lag).read()
    for name in ("turn_on", "turn_off", "recovery"):
        assert_meets(row, clamped[name] / continuous[name])


def test_conduction_loss_of_one_diode() -> None:
    row = CHECKS["DEV-PC-D"]
    asked = row["inputs"]
    part = device(_diode(asked["V0_V"], asked["r_ohm"]))
    found = At(SIX_SWITCH, "sine-triangle", asked["M"], lag_of(row), peak=asked["I_peak_A"]).losses(part)
    assert_meets(row, float(found.conduction[0, 0]) / 6.0)


def test_conduction_loss_in_an_application_manuals_form() -> None:
    row = CHECKS["DEV-HIT"]
    asked = row["inputs"]
    part = device(_diode(asked["a_V"], asked["b_ohm"]))
    found = At(SIX_SWITCH, "sine-triangle", asked["M"], lag_of(row), peak=asked["I_peak_A"]).losses(part)
    assert_meets(row, float(found.conduction[0, 0]) / 6.0)


def _diode(threshold: float, slope: float) -> dict[str, float | bool]:
    return {
        "diode_threshold_25_v": threshold,
        "diode_threshold_hot_v": threshold,
        "diode_slope_area_25_ohm_m2": slope,
        "diode_slope_area_hot_ohm_m2": slope,
    }


@pytest.mark.parametrize(
    "scheme", ["sine-triangle", "centred space vector", "discontinuous clamped at voltage peak"]
)
@pytest.mark.parametrize(("index", "lag"), [(0.3, 0.0), (0.9, 0.7), (1.0, -1.5)])
def test_conduction_loss_of_a_synchronous_leg(scheme: str, index: float, lag: float) -> None:
    row = CHECKS["DEV-MOS"]
    asked = row["inputs"]
    part = device(
        {
            "shared_die": True,
            "slope_area_25_ohm_m2": asked["R_on_ohm"],
            "slope_area_hot_ohm_m2": asked["R_on_ohm"],
        }
    )
    found = At(SIX_SWITCH, scheme, index, lag, peak=asked["I_peak_A"]).losses(part)
    assert_meets(row, float(found.conduction[0, 0]) / 3.0)


def _half_each(peak: float, volts: float) -> Any:
    """Half of the row's energy at turn-on, half at turn-off: where energy goes as the current the split
    does not matter.
    """
    each = 0.5 * CHECKS["DEV-SW1"]["inputs"]["E_on_plus_off_J"] / (peak * volts)
    return device(
        {
            "turn_on_energy_j_per_av": each,
            "turn_off_energy_j_per_av": each,
            "energy_reference_voltage_v": volts,
        }
    )


def test_switching_loss_of_one_switch() -> None:
    """The leg's law on a fine grid of angles; both of its switches together lose twice the row's value."""
    row, peak, volts = CHECKS["DEV-SW1"], 40.0, 600.0
    current = peak * np.sin(np.pi * (np.arange(2000) + 0.5) / 2000)[None, None]
    dies = Dies(_half_each(peak, volts), np.array([[peak]]))
    found = leg_switching(
        dies,
        dies,
        np.zeros((1, 1)),
        np.array([volts]),
        np.array([[row["inputs"]["fsw_Hz"]]]),
        current,
        np.zeros_like(current),
        np.ones((1, 1, 2000)),
    )
    assert_meets(row, 0.5 * float((found.turn_on_hot + found.turn_off_hot)[0, 0]))


def test_switching_loss_of_one_switch_in_the_bridge() -> None:
    """The bridge sums over cells of 10 degrees: 0.2 % instead of the row's 0.01 %."""
    row, peak, volts = CHECKS["DEV-SW1"], 40.0, 600.0
    at = At(SIX_SWITCH, "sine-triangle", 0.8, 0.5, peak=peak, dc_voltage=volts)
    found = at.losses(_half_each(peak, volts), frequency=row["inputs"]["fsw_Hz"], area=peak)
    assert float(found.switching[0, 0]) / 6.0 == pytest.approx(row["expected"], rel=0.002)
