"""Switching laws of a leg: scaling with current, voltage, frequency and area; soft turn-on; output charge;
dead time.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from probe_device import device

from models.catalog import Catalog
from models.semiconductors.switching import (
    Dies,
    LegSwitching,
    charge_left,
    dead_time_loss,
    energy_scale,
    gate_drive_loss,
    leg_switching,
    output_charge,
    overlap_turn_on_energy,
)

PART: dict[str, float | bool] = {
    "energy_reference_voltage_v": 400.0, "turn_on_energy_j_per_av": 3e-8, "turn_off_energy_j_per_av": 1e-8,
    "recovery_energy_j_per_av": 5e-9, "turn_on_current_exponent": 1.3, "turn_off_current_exponent": 1.1,
    "recovery_current_exponent": 0.6, "energy_voltage_exponent": 1.4, "recovery_voltage_exponent": 0.6,
    "reference_current_density_a_per_m2": 2e6, "output_charge_c_per_m2": 5e-3,
    "output_charge_voltage_exponent": 0.5, "gate_charge_c_per_m2": 4e-3, "gate_swing_v": 20.0,
    "dead_time_s": 2e-7,
}  # fmt: skip
ANGLE = np.pi * (np.arange(3000) + 0.5) / 3000


def switched(
    peak: float = 20.0,
    offset: float = 0.0,
    volts: float = 400.0,
    hertz: float = 20e3,
    area: float = 1e-5,
    **changed: Any,
) -> LegSwitching:
    current = peak * np.sin(ANGLE)[None, None]
    dies = Dies(device(PART | changed), np.array([[area]]))
    charge = 2.0 * output_charge(dies.device, np.array([volts]), dies.area)
    return leg_switching(
        dies, dies, charge, np.array([volts]), np.array([[hertz]]), current,
        np.full_like(current, offset), np.ones((1, 1, len(ANGLE))),
    )  # fmt: skip


def test_energy_at_the_reference_point() -> None:
    """At V_ref a leg at constant rated current would lose E f in each of its parts; here over a sine, k =
    1: times 2/pi.
    """
    found = switched(turn_on_current_exponent=1.0, turn_on_includes_output_charge=False)
    assert found.turn_on_hot[0, 0] == pytest.approx(3e-8 * 400.0 * 20.0 * 20e3 * 2.0 / math.pi, rel=1e-5)


@given(st.floats(1.0, 2.5))
@settings(max_examples=20)
def test_mean_of_a_power_of_the_sine(exponent: float) -> None:
    """Mean of sin^k over the half wave: Gamma((k + 1)/2)/(sqrt(pi) Gamma(k/2 + 1))."""
    found = switched(peak=20.0, turn_off_current_exponent=exponent)
    mean = math.gamma(0.5 * (exponent + 1.0)) / (math.sqrt(math.pi) * math.gamma(0.5 * exponent + 1.0))
    assert found.turn_off_hot[0, 0] == pytest.approx(1e-8 * 400.0 * 20.0 * 20e3 * mean, rel=1e-5)


@pytest.mark.parametrize(
    ("part", "current_power", "voltage_power"),
    [("turn_on_hot", 1.3, 1.4), ("turn_off_hot", 1.1, 1.4), ("recovery_hot", 0.6, 0.6)],
)
def test_scaling(part: str, current_power: float, voltage_power: float) -> None:
    one = getattr(switched(), part)
    assert getattr(switched(peak=40.0), part) == pytest.approx(2.0**current_power * one)
    assert getattr(switched(volts=600.0), part) == pytest.approx(1.5**voltage_power * one)
    assert getattr(switched(hertz=50e3), part) == pytest.approx(2.5 * one)
    # a larger die at the same current: the reference current grows with it, energy goes as A^(1 - k)
    assert getattr(switched(area=2e-5), part) == pytest.approx(2.0 ** (1.0 - current_power) * one)


def test_energy_scale_at_the_reference_voltage() -> None:
    part = device(PART)
    assert energy_scale(np.array(3e-8), np.array(400.0), np.array(1.4), part) == pytest.approx(3e-8 * 400.0)


@given(st.floats(0.0, 30.0))
@settings(max_examples=30)
def test_ripple_eases_turn_on_and_hardens_turn_off(offset: float) -> None:
    calm, rippled = switched(), switched(offset=offset)
    assert rippled.turn_on_hot <= calm.turn_on_hot * (1.0 + 1e-12)
    assert rippled.recovery_hot <= calm.recovery_hot * (1.0 + 1e-12)
    assert rippled.turn_off_hot >= calm.turn_off_hot * (1.0 - 1e-12)


def test_soft_turn_on_costs_nothing() -> None:
    """With a ripple above the peak current the current has reversed at every turn-on."""
    found = switched(peak=5.0, offset=10.0)
    assert found.turn_on_hot[0, 0] < 1e-6 * switched(peak=5.0).turn_on_hot[0, 0]
    assert found.recovery_hot[0, 0] < 1e-4 * switched(peak=5.0).recovery_hot[0, 0]


def test_output_charge_is_lost_once_per_period_of_hard_switching() -> None:
    found = switched(volts=800.0)
    charge = 5e-3 * 1e-5 * math.sqrt(2.0)
    assert output_charge(device(PART), np.array([800.0]), np.array([[1e-5]])) == pytest.approx(charge)
    assert found.output_charge[0, 0] == pytest.approx(charge * 800.0 * 20e3, rel=1e-9)


@given(st.floats(-200.0, 50.0))
def test_charge_left(valley: float) -> None:
    """Whole while the current has not reversed; falls with the reversed current; gone once |i| t_d reaches
    2 Q.
    """
    charge, dead = 5e-8, 2e-7
    left = float(charge_left(np.array(valley), np.array(2.0 * charge), np.array(dead)))
    assert 0.0 <= left <= 1.0
    if valley >= 0.0:
        assert left == 1.0
    elif -valley * dead >= 2.0 * charge * (1.0 + 1e-6):
        assert left == 0.0
    else:
        assert left == pytest.approx(max(1.0 + valley * dead / (2.0 * charge), 0.0) ** 2, abs=1e-6)


def test_contained_output_charge_is_not_paid_twice() -> None:
    apart = overlap_turn_on_energy(device(PART))
    within = overlap_turn_on_energy(device(PART | {"turn_on_includes_output_charge": True}))
    assert apart == pytest.approx(3e-8)
    assert within == pytest.approx(3e-8 - 5e-3 / 2e6)
    none = device(PART | {"turn_on_includes_output_charge": True, "turn_on_energy_j_per_av": 1e-10})
    assert overlap_turn_on_energy(none) == 0.0


@pytest.mark.parametrize(
    ("part", "name", "energy"),
    [
        ("turn_on_hot", "turn_on", 3e-8),
        ("turn_off_hot", "turn_off", 1e-8),
        ("recovery_hot", "recovery", 5e-9),
    ],
)
@pytest.mark.parametrize("share", [0.0, 0.2, 0.7])
def test_constant_part_of_an_energy(part: str, name: str, energy: float, share: float) -> None:
    """E f [(1 - c) (I/I_ref)^k + c] with k = 1 over a sine of twice the rated current: mean 2 x 2/pi."""
    changed = {f"{name}_current_exponent": 1.0, f"{name}_constant_share": share}
    found = switched(peak=40.0, **changed)
    mean = (1.0 - share) * 4.0 / math.pi + share
    assert getattr(found, part)[0, 0] == pytest.approx(energy * 400.0 * 20.0 * 20e3 * mean, rel=1e-5)


@pytest.mark.parametrize("share", [0.1, 0.4])
def test_constant_part_and_contained_output_charge_make_the_sheet_curve(share: float) -> None:
    """Q V = 5e-3 x 1e-5 x 400 = 20 uJ of the sheet's 240 uJ at 20 A: overlap and charge together follow the
    sheet's curve (1 - c) I/I_ref + c, here over a sine; c = 0.1 gives 24 uJ without current.
    """
    found = switched(
        turn_on_includes_output_charge=True, turn_on_current_exponent=1.0, turn_on_constant_share=share
    )
    mean = 240e-6 * ((1.0 - share) * 2.0 / math.pi + share)
    assert found.turn_on_hot[0, 0] + found.output_charge[0, 0] == pytest.approx(mean * 20e3, rel=1e-5)


def test_reversed_currents_turn_off_twice_and_never_on() -> None:
    """Ripple far above the peak current: two turn-offs a period, each with its constant part."""
    found = switched(
        peak=1e-6, offset=10.0, turn_off_current_exponent=1.0, turn_off_constant_share=0.3,
        turn_on_constant_share=0.3, recovery_constant_share=0.3,
    )  # fmt: skip
    each = 1e-8 * 400.0 * 20.0 * (0.7 * 10.0 / 20.0 + 0.3)
    assert found.turn_off_hot[0, 0] == pytest.approx(2.0 * each * 20e3, rel=1e-5)
    assert found.turn_on_hot[0, 0] == pytest.approx(0.0, abs=1e-9)
    assert found.recovery_hot[0, 0] == pytest.approx(0.0, abs=1e-5)


def test_gate_drive() -> None:
    found = gate_drive_loss(device(PART), np.array([[1e-5]]), np.array([[100e3]]))
    assert found == pytest.approx(4e-8 * 20.0 * 100e3)


def test_dead_time_counts_for_shared_dies_only() -> None:
    arguments = (np.array([[12.0]]), np.array([[200.0]]), np.array([[0.01]]), np.array([[50e3]]))
    diode = {"diode_threshold_25_v": 1.5}
    assert dead_time_loss(device(PART | diode), *arguments) == 0.0
    shared = dead_time_loss(device(PART | diode | {"shared_die": True}), *arguments)
    assert shared == pytest.approx(2.0 * 2e-7 * 50e3 * (1.5 * 12.0 + 0.01 * 200.0))


def test_mean_current() -> None:
    assert switched().mean_current[0, 0] == pytest.approx(20.0 * 2.0 / math.pi, rel=1e-5)


def test_catalogue_turn_on_energies_exceed_the_charge_they_contain(catalog: Catalog) -> None:
    for part in catalog.devices:
        assert np.all(overlap_turn_on_energy(part) >= 0.0), part.name
