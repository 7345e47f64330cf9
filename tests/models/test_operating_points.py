"""Operating points: what is listed, and whether the worst ones are among them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from model_fixtures import BACKUP, DEPOT, ROOFTOP

from models.operating_points import operating_points
from models.output_filter import Filter, line_phasors
from models.specification import CALIFORNIAN_WEIGHTS, EUROPEAN_WEIGHTS, Specification

TASKS = [
    pytest.param(ROOFTOP, id="grid, one phase"),
    pytest.param(DEPOT, id="grid, three phases"),
    pytest.param(BACKUP, id="alone"),
]


@pytest.mark.parametrize("spec", TASKS)
def test_every_weighted_level_is_there_once(spec: Specification) -> None:
    points = operating_points(spec)
    levels = points.load_level[points.loads]
    assert list(levels) == sorted({*EUROPEAN_WEIGHTS, *CALIFORNIAN_WEIGHTS, *spec.weights, 1.0})
    for weights in (EUROPEAN_WEIGHTS, CALIFORNIAN_WEIGHTS, spec.weights):
        assert points.weights(weights).sum() == pytest.approx(1.0)
    assert points.load_level[points.rated] == 1.0


@pytest.mark.parametrize("spec", TASKS)
def test_power_at_every_point(spec: Specification) -> None:
    """Phases times voltage times current is the level's apparent power, at every voltage."""
    points = operating_points(spec)
    apparent = spec.phases * points.output_voltage * np.abs(points.output_current)
    assert apparent == pytest.approx(points.load_level * spec.apparent_power_va)
    factor = np.cos(np.angle(points.output_current))
    assert factor[points.loads] == pytest.approx(1.0)
    assert factor[points.modulation] == pytest.approx(spec.power_factor_min)
    assert np.all(np.imag(points.output_current[points.modulation]) < 0.0)  # lagging asks most of the bridge


def test_slices_do_not_overlap_and_cover_all() -> None:
    points = operating_points(ROOFTOP)
    places = [*range(*points.losses.indices(99)), points.distortion, *range(*points.modulation.indices(99))]
    assert places == list(range(len(points.load_level)))
    assert points.losses == slice(points.loads.start, points.thermal.stop)


def test_own_weights_bring_their_levels() -> None:
    spec = replace(ROOFTOP, weights={0.42: 0.6, 0.9: 0.4})
    points = operating_points(spec)
    assert {0.42, 0.9} <= set(points.load_level[points.loads])
    assert points.weights(spec.weights).sum() == pytest.approx(1.0)


@pytest.mark.parametrize("factor", [0.8, -0.8, 1.0])
def test_power_factor_of_the_load_levels(factor: float) -> None:
    """Active power is S cos(phi) at every level; lagging currents have a negative imaginary part."""
    spec = replace(DEPOT, power_factor=factor, power_factor_min=0.8)
    points = operating_points(spec)
    own = [*range(*points.loads.indices(99)), points.distortion]
    active = (spec.phases * points.output_voltage * np.conj(points.output_current)).real
    assert active[own] == pytest.approx(points.load_level[own] * spec.apparent_power_va * abs(factor))
    imaginary = points.output_current.imag[own]
    assert np.all(np.sign(np.round(imaginary, 9)) == (0.0 if factor == 1.0 else -np.sign(factor)))


def test_inductance_of_a_lagging_load() -> None:
    """230 V, 3 kVA, cos(phi) = 0.8: |Z| = 17.63 ohm, X = 0.6 |Z| = 10.58 ohm, 33.7 mH at 50 Hz; at half load
    twice of it.
    """
    points = operating_points(replace(BACKUP, power_factor=0.8, power_factor_min=0.8))
    found = points.load_inductance(50.0)
    assert found[points.rated] == pytest.approx(33.68e-3, rel=1e-3)
    half = list(points.load_level[points.loads]).index(0.5)
    assert found[half] == pytest.approx(2.0 * found[points.rated])
    leading = operating_points(replace(BACKUP, power_factor=-0.8, power_factor_min=0.8))
    assert leading.load_inductance(50.0)[leading.loads] == pytest.approx(0.0)


def worst_bridge_current(spec: Specification, share: float) -> float:
    """Greatest bridge current over all power factors that the specification asks for, both ways, and both
    ac voltages.
    """
    omega = 2.0 * np.pi * spec.line_frequency_hz
    capacitance = share / (omega * spec.base_impedance_ohm)
    circuit = Filter(*(np.array([value]) for value in (1e-3, 3e-4, capacitance, 1.0)))
    found = []
    for sign in (-1.0, 1.0):
        for factor in (spec.power_factor_min, 1.0):
            current = spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)
            phasor = np.array([current * (factor + 1j * sign * np.sqrt(1.0 - factor**2))])
            voltage = np.array([spec.phase_voltage_min_v])
            found.append(float(np.abs(line_phasors(circuit, 50.0, voltage, phasor).inverter_current[0])))
    return max(found)


@pytest.mark.parametrize("share", [0.02, 0.08])
def test_thermal_points_hold_the_greatest_bridge_current(share: float) -> None:
    points = operating_points(ROOFTOP)
    omega = 2.0 * np.pi * 50.0
    capacitance = share / (omega * ROOFTOP.base_impedance_ohm)
    circuit = Filter(*(np.array([[value]]) for value in (1e-3, 3e-4, capacitance, 1.0)))
    phasors = line_phasors(circuit, 50.0, points.output_voltage, points.output_current)
    listed = float(np.abs(phasors.inverter_current[0, points.thermal]).max())
    assert listed >= worst_bridge_current(ROOFTOP, share) * (1.0 - 1e-6)
