"""Curves of a data sheet: fits give back the laws they were made from, and every fault is told."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.catalog import Catalog, load_catalog
from models.catalog.curve_fits import EnergyCurve, EnergyFit, energy_fit, line_fit

CURRENT = np.array([5.0, 10.0, 20.0, 30.0, 40.0, 50.0, 60.0])
RATED = 50.0


def fitted(current: np.ndarray, energy: np.ndarray, rated: float = RATED) -> tuple[EnergyFit, float]:
    """Fit of one curve and its greatest deviation."""
    curve = EnergyCurve(current, energy)
    fit = energy_fit([curve], rated)
    return fit, fit.deviation(curve, rated)


@given(st.floats(0.3, 2.0), st.floats(1e-3, 0.05))
def test_a_straight_line_comes_back(threshold: float, slope: float) -> None:
    fit = line_fit(CURRENT, threshold + slope * CURRENT, RATED)
    assert fit.threshold == pytest.approx(threshold, rel=1e-6)
    assert fit.slope == pytest.approx(slope, rel=1e-6)
    assert fit.deviation < 1e-6


@given(st.floats(1e-4, 5e-2), st.floats(0.6, 1.8), st.floats(0.0, 0.5), st.floats(0.01, 100.0))
@settings(max_examples=40, deadline=None)
def test_an_energy_law_comes_back_in_any_unit(
    energy: float, exponent: float, constant: float, scale: float
) -> None:
    share = CURRENT / RATED
    curve = scale * energy * ((1.0 - constant) * share**exponent + constant)
    fit, deviation = fitted(CURRENT, curve)
    assert deviation < 0.01
    assert fit.energy == pytest.approx(scale * energy, rel=0.01)
    again = fit.energy * ((1.0 - fit.constant) * share**fit.exponent + fit.constant)
    assert again == pytest.approx(curve, rel=0.01)


@pytest.mark.parametrize(
    "energies",
    [
        [0.25, 0.36, 0.62, 0.95, 1.38, 1.90, 2.55],  # turn-on of a SiC MOSFET: a start, then bending upwards
        [0.06, 0.09, 0.19, 0.33, 0.52, 0.76, 1.05],  # turn-off of one
        [0.9, 1.5, 2.7, 4.0, 5.4, 7.0, 8.8],  # turn-on of an IGBT
        [0.7, 1.1, 1.7, 2.2, 2.6, 2.9, 3.1],  # recovery of a silicon diode: flattening
    ],
)
def test_curves_of_the_shapes_of_data_sheets(energies: list[float]) -> None:
    """Invented curves of usual shape, mJ: within 5 % from a tenth of the rated current on."""
    assert fitted(CURRENT, 1e-3 * np.array(energies))[1] < 0.05


def test_two_points_give_a_power_law() -> None:
    fit, _ = fitted(np.array([25.0, 50.0]), np.array([1e-3, 2.5e-3]))
    assert fit.constant == 0.0
    assert fit.energy == pytest.approx(2.5e-3, rel=1e-6)
    assert fit.exponent == pytest.approx(np.log(2.5) / np.log(2.0), rel=1e-6)


@given(
    st.floats(0.6, 1.8),
    st.floats(0.0, 0.5),
    st.floats(-0.002, 0.006),
    st.floats(0.6, 2.0),
    st.floats(1e-3, 1e3),
)
@settings(max_examples=40, deadline=None)
def test_temperature_and_voltage_come_back(
    exponent: float, constant: float, coefficient: float, voltage_exponent: float, unit: float
) -> None:
    """Curves made from a known law at three temperatures and two voltages, currents in any unit."""
    share = CURRENT / RATED
    curves = [
        EnergyCurve(
            unit * CURRENT,
            2e-3 * ((1.0 - constant) * share**exponent + constant) * volts**voltage_exponent
            * (1.0 - coefficient * below),
            below,
            volts,
        )
        for below, volts in ((0.0, 1.0), (125.0, 1.0), (50.0, 1.0), (0.0, 0.6), (125.0, 0.6))
    ]  # fmt: skip
    fit = energy_fit(curves, unit * RATED)
    assert fit.energy == pytest.approx(2e-3, rel=0.01)
    assert fit.temperature_coefficient == pytest.approx(coefficient, abs=1e-5)
    assert fit.voltage_exponent == pytest.approx(voltage_exponent, abs=1e-3)
    assert max(fit.deviation(curve, unit * RATED) for curve in curves) < 0.01


def test_every_curve_counts_the_same_however_many_points_it_has() -> None:
    """Two temperatures that no single law meets: three times the points on one do not pull the law."""
    hot, cold = 1e-3 * (CURRENT / RATED) ** 1.4, 0.6e-3 * (CURRENT / RATED) ** 0.9
    few = energy_fit([EnergyCurve(CURRENT, hot), EnergyCurve(CURRENT, cold, 125.0)], RATED)
    many = np.repeat(CURRENT, 3) + np.tile([0.0, 1e-6, 2e-6], len(CURRENT))
    dense = EnergyCurve(many, 1e-3 * (many / RATED) ** 1.4)
    assert energy_fit([dense, EnergyCurve(CURRENT, cold, 125.0)], RATED).exponent == pytest.approx(
        few.exponent, abs=1e-3
    )
    assert 0.9 < few.exponent < 1.4


PART = """
[[devices]]
name = "measured module"
based_on = "IGBT 1200 V low-loss"
sheet_rated_current_a = {{ value = 50, origin = "data sheet" }}
sheet_junction_case_k_per_w = {{ value = 0.55, origin = "data sheet, end value of the transient impedance" }}
sheet_diode_junction_case_k_per_w = {{ value = 0.85, origin = "data sheet" }}
dead_time_us = {{ value = 2.0, origin = "set in the bridge" }}
[devices.curves]
origin = "data sheet, figures"
on_state = [
  {{ temperature_c = 25, current_a = [10, 25, 50, 75], voltage_v = [1.10, 1.40, 1.85, 2.25] }},
  {{ temperature_c = 150, current_a = [10, 25, 50, 75], voltage_v = [1.05, 1.50, 2.15, 2.75] }},
]
diode = [
  {{ temperature_c = 25, current_a = [10, 25, 50, 75], voltage_v = [1.30, 1.50, 1.70, 1.88] }},
  {{ temperature_c = 150, current_a = [10, 25, 50, 75], voltage_v = [1.00, 1.30, 1.65, 1.95] }},
]
turn_on = [
  {{ temperature_c = 25, supply_v = 600, current_a = [10, 25, 50, 75], energy_mj = [0.8, 1.9, 4.2, 7.2] }},
  {{ temperature_c = 150, supply_v = 600, current_a = [10, 25, 50, 75], energy_mj = [1.3, 2.9, 6.2, 10.6] }},
]
turn_off = [
  {{ temperature_c = 25, supply_v = 600, current_a = [10, 25, 50, 75], energy_mj = [0.9, 1.8, 3.2, 4.6] }},
  {{ temperature_c = 150, supply_v = 600, current_a = [10, 25, 50, 75], energy_mj = [1.4, 2.7, 4.9, 7.0] }},
]
recovery = [
  {{ temperature_c = 150, supply_v = 600, current_a = [10, 25, 50, 75], energy_mj = [1.6, 2.6, 3.9, 4.7] }},
]
{more}
"""


def load(tmp_path: Path, text: str) -> Catalog:
    path = tmp_path / "own.toml"
    path.write_text(text, encoding="utf-8")
    return load_catalog([path])


def test_a_module_by_its_curves(tmp_path: Path) -> None:
    """Fields that a spreadsheet reads off the same figures."""
    catalog = load(tmp_path, PART.format(more=""))
    part = catalog.devices[catalog.devices.index("measured module")]
    area = part.die_area_max_m2
    assert part.die_area_min_m2 == area
    assert part.reference_current_density_a_per_m2 * area == pytest.approx(50.0)
    at_rated = part.threshold_25_v + part.slope_area_25_ohm_m2 / area * 50.0
    assert at_rated == pytest.approx(1.85, rel=0.02)
    at_rated = part.threshold_hot_v + part.slope_area_hot_ohm_m2 / area * 50.0
    assert at_rated == pytest.approx(2.15, rel=0.02)
    share = part.diode_area_share
    at_rated = part.diode_threshold_hot_v + part.diode_slope_area_hot_ohm_m2 / (area * share) * 50.0
    assert at_rated == pytest.approx(1.65, rel=0.02)
    assert part.turn_on_energy_j_per_av * 50.0 * 600.0 == pytest.approx(6.2e-3, rel=0.04)
    assert part.turn_off_energy_j_per_av * 50.0 * 600.0 == pytest.approx(4.9e-3, rel=0.03)
    assert part.recovery_energy_j_per_av * 50.0 * 600.0 == pytest.approx(3.9e-3, rel=0.03)
    cold = 1.0 - part.turn_on_temperature_coefficient_per_k * 125.0
    assert 0.8 / 1.3 < cold < 7.2 / 10.6  # between the least and the greatest ratio of the two curves' points
    assert part.dead_time_s == 2e-6
    assert re.search(
        r"fitted to data sheet, figures, within \d\.\d% at 25 degC and 600 V, \d\.\d% at 150 degC and 600 V",
        part.origin["turn_on_energy_j_per_av"],
    )
    assert re.search(r"within \d\.\d% at 25 degC, \d\.\d% at 150 degC", part.origin["threshold_hot_v"])
    reference = part.junction_case_reference_area_m2
    switch = part.junction_case_k_m2_per_w / reference * (reference / area) ** part.junction_case_exponent
    diode = (
        part.junction_case_k_m2_per_w
        / reference
        * (reference / (area * share)) ** part.junction_case_exponent
    )
    assert switch == pytest.approx(0.55, rel=1e-6)
    assert diode * part.diode_junction_case_factor == pytest.approx(0.85, rel=1e-6)


def test_a_unipolar_part_by_its_on_resistance(tmp_path: Path) -> None:
    text = """
[[devices]]
name = "measured switch"
based_on = "SiC 1200 V"
sheet_rated_current_a = { value = 40, origin = "data sheet" }
[devices.curves]
origin = "data sheet"
on_resistance = { temperature_c = [25, 100, 150, 175], resistance_mohm = [40, 50, 60, 66] }
turn_on = [
  { temperature_c = 25, supply_v = 800, current_a = [10, 20, 30, 40], energy_uj = [200, 330, 500, 720] },
]
turn_off = [
  { temperature_c = 25, supply_v = 800, current_a = [10, 20, 30, 40], energy_uj = [50, 90, 160, 260] },
]
"""
    catalog = load(tmp_path, text)
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert part.slope_area_25_ohm_m2 / part.die_area_max_m2 == pytest.approx(0.040, rel=1e-6)
    assert part.slope_area_hot_ohm_m2 / part.slope_area_25_ohm_m2 == pytest.approx(66.0 / 40.0, rel=1e-6)
    assert part.hot_c == 175.0
    assert part.energy_hot_c == 25.0
    assert part.turn_on_constant_share > 0.05
    assert part.turn_on_energy_j_per_av * 40.0 * 800.0 == pytest.approx(720e-6, rel=0.03)


RISING = "current_a = [10, 25, 50, 75], "
SUPPLIED = f"supply_v = 600, {RISING}"
FAULTS: list[tuple[str, str, str]] = [
    (
        f"{RISING}voltage_v = [1.10",
        "current_a = [10, 50, 25, 75], voltage_v = [1.10",
        "on_state[0].current_a must rise, got 10, 50, 25, 75",
    ),
    (
        "voltage_v = [1.10, 1.40, 1.85, 2.25]",
        "voltage_v = [1.10]",
        "on_state[0]: current_a and voltage_v must have the same number of values, two at least, got 4 and 1",
    ),
    (
        f"{RISING}voltage_v = [1.10, 1.40, 1.85, 2.25]",
        "current_a = [50], voltage_v = [1.85]",
        "two at least, got 1 and 1",
    ),
    (
        "[1.3, 2.9, 6.2, 10.6]",
        "[1.3, 2.9, 2.2, 10.6]",
        "turn_on[1].energy_j must not fall with the current, got 0.0013, 0.0029, 0.0022, 0.0106",
    ),
    ("[1.6, 2.6, 3.9, 4.7]", "[-1.6, 2.6, 3.9, 4.7]", "recovery[0].energy_j must be above 0, got -0.0016"),
    ("energy_mj = [1.6", "energy_mv = [1.6", "unknown key 'energy_mv'"),
    ("energy_mj = [1.6", "energy_j = [1.6", "J per ampere and volt at rated current, got 0.00013: another"),
    ("voltage_v = [1.10", "voltage_kv = [1.10", "V at rated current, got 1.85e+03: another unit?"),
    ("current_a = [10, 25, 50, 75], energy_mj = [1.6", "current_ma = [10, 25, 50, 75], energy_mj = [1.6",
     "recovery[0].current_a must reach 0.5 of the rated 50 A, got 0.075 A at most"),
    (f"{SUPPLIED}energy_mj = [1.6", f"{RISING}energy_mj = [1.6", "supply_v is missing"),
    (f"{SUPPLIED}energy_mj = [1.6", f"supply_v = [600, 700], {RISING}energy_mj = [1.6",
     "recovery[0].supply_v must be one number, got [600, 700]"),
    (f"{SUPPLIED}energy_mj = [1.6", f"supply_v = 0, {RISING}energy_mj = [1.6", "must be above 0, got 0"),
    ("[1.6, 2.6, 3.9, 4.7]", "[1.6, nan, 3.9, 4.7]", "energy_mj must be a list of numbers, got [1.6, nan"),
    ("[1.6, 2.6, 3.9, 4.7]", '"high"', "recovery[0].energy_mj must be a list of numbers, got 'high'"),
    ('origin = "data sheet, figures"', "", "curves: origin must say where the curves come from, got None"),
    ('sheet_rated_current_a = { value = 50, origin = "data sheet" }', "",
     "need sheet_rated_current_a above 0 beside them: fits weigh the range up to it, got none"),
    ("value = 50, origin", "value = -50, origin", "need sheet_rated_current_a above 0"),
    (
        "recovery = [\n  { temperature_c = 150",
        "recovery = [\n  { temperature_c = 125",
        "share their highest temperature, got turn_on 150 degC, turn_off 150 degC, recovery 125 degC",
    ),
    (
        f"recovery = [\n  {{ temperature_c = 150, {SUPPLIED}",
        f"recovery = [\n  {{ temperature_c = 150, supply_v = 900, {RISING}",
        "share one supply voltage at their highest temperature, got turn_on 600 V, turn_off 600 V, rec",
    ),
    (f"turn_on = [\n  {{ temperature_c = 25, {SUPPLIED}",
     f"turn_on = [\n  {{ temperature_c = 25, supply_v = 400, {RISING}",
     "turn_on: temperature and supply voltage must not change only together, got 25 degC and 400 V; 150"),
    (
        f"{{ temperature_c = 25, {RISING}voltage_v = [1.30",
        f"{{ temperature_c = 145, {RISING}voltage_v = [1.30",
        "diode must have two temperatures, 10 K apart at least, the hotter 35 degC at least, got 145, 150",
    ),
    (
        f"{{ temperature_c = 25, {RISING}voltage_v = [1.30",
        f"{{ temperature_c = 150, {RISING}voltage_v = [1.30",
        "diode must have one curve at 150 degC, got 2",
    ),
    ("[1.30, 1.50, 1.70, 1.88]", "[0.10, 0.40, 0.90, 1.40]",
     "diode must have a threshold (of a unipolar part: the curve with its channel off), got 0 V at 25"),
    (f"{{ temperature_c = 25, {RISING}voltage_v = [1.30",
     f"{{ temperature_c = 398, {RISING}voltage_v = [1.30",
     "diode[0].temperature_c must lie in -60 to 300 degC, got 398"),
    ("turn_on = [", "turn_up = [", "unknown key 'turn_up'"),
    ("[devices.curves]", "curves = 3\n[devices.other]", "curves: must be a table [devices.curves], got 3"),
]  # fmt: skip


@pytest.mark.parametrize(("old", "new", "words"), FAULTS)
def test_faults_of_curves_are_told(tmp_path: Path, old: str, new: str, words: str) -> None:
    whole = PART.format(more="")
    assert old in whole
    with pytest.raises(ValueError, match="own.toml, part 'measured module'") as told:
        load(tmp_path, whole.replace(old, new))
    assert words in str(told.value)


def test_a_number_beside_a_curve_that_says_the_same(tmp_path: Path) -> None:
    more = 'energy_hot_c = { value = 125, origin = "x" }'
    text = PART.format(more="").replace("[devices.curves]", f"{more}\n[devices.curves]")
    with pytest.raises(ValueError, match="energy_hot_c is given by a curve and by a number"):
        load(tmp_path, text)
