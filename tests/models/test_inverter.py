"""The whole inverter: finiteness, bounds, independence of the population, monotony, scaling."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields, is_dataclass, replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from model_fixtures import ROOFTOP, Draw, Spaces

from models.catalog import Catalog
from models.designs import COLD_PLATE, FORCED, Designs
from models.evaluation import Evaluation
from models.inverter import BLOCK, Inverter
from optimizer.space import SearchSpace
from optimizer.study.study import Study

SIC = ("rooftop_5kw", "SiC MOSFET")


def leaves(value: Any, name: str = "") -> Iterator[tuple[str, np.ndarray]]:
    """All arrays of numbers in an evaluation, with their path."""
    if is_dataclass(value):
        for entry in fields(value):
            yield from leaves(getattr(value, entry.name), f"{name}.{entry.name}")
    elif isinstance(value, dict):
        for key, one in value.items():
            yield from leaves(one, f"{name}.{key}")
    elif isinstance(value, tuple):
        for one in value:
            yield from leaves(one, f"{name}.{getattr(one, 'name', '')}")
    elif isinstance(value, np.ndarray) and value.dtype.kind in "fib":
        yield name, value


def assert_sound(found: Evaluation, ambient: float, absent: str = "") -> None:
    """What must never happen, in one place."""
    for name, value in leaves(found):
        if name == ".distortion.line_limit":  # infinite where a table has no limit, by definition
            assert np.all(value > 0.0)
            assert not np.isnan(value).any()
        else:
            assert np.isfinite(value).all(), name
    assert np.all(found.efficiency > 0.0)
    assert np.all(found.efficiency < 1.0)
    for parts in (found.losses, found.volumes, found.masses, found.prices):
        for name, value in parts.items():
            assert np.all(value >= 0.0), name
    assert np.all(found.volume > 0.0)
    assert np.all(found.mass > 0.0)
    assert np.all(found.price > 0.0)
    for name, value in found.details.items():
        if name.endswith("temperature_c") and not (absent and name.startswith(absent)):
            assert np.all(value >= ambient), name
    assert np.all(found.distortion.total >= found.distortion.low)
    assert np.all(
        np.sqrt(np.sum(found.distortion.lines.amplitude**2, axis=-1)) <= found.distortion.total * (1 + 1e-12)
    )


def corners(space: SearchSpace) -> np.ndarray:
    """All zeros, all ones, each axis alone at either end of a middle point, and random corners."""
    count = len(space.variables)
    middle = np.full((2 * count, count), 0.5)
    middle[np.arange(count), np.arange(count)] = 0.0
    middle[count + np.arange(count), np.arange(count)] = 1.0
    random = np.random.default_rng(1).integers(0, 2, (300, count)).astype(float)
    return space.repaired(np.concatenate([np.zeros((1, count)), np.ones((1, count)), middle, random]))


def test_extreme_corners_of_every_space(spaces: Spaces) -> None:
    for (study, _), space in spaces.items():
        found = space.inverter.evaluate(space.designs(corners(space)))
        assert_sound(
            found, space.inverter.specification.ambient_c, "grid" if study.startswith("backup") else ""
        )


@given(st.integers(0, 2**32 - 1))
@settings(max_examples=8, deadline=None)
def test_random_candidates_of_every_space(spaces: Spaces, draw: Draw, seed: int) -> None:
    for (study, _), space in spaces.items():
        found = space.inverter.evaluate(draw(space, 60, seed))
        assert_sound(
            found, space.inverter.specification.ambient_c, "grid" if study.startswith("backup") else ""
        )


def test_absent_part_reports_no_temperature_below_ambient(spaces: Spaces, draw: Draw) -> None:
    space = spaces["backup_3kva", "SiC MOSFET"]
    assert_sound(space.inverter.evaluate(draw(space, 5, 1)), space.inverter.specification.ambient_c)


def assert_same(one: Evaluation, other: Evaluation, row: int, place: int, tolerance: float) -> None:
    for (name, left), (_, right) in zip(leaves(one), leaves(other), strict=True):
        if name != ".load_level":
            assert left[row] == pytest.approx(right[place], rel=tolerance, abs=1e-300), name


@pytest.mark.parametrize("seed", [1, 2])
def test_array_call_equals_single_calls(spaces: Spaces, draw: Draw, seed: int) -> None:
    for space in spaces.values():
        designs = draw(space, 12, seed)
        together = space.inverter.evaluate(designs)
        for row in range(len(designs)):
            assert_same(together, space.inverter.evaluate(designs.take(slice(row, row + 1))), row, 0, 1e-12)


def test_blocks_equal_all_at_once(spaces: Spaces, draw: Draw) -> None:
    """More candidates than a block holds, and the same ones in two calls."""
    space = spaces[SIC]
    designs = draw(space, BLOCK + 40, 3)
    whole = space.inverter.evaluate(designs)
    first, rest = (space.inverter.evaluate(designs.take(rows)) for rows in (slice(0, 700), slice(700, None)))
    for row in (0, 699, 700, BLOCK - 1, BLOCK, BLOCK + 39):
        assert_same(whole, first if row < 700 else rest, row, row if row < 700 else row - 700, 1e-12)


def test_candidate_given_twice_gives_the_same_rows(spaces: Spaces, draw: Draw) -> None:
    space = spaces[SIC]
    rows = np.array([0, 1, 0, 2, 1])
    found = space.inverter.evaluate(draw(space, 3, 4).take(rows))
    for name, value in leaves(found):
        if name != ".load_level":
            assert np.array_equal(value[0], value[2], equal_nan=True), name
            assert np.array_equal(value[1], value[4], equal_nan=True), name


def test_evaluation_leaves_its_input_alone(spaces: Spaces, draw: Draw) -> None:
    space = spaces[SIC]
    designs, twin = draw(space, 20, 5), draw(space, 20, 5)
    space.inverter.evaluate(designs)
    for (name, value), (_, same) in zip(leaves(designs), leaves(twin), strict=True):
        assert np.array_equal(value, same), name


@pytest.fixture(scope="module")
def workable(spaces: Spaces, draw: Draw) -> Designs:
    """Candidates far from runaway, so that laws of growth can be held up to the last digit."""
    space = spaces[SIC]
    designs = draw(space, 1500, 6)
    found = space.inverter.evaluate(designs)
    chosen = np.flatnonzero(
        (found.details["junction_temperature_c"] < 140.0) & (found.details["modulation_index_greatest"] < 1.0)
    )
    assert len(chosen) > 100
    return designs.take(chosen[:150])


def test_absolute_losses_grow_with_load(spaces: Spaces, workable: Designs) -> None:
    """Every loss that depends on current grows with it; the sum grows throughout."""
    found = spaces[SIC].inverter.evaluate(workable)
    for name in ("conduction", "inverter_inductor_winding", "grid_inductor_winding", "dead_time"):
        assert np.all(np.diff(found.losses[name], axis=-1) >= -1e-9), name
    steady = [value for name, value in found.losses.items() if name not in ("fan", "output_charge")]
    assert np.all(np.diff(np.sum(steady, axis=0), axis=-1) > 0.0)


def test_junctions_grow_with_ambient(catalog: Catalog, workable: Designs) -> None:
    hot = [
        Inverter(replace(ROOFTOP, ambient_c=ambient), catalog)
        .evaluate(workable)
        .details["junction_temperature_c"]
        for ambient in (20.0, 35.0, 50.0)
    ]
    assert np.all(np.diff(hot, axis=0) > 0.0)


@pytest.mark.parametrize("name", ["inverter_inductance_h", "switching_frequency_hz"])
def test_ripple_and_its_distortion_fall(spaces: Spaces, workable: Designs, name: str) -> None:
    """Ripple current goes as 1/(L f); what reaches the grid falls too, once the carrier lies above the
    resonance.
    """
    one = spaces[SIC].inverter.evaluate(workable)
    other = spaces[SIC].inverter.evaluate(replace(workable, **{name: 1.5 * getattr(workable, name)}))
    assert one.details["ripple_peak_to_peak_a"] / other.details["ripple_peak_to_peak_a"] == pytest.approx(
        1.5, rel=0.05
    )
    above = one.details["resonance_hz"] < 0.4 * workable.switching_frequency_hz
    assert above.sum() > 30

    def switching(found: Evaluation) -> np.ndarray:
        return np.sqrt(found.distortion.total**2 - found.distortion.low**2)

    assert np.all(switching(other)[above] < switching(one)[above])


def test_parallel_dies_split_as_one(spaces: Spaces, workable: Designs) -> None:
    """n packages of area A/n against one of A: equal gate drive and output charge; cooler, never hotter,
    junctions.
    """
    one = replace(workable, parallel=np.ones_like(workable.parallel))
    two = replace(
        workable, parallel=np.full_like(workable.parallel, 2), die_area_m2=0.5 * workable.die_area_m2
    )
    whole, split = (spaces[SIC].inverter.evaluate(designs) for designs in (one, two))
    for name in ("gate_drive", "output_charge"):
        assert split.losses[name] == pytest.approx(whole.losses[name], rel=1e-9), name
    settled = whole.details["junction_temperature_c"] < 150.0
    assert np.all(
        split.details["junction_temperature_c"][settled]
        <= whole.details["junction_temperature_c"][settled] + 0.1
    )
    assert np.all(split.losses["conduction"][settled] <= whole.losses["conduction"][settled] * (1.0 + 1e-4))


def test_larger_dies_conduct_better_and_charge_more(spaces: Spaces, workable: Designs) -> None:
    larger = replace(workable, die_area_m2=1.3 * workable.die_area_m2)
    one, other = (spaces[SIC].inverter.evaluate(designs) for designs in (workable, larger))
    assert np.all(other.losses["conduction"] < one.losses["conduction"])
    assert np.all(other.losses["gate_drive"] > one.losses["gate_drive"])
    assert np.all(other.prices["semiconductors"] > one.prices["semiconductors"])


def test_smaller_resistance_is_no_smaller_sink_and_a_cooler_junction(
    spaces: Spaces, workable: Designs
) -> None:
    space = spaces[SIC]
    better = replace(workable, sink_resistance_k_per_w=0.7 * workable.sink_resistance_k_per_w)
    one, other = (space.inverter.evaluate(designs) for designs in (workable, better))
    both = np.array(
        [
            entry.margin
            for found in (one, other)
            for entry in found.constraints
            if "can be built" in entry.name
        ]
    )
    built = (both >= 0.0).all(axis=0)
    assert built.sum() > 20
    assert np.all(other.volumes["heatsink"][built] >= one.volumes["heatsink"][built])
    assert np.mean(other.volumes["heatsink"][built] > one.volumes["heatsink"][built]) > 0.8
    assert np.all(other.details["junction_temperature_c"] < one.details["junction_temperature_c"])


def test_no_capacitor_for_such_a_voltage(catalog: Catalog) -> None:
    absurd = Inverter(replace(ROOFTOP, phase_voltage_max_v=9000.0), catalog)
    with pytest.raises(ValueError, match="no ac capacitor class of the catalogue is rated for 9000 V ac"):
        _ = absurd.ac_capacitor


def test_unknown_bridge(catalog: Catalog) -> None:
    with pytest.raises(KeyError, match="half bridge"):
        _ = Inverter(replace(ROOFTOP, bridge="half bridge"), catalog).bridge


def test_cold_plate_counts_from_its_coolant(studies: dict[str, Study], catalog: Catalog, draw: Draw) -> None:
    """The same designs on a plate of 45 degC coolant instead of a sink in 60 degC air: cooler, smaller, no
    fan, and a pump that takes its share of the heat.
    """
    study = studies["depot_10kw_three_phase"]
    hot = replace(study.specification, ambient_c=60.0, coolant_c=45.0)
    space = SearchSpace(replace(study, specification=hot), Inverter(hot, catalog), "SiC MOSFET")
    designs = draw(space, 40, 8)
    inverter = space.inverter
    on_plate = inverter.evaluate(replace(designs, cooling=np.full(40, COLD_PLATE)))
    in_air = inverter.evaluate(replace(designs, cooling=np.full(40, FORCED)))
    plate_c, air_c = (one.details["sink_temperature_c"] for one in (on_plate, in_air))
    assert np.all(plate_c > 45.0)
    assert np.median(air_c - plate_c) > 10.0
    rated = on_plate.rated
    assert np.all(on_plate.losses["fan"][:, rated] > 0.0)
    assert np.all(on_plate.losses["fan"][:, 0] < on_plate.losses["fan"][:, rated])
    assert np.median(on_plate.volumes["heatsink"]) < np.median(in_air.volumes["heatsink"])
