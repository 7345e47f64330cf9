"""Requirements: names, order, and that each can be met and violated for the reason it names."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from model_fixtures import BACKUP, DEPOT, ROOFTOP, Draw, Spaces

from models.catalog import Catalog
from models.evaluation import Evaluation
from models.inverter import Inverter
from optimizer.space import SearchSpace


def margin(found: Evaluation, name: str) -> np.ndarray:
    return next(entry.margin for entry in found.constraints if entry.name == name)


@pytest.fixture(scope="module")
def rooftop(spaces: Spaces) -> SearchSpace:
    return spaces["rooftop_5kw", "SiC MOSFET"]


def test_names_are_unique_and_their_order_is_fixed(spaces: Spaces, draw: Draw) -> None:
    for space in spaces.values():
        names = [
            [entry.name for entry in space.inverter.evaluate(draw(space, 3, seed)).constraints]
            for seed in (1, 2)
        ]
        assert names[0] == names[1]
        assert len(set(names[0])) == len(names[0])


def test_every_requirement_is_violated_by_some_candidate_and_met_by_another(
    spaces: Spaces, draw: Draw
) -> None:
    """Over all studies and classes: one that never holds would be a trap; one that never acts must be one
    that the search's own ranges and first sizing keep, and that only candidates from elsewhere can violate.
    """
    met, violated = set(), set()
    for space in spaces.values():
        found = space.inverter.evaluate(draw(space, 400, 3))
        met |= {entry.name for entry in found.constraints if np.any(entry.margin >= 0.0)}
        violated |= {entry.name for entry in found.constraints if np.any(entry.margin < 0.0)}
    names = met | violated
    assert met == names
    assert names - violated <= {
        "dc voltage over device rating", "heatsink can be built", "filter capacitor reactive power",
        "grid-side inductor inductance possible", "inverter-side inductor inductance possible",
        "filter resonance over line frequency", "grid-side inductor gap", "inverter-side inductor gap",
        "filter reactance", "inverter-side inductor flux density", "grid-side inductor flux density",
        "inverter-side inductor window fill", "grid-side inductor window fill",
        "inverter-side inductor layers", "grid-side inductor layers",
        "switching frequency over the device's greatest", "dc-link life",
    }  # fmt: skip


def test_margin_agrees_with_value_and_limit(rooftop: SearchSpace, draw: Draw) -> None:
    for entry in rooftop.inverter.evaluate(draw(rooftop, 200, 4)).constraints:
        met = entry.value <= entry.limit if entry.sense == "max" else entry.value >= entry.limit
        assert np.array_equal(met, entry.margin >= 0.0), entry.name


def test_too_little_dc_voltage_is_said_by_the_modulation_index(
    rooftop: SearchSpace, draw: Draw, catalog: Catalog
) -> None:
    designs = draw(rooftop, 40, 5)
    starved = Inverter(replace(ROOFTOP, dc_voltage_min_v=300.0), catalog).evaluate(designs)
    assert np.all(margin(starved, "modulation index") < 0.0)
    fed = Inverter(replace(ROOFTOP, dc_voltage_min_v=430.0), catalog).evaluate(designs)
    assert np.mean(margin(fed, "modulation index") >= 0.0) > 0.9


def test_too_high_a_dc_voltage_is_said_by_the_device_rating(
    rooftop: SearchSpace, draw: Draw, catalog: Catalog
) -> None:
    high = Inverter(replace(ROOFTOP, dc_voltage_max_v=5000.0), catalog).evaluate(draw(rooftop, 10, 5))
    assert np.all(margin(high, "dc voltage over device rating") < 0.0)


def test_hot_ambient_is_said_by_the_temperatures(rooftop: SearchSpace, draw: Draw, catalog: Catalog) -> None:
    designs = draw(rooftop, 60, 6)
    cool, hot = (
        Inverter(replace(ROOFTOP, ambient_c=ambient), catalog).evaluate(designs) for ambient in (20.0, 60.0)
    )
    for name in (
        "switch junction temperature",
        "heatsink temperature",
        "inverter-side inductor winding temperature",
        "inverter-side inductor core temperature",
    ):
        near = margin(cool, name) > -2.0  # what is hopeless at either ambient need not settle
        assert near.mean() > 0.5
        assert np.all((margin(hot, name) < margin(cool, name))[near]), name


def test_runaway_is_infeasible_with_its_reason(spaces: Spaces, draw: Draw) -> None:
    count = 0
    for space in spaces.values():
        found = space.inverter.evaluate(draw(space, 300, 7))
        away = margin(found, "no thermal runaway") < 0.0
        assert not np.any(found.feasible[away])
        count += int(away.sum())
    assert count > 50


def test_stand_alone_has_voltage_requirements_and_the_grid_current_ones(
    spaces: Spaces, draw: Draw, catalog: Catalog, rooftop: SearchSpace
) -> None:
    designs = draw(rooftop, 5, 1)
    grid = {entry.name for entry in Inverter(DEPOT, catalog).evaluate(_three_phase(designs)).constraints}
    alone = {entry.name for entry in Inverter(BACKUP, catalog).evaluate(designs).constraints}
    assert "total current distortion" in grid - alone
    assert "voltage distortion, rectifier load" in alone - grid


def _three_phase(designs):  # type: ignore[no-untyped-def]
    return replace(designs, modulation=np.zeros_like(designs.modulation))


def test_candidates_without_grid_inductor_beside_others(rooftop: SearchSpace, draw: Draw) -> None:
    """A mixed population must judge a candidate without grid inductor as that candidate is judged alone."""
    designs = draw(rooftop, 6, 8)
    first = np.arange(6) == 0
    mixed = replace(designs, grid_inductance_h=np.where(first, 0.0, designs.grid_inductance_h))
    together = rooftop.inverter.evaluate(mixed)
    alone = rooftop.inverter.evaluate(mixed.take(slice(0, 1)))
    assert [entry.name for entry in together.constraints] == [entry.name for entry in alone.constraints]
    assert together.volume[0] == pytest.approx(alone.volume[0])


def test_filter_capacitor_is_judged_at_its_greatest_line_current(
    rooftop: SearchSpace, draw: Draw, catalog: Catalog
) -> None:
    """Without ripple the share grows with the greatest ac voltage that the specification allows."""
    designs = draw(rooftop, 5, 9)
    designs = replace(designs, inverter_inductance_h=np.full(5, 10.0), switching_frequency_hz=np.full(5, 1e5))
    shares = [
        Inverter(replace(ROOFTOP, phase_voltage_max_v=volts), catalog)
        .evaluate(designs)
        .details["filter_capacitor_current_share"]
        for volts in (240.0, 270.0)
    ]
    assert np.all(shares[1] > shares[0] * 1.05)


def test_hot_air_uses_up_the_dc_link(rooftop: SearchSpace, draw: Draw, catalog: Catalog) -> None:
    """In air of 85 degC the 10-kelvin rule leaves electrolytic units of 3000 h at 105 degC some 10,000 h."""
    hot = replace(rooftop.inverter.specification, ambient_c=75.0)
    found = Inverter(hot, catalog).evaluate(draw(rooftop, 60, 6))
    life = found.details["dc_link_life_h"]
    assert np.any(life < 25e3)
    (entry,) = (one for one in found.constraints if one.name == "dc-link life")
    assert np.array_equal(entry.margin < 0.0, life < hot.rules.dc_link_life)
