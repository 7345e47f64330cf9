"""Roll-up: energy balance, sums, signs."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from model_fixtures import Draw, Spaces

from models.roll_up import weighted_efficiency
from models.specification import CALIFORNIAN_WEIGHTS, EUROPEAN_WEIGHTS

sys.path.insert(0, str(Path(__file__).parent / "waveforms"))
from oracle import SCHEMES, LinePeriod


@given(st.lists(st.floats(0.5, 0.999), min_size=6, max_size=6))
def test_weighted_efficiency_lies_between_its_extremes(values: list[float]) -> None:
    for weights in (EUROPEAN_WEIGHTS, CALIFORNIAN_WEIGHTS):
        found = float(weighted_efficiency(np.array(values), np.array(list(weights.values()))))
        assert min(values) - 1e-12 <= found <= max(values) + 1e-12


def test_energy_balance(spaces: Spaces, draw: Draw) -> None:
    """Loss over power is 1/eta - 1, at every load, with every component counted once."""
    for (study, _), space in spaces.items():
        found = space.inverter.evaluate(draw(space, 80, 1))
        power = found.load_level * space.inverter.specification.apparent_power_va
        lost = np.sum(list(found.losses.values()), axis=0) / power
        assert lost == pytest.approx(1.0 / found.efficiency - 1.0, rel=1e-9), study


def test_totals_are_sums_of_what_is_listed(spaces: Spaces, draw: Draw) -> None:
    for space in spaces.values():
        found = space.inverter.evaluate(draw(space, 20, 2))
        packing = space.inverter.specification.rules.packing_factor
        boxes = np.sum([value for name, value in found.volumes.items() if name != "unused"], axis=0)
        assert found.volume == pytest.approx(boxes / packing)
        assert found.mass == pytest.approx(np.sum(list(found.masses.values()), axis=0))
        assert found.price == pytest.approx(np.sum(list(found.prices.values()), axis=0))
        assert set(found.volumes) - {"unused"} == set(found.masses) - {"housing"}


def test_weighted_efficiencies_from_the_load_levels(spaces: Spaces, draw: Draw) -> None:
    for space in spaces.values():
        found = space.inverter.evaluate(draw(space, 20, 3))
        by_level = dict(zip(found.load_level.tolist(), found.efficiency.T, strict=True))
        for weights, value in (
            (EUROPEAN_WEIGHTS, found.efficiency_european),
            (CALIFORNIAN_WEIGHTS, found.efficiency_californian),
            (space.inverter.specification.weights, found.efficiency_weighted),
        ):
            assert value == pytest.approx(sum(weight * by_level[level] for level, weight in weights.items()))


def test_fan_runs_from_its_load_on(spaces: Spaces, draw: Draw) -> None:
    for space in spaces.values():
        designs = draw(space, 60, 4)
        found = space.inverter.evaluate(designs)
        start = space.inverter.specification.rules.fan_load_start
        assert np.all(found.losses["fan"][:, found.load_level < start] == 0.0)
        assert np.all(found.losses["fan"][designs.cooling == 0] == 0.0)
        assert np.all(found.losses["fan"][designs.cooling == 1][:, found.load_level >= start] > 0.0)


def test_damping_loss_from_the_capacitor_branch(spaces: Spaces, draw: Draw) -> None:
    """R (I_line^2 + I_ripple^2) per phase: line current V omega C, ripple rms from the scheme's oracle."""
    space = spaces["depot_10kw_three_phase", "SiC MOSFET"]
    designs = draw(space, 6, 5)
    found = space.inverter.evaluate(designs)
    spec, bridge = space.inverter.specification, space.inverter.bridge
    line = spec.phase_voltage_v * 2.0 * np.pi * spec.line_frequency_hz * designs.filter_capacitance_f
    for row in range(len(designs)):
        unit = spec.dc_voltage_v / (designs.inverter_inductance_h[row] * designs.switching_frequency_hz[row])
        scheme = SCHEMES[bridge.modulations[designs.modulation[row]].name]
        index = found.details["modulation_index_rated"][row]
        ripple = LinePeriod(scheme, index, 123, ripple_unit=unit).ripple_mean_square
        expected = 3.0 * designs.damping_resistance_ohm[row] * (line[row] ** 2 + ripple)
        assert found.losses["damping"][row, found.rated] == pytest.approx(expected, rel=0.02)


def test_voltage_drop_and_headroom(spaces: Spaces, draw: Draw) -> None:
    """The bridge must make at least what the terminals ask for, less what the capacitor lifts; the dc voltage
    needed is at most the least one exactly where the modulation index stays within its limit at that point.
    """
    space = spaces["rooftop_5kw", "SiC MOSFET"]
    spec = space.inverter.specification
    found = space.inverter.evaluate(draw(space, 100, 9))
    assert np.all(found.details["bridge_voltage_rated_v"] > 0.95 * spec.phase_voltage_v)
    peak = np.sqrt(2.0) * spec.phase_voltage_v
    needed = found.details["dc_voltage_needed_v"]
    assert np.all(needed > 0.95 * peak)
    (entry,) = (one for one in found.constraints if one.name == "modulation index")
    assert np.all(entry.margin[needed <= spec.dc_voltage_min_v] >= 0.0)
    share = found.details["filter_reactive_share"]
    assert np.all((share > 0.0) & (share <= 0.0801))
