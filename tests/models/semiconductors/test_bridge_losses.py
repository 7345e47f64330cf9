"""Losses of a whole bridge: bookkeeping over legs and copies, monotony, dies in parallel, temperatures."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from model_fixtures import Draw, Spaces
from probe_device import At, device, packages

from models.catalog import Catalog
from models.catalog.gathered import Gathered
from models.semiconductors.bridge_losses import BridgeLosses, Cooling, bridge_losses
from models.waveforms.bridges import BRIDGES

ENTRIES = [
    pytest.param(bridge.name, scheme.name, id=f"{bridge.name}, {scheme.name}")
    for bridge in BRIDGES.values()
    for scheme in bridge.modulations
]
UNITS: dict[str, float | bool] = {
    "threshold_25_v": 1.0, "threshold_hot_v": 0.8, "slope_area_25_ohm_m2": 1e-6,
    "slope_area_hot_ohm_m2": 1.6e-6, "diode_threshold_25_v": 1.2, "diode_threshold_hot_v": 0.9,
    "diode_slope_area_25_ohm_m2": 1e-6, "diode_slope_area_hot_ohm_m2": 1.3e-6,
    "energy_reference_voltage_v": 400.0, "turn_on_energy_j_per_av": 3e-8, "turn_off_energy_j_per_av": 2e-8,
    "recovery_energy_j_per_av": 1e-8, "reference_current_density_a_per_m2": 1.5e6,
    "turn_on_temperature_coefficient_per_k": 0.003, "recovery_temperature_coefficient_per_k": 0.005,
    "junction_case_k_m2_per_w": 3e-5, "junction_case_reference_area_m2": 5e-5,
    "junction_case_exponent": 0.9, "case_sink_k_per_w": 0.3, "gate_charge_c_per_m2": 4e-3,
    "gate_swing_v": 15.0,
}  # fmt: skip
PART_NAMES = ("conduction", "switching", "recovery", "output_charge", "dead_time", "gate")


def losses(
    at: At, part: Any, area: float = 5e-5, parallel: float = 1.0, ambient: float = 40.0, rise: float = 0.2
) -> BridgeLosses:
    parts = packages(at.entry, part, np.array([parallel]), np.array([area]))
    return bridge_losses(
        parts, np.array([20e3]), at.entry, at.tables, at.state(),
        np.array([at.dc_voltage]), Cooling(ambient, lambda power, rows: rise * power),
    )  # fmt: skip


def at(bridge: str, scheme: str, peak: float = 20.0) -> At:
    return At(bridge, scheme, 0.8, 0.3, peak=peak, ripple_unit=4.0, dc_voltage=400.0)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_losses_and_temperatures_grow_with_load(bridge: str, scheme: str) -> None:
    found = [losses(at(bridge, scheme, peak), device(UNITS)) for peak in (2.0, 5.0, 10.0, 20.0, 30.0)]
    for name in (
        "conduction",
        "switching",
        "heat",
        "switch_temperature",
        "diode_temperature",
        "sink_temperature",
    ):
        assert np.all(np.diff([getattr(one, name)[0, 0] for one in found]) > 0.0), name


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_junctions_grow_with_ambient_and_never_lie_below_the_sink(bridge: str, scheme: str) -> None:
    found = [
        losses(at(bridge, scheme), device(UNITS), ambient=ambient) for ambient in (0.0, 20.0, 40.0, 60.0)
    ]
    assert np.all(np.diff([one.switch_temperature[0, 0] for one in found]) > 0.0)
    for one, ambient in zip(found, (0.0, 20.0, 40.0, 60.0), strict=True):
        assert ambient < one.sink_temperature[0, 0] < one.switch_temperature[0, 0]
        assert one.sink_temperature[0, 0] < one.diode_temperature[0, 0]
        assert one.sink_temperature[0, 0] - ambient == pytest.approx(0.2 * one.heat[0, 0], rel=1e-3)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
@pytest.mark.parametrize("shared", [False, True])
def test_parallel_packages_conduct_like_one_of_the_total_area(bridge: str, scheme: str, shared: bool) -> None:
    """n packages of area A/n: equal conduction, equal switching, equal gate drive; only the thermal path
    differs.
    """
    part = device(
        UNITS
        | {
            "shared_die": shared,
            "dead_time_s": 2e-7,
            "junction_case_k_m2_per_w": 1e-12,
            "case_sink_k_per_w": 1e-12,
        }
    )
    one, four = losses(at(bridge, scheme), part), losses(at(bridge, scheme), part, area=1.25e-5, parallel=4.0)
    for name in PART_NAMES:
        assert getattr(four, name) == pytest.approx(getattr(one, name), rel=1e-9), name


def test_three_phases_lose_three_times_what_one_leg_does() -> None:
    """A six-switch bridge with sine modulation: three legs; the full bridge, unipolar: two, at the same leg
    currents.
    """
    three = losses(at("three-phase six-switch bridge", "sine-triangle"), device(UNITS), rise=0.0)
    two = losses(at("single-phase full bridge", "unipolar"), device(UNITS), rise=0.0)
    assert three.gate == pytest.approx(1.5 * two.gate)
    assert three.conduction == pytest.approx(1.5 * two.conduction, rel=5e-3)


def test_leg_at_line_frequency_does_not_switch() -> None:
    slow = losses(at("single-phase full bridge", "one leg at line frequency"), device(UNITS), rise=0.0)
    both = losses(at("single-phase full bridge", "unipolar"), device(UNITS), rise=0.0)
    assert slow.gate == pytest.approx(0.5 * both.gate)
    assert slow.switching == pytest.approx(0.5 * both.switching, rel=0.2)


@pytest.mark.parametrize(("bridge", "scheme"), ENTRIES)
def test_shared_die_has_one_temperature(bridge: str, scheme: str) -> None:
    found = losses(at(bridge, scheme), device(UNITS | {"shared_die": True}))
    assert found.switch_temperature == pytest.approx(found.diode_temperature)


def test_runaway_is_reported() -> None:
    hot = device(UNITS | {"slope_area_25_ohm_m2": 4e-6, "slope_area_hot_ohm_m2": 12e-6})
    found = losses(at("single-phase full bridge", "unipolar", 40.0), hot, ambient=60.0, rise=2.0)
    assert not found.settled.any()
    for name in PART_NAMES:
        assert np.isfinite(getattr(found, name)).all(), name


def test_catalogue_parts_at_a_working_point(catalog: Catalog) -> None:
    """Every device of the catalogue that bears 400 V, at its smallest and largest die: finite, positive,
    settled or said.
    """
    chosen = [i for i, part in enumerate(catalog.devices) if part.voltage_rating_v >= 600.0]
    state = at("single-phase full bridge", "unipolar")
    for bound in ("die_area_min_m2", "die_area_max_m2"):
        index = np.array(chosen)
        area = catalog.devices.column(bound)[index]
        found = bridge_losses(
            packages(state.entry, Gathered(catalog.devices, index, 1), np.ones(len(index)), area),
            np.full(len(index), 30e3), state.entry, state.tables, state.state(len(index)), np.array([400.0]),
            Cooling(40.0, lambda power, rows: 0.3 * power),
        )  # fmt: skip
        for name in PART_NAMES:
            value = getattr(found, name)
            assert np.isfinite(value).all(), name
            assert np.all(value >= 0.0), name
        assert np.all(found.switch_temperature > 40.0)


def test_hot_losses_exceed_cold_ones(spaces: Spaces, draw: Draw) -> None:
    """Thermal points (greatest current) are at least as hot as rated load at nominal voltages."""
    for space in spaces.values():
        found = space.inverter.evaluate(draw(space, 60, 5))
        assert np.all(found.details["junction_temperature_c"] > space.inverter.specification.ambient_c)
