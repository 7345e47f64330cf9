"""Capacitors: losses by circuit laws, counts, what sizes a bank."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.capacitors import (
    DcLink,
    ac_filter_capacitor,
    dc_link,
    in_series,
    slow_ripple_capacitance,
    switching_ripple_capacitance,
)
from models.catalog import Catalog
from models.catalog.gathered import Gathered


def test_dielectric_loss(catalog: Catalog) -> None:
    """I^2 tan(delta)/(omega C) per current part and phase."""
    kind = catalog.ac_capacitors[0]
    found = ac_filter_capacitor(
        kind,
        3,
        np.array([5e-6]),
        np.array([[0.5, 0.6]]),
        np.array([[4.0, 9.0]]),
        50.0,
        np.array([40e3]),
        np.array([3.1]),
    )
    line, fast = 2.0 * np.pi * 50.0 * 5e-6, 2.0 * np.pi * 40e3 * 5e-6
    expected = 3.0 * kind.loss_tangent * np.array([0.25 / line + 4.0 / fast, 0.36 / line + 9.0 / fast])
    assert found.loss[0] == pytest.approx(expected)
    assert found.current_share == pytest.approx(3.1 / (5e-6 * kind.current_a_per_f))
    assert found.volume == pytest.approx(3.0 * 5e-6 * kind.volume_m3_per_f)


@given(st.floats(100.0, 1e5), st.floats(100.0, 1000.0), st.floats(0.01, 0.1))
def test_double_frequency_ripple_by_integration(power: float, volts: float, share: float) -> None:
    """The energy that swings with twice the line frequency, P/omega peak to peak, moves the voltage by dV."""
    omega = 2.0 * np.pi * 50.0
    current = np.array([power / (np.sqrt(2.0) * volts)])
    capacitance = slow_ripple_capacitance(current, 100.0, share * volts)[0]
    top, bottom = volts * (1.0 + 0.5 * share), volts * (1.0 - 0.5 * share)
    assert 0.5 * capacitance * (top**2 - bottom**2) == pytest.approx(power / omega)


def test_a_link_without_slow_current_needs_no_capacitance_for_it() -> None:
    assert slow_ripple_capacitance(np.array([3.0]), 0.0, 4.0) == 0.0


def test_halves_in_series(catalog: Catalog) -> None:
    one = bank(catalog, 0)
    two = in_series(one, 2)
    assert in_series(one, 1) is one
    for name in ("series", "loss", "volume", "mass", "price"):
        assert getattr(two, name) == pytest.approx(2.0 * getattr(one, name)), name
    assert two.capacitance == pytest.approx(0.5 * one.capacitance)
    assert two.ripple_share == pytest.approx(one.ripple_share)


def test_switching_ripple_by_integration() -> None:
    """A square wave of current of the same rms at twice the carrier frequency, charge of half its period."""
    capacitance = float(switching_ripple_capacitance(np.array(8.0), np.array(20e3), 4.0))
    time = np.linspace(0.0, 1.0 / 40e3, 4001)
    current = np.where(time < 0.5 / 40e3, 8.0, -8.0)
    volts = np.cumsum(current) * (time[1] - time[0]) / capacitance
    assert np.ptp(volts) == pytest.approx(4.0, rel=2e-3)


def bank(catalog: Catalog, unit: int, **changed: Any) -> DcLink:
    values = {
        "dc_voltage_max": 450.0,
        "dc_voltage": 400.0,
        "voltage_use": 0.9,
        "balancing_current": 0.002,
        "needed": np.array([1e-3]),
        "slow_rms": np.array([[2.0, 9.0]]),
        "fast_rms": np.array([[1.0, 6.0]]),
        "worst": 1,
        "air_c": 55.0,
        "time_share": np.array([1.0]),
    } | changed
    return dc_link(Gathered(catalog.dc_link_capacitors, np.array([unit])), **values)


def test_every_bank_meets_what_sized_it(catalog: Catalog) -> None:
    for index, unit in enumerate(catalog.dc_link_capacitors):
        for volts in (90.0, 450.0, 900.0):
            found = bank(catalog, index, dc_voltage_max=volts, dc_voltage=0.9 * volts)
            assert found.series * unit.voltage_rating_v * 0.9 >= volts * (1.0 - 1e-9)
            assert (found.series - 1.0) * unit.voltage_rating_v * 0.9 < volts
            assert found.capacitance >= 1e-3 * (1.0 - 1e-9)
            assert found.ripple_share <= 1.0 + 1e-9
            one_less = found.parallel - 1.0
            enough = one_less * unit.unit_capacitance_f / found.series >= 1e-3
            carries = (
                one_less * unit.unit_ripple_a >= found.ripple_share * found.parallel * unit.unit_ripple_a
            )
            assert not (one_less >= 1.0 and enough and carries), unit.name


def test_loss_of_the_bank_is_that_of_its_units(catalog: Catalog) -> None:
    """Every unit carries I/parallel: series x parallel times ESR (I/parallel)^2, balancing resistors
    besides.
    """
    for index, unit in enumerate(catalog.dc_link_capacitors):
        found = bank(catalog, index, dc_voltage_max=900.0, dc_voltage=800.0)
        per_unit = (
            unit.unit_esr_low_ohm * (9.0 / found.parallel) ** 2
            + unit.unit_esr_high_ohm * (6.0 / found.parallel) ** 2
        )
        balancing = 0.002 * 800.0 if found.series[0] > 1.0 else 0.0
        assert found.loss[0, 1] == pytest.approx(
            float((found.series * found.parallel * per_unit)[0]) + balancing
        )


def test_no_current_leaves_one_unit_wide_bank_and_no_loss(catalog: Catalog) -> None:
    none = np.zeros((1, 2))
    found = bank(catalog, 0, needed=np.array([0.0]), slow_rms=none, fast_rms=none, dc_voltage_max=1.0)
    assert found.parallel == 1.0
    assert found.series == 1.0
    assert np.all(found.loss == 0.0)
    assert found.volume == pytest.approx(catalog.dc_link_capacitors[0].unit_volume_m3)


def test_life_halves_with_ten_kelvin_and_falls_with_ripple(catalog: Catalog) -> None:
    """10-kelvin rule: 10 K more of air halve the life."""
    warm, cool = bank(catalog, 0, air_c=65.0), bank(catalog, 0, air_c=55.0)
    assert cool.life == pytest.approx(2.0 * warm.life)
    calm = bank(catalog, 0, slow_rms=np.array([[0.1, 9.0]]), fast_rms=np.array([[0.1, 6.0]]))
    assert calm.life > cool.life


def test_damage_adds_over_load_levels(catalog: Catalog) -> None:
    """Half the time at each of two levels: between the lives of both."""
    one, other = (
        bank(catalog, 0, slow_rms=np.full((1, 2), slow), needed=np.array([1e-2])) for slow in (2.0, 12.0)
    )
    both = bank(
        catalog,
        0,
        slow_rms=np.array([[2.0, 12.0]]),
        time_share=np.array([0.5, 0.5]),
        needed=np.array([1e-2]),
    )
    assert min(one.life, other.life) <= both.life <= max(one.life, other.life)
