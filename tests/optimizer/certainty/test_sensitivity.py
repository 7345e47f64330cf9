"""Elasticities against laws known without the code."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.certainty.sensitivity import OFFSETS, sensitivities, slope, straightness
from optimizer.prepared import search_space


@pytest.fixture(scope="module")
def looked_at(small_search):
    """A design of a small search, its evaluation and its sensitivities."""
    found = small_search.classes[2]
    space = search_space(small_search.study, found.concept)
    point = found.points[int(np.argmin(found.objectives[:, 0]))]
    return space, point, sensitivities(space, point)


def change(looked_at, varied, figure):
    table = looked_at[2]
    rows = table[(table["varied"] == varied) & (table["figure"] == figure)]
    assert len(rows) == 1
    return float(rows["change"].iloc[0])


@given(st.floats(-3.0, 3.0), st.floats(0.1, 10.0))
def test_the_exponent_of_a_power_law_comes_out(exponent, factor):
    values = np.log(factor * (1.0 + OFFSETS) ** exponent)
    assert slope(np.log1p(OFFSETS), values) == pytest.approx(exponent, abs=1e-9)


def test_a_step_is_not_straight():
    assert straightness(OFFSETS, np.where(OFFSETS > 0.03, 1.0, 0.0)) < 0.75
    assert straightness(OFFSETS, 2.0 * OFFSETS) == pytest.approx(1.0)


def test_lost_energy_costs_in_proportion_to_the_price_of_a_kilowatt_hour(looked_at):
    """Cost = price + c times lost energy: its elasticity to c is the share of the second part."""
    space, point, _ = looked_at
    result = space.inverter.evaluate(space.designs(point[None]))
    share = float(result.lost_energy_cost[0] / (result.price[0] + result.lost_energy_cost[0]))
    assert change(looked_at, "price of a kilowatt-hour", "cost of ownership") == pytest.approx(
        share, rel=2e-3
    )
    for figure in ("weighted loss", "volume", "price", "mass"):
        assert change(looked_at, "price of a kilowatt-hour", figure) == 0.0


def test_a_limit_s_margin_moves_with_the_limit(looked_at):
    """The margin of the heatsink is (95 - T)/(95 - 45): at T the sink's temperature, d/dL = (T - 45)/50^2."""
    space, point, _ = looked_at
    result = space.inverter.evaluate(space.designs(point[None]))
    sink = next(entry for entry in result.constraints if entry.name == "heatsink temperature")
    hot, ambient = 95.0, space.study.specification.ambient_c
    known = 100.0 * (float(sink.value[0]) - ambient) / (hot - ambient) ** 2
    found = change(looked_at, "sink temperature limit", "heatsink temperature")
    assert found == pytest.approx(known, rel=0.02)  # the ratio is curved over plus and minus 5 K


def test_the_modulation_index_goes_with_the_ac_voltage_and_against_the_least_dc_voltage(looked_at):
    """M = peak of the ac voltage over the dc voltage: its use of the limit has elasticities +1 and -1."""
    space, point, _ = looked_at
    result = space.inverter.evaluate(space.designs(point[None]))
    index = next(entry for entry in result.constraints if entry.name == "modulation index")
    used = 1.0 - float(index.margin[0])
    for varied, exponent in (("ac voltage", 1.0), ("dc voltage (all three)", -1.0)):
        assert change(looked_at, varied, "modulation index") == pytest.approx(-exponent * used, rel=0.05)


def test_loss_of_a_die_falls_and_its_price_rises_with_its_area(looked_at):
    """On-resistance goes with 1/area and price with area (a device's price has a part that does)."""
    assert change(looked_at, "die area", "price") > 0.0
    assert change(looked_at, "die area", "junction temperature rise") < 0.0


def test_all_continuous_variables_and_main_values_are_varied(looked_at):
    space, _, table = looked_at
    varied = set(table["varied"])
    assert {"switching frequency", "ripple current", "filter capacitance", "heatsink resistance"} <= varied
    assert {
        "rated power", "ambient temperature", "line frequency", "ac voltage", "least power factor",
        "dc voltage (all three)", "winding temperature limit",
    } <= varied  # fmt: skip
    warm = table[table["varied"] == "ambient temperature"]
    assert set(warm["raised by"]) == {"1 K"}
    assert np.isfinite(table["change"]).all()
    assert len(table[table["part of the"] == "design"]["varied"].unique()) == int((space.parts == 0).sum())
