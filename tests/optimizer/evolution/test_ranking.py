"""Values that 95 % of inverters stay below: against Monte Carlo and closed forms."""

from dataclasses import fields, replace

import numpy as np
import pytest

from models.uncertainty import FACTORS, Uncertainty
from optimizer.certainty.tolerance import tolerance
from optimizer.evolution.populations import search
from optimizer.evolution.ranking import bad_sides, high_figures, nominal_figures
from optimizer.objectives import OBJECTIVES
from optimizer.prepared import search_space
from optimizer.runs.fronts import front
from optimizer.runs.run import evaluated_table
from optimizer.study.schema import HIGH_VALUES

NONE = Uncertainty(**{entry.name: 0.0 for entry in fields(Uncertainty)})
CHOSEN = list(OBJECTIVES.values())


@pytest.fixture(scope="module")
def members(small_search):
    """A search space and twelve feasible designs in it, spread over the archive."""
    found = small_search.classes[2]
    rows = np.linspace(0, len(found.points) - 1, 12).astype(int)
    return search_space(small_search.study, found.concept), found.points[rows]


def under(space, uncertainty, hold=0.9):
    study = space.study
    search = replace(study.search, limits_hold=hold)
    return replace(space, study=replace(study, uncertainty=uncertainty, search=search))


def test_without_uncertainty_they_are_the_nominal_values(members):
    space, points = members
    nominal, high = nominal_figures(space, points, CHOSEN), high_figures(under(space, NONE), points, CHOSEN)
    assert np.array_equal(nominal.objectives, high.objectives)
    assert np.array_equal(nominal.margins, high.margins)
    assert np.array_equal(nominal.filter_volume, high.filter_volume)


def test_a_design_s_values_do_not_depend_on_the_others(members):
    space, points = members
    whole = high_figures(space, points, CHOSEN)
    alone = high_figures(space, points[3:4], CHOSEN)
    assert np.allclose(whole.objectives[3], alone.objectives[0], rtol=1e-12)
    assert np.allclose(whole.margins[3], alone.margins[0], rtol=0.0, atol=1e-12)


def test_a_factor_moves_once_and_a_tolerance_to_both_sides():
    deviations, owner = bad_sides(Uncertainty())
    assert len(deviations) == len(FACTORS) + 3  # three tolerances of parts
    assert (np.count_nonzero(deviations, axis=1) == 1).all()
    assert set(owner) == set(range(len(FACTORS)))
    assert len(bad_sides(NONE)[0]) == 0


def test_one_factor_on_the_price_is_the_closed_form(members):
    """95 % of a log-normal factor stays below 1 + v: price rises by v times what it is on."""
    space, points = members
    nominal = nominal_figures(space, points, CHOSEN)
    high = high_figures(under(space, replace(NONE, other_prices=0.3)), points, CHOSEN)
    prices = space.inverter.evaluate(space.designs(points)).prices
    others = sum(values for name, values in prices.items() if name != "semiconductors")
    place = list(OBJECTIVES).index("price")
    assert high.objectives[:, place] == pytest.approx(nominal.objectives[:, place] + 0.3 * others)


def test_more_inverters_to_hold_ask_more_margin(members):
    space, points = members
    low, middle, high = (
        high_figures(under(space, space.study.uncertainty, hold), points, CHOSEN).margins
        for hold in (0.5, 0.9, 0.99)
    )
    assert np.allclose(low, nominal_figures(space, points, CHOSEN).margins)
    assert (middle <= low + 1e-12).all()
    assert (high <= middle + 1e-12).all()


@pytest.mark.parametrize("place", range(0, 12, 3))
def test_against_4096_sampled_inverters(members, place):
    """The estimate's 95 % value lies within 2 % of the sampled one (junction rise, distortion: 5 %)."""
    space, points = members
    high = high_figures(space, points[place : place + 1], CHOSEN)
    design = space.designs(points[place : place + 1])
    sampled = tolerance(space.study, space.inverter, design, samples=4096)
    for column, name in enumerate(OBJECTIVES):
        close = 0.05 if name in ("junction temperature rise", "distortion") else 0.02
        assert high.objectives[0, column] == pytest.approx(sampled.bands[name].high, rel=close), name


def test_a_robust_search_holds_nominal_and_high_values(rooftop):
    settings = replace(rooftop.search, rank_by=HIGH_VALUES, device_classes=("SiC MOSFET",))
    study = replace(rooftop, search=settings).with_effort(16, 12)
    result = search(study, seed=1, workers=1)
    found = front(result)
    for name in study.objectives:
        column = OBJECTIVES[name].column
        assert (found.table[f"{column}_p95"] >= found.table[column]).all()
    assert {"price", "price_p95"} <= set(evaluated_table(result).columns)
    again = search(study, seed=1, workers=1)
    assert np.array_equal(result.classes[0].objectives, again.classes[0].objectives)
    space = search_space(study, study.concepts[0])
    held = tolerance(study, space.inverter, space.designs(result.classes[0].points[:1])).holding
    assert min(held.values()) > 0.8  # 90 % asked of every limit, estimated to first order
