"""Published output filters: resonance, damping, step design, admittance. Ids, sources and tolerances are
the rows'.
"""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, params

from models.inverter import Inverter
from models.output_filter import Filter, grid_transfer, resonance_hz
from models.specification import Specification
from models.waveforms.bridges import SIX_SWITCH_BRIDGE
from models.waveforms.tables import waveform_tables

RESONANCE = ["LCL-LIS1", "LCL-REZ1"]
STEPS = ["LCL-ST1", "LCL-ST2", "LCL-ST3", "LCL-ST4", "LCL-ST5"]
TESTED = {*RESONANCE, *STEPS, "LCL-REZ2", "LCL-ADM2"}


def lcl(first: float, second: float, capacitance: float, damping: float = 0.0) -> Filter:
    return Filter(*(np.array([value]) for value in (first, second, capacitance, damping)))


@pytest.mark.parametrize("row", params(RESONANCE))
def test_resonance(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    first, second = (
        asked.get(one, asked.get(other)) for one, other in (("L1_H", "L_conv_H"), ("L2_H", "L_grid_H"))
    )
    assert_meets(row, float(resonance_hz(lcl(first, second, asked["C_F"]))[0]))


def test_damping_resistor_of_a_third_of_the_reactance() -> None:
    """The search's damping variable is a share of sqrt(L/C) at resonance; a third of it is the published
    rule.
    """
    row, filter_row = CHECKS["LCL-REZ2"], CHECKS["LCL-REZ1"]
    asked = filter_row["inputs"]
    circuit = lcl(asked["L1_H"], asked["L2_H"], asked["C_F"])
    reactance = 1.0 / (2.0 * math.pi * float(resonance_hz(circuit)[0]) * asked["C_F"])
    assert_meets(row, reactance / 3.0)


@pytest.fixture
def step_design(inverter: Inverter) -> Specification:
    """The grid and rating of the published step design."""
    asked = CHECKS["LCL-ST1"]["inputs"]
    return replace(
        inverter.specification,
        phases=3,
        apparent_power_va=asked["P_W"],
        phase_voltage_v=asked["V_LL_V"] / math.sqrt(3.0),
        line_frequency_hz=asked["f_Hz"],
    )


def test_base_impedance(step_design: Specification) -> None:
    assert_meets(CHECKS["LCL-ST1"], step_design.base_impedance_ohm)


def test_base_and_filter_capacitance(step_design: Specification) -> None:
    base = 1.0 / (2.0 * math.pi * step_design.line_frequency_hz * step_design.base_impedance_ohm)
    assert_meets(CHECKS["LCL-ST2"], base * 1e6)
    assert_meets(CHECKS["LCL-ST3"], base * CHECKS["LCL-ST3"]["inputs"]["C_share"] * 1e6)


def test_bridge_side_inductance(step_design: Specification) -> None:
    """V_dc/(6 f dI) is the greatest ripple over all indexes and angles; sine-triangle ends below it."""
    row = CHECKS["LCL-ST4"]
    asked = row["inputs"]
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)
    greatest = float(tables.peak_ripple[SIX_SWITCH_BRIDGE.modulation_index("centred space vector")].max())
    ripple = asked["ripple"] * math.sqrt(2.0) * step_design.rated_current_a
    assert_meets(row, greatest * asked["Vdc_V"] / (asked["fsw_Hz"] * ripple) * 1e3)


def test_grid_side_inductance_for_an_attenuation() -> None:
    """With the published L2 and C the filter must pass the asked share of the ripple current."""
    row = CHECKS["LCL-ST5"]
    asked = row["inputs"]
    capacitance = CHECKS["LCL-ST3"]["expected"] * 1e-6
    circuit = lcl(3.5722e-3, row["expected"] * 1e-6, capacitance).columns()
    found = grid_transfer(circuit, np.array([[asked["fsw_Hz"]]]))
    passed = float((found.output_current / found.inverter_current)[0, 0])
    assert passed == pytest.approx(asked["k_a"], rel=row["tolerance"]["rel"])


def test_admittance_without_a_capacitor() -> None:
    row = CHECKS["LCL-ADM2"]
    asked = row["inputs"]
    circuit = lcl(2.0 / 3.0 * asked["L_H"], asked["L_H"] / 3.0, 1e-20).columns()
    assert_meets(row, 1e3 * float(grid_transfer(circuit, np.array([[asked["f_Hz"]]])).output_current[0, 0]))
