"""Published currents and sizes of dc-link capacitors. Ids, sources and tolerances are the rows'."""

from __future__ import annotations

import math
from types import SimpleNamespace
from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, lag_of, params, starting
from scipy.optimize import minimize_scalar

from models.capacitors import bank_life, slow_ripple_capacitance
from models.catalog import Catalog
from models.waveforms.bridges import FULL_BRIDGE, SIX_SWITCH_BRIDGE
from models.waveforms.dc_link_current import (
    rail_rms,
    single_phase_double_frequency_rms,
    three_phase_rms,
)
from models.waveforms.tables import waveform_tables

THREE_PHASE = starting("DCL-3P-M0", "DCL-3P-M1")
SINGLE_PHASE = starting("DCL-1P-M")
SINGLE = ["DCL-3P-MAX1", "DCL-3P-MAX2", "DCL-3P-EX", "DCL-1P-2F", "DCL-C1", "DCL-LEAF"]
TESTED = {*THREE_PHASE, *SINGLE_PHASE, *SINGLE}


@pytest.mark.parametrize("row", params(THREE_PHASE))
def test_three_phase_capacitor_current(row: dict[str, Any]) -> None:
    assert_meets(row, float(three_phase_rms(np.array(row["inputs"]["M"]), np.array(lag_of(row)))))


@pytest.mark.parametrize("row", params(THREE_PHASE))
@pytest.mark.parametrize("scheme", [one.name for one in SIX_SWITCH_BRIDGE.modulations])
def test_three_phase_capacitor_current_of_the_tables(row: dict[str, Any], scheme: str) -> None:
    """Any zero sequence draws the same current; rows beyond the scheme's range do not ask for it."""
    index = row["inputs"]["M"]
    place = SIX_SWITCH_BRIDGE.modulation_index(scheme)
    if index > SIX_SWITCH_BRIDGE.modulations[place].linear_limit:
        return
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)
    moments = tables.read(tables.rail_fast, np.array([place]), *tables.position(np.array([index])))
    found = float(rail_rms(moments, np.array([lag_of(row)]))[0]) * math.sqrt(2.0)
    assert found == pytest.approx(row["expected"], rel=2e-3), row["id"]


def test_greatest_three_phase_capacitor_current() -> None:
    found = minimize_scalar(
        lambda index: -float(three_phase_rms(np.array(index), np.array(0.0))), bounds=(0.1, 1.1)
    )
    assert_meets(CHECKS["DCL-3P-MAX1"], found.x)
    assert_meets(CHECKS["DCL-3P-MAX2"], -found.fun)


def test_worked_three_phase_example() -> None:
    row = CHECKS["DCL-3P-EX"]
    asked = row["inputs"]
    current = asked["P_W"] / (math.sqrt(3.0) * asked["V_LL_V"])
    index = 2.0 * math.sqrt(2.0) * asked["V_LL_V"] / (math.sqrt(3.0) * asked["Vdc_V"])
    assert_meets(row, current * float(three_phase_rms(np.array(index), np.array(0.0))))


@pytest.mark.parametrize("row", params(SINGLE_PHASE))
@pytest.mark.parametrize("scheme", ["unipolar", "one leg at line frequency"])
def test_single_phase_capacitor_current(row: dict[str, Any], scheme: str) -> None:
    """Both three-level schemes of the full bridge draw the same current in every switching period."""
    tables, index, lag = (
        waveform_tables(FULL_BRIDGE.name),
        np.array([row["inputs"]["M"]]),
        np.array([lag_of(row)]),
    )
    place = (np.array([FULL_BRIDGE.modulation_index(scheme)]), *tables.position(index))
    slow, fast = (rail_rms(tables.read(part, *place), lag) for part in (tables.rail_slow, tables.rail_fast))
    assert_meets(row, float(np.hypot(fast, slow)[0]))


def test_double_frequency_part() -> None:
    row = CHECKS["DCL-1P-2F"]
    assert_meets(row, float(single_phase_double_frequency_rms(np.array(row["inputs"]["M"]))))


def test_capacitance_for_double_frequency_ripple() -> None:
    row = CHECKS["DCL-C1"]
    asked = row["inputs"]
    current = np.array([asked["P_W"] / (math.sqrt(2.0) * asked["Vdc_V"])])
    found = slow_ripple_capacitance(current, 2.0 * asked["f_Hz"], asked["dV_pp_V"])
    assert_meets(row, float(found[0]) * 1e6)


@pytest.mark.parametrize("row", params(["REL-10K-105-65", "REL-10K-105-75"]))
def test_life_by_the_ten_kelvin_rule(row: dict[str, Any]) -> None:
    """A unit of the row's rated life at its rated ripple, in air of the row's temperature."""
    asked = row["inputs"]
    unit: Any = SimpleNamespace(
        technology=np.array(["electrolytic"]),
        rated_life_h=np.array([asked["L0_h"]]),
        life_temperature_c=np.array([asked["T0_C"]]),
    )
    found = bank_life(unit, np.ones((1, 1)), np.ones(1), asked["T_C"], np.ones(1))
    assert_meets(row, float(found[0]))


def test_energy_density_of_film_units_is_of_the_published_order(catalog: Catalog) -> None:
    """A plausibility anchor, one traction capacitor: the catalogue's film units must lie within a factor of
    three of it.
    """
    row = CHECKS["DCL-LEAF"]
    asked = row["inputs"]
    assert_meets(row, 0.5 * asked["C_F"] * asked["V_V"] ** 2 / asked["volume_L"])
    films = [unit for unit in catalog.dc_link_capacitors if unit.technology == "film"]
    assert films
    for unit in films:
        density = 0.5 * unit.unit_capacitance_f * unit.voltage_rating_v**2 / unit.unit_volume_m3 * 1e-3
        assert row["expected"] / 3.0 < density < row["expected"] * 3.0, unit.name
