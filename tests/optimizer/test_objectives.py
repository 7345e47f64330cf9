"""What can be minimised or limited: each objective is its column, and can be both."""

import numpy as np
import pytest

from optimizer.evolution.populations import search
from optimizer.objectives import OBJECTIVES
from optimizer.runs.fronts import front
from optimizer.study.schema import OBJECTIVES as NAMES
from optimizer.study.study import Study

STUDY = """
name = "costs"
[application]
kind = "grid-connected"
phases = 1
apparent_power = "5 kVA"
ac_voltage = "230 V"
line_frequency = "50 Hz"
dc_voltage = { min = "360 V", nominal = "400 V", max = "450 V" }
[bridge]
kind = "single-phase full bridge"
[objectives]
minimise = ["cost of ownership", "rated loss", "junction temperature rise"]
at_most = { "cost of ownership" = 900, "rated loss" = "4 %", "junction temperature rise" = "80 %" }
[energy]
price_per_kwh = 0.25
years = 10
discount_rate = 0
hours_a_year = 3000
weights_are = "time shares"
currency = "EUR"
[search]
device_classes = ["SiC MOSFET"]
population = 24
generations = 25
"""


@pytest.fixture(scope="module")
def found(tmp_path_factory):
    path = tmp_path_factory.mktemp("study") / "costs.toml"
    path.write_text(STUDY)
    study = Study.read(path)
    return study, search(study, seed=2, workers=1)


def test_the_names_a_study_may_use_are_those_that_can_be_read():
    assert set(NAMES) == set(OBJECTIVES)


def test_terms_of_a_study(found):
    study, _ = found
    terms = study.specification.energy
    assert (terms.price_per_kwh, terms.years, terms.discount_rate) == (0.25, 10.0, 0.0)
    assert study.currency == "EUR"


def test_the_front_minimises_and_keeps_to_its_limits(found):
    study, result = found
    table = front(result).table
    assert table.cost_of_ownership.max() <= 900.0
    assert table.loss_rated_percent.max() <= 4.0
    assert table.junction_rise_percent.max() <= 80.0
    assert (table.cost_of_ownership == table.price + table.lost_energy_cost).all()


def test_columns_by_hand(found):
    _, result = found
    table = front(result).table
    np.testing.assert_allclose(table.loss_rated_percent, table.loss_rated_w / 50.0)  # of 5 kW
    # no interest: ten years at 0.25 a kilowatt-hour
    np.testing.assert_allclose(table.lost_energy_cost, 2.5 * table.lost_energy_kwh_per_year)
    hottest = table[["junction_temperature_c", "diode_temperature_c"]].max(axis=1)
    limit = 175.0 - 15.0  # of the class, and the rule junction_margin
    np.testing.assert_allclose(table.junction_rise_percent, 100.0 * (hottest - 40.0) / (limit - 40.0))
